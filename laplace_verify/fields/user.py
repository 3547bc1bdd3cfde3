"""A user's own field: a Python function of the coordinates, or a formula string.

Nothing is known about it: it may not even be harmonic. It is `opaque`, and who relies on it must check. The
derivative of a function given without gradient is a central difference of sixth order,

    f'(x) = [45 (f_1 - f_-1) - 9 (f_2 - f_-2) + (f_3 - f_-3)]/(60 h) + O(h^6),    f_j = f(x + j h),

in float64 with the longest h of 2^-8, 2^-12, ... that the next one confirms: error about 1e-13 of max|f| for
functions that vary over lengths of order one, 1e-11 of max|f|/L for those that vary over shorter lengths L.
In precise numbers with twice the digits and h = 10^(-digits/3).
"""

from __future__ import annotations

import inspect
from collections.abc import Callable, Iterable
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, as_values
from laplace_verify.contexts import FLOAT, Number, Precise
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.exact import exact_point, whole
from laplace_verify.fields.formula import CARTESIAN, Formula
from laplace_verify.fields.singular import Basis, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["FormulaField", "UserField", "field"]

STEP = 2.0**-8
FINER = 16.0  # from one step to the next
STEPS = 6  # the last is 2^-28: functions that vary over 1e-6
ROUNDING = 16 * np.finfo(np.float64).eps  # of a function, relative to its size
WEIGHTS = ((1, 45), (2, -9), (3, 1))  # over 60 h
MEND = (
    "write it with numpy's functions of single coordinates (np.exp(x) * np.cos(y)), without math.* and array "
    "methods, or give a formula string"
)


@registered("formula")
@dataclass(frozen=True, slots=True, kw_only=True)
class FormulaField(Field):
    """The field that a formula string spells; `field` makes one."""

    text: str
    dim: int
    singular: tuple[Singularity, ...] = ()

    def __post_init__(self) -> None:
        """Read the formula once, to refuse a bad one early."""
        whole(self.dim, "dim", 1, 3)
        needed = _dim_of(_parsed(self.text))
        if self.dim < needed:
            raise FieldError(f"formula {self.text!r} has {needed} coordinates, but dim = {self.dim}")
        if self.dim == 3 and "theta" in _parsed(self.text).variables:
            raise FieldError(f"theta belongs to the plane; write atan2(y, x) in {self.text!r}")
        object.__setattr__(self, "singular", _singular_points(self.singular, self.dim))

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """Those the user named."""
        return self.singular

    @property
    def opaque(self) -> bool:
        """True: nobody has checked that it is harmonic."""
        return True

    @property
    def formula(self) -> str:
        """The text."""
        return self.text

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        return _parsed(self.text).value(ctx, dict(zip(CARTESIAN, x, strict=False)))

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        return _parsed(self.text).gradient(ctx, dict(zip(CARTESIAN, x, strict=False)))

    def _why_no_conjugate(self) -> str:
        return ": for a formula of your own, give the conjugate as a formula too"


