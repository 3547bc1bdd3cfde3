"""Constant boundary elements, direct formulation with collocation, for k Laplace u = 0 in plane shapes.

With G(x, y) = -log(|x - y| / R) / (2 pi) and the flux q = du/dn, Green's third identity reads

    u(x) / 2 = int G(x, y) q(y) ds_y - int dG/dn_y(x, y) u(y) ds_y

on the smooth part of the boundary, and with u(x) on the left inside. The boundary is cut into straight
elements with ends on the curve; u and q are constant on each, and the identity is asked for in the middle of
every element. Both integrals over an element have closed forms. With x at the height p over the line through
the element and at s_1 <= s <= s_2 along it from the foot,

    int log|x - y| ds = [s log(s^2 + p^2) / 2 - s + p arctan(s / p)],    int d/dn_y log|x - y| ds = the angle

under which x sees the element, negative from inside; its own element gives none. R is twice the diameter of
the shape: with R = 1 a shape of logarithmic capacity 1 has no unique q (any other length above the capacity
would do, for the net flux is zero).

The error of the potential at a fixed distance from the boundary is O(h^2): in the middle of an element the
mean density equals the value up to O(h^2), and so does the chord the arc. At corners with smooth u the flux
is smooth side by side; singular solutions converge more slowly.

References
----------
Brebbia, The Boundary Element Method for Engineers, 1978, chapter 2; Jaswon & Symm, Integral Equation Methods
in Potential Theory and Elastostatics, 1977 (both from memory, unchecked).
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from scipy.spatial import cKDTree

from laplace_verify.arrays import Array, blocks
from laplace_verify.geometry import Shape
from laplace_verify.problems import Piece, Problem
from laplace_verify.solvers.adapter import Refused, adapt
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.samples.levels import level_shift

__all__ = ["COLLOCATION", "Elements", "Scheme", "boundary_elements", "solve_on_boundary"]

PER_LOOP = 4  # times n elements on a boundary of one piece; more pieces share them by length
BLOCK = 512  # points at a time: a table of points by elements stays in cache
TINY = 1e-300  # the logarithm of 0 is multiplied by 0
OUTSIDE = 0.02  # of a full turn: less than the sharpest corner
FINE = 12  # degree of the quadrature that takes the mean for the level
CLEAR = 0.1  # of the extent: next to the boundary constant densities show as steps


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Elements:
    """Straight elements from `starts` to `ends`, each (m, 2), the shape on their left; `radius` is R."""

    starts: Array
    ends: Array
    radius: float

    @property
    def lengths(self) -> Array:
        """The lengths, shape (m,)."""
        lengths: Array = np.linalg.norm(self.ends - self.starts, axis=1)
        return lengths

    @property
    def middles(self) -> Array:
        """The middles, shape (m, 2)."""
        middles: Array = 0.5 * (self.starts + self.ends)
        return middles


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Densities:
    """u and q on all elements, (m,)."""

    elements: Elements
    values: Array
    fluxes: Array


# ---- the parts of the scheme ---------------------------------------------------------------------


def elements_on(shape: Shape, n: int) -> tuple[Elements, dict[str, slice]]:
    """Return the elements and which of them lie on each piece; n more make all of them shorter alike."""
    whole = sum(piece.measure for piece in shape.pieces)
    starts, ends, parts, count = [], [], {}, 0
    for piece in shape.pieces:
        share = n * max(1, round(PER_LOOP * piece.measure / whole))
        even = np.linspace(0.0, 1.0, share + 1)
        nodes = piece.point(graded(even) if len(piece.ends) else even)
        starts.append(nodes[:-1])
        ends.append(nodes[1:])
        parts[piece.name] = slice(count, count + share)
        count += share
    radius = 2.0 * shape.extent
    return Elements(starts=np.concatenate(starts), ends=np.concatenate(ends), radius=radius), parts


def graded(t: Array) -> Array:
    """Return places that crowd at 0 and 1: t^2 (3 - 2 t)."""
    places: Array = t * t * (3.0 - 2.0 * t)
    return places


def layers(elements: Elements, points: Array) -> tuple[Array, Array]:
    """Return the integrals of G and of dG/dn over every element, each (points, elements)."""
    lengths = elements.lengths
    along_x, along_y = ((elements.ends - elements.starts) / lengths[:, np.newaxis]).T
    x, y = (elements.starts[:, axis] - points[:, axis, np.newaxis] for axis in (0, 1))
    first = x * along_x + y * along_y
    height = x * along_y - y * along_x  # n . (y - x)
    last, squared = first + lengths, height**2
    near, far = (np.log(squared + s**2 + TINY) for s in (first, last))
    angles = np.arctan2(height * lengths, squared + first * last)
    single = 0.5 * (last * far - first * near) + height * angles - lengths * (1.0 + math.log(elements.radius))
    return -single / (2.0 * math.pi), -angles / (2.0 * math.pi)


def collocated(elements: Elements) -> tuple[Array, Array]:
    """Return S and D, with S q = (1/2 + D) u in the middles of the elements."""
    single, double = layers(elements, elements.middles)
    np.fill_diagonal(double, 0.0)  # an element does not see itself; only rounding would say so
    return single, double


def jump(elements: Elements) -> Array:
    """Return what u is multiplied by on the left: half on a smooth boundary."""
    return np.full(len(elements.starts), 0.5)


def data_on(piece: Piece, elements: Elements) -> Array:
    """Return the data in the middles of elements."""
    return piece.data(elements.middles)


def transfer_on(piece: Piece, elements: Elements) -> Array:
    """Return Robin's alpha in the middles of elements."""
    return piece.alpha(elements.middles)


