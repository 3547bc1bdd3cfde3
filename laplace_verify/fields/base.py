"""What every field can do: a function u with div(K grad u) = 0, its gradient, any number of digits.

A family of fields is a frozen dataclass of parameters with three formulas written once over a number context
(`laplace_verify.contexts`): ``_value(ctx, x, side)``, ``_gradient(ctx, x, side)`` and, where u is not defined
everywhere, ``_valid(points)``. Here is the rest: checks of what comes in, blocks, refusal of points where u
has no value, and precision that is raised until two evaluations agree.
"""

from __future__ import annotations

import math
from abc import ABC, abstractmethod
from collections.abc import Iterable
from typing import TYPE_CHECKING, Any, ClassVar

import mpmath
import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array, BoolArray, as_points, blocks
from laplace_verify.contexts import FLOAT, MAX_DIGITS, Number, Precise
from laplace_verify.errors import FieldError
from laplace_verify.fields._inputs import Side, as_sides, columns, is_number, shortened, text_of
from laplace_verify.fields._precision import agreeing, real
from laplace_verify.fields._refusals import Marks, Place, refuse, refuse_infinite
from laplace_verify.fields.edges import Edge, Line, Ring
from laplace_verify.fields.exact import Exact, exact_point, whole
from laplace_verify.fields.sheets import Fan, Sheet
from laplace_verify.fields.singular import Basis, Cut, Enclosure, Singularity

if TYPE_CHECKING:
    from typing import Self

__all__ = ["Field"]


