"""Fields about the tip of a circular cone: R^nu P_nu(cos t), nu the smallest exponent for its surface.

P_nu is Legendre's function of a degree nu that is no whole number. On the cone t = A it vanishes
("dirichlet": P_nu(cos A) = 0) or has no slope ("neumann": P_nu'(cos A) = 0, nu > 0). With X = (1 - c)/2 and
Y = (1 + c)/2,

    P_nu(c) = sum_n a_n X^n,    a_0 = 1,    a_{n+1} = a_n (n - nu)(n + nu + 1)/(n + 1)^2,
            = (sin(pi nu)/pi) sum_n a_n Y^n [ log Y + s_n ],    s_0 = psi(-nu) + psi(nu + 1) - 2 psi(1),
              s_{n+1} = s_n + 1/(n - nu) + 1/(n + 1 + nu) - 2/(n + 1)

(NIST DLMF 14.3.1, 15.8.10; from memory, checked against quadrature in the tests). The first is used for c >=
0, the second for c < 0, so that X or Y is at most 1/2. For n >= nu the |a_n| fall, hence what is left out
after N terms is at most 2 |a_N| 2^-N, times |log Y + s_N| plus the rest of s, which grows more slowly than 2
log n. X and Y are formed as s^2/(2 R (R + |z|)), s the distance from the axis: no difference cancels.

Derivatives: (1/s) du/ds = R^{nu-2} (nu P - c P'), du/dz = R^{nu-1} (nu c P + 4 X Y P').

References
----------
Hobson 1931, The Theory of Spherical and Ellipsoidal Harmonics, ch. IX; Jackson, Classical Electrodynamics,
section 3.4 (both from memory, unchecked).
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from functools import lru_cache
from typing import Any, Literal

import mpmath

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields._precision import working
from laplace_verify.fields.base import Field
from laplace_verify.fields.edges import Line
from laplace_verify.fields.exact import Exact, exact, rational, show
from laplace_verify.fields.singular import Enclosure, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["Cone", "cone", "cone_exponent"]

Surface = Literal["dirichlet", "neumann"]
FLOAT_DIGITS = 30  # in which the coefficients of the float64 formula are computed
SCAN = 15  # digits in which roots are bracketed
HALVINGS = 20  # of a bracket
HALF = Fraction(1, 2)


@registered("cone")
@dataclass(frozen=True, slots=True, kw_only=True)
class Cone(Field):
    """R^nu P_nu(cos t) for the cone t = share * pi; `cone` makes one."""

    share: Exact
    condition: Surface = "dirichlet"

    def __post_init__(self) -> None:
        """Check the angle and the condition."""
        object.__setattr__(self, "share", _checked(self.share, self.condition))

    @property
    def dim(self) -> int:
        """Three."""
        return 3

    @property
    def exponent(self) -> float:
        """The degree nu."""
        return float(_degree(working(FLOAT_DIGITS), self.share, self.condition))

    @property
    def formula(self) -> str:
        """Such as ``R^nu P_nu(cos t), nu = 0.4631``."""
        return f"R^nu P_nu(cos t), nu = {self.exponent:.6g}"

    @property
    def growth(self) -> float:
        """The degree nu."""
        return self.exponent

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The tip."""
        return (Singularity(point=(0.0, 0.0, 0.0), exponent=self.exponent, kind="power"),)

    @property
    def edges(self) -> tuple[Line, ...]:
        """The lower half of the axis, where P_nu is infinite like a logarithm."""
        return (Line(point=(0.0, 0.0, 0.0), direction=(0.0, 0.0, -1.0), exponent=0.0, ray=True),)

    def _valid(self, points: Array) -> BoolArray:
        """Everywhere but on the lower half of the axis."""
        valid: BoolArray = (points[:, :2] != 0.0).any(axis=1) | (points[:, 2] >= 0.0)
        return valid

    def _legendre(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, ...]:
        """Return R (1 where it vanishes), c, 4 X Y = sin^2 t, nu, P_nu(c) and P_nu'(c)."""
        nu, upper, lower = _coefficients(ctx, self.share, self.condition)
        flat = x[0] * x[0] + x[1] * x[1]
        far = ctx.sqrt(flat + x[2] * x[2])
        far = ctx.where(far > 0, far, 1 + 0 * far)
        c = x[2] / far
        small = flat / (2 * far * (far + abs(x[2])))
        above = x[2] >= 0
        value, slope = _horner(upper, small)
        plain, turned = (_horner(row, small) for row in lower)
        positive = ctx.where(small > 0, small, 1 + 0 * small)  # 0 on the upper half of the axis
        log = ctx.log(positive)
        below = plain[0] * log + turned[0]
        rise = plain[1] * log + turned[1] + plain[0] / positive
        return (
            far, c, flat / (far * far), nu,
            ctx.where(above, value, below), ctx.where(above, -slope / 2, rise / 2),
        )  # fmt: skip

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        far, _, _, nu, value, _ = self._legendre(ctx, x)
        at_tip = (x[0] == 0) & (x[1] == 0) & (x[2] == 0)
        return ctx.where(at_tip, 0 * far, far**nu * value)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002  # no cut
        far, c, square, nu, value, slope = self._legendre(ctx, x)
        power = far ** (nu - 1)
        across = power * (nu * value - c * slope) / far
        at_tip = (x[0] == 0) & (x[1] == 0) & (x[2] == 0)
        along = ctx.where(at_tip, 0 * far, power * (nu * c * value + square * slope))
        return across * x[0], across * x[1], along


