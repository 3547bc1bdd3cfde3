"""Seepage under a flat-bottomed dam with a sheet pile below its middle, on a layer of finite depth.

The layer -T < y < 0 lies on tight ground. On its bed y = 0 the head is 1 upstream, x < -b, and 0
downstream, x > b; base |x| < b and pile x = 0, -s < y < 0 are tight. With S = pi z/(2 T), B = pi b/(2 T)
and t = pi s/(2 T) the half x > 0 is mapped onto a rectangle by

    sn(V, m)^2 = (sinh^2 B - sinh^2 S)/D,    D = sinh^2 B + sin^2 t,    m^2 = D/cosh^2 B,
    head + i stream = V/(2 K(m)),            dV/dS = -sinh S cosh B/(sqrt(sinh^2 B - sinh^2 S)
                                                                     sqrt(sin^2 t + sinh^2 S)),

and head - 1/2 is odd in x. The discharge is k h K(m')/(2 K(m)) for a head drop h and a conductivity k. s = 0
is the dam without pile, m = tanh B; b = 0 the pile alone, m = sin t (derived here; m agrees with the sources
below).

V is computed as sn V times Carlson's integral of the squares cn^2, dn^2, 1, of which the roots are known:
sinh^2 B - sinh^2 S = sinh(B - S) sinh(B + S) and sin^2 t + sinh^2 S = sinh(S + i t) sinh(S - i t) keep
their digits beside heel, toe and tip, because each factor takes the distance from them.

References
----------
Harr (1962), Groundwater and Seepage, ch. 5; Polubarinova-Kochina (1962), Theory of Ground Water Movement,
ch. III (both from memory; discharges are checked by other routes in tests/published).
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction
from functools import lru_cache
from typing import Any, Literal

import mpmath
import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT, MAX_DIGITS, Number, Precise
from laplace_verify.errors import FieldError
from laplace_verify.fields._precision import agreeing
from laplace_verify.fields.base import Field
from laplace_verify.fields.combinations import combined
from laplace_verify.fields.complete_elliptic import cel
from laplace_verify.fields.elliptic_first import first_kind
from laplace_verify.fields.exact import Exact, exact, offset, rational, show, whole
from laplace_verify.fields.singular import Cut, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["DamSeepage", "dam_seepage", "form_factor"]

Part = Literal["head", "stream"]
WIDEST = 100  # base per depth: hyperbolic functions stay far from overflow
DEEPEST = Fraction(999, 1000)  # pile per depth
FAR = 300.0  # pi x/(2 T) from which on the head is 1 or 0 to 130 digits
ROUNDING = 1e-9  # of the depth, by which a point may lie outside the layer


@registered("dam-seepage")
@dataclass(frozen=True, slots=True, kw_only=True)
class DamSeepage(Field):
    """Head or stream function under a dam with a sheet pile; `dam_seepage` makes one."""

    base: Exact
    depth: Exact
    pile: Exact = 0
    part: Part = "head"

    def __post_init__(self) -> None:
        """Check the lengths and the part."""
        for name in ("base", "depth", "pile"):
            object.__setattr__(self, name, exact(getattr(self, name), name))
        if not self.depth > 0:
            raise FieldError(f"depth, the thickness of the layer, must be > 0, got {show(self.depth)}")
        if not 0 <= rational(self.base) <= WIDEST * rational(self.depth):
            raise FieldError(f"base must be from 0 to {WIDEST} times the depth, got {show(self.base)}")
        if not 0 <= rational(self.pile) <= DEEPEST * rational(self.depth):
            raise FieldError(
                f"pile must be from 0 to {float(DEEPEST)} of the depth, so that water passes under it, got "
                f"{show(self.pile)}"
            )
        if not (self.base or self.pile):
            raise FieldError("base and pile must not both be 0: nothing would part the two heads")
        if self.part not in ("head", "stream"):
            raise FieldError(f'part must be "head" or "stream", got {self.part!r}')

    @property
    def dim(self) -> int:
        """Two."""
        return 2

    @property
    def half(self) -> Exact:
        """Half of the base, b."""
        return rational(self.base) / 2

    @property
    def formula(self) -> str:
        """Such as ``[head under a dam, base 2, on a layer of depth 1]``."""
        body = f"a dam, base {show(self.base)}," if self.base else f"a sheet pile of {show(self.pile)}"
        more = f" with a sheet pile of {show(self.pile)}" if self.base and self.pile else ""
        what = "head" if self.part == "head" else "stream function"
        return f"[{what} under {body}{more} on a layer of depth {show(self.depth)}]"

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """Heel, toe and the tip of the pile, where head and stream function go like the root of r."""
        b, s = float(self.half), float(self.pile)
        points = ([(-b, 0.0), (b, 0.0)] if b else []) + ([(0.0, -s)] if s else [])
        return tuple(Singularity(point=point, exponent=0.5, kind="power") for point in points)

    @property
    def cuts(self) -> tuple[Cut, ...]:
        """The pile, from its tip up: upstream is its left."""
        s = float(self.pile)
        return (Cut(start=(0.0, -s), direction=(0.0, 1.0), length=s),) if s else ()

    def _valid(self, points: Array) -> BoolArray:
        T = float(self.depth)
        inside: BoolArray = (points[:, 1] <= ROUNDING * T) & (points[:, 1] >= -(1.0 + ROUNDING) * T)
        return inside

    def _downstream(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, Any]:
        """Return +1 downstream and -1 upstream of the middle, and the places at |x|."""
        sign = ctx.where(x[0] < 0, -1, 1)
        if side is not None:
            sign = ctx.where((x[0] == 0) & (side > 0), -1, sign)
        return sign, _Places(ctx, self, abs(x[0]), -x[1])

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        sign, places = self._downstream(ctx, x, side)
        v = places.potential() / (2 * quarter_period(ctx, self))
        if self.part == "stream":
            return -v.imag
        return ctx.where(sign > 0, v.real, 1 - v.real)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        sign, places = self._downstream(ctx, x, side)
        slope = places.slope() * (ctx.pi / (4 * quarter_period(ctx, self) * ctx.number(self.depth)))
        if self.part == "stream":
            return -sign * slope.imag, slope.real
        return slope.real, sign * slope.imag

    def conjugate(self) -> Field:
        """Return the stream function of the head, minus the head for the stream function."""
        twin = replace(self, part="stream" if self.part == "head" else "head")
        return twin if self.part == "head" else combined((-1, twin))


class _Places:
    """The map at points x >= 0 and depths d >= 0 below the bed, mirrored: as functions of conj(S)."""

    def __init__(self, ctx: Any, field: DamSeepage, x: Any, d: Any) -> None:
        unit = ctx.pi / (2 * ctx.number(field.depth))
        if ctx is FLOAT:
            x, d = np.minimum(x, FAR / unit), np.maximum(d, 0.0)
        self.ctx, self.field = ctx, field
        self.b, self.t = unit * ctx.number(field.half), unit * ctx.number(field.pile)
        X, Y = unit * x, unit * d
        self.sinh = _sinh(ctx, X, Y)
        cosh, sine = ctx.cosh(self.b), ctx.sin(self.t)
        self.cosh_b, self.size = cosh, ctx.hypot(ctx.sinh(self.b), sine)
        self.dn = (_complex(ctx, ctx.cosh(X) * ctx.cos(Y), ctx.sinh(X) * ctx.sin(Y))) / cosh
        if field.base:
            past = ctx.sqrt(_sinh(ctx, unit * offset(ctx, x, field.half), Y))
            self.outer = past * ctx.sqrt(_sinh(ctx, X + self.b, Y)) * (-1j)
        else:
            self.outer = self.sinh * (-1j)
        if field.pile:
            below = ctx.sqrt(_sinh(ctx, X, unit * offset(ctx, d, field.pile)))
            self.inner = below * ctx.sqrt(_sinh(ctx, X, Y + self.t))
        else:
            self.inner = self.sinh

    def potential(self) -> Any:
        """Return conj(V)."""
        cn = self.inner / self.size
        return self.outer / self.size * first_kind(self.ctx, cn, self.dn, 1 + 0 * cn)

    def slope(self) -> Any:
        """Return conj(dV/dS)."""
        if not self.field.base:
            return self.cosh_b / (self.inner * 1j)
        if not self.field.pile:
            return -self.cosh_b / self.outer
        return -self.cosh_b * (self.sinh / self.outer) / self.inner


def _complex(ctx: Any, re: Any, im: Any) -> Any:
    return re + 1j * im if ctx is FLOAT else ctx.mpc(re, im)


def _sinh(ctx: Any, x: Any, y: Any) -> Any:
    """Return sinh(x + i y), each part to its own last digits."""
    return _complex(ctx, ctx.sinh(x) * ctx.cos(y), ctx.cosh(x) * ctx.sin(y))


@lru_cache(maxsize=256)
def quarter_period(ctx: Any, field: DamSeepage) -> Any:
    """Return K(m), from the complementary modulus m' = cos t/cosh B, which keeps its digits."""
    k = _moduli(ctx, field)[1]
    return cel(ctx, k, 1 + 0 * k, 1 + 0 * k, 1 + 0 * k)


