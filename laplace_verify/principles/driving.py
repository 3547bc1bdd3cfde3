"""Hypothesis at the wheel: draw problems, find one that breaks the law, shrink it, and say what was found.

Everything is bounded and repeatable. `EXAMPLES` problems are drawn unless asked otherwise; a solver is called
at most `CALLS` times as often, shrinking included; past that bound what is left to shrink counts as sound.
Verdicts are remembered by the code of the problem, so that Hypothesis, which tries a failure again, meets the
same verdict.
"""

from __future__ import annotations

import os
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from typing import Any

import hypothesis
from hypothesis import HealthCheck, Phase, Verbosity, configuration, given

from laplace_verify.principles.law import Finding, Law, NoValuesError, OutOfCallsError, Trial
from laplace_verify.principles.posed import Posed
from laplace_verify.solvers import Adapter, Refused

__all__ = ["CALLS", "EXAMPLES", "BrokenLawError", "BrokenSolverError", "Failure", "Search"]

EXAMPLES = 10
CALLS = 16  # a problem drawn

SETTINGS = hypothesis.settings(
    derandomize=False,  # the seed decides, whatever profile is loaded
    database=None,
    deadline=None,
    phases=(Phase.generate, Phase.shrink),
    report_multiple_bugs=False,
    print_blob=False,
    verbosity=Verbosity.quiet,
    suppress_health_check=list(HealthCheck),  # slow solvers are no failure of health
)


class BrokenLawError(Exception):
    """Tells Hypothesis that a problem breaks the law; never leaves this room."""

    def __init__(self, trial: Trial, finding: Finding) -> None:
        super().__init__()
        self.trial, self.finding = trial, finding


class BrokenSolverError(Exception):
    """Tells Hypothesis that the solver raises on a problem, or returns what cannot be measured.

    A class of its own: while one kind of failure is shrunk, Hypothesis does not slip to the other.
    """

    def __init__(self, trial: Trial, cause: Exception) -> None:
        super().__init__()
        self.trial, self.cause = trial, cause


Failure = BrokenLawError | BrokenSolverError


@dataclass(slots=True, kw_only=True, eq=False)
class Search:
    """One law tried on one solver with one seed.

    Attributes
    ----------
    worst : Finding or None
        The kept law's largest violation in units of its tolerance.
    tried, refused : int
        Problems tried, and problems that the solver declined.
    """

    law: Law
    solver: Adapter
    seed: int
    examples: int = EXAMPLES
    calls: int = 0
    tried: int = 0
    refused: int = 0
    refusal: str = ""
    unseen: str = ""
    worst: Finding | None = None
    known: dict[str, Failure | None] = field(default_factory=dict)

    @property
    def most_calls(self) -> int:
        """The bound on the number of solves."""
        return CALLS * self.examples

    def run(self) -> Failure | None:
        """Return the simplest failure found, or None."""

        @hypothesis.seed(self.seed)
        @hypothesis.settings(SETTINGS, max_examples=self.examples)
        @given(posed=self.law.problems(self.solver))
        def attempt(posed: Posed) -> None:
            failure = self._verdict(posed)
            if failure is not None:
                raise failure.with_traceback(None)

        try:
            with _without_folder():
                attempt()
        except (BrokenLawError, BrokenSolverError) as failure:
            return failure
        return None

    def trial(self, posed: Posed) -> Trial:
        """Return a fresh trial of a problem."""
        return Trial.of(posed, self.solver, self.seed, self._count)

    def _verdict(self, posed: Posed) -> Failure | None:
        """Return what is wrong on a problem, from memory if it was tried before."""
        key = posed.code()
        if key not in self.known:
            if self.calls >= self.most_calls:
                return None
            self.known[key] = self._tried(posed)
        return self.known[key]

    def _tried(self, posed: Posed) -> Failure | None:
        """Try a problem."""
        trial = self.trial(posed)
        try:
            finding = self.law.judge(trial)
        except OutOfCallsError:
            return None
        except NoValuesError as cause:
            self.unseen = str(cause)
            return None
        except Refused as cause:
            self.refused, self.refusal = self.refused + 1, cause.reason
            return None
        except Exception as cause:
            return BrokenSolverError(trial, cause)
        self.tried += 1
        if finding.broken:
            return BrokenLawError(trial, finding)
        if self.worst is None or finding.severity > self.worst.severity:
            self.worst = finding
        return None

    def _count(self) -> None:
        """Count a call of the solver."""
        if self.calls >= self.most_calls:
            raise OutOfCallsError
        self.calls += 1


@contextmanager
def _without_folder() -> Iterator[None]:
    """Keep Hypothesis from writing a cache into the current folder; what it cannot write it goes without."""
    place = configuration.storage_directory(intent_to_write=False)
    before: Any = getattr(place, "home_directory", place)  # older versions return the path itself
    configuration.set_hypothesis_home_dir(os.devnull)
    try:
        yield
    finally:
        configuration.set_hypothesis_home_dir(before)
