"""Sums of corner powers and of complex polynomials by Horner's rule, in real arithmetic."""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache
from typing import TYPE_CHECKING, Any

import numpy as np

from laplace_verify.contexts import FLOAT
from laplace_verify.fields._precision import working
from laplace_verify.fields.exact import Exact, offset

if TYPE_CHECKING:
    from laplace_verify.fields.corner_series import CornerSeries, Expansion, PolynomialPart

__all__ = [
    "LocalPoint",
    "Powers",
    "angle_of",
    "expansion_gradient",
    "expansion_value",
    "local",
    "on_lip",
    "turned",
]

# A point meant to lie on a lip may be off by the rounding of its coordinates, or by this angle.
LIP_ANGLE = 1e-9
LIP_ROUNDING = 128 * np.finfo(np.float64).eps
EIGHTH = math.pi / 4
DIAGONALS = ((1, 0), (1, 1), (0, 1), (-1, 1), (-1, 0), (-1, -1), (0, -1), (1, -1))


@dataclass(frozen=True, slots=True, kw_only=True)
class Powers:
    """Exponents (j or j - 1/2) π/ω, and whether imaginary parts are taken."""

    mixed: bool
    sine: bool

    def multiple(self, j: int) -> float:
        """Return j or j - 1/2."""
        return j - 0.5 if self.mixed else float(j)


@dataclass(frozen=True, slots=True, kw_only=True)
class LocalPoint:
    """A point as a corner sees it: offsets along and across `start`, r in units of the scale, the angle."""

    along: Any
    across: Any
    r: Any
    angle: Any


def angle_of(ctx: Any, start: tuple[Exact, ...], stop: tuple[Exact, ...]) -> Any:
    """Return the angle from `start` counter-clockwise to `stop`, in (0, 2 pi]."""
    (a, b), (c, d) = (tuple(ctx.number(v) for v in direction) for direction in (start, stop))
    dot, cross = a * c + b * d, a * d - b * c
    angle = ctx.atan2(cross, dot)
    return angle if angle > 0 else angle + 2 * ctx.pi


def turned(direction: tuple[Exact, ...], angle: float) -> tuple[float, float]:
    """Return a unit vector at an angle from a direction, exact along the axes."""
    total = math.atan2(float(direction[1]), float(direction[0])) + angle
    eighths = round(total / EIGHTH)
    if abs(total - eighths * EIGHTH) <= 1e-14:
        x, y = DIAGONALS[eighths % 8]
        return x / math.hypot(x, y), y / math.hypot(x, y)
    return math.cos(total), math.sin(total)


def local(ctx: Any, x: tuple[Any, ...], side: Any, corner: CornerSeries) -> LocalPoint:
    """Return a point in the coordinates of a corner, its angle in (ω/2 - pi, ω/2 + pi].

    On a lip of the cut rounding must not decide: there the angle is the one that `side` names.
    """
    dx, dy = (offset(ctx, c, p) for c, p in zip(x, corner.apex, strict=True))
    a, b = (ctx.number(c) for c in corner.start)
    length = ctx.hypot(a, b)
    if length != 1:
        a, b = a / length, b / length
    along, across = a * dx + b * dy, a * dy - b * dx
    angle = ctx.atan2(across, along)
    end = angle_of(ctx, corner.start, corner.stop) / 2 + ctx.pi
    floor = np.floor if ctx is FLOAT else ctx.floor
    turns = floor((end - angle) / (2 * ctx.pi))
    if side is not None:
        lip = on_lip(dx, dy, side, corner)
        meant = ctx.where(side > 0, end - 2 * ctx.pi, end)
        turns = ctx.where(lip, floor((meant - angle) / (2 * ctx.pi) + 0.5), turns)
    r = ctx.hypot(dx, dy) / ctx.number(corner.scale)
    return LocalPoint(along=along, across=across, r=r, angle=angle + 2 * ctx.pi * turns)