def _checked(share: Number, condition: Surface) -> Exact:
    """Return the angle as a share of pi, exact."""
    if condition not in ("dirichlet", "neumann"):
        raise FieldError(f'condition must be "dirichlet" or "neumann", got {condition!r}')
    number = exact(share, "share")
    if not 0.02 <= number <= 0.99:
        raise FieldError(f"share, the half-angle over pi, must lie between 0.02 and 0.99, got {show(number)}")
    if rational(number) == HALF:
        raise FieldError(
            "a cone of half-angle pi/2 is a plane: fields are polynomials there, see fields.solid"
        )
    return number


def _terms(nu: Any, bits: int) -> list[Any]:
    """Return a_0, a_1, ... until 2 |a_N| 2^-N stays below 2^-bits."""
    found = [nu * 0 + 1]
    while len(found) <= nu or abs(found[-1]) > mpmath.mpf(2) ** (len(found) - bits):
        n = len(found) - 1
        found.append(found[-1] * (n - nu) * (n + nu + 1) / (n + 1) ** 2)
    return found


def _lower_terms(ctx: Any, nu: Any, terms: list[Any]) -> tuple[list[Any], list[Any]]:
    """Return the coefficients of log Y and of 1 in the second expansion."""
    front = ctx.sinpi(nu) / ctx.pi
    s = ctx.psi(0, -nu) + ctx.psi(0, nu + 1) - 2 * ctx.psi(0, 1)
    plain, turned = [], []
    for n, a in enumerate(terms):
        plain.append(front * a)
        turned.append(front * a * s)
        s = s + 1 / (n - nu) + 1 / (n + 1 + nu) - ctx.mpf(2) / (n + 1)
    return plain, turned


def _horner(coefficients: list[Any], t: Any) -> tuple[Any, Any]:
    """Return sum c_n t^n and its derivative."""
    value, slope = 0 * t, 0 * t
    for c in reversed(coefficients):
        slope = slope * t + value
        value = value * t + c
    return value, slope


@lru_cache(maxsize=128)
def _coefficients(
    ctx: Any, share: Exact, condition: Surface
) -> tuple[Any, list[Any], tuple[list[Any], list[Any]]]:
    """Return nu and the coefficients of both expansions as numbers of the context."""
    precise = working(FLOAT_DIGITS) if ctx is FLOAT else ctx
    nu = _degree(precise, share, condition)
    terms = _terms(nu, 64 if ctx is FLOAT else precise.prec + 8)
    lower = _lower_terms(precise, nu, terms)
    if ctx is not FLOAT:
        return nu, terms, lower
    as_floats = [[float(c) for c in row] for row in (terms, *lower)]
    return float(nu), as_floats[0], (as_floats[1], as_floats[2])


def _on_cone(ctx: Any, nu: Any, share: Exact, condition: Surface) -> Any:
    """Return P_nu or P_nu' on the cone, up to a factor that does not vanish."""
    angle = ctx.number(share) * ctx.pi / 2
    small = ctx.sin(angle) ** 2 if share <= HALF else ctx.cos(angle) ** 2
    terms = _terms(nu, ctx.prec + 8)
    if share <= HALF:
        return _horner(terms, small)[condition == "neumann"]
    plain, turned = (_horner(row, small) for row in _lower_terms(ctx, nu, terms))
    if condition == "dirichlet":
        return plain[0] * ctx.log(small) + turned[0]
    return plain[1] * ctx.log(small) + turned[1] + plain[0] / small


