"""Set a page as LaTeX: the same parts as on the terminal, tables with booktabs rules for supporting information.

The text is a piece for \\input; letters beyond ASCII are written as commands, so that any engine sets it.  `PREAMBLE`
stands on top as a comment and names the packages it needs.
"""

import re
import unicodedata

from vibsym.report.document import Facts, Listing, Paragraph, Preformatted, Table, Title
from vibsym.report.labels import LISTED, is_reduction

PREAMBLE = "% needs \\usepackage{booktabs,longtable,array,amssymb}; made by vibsym --format latex"
LONG = 40                      # rows; a longer table may break across pages
LETTERS = 60                   # in a line of the second column of facts
WIDE = 92                      # letters in a row; a wider table is set small
_ESCAPED = {"\\": r"\textbackslash{}", "{": r"\{", "}": r"\}", "$": r"\$", "&": r"\&", "%": r"\%", "#": r"\#",
            "_": r"\_", "^": r"\textasciicircum{}", "~": r"\textasciitilde{}",
            "<": r"\textless{}", ">": r"\textgreater{}", "|": r"\textbar{}",
            '"': r"\textquotedbl{}", "[": "{[}", "]": "{]}"}
_GREEK = {"Γ": r"\Gamma", "Δ": r"\Delta", "Π": r"\Pi", "Σ": r"\Sigma", "Φ": r"\Phi", "Ω": r"\Omega", "Λ": r"\Lambda",
          "α": r"\alpha", "β": r"\beta", "γ": r"\gamma", "δ": r"\delta", "ε": r"\varepsilon", "η": r"\eta",
          "θ": r"\theta", "κ": r"\kappa", "λ": r"\lambda", "μ": r"\mu", "µ": r"\mu", "ν": r"\nu", "π": r"\pi",
          "ρ": r"\rho", "σ": r"\sigma", "τ": r"\tau", "φ": r"\varphi", "χ": r"\chi", "ψ": r"\psi", "ω": r"\omega",
          "ζ": r"\zeta", "ϕ": r"\phi"}
_SIGNS = {"−": "-", "×": r"\times", "·": r"\cdot", "∞": r"\infty", "≤": r"\le", "≥": r"\ge", "±": r"\pm", "→": r"\to",
          "↔": r"\leftrightarrow", "⊗": r"\otimes", "⊕": r"\oplus", "≈": r"\approx", "Å": r"\mathrm{\AA}",
          "½": r"\tfrac12", "⅓": r"\tfrac13", "√": r"\surd", "⁄": "/",
          "∑": r"\sum", "▲": r"\blacktriangle", "▼": r"\blacktriangledown", "◆": r"\blacklozenge", "○": r"\circ",
          "│": r"\vert",
          "⟨": r"\langle", "⟩": r"\rangle", "°": r"^{\circ}"}
_TEXT = {"–": "--", "—": "---", "…": r"\ldots{}", "’": "'", "‘": "`", "“": "``", "”": "''", "\u00a0": "~", "─": "--",
         "Å": r"\AA{}"}
_UPPER, _LOWER = {}, {}
for _character in "⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻":
    _UPPER[_character] = {"⁺": "+", "⁻": "-"}.get(_character, unicodedata.normalize("NFKC", _character))
for _character in "₀₁₂₃₄₅₆₇₈₉₊₋":
    _LOWER[_character] = {"₊": "+", "₋": "-"}.get(_character) or unicodedata.normalize("NFKC", _character)
_UPPER["ᵠ"] = r"\varphi"


def set_latex(parts) -> str:
    """Return the parts as LaTeX."""
    setters = {Title: _title, Paragraph: _paragraph, Facts: _facts, Table: _table, Listing: _listing,
               Preformatted: _preformatted}
    return PREAMBLE + "\n\n" + "\n\n".join("\n".join(setters[type(part)](part)) for part in parts) + "\n"


