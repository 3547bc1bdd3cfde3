"""What a law is: a statement about every solution, problems to try it on, a measure of how it is broken."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from hypothesis import strategies as st

from laplace_verify.arrays import Array
from laplace_verify.principles.posed import Posed
from laplace_verify.problems import Problem
from laplace_verify.solvers import Adapter, Answer
from laplace_verify.solvers.spacing import spacing

__all__ = ["Finding", "Law", "NoValuesError", "OutOfCallsError", "Trial", "round_off"]

ROUND_OFF = (
    1e-9  # relative to the largest boundary value: rounding of a direct solver, with room for conditioning
)
FLOORS = 10.0  # an error declared as a floor may show up as that many times itself in a difference of values
SIGMAS = 8.0  # of a stochastic solver's own standard error: hundreds of values are looked at


class NoValuesError(Exception):
    """The answer lacks what a law needs to judge it."""


class OutOfCallsError(Exception):
    """The bound on the number of solver calls is reached."""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Finding:
    """What a law found on one problem.

    Attributes
    ----------
    violation, tolerance : float
        Relative to the largest boundary value; the law is kept if violation <= tolerance (NaN breaks it).
    sizes : tuple of int
        Resolution numbers solved with; the violation belongs to the last.
    history : tuple of float
        Violations, size by size.
    points : Array
        Where, shape (m, d).
    words : str
        What was seen there.
    body : tuple of str
        Lines of Python that compute the violation from `problem`, `answer` and, if there is one, `exact`;
        the last is an expression.
    rule : str
        What the violation is held to, in words; by default round-off at one size, vanishing at several.
    """

    violation: float
    tolerance: float
    sizes: tuple[int, ...]
    history: tuple[float, ...]
    points: Array
    words: str
    body: tuple[str, ...]
    rule: str = ""

    @property
    def broken(self) -> bool:
        """Whether the law is broken; a violation that is no number breaks it."""
        return not self.violation <= self.tolerance

    @property
    def severity(self) -> float:
        """The violation in units of the tolerance."""
        return self.violation / self.tolerance if np.isfinite(self.violation) else np.inf


@dataclass(slots=True, kw_only=True, eq=False)
class Trial:
    """One drawn problem given to one solver: answers by size, each solved once."""

    solver: Adapter
    posed: Posed
    problem: Problem
    seed: int
    sizes: tuple[int, ...]
    may_call: Callable[[], None]  # counts; raises OutOfCallsError
    answers: dict[int, Answer] = field(default_factory=dict)
    asked: dict[int, Array] = field(default_factory=dict)  # points handed over with each size, if any
    companions: dict[str, Trial] = field(default_factory=dict)  # of the problems beside it

    @classmethod
    def of(cls, posed: Posed, solver: Adapter, seed: int, may_call: Callable[[], None]) -> Trial:
        """Return a fresh trial of a problem and of those beside it."""
        problem = posed.problem()
        return cls(
            solver=solver,
            posed=posed,
            problem=problem,
            seed=seed,
            sizes=trial_sizes(solver, problem.dim),
            may_call=may_call,
            companions={name: cls.of(other, solver, seed, may_call) for name, other in posed.beside.items()},
        )

    def answer(self, size: int, wanted: Array | None = None) -> Answer:
        """Solve with a resolution number; the same size is solved only once."""
        if size not in self.answers:
            self.answers[size] = self.fresh_answer(size, wanted)
        return self.answers[size]

    def fresh_answer(self, size: int, wanted: Array | None = None, **keywords: Any) -> Answer:
        """Solve, whether or not the size was solved before; keywords as in `Adapter.solve`."""
        self.may_call()
        if wanted is not None:
            self.asked.setdefault(size, wanted)
        answer = self.solver.solve(self.problem, size, wanted, seed=self.seed, **keywords)
        if self.solver.kind == "stochastic" and answer.standard_error is None:
            raise NoValuesError("without a standard_error chance and error cannot be told apart")
        return answer

    def call(
        self, problem: str = "problem", size: int | str = "n", wanted: str = "wanted", more: str = ""
    ) -> str:
        """Return Python that solves again; points are handed over to solvers that take them only."""
        points = f", {wanted}" if self.solver.takes("wanted") else ""
        return f"solver.solve({problem}, {size}{points}, seed={self.seed}{more})"

    def spacing(self, size: int) -> float:
        """Return h of the answer of a size."""
        return spacing(self.answers[size], self.problem, self.solver.kind, size).h

    def noise(self, size: int) -> float:
        """Return what chance may add to a violation, from the solver's own standard error, or 0.

        Problems beside it add theirs, each relative to its own largest boundary value.
        """
        beside = sum(other.noise(size) for other in self.companions.values())
        error = self.answers[size].standard_error if size in self.answers else None
        return beside + (0.0 if error is None else SIGMAS * float(np.max(error)) / self.posed.size)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Law:
    """A law of harmonic functions as a check on a solver.

    Attributes
    ----------
    name : str
        In plain words; the key in `LAWS`.
    statement : str
        The law in one sentence.
    inapplicable : function of an adapter
        Why the law cannot be tried within the declared capabilities, or None.
    problems : function of an adapter
        Strategy for problems to try it on.
    judge : function of a trial
        Measures how far the law is broken.
    """

    name: str
    statement: str
    inapplicable: Callable[[Adapter], str | None]
    problems: Callable[[Adapter], st.SearchStrategy[Posed]]
    judge: Callable[[Trial], Finding]


def round_off(solver: Adapter) -> float:
    """Return the relative violation that rounding or the declared floor may cause: 1e-9 + 10 floors."""
    return ROUND_OFF + FLOORS * (solver.error_floor or 0.0)


def trial_sizes(solver: Adapter, dim: int) -> tuple[int, ...]:
    """Return three sizes: the solver's first, each next about twice as large in the plane if it has such.

    Without declared sizes 8 16 32, in space 6 9 13.
    """
    declared: Sequence[int] = solver.sizes or ((6, 9, 13) if dim == 3 else (8, 16, 32))
    chosen = [declared[0]]
    for size in declared:
        if size >= (1 if dim == 3 else 2) * chosen[-1] and size > chosen[-1]:
            chosen.append(size)
    return tuple(chosen[:3]) if len(chosen) >= 3 else tuple(declared[:3])
