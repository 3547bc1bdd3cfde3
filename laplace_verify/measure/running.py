"""One level of a study: solve, measure, keep plain numbers."""

from __future__ import annotations

import math
import time
from dataclasses import dataclass, field
from itertools import pairwise
from typing import TYPE_CHECKING

from laplace_verify.errors import AnswerError, nearest_names
from laplace_verify.measure.accuracy import interpolation_error, precision_remarks
from laplace_verify.measure.coverage import coverage_of
from laplace_verify.measure.criteria import LEVEL
from laplace_verify.measure.exact import Exact
from laplace_verify.measure.exactness import nodal_error
from laplace_verify.measure.functionals import ExactFluxes, Functionals, measure_functionals
from laplace_verify.measure.norms import Measured, Sample, measure_norms, sample_answer, sharpened
from laplace_verify.measure.places import error_map, local_errors
from laplace_verify.measure.results import ErrorMap, Level
from laplace_verify.measure.sampling import level_generator
from laplace_verify.measure.series import TOO_COARSE
from laplace_verify.measure.signs import Sign
from laplace_verify.measure.windows import through_window
from laplace_verify.solvers.spacing import spacing

if TYPE_CHECKING:
    from laplace_verify.problems import Case
    from laplace_verify.solvers import Adapter, Answer

__all__ = ["LevelResult", "Runner", "check_falling"]

MOST_POINTS = {1: 20_000, 2: 200_000, 3: 400_000}
WANTED = 1000  # points offered to a solver that must know beforehand where it will be asked
ROUNDING = 1e-9


@dataclass(frozen=True, slots=True, kw_only=True)
class LevelResult:
    """A level with what only the study needs: signed functionals, which of them are computed here, places."""

    level: Level
    signed: dict[str, float]
    computed: frozenset[str]
    local: dict[str, float | None]
    error_map: ErrorMap
    remarks: tuple[str, ...]
    signs: tuple[Sign, ...]


@dataclass(slots=True, eq=False)
class Runner:
    """Runs levels of one solver on one case; the exact solution is kept between them."""

    solver: Adapter
    case: Case
    seed: int
    max_points: int | None = None
    seen: Case = field(init=False)  # an unbounded case through its window
    exact: Exact = field(init=False)
    fluxes: ExactFluxes = field(init=False)

    def __post_init__(self) -> None:
        """Prepare the exact solution."""
        self.seen = through_window(self.case)
        self.exact = Exact(self.seen)
        self.fluxes = ExactFluxes(self.seen, self.exact)

    def run(self, size: int, tolerance: float | None = None) -> LevelResult:
        """Solve and measure one size; whatever the solver raises passes through.

        `tolerance` reaches solvers that take one; by default they keep their own.
        """
        generator = level_generator(self.seed, self.case.id, size)
        shape, seen = self.seen.problem.shape, self.seen.problem
        most = self.max_points or MOST_POINTS[shape.dim]
        wanted = shape.sample(min(WANTED, most), seed=int(generator.integers(2**31)))
        problem, log = self.case.problem.watched()
        start = time.perf_counter()
        answer = self.solver.solve(problem, size, wanted, seed=self.seed, tolerance=tolerance)
        seconds = time.perf_counter() - start
        h = self._spacing(answer, size)
        singular = self.case.regularity.singular_points
        sample = sample_answer(answer, seen, singular, h, generator, most)
        sample = sharpened(sample, answer, self.exact, seen, h, generator)
        measured = measure_norms(sample, self.exact, seen, self.solver.clearance)
        found = self._functionals(answer, measured, sample, h)
        note, judged = self._judged(h)
        level = Level(
            size=size, h=h, unknowns=answer.degrees_of_freedom or 0, seconds=seconds,
            errors=measured.errors | found.errors, relative=measured.relative | found.relative,
            judged=judged, note=note, moves=dict(log.largest), left_out=measured.left_out,
            coverage=coverage_of(answer, self.exact, measured),
            residual=answer.residual, interpolation=interpolation_error(answer, self.exact),
            nodal=nodal_error(answer, self.exact, measured),
        )  # fmt: skip
        return LevelResult(
            level=level,
            signed=found.signed,
            computed=frozenset(found.computed),
            local=local_errors(seen, measured.points, measured.signed, h, generator),
            error_map=error_map(size, measured.points, measured.signed, generator),
            remarks=answer.remarks(self.case.problem) + self._unknown(answer) + self._near(measured, size),
            signs=tuple(precision_remarks(answer, self.exact)),
        )

    def _spacing(self, answer: Answer, size: int) -> float:
        """Return h; for stochastic solvers 1/samples (n if they report none), in which their order is 1/2."""
        if self.solver.kind == "stochastic":
            return 1.0 / (answer.samples or size)
        return float(spacing(answer, self.case.problem, self.solver.kind, size).h)

    def _judged(self, h: float) -> tuple[str, bool]:
        """Return a note and whether the level counts: it must resolve the smallest length of the case."""
        scale = self.case.regularity.scale
        by_n = self.solver.formal_order("L2") == "exponential" or self.solver.kind == "stochastic"
        if by_n or not math.isfinite(scale) or h <= scale / 2 * (1 + ROUNDING):
            return "", True
        return f"{TOO_COARSE}: h = {h:.3g} exceeds half the smallest length {scale:.3g}", False

    def _functionals(self, answer: Answer, measured: Measured, sample: Sample, h: float) -> Functionals:
        """Return errors, relative and signed ones, of everything but the interior norms."""
        found = measure_functionals(answer, self.seen, self.exact, self.fluxes, h, measured, sample)
        if self.case.problem.constant is not None:
            found.add(LEVEL, measured.shift, measured.scale)
        return found

    def _unknown(self, answer: Answer) -> tuple[str, ...]:
        """Return a remark on quantities that the case does not have."""
        known = self.case.quantities
        return tuple(
            f"quantities: the case has no {name!r}, so it is not judged; "
            f"{nearest_names(name, known) if known else 'it has none'}"
            for name in answer.quantities or {}
            if name not in known
        )

    def _near(self, measured: Measured, size: int) -> tuple[str, ...]:
        """Return a remark on the points that the declared clearance keeps out of the norms."""
        if measured.near is None or not self.solver.clearance > 0:
            return ()
        return (
            f"size {size}: largest error {measured.near:.2e} at points nearer to the boundary than the "
            f"declared clearance, which do not decide",
        )


def check_falling(levels: list[Level]) -> None:
    """Refuse spacings that do not fall from size to size.

    Raises
    ------
    AnswerError
        Naming the two sizes.
    """
    for coarse, fine in pairwise(levels):
        if not fine.h < coarse.h:
            raise AnswerError(
                f"h must fall from size to size, but it is {coarse.h:.4g} at size {coarse.size} and "
                f"{fine.h:.4g} at size {fine.size}"
            )
