"""Box with one hot face in any number of digits; see `box_kernel` for the factors phi and kappa.

Far from the hot face the integral over time is done as it stands. Near it, it starts with a steep part, which
is taken off in closed form: with x the coordinate along the face that is nearer to a wall, int phi_a(x, t)
f(d, t) dt is the solution W of the semi-infinite strip with a hot end, so

    u = W - int_0^inf phi_a [ (1 - phi_b) f + phi_b (f - kappa_c) ] dt,
    W = (2/pi) atan(sin(pi x/a) / sinh(pi d/a)),

whose integrand is below e^{-L} before t = min(max(y, d), c)^2 / 4L and after t = L / (pi^2 / a^2), at d = 0
too.

Error. In log t the integrand is analytic in the strip |Im| < pi/2; on |Im| = q, where t turns by q, phi is at
most cos(q)^{-1/2} (the heat kernel of the line, images added up), and f and f - kappa_c integrate over |t| to
at most 10 / cos(q)^2 (images up to |t| = c^2, modes later), so the trapezoidal rule with step s is wrong by
at most 64 cos(q)^{-3} / (e^{2 pi q/s} - 1) (Trefethen & Weideman 2014, SIAM Review 56, theorem 5.1, from
memory). With q = pi/2 - s and s = pi^2 / (L + 26) this is below e^{-L} for every L in use; sums over modes
and images end where the first term left out is below e^{-L} as well, and L exceeds the digits of the context.
"""

from __future__ import annotations

import math
from collections.abc import Iterator
from functools import lru_cache
from operator import mul
from typing import Any

__all__ = ["precise_slopes", "precise_value"]

LATE = 0.001  # t / extent^2 from which modes are summed instead of images

DEEP = 0.1  # d / least extent from which nothing is taken off


class Clock:
    """Times e^{k s} of one context, their square roots, and the modes' decay up to them."""

    def __init__(self, ctx: Any) -> None:
        self.ctx = ctx
        self.limit = float(ctx.dps * math.log(10)) + 10.0  # L
        self.step = ctx.pi**2 / (self.limit + 26)
        self.known: dict[int, tuple[Any, Any]] = {}
        self.bits = ctx.prec + 20
        self.decays: dict[tuple[Any, int, int], list[int]] = {}

    def time(self, k: int) -> tuple[Any, Any]:
        """Return t and its square root."""
        if k not in self.known:
            root = self.ctx.exp(k * self.step / 2)
            self.known[k] = (root * root, root)
        return self.known[k]

    def decay(self, extent: Any, k: int, stride: int) -> list[int]:
        """Return 2^bits e^{-n^2 pi^2 t/extent^2} for n = 1, 1 + stride, ... as far as they count."""
        key = (extent, k, stride)
        if key not in self.decays:
            q = self.ctx.exp(-((self.ctx.pi / extent) ** 2) * self.time(k)[0])
            term, bits = self.whole(q), self.bits
            ratio, growth = self.whole(q ** (stride * (2 + stride))), self.whole(q ** (2 * stride * stride))
            terms = []
            while term:  # (n + s)^2 - n^2 = s (2 n + s)
                terms.append(term)
                term, ratio = term * ratio >> bits, ratio * growth >> bits
            self.decays[key] = terms
        return self.decays[key]

    def whole(self, number: Any) -> int:
        """Return 2^bits times a number, as an integer: sums of products of integers are fast."""
        return int(self.ctx.ldexp(number, self.bits))

    def waves(self, turn: Any, count: int, stride: int) -> tuple[list[int], list[int]]:
        """Return 2^bits sin(n turn) and cos for n = 1, 1 + stride, ..., by Chebyshev's recurrence.

        Rounding grows like count^2 units, for which `bits` has room.
        """
        ctx, bits, found = self.ctx, self.bits, []
        twice = self.whole(2 * ctx.cos(stride * turn))
        for wave in (ctx.sin, ctx.cos):
            terms = [self.whole(wave((1 - stride) * turn)), self.whole(wave(turn))]
            for _ in range(count - 1):
                terms.append((twice * terms[-1] >> bits) - terms[-2])
            found.append(terms[1:])
        return found[0], found[1]

    def dot(self, decay: list[int], waves: list[int]) -> Any:
        """Return the sum of products of numbers stored as integers."""
        return self.ctx.mpf(
            (sum(map(mul, decay, waves)), -2 * self.bits)
        )  # as many terms as the shorter list


