r"""The report as a complete LaTeX article; its figures are the pages of one PDF file beside it.

All text is escaped. The packages are those of TeX Live's "latex-recommended"; Latin Modern is used where it
is installed. Two runs of pdfLaTeX settle contents and page numbers.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from laplace_verify.report.content import (
    Block,
    Code,
    Document,
    Facts,
    Items,
    Paragraph,
    Picture,
    Section,
    Table,
)
from laplace_verify.report.latex_table import label_of, table_to_latex
from laplace_verify.report.latex_text import escape_latex
from laplace_verify.report.text import VERDICT_WORDS

__all__ = ["FIGURES", "to_latex"]

FIGURES = "figures.pdf"
_PREAMBLE = r"""\documentclass[10pt,a4paper]{article}
\usepackage[utf8]{inputenc}
\usepackage[T1]{fontenc}
\IfFileExists{lmodern.sty}{\usepackage{lmodern}}{}
\usepackage{textcomp}
\usepackage[margin=20mm,footskip=9mm]{geometry}
\usepackage{graphicx}
\usepackage{array}
\usepackage{booktabs}
\usepackage{longtable}
\usepackage{pdflscape}
\usepackage{fancyhdr}
\usepackage[hidelinks,bookmarksnumbered]{hyperref}
\setlength{\parindent}{0pt}
\setlength{\parskip}{4pt plus 1pt}
\setlength{\LTpre}{6pt}
\setlength{\LTpost}{6pt}
\setcounter{secnumdepth}{1}
\setcounter{tocdepth}{2}
\emergencystretch=4em
\raggedbottom
\makeatletter
\renewcommand{\@pnumwidth}{2.2em}
\def\@listi{\leftmargin\leftmargini\topsep 2pt\parsep 1pt\itemsep 0pt}
\let\@listI\@listi
\@listi
\makeatother
\newenvironment{facts}{\begin{list}{}{\setlength{\labelwidth}{33mm}\setlength{\labelsep}{3mm}
\setlength{\leftmargin}{36mm}\setlength{\itemsep}{1pt}\setlength{\parsep}{0pt}\setlength{\topsep}{2pt}
\renewcommand{\makelabel}[1]{\parbox[t]{\labelwidth}{\raggedright\bfseries ##1}}}\footnotesize\raggedright}
{\end{list}}
\pagestyle{fancy}
\fancyhf{}
\renewcommand{\headrulewidth}{0pt}
\fancyfoot[R]{\footnotesize page \thepage\ of \pageref{the-last-page}}
\AtEndDocument{\label{the-last-page}}
"""
_HEADINGS = ("section", "subsection", "subsubsection", "paragraph")
_FOOT = 70  # letters of the title in the foot of every page


def to_latex(document: Document, pages: Mapping[str, int] | None = None) -> str:
    """Return the document as LaTeX; `pages` maps keys of pictures to pages of the file `FIGURES`."""
    title = escape_latex(document.title)
    short = document.title if len(document.title) <= _FOOT else f"{document.title[: _FOOT - 1]}…"
    counts = "; ".join(f"{VERDICT_WORDS[verdict]} {count}" for verdict, count in document.counts)
    parts = [
        _PREAMBLE + rf"\fancyfoot[L]{{\footnotesize {escape_latex(short)}}}",
        r"\begin{document}",
        rf"{{\LARGE\bfseries\raggedright {title}\par}}",
        rf"{{\raggedright {escape_latex(document.subtitle)}\par}}",
        rf"{{\large\bfseries\raggedright {escape_latex(document.summary)}\par}}",
        rf"Cases by verdict: {escape_latex(counts)}.",
        r"{\small\parskip=0pt\tableofcontents}",
    ]
    for section in document.sections:
        parts += _section(section, 0, pages or {})
    return "\n\n".join(part for part in parts if part) + "\n\n\\end{document}\n"


def _section(section: Section, level: int, pages: Mapping[str, int]) -> list[str]:
    mark = f" --- {VERDICT_WORDS[section.verdict]}" if section.verdict else ""
    command = _HEADINGS[min(level, len(_HEADINGS) - 1)]
    label = rf"\label{{{label_of(section.anchor)}}}"
    parts = [rf"\{command}{{{escape_latex(section.title)}{mark}}}{label}"]
    parts += [text for text in (_block(block, pages) for block in section.blocks) if text]
    for inner in section.sections:
        parts += _section(inner, level + 1, pages)
    return parts


def _block(block: Block, pages: Mapping[str, int]) -> str:
    match block:
        case Paragraph(text=text, tone=tone, label=label):
            body = (rf"\textbf{{{escape_latex(label)}}} " if label else "") + escape_latex(text)
            return rf"\begin{{quote}}{body}\end{{quote}}" if tone == "caution" else body
        case Items(entries=entries, ordered=ordered):
            return _items(entries, "enumerate" if ordered else "itemize")
        case Facts(pairs=pairs):
            lines = [rf"\item[{{{escape_latex(name)}}}] {escape_latex(value)}" for name, value in pairs]
            return "\\begin{facts}\n" + "\n".join(lines) + "\n\\end{facts}" if lines else ""
        case Code(text=text):
            return _code(text)
        case Table():
            return table_to_latex(block)
        case Picture():
            return _pictures((block,), pages)
        case _:
            return _pictures(block, pages)


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


def _pictures(pictures: tuple[Picture, ...], pages: Mapping[str, int]) -> str:
    """Set pictures two in a row, each over its caption; one alone gets the width of two thirds."""
    shown = [picture for picture in pictures if picture.key in pages]
    share = 0.48 if len(shown) > 1 else 0.66
    boxes = [
        rf"\begin{{minipage}}[t]{{{share}\textwidth}}\vspace{{0pt}}"
        rf"\includegraphics[page={pages[picture.key]},width=\linewidth,height=0.8\textheight,keepaspectratio]"
        rf"{{{FIGURES}}}\par{{\footnotesize\raggedright\textbf{{{escape_latex(picture.title)}.}} "
        rf"{escape_latex(picture.caption)}\par}}\end{{minipage}}"
        for picture in shown
    ]
    rows = ["\\hfill\n".join(boxes[k : k + 2]) for k in range(0, len(boxes), 2)]
    return "\n\n\\medskip\n".join(f"\\noindent\n{row}" for row in rows)
