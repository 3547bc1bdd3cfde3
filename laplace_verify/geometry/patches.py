"""Quadrature on exactly mapped patches: ``integral f = sum_patches sum_q w_q J(s_q) f(x(s_q))``.

A patch is a box in parameter space with an exact map onto a part of a shape, so curved shapes lose nothing
to their geometry. Patches are bisected along their longest physical direction while they exceed the wanted
size, and while they lie nearer to a singular point than their own diameter (dyadic grading: the patches
shrink geometrically towards the point, and on each of them the integrand is smooth relative to the patch;
Schwab 1998, p- and hp-Finite Element Methods, section 3.3, from memory, unchecked). Every patch then takes
a tensor Gauss rule.

In directions that are angles a polynomial becomes a trigonometric polynomial, which no Gauss rule
integrates exactly; enough points are taken for its remainder ``(p h/2)**(2n) / (2n)!`` (h the half width,
derived here from the remainder of Gauss's rule) to vanish in float64.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import lru_cache

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, BoolArray, IntArray, as_points
from laplace_verify.errors import GeometryError
from laplace_verify.geometry.checks import positive, whole

__all__ = ["Chart", "boxes", "gauss", "integrate"]

LEVELS = {1: 60, 2: 26, 3: 15}  # halvings towards a singular point, by dimension of the patch
GRADED_POINTS = {1: 12, 2: 8, 3: 6}  # least Gauss points per direction near one: even, so never at a centre
MAX_PATCHES = 2_000_000
MAX_ORDER = 100


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Chart:
    """Boxes in parameter space and the map that takes them onto a part of a shape.

    Attributes
    ----------
    lower, upper
        Corners of the boxes, shape (m, k).
    place
        ``place(parameters (n, k), box (n,)) -> points (n, d), jacobian (n,)``; `box` is the row of the box
        each parameter belongs to.
    angles
        For each direction, whether it is an angle (polynomials become trigonometric there).
    extra
        For each direction, the degree that map and Jacobian add to a polynomial.
    power
        Degree of the map, by which that of a polynomial is multiplied where the direction is no angle.
    """

    lower: Array
    upper: Array
    place: Callable[[Array, IntArray], tuple[Array, Array]]
    angles: tuple[bool, ...]
    extra: tuple[int, ...]
    power: int = 1


def boxes(*edges: npt.ArrayLike) -> tuple[Array, Array]:
    """Return lower and upper corners (m, k) of the grid of boxes with these edges in each direction.

    >>> boxes([0, 1, 3])[1].tolist()
    [[1.0], [3.0]]
    """
    arrays = [np.asarray(edge, dtype=np.float64) for edge in edges]
    lower = np.meshgrid(*(a[:-1] for a in arrays), indexing="ij")
    upper = np.meshgrid(*(a[1:] for a in arrays), indexing="ij")
    return (
        np.stack([a.ravel() for a in lower], axis=1),
        np.stack([a.ravel() for a in upper], axis=1),
    )


@lru_cache(maxsize=256)
def gauss(n: int) -> tuple[Array, Array]:
    """Return nodes and weights of the n-point Gauss-Legendre rule on [0, 1] (exact to degree 2n - 1)."""
    nodes, weights = np.polynomial.legendre.leggauss(n)
    nodes, weights = (nodes + 1.0) / 2.0, weights / 2.0
    nodes.flags.writeable = weights.flags.writeable = False
    return nodes, weights


@lru_cache(maxsize=512)
def angular_points(degree: int, half_width: float) -> int:
    """Return the number of Gauss points after which a trigonometric polynomial's remainder is round-off."""
    n = degree // 2 + 1
    log_step = math.log(max(degree * half_width / 2.0, 1e-300))
    while 2 * n * log_step - math.lgamma(2 * n + 1) > -33.0:  # exp(-33) = 5e-15
        n += 1
    return n


