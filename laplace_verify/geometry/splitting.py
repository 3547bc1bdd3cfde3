"""Cutting the pieces of a boundary at fractions of their length, and the angles at which pieces meet."""

from __future__ import annotations

import math
from collections.abc import Iterator, Mapping, Sequence
from itertools import pairwise

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.errors import GeometryError, nearest_names
from laplace_verify.geometry.boundary import Boundary, Curve

__all__ = ["check_fractions", "check_names", "junction_openings", "split_piece"]

SHORTEST = 1e-6  # least length of a part, relative to the whole piece


def check_fractions(
    splits: Mapping[str, Sequence[float]], whole: Mapping[str, Boundary]
) -> tuple[tuple[str, tuple[float, ...]], ...]:
    """Return the splits as sorted tuples, refusing what cannot be cut."""
    checked = []
    for name, values in sorted(splits.items()):
        if name not in whole:
            raise GeometryError(f"cannot split {name!r}: no such piece; {nearest_names(name, whole)}")
        if not isinstance(whole[name], Curve):
            raise GeometryError(f"cannot split {name!r}: only curves and straight sides in 2-D can be split")
        try:
            fractions = tuple(float(value) for value in values)
        except (TypeError, ValueError) as cause:
            raise GeometryError(f"fractions of {name!r} must be a list of numbers, got {values!r}") from cause
        gaps = np.diff([0.0, *fractions, 1.0])
        if not fractions or not (gaps >= SHORTEST).all():
            raise GeometryError(
                f"fractions of {name!r} must rise strictly inside (0, 1), at least {SHORTEST:g} apart, "
                f"got {list(fractions)}"
            )
        checked.append((name, fractions))
    return tuple(checked)


def check_names(names: Mapping[str, str], whole: Mapping[str, Boundary]) -> tuple[tuple[str, str], ...]:
    """Return the new names of pieces, sorted, refusing unknown pieces and names that are taken."""
    for old, new in names.items():
        if old not in whole:
            raise GeometryError(f"cannot rename {old!r}: no such piece; {nearest_names(old, whole)}")
        if not isinstance(new, str) or not new:
            raise GeometryError(f"the new name of {old!r} must be a word, got {new!r}")
    called = [names.get(name, name) for name in whole]
    if len(set(called)) < len(called):
        raise GeometryError(f"two pieces would bear one name: {', '.join(called)}")
    return tuple(sorted((old, new) for old, new in names.items() if new != old))


def split_piece(piece: Boundary, fractions: Sequence[float]) -> tuple[list[Boundary], list[Boundary]]:
    """Return the parts of a piece in order of their numbers, and in order of travel."""
    if not fractions or not isinstance(piece, Curve):
        return [piece], [piece]
    edges = [0.0, *fractions, 1.0]
    parts: list[Boundary] = []
    for k, (start, stop) in enumerate(pairwise(edges), start=1):
        span = (start, stop) if piece.rising else (1.0 - stop, 1.0 - start)
        parts.append(piece.part(*span, f"{piece.name}-{k}"))
    return parts, parts if piece.rising else parts[::-1]


def junction_openings(travelled: Sequence[Boundary]) -> Iterator[tuple[str, str, Array, float]]:
    """Yield (piece, next piece, corner (1, 2), interior angle) around a closed loop of curves.

    Turning left by ``turn`` leaves the interior angle ``pi - turn``; a complete turn back is the tip of a
    slit.
    """
    curves = [piece for piece in travelled if isinstance(piece, Curve)]
    if len(curves) < 2:
        return
    for first, second in zip(curves, [*curves[1:], curves[0]], strict=True):
        arriving, leaving = first.tangents([1.0])[0], second.tangents([0.0])[0]
        cross = arriving[0] * leaving[1] - arriving[1] * leaving[0]
        opening = math.pi - math.atan2(cross, float(arriving @ leaving))
        if opening < 1e-9:
            opening = 2.0 * math.pi
        yield first.name, second.name, second.point([0.0]), opening
