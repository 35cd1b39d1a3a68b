/* What moves on the page: structures that turn and modes that swing. Without it every word and drawing is still there. */
"use strict";
(() => {
  const still = matchMedia("(prefers-reduced-motion: reduce)");
  const dark = matchMedia("(prefers-color-scheme: dark)");
  const TINTS = ["hydrogen", "carbon", "nitrogen", "oxygen", "halogen", "third", "noble", "metal", "dummy"];
  document.documentElement.classList.add("js");

  const times = (m, v) => m.map(row => row[0] * v[0] + row[1] * v[1] + row[2] * v[2]);
  const product = (a, b) => a.map(row => [0, 1, 2].map(k => row[0] * b[0][k] + row[1] * b[1][k] + row[2] * b[2][k]));
  const about = (axis, angle) => {
    const c = Math.cos(angle), s = Math.sin(angle);
    return axis === "up" ? [[c, 0, s], [0, 1, 0], [-s, 0, c]] : [[1, 0, 0], [0, c, -s], [0, s, c]];
  };
  const FACES = { x: [[0, 1, 0], [0, 0, 1], [1, 0, 0]], y: [[-1, 0, 0], [0, 0, 1], [0, 1, 0]], z: [[1, 0, 0], [0, 1, 0], [0, 0, 1]] };

  class Plate {
    constructor(figure) {
      this.figure = figure;
      this.scene = JSON.parse(figure.querySelector("script[type='application/json']").textContent);
      this.view = this.scene.view;
      this.ring = this.scene.ring;                       // Å, round the atom at the centre of inversion
      this.shown = new Set();
      this.motion = null;
      this.turning = !still.matches;
      this.visible = true;
      this.started = null;
      this.makeCanvas();
      this.bindControls();
      this.readColours();
      dark.addEventListener("change", () => { this.readColours(); this.draw(0); });
      new ResizeObserver(() => this.fit()).observe(this.stage);
      new IntersectionObserver(entries => { this.visible = entries[entries.length - 1].isIntersecting; this.run(); }).observe(this.canvas);
      this.fit();
      this.run();
    }

    makeCanvas() {
      this.stage = this.figure.querySelector(".stage");
      this.canvas = document.createElement("canvas");
      this.canvas.tabIndex = 0;
      this.canvas.setAttribute("role", "img");
      this.canvas.setAttribute("aria-label", this.stage.dataset.label + ". Arrow keys turn it.");
      this.stage.append(this.canvas);
      this.pen = this.canvas.getContext("2d");
      this.canvas.addEventListener("keydown", event => {
        const step = { ArrowLeft: ["up", -0.12], ArrowRight: ["up", 0.12], ArrowUp: ["right", -0.12], ArrowDown: ["right", 0.12] }[event.key];
        if (!step) return;
        event.preventDefault();
        this.setTurning(false);
        this.turn(...step);
      });
      let last = null;
      this.canvas.addEventListener("pointerdown", event => { last = [event.clientX, event.clientY]; this.canvas.setPointerCapture(event.pointerId); });
      this.canvas.addEventListener("pointerup", () => { last = null; });
      this.canvas.addEventListener("pointercancel", () => { last = null; });
      this.canvas.addEventListener("pointermove", event => {
        if (!last) return;
        this.setTurning(false);
        this.turn("up", (event.clientX - last[0]) / 120);
        this.turn("right", (event.clientY - last[1]) / 120);
        last = [event.clientX, event.clientY];
      });
    }

    bindControls() {
      const find = name => this.figure.querySelector(name);
      this.turnButton = find("[data-turn]");
      this.turnButton.addEventListener("click", () => this.setTurning(!this.turning));
      this.figure.querySelectorAll("[data-face]").forEach(button => button.addEventListener("click", () => {
        this.setTurning(false);
        this.view = FACES[button.dataset.face];
        this.draw(this.phase());
      }));
      this.figure.querySelectorAll("[data-element]").forEach(box => {
        const update = () => { this.shown[box.checked ? "add" : "delete"](Number(box.dataset.element)); this.draw(this.phase()); };
        box.addEventListener("change", update);
        if (box.checked) this.shown.add(Number(box.dataset.element));
      });
      this.status = find(".status");
      this.rest = find("[data-rest]");
      this.rest.addEventListener("click", () => this.setMotion(null));
      const article = this.figure.closest("article");
      this.cards = [...article.querySelectorAll("[data-motion]")];
      this.cards.forEach(button => button.addEventListener("click", () =>
        this.setMotion(this.motion === button.dataset.motion ? null : button.dataset.motion, button)));
      this.setTurning(this.turning);
    }

    readColours() {
      const style = getComputedStyle(document.documentElement);
      const colour = name => style.getPropertyValue(name).trim();
      this.ink = colour("--ink"); this.halo = colour("--sheet-of"); this.move = colour("--ir"); this.glass = colour("--glass");
      this.tints = {};
      const probe = document.createElementNS("http://www.w3.org/2000/svg", "svg");
      document.body.append(probe);
      TINTS.forEach(name => {
        const circle = document.createElementNS("http://www.w3.org/2000/svg", "circle");
        circle.setAttribute("class", name);
        probe.append(circle);
        this.tints[name] = getComputedStyle(circle).fill;
      });
      probe.remove();
      this.font = getComputedStyle(document.body).fontFamily;
    }

    setTurning(on) {
      this.turning = on;
      this.turnButton.textContent = on ? "Hold still" : "Turn";
      this.turnButton.setAttribute("aria-pressed", String(on));
      this.run();
    }

    setMotion(key, button) {
      this.motion = key;
      this.started = null;
      if (key) this.setTurning(false);
      this.cards.forEach(each => each.setAttribute("aria-pressed", String(each.dataset.motion === key)));
      this.status.textContent = key ? "Moving: " + button.dataset.label : "";
      this.rest.hidden = !key;
      if (key && innerWidth < 1088) this.figure.scrollIntoView({ block: "nearest", behavior: still.matches ? "auto" : "smooth" });
      this.run();
    }

    phase() { return this.motion && this.started !== null ? Math.sin((performance.now() - this.started) / 260) : 0; }
    turn(axis, angle) { this.view = product(about(axis, angle), this.view); this.draw(this.phase()); }

    fit() {
      const width = this.stage.clientWidth, ratio = Math.min(devicePixelRatio || 1, 2);
      if (!width) return;
      this.width = width; this.height = width * 11 / 14;
      this.canvas.width = Math.round(width * ratio); this.canvas.height = Math.round(this.height * ratio);
      this.pen.setTransform(ratio, 0, 0, ratio, 0, 0);
      this.draw(this.phase());
    }

    run() {
      if (this.frame) return;
      let before = performance.now();
      const tick = now => {
        this.frame = null;
        if (!this.visible || !(this.turning || this.motion)) { this.draw(0); return; }
        if (this.motion && this.started === null) this.started = now;
        if (this.turning) this.view = product(about("up", (now - before) / 2600), this.view);
        before = now;
        this.draw(this.phase());
        this.frame = requestAnimationFrame(tick);
      };
      this.frame = requestAnimationFrame(tick);
    }

    draw(phase) {
      const { pen, scene, width, height } = this;
      if (!width) return;
      pen.clearRect(0, 0, width, height);
      const marked = this.shown.size > 0;
      const swing = 0.2 * Math.min(2.2, scene.reach), arrow = 0.65 * Math.min(1, 0.6 * scene.reach);
      const reach = scene.reach * (marked ? 1.27 : 1.02) + (this.motion && !marked ? 0.6 * arrow : 0);
      const scale = Math.min(width, height) / 2 / reach;
      const moves = this.motion ? scene.motions[this.motion] : null;
      const flat = scene.positions.map((point, k) => times(this.view, moves ? point.map((v, a) => v + phase * swing * moves[k][a]) : point));
      const at = point => { const near = 1 / (1 - point[2] / (9 * scene.reach)); return [width / 2 + point[0] * scale * near, height / 2 - point[1] * scale * near]; };
      if (marked) this.drawElements(at, true, scale);
      const items = scene.bonds.map(([i, j]) => [(flat[i][2] + flat[j][2]) / 2 - 0.05, () => this.drawBond(flat, i, j, at, scale)]);
      flat.forEach((point, k) => items.push([point[2], () => this.drawAtom(k, at(point), scene.radii[k] * scale)]));
      items.sort((a, b) => a[0] - b[0]).forEach(item => item[1]());
      if (moves) flat.forEach((point, k) => {
        pen.globalAlpha = flat.length > 20 && point[2] < -0.15 * scene.reach ? 0.3 : 1;
        this.drawArrow(point, times(this.view, moves[k]), scene.radii[k], at, scale, arrow);
        pen.globalAlpha = 1;
      });
      if (marked) this.drawElements(at, false, scale);
      this.drawFrame();
      this.drawn = (this.drawn || 0) + 1;
      this.canvas.dataset.drawn = this.drawn;
    }

    line(a, b, wide, colour, dash = []) {
      const { pen } = this;
      pen.setLineDash(dash); pen.lineWidth = wide; pen.strokeStyle = colour; pen.lineCap = "butt";
      pen.beginPath(); pen.moveTo(...a); pen.lineTo(...b); pen.stroke(); pen.setLineDash([]);
    }

    drawBond(flat, i, j, at, scale) {
      const { scene } = this, away = flat[j].map((v, a) => v - flat[i][a]), length = Math.hypot(...away) || 1;
      const a = at(flat[i].map((v, k) => v + away[k] / length * scene.radii[i] * 0.97)), b = at(flat[j].map((v, k) => v - away[k] / length * scene.radii[j] * 0.97));
      const wide = Math.min(Math.max(1.2, 0.075 * scale), 4.2);
      this.line(a, b, wide + 3, this.halo);
      this.line(a, b, wide, this.ink);
    }

    drawAtom(k, [x, y], radius) {
      const { pen, scene } = this;
      pen.beginPath(); pen.arc(x, y, radius, 0, 2 * Math.PI);
      pen.fillStyle = this.tints[scene.tints[k]]; pen.fill();
      pen.lineWidth = Math.min(Math.max(0.8, 0.07 * radius), 1.8); pen.strokeStyle = this.ink;
      if (scene.tints[k] === "dummy") pen.setLineDash([2, 2]);
      pen.stroke(); pen.setLineDash([]);
      if (radius < 9) return;
      const label = scene.labels[k], size = Math.min(1.15 * radius, 18) * (label.length < 3 ? 1 : 0.75);
      pen.fillStyle = "#1c2430"; pen.font = size + "px " + this.font; pen.textAlign = "center"; pen.textBaseline = "middle";
      pen.fillText(label, x, y + 0.04 * size);
    }

    drawArrow(point, move, radius, at, scale, reach) {
      const size = Math.hypot(...move), across = Math.hypot(move[0], move[1]), { pen } = this;
      if (size < 0.04) return;
      const [x, y] = at(point);
      pen.strokeStyle = pen.fillStyle = this.move;
      if (across < 0.3 * size) {
        const r = Math.max(3, 0.2 * scale * Math.sqrt(size)), d = 0.7 * r;
        pen.lineWidth = 1.4; pen.beginPath(); pen.arc(x, y, r, 0, 2 * Math.PI); pen.stroke();
        pen.beginPath();
        if (move[2] > 0) { pen.arc(x, y, 0.38 * r, 0, 2 * Math.PI); pen.fill(); return; }
        pen.moveTo(x - d, y - d); pen.lineTo(x + d, y + d); pen.moveTo(x - d, y + d); pen.lineTo(x + d, y - d); pen.stroke();
        return;
      }
      const u = [move[0] / across, -move[1] / across], wide = Math.min(Math.max(1.4, 0.045 * scale), 3.4), length = Math.max(5, across * reach * scale);
      const head = Math.min(3.6 * wide, 0.7 * length), start = [x + u[0] * radius * scale, y + u[1] * radius * scale];
      const foot = [start[0] + u[0] * (length - head), start[1] + u[1] * (length - head)];
      this.line(start, foot, wide + 2.4, this.halo);
      this.line(start, foot, wide, this.move);
      pen.fillStyle = this.move; pen.beginPath();
      pen.moveTo(start[0] + u[0] * length, start[1] + u[1] * length);
      pen.lineTo(foot[0] - u[1] * 0.55 * head, foot[1] + u[0] * 0.55 * head);
      pen.lineTo(foot[0] + u[1] * 0.55 * head, foot[1] - u[0] * 0.55 * head);
      pen.closePath(); pen.fill();
    }

    drawElements(at, behind, scale) {
      const { pen, scene } = this, reach = scene.reach, labelled = [];
      scene.elements.forEach((each, number) => {
        if (!this.shown.has(number)) return;
        if (each.kind === "centre") { if (!behind) { pen.strokeStyle = this.glass; pen.lineWidth = 1.6; pen.beginPath(); pen.arc(...at([0, 0, 0]), this.ring * scale || 4.5, 0, 2 * Math.PI); pen.stroke(); } return; }
        each.vectors.forEach((vector, k) => {
          const v = times(this.view, vector);
          if (each.kind === "plane") { if (behind) this.drawPlane(v, at, reach); return; }
          const end = v.map(c => 1.1 * reach * c);
          if (behind) this.line(at(end.map(c => -c)), at(end), 1.4, this.glass, each.kind === "improper" ? [3, 4] : [10, 3, 2, 3]);
          else if (k < 3) {
            const [x0, y0] = at([0, 0, 0]), [ex, ey] = at(end), out = Math.hypot(ex - x0, ey - y0);
            let [x, y] = out > 6 ? [ex + 12 * (ex - x0) / out, ey + 12 * (ey - y0) / out] : [ex + 10, ey - 8];
            while (labelled.some(other => Math.abs(other[0] - x) < 22 && Math.abs(other[1] - y) < 14)) x += 23;
            labelled.push([x, y]);
            pen.fillStyle = this.glass; pen.font = "italic 13px " + this.font; pen.textAlign = "center"; pen.textBaseline = "middle";
            this.write(each.symbol, x, y, 13);
          }
        });
      });
    }

    /* A symbol with its index lowered and its primes where they belong: C, then 2 smaller, then ′. */
    write(symbol, x, y, size) {
      const { pen } = this, [, head, tail, primes] = symbol.match(/^(.)(.*?)([′″]*)$/u), plain = tail.replace(/[₀-₉]/g, c => String.fromCharCode(c.charCodeAt(0) - 0x2050));
      pen.textAlign = "left";
      const wide = pen.measureText(head).width;
      pen.font = "italic " + 0.72 * size + "px " + this.font;
      const left = x - (wide + pen.measureText(plain).width) / 2;
      pen.fillText(plain, left + wide, y + 0.25 * size);
      pen.fillText(primes, left + wide + pen.measureText(plain).width, y - 0.1 * size);
      pen.font = "italic " + size + "px " + this.font;
      pen.fillText(head, left, y);
    }

    drawPlane(normal, at, reach) {
      const { pen } = this, other = Math.abs(normal[2]) < 0.9 ? [0, 0, 1] : [1, 0, 0];
      const cross = (a, b) => [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
      let first = cross(normal, other); const size = Math.hypot(...first); first = first.map(c => c / size);
      const second = cross(normal, first);
      pen.beginPath();
      for (let k = 0; k < 48; k++) { const t = k * Math.PI / 24; pen.lineTo(...at([0, 1, 2].map(a => 1.06 * reach * (Math.cos(t) * first[a] + Math.sin(t) * second[a])))); }
      pen.closePath(); pen.globalAlpha = 0.07; pen.fillStyle = this.glass; pen.fill(); pen.globalAlpha = 1;
      pen.setLineDash([5, 3]); pen.lineWidth = 0.9; pen.strokeStyle = this.glass; pen.stroke(); pen.setLineDash([]);
    }

    drawFrame() {
      const { pen, height } = this, corner = [34, height - 34];
      "xyz".split("").forEach((name, k) => {
        const axis = this.view.map(row => row[k]), end = [corner[0] + 20 * axis[0], corner[1] - 20 * axis[1]];
        this.line(corner, end, 1.2, this.ink);
        pen.fillStyle = this.ink; pen.font = "italic 12px " + this.font; pen.textAlign = "center"; pen.textBaseline = "middle";
        const seen = Math.hypot(axis[0], axis[1]) > 0.25;          // one that points at the eye has its name beside the corner
        pen.fillText(name, corner[0] + (seen ? 28 * axis[0] : -11), corner[1] - (seen ? 28 * axis[1] : -11));
      });
    }
  }

  document.querySelectorAll("figure.plate").forEach(figure => new Plate(figure));
})();