def integrate(
    chart: Chart, order: int, singular: npt.ArrayLike = (), cell: float | None = None
) -> tuple[Array, Array]:
    """Return points (n, d) and weights (n,) that integrate polynomials of degree `order` over the chart.

    Parameters
    ----------
    chart
        The boxes and their map.
    order
        Polynomial degree integrated exactly on flat patches, to round-off on curved ones; 0 to 100.
    singular
        Points (m, d) towards which the patches are graded.
    cell
        Largest length of a patch along any direction.

    Raises
    ------
    GeometryError
        If `order`, `singular` or `cell` make no sense, or if `cell` asks for over two million patches.
    """
    order = whole(order, "order", 0, MAX_ORDER)
    if cell is not None:
        positive(cell, "cell")
    dim = chart.place(chart.lower[:1], np.zeros(1, dtype=np.int64))[0].shape[1]
    targets = singular_points(singular, dim)
    lower, upper, box, near = _subdivide(chart, targets, cell)
    counts = _point_counts(chart, order, upper - lower, near)
    points, weights = [], []
    for count in np.unique(counts, axis=0):
        rows = (counts == count).all(axis=1)
        p, w = _tensor_rule(chart, lower[rows], upper[rows], box[rows], tuple(int(c) for c in count))
        points.append(p)
        weights.append(w)
    return np.concatenate(points), np.concatenate(weights)


def singular_points(singular: npt.ArrayLike, dim: int) -> Array:
    """Return `singular` as an array (m, dim); none given is (0, dim)."""
    if isinstance(singular, list | tuple | np.ndarray) and not len(singular):
        return np.zeros((0, dim))
    return as_points(singular, dim, error=GeometryError, name="singular")


def _point_counts(chart: Chart, order: int, width: Array, near: BoolArray) -> IntArray:
    """Return the Gauss points per direction of every patch, shape (m, k)."""
    k = width.shape[1]
    counts = np.empty(width.shape, dtype=np.int64)
    for axis, (angle, extra) in enumerate(zip(chart.angles, chart.extra, strict=True)):
        if not angle:
            counts[:, axis] = (chart.power * order + extra) // 2 + 1
            continue
        # half widths are rounded up to powers of two, so that few different rules occur
        classes = np.ceil(np.log2(width[:, axis] / 2.0) - 1e-9)
        for exponent in np.unique(classes):
            n = angular_points(order + extra, float(2.0**exponent))
            counts[classes == exponent, axis] = n
    counts[near] = np.maximum(counts[near], GRADED_POINTS[k])
    return counts


def _tensor_rule(
    chart: Chart, lower: Array, upper: Array, box: IntArray, counts: tuple[int, ...]
) -> tuple[Array, Array]:
    """Map the tensor Gauss rule with `counts` points per direction onto the given patches."""
    rules = [gauss(n) for n in counts]
    unit = np.stack([g.ravel() for g in np.meshgrid(*(r[0] for r in rules), indexing="ij")], axis=1)
    weight = np.prod([g.ravel() for g in np.meshgrid(*(r[1] for r in rules), indexing="ij")], axis=0)
    width = upper - lower
    parameters = lower[:, None, :] + width[:, None, :] * unit[None, :, :]
    points, jacobian = chart.place(parameters.reshape(-1, len(counts)), np.repeat(box, len(unit)))
    weights = (width.prod(axis=1)[:, None] * weight[None, :]).ravel() * jacobian
    return points, weights


