r"""Plain text as LaTeX, and how wide it will be.

Letters and signs of mathematics that pdfLaTeX does not know by themselves are written as commands; what has
no command here is shown by its code point, so that the file compiles whatever a name holds. Long words
without a hyphen (paths, digests, formulas) may be broken after a sign or, where there is none, every twelve
letters.
"""

from __future__ import annotations

import re

from laplace_verify.report.text import printable

__all__ = ["escape_latex", "pieces_of", "width_of"]

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
_LONG = 12  # letters; longer words may be broken
_RUN = 20  # letters without any sign; longer runs may be broken anywhere
_AFTER = re.compile(r"(?<=[-/_:=,;+*)\]}>|])(?=[\w(\[])|(?<=[^\W\d]\.)(?=[^\W\d])")
# Widths in points of the letters of cmr10 (Knuth 1986) at 10 pt, like widths together and rounded up; from
# memory, checked by the test that compiles a report.
_WIDTHS = {
    **dict.fromkeys("ijl.,:;'!|", 2.9), **dict.fromkeys("frst()[]-I`", 4.0),
    **dict.fromkeys("ABCDEFGHJKLNOPQRSTUVXYZ&", 7.6), **dict.fromkeys("mwMW%@–—", 9.5),
    **dict.fromkeys("=+<>~^−±×∞", 7.9),
}  # fmt: skip
_USUAL = 5.4
_BOLD = 1.16


def escape_latex(text: str) -> str:
    r"""Return `text` such that LaTeX shows it letter by letter.

    >>> print(escape_latex("50 % of a_1"))
    50 \% of a\_1
    """
    words = re.split(r"(\s+)", printable(text))
    return "".join(r"\allowbreak{}".join(map(_escaped, pieces_of(word))) for word in words)


def pieces_of(word: str) -> list[str]:
    """Return the parts of a word that stay on one line.

    >>> pieces_of("plate-hot-side"), pieces_of("temperature"), pieces_of("grid.py:solve_plate")
    (['plate-', 'hot-', 'side'], ['temperature'], ['grid.', 'py:', 'solve_', 'plate'])
    """
    if len(word) <= _LONG or word.isspace():
        return [word]
    parts = []
    for part in _AFTER.split(word):
        step = _LONG if len(part) > _RUN else _RUN
        parts += [part[k : k + step] for k in range(0, len(part), step)]
    return parts


def width_of(text: str, *, bold: bool = False) -> float:
    """Return an estimate of the width in points at 10 pt, rather too large than too small."""
    width = sum(_WIDTHS.get(character, _USUAL) for character in text)
    return width * _BOLD if bold else width


def _escaped(piece: str) -> str:
    letters = "".join(map(_letter, piece))
    return letters.replace("--", "-{}-").replace(",,", ",{},")  # T1 fonts would join them to one sign


def _letter(character: str) -> str:
    command = _COMMANDS.get(character)
    if command is not None:
        return command
    known = character.isascii() or "À" <= character <= "ÿ"
    return character if known else f"[U+{ord(character):04X}]"