@lru_cache(maxsize=16)
def _clock(ctx: Any) -> Clock:
    return Clock(ctx)


class Walls:
    """One coordinate between two walls at distance `extent`; `stride` 2 for survival, 1 for the flow."""

    def __init__(self, clock: Clock, place: Any, extent: Any, stride: int, *, slopes: bool) -> None:
        self.slopes = slopes
        self.clock, self.place, self.extent, self.stride = clock, place, extent, stride
        self.late = float(extent) ** 2 * LATE
        highest = 3 + int(math.sqrt(1.2 * clock.limit / LATE) / math.pi) + stride
        ctx, numbers = clock.ctx, range(1, highest, stride)
        turn = ctx.pi * place / extent
        power = (
            1 if stride == 1 else -1
        )  # sum n sin, sum n^2 cos for the flow; sum sin / n, sum cos for survival
        unit = +ctx.pi
        self.scales = (
            (4 / unit, 4 / extent) if stride == 2 else (2 * unit / extent**2, 2 * unit**2 / extent**3)
        )
        self.root_pi = ctx.sqrt(unit)
        sines, cosines = clock.waves(turn, len(numbers), stride)
        if power == 1:
            self.sines = [n * s for n, s in zip(numbers, sines, strict=True)]
            self.cosines = [n * n * c for n, c in zip(numbers, cosines, strict=True)]
        else:
            self.sines, self.cosines = [s // n for n, s in zip(numbers, sines, strict=True)], cosines

    def images(self, t: float) -> int:
        """Return how many images on either side count at a time."""
        return 1 + int(2.0 * math.sqrt(t * (self.clock.limit + 5.0)) / float(self.extent) + 0.5)

    def survival(self, k: int) -> tuple[Any, Any, Any]:
        """Return 1 - phi, phi and phi'."""
        ctx, a, x = self.clock.ctx, self.extent, self.place
        t, root = self.clock.time(k)
        if float(t) > self.late:
            decay, dot = self.clock.decay(a, k, 2), self.clock.dot
            phi = self.scales[0] * dot(decay, self.sines)
            return 1 - phi, phi, self.scales[1] * dot(decay, self.cosines)
        gone, slope, far = ctx.mpf(0), ctx.mpf(0), math.sqrt(self.clock.limit + 5)
        for i in range(-self.images(float(t)), self.images(float(t)) + 1):
            s, sign = (
                abs(i * a + x) / (2 * root),
                (-1) ** i,
            )  # 1 - phi = sum (-1)^i sgn(i a + x) erfc |i a + x| / ...
            if s < far:
                gone += sign * (1 if i >= 0 else -1) * ctx.erfc(s)
            if s < far and self.slopes:
                slope += sign * ctx.exp(-s * s)
        return gone, 1 - gone, slope / (self.root_pi * root)

    def flow(self, k: int) -> tuple[Any, Any, Any, Any, Any, Any]:
        """Return f, f', f - kappa, f' - kappa', kappa and kappa'."""
        ctx, c, d = self.clock.ctx, self.extent, self.place
        t, root = self.clock.time(k)
        unit = 2 * self.root_pi * t * root
        decay = ctx.exp(-d * d / (4 * t)) / unit
        f, df = d * decay, (1 - d * d / (2 * t)) * decay
        if float(t) > self.late:
            decay, dot = self.clock.decay(c, k, 1), self.clock.dot
            kappa = self.scales[0] * dot(decay, self.sines)
            slope = self.scales[1] * dot(decay, self.cosines) if self.slopes else df
            return f, df, f - kappa, df - slope, kappa, slope
        apart, steep = ctx.mpf(0), ctx.mpf(0)
        for j in range(1, self.images(float(t)) // 2 + 2):
            for sign, s in ((-1, 2 * j * c + d), (1, 2 * j * c - d)):
                decay = ctx.exp(-s * s / (4 * t)) / unit
                apart += sign * s * decay
                steep -= (1 - s * s / (2 * t)) * decay
        return f, df, apart, steep, f - apart, df - steep


def precise_value(ctx: Any, x: Any, y: Any, d: Any, extents: tuple[Any, Any, Any]) -> Any:
    """Return u at distances x, y from the nearer walls and d from the hot face."""
    if x > y:
        x, y, extents = y, x, (extents[1], extents[0], extents[2])
    total, direct = ctx.mpf(0), _is_deep(d, extents)
    for t, (_, phi, _), (gone, other, _), (f, _, apart, _, kappa, _) in _times(
        ctx, x, y, d, extents, slopes=False
    ):
        total += t * phi * (other * kappa if direct else -(gone * f + other * apart))
    step = _clock(ctx).step
    if direct:
        return step * total
    turn, climb = ctx.pi * x / extents[0], ctx.pi * d / extents[0]
    return 2 / ctx.pi * ctx.atan2(ctx.sin(turn), ctx.sinh(climb)) + step * total


def precise_slopes(ctx: Any, x: Any, y: Any, d: Any, extents: tuple[Any, Any, Any]) -> tuple[Any, Any, Any]:
    """Return the derivatives of `precise_value` in x, y and d."""
    if x > y:
        along, across, depth = precise_slopes(ctx, y, x, d, (extents[1], extents[0], extents[2]))
        return across, along, depth
    sums, direct = [ctx.mpf(0)] * 3, _is_deep(d, extents)
    for t, first, second, through in _times(ctx, x, y, d, extents, slopes=True):
        (_, phi, dphi), (gone, other, dother), (f, df, apart, steep, kappa, dkappa) = first, second, through
        if direct:
            parts = (dphi * other * kappa, phi * dother * kappa, phi * other * dkappa)
        else:
            left = gone * f + other * apart
            parts = (-dphi * left, phi * dother * (f - apart), -phi * (gone * df + other * steep))
        sums = [total + t * part for total, part in zip(sums, parts, strict=True)]
    slopes = [_clock(ctx).step * total for total in sums]
    if not direct:
        turn, climb = ctx.pi * x / extents[0], ctx.pi * d / extents[0]
        sine, sinh = ctx.sin(turn), ctx.sinh(climb)
        unit = 2 / extents[0] / (sine * sine + sinh * sinh)
        slopes[0] += unit * ctx.cos(turn) * sinh
        slopes[2] -= unit * sine * ctx.cosh(climb)
    return slopes[0], slopes[1], slopes[2]


def _is_deep(d: Any, extents: tuple[Any, Any, Any]) -> bool:
    """Return whether the integral may be done as it stands: the start of it is not steep."""
    return bool(d >= DEEP * min(extents))


def _times(
    ctx: Any, x: Any, y: Any, d: Any, extents: tuple[Any, Any, Any], *, slopes: bool
) -> Iterator[tuple[Any, ...]]:
    """Yield the times that count, with survival along both coordinates and the flow."""
    clock = _clock(ctx)
    a, b, c = (float(e) for e in extents)
    start = float(d) if _is_deep(d, extents) else min(max(float(y), float(d)), c)
    rate = a**-2 + (b**-2 + c**-2 if _is_deep(d, extents) else 0.0)
    first, last = start**2 / (4 * (clock.limit + 5)), (clock.limit + 5) / (math.pi**2 * rate)
    along, across = (
        Walls(clock, place, extent, 2, slopes=slopes) for place, extent in ((x, extents[0]), (y, extents[1]))
    )
    depth, step = Walls(clock, d, extents[2], 1, slopes=slopes), float(clock.step)
    for k in range(math.floor(math.log(first) / step), math.ceil(math.log(last) / step) + 1):
        yield clock.time(k)[0], along.survival(k), across.survival(k), depth.flow(k)
