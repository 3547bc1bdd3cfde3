"""How faults are put into a sample: one part of its scheme is exchanged, the rest stays as it is."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field, replace
from functools import partial
from typing import Any, Generic, Protocol, TypeVar

from laplace_verify.solvers.adapter import Adapter
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.samples.fault import Effect, Fault

__all__ = ["Seeds"]

S = TypeVar("S")
Part = TypeVar("Part", bound=Callable[..., Any])


class SolveWith(Protocol):
    """A solve function that takes its scheme by keyword."""

    def __call__(self, problem: Any, n: int, *, scheme: Any) -> Answer:
        """Solve with n cells along every side."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Seeds(Generic[S]):
    """Faults of one sample, collected as they are defined.

    Attributes
    ----------
    sample
        The sound solver.
    solve
        The function behind it, which takes a scheme.
    scheme
        The sound scheme, a dataclass of small functions.
    faults
        What was collected.
    """

    sample: Adapter
    solve: SolveWith
    scheme: S
    faults: dict[str, Fault] = field(default_factory=dict)

    def into(
        self,
        part: str,
        name: str,
        description: str,
        *,
        kind: str,
        suspects: tuple[str, ...],
        shown_by: tuple[str, ...],
        effect: Effect = "order",
    ) -> Callable[[Part], Part]:
        """Return a decorator: the function below it takes the place of `part` in the scheme."""

        def seed(function: Part) -> Part:
            scheme = replace(self.scheme, **{part: function})  # type: ignore[type-var]
            adapter = replace(
                self.sample,
                function=partial(self.solve, scheme=scheme),
                name=f"{self.sample.name}, fault: {name}",
            )
            if name in self.faults:
                raise ValueError(f"a fault named {name!r} exists already")
            self.faults[name] = Fault(
                description=description,
                adapter=adapter,
                sample=self.sample.name,
                kind=kind,
                effect=effect,
                suspects=suspects,
                shown_by=shown_by,
            )
            return function

        return seed
