"""Fields outside a disc, an ellipse or a straight screen, by Joukowski's map.

The exterior of the ellipse with semi-axes a, b is the image of |w| > 1 under

    z = (a + b)/2 w + (a - b)/2 /w,     w = (z + s)/(a + b),     s = sqrt(z - c) sqrt(z + c),  c^2 = a^2 -
    b^2,

with dw/dz = w/s. Principal roots put the branch cut on the segment between the foci +-c, inside the body; of
a screen (b = 0) it is the screen itself. The roots are taken of offsets from the foci, in the upper half
plane, and mirrored, so nothing cancels near the tips and both sides of a screen are reached. If b > a the
plane is turned by a quarter. A disc has w = z/a and no cut.

*Multipoles.* Re w^-n, Im w^-n and log |w| are harmonic outside, decay like |z|^-n and grow like
log(2 |z|/(a + b)): (a + b)/2 is the logarithmic capacity of the ellipse.

*Flow.* F(z) = (a + b)/2 (conj(V) w + V/w) - i G/(2 pi) log w has the velocity conj(dF/dz) -> V far away, the
circulation G, and Im F = 0 on the body. Re F is the potential (single-valued only if G = 0), Im F the stream
function.

References
----------
Milne-Thomson 1968, Theoretical Hydrodynamics, 5th ed., ch. VI; Ransford 1995, Potential Theory in the Complex
Plane, table 5.1 (capacities) - both from memory, unchecked. The form of the roots is derived here.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any

import numpy as np

from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.combinations import combined
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, rational, show, whole
from laplace_verify.fields.motions import show_point
from laplace_verify.fields.singular import Cut, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["EllipticMultipole", "FlowPast", "elliptic_multipole", "flow_past"]

HIGHEST = 200
ROUNDING = 16 * float(np.finfo(np.float64).eps)  # of a point that was computed to lie on the cut


class _Outside(Field):
    """What fields outside an ellipse share; a subclass has `semi_axes` and `centre` (abstract)."""

    __slots__ = ()

    semi_axes: tuple[Exact, ...]
    centre: tuple[Exact, ...]

    def _body(self) -> None:
        """Make centre and semi-axes exact and check them."""
        object.__setattr__(self, "centre", exact_point(self.centre, "centre", (2,)))
        object.__setattr__(self, "semi_axes", exact_point(self.semi_axes, "semi_axes", (2,)))
        if not (min(self.semi_axes) >= 0 and max(self.semi_axes) > 0):
            raise FieldError(f"semi_axes must be >= 0 and not both zero, got {show_point(self.semi_axes)}")

    @property
    def dim(self) -> int:
        """Two."""
        return 2

    @property
    def upright(self) -> bool:
        """Whether the longer axis is that along y."""
        return rational(self.semi_axes[1]) > rational(self.semi_axes[0])

    def _focal(self) -> tuple[tuple[float, float], float]:
        """Return the direction of the longer axis and the distance of the foci from the centre."""
        a, b = self.semi_axes
        return ((0.0, 1.0) if self.upright else (1.0, 0.0)), float(focus(a, b))

    @property
    def cuts(self) -> tuple[Cut, ...]:
        """The segment between the foci."""
        (dx, dy), c = self._focal()
        if c == 0.0:
            return ()
        x, y = (float(p) for p in self.centre)
        return (Cut(start=(x - c * dx, y - c * dy), direction=(dx, dy), length=2.0 * c),)

    def _foci(self, at_centre: Singularity) -> tuple[Singularity, ...]:
        """Return the singular points: the foci, where u ~ sqrt(r), or the centre of a disc."""
        (dx, dy), c = self._focal()
        if c == 0.0:
            return (at_centre,)
        x, y = (float(p) for p in self.centre)
        return tuple(
            Singularity(point=(x + sign * c * dx, y + sign * c * dy), exponent=0.5, kind="power")
            for sign in (-1.0, 1.0)
        )

    def _middle(self) -> tuple[float, ...]:
        return tuple(float(p) for p in self.centre)

    def _map(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, Any]:
        """Return w and s = w/(dw/dz), complex."""
        a, b = self.semi_axes
        dx, dy = (offset(ctx, p, q) for p, q in zip(x, self.centre, strict=True))
        if self.upright:
            dx, dy = dy, -dx
        c, big, small = _distance(ctx, a, b), max(a, b), min(a, b)
        sign = _sign(ctx, dx, dy, side, float(focus(a, b)))
        up = dy * sign
        if ctx is FLOAT:
            right, left = offset(ctx, dx, c) + 1j * up, offset(ctx, dx, -c) + 1j * up
            root = np.sqrt(right) * np.sqrt(left)
            z = dx + 1j * up
        else:
            root = ctx.sqrt(ctx.mpc(dx - c, up)) * ctx.sqrt(ctx.mpc(dx + c, up))
            z = ctx.mpc(dx, up)
        w = (z + root) / (ctx.number(big) + ctx.number(small))
        w, root = _mirrored(ctx, w, sign), _mirrored(ctx, root, sign)
        if self.upright:
            return 1j * w, 1j * root
        return w, root


def _sign(ctx: Any, dx: Any, dy: Any, side: Any, c: float) -> Any:
    """Return -1 in the lower half plane, +1 elsewhere; on the cut the side decides."""
    if ctx is FLOAT:
        sign = np.where(dy < 0.0, -1.0, 1.0)
        if side is None or c == 0.0:
            return sign
        on = (np.abs(dy) <= ROUNDING * (np.abs(dx) + c)) & (np.abs(dx) <= c)
        # a point a rounding off the cut is meant on the side that is said, not on the other
        return np.where(on & (side != 0), np.where(side * sign > 0, sign, -sign), sign)
    if dy == 0 and side is not None:
        return -1 if side < 0 else 1
    return -1 if dy < 0 else 1


def _mirrored(ctx: Any, w: Any, sign: Any) -> Any:
    """Return conj(w) where sign is -1."""
    if ctx is FLOAT:
        mirrored: Any = w.real + 1j * (sign * w.imag)
        return mirrored
    return w if sign > 0 else ctx.conj(w)


def _distance(ctx: Any, a: Exact, b: Exact) -> Any:
    """Return c: exact enough for `offset` in float64, to all digits else."""
    if ctx is FLOAT:
        return focus(a, b)
    big, small = ctx.number(max(a, b)), ctx.number(min(a, b))
    return ctx.sqrt((big - small) * (big + small))


@lru_cache(maxsize=256)
def focus(a: Exact, b: Exact) -> Fraction:
    """Return sqrt(|a^2 - b^2|), to 40 digits or exactly.

    >>> focus(5, 3), focus(1, 0)
    (Fraction(4, 1), Fraction(1, 1))
    """
    square = abs(rational(a) ** 2 - rational(b) ** 2)
    n, d = square.numerator, square.denominator
    if math.isqrt(n) ** 2 == n and math.isqrt(d) ** 2 == d:
        return Fraction(math.isqrt(n), math.isqrt(d))
    scale = 10**40
    shift = max(0, (d.bit_length() - n.bit_length()) // 2)  # keep the digits of small roots
    return Fraction(math.isqrt((n * scale**2 << 2 * shift) // d), scale << shift)


@registered("elliptic-multipole")
@dataclass(frozen=True, slots=True, kw_only=True)
class EllipticMultipole(_Outside):
    """Re w^-n, Im w^-n or log |w| (n = 0) outside an ellipse; `elliptic_multipole` makes one."""

    n: int
    part: str
    semi_axes: tuple[Exact, ...]
    centre: tuple[Exact, ...] = (0, 0)

    def __post_init__(self) -> None:
        """Check degree, part and body."""
        object.__setattr__(self, "n", whole(self.n, "n", 0, HIGHEST))
        if self.part not in ("re", "im") or (self.n == 0 and self.part == "im"):
            raise FieldError(f'part must be "re" or "im" ("re" for n = 0, log |w|), got {self.part!r}')
        self._body()

    @property
    def growth(self) -> float:
        """Decays like |x|^-n; logarithmic for n = 0."""
        return -float(self.n)

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The foci, or the centre of a disc."""
        kind: Any = "pole" if self.n else "log"
        return self._foci(Singularity(point=self._middle(), exponent=-float(self.n), kind=kind))

    @property
    def formula(self) -> str:
        """Such as ``Re w^-2, w = (z + sqrt(z^2 - 3))/3``."""
        name = f"{self.part.capitalize()} w^-{self.n}" if self.n else "log |w|"
        return f"{name} [w outside the ellipse {show_point(self.semi_axes)} about {show_point(self.centre)}]"

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        w, _ = self._map(ctx, x, side)
        if self.n == 0:
            return ctx.log(ctx.hypot(w.real, w.imag))
        power = _power(1 / w, self.n)
        return power.real if self.part == "re" else power.imag

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        w, s = self._map(ctx, x, side)
        slope = 1 / s if self.n == 0 else -self.n * _power(1 / w, self.n) / s
        return _as_gradient(slope, self.part)

    def conjugate(self) -> Field:
        """Return the other part: Re goes to Im, Im to -Re."""
        if self.n == 0:
            raise FieldError(f"{self.formula} has no conjugate: the angle grows by 2 pi with every turn")
        other = "im" if self.part == "re" else "re"
        twin = EllipticMultipole(n=self.n, part=other, semi_axes=self.semi_axes, centre=self.centre)
        return twin if self.part == "re" else combined((-1, twin))


