/* What the browser tests ask of a page; each function returns a list of complaints. */
const visible = element => {
  if (!element.checkVisibility({ checkOpacity: true, checkVisibilityCSS: true })) return false;
  const box = element.getBoundingClientRect();
  return box.width > 0 && box.height > 0;
};
const named = element => element.tagName.toLowerCase() + (element.id ? "#" + element.id : "") + "." + (element.getAttribute("class") || "") + " '" + element.textContent.trim().slice(0, 40) + "'";
const hiddenOnPurpose = element => element.closest(".hidden-words, .skip, .store, script, style, head, thead");
const texts = () => [...document.querySelectorAll("body *")].filter(element => !hiddenOnPurpose(element) && visible(element)
  && [...element.childNodes].some(node => node.nodeType === 3 && node.textContent.trim()));

window.probes = {
  sideways: () => {
    const over = document.documentElement.scrollWidth - document.documentElement.clientWidth;
    if (over <= 0) return [];
    return ["page is " + over + " px too wide: " + [...document.querySelectorAll("body *")].filter(e => e.getBoundingClientRect().right > innerWidth + 1).slice(0, 4).map(named).join(", ")];
  },
  clipped: () => {
    const found = [];
    for (const element of texts()) {
      const box = element.getBoundingClientRect();
      if (box.left < -1 || box.right > innerWidth + 1) found.push("outside the window: " + named(element));
      for (let up = element; up && up !== document.body; up = up.parentElement) {
        const style = getComputedStyle(up), own = up.getBoundingClientRect();
        const cut = up.tagName === "svg" || ["hidden", "clip", "auto", "scroll"].includes(style.overflowX);
        if (cut && (box.left < own.left - 1.5 || box.right > own.right + 1.5)) found.push("cut at the side: " + named(element));
        if (up.tagName === "svg" && (box.top < own.top - 1.5 || box.bottom > own.bottom + 1.5)) found.push("cut at the top or foot: " + named(element));
      }
    }
    return found;
  },
  overlapping: () => {
    const leaves = texts().filter(element => !element.matches("sub, sup, tspan") && (element.tagName === "text" || ![...element.children].some(child => !child.matches("sub, sup, br"))));
    const boxes = leaves.map(element => {
      const range = document.createRange();
      range.selectNodeContents(element);
      return [...range.getClientRects()].filter(b => b.width > 1 && b.height > 1).map(b => [element, b]);
    }).flat().sort((a, b) => a[1].top - b[1].top);
    const found = [];
    for (let i = 0; i < boxes.length; i++) {
      for (let j = i + 1; j < boxes.length && boxes[j][1].top < boxes[i][1].bottom; j++) {
        const [one, a] = boxes[i], [two, b] = boxes[j];
        if (one === two || one.contains(two) || two.contains(one)) continue;
        if (one.closest(".stage, .motion svg, .store") || two.closest(".stage, .motion svg, .store")) continue;   // atoms hide atoms
        const across = Math.min(a.right, b.right) - Math.max(a.left, b.left), down = Math.min(a.bottom, b.bottom) - Math.max(a.top, b.top);
        if (across > 2 && down > 3) found.push(named(one) + " and " + named(two));
      }
    }
    return found;
  },
  contrast: () => {
    const parse = text => { const m = text.match(/[\d.]+/g).map(Number); return m.length > 3 ? m : [...m.slice(0, 3), 1]; };
    const light = c => { const [r, g, b] = c.slice(0, 3).map(v => { v /= 255; return v <= 0.03928 ? v / 12.92 : ((v + 0.055) / 1.055) ** 2.4; }); return 0.2126 * r + 0.7152 * g + 0.0722 * b; };
    const ground = element => {
      if (element.tagName === "text" && element.previousElementSibling && element.previousElementSibling.tagName === "circle" && element.closest(".stage, .store, .motion svg"))
        return parse(getComputedStyle(element.previousElementSibling).fill);
      for (let up = element; up; up = up.parentElement) { const c = parse(getComputedStyle(up).backgroundColor); if (c[3] > 0.99) return c; }
      return [255, 255, 255, 1];
    };
    const found = [];
    for (const element of texts()) {
      const style = getComputedStyle(element), colour = parse(element.tagName === "text" || element.tagName === "tspan" ? style.fill : style.color);
      const a = light(colour), b = light(ground(element)), ratio = (Math.max(a, b) + 0.05) / (Math.min(a, b) + 0.05);
      if (ratio < 4.5) found.push(ratio.toFixed(2) + " " + named(element));
    }
    return found;
  },
  unreachable: () => [...document.querySelectorAll("button, input, a[href], summary, canvas")].filter(element => visible(element) && !element.disabled)
    .filter(element => element.tabIndex < 0 || (element.tagName !== "CANVAS" && !(element.textContent.trim() || element.labels && element.labels.length || element.getAttribute("aria-label")))).map(named),
  broken: () => [...document.querySelectorAll("a[href^='#']")].filter(link => !document.getElementById(decodeURIComponent(link.getAttribute("href").slice(1)))).map(named),
};
