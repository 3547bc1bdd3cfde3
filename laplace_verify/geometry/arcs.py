"""Curved pieces in the plane: arcs of circles and of ellipses with axes along x and y.

Nearest points on an ellipse: by symmetry x, y >= 0, and half the derivative of the squared distance, divided
by ``sin s cos s``, is ``b^2 - a^2 + a x/cos s - b y/sin s``, which rises from s = 0 to pi/2 (derived here):
its one sign change is bisected. If that point is not on the arc, the best of many points on the arc brackets
a local minimum, which is bisected too. Fractions of length go through the elliptic integral ``E(phi | m)``
(Abramowitz and Stegun 1964, Handbook of Mathematical Functions, section 17.2).
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np
import numpy.typing as npt
from scipy.special import ellipeinc

from laplace_verify.arrays import Array, IntArray, blocks
from laplace_verify.geometry.boundary import Curve
from laplace_verify.geometry.patches import Chart, boxes

__all__ = ["Arc"]

TURN = 2.0 * math.pi
QUARTER = math.pi / 4.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Arc(Curve):
    """The arc ``centre + (a cos s, b sin s)`` for s from `first` to `last`, at most 2 pi apart.

    `hole` says that the region lies outside the ellipse: the normal then points to the centre and travel is
    clockwise. Closed if the arc is a full turn.
    """

    centre: tuple[float, ...]
    semi_axes: tuple[float, ...]
    first: float
    last: float
    hole: bool = False

    @property
    def curved(self) -> bool:
        """Whether the piece is not flat."""
        return True

    @property
    def closed(self) -> bool:
        """Whether the arc is a full turn."""
        return self.last - self.first >= TURN * (1.0 - 1e-15)

    @property
    def rising(self) -> bool:
        """Whether travel is counter-clockwise."""
        return not self.hole

    @property
    def circular(self) -> bool:
        """Whether the arc is one of a circle."""
        return self.semi_axes[0] == self.semi_axes[1]

    @property
    def measure(self) -> float:
        """Length."""
        if self.circular:
            return self.semi_axes[0] * (self.last - self.first)
        a, b = self._length(np.array([self.first, self.last]))
        return float(b - a)

    @property
    def ends(self) -> Array:
        """End points (2, 2) in order of travel; (0, 2) if closed."""
        return np.zeros((0, 2)) if self.closed else self._at(np.array([0.0, 1.0]))

    def _length(self, angle: Array) -> Array:
        """Length from angle 0: integral of sqrt(a^2 sin^2 + b^2 cos^2) = b E(s | 1 - a^2/b^2)."""
        a, b = self.semi_axes
        length: Array = b * np.asarray(ellipeinc(angle, 1.0 - (a / b) ** 2), dtype=np.float64)
        return length

    def _angle_at(self, fractions: Array) -> Array:
        """Return the angle at fractions of length, in order of travel."""
        t = 1.0 - fractions if self.hole else fractions
        if self.circular:
            return self.first + t * (self.last - self.first)
        start, stop = self._length(np.array([self.first, self.last]))
        wanted = start + t * (stop - start)
        low: Array = np.full(len(t), self.first)
        high: Array = np.full(len(t), self.last)
        for _ in range(54):  # bisection halves the bracket to the spacing of float64
            middle = (low + high) / 2.0
            below = self._length(middle) < wanted
            low, high = np.where(below, middle, low), np.where(below, high, middle)
        return np.where(t <= 0.0, self.first, np.where(t >= 1.0, self.last, (low + high) / 2.0))

    def _on(self, angle: Array) -> Array:
        unit = np.stack([np.cos(angle), np.sin(angle)], axis=1)
        points: Array = np.array(self.centre) + np.array(self.semi_axes) * unit
        return points

    def _at(self, fractions: Array) -> Array:
        return self._on(self._angle_at(fractions))

    def _parameter(self, points: Array) -> Array:
        """Return the angle in [first, last] of the nearest point of the arc."""
        if not self.circular:
            return self._elliptic_parameter(points)
        offset = points - np.array(self.centre)
        turned = np.mod(np.arctan2(offset[:, 1], offset[:, 0]) - self.first, TURN)
        span = self.last - self.first
        # beyond the arc the nearer end is nearest: past `last` up to half of the gap, else before `first`
        past = np.where(turned - span <= (TURN - span) / 2.0, span, 0.0)
        angle: Array = self.first + np.where(turned <= span, turned, past)
        return angle

    def _elliptic_parameter(self, points: Array) -> Array:
        scaled = (points - np.array(self.centre)) / np.array(self.semi_axes)
        angle: Array = self.first + np.mod(np.arctan2(scaled[:, 1], scaled[:, 0]) - self.first, TURN)
        # points on the arc already (quadrature nodes, as a rule) need no search
        off = (np.abs(np.hypot(scaled[:, 0], scaled[:, 1]) - 1.0) > 1e-14) | (angle > self.last)
        rows = np.flatnonzero(off)
        for part in blocks(len(rows), 4096):
            angle[rows[part]] = self._nearest(points[rows[part]] - np.array(self.centre))
        return angle

    def _nearest(self, centred: Array) -> Array:
        """Return the angle in [first, last] of the point of the arc nearest to points - centre."""
        quarter = self._bisected(
            np.abs(centred), np.zeros(len(centred)), np.full(len(centred), math.pi / 2.0)
        )
        x, y = np.copysign(np.cos(quarter), centred[:, 0]), np.copysign(np.sin(quarter), centred[:, 1])
        angle: Array = self.first + np.mod(np.arctan2(y, x) - self.first, TURN)
        beyond = np.flatnonzero(angle > self.last)
        if len(beyond):
            angle[beyond] = self._searched(centred[beyond])
        return angle

    def _bisected(self, centred: Array, low: Array, high: Array) -> Array:
        """Return the angle between two at which the distance stops falling."""
        a, b = self.semi_axes
        for _ in range(56):
            middle = (low + high) / 2.0
            c, s = np.cos(middle), np.sin(middle)
            slope = (a * c - centred[:, 0]) * -a * s + (b * s - centred[:, 1]) * b * c
            low, high = np.where(slope > 0.0, low, middle), np.where(slope > 0.0, middle, high)
        angle: Array = (low + high) / 2.0
        return angle

    def _searched(self, centred: Array) -> Array:
        """Return the angle of the nearest point of an open arc, if that of the whole ellipse is not on it."""
        a, b = self.semi_axes
        count = max(9, math.ceil(128 * (self.last - self.first) / TURN))
        trial = np.linspace(self.first, self.last, count)
        x, y = a * np.cos(trial), b * np.sin(trial)
        best = np.argmin((centred[:, :1] - x) ** 2 + (centred[:, 1:] - y) ** 2, axis=1)
        step = trial[1] - trial[0]
        low = np.maximum(trial[best] - step, self.first)
        high = np.minimum(trial[best] + step, self.last)
        angle = self._bisected(centred, low, high)
        # bisection stops just short of an end it converges to
        short = 1e-15 * TURN
        angle = np.where(angle >= self.last - short, self.last, angle)
        return np.where(angle <= self.first + short, self.first, angle)

    def _project(self, points: Array) -> Array:
        return self._on(self._parameter(points))

    def _normals(self, points: Array) -> Array:
        angle = self._parameter(points)
        a, b = self.semi_axes
        normal = np.stack([b * np.cos(angle), a * np.sin(angle)], axis=1)
        normal /= np.hypot(normal[:, :1], normal[:, 1:])
        return -normal if self.hole else normal

    def tangents(self, t: npt.ArrayLike) -> Array:
        """Return unit tangents (n, 2) in the direction of travel at fractions t (n,) of length."""
        angle = self._angle_at(np.atleast_1d(np.asarray(t, dtype=np.float64)))
        a, b = self.semi_axes
        tangent = np.stack([-a * np.sin(angle), b * np.cos(angle)], axis=1)
        tangent /= np.hypot(tangent[:, :1], tangent[:, 1:])
        return -tangent if self.hole else tangent

    def part(self, start: float, stop: float, name: str) -> Arc:
        """Return the part between two fractions of length, in order of travel."""
        angles = self._angle_at(np.array([start, stop]))
        return replace(self, name=name, first=float(angles.min()), last=float(angles.max()))

    def _chart(self) -> Chart:
        a, b = self.semi_axes

        def place(parameters: Array, _box: IntArray) -> tuple[Array, Array]:
            angle = parameters[:, 0]
            return self._on(angle), np.hypot(a * np.sin(angle), b * np.cos(angle))

        # the speed of a flat ellipse has branch points at a distance artanh(b/a) from the real axis: patches
        # half as wide, with 12 points, integrate it to round-off
        width, extra = (QUARTER, 1) if self.circular else (min(QUARTER, min(a, b) / max(a, b)), 22)
        count = max(1, math.ceil((self.last - self.first) / width - 1e-9))
        lower, upper = boxes(np.linspace(self.first, self.last, count + 1))
        return Chart(lower=lower, upper=upper, place=place, angles=(True,), extra=(extra,))