@registered("flow-past")
@dataclass(frozen=True, slots=True, kw_only=True)
class FlowPast(_Outside):
    """Re F (potential) or Im F (stream) of the flow past an ellipse; `flow_past` makes one."""

    semi_axes: tuple[Exact, ...]
    velocity: tuple[Exact, ...]
    circulation: Exact = 0
    part: str = "potential"
    centre: tuple[Exact, ...] = (0, 0)

    def __post_init__(self) -> None:
        """Check body, velocity and part."""
        self._body()
        object.__setattr__(self, "velocity", exact_point(self.velocity, "velocity", (2,)))
        object.__setattr__(self, "circulation", exact(self.circulation, "circulation"))
        if self.part not in ("potential", "stream"):
            raise FieldError(f'part must be "potential" or "stream", got {self.part!r}')
        if self.part == "potential" and self.circulation:
            raise FieldError(
                "the potential of a flow with circulation grows with every turn and is no function; take "
                'part="stream"'
            )

    @property
    def growth(self) -> float:
        """Linear."""
        return 1.0

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The foci, or the centre of a disc."""
        return self._foci(Singularity(point=self._middle(), exponent=-1.0, kind="pole"))

    @property
    def formula(self) -> str:
        """Such as ``potential of the flow (1, 0) past the ellipse (2, 1) about (0, 0)``."""
        turning = f", circulation {show(self.circulation)}," if self.circulation else ""
        return (
            f"[{self.part} of the flow {show_point(self.velocity)}{turning} past the ellipse "
            f"{show_point(self.semi_axes)} about {show_point(self.centre)}]"
        )

    def _velocity(self, ctx: Any) -> tuple[Any, Any]:
        """Return V and conj(V)."""
        p, q = (ctx.number(v) for v in self.velocity)
        return (complex(p, q), complex(p, -q)) if ctx is FLOAT else (ctx.mpc(p, q), ctx.mpc(p, -q))

    def _scale(self, ctx: Any) -> Any:
        return (ctx.number(self.semi_axes[0]) + ctx.number(self.semi_axes[1])) / 2

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        w, _ = self._map(ctx, x, side)
        v, conj = self._velocity(ctx)
        total = self._scale(ctx) * (conj * w + v / w)
        if self.part == "potential":
            return total.real
        if not self.circulation:
            return total.imag
        turn = ctx.number(self.circulation) / (2 * ctx.pi)
        return total.imag - turn * ctx.log(ctx.hypot(w.real, w.imag))

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        w, s = self._map(ctx, x, side)
        v, conj = self._velocity(ctx)
        slope = self._scale(ctx) * (conj * w - v / w)
        if self.circulation:
            slope = slope - 1j * (ctx.number(self.circulation) / (2 * ctx.pi))
        return _as_gradient(slope / s, "re" if self.part == "potential" else "im")

    def conjugate(self) -> Field:
        """Return the stream function of a potential, minus the potential of a stream function."""
        other = "stream" if self.part == "potential" else "potential"
        twin = FlowPast(
            semi_axes=self.semi_axes, velocity=self.velocity, circulation=self.circulation, part=other,
            centre=self.centre,
        )  # fmt: skip
        return twin if self.part == "potential" else combined((-1, twin))


def elliptic_multipole(
    n: int, part: str = "re", *, semi_axes: Iterable[Number], centre: Iterable[Number] = (0, 0)
) -> EllipticMultipole:
    """Return Re w^-n or Im w^-n, for n = 0 log |w|: |w| = 1 on the ellipse, w ~ 2 z/(a + b) far away.

    Parameters
    ----------
    n
        0 to 200.
    part
        "re" or "im".
    semi_axes
        Along x and y; equal for a disc, one of them 0 for a screen.
    centre
        Of the ellipse.

    Raises
    ------
    FieldError
        If an argument is out of range.

    Examples
    --------
    >>> u = elliptic_multipole(2, semi_axes=(2, 1))
    >>> u.value([[2.0, 0.0], [0.0, 1.0], [2.5, 0.0]]).round(12).tolist()
    [1.0, -1.0, 0.48612181134]
    """
    return EllipticMultipole(n=n, part=part, semi_axes=semi_axes, centre=centre)  # type: ignore[arg-type]  # made exact


def flow_past(
    semi_axes: Iterable[Number],
    velocity: Iterable[Number],
    circulation: Number = 0,
    *,
    part: str = "potential",
    centre: Iterable[Number] = (0, 0),
) -> FlowPast:
    """Return potential or stream function of the plane flow past an ellipse, disc or screen.

    Parameters
    ----------
    semi_axes, centre
        The body, see `elliptic_multipole`.
    velocity
        grad of the potential far away.
    circulation
        Line integral of the velocity around the body, counter-clockwise; stream function only.
    part
        "potential" (no flux through the body) or "stream" (0 on the body; velocity = (d/dy, -d/dx)).

    Raises
    ------
    FieldError
        If an argument is out of range, or a potential with circulation is asked for.

    Examples
    --------
    >>> flow_past((1, 1), (1, 0)).value([[-1.0, 0.0], [2.0, 0.0]]).tolist()
    [-2.0, 2.5]
    """
    given: dict[str, Any] = {"velocity": velocity, "circulation": circulation, "centre": centre}  # made exact
    return FlowPast(semi_axes=semi_axes, part=part, **given)  # type: ignore[arg-type]


def _power(base: Any, n: int) -> Any:
    """Return base^n, n >= 1, by squaring: n roundings at most."""
    result, square = None, base
    while n:
        if n & 1:
            result = square if result is None else result * square
        n >>= 1
        if n:
            square = square * square
    return result


def _as_gradient(slope: Any, part: str) -> tuple[Any, Any]:
    """Return the gradient of Re f or Im f from f'."""
    return (slope.real, -slope.imag) if part == "re" else (slope.imag, slope.real)
