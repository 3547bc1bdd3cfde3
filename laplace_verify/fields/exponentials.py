"""Products of waves and exponentials: Y(y) cos(k x) in the plane, Z(z) cos(a x) cos(b y) in space.

The profile solves Y'' = c^2 Y with c = k, in space c = sqrt(a^2 + b^2). It is divided by its own value at a
reference level L, so that a high wavenumber does not overflow; with s = y - centre, s_L = L - centre:

    "exp"    e^{c (y - L)}                 "decay"  e^{-c (y - L)}
    "cosh"   cosh(c s)/cosh(c s_L)         "sinh"   sinh(c s)/sinh(c s_L)

The quotients are formed as e^{c |s| - c |s_L|} (1 +- e^{-2 c |s|})/(1 +- e^{-2 c |s_L|}), never as two large
numbers.
"""

from __future__ import annotations

import dataclasses
from collections.abc import Iterable
from dataclasses import dataclass
from typing import Any, Literal

import numpy as np

from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.combinations import combined
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, rational, show
from laplace_verify.fields.specs import registered

__all__ = ["ExpTrig", "exp_trig"]

PROFILES = ("exp", "decay", "cosh", "sinh")


@registered("exp-trig")
@dataclass(frozen=True, slots=True, kw_only=True)
class ExpTrig(Field):
    """Profile in the last coordinate times waves in the others; `exp_trig` makes one.

    `over` is the hyperbolic function of the reference level that the profile is divided by, itself by
    default; the conjugate of a cosh profile is sinh(c s)/cosh(c s_L).
    """

    k: tuple[Exact, ...]
    parts: tuple[str, ...]
    profile: str
    centre: tuple[Exact, ...]
    level: Exact
    times_pi: bool = False
    over: str = ""

    def __post_init__(self) -> None:
        """Check every parameter."""
        k = exact_point(self.k, "k", (1, 2))
        if not (all(a >= 0 for a in k) and any(k)):
            raise FieldError(f"wavenumbers must be positive, got {k}; rotate the field to turn it over")
        set_ = object.__setattr__
        set_(self, "k", k)
        set_(self, "centre", exact_point(self.centre, "centre", (len(k) + 1,)))
        set_(self, "level", exact(self.level, "level"))
        set_(self, "over", self.over or self.profile)
        if len(self.parts) != len(k) or not all(part in ("cos", "sin") for part in self.parts):
            raise FieldError(
                f'part must be "cos" or "sin", in space one of them or a pair, got {self.parts!r}'
            )
        if self.profile not in PROFILES or self.over not in PROFILES:
            raise FieldError(f"profile must be one of {', '.join(PROFILES)}, got {self.profile!r}")
        if (self.profile in ("cosh", "sinh")) != (self.over in ("cosh", "sinh")):
            raise FieldError(f"a profile {self.profile!r} cannot be divided by {self.over!r}")
        if not isinstance(self.times_pi, bool):
            raise FieldError(f"times_pi must be True or False, got {self.times_pi!r}")
        if self.over == "sinh" and rational(self.level) == rational(self.centre[-1]):
            raise FieldError(
                "a sinh profile is zero at its centre: give a level elsewhere, where it is to be 1"
            )

    @property
    def dim(self) -> int:
        """Number of wavenumbers plus one."""
        return len(self.k) + 1

    @property
    def formula(self) -> str:
        """Such as ``exp(2 (y - 1)) cos(2 x)``."""
        pi = "pi " if self.times_pi else ""
        axis = "xyz"[len(self.k)]
        numbers = ["" if a == 1 else f"{show(a)} " for a in self.k]
        if len(self.k) == 1:
            rate = numbers[0] + pi
        else:
            rate = f"{pi}sqrt({_square(self.k[0])} + {_square(self.k[1])}) "
        waves = " ".join(
            _called(part, number + pi, _minus(name, place))
            for part, number, name, place in zip(self.parts, numbers, "xy", self.centre, strict=False)
        )
        if self.profile in ("exp", "decay"):
            sign = "-" if self.profile == "decay" else ""
            return f"{_called('exp', sign + rate, _minus(axis, self.level))} {waves}"
        top = _called(self.profile, rate, _minus(axis, self.centre[-1]))
        height = exact(rational(self.level) - rational(self.centre[-1]), "level")
        if not height:  # cosh(0) = 1
            return f"{top} {waves}"
        shown = show(height) if height > 0 else f"({show(height)})"
        bottom = rate.strip() if height == 1 and rate else rate + shown
        return f"{top}/{self.over}({bottom}) {waves}"

    def _rate(self, ctx: Any) -> Any:
        """Return c, the rate of the profile."""
        numbers = [ctx.number(a) for a in self.k]
        rate = numbers[0] if len(numbers) == 1 else ctx.hypot(*numbers)
        return rate * ctx.pi if self.times_pi else rate

    def _profile(self, ctx: Any, s: Any, rate: Any) -> tuple[Any, Any]:
        """Return the profile and its derivative divided by c, at the last coordinate `s`."""
        if self.profile in ("exp", "decay"):
            sign = 1 if self.profile == "exp" else -1
            value = ctx.exp(sign * rate * offset(ctx, s, self.level))
            return value, sign * value
        height = abs(ctx.number(exact(rational(self.level) - rational(self.centre[-1]), "level")))
        sign_below = -1 if rational(self.level) < rational(self.centre[-1]) and self.over == "sinh" else 1
        s = offset(ctx, s, self.centre[-1])
        size = abs(s)
        below = (ctx.exp(-2 * rate * height) + 1) if self.over == "cosh" else -ctx.expm1(-2 * rate * height)
        quotient = ctx.exp(rate * (size - height)) / below * sign_below
        cosh = quotient * (1 + ctx.exp(-2 * rate * size))
        sinh = quotient * -ctx.expm1(-2 * rate * size)
        sinh = ctx.where(s < 0, -sinh, sinh)
        return (cosh, sinh) if self.profile == "cosh" else (sinh, cosh)

    def _waves(self, ctx: Any, x: tuple[Any, ...]) -> list[tuple[Any, Any]]:
        """Return for each wave its value and its derivative divided by its wavenumber."""
        waves = []
        for part, a, coordinate, place in zip(self.parts, self.k, x, self.centre, strict=False):
            sine, cosine = sin_cos(ctx, a, offset(ctx, coordinate, place), self.times_pi)
            waves.append((sine, cosine) if part == "sin" else (cosine, -sine))
        return waves

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        value = self._profile(ctx, x[-1], self._rate(ctx))[0]
        for wave, _ in self._waves(ctx, x):
            value = value * wave
        return value

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        rate = self._rate(ctx)
        profile, slope = self._profile(ctx, x[-1], rate)
        waves = self._waves(ctx, x)
        unit = ctx.pi if self.times_pi else 1
        numbers = [ctx.number(a) * unit for a in self.k]
        if len(waves) == 1:
            (wave, turn), (k,) = waves[0], numbers
            return k * profile * turn, rate * slope * wave
        (f, df), (g, dg) = waves
        return numbers[0] * profile * df * g, numbers[1] * profile * f * dg, rate * slope * f * g

    def conjugate(self) -> Field:
        """Return -(Y'/k) sin(k x) for Y cos(k x), and (Y'/k) cos(k x) for Y sin(k x)."""
        if self.dim != 2:
            raise FieldError(f"conjugates belong to the plane, {self.formula} is 3-D")
        other = {"exp": "exp", "decay": "decay", "cosh": "sinh", "sinh": "cosh"}[self.profile]
        sign = -1 if self.profile == "decay" else 1
        if self.parts == ("cos",):
            return combined((-sign, dataclasses.replace(self, profile=other, parts=("sin",))))
        return combined((sign, dataclasses.replace(self, profile=other, parts=("cos",))))


