"""Wording and numbers that all forms of the report share."""

from __future__ import annotations

import math
import re
from collections.abc import Iterable

from laplace_verify.campaign.record import CaseInfo
from laplace_verify.measure.results import Order, Study
from laplace_verify.measure.verdict import Verdict

__all__ = [
    "CAUTIONS",
    "FIGURE_KEY",
    "NEVER_EXERCISED",
    "NO_SOLUTION",
    "SCOPE",
    "SYMBOLS",
    "VERDICT_MEANING",
    "VERDICT_WORDS",
    "accepted",
    "conditions_of",
    "count_of",
    "expected_order",
    "finest_error",
    "interval",
    "is_exact",
    "joined",
    "main_reason",
    "number",
    "order",
    "power_of_ten",
    "printable",
    "regularity_class",
    "seconds",
    "shortfall",
    "vector",
    "worst_norm",
]

VERDICT_WORDS = {
    Verdict.PASS: "pass",
    Verdict.FAIL: "fail",
    Verdict.INCONCLUSIVE: "inconclusive",
    Verdict.ERROR: "error",
    Verdict.NOT_APPLICABLE: "not applicable",
    Verdict.NOT_RUN: "not run",
}
# A sign beside the word, so that no reader depends on colour.
SYMBOLS = {
    Verdict.PASS: "✓",
    Verdict.FAIL: "✗",
    Verdict.INCONCLUSIVE: "?",
    Verdict.ERROR: "!",
    Verdict.NOT_APPLICABLE: "○",
    Verdict.NOT_RUN: "–",
}
VERDICT_MEANING = {
    Verdict.PASS: "the observed order agrees with the expected one in every deciding norm, or an ill-posed "
    "problem is refused",
    Verdict.FAIL: "the observed order falls short significantly, an exact check fails, or an ill-posed "
    "problem is answered",
    Verdict.INCONCLUSIVE: "the levels do not decide; the reason says what to do next",
    Verdict.ERROR: "the solver broke or gave back something that cannot be measured",
    Verdict.NOT_APPLICABLE: "the case asks for more than the solver declares",
    Verdict.NOT_RUN: "left out by the selection or by the budget",
}

NO_SOLUTION = "none, ill-posed"  # the smoothness of a solution that does not exist

SCOPE = (
    "This is a code verification: the solver is given boundary value problems of div(K grad u) = 0 whose "
    "exact solution is known, on a sequence of refined grids, and the errors must shrink at the rate "
    "that theory promises. It shows whether the equations are solved right. The solver sees shape, "
    "conditions and conductivity, never the exact solution.",
    "It is not a validation. Whether Laplace's equation, with these conditions and constants, describes "
    "a real device, soil or sea wall is a question for measurements, and nothing in this report answers "
    "it. Nor does it bound the discretisation error of any calculation outside this report; that needs a "
    "grid study of its own.",
)

NEVER_EXERCISED = (
    "sources and volume terms: a harmonic solution has none, so a wrong right-hand side inside the "
    "domain stays unseen",
    "time dependence: time stepping, initial values, stability limits",
    "nonlinearity: a conductivity or a boundary condition that depends on the solution, and the "
    "iteration it needs",
    "conductivity that varies from point to point, other than constant by region",
    "convection, reaction and every other term beside div(K grad u)",
    "systems coupled to other equations, and the program around the solver: input files, units, parallel "
    "runs, restarts",
)

CAUTIONS = (
    "Verification is not validation. A solver that passes solves the equations it was given; whether "
    "they are the right equations for a structure, a machine or a person near it is not examined here.",
    "Where a failure can hurt someone, the governing codes and the licensed practice of the responsible "
    "engineer decide, not this report.",
    "PASS is evidence at stated error rates, not proof. A mistake that no case exercises, or whose "
    "effect is smaller than what the levels can resolve, is not seen.",
    "The verdicts hold for this version of the solver, in this environment and with these settings. A "
    "changed compiler, library or option asks for a new run.",
)

FIGURE_KEY = (
    "In the figures solid lines are norms that decide, thin dashed ones remarks; hollow marks are levels "
    "that did not enter the fit. In the convergence figure the dotted line has the expected slope. In the "
    "figure of observed orders the dotted line is the expected order, the dashed one the lowest accepted, "
    "and the band the fitted order of the first norm with 2 standard errors. In the error map every place "
    "has the shade of the nearest measured point."
)

# All but the characters of XML 1.0 (section 2.2) without C1 controls; lone surrogates are among them.
_UNPRINTABLE = re.compile("[^\t\n\x20-\x7e\xa0-\ud7ff\ue000-\ufffd\U00010000-\U0010ffff]")
_SUPERSCRIPT = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")


def number(value: float | str | None, digits: int = 3) -> str:
    """Return `value` with `digits` significant digits; absent numbers and NaN are said in words.

    >>> number(0.00012345), number(2.0), number(0.0), number(None), number(float("nan")), number(float("inf"))
    ('1.23e-4', '2.00', '0', '–', 'not a number', '∞')
    """
    if value is None:
        return "–"
    if isinstance(value, str):
        return value
    if math.isnan(value):
        return "not a number"
    if value == 0:
        return "0"
    if math.isinf(value):
        return "∞" if value > 0 else "−∞"
    if not 1e-3 <= abs(value) < 1e5:
        mantissa, exponent = f"{value:.{digits - 1}e}".split("e")
        return f"{mantissa}e{int(exponent)}"
    if float(value).is_integer() and abs(value) >= 10 ** (digits - 1):
        return str(int(value))
    places = digits - 1 - math.floor(math.log10(abs(value)))
    return f"{value:.{max(places, 0)}f}"


