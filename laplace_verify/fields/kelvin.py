"""The Kelvin transform: inversion in a circle or sphere keeps harmonic functions harmonic.

With x* = c + R^2 (x - c)/|x - c|^2 the mirror image of x,

    2-D:  v(x) = u(x*)                    3-D:  v(x) = (R/|x - c|) u(x*)

is harmonic wherever u is at x*. (W. Thomson, Lord Kelvin, 1847; Axler, Bourdon & Ramey, Harmonic Function
Theory, 2001, ch. 4, from memory, unchecked.) Behaviour of u far away shows near c: |u| = O(|x|^e) becomes a
pole of exponent -e, in 3-D -e - 1.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.combinations import combined
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, show
from laplace_verify.fields.motions import check_field, show_point
from laplace_verify.fields.singular import Basis, Cut, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["Inverted"]


@registered("inverted")
@dataclass(frozen=True, slots=True, kw_only=True)
class Inverted(Field):
    """Kelvin transform of `field` about `centre` with `radius`; the centre itself is left out."""

    field: Field
    centre: tuple[Exact, ...]
    radius: Exact

    def __post_init__(self) -> None:
        """Check the circle or sphere.

        Raises
        ------
        FieldError
            In 1-D; if the radius is not positive; if a cut of the field does not stay straight.
        """
        check_field(self.field)
        if self.field.dim == 1:
            raise FieldError("a field of one coordinate has no Kelvin transform here; use fields.affine")
        object.__setattr__(self, "centre", exact_point(self.centre, "centre", (self.field.dim,)))
        object.__setattr__(self, "radius", exact(self.radius, "radius"))
        if not self.radius > 0:
            raise FieldError(f"radius must be positive, got {self.radius}")
        _ = self.cuts  # refuses cuts that would become arcs
        if self.field.edges:
            raise FieldError(
                f"{self.field.formula} jumps along edges, whose images would be arcs; use one without edges"
            )

    @property
    def dim(self) -> int:
        """As the field that is inverted."""
        return self.field.dim

    @property
    def formula(self) -> str:
        """Such as ``Kelvin[x^2 - y^2; centre (0, 0), radius 1]``."""
        return f"Kelvin[{self.field.formula}; centre {show_point(self.centre)}, radius {show(self.radius)}]"

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """Mirror images of the field's own, and the centre where far away has come near."""
        centre = tuple(float(c) for c in self.centre)
        images = []
        for s in self.field.singularities:
            offsets = np.asarray(s.point) - centre
            square = float(offsets @ offsets)
            if square > 0:  # the centre's own image is at infinity
                image = centre + float(self.radius) ** 2 * offsets / square
                images.append(Singularity(point=tuple(image.tolist()), exponent=s.exponent, kind=s.kind))
        exponent = -self.field.growth - (self.dim - 2)
        if exponent < 0:
            images.append(Singularity(point=centre, exponent=exponent, kind="pole"))
        elif exponent == 0 and self.dim == 2 and self.field.degree != 0:
            images.append(Singularity(point=centre, exponent=0.0, kind="log"))
        return tuple(images)

    @property
    def cuts(self) -> tuple[Cut, ...]:
        """Mirror images of the cuts, which stay straight if their lines pass through the centre."""
        return tuple(self._image_of_cut(cut) for cut in self.field.cuts)

    def _image_of_cut(self, cut: Cut) -> Cut:
        """Return the mirror image; inversion keeps the half planes of a line through the centre apart."""
        centre = np.array([float(c) for c in self.centre])
        offsets = np.asarray(cut.start) - centre
        dx, dy = cut.direction
        along = float(offsets[0] * dx + offsets[1] * dy)
        across = abs(float(offsets[1] * dx - offsets[0] * dy))
        # Points c + t d with along <= t <= along + length go to t -> R^2/t; the direction stays, so do sides.
        if across > 1e-14 * float(np.abs(offsets).sum()) or along < 0 <= along + cut.length:
            raise FieldError(
                f"the branch cut of {self.field.formula} would not stay straight in this inversion: put the "
                "centre on the line of the cut, off the cut itself or at its start"
            )
        square = float(self.radius) ** 2
        far = square / along if along else np.inf
        near = square / (along + cut.length)
        x, y = (centre + near * np.asarray(cut.direction)).tolist()
        return Cut(start=(x, y), direction=cut.direction, length=far - near)

    @property
    def basis(self) -> Basis:
        """As the field that is inverted."""
        return self.field.basis

    @property
    def fit_error(self) -> float:
        """As the field that is inverted, in the plane; not bounded in space, where a factor R/r enters."""
        return self.field.fit_error if self.dim == 2 or not self.field.fit_error else math.inf

    @property
    def most_digits(self) -> int:
        """As the field that is inverted."""
        return self.field.most_digits

    @property
    def opaque(self) -> bool:
        """As the field that is inverted."""
        return self.field.opaque

    @property
    def degree(self) -> int | None:
        """0 for a constant in the plane, else None."""
        return 0 if self.dim == 2 and self.field.degree == 0 else None

    @property
    def growth(self) -> float:
        """0 in the plane and -1 in space, unless the field is singular at the centre."""
        centre = tuple(float(c) for c in self.centre)
        at_centre = [s for s in self.field.singularities if s.point == centre]
        return max([0.0, *(-s.exponent for s in at_centre)]) - (self.dim - 2)

    def _mirror(self, ctx: Any, x: tuple[Any, ...]) -> tuple[tuple[Any, ...], Any, tuple[Any, ...]]:
        """Return offsets from the centre, their squared length and the mirror image."""
        d = tuple(offset(ctx, c, p) for c, p in zip(x, self.centre, strict=True))
        square = sum((c * c for c in d[1:]), d[0] * d[0])
        factor = ctx.number(self.radius) ** 2 / square
        return d, square, tuple(ctx.number(p) + factor * c for p, c in zip(self.centre, d, strict=True))

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        _, square, image = self._mirror(ctx, x)
        u = self.field._value(ctx, image, side)
        return u if self.dim == 2 else u * ctx.number(self.radius) / ctx.sqrt(square)

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        """Return the chain rule: d x*_j/d x_i = (R^2/r^2)(delta_ij - 2 n_i n_j), n = (x - c)/r."""
        d, square, image = self._mirror(ctx, x)
        g = self.field._gradient(ctx, image, side)
        radius = ctx.number(self.radius)
        outward = sum((a * b for a, b in zip(g[1:], d[1:], strict=True)), g[0] * d[0])
        turned = tuple(
            (a - 2 * outward * c / square) * (radius**2 / square) for a, c in zip(g, d, strict=True)
        )
        if self.dim == 2:
            return turned
        factor = radius / ctx.sqrt(square)
        u = self.field._value(ctx, image, side)
        return tuple(factor * (t - u * c / square) for t, c in zip(turned, d, strict=True))

    def _valid(self, points: Array) -> BoolArray:
        off_centre: BoolArray = (points != [float(c) for c in self.centre]).any(axis=1)
        with np.errstate(all="ignore"):
            _, _, image = self._mirror(FLOAT, tuple(points.T))
        images = np.stack(image, axis=1)
        finite = off_centre & np.isfinite(images).all(axis=1)
        images[~finite] = [float(c) for c in self.centre]
        valid: BoolArray = finite & (self.field._valid(images) | ~finite)
        return valid

    def conjugate(self) -> Field:
        """Return minus the inverted conjugate: mirror images turn the plane over."""
        return combined((-1, Inverted(field=self.field.conjugate(), centre=self.centre, radius=self.radius)))