@lru_cache(maxsize=64)
def _bracket(share: Exact, condition: Surface) -> tuple[Any, Any]:
    """Return two numbers close together with the smallest positive root nu between them.

    Between 0 and the first root the function on the cone keeps one sign (the eigenvalues of Legendre's
    equation on 0 < t < A are simple), so the first change met from 0 on is the first root. Steps of a
    quarter of 1/A meet it: consecutive roots are about pi/A apart.
    """
    ctx = working(SCAN)
    step = ctx.mpf(0.25) / (ctx.number(share) * ctx.pi)
    low = step / 8  # P_nu' ~ nu at nu = 0: begin a little above
    first = _sign(ctx, low, share, condition)
    while _sign(ctx, low + step, share, condition) == first:
        low = low + step
    high = low + step
    for _ in range(HALVINGS):
        middle = (low + high) / 2
        low, high = (middle, high) if _sign(ctx, middle, share, condition) == first else (low, middle)
    return low, high


def _sign(ctx: Any, nu: Any, share: Exact, condition: Surface) -> int:
    """Return the sign of the function on the cone."""
    return int(ctx.sign(_on_cone(ctx, nu, share, condition)))


@lru_cache(maxsize=128)
def _degree(ctx: Any, share: Exact, condition: Surface) -> Any:
    """Return the smallest positive root nu; all but its last eight digits are sure, by a change of sign.

    Up to `FLOAT_DIGITS` it is found once; more digits start from those.
    """
    base, margin = working(FLOAT_DIGITS), _margin(ctx)
    if ctx.dps < base.dps:
        return +ctx.convert(_degree(base, share, condition))
    if ctx.dps == base.dps:
        low, high = (ctx.convert(end) for end in _bracket(share, condition))
    else:
        near = ctx.convert(_degree(base, share, condition))
        low, high = near - _margin(base), near + _margin(base)
    nu = ctx.findroot(
        lambda n: _on_cone(ctx, n, share, condition), (low, high), solver="secant", tol=margin, verify=False
    )
    around = (_sign(ctx, nu - margin, share, condition), _sign(ctx, nu + margin, share, condition))
    if not (around[0] == -around[1] != 0 and low - margin <= nu <= high + margin):
        raise FieldError(f"the exponent of a cone of half-angle {show(share)} pi did not settle")
    return nu


def _margin(ctx: Any) -> Any:
    """Return how far from a root the sign of the function on the cone is sure."""
    return ctx.mpf(10) ** (8 - ctx.dps)


def cone_exponent(share: Number, condition: Surface = "dirichlet", digits: int = 30) -> Enclosure:
    """Return the smallest exponent nu > 0 of R^nu P_nu(cos t) at a cone tip, enclosed by a change of sign.

    Parameters
    ----------
    share
        Half-angle of the region over pi, between 0.02 and 0.99 and not 1/2; beyond 1/2 the region is the
        outside of a cone.
    condition : {"dirichlet", "neumann"}
        On the cone.
    digits
        Decimal places wanted.

    Raises
    ------
    FieldError
        If an argument is out of range.

    Examples
    --------
    >>> value, radius, basis = cone_exponent("3/4")
    >>> mpmath.nstr(value, 12), bool(radius < 1e-30), basis
    ('0.46309856178', True, 'tail bound')
    """
    ctx = working(digits)
    nu = _degree(ctx, _checked(share, condition), condition)
    as_global = mpmath.mp.make_mpf  # a number of the global type that keeps every digit
    return Enclosure(as_global(nu._mpf_), as_global(_margin(ctx)._mpf_), "tail bound")


def cone(share: Number, condition: Surface = "dirichlet") -> Cone:
    """Return R^nu P_nu(cos t) about the origin, with the smallest nu > 0 that suits the cone t = share pi.

    Parameters
    ----------
    share
        Half-angle over pi, between 0.02 and 0.99 and not 1/2; a string such as "3/4" is exact. The region is
        t < share pi, about the upper half of the z axis.
    condition : {"dirichlet", "neumann"}
        u = 0 on the cone, or no flux through it.

    Raises
    ------
    FieldError
        If an argument is out of range.

    Examples
    --------
    >>> u = cone("3/4")
    >>> round(u.exponent, 6), u.value([[0.0, 0.0, 1.0]]).tolist()
    (0.463099, [1.0])
    >>> bool(abs(u.value([[1.0, 0.0, -1.0]])[0]) < 1e-15)
    True
    """
    return Cone(share=share, condition=condition)  # type: ignore[arg-type]  # made exact there