def on_lip(dx: Any, dy: Any, side: Any, corner: CornerSeries) -> Any:
    """Return whether offsets from a corner lie on its cut, to rounding, and a side is named there."""
    ex, ey = corner.bisector
    size = abs(dx) + abs(dy)
    rounding = LIP_ROUNDING * (size + sum(abs(float(c)) for c in corner.apex))
    return (abs(ex * dy - ey * dx) <= LIP_ANGLE * size + rounding) & (ex * dx + ey * dy >= 0) & (side != 0)


def expansion_value(ctx: Any, x: tuple[Any, ...], side: Any, terms: Expansion) -> Any:
    """Return u: the polynomial and the parts of the corners."""
    total = polynomial_sum(ctx, x, terms.polynomial, derivative=False)[0]
    for corner in terms.corners:
        z = local(ctx, x, side, corner)
        re, im = horner(ctx, z, corner, derivative=False)
        total = total + (im if corner.powers.sine else re)
    return total


def expansion_gradient(ctx: Any, x: tuple[Any, ...], side: Any, terms: Expansion) -> tuple[Any, Any]:
    """Return the parts of f': u_x = Re f', u_y = -Im f' for u = Re f; Im f', Re f' for u = Im f."""
    gx, gy = polynomial_sum(ctx, x, terms.polynomial, derivative=True)
    for corner in terms.corners:
        z = local(ctx, x, side, corner)
        re, im = horner(ctx, z, corner, derivative=True)
        gx = gx + (im if corner.powers.sine else re)
        gy = gy + (re if corner.powers.sine else -im)
    return gx, gy


def horner(ctx: Any, z: LocalPoint, corner: CornerSeries, *, derivative: bool) -> tuple[Any, Any]:
    """Return real and imaginary part of f = sum c_j z^{λ_j} + sum l_n z^n log z, or of its derivative.

    The derivative is with respect to x + i y. It is formed as z f' / z, with the sum of λ_j c_j z^{λ_j}.
    """
    zero = z.r == 0
    safe = ctx.where(zero, ctx.number(1), z.r)
    re, im = 0 * z.r, 0 * z.r
    if corner.coefficients:
        re, im = _powers(ctx, z, safe, zero, corner, derivative)
    for n, text in corner.logs:
        a, b = _logarithm(ctx, z, safe, zero, n, derivative)
        number = ctx.number(text)
        re, im = re + number * a, im + number * b
    return _per_length(ctx, z, zero, corner, re, im) if derivative else (re, im)


def _powers(
    ctx: Any, z: LocalPoint, safe: Any, zero: Any, corner: CornerSeries, derivative: bool
) -> tuple[Any, Any]:
    """Return the parts of sum c_j z^{λ_j}, or of z times its derivative, sum λ_j c_j z^{λ_j}."""
    step, rest = _step(ctx, corner.start, corner.stop)
    powers = corner.powers
    size = ctx.where(zero, ctx.number(0), safe**step)
    p, q = size * ctx.cos(step * z.angle), size * ctx.sin(step * z.angle)
    weights = [powers.multiple(j) for j in range(1, len(corner.coefficients) + 1)] if derivative else None
    re, im = _sum(ctx, p, q, corner.coefficients, weights)
    c, s = p, q
    if powers.mixed:
        root, turn = ctx.where(zero, ctx.number(0), safe ** (step / 2)), step / 2 * z.angle
        c, s = root * ctx.cos(turn), root * ctx.sin(turn)
    re, im = re * c - im * s, re * s + im * c  # the sum starts with z^{λ_1}
    if not derivative:
        return re, im
    # beside the apex only λ_1 counts, and the rounding of its exponent
    factor = step * (1 + powers.multiple(1) * rest * ctx.log(safe))
    return re * factor, im * factor


