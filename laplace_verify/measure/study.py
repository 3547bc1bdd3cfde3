"""A study: one solver on one case at rising sizes, measured against the exact solution and judged.

The criteria are fixed before the solver runs. Whatever a solver does (raise, return NaN or another shape,
never converge) ends in a verdict; only misuse by the caller raises.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from laplace_verify.errors import AdapterError, history
from laplace_verify.measure.accuracy import accuracy_remarks
from laplace_verify.measure.coverage import judge_coverage, settled_by_coverage
from laplace_verify.measure.criteria import expectations, for_computed, smoothness_of
from laplace_verify.measure.exactness import exactness_faults
from laplace_verify.measure.expected import Expectation
from laplace_verify.measure.features import features
from laplace_verify.measure.judge import combine, judge
from laplace_verify.measure.levels import check_budget, check_seed, check_sizes, default_sizes, further_sizes
from laplace_verify.measure.oddities import oddities, sign_changes
from laplace_verify.measure.refusal import refusal_study, said
from laplace_verify.measure.results import Level, Order, Study
from laplace_verify.measure.running import LevelResult, Runner, check_falling
from laplace_verify.measure.signs import Sign
from laplace_verify.measure.smoothness import is_functional
from laplace_verify.measure.tightening import iteration_remarks
from laplace_verify.measure.verdict import Verdict
from laplace_verify.problems import Case, Problem, as_case
from laplace_verify.solvers import Adapter, Refused

if TYPE_CHECKING:
    from typing import Any

__all__ = ["study"]


def study(
    solver: Adapter,
    case: Case | Problem,
    sizes: Sequence[int] | None = None,
    seed: int = 0,
    max_points: int | None = None,
    budget: float | None = None,
) -> Study:
    """Run `solver` on `case` at several sizes and judge the observed order of its errors.

    Parameters
    ----------
    solver : Adapter
        What `adapt` returns.
    case : Case
        From the catalogue, or made by `case`. An ill-posed one, or an ill-posed `problem`, has no order to
        observe: PASS if the solver raises `Refused` at every size, FAIL if it answers.
    sizes : sequence of int, optional
        Three or more, increasing; four are needed for a PASS. Default: the solver's own, else 8 16 32 64 in
        one and two dimensions and 6 9 13 19 28 in three. A few more are added to the default
        if the verdict is still open and the work stays bounded; the journal tells which.
    seed : int
        Seed of the sample points and of solvers that take one. Same seed, same numbers.
    max_points : int, optional
        Cap on the sample points of a level; default 20 000, 200 000, 400 000 in one, two, three dimensions.
    budget : float, optional
        Seconds that sizes added while the verdict is open may take. Without it one or two are added to
        default sizes only, bounded by their unknowns, so that what is run does not depend on the machine.

    Returns
    -------
    Study
        Levels, orders, verdict, reasons and remarks. Errors are in the units of u (times lengths, see
        `Level`).

    Raises
    ------
    AdapterError
        If `solver` is no adapter, the sizes are not three or more, increasing, or the seed is negative.
    ProblemError
        If `case` is neither a case nor an ill-posed problem.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> from laplace_verify.geometry import Rectangle
    >>> from laplace_verify.problems import case
    >>> from laplace_verify.solvers import Answer, adapt
    >>> @adapt(kind="finite difference", order=2)
    ... def answer_of_order_two(problem, n):
    ...     return Answer(evaluate=lambda x: x[:, 0] * (1 + 1 / n**2), h=1 / n)
    >>> found = study(answer_of_order_two, case(Rectangle((0, 0), (2, 1)), {}, fields.affine((1, 0))))
    >>> str(found.verdict), round(found.orders["max"].observed, 2)
    ('PASS', 2.0)
    """
    _check_arguments(solver, max_points)
    check_budget(budget)
    case = as_case(case)
    check_seed(seed)
    given = check_sizes(sizes) if sizes is not None else solver.sizes
    planned = given if given is not None else default_sizes(case.dim)
    if case.problem.ill_posed is not None:
        return refusal_study(solver, case, planned, seed)
    run = _Run(
        solver, case, Runner(solver, case, seed, max_points), list(planned), expectations(solver, case)
    )
    reason = solver.refuses(case.problem)
    if reason is not None:
        return run.result(Verdict.NOT_APPLICABLE, [reason], [])
    try:
        for size in planned:
            run.add(size)
    except (Exception, SystemExit) as cause:
        return run.broken(size, cause)
    if given is None or budget is not None:
        run.refine(budget)
    run.signs += iteration_remarks(run.runner, run.levels)
    return run.judged()


@dataclass(slots=True, eq=False)
class _Run:
    """The state of a study while it runs."""

    solver: Adapter
    case: Case
    runner: Runner
    sizes: list[int]
    criteria: Mapping[str, Expectation]
    results: list[LevelResult] = field(default_factory=list)
    remarks: list[str] = field(default_factory=list)
    signs: list[Sign] = field(default_factory=list)
    journal: list[str] = field(default_factory=list)

    @property
    def levels(self) -> list[Level]:
        """The levels so far, coarsest first."""
        return [result.level for result in self.results]

    def add(self, size: int) -> None:
        """Run one more size."""
        result = self.runner.run(size)
        check_falling(sorted([*self.levels, result.level], key=lambda level: level.size))
        self.results = sorted([*self.results, result], key=lambda r: r.level.size)

    def refine(self, budget: float | None = None) -> None:
        """Add sizes while a norm that decides is open, a finer level may settle it, and the work is bounded.

        Every decision is taken once and goes into the journal.
        """
        rounds, spent = 0, 0.0
        while True:
            verdict, _, _ = combine(orders := self.orders())
            open_norms = [
                norm
                for norm, order in orders.items()
                if order.decides and order.finer and not is_functional(norm)
            ]
            left = None if budget is None else budget - spent
            further = further_sizes(self.levels, self.case.dim, rounds, self.case.regularity.scale, left)
            if verdict is Verdict.FAIL or not open_norms or not further:
                break
            rounds += 1
            ran, means = [level.size for level in self.levels], "" if left is None else f", {left:.3g} s left"
            self.journal.append(
                f"after sizes {_listed(ran)} open in {', '.join(open_norms)}{means}: {_listed(further)} added"
            )
            try:
                for size in further:
                    self.add(size)
                    spent += next(level.seconds for level in self.levels if level.size == size)
            except (Exception, SystemExit) as cause:
                self.remarks.append(
                    f"size {size} was tried beyond the planned sizes and broke: {said(cause)}"
                )
                break
        added = [level.size for level in self.levels if level.size not in self.sizes]
        if added:
            self.remarks.append(f"the planned sizes left the verdict open; added: {_listed(added)}")
        self.sizes = [level.size for level in self.levels]

    def orders(self) -> dict[str, Order]:
        """Judge the levels so far."""
        mixed = sign_changes([result.signed for result in self.results if result.level.judged])
        computed = {norm for result in self.results for norm in result.computed}
        orders = judge(
            self.levels,
            for_computed(self.criteria, computed),
            kind=self.solver.kind,
            error_floor=self.solver.error_floor,
            mixed_signs=mixed,
        )
        return settled_by_coverage(orders, self.levels)

    def judged(self) -> Study:
        """Return the study with its verdict."""
        orders = self.orders()
        verdict, reasons, remarks = combine(orders)
        found = oddities(self.levels, self.case.dim, self.solver.kind), judge_coverage(self.levels)
        faults, odd = (a + b for a, b in zip(*found, strict=True))
        faults += exactness_faults(self.solver, self.case, self.levels)
        if faults:
            verdict, reasons = Verdict.FAIL, [*reasons, *(fault.text for fault in faults)]
        odd = [*accuracy_remarks(self.levels, smoothness_of(self.case)), *odd]
        odd += dict.fromkeys(sign for result in self.results for sign in result.signs)
        remarks += [sign.text for sign in odd]
        remarks += dict.fromkeys(remark for result in self.results for remark in result.remarks)
        remarks += [*self.remarks, *(sign.text for sign in self.signs)]
        self.signs = [*_floors(orders, [*reasons, *remarks]), *faults, *odd, *self.signs]
        return self.result(verdict, reasons, remarks, orders)

    def broken(self, size: int, cause: BaseException) -> Study:
        """Return the study of a solver that broke, with the levels it finished."""
        if isinstance(cause, Refused) and not self.results:
            return self.declined(cause)
        if isinstance(cause, Refused):
            reason = f"size {size}: the solver declined a problem that it has solved at other sizes: {cause}"
        else:
            reason = f"size {size}: {said(cause)}"
        return self.result(Verdict.ERROR, [reason], self.remarks, self.orders(), crash=history(cause))

    def declined(self, cause: Refused) -> Study:
        """Return the study of a solver that refused this well-posed problem from the start.

        A solver that claims to tell ill-posed problems from others and takes a sound one for ill-posed is
        wrong; else one that refuses everything would pass as a solver that checks.
        """
        if cause.beyond or not self.solver.checks_well_posedness:
            return self.result(Verdict.NOT_APPLICABLE, [f"the solver declined: {cause}"], self.remarks)
        reason = (
            "the solver declares that it checks whether problems are well posed, and refused this one, which "
            f"has a solution: {cause} (if the problem is merely beyond the solver: raise "
            "lv.Refused(reason, beyond=True))"
        )
        return self.result(Verdict.FAIL, [reason], self.remarks)

    def result(
        self,
        verdict: Verdict,
        reasons: list[str],
        remarks: list[str],
        orders: dict[str, Order] | None = None,
        crash: str = "",
    ) -> Study:
        """Assemble a Study."""
        known = self.solver.known.get(self.case.id)
        if known is not None:
            remarks = [f"known deviation, says its author: {known}", *remarks]
            if verdict is Verdict.PASS:
                remarks.insert(0, "passes, though declared a known deviation: remove the declaration")
        last: Any = self.results[-1] if self.results else None
        places = list(dict.fromkeys(place for result in self.results for place in result.local))
        return Study(
            solver=self.solver.name,
            case_id=self.case.id,
            case_title=self.case.title,
            verdict=verdict,
            sizes=self.sizes,
            seed=self.runner.seed,
            levels=self.levels,
            orders=orders or {},
            reasons=reasons,
            remarks=remarks,
            signs=self.signs,
            features=features(self.runner.seen, self.runner.exact),
            local={place: [result.local.get(place) for result in self.results] for place in places},
            error_map=last.error_map if last else None,
            known=known,
            crash=crash,
            journal=self.journal,
        )


def _floors(orders: Mapping[str, Order], said: Sequence[str]) -> list[Sign]:
    """Return the floors at which norms stay that the reasons or remarks speak of."""
    return [
        Sign(kind=order.floor, text=order.note)
        for order in orders.values()
        if order.floor is not None and order.note in said
    ]


def _check_arguments(solver: object, max_points: int | None) -> None:
    """Refuse what is no adapter, or no number of points."""
    if not isinstance(solver, Adapter):
        raise AdapterError(
            f"solver must be an adapter, got {type(solver).__name__}; wrap the function first: "
            'lv.adapt(solve, name="...", kind="finite difference", order=2)'
        )
    if max_points is not None and not max_points >= 100:
        raise AdapterError(f"max_points must be at least 100, got {max_points!r}")


def _listed(sizes: Sequence[int]) -> str:
    """Return sizes as words."""
    return ", ".join(map(str, sizes))