def _subdivide(chart: Chart, targets: Array, cell: float | None) -> tuple[Array, Array, IntArray, BoolArray]:
    """Bisect the boxes until none is too large or too near a singular point for its size."""
    k = chart.lower.shape[1]
    lower, upper = chart.lower, chart.upper
    box = np.arange(len(lower), dtype=np.int64)
    lengths, centres = _measure(chart, lower, upper, box)
    if cell is not None and np.maximum(1.0, lengths / cell).prod(axis=1).sum() > 4 * MAX_PATCHES:
        raise _too_fine(cell)
    extent = float(np.sqrt((lengths**2).sum(axis=1)).max())
    # below `floor` a point of the patch could no longer be told from the singular point in float64
    floor = np.maximum(
        2.0 ** -LEVELS[k] * extent, 2.0**10 * np.finfo(float).eps * np.abs(targets).max(axis=1)
    )
    if k == 1:
        floor = np.where((targets == 0.0).all(axis=1), 2.0**-60 * extent, floor)
    done: list[tuple[Array, Array, IntArray, BoolArray]] = []
    total = 0
    while len(lower):
        split, near = _refinement(lengths, centres, targets, floor, cell)
        # at the end t = 1 of a side parameters are no finer than eps, however near the target is to 0
        split &= (upper - lower).max(axis=1) > 2.0**10 * np.finfo(float).eps * np.abs(upper).max(axis=1)
        keep = ~split
        done.append((lower[keep], upper[keep], box[keep], near[keep]))
        total += int(keep.sum())
        if total + 2 * int(split.sum()) > MAX_PATCHES:
            raise _too_fine(cell)
        lower, upper, box = _bisect(lower[split], upper[split], box[split], lengths[split])
        if len(lower):
            lengths, centres = _measure(chart, lower, upper, box)
    parts = zip(*done, strict=True)
    low, high, index, graded = (np.concatenate(part) for part in parts)
    return low, high, index, graded


def _too_fine(cell: float | None) -> GeometryError:
    return GeometryError(f"cell={cell!r} asks for over {MAX_PATCHES} patches; take a larger one")


def _bisect(lower: Array, upper: Array, box: IntArray, lengths: Array) -> tuple[Array, Array, IntArray]:
    """Halve every box across its longest physical direction."""
    rows, axis = np.arange(len(lower)), np.argmax(lengths, axis=1)
    middle = (lower[rows, axis] + upper[rows, axis]) / 2.0
    left, right = upper.copy(), lower.copy()
    left[rows, axis] = right[rows, axis] = middle
    return np.concatenate([lower, right]), np.concatenate([left, upper]), np.concatenate([box, box])


def _refinement(
    lengths: Array, centres: Array, targets: Array, floor: Array, cell: float | None
) -> tuple[BoolArray, BoolArray]:
    """Return which patches to bisect, and which lie so near a singular point that they need more points."""
    diameter = np.sqrt((lengths**2).sum(axis=1))
    split = np.zeros(len(lengths), dtype=np.bool_)
    near = np.zeros(len(lengths), dtype=np.bool_)
    if cell is not None:
        split |= lengths.max(axis=1) > cell * (1.0 + 1e-9)
    for target, least in zip(targets, floor, strict=True):
        distance = np.sqrt(((centres - target) ** 2).sum(axis=1))
        split |= (distance < 0.9 * diameter) & (diameter > least)
        near |= distance < 5.0 * diameter
    return split, near


def _measure(chart: Chart, lower: Array, upper: Array, box: IntArray) -> tuple[Array, Array]:
    """Return the largest length of each patch per direction (m, k) and its centre (m, d)."""
    m, k = lower.shape
    corners = []
    for code in range(2**k):
        upper_side = np.array([bool(code >> axis & 1) for axis in range(k)])
        corners.append(chart.place(np.where(upper_side, upper, lower), box)[0])
    lengths = np.zeros((m, k))
    for axis in range(k):
        for code in range(2**k):
            if not code >> axis & 1:
                edge = corners[code | 1 << axis] - corners[code]
                lengths[:, axis] = np.maximum(lengths[:, axis], np.sqrt((edge**2).sum(axis=1)))
    return lengths, chart.place((lower + upper) / 2.0, box)[0]


def broken(chart: Chart, parameters: Array) -> Chart:
    """Return a one-dimensional chart whose boxes also end at `parameters`: grading starts exactly there."""
    ends = np.unique(np.concatenate([chart.lower[:, 0], chart.upper[:, 0], parameters]))
    span = ends[-1] - ends[0]
    keep = np.concatenate([[True], np.diff(ends) > 1e-14 * span])
    ends = ends[keep]
    ends[-1] = chart.upper[-1, 0]
    lower, upper = boxes(ends)
    return replace(chart, lower=lower, upper=upper)
