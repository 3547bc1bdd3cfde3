"""Single modes of a box with insulated, cold and cooled sides: products of waves and one stable exponential.

    u = X(x) Y(y) Z(z),   X'' = -p^2 X,   Y'' = -q^2 Y,   Z'' = (p^2 + q^2) Z,   Z = 1 on the top face.

At the ends of x and y one of

    "zero"  X = 0,    "insulated"  X' = 0,    b > 0:  dX/dn + b X = 0 (convection into surroundings at 0)

holds, and one of them for Z at the bottom. With s from the lower end and the phases f = 0 (insulated), pi/2
(zero), atan(b/p) (convection) at the two ends of the extent a,

    X = cos(p s - f_lower),    p a = n pi + f_lower(p) + f_upper(p),   n = 0, 1, 2, ...,

whose left side rises and whose right side falls with p: there is one root, found anew in every number
context.

References
----------
Carslaw & Jaeger (1959), Conduction of heat in solids, 2nd ed., section 3.9 and ch. VI (from memory,
unchecked).
"""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache
from typing import Any, TypeAlias

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT, Number, Precise
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.box_faces import inside_box
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, rational, show, whole
from laplace_verify.fields.specs import registered

__all__ = ["BoxMode", "box_mode"]

End: TypeAlias = str | Exact
WORDS = ("zero", "insulated")
HIGHEST = 1000
_ROOTS = Precise(30)


@registered("box-mode")
@dataclass(frozen=True, slots=True, kw_only=True)
class BoxMode(Field):
    """One separated solution in a box; `box_mode` makes one."""

    lower: tuple[Exact, ...]
    upper: tuple[Exact, ...]
    numbers: tuple[int, ...]
    x_ends: tuple[End, ...] = ("zero", "zero")
    y_ends: tuple[End, ...] = ("zero", "zero")
    bottom: End = "zero"

    def __post_init__(self) -> None:
        """Make numbers exact and check the words.

        Raises
        ------
        FieldError
            If the corners are not those of a box, or a mode number or a condition is out of range.
        """
        set_ = object.__setattr__
        set_(self, "lower", exact_point(self.lower, "lower", (3,)))
        set_(self, "upper", exact_point(self.upper, "upper", (3,)))
        if not all(rational(a) < rational(b) for a, b in zip(self.lower, self.upper, strict=True)):
            raise FieldError("every coordinate of lower must be below that of upper")
        if len(self.numbers) != 2:
            raise FieldError(f"numbers must be two mode numbers, along x and y, got {self.numbers!r}")
        set_(
            self, "numbers", tuple(whole(n, f"numbers[{i}]", 0, HIGHEST) for i, n in enumerate(self.numbers))
        )
        for name in ("x_ends", "y_ends"):
            ends = getattr(self, name)
            if isinstance(ends, str) or len(ends) != 2:
                raise FieldError(f"{name} must be two conditions, lower and upper end, got {ends!r}")
            set_(self, name, tuple(_condition(e, name) for e in ends))
        set_(self, "bottom", _condition(self.bottom, "bottom"))

    @property
    def dim(self) -> int:
        """3."""
        return 3

    @property
    def formula(self) -> str:
        """The conditions in one line."""
        shown = [_shown(e) for e in (*self.x_ends, *self.y_ends, self.bottom)]
        return (
            f"[mode {self.numbers} of the box {_point(self.lower)} to {_point(self.upper)}: "
            f"x {shown[0]}, {shown[1]}; y {shown[2]}, {shown[3]}; bottom {shown[4]}; 1 at the crest on top]"
        )

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        (f, _), (g, _), (z, _) = self._factors(ctx, x)
        return f * g * z

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002  # no cut
        (f, df), (g, dg), (z, dz) = self._factors(ctx, x)
        return df * g * z, f * dg * z, f * g * dz

    def _factors(self, ctx: Any, x: tuple[Any, ...]) -> list[tuple[Any, Any]]:
        """Return X, Y and Z with their derivatives."""
        factors, square = [], ctx.number(0)
        for axis, ends in enumerate((self.x_ends, self.y_ends)):
            extent = rational(self.upper[axis]) - rational(self.lower[axis])
            p, phases = _root(ctx, ends, self.numbers[axis], extent)
            low = _wave(ctx, ends[0], p, phases[0], offset(ctx, x[axis], self.lower[axis]))
            high = _wave(ctx, ends[1], p, phases[1], -offset(ctx, x[axis], self.upper[axis]))
            sign = (-1) ** self.numbers[axis]  # cos(p s - f_lower) = (-1)^n cos(p (a - s) - f_upper)
            near = offset(ctx, x[axis], self.lower[axis]) <= -offset(ctx, x[axis], self.upper[axis])
            factors.append(
                (ctx.where(near, low[0], sign * high[0]), ctx.where(near, low[1], -sign * high[1]))
            )
            square = square + p * p
        return [*factors, self._profile(ctx, x[2], ctx.sqrt(square))]

    def _profile(self, ctx: Any, z: Any, rate: Any) -> tuple[Any, Any]:
        """Return Z and Z'."""
        s, left = offset(ctx, z, self.lower[2]), -offset(ctx, z, self.upper[2])
        height = ctx.number(exact(rational(self.upper[2]) - rational(self.lower[2]), "height"))
        if not rate:
            if self.bottom == "insulated":
                return 1 + 0 * s, 0 * s
            steep = 1 / height if self.bottom == "zero" else ctx.number(self.bottom)
            below = 1 if self.bottom == "zero" else 1 + steep * height
            start = 0 if self.bottom == "zero" else 1
            return (start + steep * s) / below, steep / below + 0 * s
        # cosh(c s) + b/c sinh(c s) over its value on top; b = infinity is sinh
        decay, mirror = ctx.exp(-rate * left), ctx.exp(-2 * rate * s)
        if self.bottom == "zero":
            below = -ctx.expm1(-2 * rate * height)
            return decay * -ctx.expm1(-2 * rate * s) / below, rate * decay * (1 + mirror) / below
        beta = 0 if self.bottom == "insulated" else ctx.number(self.bottom) / rate
        below = (1 + beta) + (1 - beta) * ctx.exp(-2 * rate * height)
        value = decay * ((1 + beta) + (1 - beta) * mirror) / below
        return value, rate * decay * ((1 + beta) - (1 - beta) * mirror) / below

    def _valid(self, points: Array) -> BoolArray:
        """Return which points lie in the closed box, to rounding."""
        return inside_box(self.lower, self.upper, points)


