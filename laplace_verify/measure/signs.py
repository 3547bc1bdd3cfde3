"""Signs of trouble: what is said of a study beside its orders, under names that a program can compare.

The words of a remark or reason may change; its kind does not, so that whatever weighs remarks goes by kinds.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, TypeAlias

__all__ = ["FloorKind", "Sign", "SignKind"]

FloorKind: TypeAlias = Literal["round-off floor", "single-precision floor", "loose floor"]
SignKind: TypeAlias = (
    FloorKind
    | Literal[
        "single-precision values",  # all that are handed back are numbers of 32 bits
        "early stop",  # a tighter tolerance changes the answer
        "breaks when tightened",  # with a tighter tolerance
        "large residual",  # the reported residual is not well below the error
        "stuck gradients",  # they stay wrong while the values converge
        "large error constant",  # far above that of interpolation
        "limited between nodes",  # the nodes converge an order faster than what lies between them
        "wrong standard errors",  # they do not fit the errors
        "off the curve",  # the solver's boundary does not follow a curved piece
        "outside the mesh",  # a share of the shape that does not shrink is missing
        "inexact polynomial",  # one that the solver promises to reproduce
        "uneven refinement",  # h and the unknowns tell two ratios
    ]
)


@dataclass(frozen=True, slots=True, kw_only=True)
class Sign:
    """A remark or reason of a study: its kind and its words."""

    kind: SignKind
    text: str
