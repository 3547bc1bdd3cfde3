"""Solid harmonics of space: r^l P_l^m(cos t) cos or sin (m phi), t from the z axis, phi from the x axis.

Schmidt's seminormalisation, without the sign (-1)^m: with N = sqrt((2 - [m = 0]) (l - m)!/(l + m)!)

    C_lm + i S_lm = N r^l P_l^m(cos t) e^{i m phi},        sum over m of C^2 + S^2 = r^(2l),  so |u| <= r^l.

In Cartesian coordinates, no angle is formed: start from C_mm + i S_mm = sqrt(2 (2m-1)!!/(2m)!!) (x + i y)^m
and go up,

    sqrt(l^2 - m^2) Y_l = (2l - 1) z Y_{l-1} - sqrt((l-1)^2 - m^2) r^2 Y_{l-2},

which is stable (the Legendre recurrence at fixed order). Derivatives are solid harmonics of degree l - 1:

    d/dz Y_lm = sqrt(l^2 - m^2) Y_{l-1,m},
    d/dx C_lm = (1/2) [-a C_{l-1,m+1} + b C_{l-1,m-1}],    d/dy C_lm = (1/2) [-a S_{l-1,m+1} - b S_{l-1,m-1}],
    d/dx S_lm = (1/2) [-a S_{l-1,m+1} + b S_{l-1,m-1}],    d/dy S_lm = (1/2) [ a C_{l-1,m+1} + b C_{l-1,m-1}],

a = sqrt((l-m)(l-m-1)), b = sqrt((l+m)(l+m-1)), b times sqrt 2 if m = 1; for m = 0 grad_xy = -sqrt(l(l-1)/2)
(C, S)_{l-1,1} (derived here from (d/dx + i d/dy) r^l P_l^m e^{i m phi} = -r^{l-1} P_{l-1}^{m+1} e^{i (m+1)
phi}; compare Hobson, Spherical and Ellipsoidal Harmonics, 1931, ch. III, from memory, unchecked).
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import Any

from laplace_verify.fields.base import Field
from laplace_verify.fields.exact import whole
from laplace_verify.fields.polynomials import complex_power
from laplace_verify.fields.specs import registered

__all__ = ["Solid", "solid"]

HIGHEST = 500


@registered("solid")
@dataclass(frozen=True, slots=True, kw_only=True)
class Solid(Field):
    """Real solid harmonic of degree l and order m (m < 0: the sine one); `solid` makes one."""

    l: int  # noqa: E741  # the symbol of the literature
    m: int

    def __post_init__(self) -> None:
        """Check degree and order."""
        object.__setattr__(self, "l", whole(self.l, "l", 0, HIGHEST))
        object.__setattr__(self, "m", whole(self.m, "m", -self.l, self.l))

    @property
    def dim(self) -> int:
        """Three."""
        return 3

    @property
    def degree(self) -> int:
        """The degree l."""
        return self.l

    @property
    def formula(self) -> str:
        """Such as ``r^3 P_3^2(cos t) sin(2 phi)``, normalisation left out."""
        m = abs(self.m)
        around = f" {'sin' if self.m < 0 else 'cos'}({m} phi)" if m else ""
        return f"r^{self.l} P_{self.l}{f'^{m}' if m else ''}(cos t){around}"

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        return pair(ctx, x, self.l, abs(self.m))[1 if self.m < 0 else 0]

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        """Return the derivatives by the formulas of the module."""
        degree, m = self.l, abs(self.m)
        zero = 0 * x[0]
        if degree == 0:
            return zero, zero, zero
        sine = self.m < 0
        along_z = _root(ctx, degree**2 - m**2) * pair(ctx, x, degree - 1, m)[sine]
        c_up, s_up = pair(ctx, x, degree - 1, m + 1)
        if m == 0:
            factor = -_root(ctx, Fraction(degree * (degree - 1), 2))
            return factor * c_up, factor * s_up, along_z
        c_down, s_down = pair(ctx, x, degree - 1, m - 1)
        a = _root(ctx, (degree - m) * (degree - m - 1)) / 2
        b = _root(ctx, (degree + m) * (degree + m - 1) * (2 if m == 1 else 1)) / 2
        if sine:
            return b * s_down - a * s_up, a * c_up + b * c_down, along_z
        return b * c_down - a * c_up, -(a * s_up + b * s_down), along_z


def solid(l: int, m: int) -> Solid:  # noqa: E741  # the symbol of the literature
    """Return the real solid harmonic r^l P_l^m(cos t) cos(m phi), or sin(|m| phi) for m < 0.

    Schmidt seminormalised without the sign (-1)^m, so that |u| <= r^l: (1, 0) is z, (1, 1) is x, (1, -1) is
    y.

    Parameters
    ----------
    l : int
        Degree, 0 to 500.
    m : int
        Order, -l to l.

    Examples
    --------
    >>> solid(1, -1).value([[1.0, 2.0, 3.0]]).tolist()
    [2.0]
    >>> solid(2, 0).value([[1.0, 0.0, 0.0], [0.0, 0.0, 1.0]]).tolist()  # z^2 - (x^2 + y^2)/2
    [-0.5, 1.0]

    Raises
    ------
    FieldError
        If degree or order are out of range.
    """
    return Solid(l=l, m=m)


def pair(ctx: Any, x: tuple[Any, ...], degree: int, m: int) -> tuple[Any, Any]:
    """Return C_lm and S_lm at coordinates x, zero if m > degree."""
    if m > degree:
        return 0 * x[0], 0 * x[0]
    square = x[0] * x[0] + x[1] * x[1] + x[2] * x[2]
    start = ctx.number(1 if m == 0 else 2)
    for k in range(1, m + 1):
        start = start * (2 * k - 1) / (2 * k)
    below, legendre = 0 * square, 0 * square + ctx.sqrt(start)
    for k in range(m + 1, degree + 1):
        up = (2 * k - 1) * x[2] * legendre - _root(ctx, (k - 1) ** 2 - m**2) * square * below
        below, legendre = legendre, up / _root(ctx, k**2 - m**2)
    re, im = complex_power(x[0], x[1], m)
    return legendre * re, legendre * im


def _root(ctx: Any, number: int | Fraction) -> Any:
    """Return the square root of an exact number."""
    return ctx.sqrt(ctx.number(number))
