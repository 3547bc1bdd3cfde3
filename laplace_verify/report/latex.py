r"""The report as a complete LaTeX article that needs standard packages only; figures are PDF files beside it.

All text is escaped. Letters and signs of mathematics that pdfLaTeX does not know by themselves are written as
commands; what has no command here is shown by its code point, so that the file compiles whatever a name
holds.
"""

from __future__ import annotations

from collections.abc import Sequence

from laplace_verify.report.content import (
    Block,
    Cell,
    Code,
    Document,
    Facts,
    Items,
    Paragraph,
    Picture,
    Section,
    Table,
)
from laplace_verify.report.text import VERDICT_WORDS, printable

__all__ = ["escape_latex", "table_to_latex", "to_latex"]

_PREAMBLE = r"""\documentclass[10pt,a4paper]{article}
\usepackage[utf8]{inputenc}
\usepackage[T1]{fontenc}
\usepackage{textcomp}
\usepackage[margin=20mm]{geometry}
\usepackage{graphicx}
\usepackage{longtable}
\usepackage{array}
\usepackage[hidelinks]{hyperref}
\setlength{\parindent}{0pt}
\setlength{\parskip}{4pt plus 1pt}
\setlength{\tabcolsep}{4pt}
\setcounter{secnumdepth}{1}
\setcounter{tocdepth}{1}
\emergencystretch=3em
"""
_HEADINGS = ("section", "subsection", "subsubsection", "paragraph")
_GREEK = (
    "alpha", "beta", "gamma", "delta", "varepsilon", "zeta", "eta", "theta", "iota", "kappa", "lambda", "mu",
    "nu", "xi", "pi", "rho", "sigma", "tau", "varphi", "chi", "psi", "omega",
)  # fmt: skip
_COMMANDS = {
    "\\": r"\textbackslash{}", "{": r"\{", "}": r"\}", "$": r"\$", "&": r"\&", "#": r"\#", "%": r"\%",
    "_": r"\_", "^": r"\textasciicircum{}", "~": r"\textasciitilde{}", "<": r"\textless{}",
    ">": r"\textgreater{}", "|": r"\textbar{}", '"': r"\textquotedbl{}", "'": r"\textquotesingle{}",
    "`": r"\textasciigrave{}",
    "–": r"\textendash{}", "—": r"\textemdash{}", "…": r"\ldots{}", "“": "``", "”": "''", "‘": "`", "’": "'",
    "·": r"$\cdot$", "×": r"$\times$", "±": r"$\pm$", "−": "$-$", "∞": r"$\infty$",
    "≤": r"$\leq$", "≥": r"$\geq$", "≈": r"$\approx$",
    "≠": r"$\neq$", "→": r"$\to$", "∇": r"$\nabla$", "∂": r"$\partial$", "√": r"$\surd$",
    "∈": r"$\in$", "∫": r"$\int$", "Σ": r"$\Sigma$", "∑": r"$\sum$", "°": r"$^\circ$", "✓": r"$\surd$",
    "✗": r"$\times$", "○": r"$\circ$", "⁻": "$^{-}$", "²": "$^2$", "³": "$^3$", "¹": "$^1$", "⁰": "$^0$",
    "µ": r"$\mu$", "½": r"$\frac12$", "Δ": r"$\Delta$", "Ω": r"$\Omega$", "Γ": r"$\Gamma$", "\u200b": "",
    "\ufffd": r"\textbf{?}", "\u00a0": "~",
    **{letter: f"$^{digit}$" for digit, letter in enumerate("⁴⁵⁶⁷⁸⁹", 4)},
    **{letter: f"$_{digit}$" for digit, letter in enumerate("₀₁₂₃₄₅₆₇₈₉")},
    **{letter: rf"$\{name}$" for letter, name in zip("αβγδεζηθικλμνξπρστφχψω", _GREEK, strict=True)},
}  # fmt: skip
_WIDTH_IN_LETTERS = 92  # of a line in \footnotesize on A4 with our margins


def escape_latex(text: str) -> str:
    r"""Return `text` such that LaTeX shows it letter by letter.

    >>> print(escape_latex("50 % of a_1"))
    50 \% of a\_1
    """
    letters = "".join(_letter(character) for character in printable(text))
    return letters.replace("--", "-{}-").replace(",,", ",{},")  # T1 fonts would join them to one sign


def _letter(character: str) -> str:
    command = _COMMANDS.get(character)
    if command is not None:
        return command
    known = character.isascii() or "À" <= character <= "ÿ"
    return character if known else f"[U+{ord(character):04X}]"


def to_latex(document: Document, pictures: dict[str, str] | None = None) -> str:
    """Return the document as LaTeX; `pictures` maps keys of figures to the paths of their PDF files."""
    paths = pictures or {}
    parts = [
        _PREAMBLE + rf"\title{{{escape_latex(document.title)}}}",
        rf"\author{{{escape_latex(document.subtitle)}}}" + "\n\\date{}",
        "\\begin{document}\n\\maketitle",
        rf"\textbf{{{escape_latex(document.summary)}}}",
        _items([f"{VERDICT_WORDS[verdict]}: {count}" for verdict, count in document.counts], "itemize"),
        r"\tableofcontents",
    ]
    for section in document.sections:
        parts += _section(section, 0, paths)
    return "\n\n".join(part for part in parts if part) + "\n\n\\end{document}\n"


