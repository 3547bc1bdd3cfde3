"""Radial solutions: the only ones between two coaxial cylinders, or two concentric spheres.

    cylinder   (1/r)   d/dr(r   du/dr) = 0        u = a + b log r
    sphere     (1/r^2) d/dr(r^2 du/dr) = 0        u = a + b/r

as functions of the single coordinate r > 0; constants also hold at r = 0. The outward flux through the
cylinder of radius r is 2 pi b per unit length, through the sphere -4 pi b, whatever r (Carslaw & Jaeger 1959,
Conduction of Heat in Solids, 2nd ed., sections 7.2 and 9.3, from memory, unchecked).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.exact import Exact, exact, show
from laplace_verify.fields.singular import Singularity
from laplace_verify.fields.specs import registered

__all__ = ["Radial", "radial"]

SURFACES = ("cylinder", "sphere")


@registered("radial")
@dataclass(frozen=True, slots=True, kw_only=True)
class Radial(Field):
    """u = a + b log(r/radius) about a line, u = a + b/r about a point; `radial` makes one."""

    about: str
    a: Exact
    b: Exact
    radius: Exact = 1

    def __post_init__(self) -> None:
        """Check the surface and make the numbers exact."""
        if self.about not in SURFACES:
            raise FieldError(f"radial fields belong to a 'cylinder' or a 'sphere', got {self.about!r}")
        object.__setattr__(self, "a", exact(self.a, "a"))
        object.__setattr__(self, "b", exact(self.b, "b"))
        object.__setattr__(self, "radius", exact(self.radius, "radius"))
        if not self.radius > 0:
            raise FieldError(f"radius must be > 0, got {show(self.radius)}")
        if self.about == "sphere" and self.radius != 1:
            raise FieldError("radius belongs to the logarithm of a cylinder; about a point u = a + b/r")

    @property
    def dim(self) -> int:
        """One: the coordinate r."""
        return 1

    @property
    def degree(self) -> int | None:
        """Zero for a constant."""
        return 0 if self.b == 0 else None

    @property
    def growth(self) -> float:
        """Logarithmic, or bounded."""
        return 0.0

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The axis or centre r = 0, unless u is constant."""
        if self.b == 0:
            return ()
        if self.about == "cylinder":
            return (Singularity(point=(0.0,), exponent=0.0, kind="log"),)
        return (Singularity(point=(0.0,), exponent=-1.0, kind="pole"),)

    @property
    def formula(self) -> str:
        """Such as ``3 + 2 log r``, ``3 + 2 log(r/0.5)`` or ``-1 + 2/r``."""
        if self.b == 0:
            return show(self.a)
        factor, minus = show(self.b).removeprefix("-"), show(self.b).startswith("-")
        head = "-" if minus else ""
        if self.a != 0:
            head = f"{show(self.a)} {'-' if minus else '+'} "
        if self.about == "sphere":
            return f"{head}({factor})/r" if "/" in factor else f"{head}{factor}/r"
        below = "log r" if self.radius == 1 else f"log(r/({show(self.radius)}))"
        return f"{head}{factor} {below}"

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        a, b, (r,) = ctx.number(self.a), ctx.number(self.b), x
        if self.b == 0:
            return a + 0 * r
        if self.about == "sphere":
            return a + b / r
        return a + b * ctx.log(r if self.radius == 1 else r / ctx.number(self.radius))

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        b, (r,) = ctx.number(self.b), x
        if self.b == 0:
            return (0 * r,)
        return (b / r,) if self.about == "cylinder" else (-(b / r) / r,)

    def _valid(self, points: Array) -> BoolArray:
        valid: BoolArray = points[:, 0] >= 0.0
        return valid


def radial(about: str, a: Number, b: Number, radius: Number = 1) -> Radial:
    """Return the radial field a + b log(r/radius) ("cylinder") or a + b/r ("sphere"), a function of r alone.

    Parameters
    ----------
    about
        "cylinder" for flow between coaxial cylinders, "sphere" for flow between concentric spheres.
    a, b
        Numbers, also as strings such as "2/3".
    radius
        Where a cylinder's u is `a`; 1 for a sphere.

    Raises
    ------
    FieldError
        If `about` is neither, a number cannot be read, or `radius` is not positive or not 1 for a sphere.

    Examples
    --------
    >>> radial("sphere", -1, 2).value([1.0, 1.5, 2.0]).round(15).tolist()  # 1 at r = 1, 0 at r = 2
    [1.0, 0.333333333333333, 0.0]
    >>> radial("cylinder", 0, 3).gradient([1.5]).tolist()
    [[2.0]]
    """
    return Radial(about=about, a=a, b=b, radius=radius)  # type: ignore[arg-type]  # made exact
