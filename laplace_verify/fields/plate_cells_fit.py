"""Coefficients for `plate_cells`: samples along the boundary of a cell determine its polynomial.

F' = u_x - i u_y and u are sampled by a formula that is accurate but slow, the terms of the places near the
cell are taken off, and what is left is fitted by least squares. In a compact cell the gradient decides, which
is known to more digits than differences of u; in a long one each counts by its rounding, because integration
along it would lose digits. On the side with data the real part of the polynomial is the data, and where u is
zero or insulated every coefficient is real or imaginary; what is known is not fitted.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from fractions import Fraction
from typing import Any, TypeAlias

import numpy as np

from laplace_verify.arrays import Array, BoolArray, IntArray, blocks
from laplace_verify.contexts import FLOAT
from laplace_verify.fields.exact import offset
from laplace_verify.fields.plate_cells import TERMS, ComplexArray
from laplace_verify.fields.plate_cells_layout import Intervals
from laplace_verify.fields.small_least_squares import least_squares

__all__ = ["FRAMES", "HalfProblem", "NotAnalytic", "fitted", "local_jumps"]

# side: direction of t over that of the coordinate along it, and e^{i phi}, the direction of t in the plane
FRAMES: dict[str, tuple[int, complex]] = {
    "bottom": (1, 1), "right": (1, 1j), "top": (-1, -1), "left": (-1, -1j),
}  # fmt: skip

NODES = (18, 18)  # on edges along and across, of a compact cell
LONG_NODES = (36, 6)  # and of a long one: more than there are powers along it
LEAST_WEIGHT = 1e-6  # of u in a long cell where it is constant
FALLEN = 1e-15  # what the last powers of known coefficients may be of the largest
NOTHING = 1e-60  # of u: smaller terms of a cell would only end as denormal numbers
LIFTED = 0.15  # of the height of a cell at the side with data: so far from its places samples keep
LONG = 5  # times the least radius: from here on a cell is long
GRADIENT_DECIDES = 1e-3  # weight of u against its gradient times the least radius

Key: TypeAlias = tuple[float, float, float, float, str, str]
Solver: TypeAlias = Callable[[Array, Array, Array], Array]
Slopes: TypeAlias = Callable[[Array, Array, Array], tuple[Array, Array]]


@dataclass(frozen=True, slots=True, eq=False)
class HalfProblem:
    """A solution with data on one side, s = 0 ... length along it: formulas in s, d and h = b - d.

    `places` are where the continuation of the data jumps, up to a length beyond both ends, with J_p / p! in
    the direction of t. `line` returns the data in powers of s - c, for s just above c, or below if c is the
    upper end; where it does not fall to rounding in `TERMS` powers nothing is tabulated.
    """

    side: str
    even: bool
    far: str  # "zero" or "insulated"; "" if the coefficients there are neither real nor imaginary
    places: tuple[tuple[Fraction, tuple[float, ...]], ...]
    length: Fraction
    line: Callable[[Fraction], list[float]]
    value: Solver
    slopes: Slopes
    widest: float = math.inf  # half width of a cell in which `line` still falls to rounding


class NotAnalytic(Exception):  # noqa: N818  # caught in `tabulated`; no error of the user's
    """The data are not given to rounding by as many powers as a cell has."""


def local_jumps(
    side: str, jumps: Iterable[tuple[Fraction, Sequence[Any]]]
) -> tuple[tuple[Fraction, tuple[float, ...]], ...]:
    """Return J_p / p! in the direction of t for jumps J_p in the direction of s."""
    sign = FRAMES[side][0]
    return tuple(
        (place, tuple(float(jump) * sign ** (p + 1) / math.factorial(p) for p, jump in enumerate(row)))
        for place, row in jumps
    )


@dataclass(frozen=True, slots=True, eq=False)
class _Frame:
    """The axes seen from a side: intervals in the directions of t and of d."""

    problem: HalfProblem
    along: Intervals
    across: Intervals

    @property
    def at_high(self) -> bool:
        """Whether the data are at the upper end of the axis across."""
        return self.problem.side in ("top", "right")

    def within(self, s: Array) -> Array:
        """Return s, but where rounding puts it beyond the end the last float before it."""
        end = float(self.problem.length)
        if Fraction(end) > self.problem.length:
            end = math.nextafter(end, 0.0)
        inside: Array = np.minimum(s, end)
        return inside

    def depths(self) -> tuple[Array, Array, Array, Array]:
        """Return d, h and the reach towards and away from the side, of the intervals across."""
        a = self.across
        return (a.high, a.low, a.above, a.below) if self.at_high else (a.low, a.high, a.below, a.above)

    def key(self, i: int, j: int, many: bool) -> Key:
        """Return shape and kind of cell: cells of one key have the same matrix."""
        sign = FRAMES[self.problem.side][0]
        left, right = (self.along.below[i], self.along.above[i])[::sign]
        _, _, towards, away = (row[j] for row in self.depths())
        level = "data" if towards == 0 else ("" if many or away > 0 else self.problem.far)
        upright = "" if many or level == "data" or (left > 0 and right > 0) else self._neighbours
        return float(left), float(right), float(towards), float(away), level, upright

    @property
    def _neighbours(self) -> str:
        return "insulated" if self.problem.even else "zero"


def fitted(
    problem: HalfProblem, x: Intervals, y: Intervals, near: list[list[int]], served: BoolArray
) -> tuple[ComplexArray, ComplexArray]:
    """Return the coefficients of F and of F' for all cells.

    Parameters
    ----------
    problem : HalfProblem
        What is to be tabulated.
    x, y : Intervals
        Of the two axes.
    near : list of lists
        For every cell the numbers in `problem.places` of those that are summed by themselves.
    served : array (cells,)
        Which cells are wanted; coefficients of the others are 0.
    """
    frame = _Frame(problem, *((x, y) if problem.side in ("bottom", "top") else (y, x)))
    groups: dict[Key, list[tuple[int, int, int]]] = {}
    for cell in np.flatnonzero(served).tolist():
        i, j = divmod(cell, len(y.centre))
        if problem.side in ("left", "right"):
            i, j = j, i
        groups.setdefault(frame.key(i, j, bool(near[cell])), []).append((cell, i, j))
    samples = [
        (key, _boundary(key), np.array([i for _, i, _ in cells]), np.array([j for _, _, j in cells]))
        for key, cells in groups.items()
    ]
    gradients, values = _sampled(frame, samples)
    tasks = [
        _Task.of(frame, *part, near) for part in zip(samples, groups.values(), gradients, values, strict=True)
    ]
    found = np.zeros((TERMS, len(near)), dtype=np.complex128)
    size = max((float(np.abs(u).max()) for u in values), default=0.0)
    for task, solution in zip(tasks, least_squares([(t.matrix, t.wanted) for t in tasks]), strict=True):
        for (k, phase), row in zip(task.unknown, solution, strict=True):
            task.known[k] += phase * row
        task.known[np.abs(task.known) < NOTHING * size] = 0.0
        found[:, task.cells] = task.known * task.radius ** -np.arange(TERMS)[:, None]
    turn = np.conj(FRAMES[problem.side][1]) ** np.arange(TERMS)
    found *= turn[:, None]
    return found, np.arange(1, TERMS)[:, None] * found[1:]


def _boundary(key: Key) -> ComplexArray:
    """Return points t + i d on the boundary of a cell, from its centre, on short floats.

    Left out are the edges along which a coefficient is known to be real or imaginary: mirrored cells do
    without them.
    """
    left, right, towards, away, level, upright = key
    counts = LONG_NODES if left + right > LONG * (towards + away) else NODES
    across, up = ((1 - np.cos(math.pi * (np.arange(n) + 0.5) / n)) / 2 for n in counts)
    foot = LIFTED * away if level == "data" else -towards
    across, up = -left + across * (left + right), foot + up * (away - foot)
    edges = []
    if not upright or left > 0:
        edges.append(-left + 1j * up)
    if not upright or right > 0:
        edges.append(right + 1j * up)
    if level != "data":
        edges.append(across - 1j * towards)
    if level in ("", "data"):
        edges.append(across + 1j * away)
    v = np.concatenate(edges)
    grain = 2.0 ** (math.frexp(left + right)[1] - 22)
    return np.asarray(np.round(v.real / grain) * grain + 1j * v.imag)


def _sampled(
    frame: _Frame, samples: list[tuple[Key, ComplexArray, IntArray, IntArray]]
) -> tuple[list[ComplexArray], list[Array]]:
    """Return u_t - i u_d and u, shape (points, cells), for all groups at once."""
    sign = FRAMES[frame.problem.side][0]
    depth, height, _, _ = frame.depths()

    parts = [
        np.stack([
            frame.within(frame.along.low[i] + sign * v.real[:, None]), depth[j] + v.imag[:, None],
            height[j] - v.imag[:, None],
        ])
        for _, v, i, j in samples
    ]  # fmt: skip
    derivatives = _in_blocks(lambda *p: np.stack(frame.problem.slopes(*p)), parts)
    values = _in_blocks(lambda *p: frame.problem.value(*p)[None], parts)
    return [sign * a - 1j * b for a, b in derivatives], [u[0] for u in values]


def _in_blocks(formula: Callable[..., Array], parts: list[Array]) -> list[Array]:
    """Return a formula at points (3, n, m) of several groups, all taken together."""
    flat = np.concatenate([part.reshape(3, -1) for part in parts], axis=1)
    with np.errstate(all="ignore"):
        found = np.concatenate([formula(*flat[:, rows]) for rows in blocks(flat.shape[1])], axis=1)
    ends = np.cumsum([part[0].size for part in parts])[:-1]
    return [
        piece.reshape(-1, *part.shape[1:])
        for piece, part in zip(np.split(found, ends, axis=1), parts, strict=True)
    ]


@dataclass(frozen=True, slots=True, eq=False)
class _Task:
    """Least squares for cells of one shape: coefficients of (v / radius)^k, those `known` and the rest."""

    cells: list[int]
    radius: float
    known: ComplexArray  # (TERMS, cells)
    unknown: list[tuple[int, complex]]
    matrix: Array
    wanted: Array

    @classmethod
    def of(
        cls,
        frame: _Frame,
        sample: tuple[Key, ComplexArray, IntArray, IntArray],
        cells: list[tuple[int, int, int]],
        gradient: ComplexArray,
        values: Array,
        near: list[list[int]],
    ) -> _Task:
        """Return what is left of the samples after the places, and the powers that are to make it up."""
        key, v, _, _ = sample
        level, upright = key[4:]
        known = np.zeros((TERMS, len(cells)), dtype=np.complex128)
        steepness = float(np.abs(gradient).max()) / (float(np.abs(values).max()) or 1.0)
        sign, depth = FRAMES[frame.problem.side][0], frame.depths()[0]
        for k, (cell, i, j) in enumerate(cells):
            s, d = frame.within(frame.along.low[i] + sign * v.real), depth[j] + v.imag  # as they were sampled
            for number in near[cell]:
                place, jump = frame.problem.places[number]
                w = sign * offset(FLOAT, s, place) + 1j * d
                term, slope = _log_term(jump, w)
                gradient[:, k] -= slope
                values[:, k] -= term
            if level == "data":
                row = _line(frame.problem, frame.along.centre[i], near[cell])
                known[: len(row), k] = row
        radius, least = float(np.abs(v).max()), float(frame.across.above[0])
        known *= radius ** np.arange(TERMS)[:, None]
        if not (np.abs(known[-2:]) <= FALLEN * np.abs(known).max(initial=1e-300)).all():
            raise NotAnalytic
        unknown = _unknown(level, upright)
        powers = (v[:, None] / radius) ** np.arange(TERMS)
        slopes = np.arange(TERMS) * np.roll(powers, 1, axis=1) * (least / radius)
        gradient = least * gradient - _times(slopes, known)
        values = values - _times(powers, known).real
        orders, phases = [k for k, _ in unknown], np.array([phase for _, phase in unknown])
        terms, slopes = powers[:, orders] * phases, slopes[:, orders] * phases
        weight = GRADIENT_DECIDES
        if radius > LONG * least:
            weight = min(max(least * steepness, LEAST_WEIGHT), 1.0)
        return cls(
            cells=[cell for cell, _, _ in cells], radius=radius, known=known, unknown=unknown,
            matrix=np.concatenate([slopes.real, slopes.imag, weight * terms.real]),
            wanted=np.concatenate([gradient.real, gradient.imag, weight * values]),
        )  # fmt: skip


def _times(a: ComplexArray, b: ComplexArray) -> ComplexArray:
    """Return the matrix product of a and b without a library that starts threads for it."""
    found: ComplexArray = np.einsum("ij,jk->ik", a, b)
    return found


def _unknown(level: str, upright: str) -> list[tuple[int, complex]]:
    """Return powers k and phases of the coefficients that are fitted; the imaginary part of c_0 is 0."""
    turns = (1, -1j, -1, 1j)  # i^-k
    if level and upright:
        phase = 1 if level == "insulated" else 1j
        found = [(k, phase) for k in range(TERMS) if k % 2 == (0 if level == upright else 1)]
    elif level:
        found = [(k, 1 if level == "insulated" else 1j) for k in range(TERMS)]
    elif upright:
        found = [(k, turns[k % 4] * (1 if upright == "insulated" else 1j)) for k in range(TERMS)]
    else:
        found = [(k, phase) for k in range(TERMS) for phase in (1, 1j)]
    return [(k, phase) for k, phase in found if (k, phase) != (0, 1j)]


def _log_term(jump: tuple[float, ...], w: ComplexArray) -> tuple[Array, ComplexArray]:
    """Return Re of (i / pi) J(w) log w and the derivative of the whole."""
    factor = np.polynomial.polynomial.polyval(w, jump)
    slope = np.polynomial.polynomial.polyval(w, [k * c for k, c in enumerate(jump)][1:] or [0.0])
    log = np.log(w)
    return np.asarray((1j / math.pi * factor * log).real), 1j / math.pi * (slope * log + factor / w)


def _line(problem: HalfProblem, centre: Fraction, near: list[int]) -> Array:
    """Return the data in powers of t from a centre, as they are at t beyond the places near it."""
    sign = FRAMES[problem.side][0]
    listed = problem.line(centre)[:TERMS]
    row = np.zeros(max([len(listed)] + [len(problem.places[number][1]) for number in near]))
    row[: len(listed)] = [c * sign**k for k, c in enumerate(listed)]
    for number in near:
        place, jump = problem.places[number]
        below = place < centre or (place == centre and centre < problem.length)
        if below == (sign < 0):  # between the data just listed and t beyond
            apart = float(sign * (centre - place))
            for k, c in enumerate(jump):
                row[: k + 1] += [c * math.comb(k, m) * apart ** (k - m) for m in range(k + 1)]
    return row