@dataclass(frozen=True, slots=True, kw_only=True)
class UserField(Field):
    """The field that a Python function computes; `field` makes one."""

    function: Callable[..., Any]
    slope: Callable[..., Any] | None
    dim: int
    singular: tuple[Singularity, ...] = ()

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """Those the user named."""
        return self.singular

    @property
    def basis(self) -> Basis:
        """Nobody knows what the function does."""
        return "uncertified"

    @property
    def opaque(self) -> bool:
        """True."""
        return True

    @property
    def formula(self) -> str:
        """The name of the function."""
        return f"{getattr(self.function, '__name__', 'f')}({', '.join(CARTESIAN[: self.dim])})"

    def spec(self) -> dict[str, Any]:
        """Refuse: a function is no data."""
        raise FieldError(f"{self.formula} cannot be written to a file; give a formula string")

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        result = self._call(self.function, ctx, x)
        return as_values(result, len(x[0]), error=FieldError, name=self.formula) if ctx is FLOAT else result

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        if self.slope is None:
            return tuple(self._difference(ctx, x, axis, side) for axis in range(self.dim))
        name = f"gradient of {self.formula}"
        if ctx is FLOAT and len(x[0]) == self.dim > 1:
            # (n, d) and (d, n) could not be told apart: ask for one point more
            more = self._gradient(ctx, tuple(np.append(c, c[0]) for c in x), side)
            return tuple(part[:-1] for part in more)
        parts = self._call(self.slope, ctx, x)
        if self.dim == 1 and np.ndim(parts) <= (1 if ctx is FLOAT else 0):
            parts = (parts,)
        if isinstance(parts, np.ndarray) and parts.shape == (len(np.atleast_1d(x[0])), self.dim):
            parts = tuple(parts.T) if ctx is FLOAT else tuple(parts[0])
        if not isinstance(parts, tuple | list | np.ndarray) or len(parts) != self.dim:
            raise FieldError(
                f"{name} must return a tuple of {self.dim} derivatives, got {type(parts).__name__}"
            )
        if ctx is FLOAT:
            return tuple(as_values(part, len(x[0]), error=FieldError, name=name) for part in parts)
        return tuple(_single(part) for part in parts)

    def _difference(self, ctx: Any, x: tuple[Any, ...], axis: int, side: Any) -> Any:
        """Return the central difference of sixth order along one axis."""
        if ctx is not FLOAT:
            ctx, x = _doubled(ctx, x)

        def with_step(h: Any) -> tuple[Any, Any]:
            """Return the difference and the size of what it is made of."""

            def moved(steps: int) -> Any:
                return self._value(ctx, (*x[:axis], x[axis] + steps * h, *x[axis + 1 :]), side)

            pairs = [(weight, moved(j), moved(-j)) for j, weight in WEIGHTS]
            total = sum(weight * (ahead - behind) for weight, ahead, behind in pairs)
            return total / (60 * h), abs(pairs[0][1]) + abs(pairs[0][2])

        if ctx is FLOAT:
            return _settled(with_step, self._steps(x))
        return with_step(ctx.mpf(10) ** -(ctx.digits // 6))[0]

    def _steps(self, x: tuple[Any, ...]) -> Array:
        """Return float64 steps: powers of two, at most a twentieth of the distance to a singular point."""
        distance = np.full(len(x[0]), np.inf)
        for s in self.singular:
            offsets = [c - p for c, p in zip(x, s.point, strict=True)]
            distance = np.minimum(distance, np.sqrt(sum(o * o for o in offsets)))
        steps: Array = np.minimum(STEP, 2.0 ** np.floor(np.log2(distance / 20)))
        return steps

    def _call(self, function: Callable[..., Any], ctx: Any, x: tuple[Any, ...]) -> Any:
        """Return what the user's function makes of the coordinates."""
        strict = x if ctx is FLOAT else tuple(_strict(ctx.digits).make_mpf(c._mpf_) for c in x)
        try:
            result = function(*strict)
        except FieldError:
            raise
        except Exception as cause:  # a user's function may raise anything
            if ctx is FLOAT:
                raise FieldError(f"{self.formula} raised {type(cause).__name__}: {cause}") from cause
            raise FieldError(f"{self.formula} cannot take precise numbers ({cause}): {MEND}") from cause
        return result if ctx is FLOAT or isinstance(result, tuple | list) else _single(result)


def field(
    f: Callable[..., Any] | str | Field,
    gradient: Callable[..., Any] | None = None,
    singular: Iterable[Singularity | Iterable[Number]] = (),
    dim: int | None = None,
) -> Field:
    """Return a field from a user's own function or formula string; that it is harmonic is not checked here.

    Parameters
    ----------
    f : callable or str
        ``f(x, y)`` over numpy arrays of shape (n,), written with numpy's functions so that precise numbers
        can be put in too (``np.pi`` holds 16 digits only). Or text such as ``"exp(pi*y)*sin(pi*x)"``, where
        decimals, pi and derivatives are exact; see `Formula`.
    gradient : callable, optional
        ``gradient(x, y)`` returning the partial derivatives, as a tuple or an array (n, d) or (d, n). Without
        it: a sixth-order difference with steps that adapt to lengths from 1e-6 up, right to about 1e-11 of
        max|f| per length over which `f` varies.
    singular : sequence of points or Singularity
        Where `f` has no value (plain points are taken as poles) or is not smooth.
    dim : int, optional
        Number of coordinates, if it cannot be told from the arguments of `f` or the names in the formula.

    Examples
    --------
    >>> import numpy as np
    >>> u = field(lambda x, y: np.exp(x) * np.cos(y))
    >>> str(u.at((1, 0), digits=20).real)[:10], bool(abs(u.gradient([[0.0, 0.0]])[0, 0] - 1) < 1e-12)
    ('2.71828182', True)
    >>> field("x**2 - y**2").gradient([[3.0, 1.0]]).tolist()
    [[6.0, -2.0]]

    Raises
    ------
    FieldError
        If the formula cannot be read, or the number of coordinates is unclear or wrong.
    """
    if isinstance(f, Field):
        return f
    if isinstance(f, str):
        if gradient is not None:
            raise FieldError("a formula differentiates itself: leave gradient out")
        formula = _parsed(f)
        count = _dim_of(formula) if dim is None else dim
        return FormulaField(text=formula.text, dim=count, singular=_singular_points(singular, count))
    if not callable(f):
        raise FieldError(f"a field is made of a function or a formula string, got {type(f).__name__}")
    if gradient is not None and not callable(gradient):
        raise FieldError(f"gradient must be a function of the coordinates, got {type(gradient).__name__}")
    count = whole(_dim_of_signature(f, dim), "dim", 1, 3)
    return UserField(function=f, slope=gradient, dim=count, singular=_singular_points(singular, count))


@lru_cache(maxsize=256)
def _parsed(text: str) -> Formula:
    """Return the formula of a text, read once."""
    return Formula.parse(text)


def _dim_of(formula: Formula) -> int:
    """Return the smallest dimension in which the formula makes sense."""
    names = formula.variables
    return 3 if "z" in names else 2 if names & {"y", "r", "theta"} else 1


def _dim_of_signature(f: Callable[..., Any], dim: int | None) -> Any:
    """Return the number of coordinates a function takes; `dim` must agree with it."""
    try:
        parameters = inspect.signature(f).parameters.values()
    except (TypeError, ValueError):  # numpy ufuncs and some builtins have none
        parameters = None
    if parameters is None or any(p.kind is p.VAR_POSITIONAL for p in parameters):
        if dim is None:
            raise FieldError("the number of coordinates cannot be told from the function: give dim=")
        return dim
    positional = [p for p in parameters if p.kind in (p.POSITIONAL_ONLY, p.POSITIONAL_OR_KEYWORD)]
    required = [p for p in positional if p.default is p.empty]
    count = len(required) or len(positional)
    if dim is not None and not len(required) <= dim <= len(positional):
        raise FieldError(
            f"dim = {dim}, but the function takes {count} coordinates: write f(x, y), one per axis"
        )
    return count if dim is None else dim


def _singular_points(points: Any, dim: int) -> tuple[Singularity, ...]:
    """Return singular points given as such, or as bare coordinates of poles."""
    if isinstance(points, str) or not isinstance(points, Iterable):
        raise FieldError(f"singular must be a list of points, got {points!r}")
    found = []
    for i, point in enumerate(points):
        if isinstance(point, Singularity):
            if len(point.point) != dim:
                raise FieldError(f"singular[{i}] must have {dim} coordinates, got {len(point.point)}")
            found.append(point)
        else:
            place = tuple(float(c) for c in exact_point(point, f"singular[{i}]", (dim,)))
            found.append(Singularity(point=place, exponent=-1.0, kind="pole"))
    return tuple(found)


def _settled(with_step: Callable[[Array], tuple[Array, Array]], h: Array) -> Array:
    """Return per point the difference with the longest step that the next finer one confirms.

    It is confirmed if the two agree to the rounding of the finer one, a few eps max|f|/h; differences of a
    function that varies within the step are far from that. Where none is confirmed, the pair that agrees
    best counts.
    """
    best, _ = coarse, _ = with_step(h)
    least, unsettled = np.full(len(h), np.inf), np.ones(len(h), dtype=np.bool_)
    for _ in range(1, STEPS):
        h = h / FINER
        fine, size = with_step(h)
        change = np.abs(fine - coarse)
        better = unsettled & (change < least)
        best, least = np.where(better, coarse, best), np.where(better, change, least)
        unsettled &= ~(change <= ROUNDING * size / h)
        if not unsettled.any():
            break
        coarse = fine
    return best


@lru_cache(maxsize=64)
def _strict(digits: int) -> Precise:
    """Return a context whose numbers refuse to become floats: math.exp(x) would drop all but 16 digits."""
    ctx = Precise(digits)

    def refuse(self: Any) -> float:  # noqa: ARG001  # a method
        raise TypeError("a function of the math module was called, which keeps only 16 digits")

    ctx.mpf.__float__ = refuse
    return ctx


def _doubled(ctx: Precise, x: tuple[Any, ...]) -> tuple[Precise, tuple[Any, ...]]:
    """Return a context of twice the digits and the coordinates in it, unchanged."""
    double = _strict(2 * ctx.digits + 20)
    return double, tuple(double.make_mpf(c._mpf_) for c in x)


def _single(result: Any) -> Any:
    """Return a number that numpy may have wrapped into an array."""
    return result.item() if isinstance(result, np.ndarray) and result.size == 1 else result