def exp_trig(
    k: Number | Iterable[Number],
    part: str | tuple[str, str] = "cos",
    profile: Literal["exp", "decay", "cosh", "sinh"] = "exp",
    *,
    centre: Iterable[Number] | None = None,
    level: Number | None = None,
    times_pi: bool = False,
) -> ExpTrig:
    """Return u = Y(y) cos(k x), or in space Z(z) cos(a x) cos(b y) for k = (a, b): harmonic everywhere.

    Parameters
    ----------
    k : number or pair of numbers
        Wavenumber in radians per length, positive; a pair makes a field of space.
    part : "cos", "sin" or a pair of them
        The wave, for a pair one per coordinate.
    profile : {"exp", "decay", "cosh", "sinh"}
        Profile in the last coordinate, growing, decaying, even or odd about the centre.
    centre : tuple of d numbers, default the origin
        Where the waves have phase zero and a cosh or sinh profile its middle.
    level : number, default the last coordinate of the centre
        Where the profile is 1, best the end of the domain where it is largest. A sinh profile needs one.
    times_pi : bool
        Whether wavenumbers are multiples of pi; then the zeros of ``sin(k pi x)`` are exact.

    Examples
    --------
    >>> u = exp_trig(3, "sin", "sinh", level=1, times_pi=True)  # sinh(3 pi y)/sinh(3 pi) sin(3 pi x)
    >>> u.value([[0.5, 1.0], [1.0, 0.7], [0.5, 0.0]]).tolist() == [-1, 0, 0]
    True
    >>> exp_trig((3, 4), "cos", "decay").gradient([[0.0, 0.0, 0.0]]).tolist() == [[0, 0, -5]]
    True

    To let it grow in x instead, use ``.rotated``.

    Raises
    ------
    FieldError
        If a parameter is out of range.
    """
    waves = tuple(k) if isinstance(k, Iterable) and not isinstance(k, str) else (k,)
    middle = (0,) * (len(waves) + 1) if centre is None else tuple(centre)
    if level is None:
        level = middle[-1] if middle else 0
    parts = tuple(part) if isinstance(part, tuple | list) else (part,) * len(waves)
    return ExpTrig(k=waves, parts=parts, profile=profile, centre=middle, level=level, times_pi=times_pi)  # type: ignore[arg-type]  # made exact