def potential(densities: Densities, points: Array) -> Array:
    """Return u at points (m, 2), shape (m,).

    The angle under which a point sees all elements is a full turn inside and part of one on the boundary,
    where it divides; outside the chords of a curve the nearest element gives its own value.
    """
    elements, result = densities.elements, np.empty(len(points))
    for block in blocks(len(points), BLOCK):
        single, double = layers(elements, points[block])
        turns = -double.sum(axis=1)
        inside = turns > OUTSIDE
        found = single @ densities.fluxes - double @ densities.values
        result[block] = np.where(inside, found / np.where(inside, turns, 1.0), np.nan)
    outside = np.isnan(result)
    _, nearest = cKDTree(elements.middles).query(points[outside])
    result[outside] = densities.values[nearest]
    return result


def solved(matrix: Array, load: Array, border: Array | None) -> Array:
    """Return the unknowns; with a border the constant is free, and what data lack is spread evenly."""
    if border is None:
        return np.linalg.solve(matrix, load).astype(np.float64)
    bordered = np.block([[matrix, np.ones((len(load), 1))], [border, np.zeros(1)]])
    return np.linalg.solve(bordered, np.append(load, 0.0))[:-1].astype(np.float64)


@dataclass(frozen=True, slots=True, kw_only=True)
class Scheme:
    """The decisions that make a solver with boundary elements."""

    elements: Callable[[Shape, int], tuple[Elements, dict[str, slice]]] = elements_on
    collocated: Callable[[Elements], tuple[Array, Array]] = collocated
    jump: Callable[[Elements], Array] = jump
    data: Callable[[Piece, Elements], Array] = data_on
    transfer: Callable[[Piece, Elements], Array] = transfer_on
    solve: Callable[[Array, Array, Array | None], Array] = solved
    potential: Callable[[Densities, Array], Array] = potential


COLLOCATION = Scheme()


# ---- putting it together -------------------------------------------------------------------------


def solve_on_boundary(problem: Problem, n: int, scheme: Scheme = COLLOCATION) -> Answer:
    """Solve with 4 n elements on a boundary of one piece, about as many on one of several."""
    refuse_unsuited(problem)
    elements, parts = scheme.elements(problem.shape, n)
    single, double = scheme.collocated(elements)
    of_values = np.diag(scheme.jump(elements)) + double
    known = np.zeros(len(single))  # u on Dirichlet pieces, q at u = 0 on the others
    slope = np.zeros(len(single))  # q = known - slope * u
    held = np.zeros(len(single), np.bool_)
    for piece in problem.pieces:
        part = parts[piece.name]
        own = replace(elements, starts=elements.starts[part], ends=elements.ends[part])
        known[part] = scheme.data(piece, own)
        if piece.kind == "dirichlet":
            held[part] = True
        else:
            known[part] /= problem.tensor[0, 0]
        if piece.kind == "robin":
            slope[part] = scheme.transfer(piece, own) / problem.tensor[0, 0]
    matrix = np.where(held, -single, of_values + single * slope)
    load = np.where(held, -of_values, single) @ known
    free = not (held.any() or slope.any())
    unknown = scheme.solve(matrix, load, elements.lengths if free else None)
    densities = Densities(
        elements=elements,
        values=np.where(held, known, unknown),
        fluxes=np.where(held, unknown, known - slope * unknown),
    )
    if free:
        densities = levelled(problem, densities, scheme)
    return Answer(
        evaluate=lambda points: scheme.potential(densities, points),
        h=float(np.max(elements.lengths)),
        unknowns=len(unknown),
    )


def refuse_unsuited(problem: Problem) -> None:
    """Refuse shapes with a slit, whose lips get the same equations, and shapes that are all boundary."""
    shape = problem.shape
    if any(junction.opening > 2.0 * math.pi - 1e-9 for junction in shape.junctions):
        raise Refused("the two lips of a slit would get the same equations", beyond=True)
    deepest = float(np.max(shape.distance(shape.quadrature(FINE)[0])))
    if not deepest > 1.2 * CLEAR * shape.extent:
        raise Refused(f"no point lies {CLEAR:g} times the extent from the boundary", beyond=True)


def levelled(problem: Problem, densities: Densities, scheme: Scheme) -> Densities:
    """Return the densities with the level that a pure flux problem asks for."""
    points, weights = problem.shape.quadrature(FINE)
    mean = float(np.average(scheme.potential(densities, points), weights=weights))
    shift = level_shift(problem, mean, lambda at: scheme.potential(densities, at))
    return replace(densities, values=densities.values + shift)


@adapt(
    name="constant boundary elements",
    kind="boundary element",
    order=2,
    dims={2},
    shapes={
        "polygon",
        "disc",
        "ellipse",
        "annulus",
        "elliptic-ring",
        "sector",
        "confocal-parabolas",
    },
    conditions={"dirichlet", "neumann", "robin"},
    clearance=CLEAR,
    formulation="direct",
    discretisation="collocation",
)
def boundary_elements(problem: Problem, n: int) -> Answer:
    """Solve by collocation with constant elements."""
    return solve_on_boundary(problem, n)