def latex(text: str, formula: bool = False) -> str:
    r"""Return a text with everything that LaTeX would take for markup escaped, and Unicode as commands.

    In a `formula` Ag is silver; elsewhere a text of nothing but species, or a list of them in front, has their indices.

    >>> latex("A₂″ & 50 %")
    '$\\mathrm{A}_{2}^{\\prime\\prime}$ \\& 50 \\%'
    >>> latex("ν₁(C–O) in D₃h")
    '$\\nu_{1}$(C--O) in $\\mathrm{D}_{3\\mathrm{h}}$'
    >>> latex("2Ag + Σu⁺"), latex("Ag in D∞h")
    ('2$\\mathrm{A}_{\\mathrm{g}}$ + $\\Sigma_{\\mathrm{u}}^{+}$', 'Ag in $\\mathrm{D}_{\\infty\\mathrm{h}}$')
    >>> latex("Eu, Ag: stretch C-N"), latex("1151 cm-1")
    ('$\\mathrm{E}_{\\mathrm{u}}$, $\\mathrm{A}_{\\mathrm{g}}$: stretch C-N', '1151 cm$^{-1}$')
    """
    if not formula and (listed := LISTED.search(text)):
        start, end = listed.span()
        return latex(text[:start]) + _set_labels(text[start:end], _SPECIES) + latex(text[end:])
    return _set_labels(text, _SPECIES if is_reduction(text) and not formula else _LABEL)


def _set_labels(text: str, labels: re.Pattern) -> str:
    """Return a text escaped, with what the pattern finds in mathematics mode."""
    out, place = [], 0
    for match in labels.finditer(text):
        out += map(_plain, text[place:match.start()])
        out.append(f"${_formula(match)}$")
        place = match.end()
    out += map(_plain, text[place:])
    joined = re.sub(r"(\\[A-Za-z]+)\$\$(?=[A-Za-z])", r"\1 ", "".join(out))        # \varphi and z stay two words
    return re.sub(r"(?<!\\)\$\$", "", joined).replace("cm-1", "cm$^{-1}$")


_ENDLESS = r"(?P<letter>[ΣΠΔΦ])(?P<side>[gu]?)(?P<sign>[⁺⁻]?)(?![A-Za-z])|(?P<axis>[CD])∞(?P<plane>[vh]?)(?![A-Za-z])"
_SCRIPTED = ("(?P<base>[A-Za-z)" + "".join(_GREEK) + r"]|\d(?=[" + "".join(_UPPER) + "]))?(?P<scripts>["
             + "".join(_UPPER) + "".join(_LOWER) + r"′″]+)(?P<more>[ghuvd]+(?![A-Za-z]))?")
_LABEL = re.compile(rf"{_ENDLESS}|{_SCRIPTED}|(?P<greek>[Γσ])(?P<index>3N|vib|translation|rotation|[vhd])(?![A-Za-z])")
_SPECIES = re.compile(rf"(?P<mulliken>[ABETGHSPD])(?P<parity>[gu])|{_LABEL.pattern}")        # where Ag is no silver


def _formula(match: re.Match) -> str:
    """Return what a label is in mathematics mode."""
    found = match.groupdict()
    if found.get("mulliken"):
        return rf"\mathrm{{{found['mulliken']}}}_{{\mathrm{{{found['parity']}}}}}"
    if found["letter"]:
        side = rf"_{{\mathrm{{{found['side']}}}}}" if found["side"] else ""
        return _GREEK[found["letter"]] + side + _scripts(found["sign"], "")
    if found["axis"]:
        plane = rf"\mathrm{{{found['plane']}}}" if found["plane"] else ""
        return rf"\mathrm{{{found['axis']}}}_{{\infty{plane}}}"
    if found["greek"]:
        return rf"{_GREEK[found['greek']]}_{{\mathrm{{{found['index']}}}}}"
    return _base(found["base"] or "") + _scripts(found["scripts"], found["more"] or "")


def _base(text: str) -> str:
    if text in _GREEK:
        return _GREEK[text]
    return text if text in "xyznk" else rf"\mathrm{{{text}}}" if text.isalpha() else text or "{}"


def _scripts(text: str, letters: str) -> str:
    """Return subscripts and superscripts; letters that belong to a label (`D₃h`, `A₁g`) join its subscript."""
    lower = "".join(_LOWER[c] for c in text if c in _LOWER) + (rf"\mathrm{{{letters}}}" if letters else "")
    primes = {"′": r"\prime", "″": r"\prime\prime"}
    upper = "".join(primes.get(c) or _UPPER[c] for c in text if c in _UPPER or c in primes)
    return (f"_{{{lower}}}" if lower else "") + (f"^{{{upper}}}" if upper else "")