def sin_cos(ctx: Any, k: Exact, x: Any, times_pi: bool) -> tuple[Any, Any]:
    """Return sin and cos of k x, or of k pi x with exact zeros.

    In float64 the nearest whole number is taken off k x before pi comes in, an exact difference.
    """
    phase = ctx.number(k) * x
    if not times_pi:
        return ctx.sin(phase), ctx.cos(phase)
    if ctx is not FLOAT:
        return ctx.sinpi(phase), ctx.cospi(phase)
    whole = np.rint(phase)
    rest = phase - whole
    sign = 1 - 2 * np.mod(whole, 2)
    # cos(pi f) from sin(pi (1/2 - |f|)): exact where the wave is zero
    return sign * np.sin(np.pi * rest), sign * np.sin(np.pi * (0.5 - np.abs(rest)))


def _called(function: str, factor: str, argument: str) -> str:
    """Return ``cos(2 x)``, ``cos(2 (x - 1))`` or ``cos(x - 1)``."""
    if not factor and argument.startswith("("):
        return function + argument
    return f"{function}({factor}{argument})"


def _square(number: Exact) -> str:
    """Return ``2^2`` or ``(2/3)^2``."""
    text = show(number)
    return f"({text})^2" if "/" in text else f"{text}^2"


def _minus(name: str, place: Exact) -> str:
    """Return ``x`` or ``(x - 2/3)``."""
    if not place:
        return name
    return f"({name} {'-' if place > 0 else '+'} {show(-place if place < 0 else place)})"
