"""Two equal spheres held at given potentials, by images.

Spheres of radius R about (0, 0, +-h), gap g = 2 h - 2 R. With cosh m = h/R, so that sinh^2(m/2) = g/(4 R),
and d = R sinh m, the sphere above at potential 1 and the one below at 0 take the charges

    q_n = (-1)^(n+1) R sinh m/sinh(n m),  n = 1, 2, ...,  at z = (-1)^(n+1) d coth(n m)

(Kelvin's images; Smythe 1968, Static and Dynamic Electricity, sections 5.08-5.09, Maxwell 1891, art. 173,
both from memory, unchecked; checked in tests by the values on the spheres). u = sum q_n/|x - x_n|.

*Tail.* Every image is at least R (1 - exp(-m)) below its surface, since coth > 1, so what is left after N
images is at most

    sum_{n > N} sinh m/sinh(n m)/(1 - e^-m) <= 2 sinh m e^{-(N+1) m}/((1 - e^-m)^2 (1 - e^{-2(N+1) m})),

and of the gradient at most that over R (1 - e^-m). N is taken so that both are below one unit of the working
precision, relative to 1 and 1/R. About 41/m images do in float64: 44 at a gap of one radius, 1224 at 1/1000.
Most of them crowd about the limit points z = +-d, at least R (1 - e^-m) below the surfaces; in float64 those
are summed by multipoles there (`charge_clusters`).
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.charge_clusters import Cluster
from laplace_verify.fields.exact import Exact, exact, exact_point, offset, show
from laplace_verify.fields.motions import show_point
from laplace_verify.fields.singular import Basis, Singularity
from laplace_verify.fields.specs import registered

__all__ = ["SpherePair", "sphere_pair"]

NARROWEST = 1e-5  # least gap in radii: 13000 images
SURFACE = 1e-9  # of the radius: points this little inside count as on the sphere
CROWDED = 0.03  # of the room around a limit point: so near to it images are summed by multipoles
SHOWN = 8  # images declared as singular points


@registered("sphere-pair")
@dataclass(frozen=True, slots=True, kw_only=True)
class SpherePair(Field):
    """The potential of two equal spheres above and below `centre`; `sphere_pair` makes one."""

    radius: Exact
    gap: Exact
    potentials: tuple[Exact, ...] = (1, 0)
    centre: tuple[Exact, ...] = (0, 0, 0)

    def __post_init__(self) -> None:
        """Check radius, gap and potentials."""
        object.__setattr__(self, "radius", exact(self.radius, "radius"))
        object.__setattr__(self, "gap", exact(self.gap, "gap"))
        object.__setattr__(self, "potentials", exact_point(self.potentials, "potentials", (2,)))
        object.__setattr__(self, "centre", exact_point(self.centre, "centre", (3,)))
        if not self.radius > 0:
            raise FieldError(f"radius must be > 0, got {show(self.radius)}")
        if not self.gap >= NARROWEST * self.radius:
            raise FieldError(
                f"gap must be at least {NARROWEST:g} radii, got {show(self.gap)}: too many images for less"
            )

    @property
    def dim(self) -> int:
        """Three."""
        return 3

    @property
    def growth(self) -> float:
        """Decays like 1/r."""
        return -1.0

    @property
    def basis(self) -> Basis:
        """A series with a proven tail."""
        return "tail bound"

    @property
    def formula(self) -> str:
        """The field in words."""
        above, below = self.potentials
        return (
            f"[potential {show(above)} and {show(below)} on the spheres of radius {show(self.radius)}, "
            f"{show(self.gap)} apart along z, about {show_point(self.centre)}]"
        )

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        """The first images of both spheres."""
        x, y, z = (float(c) for c in self.centre)
        m, d = angle(FLOAT, self.radius, self.gap)
        heights = [d / math.tanh(n * m) for n in range(1, SHOWN + 1)]
        return tuple(
            Singularity(point=(x, y, z + sign * height), exponent=-1.0, kind="pole")
            for height in heights
            for sign in (1.0, -1.0)
        )

    def _charges(self, ctx: Any) -> list[tuple[Any, Any]]:
        """Return charge and height of the images that have any, see `images`."""
        found = images(ctx, self.radius, self.gap, self.potentials)
        return [(q, at) for z, up, down in found for q, at in ((up, z), (down, -z)) if q]

    def _offsets(self, ctx: Any, x: tuple[Any, ...]) -> tuple[Any, Any, Any, Any]:
        dx, dy, dz = (offset(ctx, c, m) for c, m in zip(x, self.centre, strict=True))
        return dx, dy, dz, dx * dx + dy * dy

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        _, _, dz, flat = self._offsets(ctx, x)
        if ctx is FLOAT:
            charges, clusters = self._gathered()
            return sum((cluster.value(dz, flat) for cluster in clusters), _potential(charges, dz, flat))
        return sum((charge / ctx.sqrt((dz - z) ** 2 + flat) for charge, z in self._charges(ctx)), ctx.mpf(0))

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002
        dx, dy, dz, flat = self._offsets(ctx, x)
        if ctx is FLOAT:
            charges, clusters = self._gathered()
            parts = [cluster.slopes(dz, flat) for cluster in clusters] + [_pulls(charges, dz, flat)]
        else:
            parts = []
            for charge, height in self._charges(ctx):
                z = dz - height
                pull = -charge / ctx.sqrt(z * z + flat) ** 3
                parts.append((pull, pull * z))
        across, along = (sum(column[1:], column[0]) for column in zip(*parts, strict=True))
        return across * dx, across * dy, along

    def _gathered(self) -> tuple[list[tuple[float, float]], tuple[Cluster, ...]]:
        """Return for float64 the charges that are summed one by one and the clusters of the others."""
        return _gathered(self.radius, self.gap, self.potentials)

    def _valid(self, points: Array) -> BoolArray:
        """Return which points are outside both spheres."""
        radius = float(self.radius)
        half = radius + float(self.gap) / 2.0
        x, y, z = (column - float(c) for column, c in zip(points.T, self.centre, strict=True))
        z = np.abs(z) - half  # from the centre of the nearer sphere
        outside: BoolArray = np.sqrt(x * x + y * y + z * z) >= (1.0 - SURFACE) * radius
        return outside


def angle(ctx: Any, radius: Exact, gap: Exact) -> tuple[Any, Any]:
    """Return m and d; sinh(m/2) = sqrt(g/(4 R)) keeps small gaps."""
    r, g = ctx.number(radius), ctx.number(gap)
    return 2 * ctx.asinh(ctx.sqrt(g / (4 * r))), ctx.sqrt(g * (r + g / 4))


def enough(ctx: Any, m: Any) -> int:
    """Return N so that the tail is below a unit of the working precision, of value and gradient."""
    digits = 17 if ctx is FLOAT else ctx.dps + 2
    step = float(m)
    small = -math.expm1(-step)
    # 2 sinh m/(1 - e^-m)^3 is what stands before e^{-(N+1) m}; the rest is below 1.2 for N m > 1
    lead = math.log(2.4) + step - 3.0 * math.log(small)
    return max(2, math.ceil((digits * math.log(10.0) + lead) / step))


@lru_cache(maxsize=64)
def images(
    ctx: Any, radius: Exact, gap: Exact, potentials: tuple[Exact, ...]
) -> tuple[tuple[Any, Any, Any], ...]:
    """Return (height, charge at it, charge at minus the height), smallest first.

    Of the sphere above odd images lie above and even ones below with the other sign; of that below they are
    mirrored.
    """
    m, d = angle(ctx, radius, gap)
    above, below = (ctx.number(v) for v in potentials)
    lead = ctx.number(radius) * ctx.sinh(m)
    found = []
    for n in range(enough(ctx, m), 0, -1):
        decay = ctx.exp(-n * m)
        room = -ctx.expm1(-2 * n * m)
        q, height = 2 * lead * decay / room, d * (1 + decay * decay) / room
        odd = n % 2 == 1
        found.append((height, above * q if odd else -below * q, below * q if odd else -above * q))
    return tuple(found)


@lru_cache(maxsize=64)
def _gathered(
    radius: Exact, gap: Exact, potentials: tuple[Exact, ...]
) -> tuple[list[tuple[float, float]], tuple[Cluster, ...]]:
    """Return charges (q, z) that are summed one by one, and the clusters of the others about z = +-d."""
    m, d = angle(FLOAT, radius, gap)
    room = -float(radius) * math.expm1(-m)  # from +-d to the surface around it
    found = images(FLOAT, radius, gap, potentials)  # height, charge above, charge below
    # coth(n m) - 1 = 2 / (e^{2 n m} - 1), without cancellation
    apart = [2 * d / math.expm1(2 * n * m) for n in range(len(found), 0, -1)]
    inside = [k for k, a in enumerate(apart) if a <= CROWDED * room]
    single = [
        (q, at)
        for k, (z, up, down) in enumerate(found)
        if apart[k] > CROWDED * room
        for q, at in ((up, z), (down, -z))
        if q
    ]
    rows = np.array([[found[k][1], found[k][2], apart[k]] for k in inside]).reshape(-1, 3)
    clusters = [
        Cluster.of(sign * d, rows[:, column], sign * rows[:, 2], room)
        for column, sign in ((0, 1.0), (1, -1.0))
        if rows[:, column].any()
    ]
    return single, tuple(clusters)


def _potential(charges: list[tuple[float, float]], dz: Array, flat: Array) -> Array:
    """Return the sum of q / distance."""
    total, square = np.zeros_like(dz), np.empty_like(dz)
    for charge, z in charges:
        np.subtract(dz, z, out=square)
        square *= square
        square += flat
        np.sqrt(square, out=square)
        np.divide(charge, square, out=square)
        total += square
    return total


def _pulls(charges: list[tuple[float, float]], dz: Array, flat: Array) -> tuple[Array, Array]:
    """Return the sums of -q / distance^3 and of -q (z - z_n) / distance^3."""
    across, along = np.zeros_like(dz), np.zeros_like(dz)
    z, square, root = np.empty_like(dz), np.empty_like(dz), np.empty_like(dz)
    for charge, height in charges:
        np.subtract(dz, height, out=z)
        np.multiply(z, z, out=square)
        square += flat
        np.sqrt(square, out=root)
        square *= root
        np.divide(-charge, square, out=square)
        across += square
        z *= square
        along += z
    return across, along


def sphere_pair(
    radius: Number,
    gap: Number,
    potentials: Iterable[Number] = (1, 0),
    centre: Iterable[Number] = (0, 0, 0),
) -> SpherePair:
    """Return the potential of two equal spheres at given potentials, above and below a point.

    Parameters
    ----------
    radius, gap
        Radius of both, and the distance between their surfaces; centres at z = +-(radius + gap/2).
    potentials
        Of the sphere above and of the one below; (1, -1) is a sphere above a grounded plane.
    centre
        The point half-way between them.

    Raises
    ------
    FieldError
        If the radius is not positive or the gap below 1e-5 radii.

    Examples
    --------
    >>> u = sphere_pair(1, 2)
    >>> u.value([[0.0, 0.0, 1.0], [1.0, 0.0, -2.0], [0.0, 0.0, -3.0]]).round(12).tolist()
    [1.0, 0.0, 0.0]
    """
    return SpherePair(radius=radius, gap=gap, potentials=potentials, centre=centre)  # type: ignore[arg-type]