class Field(ABC):
    """A harmonic function of `dim` coordinates: value, gradient, singular points, exact parameters.

    Fields add, subtract and multiply by numbers; they move (`shifted`, `rotated`, `scaled`), invert
    (`inverted`) and, in the plane, have a conjugate (`conjugate`). Values scale with the field, gradients
    with value per length; angles are radians.

    >>> from laplace_verify import fields
    >>> u = 2 * fields.affine((1, 0)) - fields.polynomial(2)
    >>> u.value([[1.0, 2.0], [0.5, 0.0], [0.0, 0.0]]).tolist()
    [5.0, 0.75, 0.0]
    """

    __slots__ = ()

    kind: ClassVar[str] = ""  # the name in a specification, set by `specs.registered`

    # -- what a family says about itself -------------------------------------------------------------------

    @property
    @abstractmethod
    def dim(self) -> int:
        """Number of space dimensions, 1, 2 or 3."""

    @property
    @abstractmethod
    def formula(self) -> str:
        """The field in one readable line."""

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """Points where the field is not smooth."""
        return ()

    @property
    def cuts(self) -> tuple[Cut, ...]:
        """Branch cuts (plane fields only)."""
        return ()

    @property
    def edges(self) -> tuple[Edge | Line | Ring, ...]:
        """Curves along which the field is not smooth (fields of space only)."""
        return ()

    @property
    def sheets(self) -> tuple[Fan | Sheet, ...]:
        """Flat sheets across which value or gradient jump (fields of space only)."""
        return ()

    @property
    def basis(self) -> Basis:
        """Why its digits can be believed, see `Enclosure`."""
        return "closed form"

    @property
    def fit_error(self) -> float:
        """Bound for |u - formula| if the formula was fitted to a solution u; 0 if it is exact."""
        return 0.0

    @property
    def most_digits(self) -> int:
        """How many digits `at` can give."""
        return MAX_DIGITS

    def gradient_error(self, place: tuple[Any, ...]) -> float:  # noqa: ARG002  # fits ask where
        """Return a bound for the error of each component of the formula's gradient at an exact point."""
        return math.inf if self.fit_error else 0.0

    @property
    def opaque(self) -> bool:
        """Whether the field is a user's own function, whose harmonicity and smoothness are unknown."""
        return False

    @property
    def degree(self) -> int | None:
        """Total degree if the field is a polynomial, else None."""
        return None

    @property
    def regions(self) -> tuple[str, ...]:
        """Names of the regions it is pieced together from, see `piecewise_regions`; () if it is not."""
        return ()

    def restricted(self, region: str) -> Field:
        """Return the one smooth field that this one is in a region, continued beyond it.

        A field that is not pieced together is itself everywhere.

        Raises
        ------
        FieldError
            If the field is made of regions and none of them bears the name.
        """
        if self.regions:
            raise FieldError(f"{self.formula} cannot be restricted to {region!r}")
        return self

    @property
    def growth(self) -> float:
        """Exponent e of |u| = O(|x|**e) far away; 0 also stands for log |x|; inf if not of this form."""
        return math.inf if self.degree is None else float(self.degree)

    @abstractmethod
    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        """Return u at coordinates x: arrays (n,) if ctx is FLOAT, else numbers of the precise context.

        `side` is None, or +1, -1 (0: not on a cut) per point.
        """

    @abstractmethod
    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        """Return the d partial derivatives at coordinates x, as `_value` does."""

    def _valid(self, points: Array) -> BoolArray:
        """Return at which of the points (n, d) the formulas hold, shape (n,)."""
        return np.ones(len(points), dtype=bool)

    def on_interface(self, points: Array, place: tuple[Any, ...] | None = None) -> BoolArray:
        """Return at which points (n, d) the gradient jumps; one precise `place` may stand for its row."""
        del place
        return np.zeros(len(points), dtype=bool)

    # -- float64 -------------------------------------------------------------------------------------------

    def value(self, points: npt.ArrayLike, side: Side = None) -> Array:
        """Return u, shape (n,), at points of shape (n, d).

        Parameters
        ----------
        points : array_like, shape (n, d)
            Finite coordinates; in 1-D a list of n numbers will do.
        side : None, +1, -1 or array_like of them, shape (n,)
            On which side of a branch cut a point on it is meant: +1 is the left of the cut's direction.

        Raises
        ------
        FieldError
            At a pole, a logarithmic or a jump point; on a cut without `side`; where the formula does not
            hold; if the shape is wrong or a coordinate is not finite.
        """
        points = as_points(points, self.dim, error=FieldError)
        side = as_sides(side, len(points))
        values, marks = np.empty(len(points)), Marks.of(self)
        for block in blocks(len(points)):
            part, lip = points[block], None if side is None else side[block]
            place = Place(part, lip, first=block.start)
            refuse(marks, place, derivative=False)
            with np.errstate(all="ignore"):  # whatever is not finite is refused by name below
                values[block] = self._value(FLOAT, columns(part), lip)
            refuse_infinite(self, place, values[block])
        return values

    def gradient(self, points: npt.ArrayLike, side: Side = None, region: str | None = None) -> Array:
        """Return grad u, shape (n, d), at points of shape (n, d); parameters as in `value`.

        On an interface between regions the gradient has two values; `region` names the one that is meant.

        Raises
        ------
        FieldError
            As `value`, at a singular point r**e with e < 1, where the gradient is infinite, and on an
            interface without `region`.
        """
        if region is not None and self.regions:
            return self.restricted(region).gradient(points, side)
        points = as_points(points, self.dim, error=FieldError)
        side = as_sides(side, len(points))
        gradients, marks = np.empty(points.shape), Marks.of(self)
        for block in blocks(len(points)):
            part, lip = points[block], None if side is None else side[block]
            place = Place(part, lip, first=block.start)
            refuse(marks, place, derivative=True)
            with np.errstate(all="ignore"):
                for axis, derivative in enumerate(self._gradient(FLOAT, columns(part), lip)):
                    gradients[block, axis] = derivative
            refuse_infinite(self, place, gradients[block])
        return gradients

    # -- any number of digits ------------------------------------------------------------------------------

    def at(self, point: Iterable[Number] | Number, digits: int = 30, side: int | None = None) -> mpmath.mpf:
        """Return u at one point with `digits` correct digits, as a number that carries them all.

        Coordinates may be ints, floats (their exact binary value), strings such as "0.1" or "1/3", fractions
        or mpmath numbers. The working precision is raised until two evaluations agree; where u vanishes by
        cancellation the agreement is absolute.

        >>> from laplace_verify import fields
        >>> str(fields.polynomial(2).at(("0.1", "0.3"), digits=20))
        '-0.08'

        Raises
        ------
        FieldError
            As `value`; or if `digits` is not a whole number from 1 to 200.
        """
        return self._settled(point, digits, side, derivative=False)[0][0]

    def formula_at(
        self, point: Iterable[Number] | Number, digits: int = 30, side: int | None = None
    ) -> mpmath.mpf:
        """Return the formula's own value: as `at`, but a fit gives more digits than it has of the solution.

        Raises
        ------
        FieldError
            As `value`; or if `digits` is not a whole number from 1 to 200.
        """
        return self._settled(point, digits, side, derivative=False, limited=False)[0][0]

    def gradient_at(
        self,
        point: Iterable[Number] | Number,
        digits: int = 30,
        side: int | None = None,
        region: str | None = None,
    ) -> tuple[mpmath.mpf, ...]:
        """Return the d components of grad u at one point with `digits` correct digits each.

        See `at`, and `gradient` for `region`.

        Raises
        ------
        FieldError
            As `gradient`; or if `digits` is not a whole number from 1 to 200.
        """
        if region is not None and self.regions:
            return self.restricted(region).gradient_at(point, digits, side)
        return self._settled(point, digits, side, derivative=True)[0]

    def enclosure(
        self, point: Iterable[Number] | Number, digits: int = 30, side: int | None = None
    ) -> Enclosure:
        """Return u at one point with an error radius and its basis.

        The radius is the difference of evaluations at two working precisions plus 10**-digits of the value,
        plus the field's own `fit_error`.

        >>> from laplace_verify import fields
        >>> value, radius, basis = fields.log_source((0, 0)).enclosure((1, 1), digits=20)
        >>> mpmath.nstr(value, 18), bool(radius < 1e-20), basis
        ('0.346573590279972655', True, 'closed form')

        Raises
        ------
        FieldError
            As `at`.
        """
        (value,), (difference,) = self._settled(point, digits, side, derivative=False)
        with mpmath.workdps(15):
            radius = abs(difference) + abs(value) * mpmath.mpf(10) ** -digits + self.fit_error
        return Enclosure(value, +radius, self.basis)

    def _settled(
        self,
        point: Iterable[Number] | Number,
        digits: int,
        side: int | None,
        *,
        derivative: bool,
        limited: bool = True,
    ) -> tuple[tuple[mpmath.mpf, ...], tuple[mpmath.mpf, ...]]:
        """Return components of u or grad u, and their change at the last raise of the working precision."""
        digits = whole(digits, "digits", 1, MAX_DIGITS)
        if limited and digits > self.most_digits:
            raise FieldError(
                f"{digits} digits were asked for, but the field is a fit whose error bound leaves "
                f"{self.most_digits}; ask for no more. It is {shortened(self.formula)}"
            )
        place = exact_point((point,) if is_number(point) else point, "point", (self.dim,))  # type: ignore[arg-type]
        lip = as_sides(side, 1)
        row = np.array([[float(c) for c in place]])
        refuse(Marks.of(self), Place(row, lip, first=None, exact=place), derivative=derivative)
        one_side = None if lip is None else int(lip[0])

        def evaluate(ctx: Precise) -> list[Any]:
            x = tuple(ctx.number(c) for c in place)
            try:
                if derivative:
                    return [real(ctx, g, place) for g in self._gradient(ctx, x, one_side)]
                return [real(ctx, self._value(ctx, x, one_side), place)]
            except (ZeroDivisionError, OverflowError, ValueError) as cause:
                if isinstance(cause, FieldError):
                    raise
                what = f"no {'gradient' if derivative else 'value'} at {text_of(place)}"
                raise FieldError(
                    f"{shortened(self.formula)} has {what}: its formula is singular there"
                ) from cause

        values, changes = agreeing(evaluate, digits, self.formula)
        as_global = mpmath.mp.make_mpf  # a number of the global type that keeps every digit
        return tuple(as_global(v._mpf_) for v in values), tuple(as_global(c._mpf_) for c in changes)

    def _jumps_at(self, place: tuple[Exact, ...]) -> bool:  # noqa: ARG002  # most fields have no such edges
        """Return whether an exact point lies on an edge along which the field jumps."""
        return False

    # -- algebra and motions: each builds a field of its own family ----------------------------------------

    def __add__(self, other: Field) -> Field:
        """Return the sum of two fields of the same dimension."""
        from laplace_verify.fields.combinations import combined

        return combined((1, self), (1, other)) if isinstance(other, Field) else NotImplemented

    def __sub__(self, other: Field) -> Field:
        """Return the difference of two fields of the same dimension."""
        from laplace_verify.fields.combinations import combined

        return combined((1, self), (-1, other)) if isinstance(other, Field) else NotImplemented

    def __mul__(self, factor: Number) -> Field:
        """Return the field times a number (int, float, Fraction, mpf or a string such as "2/3")."""
        from laplace_verify.fields.combinations import combined

        return NotImplemented if isinstance(factor, Field) else combined((factor, self))

    def __rmul__(self, factor: Number) -> Field:
        """Return a number times the field."""
        return self.__mul__(factor)

    def __neg__(self) -> Field:
        """Return minus the field."""
        return self.__mul__(-1)

    __array_ufunc__ = None  # numpy scalars leave `*` to `__rmul__` instead of looping over the field

    def shifted(self, vector: Iterable[Number]) -> Field:
        """Return u(x - vector): the picture of u moved by `vector`."""
        from laplace_verify.fields.motions import Shifted

        return Shifted(field=self, vector=vector)  # type: ignore[arg-type]  # made exact there

    def rotated(self, angle: Number, axis: Iterable[Number] | None = None) -> Field:
        """Return the picture of u turned by `angle` radians, about the origin or in 3-D about `axis`."""
        from laplace_verify.fields.motions import Rotated

        return Rotated(field=self, angle=angle, axis=axis)  # type: ignore[arg-type]  # made exact there

    def scaled(self, factor: Number) -> Field:
        """Return u(x / factor): the picture of u enlarged by `factor` > 0."""
        from laplace_verify.fields.motions import Scaled

        return Scaled(field=self, factor=factor)  # type: ignore[arg-type]

    def inverted(self, centre: Iterable[Number], radius: Number) -> Field:
        """Return the Kelvin transform of u in the circle or sphere about `centre`, see `kelvin.Inverted`."""
        from laplace_verify.fields.kelvin import Inverted

        return Inverted(field=self, centre=centre, radius=radius)  # type: ignore[arg-type]  # made exact there

    def conjugate(self) -> Field:
        """Return v with u + i v analytic: v_x = -u_y, v_y = u_x (in the plane, where it is single-valued).

        If u is a potential with velocity grad u, v is the stream function.

        Raises
        ------
        FieldError
            If the field is not a plane one, or has no single-valued conjugate in closed form.
        """
        raise FieldError(f"{self.formula} has no conjugate in closed form" + self._why_no_conjugate())

    def _why_no_conjugate(self) -> str:
        """Return the reason, for the message of `conjugate`."""
        return "" if self.dim == 2 else f": conjugates belong to the plane, this field is {self.dim}-D"

    # -- files ---------------------------------------------------------------------------------------------

    def spec(self) -> dict[str, Any]:
        """Return the field as plain data (dict, list, str, int, float) that `from_spec` turns back exactly.

        Raises
        ------
        FieldError
            If a part of it is a user's function, which cannot be written to a file.
        """
        from laplace_verify.fields.specs import to_spec

        return to_spec(self)

    @classmethod
    def _from_parameters(cls, parameters: dict[str, Any]) -> Self:
        """Return the field of this family with the given parameters, read from a specification."""
        return cls(**parameters)
