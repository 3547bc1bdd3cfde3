"""What is odd about the levels of a study besides their errors."""

from __future__ import annotations

import math
from collections.abc import Sequence

from laplace_verify.measure.results import Level
from laplace_verify.measure.smoothness import is_functional

__all__ = ["oddities", "sign_changes"]

MOVE_ORDER, MOVE_SLACK = 1.5, 0.2
NO_MOVE = 1e-9
LEFT_OUT_SLACK = 2.0


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


def oddities(levels: Sequence[Level]) -> tuple[list[str], list[str]]:
    """Return faults (each fails the study) and remarks on moved boundary and left-out sample points."""
    if len(levels) < 2:
        return [], []
    return _left_out(levels), _moves(levels)


def _moves(levels: Sequence[Level]) -> list[str]:
    """Remark points moved onto a curved piece by distances that shrink slower than h^1.5 (a chord: h^2)."""
    remarks = []
    first, last = levels[0], levels[-1]
    for piece, move in last.moves.items():
        start = first.moves.get(piece, 0.0)
        if not (move > NO_MOVE and start > NO_MOVE):
            continue
        order = math.log(start / move) / math.log(first.h / last.h)
        if order < MOVE_ORDER - MOVE_SLACK:
            remarks.append(
                f"points handed to piece {piece!r} lie off it by up to {move:.2g}, which shrinks like "
                f"h^{order:.1f} only: the solver's boundary does not follow the curve"
            )
    return remarks


def _left_out(levels: Sequence[Level]) -> list[str]:
    """Fail a share of sample points outside the mesh that does not shrink like h."""
    first, last = levels[0], levels[-1]
    allowed = LEFT_OUT_SLACK * max(first.left_out, 1e-6) * last.h / first.h
    if last.left_out <= max(allowed, 1e-9):
        return []
    return [
        f"the share of the shape outside the solver's mesh is {first.left_out:.2g} at size {first.size} and "
        f"{last.left_out:.2g} at size {last.size}: it must shrink like h: FAIL"
    ]