def box_mode(
    lower: Iterable[Number],
    upper: Iterable[Number],
    numbers: tuple[int, int],
    *,
    x: tuple[str | Number, str | Number] = ("zero", "zero"),
    y: tuple[str | Number, str | Number] = ("zero", "zero"),
    bottom: str | Number = "zero",
) -> BoxMode:
    """Return one separated solution in a box, growing towards the top, where its crest is 1.

    Parameters
    ----------
    lower, upper : triples of numbers
        Opposite corners.
    numbers : pair of int
        The n of the root, 0, 1, 2, ... along x and y. With zero at both ends, n = 0 is one half wave.
    x, y : pairs
        Conditions at the lower and upper end: "zero", "insulated", or b > 0 for dX/dn + b X = 0.
    bottom
        Condition at the bottom, likewise.

    Examples
    --------
    >>> u = box_mode((0, 0, 0), (1, 1, 1), (0, 0))  # sin(pi x) sin(pi y) sinh(sqrt2 pi z)/sinh(sqrt2 pi)
    >>> bool(abs(u.value([[0.5, 0.5, 0.5]])[0] - 0.10719187617379402) < 1e-16)
    True
    >>> cooled = box_mode((0, 0, 0), (1, 1, 1), (0, 0), x=("insulated", 2), y=("insulated", "insulated"))
    >>> point = [[1.0, 0.3, 0.4]]
    >>> bool(abs(cooled.gradient(point)[0, 0] + 2 * cooled.value(point)[0]) < 1e-15)
    True

    Raises
    ------
    FieldError
        If the corners are not those of a box, or a mode number or a condition is out of range.
    """
    corners: dict[str, Any] = {"lower": tuple(lower), "upper": tuple(upper)}  # made exact there
    ends: dict[str, Any] = {"x_ends": tuple(x), "y_ends": tuple(y), "bottom": bottom}
    return BoxMode(numbers=tuple(numbers), **corners, **ends)


def _condition(end: Any, name: str) -> End:
    """Return a word or an exact positive number."""
    if end in WORDS:
        return str(end)
    if isinstance(end, str) and not end[:1].isdigit():
        raise FieldError(f'{name} must be "zero", "insulated" or a number b > 0, got {end[:40]!r}')
    number = exact(end, name)
    if not number > 0:
        raise FieldError(f'{name}: b must be positive, got {show(number)}; for b = 0 say "insulated"')
    return number


@lru_cache(maxsize=512)
def _root(ctx: Any, ends: tuple[End, ...], n: int, extent: Any) -> tuple[Any, tuple[Any, Any]]:
    """Return p and the phases at both ends, by bisection and then Newton's method."""
    high = _ROOTS if ctx is FLOAT else ctx
    a = high.number(extent)
    fixed = [e for e in ends if e not in WORDS]

    def phase(end: End, p: Any) -> Any:
        if end in WORDS:
            return high.pi / 2 if end == "zero" else high.mpf(0)
        return high.atan2(high.number(end), p)

    if not fixed:
        p = (n * high.pi + phase(ends[0], 0) + phase(ends[1], 0)) / a
    else:
        low, top = n * high.pi / a, (n + 1) * high.pi / a
        for _ in range(40):
            p = (low + top) / 2
            low, top = (low, p) if p * a > n * high.pi + phase(ends[0], p) + phase(ends[1], p) else (p, top)
        for _ in range(8):
            f = p * a - n * high.pi - phase(ends[0], p) - phase(ends[1], p)
            slope = a + sum(high.number(b) / (high.number(b) ** 2 + p * p) for b in fixed)
            p -= f / slope
    found = (p, (phase(ends[0], p), phase(ends[1], p)))
    if ctx is FLOAT:
        return float(p), (float(found[1][0]), float(found[1][1]))
    return found


def _wave(ctx: Any, end: End, p: Any, phase: Any, s: Any) -> tuple[Any, Any]:
    """Return cos(p s - phase) and its derivative in s; zeros at the end itself are exact."""
    if end == "zero":
        return ctx.sin(p * s), p * ctx.cos(p * s)
    return ctx.cos(p * s - phase), -p * ctx.sin(p * s - phase)


def _shown(end: End) -> str:
    """Return a condition in a word."""
    return str(end) if isinstance(end, str) else f"cooled, b = {show(end)}"


def _point(point: tuple[Exact, ...]) -> str:
    """Return (0, 1, 2)."""
    return "(" + ", ".join(show(c) for c in point) + ")"