def _moduli(ctx: Any, field: DamSeepage) -> tuple[Any, Any]:
    """Return m and m'."""
    unit = ctx.pi / (2 * ctx.number(field.depth))
    cosh = ctx.cosh(unit * ctx.number(field.half))
    open_ = rational(field.depth) - rational(field.pile)  # below the pile: cos t = sin of its angle
    size = ctx.hypot(ctx.sinh(unit * ctx.number(field.half)), ctx.sin(unit * ctx.number(field.pile)))
    return size / cosh, ctx.sin(unit * ctx.number(open_)) / cosh


def form_factor(field: DamSeepage, digits: int = 30) -> mpmath.mpf:
    """Return the discharge per width over (conductivity times head drop), K(m')/(2 K(m)).

    >>> str(form_factor(dam_seepage(0, 1, "1/2"), 20))  # a pile to the middle of the layer
    '0.5'

    Raises
    ------
    FieldError
        If `digits` is not a whole number from 1 to 200.
    """

    def evaluate(ctx: Precise) -> list[Any]:
        m, one = _moduli(ctx, field)[0], ctx.mpf(1)
        return [cel(ctx, m, one, one, one) / (2 * quarter_period(ctx, field))]

    (value,), _ = agreeing(evaluate, whole(digits, "digits", 1, MAX_DIGITS), field.formula)
    return mpmath.mp.make_mpf(value._mpf_)