def _plain(character: str) -> str:
    if character in _ESCAPED:
        return _ESCAPED[character]
    if character in _TEXT:
        return _TEXT[character]
    for table in (_GREEK, _SIGNS):
        if character in table:
            return f"${table[character]}$"
    if character in _UPPER:
        return f"$^{{{_UPPER[character]}}}$"
    if character in _LOWER:
        return f"$_{{{_LOWER[character]}}}$"
    if character in "′″":
        return r"$^{\prime}$" if character == "′" else r"$^{\prime\prime}$"
    if character == "\u0305":
        return ""
    return character


def _barred(text: str) -> str:
    return re.sub("([0-9])\u0305", "\ue000\\1", text)


def _set(text: str, formula: bool = False) -> str:
    """Escape a text; a digit under a combining bar (6̅) becomes an overlined digit."""
    return re.sub("\ue000(.)", r"$\\overline{\1}$", latex(_barred(text), formula))


def _title(part: Title) -> list[str]:
    return [rf"\subsection*{{{_set(part.text, True)}}}", *([_set(part.aside)] if part.aside else [])]


def _heading(text: str) -> list[str]:
    return [rf"\paragraph{{{_set(text)}}}\mbox{{}}"] if text else []


def _paragraph(part: Paragraph) -> list[str]:
    lines = [_set(line) for line in part.text.split("\n")]
    if part.strong:
        lines = [rf"\textbf{{{line}}}" for line in lines]
    return [" \\\\\n".join(lines)]


def _facts(part: Facts) -> list[str]:
    if not part.pairs:
        return _heading(part.heading)
    rows = [rf"{_set(name)} & {_set(value)} \\" for name, value in part.pairs]
    columns = r"{@{}l>{\raggedright\arraybackslash}p{0.7\linewidth}@{}}"
    lines = sum(1 + len(value) // LETTERS for _, value in part.pairs)
    if lines > LONG:
        return [*_heading(part.heading), "", r"\begin{longtable}" + columns, *rows, r"\end{longtable}"]
    return [*_heading(part.heading), "", r"\noindent\begin{tabular}" + columns, *rows, r"\end{tabular}"]


def _listing(part: Listing) -> list[str]:
    if not part.items:
        return _heading(part.heading)
    items = [rf"\item {_set(item)}" for item in part.items]
    return [*_heading(part.heading), r"\begin{itemize}", *items, r"\end{itemize}"]


def _preformatted(part: Preformatted) -> list[str]:
    """Set each line in the typewriter face, its blanks kept."""
    lines = [r"\texttt{" + _set(line.rstrip()).replace(" ", "~") + r"}\\" for line in part.lines]
    return [*_heading(part.heading), "", r"\begin{flushleft}", *lines, r"\end{flushleft}"]


def _table(part: Table) -> list[str]:
    columns = ["r" if k in part.right else "l" for k in range(len(part.head))]
    if part.flow and columns:
        columns[-1] = r">{\raggedright\arraybackslash}p{0.3\linewidth}"
    kind = "longtable" if len(part.rows) > LONG else "tabular"
    begin = rf"\begin{{{kind}}}{{@{{}}{''.join(columns)}@{{}}}}"
    head = " & ".join(map(_set, part.head)) + r" \\"
    rows = [" & ".join(map(_set, row)) + r" \\" for row in part.rows]
    ruled = [r"\toprule", head, r"\midrule", *([r"\endhead"] if kind == "longtable" else []), *rows, r"\bottomrule"]
    begin = begin if kind == "longtable" else r"\noindent" + begin
    width = sum(max(len(row[k]) for row in (part.head, *part.rows)) + 2 for k in range(len(columns) - part.flow))
    small = width + (25 if part.flow else 0) > WIDE
    before, after = ([r"{\footnotesize\setlength{\tabcolsep}{3pt}"], ["}"]) if small else ([], [])
    return [*_heading(part.heading), "", *before, begin, *ruled, rf"\end{{{kind}}}", *after]