def _section(section: Section, level: int, paths: dict[str, str]) -> list[str]:
    mark = f" --- {VERDICT_WORDS[section.verdict]}" if section.verdict else ""
    command = _HEADINGS[min(level, len(_HEADINGS) - 1)]
    parts = [rf"\{command}{{{escape_latex(section.title)}{mark}}}"]
    parts += [text for text in (_block(block, paths) for block in section.blocks) if text]
    for inner in section.sections:
        parts += _section(inner, level + 1, paths)
    return parts


def _block(block: Block, paths: dict[str, str]) -> str:
    match block:
        case Paragraph(text=text, tone=tone, label=label):
            body = (rf"\textbf{{{escape_latex(label)}}} " if label else "") + escape_latex(text)
            return rf"\begin{{quote}}{body}\end{{quote}}" if tone == "caution" else body
        case Items(entries=entries, ordered=ordered):
            return _items(entries, "enumerate" if ordered else "itemize")
        case Facts(pairs=pairs):
            lines = [rf"\item[{{{escape_latex(name)}}}] {escape_latex(value)}" for name, value in pairs]
            return "\\begin{description}\n" + "\n".join(lines) + "\n\\end{description}" if lines else ""
        case Code(text=text):
            return _code(text)
        case Table():
            return table_to_latex(block)
        case Picture():
            return _pictures((block,), paths)
        case _:
            return _pictures(block, paths)


def _items(entries: Sequence[str], kind: str) -> str:
    lines = "\n".join(rf"\item {{{escape_latex(entry)}}}" for entry in entries)
    return f"\\begin{{{kind}}}\n{lines}\n\\end{{{kind}}}" if lines else ""


def _code(text: str) -> str:
    r"""Set code line by line; `verbatim` would end at the first "\end{verbatim}" a text may hold."""
    lines = [escape_latex(line.expandtabs(4)).replace("  ", "~~") or "~" for line in text.splitlines()]
    return (
        "{\\footnotesize\\ttfamily\\raggedright\n"
        + "\\\\\n".join(f"\\mbox{{}}{line}" for line in lines)
        + "\\par}"
    )


def _pictures(pictures: tuple[Picture, ...], paths: dict[str, str]) -> str:
    shown = [picture for picture in pictures if picture.key in paths]
    if not shown:
        return ""
    share = 0.96 / max(len(shown), 2)
    boxes = [
        rf"\begin{{minipage}}[t]{{{share:.3f}\textwidth}}\vspace{{0pt}}\includegraphics[width=\linewidth]"
        rf"{{{paths[picture.key]}}}\par{{\footnotesize {escape_latex(picture.title)}. "
        rf"{escape_latex(picture.caption)}\par}}\end{{minipage}}"
        for picture in shown
    ]
    return "\\noindent\n" + "\\hfill\n".join(boxes)


def table_to_latex(table: Table) -> str:
    """Return one table that may run over pages; wide columns of words are broken into lines."""
    layout = "".join(_layout(table))
    head = " & ".join(rf"\textbf{{{escape_latex(column.title)}}}" for column in table.columns)
    rows = "\n".join(" & ".join(map(_cell, row)) + r" \\" for row in table.rows)
    width = rf"\multicolumn{{{len(table.columns)}}}{{@{{}}p{{0.95\textwidth}}}}"
    caption = rf"{width}{{{escape_latex(table.caption)}}} \\[2pt]"
    lines = [caption, r"\hline", rf"{head} \\", r"\hline", r"\endhead", rows, r"\hline"]
    body = "\n".join(line for line in lines if line)
    return f"{{\\footnotesize\n\\begin{{longtable}}[l]{{@{{}}{layout}@{{}}}}\n{body}\n\\end{{longtable}}}}"


def _layout(table: Table) -> list[str]:
    """Return a column type each: r, l, or a width where the words would not fit on one line."""
    columns = [
        max([max(map(len, column.title.split()), default=1), *(len(row[k].text) for row in table.rows)])
        for k, column in enumerate(table.columns)
    ]
    titles = [max(len(column.title), width) for column, width in zip(table.columns, columns, strict=True)]
    room = _WIDTH_IN_LETTERS - 3 * len(columns)
    if sum(titles) <= room:
        return ["r" if column.align == "right" else "l" for column in table.columns]
    limit = max(room / len(columns), 8)
    small = sum(width for width in columns if width <= limit)
    large = [max(width, 1) for width in columns if width > limit]
    share = max(room - small, 10 * len(large)) / max(sum(min(width, 60) for width in large), 1)
    widths = [width if width <= limit else min(width, 60) * min(share, 1.0) for width in columns]
    scale = min(1.0, room / sum(widths)) * 0.92 / _WIDTH_IN_LETTERS
    return [
        rf">{{\ragged{'left' if column.align == 'right' else 'right'}\arraybackslash}}"
        rf"p{{{(width + 1) * scale:.3f}\textwidth}}"
        for column, width in zip(table.columns, widths, strict=True)
    ]


def _cell(cell: Cell) -> str:
    # The braces keep a cell that opens with "[" from being read as the optional argument of "\\".
    return f"{{{VERDICT_WORDS[cell.verdict] if cell.verdict is not None else escape_latex(cell.text)}}}"
