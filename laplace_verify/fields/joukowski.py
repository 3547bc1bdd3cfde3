"""Fields outside a disc, an ellipse or a straight screen, or between confocal ellipses: Joukowski's map.

The exterior of the ellipse with semi-axes a, b is the image of |w| > 1 under

    z = (a + b)/2 w + (a - b)/2 /w,     w = (z + s)/(a + b),     s = sqrt(z - c) sqrt(z + c),  c^2 = a^2 -
    b^2,

with dw/dz = w/s. Principal roots put the branch cut on the segment between the foci +-c, inside the body; of
a screen (b = 0) it is the screen itself. The roots are taken of offsets from the foci, in the upper half
plane, and mirrored, so nothing cancels near the tips and both sides of a screen are reached. If b > a the
plane is turned by a quarter. A disc has w = z/a and no cut.

Multipoles and flows are those of `outside`; (a + b)/2 is the logarithmic capacity of the ellipse. Between
two ellipses with the same foci, log |w| is constant on both, and with elliptic coordinates x + i y = c
cosh(mu + i nu), mu = mu_0 on the ellipse, w = e^(mu - mu_0 + i nu): cosh(n mu) cos(n nu) is half the sum of
e^(n mu_0) Re w^n and e^(-n mu_0) Re w^-n.

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
from typing import Any, Literal

import numpy as np

from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.exact import Exact, exact_point, offset, rational
from laplace_verify.fields.motions import show_point
from laplace_verify.fields.outside import Flow, Mapped, Multipole
from laplace_verify.fields.singular import Cut, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["EllipticMultipole", "FlowPast", "elliptic_multipole", "flow_past"]

ROUNDING = 16 * float(np.finfo(np.float64).eps)  # of a point that was computed to lie on the cut


class _Ellipse(Mapped):
    """The ellipse that a field lies outside of; a subclass has `semi_axes` and `centre`."""

    __slots__ = ()

    semi_axes: tuple[Exact, ...]
    centre: tuple[Exact, ...]

    def _check_body(self) -> None:
        """Make centre and semi-axes exact and check them."""
        object.__setattr__(self, "centre", exact_point(self.centre, "centre", (2,)))
        object.__setattr__(self, "semi_axes", exact_point(self.semi_axes, "semi_axes", (2,)))
        if not (min(self.semi_axes) >= 0 and max(self.semi_axes) > 0):
            raise FieldError(f"semi_axes must be >= 0 and not both zero, got {show_point(self.semi_axes)}")

    @property
    def body(self) -> str:
        """The ellipse in words."""
        return f"the ellipse {show_point(self.semi_axes)} about {show_point(self.centre)}"

    def _capacity(self, ctx: Any) -> Any:
        return (ctx.number(self.semi_axes[0]) + ctx.number(self.semi_axes[1])) / 2

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

    def _foci(self, exponent: float, kind: Literal["pole", "log"]) -> tuple[Singularity, ...]:
        """Return the foci, where u ~ sqrt(r); of a disc its centre, where u ~ r^exponent or log r."""
        (dx, dy), c = self._focal()
        x, y = (float(p) for p in self.centre)
        if c == 0.0:
            at_centre = Singularity(point=(x, y), exponent=exponent, kind=kind)
            return (at_centre,) if exponent <= 0.0 else ()
        return tuple(
            Singularity(point=(x + sign * c * dx, y + sign * c * dy), exponent=0.5, kind="power")
            for sign in (-1.0, 1.0)
        )

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
            # offsets from the foci themselves: that from the centre has lost digits next to a focus
            along, middle = x[self.upright], rational(self.centre[self.upright])
            right, left = offset(ctx, along, middle + c) + 1j * up, offset(ctx, along, middle - c) + 1j * up
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
class EllipticMultipole(_Ellipse, Multipole):
    """Re w^-n, Im w^-n or log |w| (n = 0) outside an ellipse; `elliptic_multipole` makes one."""

    n: int
    part: str
    semi_axes: tuple[Exact, ...]
    centre: tuple[Exact, ...] = (0, 0)

    def __post_init__(self) -> None:
        """Check degree, part and body."""
        self._check_multipole()
        self._check_body()

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The foci, or the centre of a disc."""
        kind: Any = "pole" if self.n else "log"
        return self._foci(-float(self.n), kind)


@registered("flow-past")
@dataclass(frozen=True, slots=True, kw_only=True)
class FlowPast(_Ellipse, Flow):
    """Re F (potential) or Im F (stream) of the flow past an ellipse; `flow_past` makes one."""

    semi_axes: tuple[Exact, ...]
    velocity: tuple[Exact, ...]
    circulation: Exact = 0
    part: str = "potential"
    centre: tuple[Exact, ...] = (0, 0)

    def __post_init__(self) -> None:
        """Check body, velocity and part."""
        self._check_body()
        self._check_flow()

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The foci, or the centre of a disc."""
        return self._foci(-1.0, "pole")


def elliptic_multipole(
    n: int, part: str = "re", *, semi_axes: Iterable[Number], centre: Iterable[Number] = (0, 0)
) -> EllipticMultipole:
    """Return Re w^-n or Im w^-n, for n = 0 log |w|: |w| = 1 on the ellipse, w ~ 2 z/(a + b) far away.

    Parameters
    ----------
    n
        -200 to 200; below 0 the field grows like |z|^-n: between ellipses with the same foci.
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
