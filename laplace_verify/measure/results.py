"""What a study leaves behind: plain numbers and words.

Nothing here holds a field or a solver, so a result travels between processes and to JSON as it is, and every
verdict can be recomputed from it.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from typing import Literal, TypeAlias

from laplace_verify.measure.orders import line_order
from laplace_verify.measure.signs import FloorKind, Sign
from laplace_verify.measure.table import Format, convergence_table
from laplace_verify.measure.verdict import Verdict

__all__ = ["Coverage", "ErrorMap", "Feature", "Level", "Order", "Rate", "Study"]

Rate: TypeAlias = float | Literal["exponential", "decrease"] | None
Feature: TypeAlias = bool | float | str | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Coverage:
    """Errors against the standard errors a stochastic answer states, at `points` points.

    `ratio` is sum e^2 / sum se^2, `covered` the share of points with |e| <= 2 se (95.4 % of normal errors),
    `stated` the root mean square of the standard errors, in units of u.
    """

    points: int
    ratio: float
    covered: float
    stated: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Level:
    """One size: its spacing, its cost and its errors.

    `errors` and `relative` map a norm to ||u_h - u|| and ||u_h - u|| / ||u||. With lengths in L and values in
    U an L2 error is in U L^(d/2), an H1-semi error in U L^(d/2 - 1); relative errors have no unit. A norm
    that could not be measured is absent. `moves` maps a piece to the largest distance by which data points
    were moved onto it, `left_out` is the share of the sample points outside the solver's mesh, `coverage` is
    there where the answer states standard errors, `residual` is the final residual the solver reports,
    `interpolation` the L2 error of interpolating the exact solution on the same mesh,
    `nodal` the largest error at the solver's own points over the largest |u|.
    """

    size: int
    h: float
    unknowns: int
    seconds: float
    errors: dict[str, float]
    relative: dict[str, float]
    judged: bool = True
    note: str = ""
    moves: dict[str, float] = field(default_factory=dict)
    left_out: float = 0.0
    coverage: Coverage | None = None
    residual: float | None = None
    interpolation: float | None = None
    nodal: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Order:
    """Observed against expected order in one norm.

    `formal` is what the author declares, `expected` what remains of it after the regularity of solution and
    domain: a number, "exponential", "decrease" (theory promises convergence but no rate) or None (theory
    promises nothing). [`low`, `high`] is observed -+ 2 standard errors. `pairs` holds the order between
    neighbouring levels (None where undefined), `left_out` the sizes that did not enter the fit, and
    why. `finer` says that a finer level may settle what is open, `floor` at what kind of floor the error
    stays.
    """

    observed: float | None
    low: float | None
    high: float | None
    formal: float | str | None
    expected: float | str | None
    decides: bool
    tolerance: float | None = None
    note: str = ""
    basis: str = ""
    verdict: Verdict | None = None
    finer: bool = False
    floor: FloorKind | None = None
    pairs: list[float | None] = field(default_factory=list)
    left_out: dict[str, str] = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class ErrorMap:
    """Signed errors u_h - u at up to 1000 points of one level, to six digits: where the error sits."""

    size: int
    points: list[list[float]]
    errors: list[float]


@dataclass(frozen=True, slots=True, kw_only=True)
class Study:
    """One solver on one case at a sequence of sizes, and the verdict.

    `local` maps a place (a piece's name, "corner NAME/NAME", "interior") to the largest error there at every
    level, None where no point was sampled. `features` describes case and solver in plain words for diagnosis.
    `crash` is the traceback if the verdict is ERROR. `known` is the author's reason for a known deviation.
    `journal` says which sizes were added, when and why. `signs` holds those reasons and remarks again that
    have a kind.
    """

    solver: str
    case_id: str
    case_title: str
    verdict: Verdict
    sizes: list[int]
    seed: int
    levels: list[Level] = field(default_factory=list)
    orders: dict[str, Order] = field(default_factory=dict)
    reasons: list[str] = field(default_factory=list)
    remarks: list[str] = field(default_factory=list)
    signs: list[Sign] = field(default_factory=list)
    features: dict[str, Feature] = field(default_factory=dict)
    local: dict[str, list[float | None]] = field(default_factory=dict)
    error_map: ErrorMap | None = None
    known: str | None = None
    crash: str = ""
    journal: list[str] = field(default_factory=list)

    @property
    def deciding(self) -> list[str]:
        """The norms that decide the verdict."""
        return [norm for norm, order in self.orders.items() if order.decides]

    @property
    def local_orders(self) -> dict[str, float | None]:
        """The order of the largest error near every place over the last three judged levels it has.

        From the line through ln e against ln h; None with fewer than two, or where an error is zero.
        """
        spacing = [level.h if level.judged else math.nan for level in self.levels]
        return {place: line_order(spacing, errors) for place, errors in self.local.items()}

    def table(self, fmt: Format = "text", norms: list[str] | None = None) -> str:
        """Return errors and orders by level as "text", "markdown" or "latex".

        Parameters
        ----------
        fmt : str
            "text", "markdown" or "latex" (booktabs).
        norms : list of str, optional
            Columns; default: the deciding norms and those of max, L2, H1-semi that were measured.

        Raises
        ------
        RecordError
            If `fmt` or a norm is unknown.
        """
        if norms is None:
            usual: list[str] = [norm for norm in ("max", "L2", "H1-semi") if norm in self.orders]
            norms = list(dict.fromkeys(self.deciding + usual))
        return convergence_table(self.levels, self.orders, norms, fmt)

    def __str__(self) -> str:
        """Return solver, case, verdict and reasons on a few lines."""
        lines = [f"{self.solver} on {self.case_id}: {self.verdict}", *(f"  {r}" for r in self.reasons)]
        return "\n".join(lines)
