"""What a seeded fault is: a coding mistake in a sample solver, with what is known about it."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, TypeAlias

from laplace_verify.solvers.adapter import Adapter

__all__ = ["Effect", "Fault"]

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
