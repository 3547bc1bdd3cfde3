"""What a seeded fault is: a coding mistake in a sample solver, with what is known about it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import Literal, TypeAlias

from laplace_verify.solvers.adapter import Adapter
from laplace_verify.solvers.answer import Answer

__all__ = ["Effect", "Fault", "seeded"]

Effect: TypeAlias = Literal["order", "accuracy", "harmless"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Fault:
    """A mistake and the solver that makes it.

    Attributes
    ----------
    description
        What is wrong, in a sentence.
    adapter
        The faulty solver; it declares what the sound one does.
    sample
        The name of the sound solver.
    kind
        The kind of mistake, such as "flux sign" or "low-order closure".
    effect
        "order": convergence is slower than declared or goes to a wrong limit; "accuracy": the order holds,
        with a larger error or down to a floor; "harmless": another way of doing it right.
    suspects
        Words of which the first suspect of a diagnosis should contain one.
    shown_by
        Cases of the catalogue that exercise the mistake; the sound solver passes them.
    """

    description: str
    adapter: Adapter
    sample: str
    kind: str
    effect: Effect
    suspects: tuple[str, ...]
    shown_by: tuple[str, ...]


def seeded(
    sound: Adapter,
    solve: Callable[..., Answer],
    name: str,
    description: str,
    *,
    kind: str,
    suspects: tuple[str, ...],
    shown_by: tuple[str, ...],
    effect: Effect = "order",
) -> tuple[str, Fault]:
    """Return name and fault of a solver that declares what the sound one does and solves otherwise."""
    return name, Fault(
        description=description,
        adapter=replace(sound, function=solve, name=f"{sound.name}, fault: {name}"),
        sample=sound.name,
        kind=kind,
        effect=effect,
        suspects=suspects,
        shown_by=shown_by,
    )
