"""What is odd about the levels of a study besides their errors."""

from __future__ import annotations

import math
from collections.abc import Sequence
from itertools import pairwise

from laplace_verify.measure.results import Level
from laplace_verify.measure.series import ROUND_OFF
from laplace_verify.measure.signs import Sign
from laplace_verify.measure.smoothness import is_functional

__all__ = ["oddities", "sign_changes"]

MOVE_ORDER, MOVE_SLACK = 1.5, 0.2
NO_MOVE = 1e-9
LEFT_OUT_SLACK = 2.0
UNEVEN, NODES = 0.1, 2.0
WELL_BELOW = 0.1


def sign_changes(signed: Sequence[dict[str, float]]) -> dict[str, str]:
    """Return functional -> why its order means nothing, for those whose signed error changes sign."""
    names = list(dict.fromkeys(norm for level in signed for norm in level if is_functional(norm)))
    found = {}
    for norm in names:
        values = [level[norm] for level in signed if norm in level]
        if not (all(value > 0 for value in values) or all(value < 0 for value in values)):
            found[norm] = (
                "the signed error passes through zero, so no order can be read off; it does not decide"
            )
    return found


def oddities(levels: Sequence[Level], dim: int = 2, kind: str = "other") -> tuple[list[Sign], list[Sign]]:
    """Return faults (each fails the study) and remarks.

    A fault is a share of sample points outside the mesh that does not shrink. Remarked are points moved onto
    the boundary by distances that do not shrink, a refinement whose ratio from h differs from that of the
    unknowns, and residuals that are not well below the error.
    """
    if len(levels) < 2:
        return [], []
    return _left_out(levels), [*_moves(levels), *_uneven(levels, dim, kind), *_unsolved(levels)]


def _uneven(levels: Sequence[Level], dim: int, kind: str) -> list[Sign]:
    """Remark refinement ratios from h and from the unknowns that differ by more than node counts explain."""
    if kind == "stochastic":
        return []
    powers = dim - 1 if kind == "boundary element" and dim > 1 else dim
    for coarse, fine in pairwise(levels):
        if not (coarse.unknowns > 0 and fine.unknowns > coarse.unknowns):
            continue
        from_h = coarse.h / fine.h
        from_unknowns = (fine.unknowns / coarse.unknowns) ** (1 / powers)
        slack = UNEVEN + NODES / coarse.unknowns ** (1 / powers)  # (n + 1)^d nodes against n^d cells
        if abs(math.log(from_h / from_unknowns)) > slack:
            text = (
                f"the refinement is not uniform: from size {coarse.size} to {fine.size} h falls by "
                f"{from_h:.3g}, the unknowns say {from_unknowns:.3g}; orders are taken in h"
            )
            return [Sign(kind="uneven refinement", text=text)]
    return []


def _unsolved(levels: Sequence[Level]) -> list[Sign]:
    """Remark reported residuals above round-off that are not well below the relative error."""
    for level in levels:
        error = level.relative.get("L2", level.relative.get("max"))
        if level.residual is None or error is None or level.residual <= ROUND_OFF:
            continue
        if level.residual > WELL_BELOW * error > 0:
            text = (
                f"size {level.size}: the reported residual {level.residual:.1e} is not well below the "
                f"relative error {error:.1e}: part of the error may be the iteration's"
            )
            return [Sign(kind="large residual", text=text)]
    return []


def _moves(levels: Sequence[Level]) -> list[Sign]:
    """Remark points moved onto a curved piece by distances that shrink slower than h^1.5 (a chord: h^2)."""
    remarks = []
    first, last = levels[0], levels[-1]
    for piece, move in last.moves.items():
        start = first.moves.get(piece, 0.0)
        if not (move > NO_MOVE and start > NO_MOVE):
            continue
        order = math.log(start / move) / math.log(first.h / last.h)
        if order < MOVE_ORDER - MOVE_SLACK:
            text = (
                f"points handed to piece {piece!r} lie off it by up to {move:.2g}, which shrinks like "
                f"h^{order:.1f} only: the solver's boundary does not follow the curve"
            )
            remarks.append(Sign(kind="off the curve", text=text))
    return remarks


def _left_out(levels: Sequence[Level]) -> list[Sign]:
    """Fail a share of sample points outside the mesh that does not shrink like h."""
    first, last = levels[0], levels[-1]
    allowed = LEFT_OUT_SLACK * max(first.left_out, 1e-6) * last.h / first.h
    if last.left_out <= max(allowed, 1e-9):
        return []
    text = (
        f"the share of the shape outside the solver's mesh is {first.left_out:.2g} at size {first.size} and "
        f"{last.left_out:.2g} at size {last.size}: it must shrink like h: FAIL"
    )
    return [Sign(kind="outside the mesh", text=text)]
