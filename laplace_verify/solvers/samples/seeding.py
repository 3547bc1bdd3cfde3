"""How faults are put into a sample: one part of its scheme is exchanged, the rest stays as it is.

`Seeds.add` takes a changed scheme, `Seeds.into` decorates the function that is exchanged.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field, replace
from functools import partial
from typing import Any, Generic, TypeVar

from laplace_verify.solvers.adapter import Adapter
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.samples.fault import Effect, Fault

__all__ = ["Seeds"]

S = TypeVar("S")
Part = TypeVar("Part", bound=Callable[..., Any])


@dataclass(frozen=True, slots=True, kw_only=True)
class Seeds(Generic[S]):
    """Faults of one sample, collected as they are defined.

    Attributes
    ----------
    sample
        The sound solver.
    solve
        The function behind it, which takes a scheme by the keyword `scheme`.
    scheme
        The sound scheme, a dataclass of small functions.
    faults
        What was collected.
    """

    sample: Adapter
    solve: Callable[..., Answer]
    scheme: S
    faults: dict[str, Fault] = field(default_factory=dict)

    def add(
        self,
        name: str,
        description: str,
        scheme: S,
        *,
        kind: str,
        suspects: tuple[str, ...],
        shown_by: tuple[str, ...],
        effect: Effect = "order",
    ) -> None:
        """Add the fault of solving by `scheme`; `Fault` explains the rest."""
        if name in self.faults:
            raise ValueError(f"a fault named {name!r} exists already")
        self.faults[name] = Fault(
            description=description,
            adapter=replace(
                self.sample,
                function=partial(self.solve, scheme=scheme),
                name=f"{self.sample.name}, fault: {name}",
            ),
            sample=self.sample.name,
            kind=kind,
            effect=effect,
            suspects=suspects,
            shown_by=shown_by,
        )

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
        """Return a decorator that adds a fault: the function below it takes the place of `part`."""

        def seed(function: Part) -> Part:
            scheme = replace(self.scheme, **{part: function})  # type: ignore[type-var]
            self.add(
                name, description, scheme, kind=kind, suspects=suspects, shown_by=shown_by, effect=effect
            )
            return function

        return seed