@lru_cache(maxsize=64)
def _step(ctx: Any, start: tuple[Exact, ...], stop: tuple[Exact, ...]) -> tuple[Any, Any]:
    """Return π/ω and, in float64, what it lacks."""
    if ctx is not FLOAT:
        return ctx.pi / angle_of(ctx, start, stop), ctx.number(0)
    better = working(30)
    exact = better.pi / angle_of(better, start, stop)
    return float(exact), float(exact - better.mpf(float(exact)))


def _logarithm(ctx: Any, z: LocalPoint, safe: Any, zero: Any, n: int, derivative: bool) -> tuple[Any, Any]:
    """Return z^n log z, or z times its derivative, n z^n log z + z^n."""
    power = ctx.where(zero, ctx.number(0), safe**n)
    c, s = power * ctx.cos(n * z.angle), power * ctx.sin(n * z.angle)
    log = ctx.log(safe)
    re, im = c * log - s * z.angle, c * z.angle + s * log
    return (n * re + c, n * im + s) if derivative else (re, im)


def _per_length(
    ctx: Any, z: LocalPoint, zero: Any, corner: CornerSeries, re: Any, im: Any
) -> tuple[Any, Any]:
    """Return (re + i im)/(z scale) e^{-i start}: a derivative with respect to x + i y."""
    scale = ctx.number(corner.scale)
    radius = ctx.where(zero, ctx.number(1), z.r * scale)
    c, s = ctx.cos(z.angle), ctx.sin(z.angle)
    re, im = (re * c + im * s) / radius, (im * c - re * s) / radius
    if corner.coefficients and abs(corner.powers.multiple(1) * math.pi / corner.opening - 1) < 1e-12:
        re = ctx.where(zero, ctx.number(corner.coefficients[0]) / scale, re)  # a linear term at the apex
    a, b = (ctx.number(v) for v in corner.start)
    length = ctx.hypot(a, b)
    return (re * a + im * b) / length, (im * a - re * b) / length


def polynomial_sum(
    ctx: Any, x: tuple[Any, ...], part: PolynomialPart, *, derivative: bool
) -> tuple[Any, Any]:
    """Return sum a_n Re t^n + b_n Im t^n and 0, or the two components of its gradient.

    With c_n = a_n - i b_n the sum is Re c_n t^n; Horner's rule with complex coefficients gives f and f'.
    """
    count = max(len(part.re), len(part.im))
    nothing = 0 * x[0]
    if not count:
        return nothing, nothing
    scale = ctx.number(part.scale)
    p, q = (offset(ctx, coordinate, c) / scale for coordinate, c in zip(x, part.centre, strict=True))
    a, b = (_numbers(ctx, texts) for texts in (part.re, part.im))
    re, im = nothing, nothing
    for n in range(count - 1, 0 if derivative else -1, -1):
        weight = n if derivative else 1
        re, im = re * p - im * q, re * q + im * p
        if n < len(a):
            re = re + weight * a[n]
        if n < len(b):
            im = im - weight * b[n]
    return (re / scale, -im / scale) if derivative else (re, nothing)


def _sum(ctx: Any, p: Any, q: Any, texts: tuple[str, ...], weights: list[float] | None) -> tuple[Any, Any]:
    """Return the parts of sum_j w_j c_j (p + i q)^{j-1}."""
    re, im = 0 * p, 0 * p
    numbers = _numbers(ctx, texts)
    for j in range(len(numbers) - 1, -1, -1):
        number = numbers[j] if weights is None else numbers[j] * weights[j]
        re, im = re * p - im * q + number, re * q + im * p
    return re, im


@lru_cache(maxsize=64)
def _numbers(ctx: Any, texts: tuple[str, ...]) -> tuple[Any, ...]:
    """Return decimal strings as numbers of a context."""
    if ctx is FLOAT:
        return tuple(float(text) for text in texts)
    return tuple(ctx.mpf(text) for text in texts)  # decimal strings, rounded once
