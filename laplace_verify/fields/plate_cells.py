"""Float64 in a rectangle by cells: in each a polynomial in x + i y, and the logarithms of the places near it.

A harmonic u with piecewise smooth data on the sides of a rectangle is, with z = x + i y and w = t + i d seen
from a place where derivatives of the data jump by J_p (t along the side, d >= 0 into the rectangle),

    u = Re [ sum over the places (i / pi) J(w) log w + an analytic function ],   J(w) = sum_p J_p w^p / p!:

the real part of the first is 0 on the side at t > 0 and -J at t < 0. The rectangle is covered by cells. The
places within `REACH` radii of a cell are summed as written; what is left is analytic within that reach, and a
polynomial of degree `TERMS` - 1 gives it to rounding. A point costs one polynomial, whose coefficients are
looked up, and the logarithms of the places beside it. (Derived here.)
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, BoolArray, IntArray

__all__ = ["REACH", "TERMS", "Axis", "Cells", "ComplexArray", "Places", "cells_gradient", "cells_value"]

ComplexArray = npt.NDArray[np.complex128]

REACH = 5.0  # radii of a cell, within which singular places are summed by themselves
TERMS = 24  # 5^-24 = 2e-17


@dataclass(frozen=True, slots=True, eq=False)
class Axis:
    """Intervals of one axis: a fine grid tells in which of them a coordinate lies."""

    low: float
    high: float
    per_length: float  # steps of the fine grid
    interval: IntArray  # of each step
    centre: Array  # of each interval, in two floats
    centre_rest: Array

    def of(self, x: Array) -> tuple[IntArray, Array]:
        """Return the interval of each coordinate and the offset from its centre."""
        step = ((x - self.low) * self.per_length).astype(np.int64)
        np.minimum(step, len(self.interval) - 1, out=step)
        found = self.interval[step]
        apart = x - self.centre[found]
        if self.centre_rest.any():
            apart -= self.centre_rest[found]
        return found, apart


@dataclass(frozen=True, slots=True, eq=False)
class Places:
    """Where the data jump: points in two floats, the direction of t, and J_p / p!, shape (P, degree + 1)."""

    point: Array  # (4, P): x, y, and what is left of both
    along: Array  # (2, P): cosine and sine of the direction of t
    jump: Array
    slope: Array  # coefficients of J', and of (J(w) - J_0) / w
    quotient: Array

    one_way: bool  # whether `along` is the same for all

    def seen_from(self, which: IntArray, x: Array, y: Array) -> tuple[Array, Array]:
        """Return t and d of points, each seen from its own place."""
        dx, dy = x - self.point[0][which], y - self.point[1][which]
        if self.point[2:].any():
            dx -= self.point[2][which]
            dy -= self.point[3][which]
        cosine, sine = self.directions(which)
        t, d = dx * cosine, dy * cosine
        if np.any(sine):
            t += dy * sine
            d -= dx * sine
        return t, np.maximum(d, 0.0, out=d)

    def directions(self, which: IntArray) -> tuple[Any, Any]:
        """Return cosine and sine of the direction of t at places, single numbers if all are the same."""
        if self.one_way:
            return self.along[0, 0], self.along[1, 0]
        return self.along[0][which], self.along[1][which]


@dataclass(frozen=True, slots=True, eq=False)
class Cells:
    """Coefficients of all cells; cell i * len(y.centre) + j is interval i of x and j of y."""

    x: Axis
    y: Axis
    value: ComplexArray  # (TERMS, cells)
    slope: ComplexArray  # (TERMS - 1, cells)
    count: IntArray  # of the places summed for a cell
    near: IntArray  # (most of them, cells): their numbers
    places: Places
    served: BoolArray  # whether the cell is any good


def cells_value(table: Cells, x: Array, y: Array) -> tuple[Array, IntArray]:
    """Return u at points of the rectangle, and which points no cell serves: all that lie on the sides."""
    cell, w, kept, left_out = _located(table, x, y)
    u = np.zeros(len(x))
    u[kept] = _value(table, cell, w, x[kept], y[kept])
    return u, left_out


def _value(table: Cells, cell: IntArray, w: ComplexArray, x: Array, y: Array) -> Array:
    """Return u at points in their cells."""
    u = np.ascontiguousarray(_polynomial(table.value, cell, w).real)
    here, which, groups = _near(table, cell)
    if here.size:
        t, d = table.places.seen_from(which, x[here], y[here])
        part = np.arctan2(d, t)
        jump = table.places.jump
        if jump.shape[1] == 1:
            part *= jump[which, 0]
        else:
            factor = _polynomial(jump.T, which, _complex(t, d))
            part *= factor.real
            part += factor.imag * _log(t, d)
        part /= -math.pi
        for group in groups:
            u[here[group]] += part[group]
    return u


def cells_gradient(table: Cells, x: Array, y: Array) -> tuple[Array, IntArray]:
    """Return both derivatives of u, shape (2, n), and which points no cell serves, as `cells_value`."""
    cell, w, kept, left_out = _located(table, x, y)
    slopes = np.zeros((2, len(x)))
    total = _slope(table, cell, w, x[kept], y[kept])
    slopes[0, kept], slopes[1, kept] = total.real, -total.imag
    return slopes, left_out


def _slope(table: Cells, cell: IntArray, w: ComplexArray, x: Array, y: Array) -> ComplexArray:
    """Return u_x - i u_y at points in their cells."""
    total = _polynomial(table.slope, cell, w)
    here, which, groups = _near(table, cell)
    if here.size:
        part = _log_slope(table.places, which, *table.places.seen_from(which, x[here], y[here]))
        for group in groups:
            total[here[group]] += part[group]
    return total


def _log_slope(places: Places, which: IntArray, t: Array, d: Array) -> ComplexArray:
    """Return the derivative of (i / pi) J(w) log w in the direction of x."""
    pole = places.jump[which, 0] / np.maximum(t * t + d * d, 1e-300)
    found = _complex(t * pole, -d * pole)
    if places.jump.shape[1] > 1:
        w = _complex(t, d)
        found += _polynomial(places.quotient.T, which, w)
        slope = _polynomial(places.slope.T, which, w)
        slope *= _complex(_log(t, d), np.arctan2(d, t))
        found += slope
    cosine, sine = places.directions(which)
    found *= (sine + 1j * cosine) / math.pi  # i e^{-i phi} / pi
    return found


def _located(table: Cells, x: Array, y: Array) -> tuple[IntArray, ComplexArray, IntArray | slice, IntArray]:
    """Return cell and offset from its centre of the points that are kept, these, and those left out.

    Points are left out on the sides, where sums are exact to the last bit, and in cells that are no good; a
    few of them are evaluated all the same.
    """
    i, dx = table.x.of(x)
    j, dy = table.y.of(y)
    i *= len(table.y.centre)
    i += j
    outside = x <= table.x.low
    outside |= x >= table.x.high
    outside |= y <= table.y.low
    outside |= y >= table.y.high
    if not table.served.all():
        outside |= ~table.served[i]
    left_out = np.flatnonzero(outside)
    if 4 * len(left_out) < len(x):
        return i, _complex(dx, dy), slice(None), left_out
    kept = np.flatnonzero(~outside)
    return i[kept], _complex(dx[kept], dy[kept]), kept, left_out


def _polynomial(coefficients: npt.NDArray[Any], which: IntArray, w: ComplexArray) -> ComplexArray:
    """Return sum_k coefficients[k, which] w^k."""
    total: ComplexArray = coefficients[-1][which].astype(np.complex128)
    found = np.empty(len(w), dtype=coefficients.dtype)
    for row in coefficients[-2::-1]:
        total *= w
        total += np.take(row, which, out=found, mode="clip")  # all in range: "raise" would copy
    return total


def _near(table: Cells, cell: IntArray) -> tuple[IntArray, IntArray, list[slice]]:
    """Return points and places to be summed for them, and slices within which no point comes twice."""
    points, places, groups, start = [], [], [], 0
    count = table.count[cell]
    for k, row in enumerate(table.near):
        here = np.flatnonzero(count > k)
        points.append(here)
        places.append(row[cell[here]])
        groups.append(slice(start, start + len(here)))
        start += len(here)
    none = np.empty(0, dtype=np.int64)
    return np.concatenate([none, *points]), np.concatenate([none, *places]), groups


def _log(t: Array, d: Array) -> Array:
    """Return log |t + i d|, anything at 0, where it is multiplied by 0."""
    square = t * t
    square += d * d
    found: Array = np.log(np.maximum(square, 1e-300))
    found *= 0.5
    return found


def _complex(real: Array, imaginary: Array) -> ComplexArray:
    """Return real + i imaginary."""
    found = np.empty(len(real), dtype=np.complex128)
    found.real, found.imag = real, imaginary
    return found
