"""Lagrange cells: shape functions, their gradients, and exact quadrature on the reference cell.

The shape functions are the polynomials phi_i of the cell's space with phi_i(node_j) = delta_ij. With the
monomials m_j of the space and V_ij = m_j(node_i), phi_i = sum_j (V^-1)_ji m_j. The nodes lie at multiples of
one half, so that V^-1 has whole-numbered entries and is stored exactly.

Quadrature is the tensor Gauss rule on cubes and the conical product of Gauss-Jacobi rules on simplices; both
are exact for the stated degree and have positive weights.

References
----------
Stroud, A. H. (1971), Approximate Calculation of Multiple Integrals, section 2.4 (conical products; from
memory, unchecked; the tests integrate every monomial).
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from scipy.special import roots_jacobi

from laplace_verify.arrays import Array, frozen
from laplace_verify.errors import AnswerError, nearest_names
from laplace_verify.solvers._element_tables import CORNERS, EDGES, LAYOUT, monomials

__all__ = ["ELEMENTS", "Element", "element"]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Element:
    """A reference cell with its Lagrange shape functions.

    Attributes
    ----------
    name : meshio's name of the cell, such as "triangle6"
    dim : 1, 2 or 3
    degree : the complete polynomial degree the shape functions contain
    simplex : unit simplex if true, else unit cube
    corners : number of corner nodes; they come first
    nodes : (k, dim) reference nodes
    exponents : (k, dim) exponents of the monomials
    coefficients : (k, k), column i holds phi_i in terms of the monomials
    """

    name: str
    dim: int
    degree: int
    simplex: bool
    corners: int
    nodes: Array
    exponents: Array
    coefficients: Array

    @property
    def affine(self) -> bool:
        """Whether the map from the reference cell is affine for every choice of nodes."""
        return self.simplex and self.degree == 1

    @property
    def volume(self) -> float:
        """Length, area or volume of the reference cell."""
        return {1: 1.0, 2: 0.5, 3: 1.0 / 6.0}[self.dim] if self.simplex else 1.0

    def shape(self, at: Array) -> Array:
        """Return phi_i at reference points (..., dim), shape (..., k)."""
        powers: Array = np.prod(at[..., np.newaxis, :] ** self.exponents, axis=-1)
        result: Array = powers @ self.coefficients
        return result

    def shape_gradient(self, at: Array) -> Array:
        """Return d phi_i / d xi_j at reference points (..., dim), shape (..., k, dim)."""
        columns = []
        for j in range(self.dim):
            lowered = self.exponents.copy()
            lowered[:, j] = np.maximum(lowered[:, j] - 1, 0)
            powers = np.prod(at[..., np.newaxis, :] ** lowered, axis=-1) * self.exponents[:, j]
            columns.append(powers @ self.coefficients)
        return np.stack(columns, axis=-1)

    def outside(self, at: Array) -> Array:
        """Return how far reference points (..., dim) lie outside: at most 0 inside, shape (...)."""
        low = np.max(-at, axis=-1)
        high = at.sum(axis=-1) - 1 if self.simplex else np.max(at - 1, axis=-1)
        result: Array = np.maximum(low, high)
        return result

    def quadrature(self, order: int) -> tuple[Array, Array]:
        """Return points (q, dim) and weights (q,), exact for degree `order` (on cubes in every variable)."""
        return _reference_rule(self.dim, self.simplex, max(int(order), 0))

    def random(self, generator: np.random.Generator, shape: tuple[int, ...]) -> Array:
        """Return points uniform in the reference cell, shape (*shape, dim)."""
        if not self.simplex:
            return generator.random((*shape, self.dim))
        # Normalised exponential spacings are uniform in the simplex in any dimension.
        spacing = generator.standard_exponential((*shape, self.dim + 1))
        return np.ascontiguousarray((spacing / spacing.sum(axis=-1, keepdims=True))[..., : self.dim])


def element(name: str) -> Element:
    """Return the cell of meshio's name `name`.

    Raises
    ------
    AnswerError
        If the name is unknown; the nearest known ones are listed.

    Examples
    --------
    >>> element("triangle6").nodes.tolist()[3:]
    [[0.5, 0.0], [0.5, 0.5], [0.0, 0.5]]
    """
    try:
        return ELEMENTS[name]
    except (KeyError, TypeError):
        raise AnswerError(
            f"cells: {name!r} is no cell this package knows by meshio's names; "
            f"{nearest_names(str(name), ELEMENTS)}"
        ) from None


def _build(name: str) -> Element:
    """Make the element from the tables."""
    parent, degree, with_edges, with_centre = LAYOUT[name]
    corners = np.array(CORNERS[parent], dtype=np.float64)
    nodes = [corners]
    if with_edges:
        nodes.append(np.array([(corners[a] + corners[b]) / 2 for a, b in EDGES[parent]]))
    if with_centre:
        nodes.append(corners.mean(axis=0, keepdims=True))
    points = np.vstack(nodes)
    exponents = np.array(monomials(name), dtype=np.float64)
    vandermonde = np.prod(points[:, np.newaxis, :] ** exponents, axis=-1)
    return Element(
        name=name,
        dim=corners.shape[1],
        degree=degree,
        simplex=parent in ("line", "triangle", "tetra"),
        corners=len(corners),
        nodes=frozen(points),
        exponents=frozen(exponents),
        coefficients=frozen(np.rint(np.linalg.inv(vandermonde))),  # whole numbers, see the module docstring
    )


@lru_cache(maxsize=64)
def _reference_rule(dim: int, simplex: bool, order: int) -> tuple[Array, Array]:
    """Tensor Gauss rule, or conical product on the simplex, exact for degree `order`."""
    count = order // 2 + 1
    points, weights = np.zeros((1, 0)), np.ones(1)
    for axis in range(dim):
        # x_j = t_j (1 - x_1 - ... - x_{j-1}): the Jacobian of the collapse is (1 - t_j)^(dim - 1 - j).
        alpha = dim - 1 - axis if simplex else 0
        t, w = roots_jacobi(count, alpha, 0)
        t, w = (1 + t) / 2, w / 2 ** (alpha + 1)
        room = 1 - points.sum(axis=1) if simplex else np.ones(len(points))
        new = (room[:, np.newaxis] * t).reshape(-1, 1)
        points = np.hstack([np.repeat(points, count, axis=0), new])
        weights = (weights[:, np.newaxis] * w).ravel()
    return frozen(points), frozen(weights)


ELEMENTS: dict[str, Element] = {name: _build(name) for name in LAYOUT}