def dam_seepage(base: Number, depth: Number, pile: Number = 0, *, part: Part = "head") -> DamSeepage:
    """Return the head under a dam: 1 on the bed upstream, 0 downstream, the bed at y = 0.

    Multiply by the drop of the head and add the tailwater for heads in metres.

    Parameters
    ----------
    base
        Width of the tight base, about x = 0, at most 100 times the depth; 0 for a sheet pile alone.
    depth
        Thickness of the layer, which is -depth <= y <= 0.
    pile
        Length of the sheet pile below the middle of the base, less than 0.999 of the depth.
    part
        "head", or "stream" for the stream function, which is 0 on base and pile and rises to discharge over
        (conductivity times head drop) at the bottom of the layer.

    Raises
    ------
    FieldError
        If a length is out of range, or base and pile are both 0.

    Examples
    --------
    >>> u = dam_seepage(2, 1)
    >>> u.value([[-1.5, 0.0], [0.0, -0.3], [1.5, 0.0]]).round(14).tolist()
    [1.0, 0.5, 0.0]
    >>> bool(abs(dam_seepage(0, 1, "1/2", part="stream").value([[0.2, -1.0]])[0] - 0.5) < 1e-15)
    True
    """
    return DamSeepage(base=base, depth=depth, pile=pile, part=part)  # type: ignore[arg-type]  # made exact
