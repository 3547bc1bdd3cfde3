"""Seeded random cases: a shape, an exact field that is smooth in it, conditions with u fixed somewhere.

The same seed and arguments give the same case on every machine; nothing depends on global random state.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Collection, Iterable
from typing import Literal

import numpy as np

from laplace_verify import fields
from laplace_verify.arrays import Array
from laplace_verify.errors import ProblemError, nearest_names
from laplace_verify.fields import Field
from laplace_verify.geometry import (
    Annulus,
    Ball,
    Box,
    Cylinder,
    Disc,
    Ellipse,
    Interval,
    LShape,
    Polygon,
    Rectangle,
    Sector,
    Shape,
    SphericalShell,
)
from laplace_verify.problems.case import Case, case
from laplace_verify.problems.conditions import KINDS, Condition, robin

__all__ = ["random_case"]

Generator = np.random.Generator


def random_case(
    seed: int,
    dim: int = 2,
    shapes: Collection[str] | None = None,
    conditions: Collection[str] | None = None,
    tensor: bool = False,
) -> Case:
    """Return a random case with an exact solution that is analytic on the closed shape.

    Parameters
    ----------
    seed
        A whole number >= 0; same seed and arguments, same case.
    dim
        Number of space dimensions.
    shapes
        Kinds of shape to draw from, such as {"rectangle", "disc"}; by default all bounded ones of this
        dimension.
    conditions
        Kinds of condition to draw from; at least one piece is Dirichlet, or Robin if "dirichlet" is not
        among them.
    tensor
        Whether the conductivity is a full matrix; otherwise it is 1.

    Raises
    ------
    ProblemError
        If an argument makes no sense, or neither "dirichlet" nor "robin" is allowed.

    Examples
    --------
    >>> random_case(4).problem.shape == random_case(4).problem.shape
    True
    """
    allowed = _allowed(conditions)
    makers = _makers(dim, shapes)
    if isinstance(seed, bool) or not isinstance(seed, int | np.integer) or seed < 0:
        raise ProblemError(f"seed must be a whole number >= 0, got {seed!r}")
    generator = np.random.default_rng([int(seed), dim])
    kinds = sorted(makers)
    shape = makers[kinds[int(generator.integers(len(kinds)))]](generator)
    k = _tensor(generator, dim) if tensor else np.eye(dim)
    field = _field(generator, shape)
    if tensor:
        field = _stretched(generator, shape, k)
    return case(
        shape,
        _conditions(generator, shape, allowed),
        field,
        k if tensor else 1.0,
        id=f"random-{dim}d-{int(seed)}",
        title=f"Random case {int(seed)} on a {shape.kind.replace('-', ' ')}",
        statement=f"u = {field.formula}",
        tags=("random", "smooth"),
    )


def _allowed(conditions: Collection[str] | None) -> list[str]:
    """Return the kinds of condition to draw from."""
    given = set(KINDS if conditions is None else conditions)
    unknown = sorted(str(kind) for kind in given - set(KINDS))
    if unknown:
        raise ProblemError(f"unknown kind of condition {unknown[0]!r}; {nearest_names(unknown[0], KINDS)}")
    if not given & {"dirichlet", "robin"}:
        raise ProblemError("a random case needs 'dirichlet' or 'robin' among its conditions, to fix u")
    return sorted(given)


def _conditions(generator: Generator, shape: Shape, allowed: list[str]) -> dict[str, str | Condition]:
    """Return a condition for every piece, one of which fixes u."""
    fixing = "dirichlet" if "dirichlet" in allowed else "robin"
    chosen = [allowed[int(i)] for i in generator.integers(len(allowed), size=len(shape.pieces))]
    chosen[int(generator.integers(len(chosen)))] = fixing
    alphas = np.round(generator.uniform(0.5, 4.0, size=len(chosen)), 2).tolist()
    return {
        piece.name: robin(alpha) if kind == "robin" else kind
        for piece, kind, alpha in zip(shape.pieces, chosen, alphas, strict=True)
    }


def _tensor(generator: Generator, dim: int) -> Array:
    """Return a symmetric positive definite matrix with eigenvalues between 0.4 and 2.5."""
    rotation, _ = np.linalg.qr(generator.standard_normal((dim, dim)))
    eigenvalues = np.exp(generator.uniform(-math.log(2.5), math.log(2.5), size=dim))
    matrix: Array = (rotation * eigenvalues) @ rotation.T
    rounded: Array = np.round((matrix + matrix.T) / 2.0, 3)
    return rounded


def _stretched(generator: Generator, shape: Shape, k: Array) -> Field:
    """Return a solution for the tensor: an entire harmonic function of K^{-1/2} x."""
    return fields.stretched(_entire(generator, shape.dim), k.tolist())


def _field(generator: Generator, shape: Shape) -> Field:
    """Return an entire harmonic function, with a source outside the shape in half of the cases."""
    field = _entire(generator, shape.dim)
    if shape.dim == 1 or generator.random() < 0.5:
        return field
    lower, upper = shape.bounding_box
    direction = generator.standard_normal(shape.dim)
    direction /= np.sqrt((direction**2).sum())
    reach = float(np.sqrt(((upper - lower) ** 2).sum())) / 2.0 + generator.uniform(0.3, 1.0) * shape.size
    place = np.round((lower + upper) / 2.0 + reach * direction, 3).tolist()
    source = fields.log_source if shape.dim == 2 else fields.point_source
    return field + source(place)


def _entire(generator: Generator, dim: int) -> Field:
    """Return a random sum of a few harmonic functions that are smooth everywhere."""
    a, b, c = (float(x) for x in np.round(generator.uniform(-1.0, 1.0, size=3), 2))
    slopes = np.round(generator.uniform(-1.0, 1.0, size=dim), 2).tolist()
    affine = fields.affine(slopes, constant=a)
    if dim == 1:
        return affine
    degree = int(generator.integers(2, 5))
    wave = float(np.round(generator.uniform(0.5, 2.5), 2))
    if dim == 2:
        part: Literal["re", "im"] = "re" if generator.random() < 0.5 else "im"
        return affine + b * fields.polynomial(degree, part) + c * fields.exp_trig(wave, "cos", "decay")
    order = int(generator.integers(-degree, degree + 1))
    return affine + b * fields.solid(degree, order) + c * fields.exp_trig((wave, 1), ("cos", "sin"), "decay")


def _makers(dim: int, shapes: Iterable[str] | None) -> dict[str, Callable[[Generator], Shape]]:
    """Return the shapes to draw from, by kind."""
    if dim not in SHAPES:
        raise ProblemError(f"dim must be 1, 2 or 3, got {dim!r}")
    known = SHAPES[dim]
    if shapes is None:
        return known
    wanted = sorted(set(shapes))
    for kind in wanted:
        if kind not in known:
            raise ProblemError(f"no random {dim}-D shape of kind {kind!r}; {nearest_names(str(kind), known)}")
    if not wanted:
        raise ProblemError(f"shapes must name at least one kind; {nearest_names('', known)}")
    return {kind: known[kind] for kind in wanted}


def _between(generator: Generator, low: float, high: float) -> float:
    """Return a uniform number with two decimals."""
    return float(np.round(generator.uniform(low, high), 2))


def _corner(generator: Generator, dim: int) -> tuple[float, ...]:
    return tuple(_between(generator, -1.0, 1.0) for _ in range(dim))


def _upper(generator: Generator, lower: tuple[float, ...]) -> tuple[float, ...]:
    return tuple(round(c + _between(generator, 0.6, 1.8), 2) for c in lower)


def _interval(g: Generator) -> Shape:
    lower = _corner(g, 1)
    return Interval(lower[0], _upper(g, lower)[0])


def _rectangle(g: Generator) -> Shape:
    lower = _corner(g, 2)
    return Rectangle(lower, _upper(g, lower))


def _box(g: Generator) -> Shape:
    lower = _corner(g, 3)
    return Box(lower, _upper(g, lower))


def _polygon(g: Generator) -> Shape:
    """Return a star-shaped polygon of five to eight corners about a random centre."""
    count = int(g.integers(5, 9))
    angles = 2.0 * math.pi * (np.arange(count) + g.uniform(-0.25, 0.25, size=count)) / count
    radii = g.uniform(0.6, 1.2, size=count)
    centre = np.array(_corner(g, 2))
    corners = np.round(centre + radii[:, None] * np.stack([np.cos(angles), np.sin(angles)], axis=1), 3)
    return Polygon(corners.tolist())


def _annulus(g: Generator) -> Shape:
    outer = _between(g, 0.8, 1.5)
    return Annulus(_corner(g, 2), round(outer * _between(g, 0.3, 0.6), 3), outer)


def _shell(g: Generator) -> Shape:
    outer = _between(g, 0.8, 1.5)
    return SphericalShell(_corner(g, 3), round(outer * _between(g, 0.3, 0.6), 3), outer)


def _cylinder(g: Generator) -> Shape:
    z0 = _between(g, -1.0, 1.0)
    return Cylinder(_between(g, 0.5, 1.2), z0, round(z0 + _between(g, 0.6, 1.8), 2))


SHAPES: dict[int, dict[str, Callable[[Generator], Shape]]] = {
    1: {"interval": _interval},
    2: {
        "annulus": _annulus,
        "disc": lambda g: Disc(_corner(g, 2), _between(g, 0.5, 1.5)),
        "ellipse": lambda g: Ellipse(_corner(g, 2), (_between(g, 0.8, 1.5), _between(g, 0.5, 0.8))),
        "l-shape": lambda g: LShape(_between(g, 0.6, 1.4)),
        "polygon": _polygon,
        "rectangle": _rectangle,
        "sector": lambda g: Sector(_between(g, 0.8, 1.5), _between(g, 0.8, 5.0)),
    },
    3: {
        "ball": lambda g: Ball(_corner(g, 3), _between(g, 0.5, 1.5)),
        "box": _box,
        "cylinder": _cylinder,
        "spherical-shell": _shell,
    },
}