def order(value: float | str | None) -> str:
    """Return an order of convergence with two decimals; words stay words.

    >>> order(1.9963), order("exponential"), order(2 / 3), order(None)
    ('2.00', 'exponential', '0.67', '–')
    """
    if isinstance(value, float | int) and math.isfinite(value):
        return f"{value:.2f}"
    return number(value)


def expected_order(found: Order) -> str:
    """Return the expected order of a norm; one that only has to fall has no rate."""
    return "falls, no rate" if found.expected == "decrease" else order(found.expected)


def seconds(value: float | None) -> str:
    """Return a time in seconds, three digits, never in powers of ten below a millisecond.

    >>> seconds(0.0001), seconds(1.234), seconds(None)
    ('< 0.001', '1.23', '–')
    """
    return "< 0.001" if value is not None and 0 <= value < 1e-3 else number(value)


def power_of_ten(exponent: int) -> str:
    """Return ten to an integer power, written with superscripts.

    >>> power_of_ten(-3)
    '10⁻³'
    """
    return "10" + str(exponent).translate(_SUPERSCRIPT)


def vector(point: Iterable[float]) -> str:
    """Return a point as coordinates in parentheses.

    >>> vector((0.5, 0.25))
    '(0.5, 0.25)'
    """
    return "(" + ", ".join(f"{x:.6g}" for x in point) + ")"


def count_of(count: int, noun: str, plural: str = "") -> str:
    """Return a count with its noun.

    >>> count_of(1, "case"), count_of(3, "study", "studies")
    ('1 case', '3 studies')
    """
    return f"{count} {noun if count == 1 else plural or noun + 's'}"


def joined(words: Iterable[str], last: str = "and") -> str:
    """Return words as an enumeration.

    >>> joined(["max", "L1", "L2"]), joined([])
    ('max, L1 and L2', 'none')
    """
    listed = list(words)
    if len(listed) < 2:
        return listed[0] if listed else "none"
    return f"{', '.join(listed[:-1])} {last} {listed[-1]}"


def printable(text: str) -> str:
    """Return `text` without control characters, which neither XML nor LaTeX can hold.

    Line ends and tabs stay; what is taken out shows as the replacement character.

    >>> printable("step" + chr(7) + " two")
    'step\ufffd two'
    """
    return _UNPRINTABLE.sub("\ufffd", text.replace("\r\n", "\n"))


def accepted(study: Study) -> bool:
    """Return whether a study deviates just as its author declared before the run."""
    return study.known is not None and study.verdict in (Verdict.FAIL, Verdict.INCONCLUSIVE)


def conditions_of(info: CaseInfo) -> list[str]:
    """Return the kinds of condition a case uses, each once, in order of first use."""
    return list(dict.fromkeys(piece.condition for piece in info.pieces))


def regularity_class(info: CaseInfo) -> str:
    """Return the regularity of the exact solution in two or three words."""
    regularity = info.regularity
    if info.ill_posed:
        return NO_SOLUTION
    if regularity is None:
        return "not stated"
    if regularity.jumps or regularity.solution == 0:
        return "jump of the data"
    if math.isinf(regularity.solution):
        return "smooth"
    return f"r^{number(regularity.solution)} at a point"


def worst_norm(study: Study) -> str | None:
    """Return the deciding norm in which a study does least well; None if none decides.

    First by verdict, then by observed less expected order.
    """
    ranks = {Verdict.FAIL: 0, Verdict.INCONCLUSIVE: 1}

    def rank(norm: str) -> tuple[int, float]:
        found = study.orders[norm]
        gap = shortfall(found)
        return ranks.get(found.verdict, 2) if found.verdict else 2, gap if gap is not None else math.inf

    return min(study.deciding, key=rank, default=None)


def main_reason(study: Study) -> str:
    """Return, in one sentence, why a study has its verdict: that of its worst norm, else the first reason."""
    norm = worst_norm(study)
    if norm is not None and study.orders[norm].verdict is study.verdict and study.orders[norm].note:
        return study.orders[norm].note
    return study.reasons[0] if study.reasons else VERDICT_MEANING[study.verdict]


def shortfall(found: Order) -> float | None:
    """Return observed less expected order, None where one of them is no number."""
    if found.observed is None or not isinstance(found.expected, float | int):
        return None
    return found.observed - float(found.expected)


def interval(found: Order) -> str:
    """Return the observed order with its interval; for exponential convergence the rate b of exp(-b n)."""
    if found.observed is None:
        return "exact" if is_exact(found) else "–"
    if found.expected == "exponential":
        return f"exp(−{number(found.observed)} n)"
    if found.low is None or found.high is None:
        return order(found.observed)
    return f"{order(found.observed)} [{order(found.low)}, {order(found.high)}]"


def is_exact(found: Order) -> bool:
    """Return whether the errors are at round-off on every level, so that no order can be observed."""
    return found.observed is None and found.verdict is Verdict.PASS and "exact" in found.note


def finest_error(study: Study, norm: str) -> float | None:
    """Return the absolute error in this norm on the finest level that has it."""
    return next((level.errors[norm] for level in reversed(study.levels) if norm in level.errors), None)
