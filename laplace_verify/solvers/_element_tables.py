"""Tables of the Lagrange cells: reference nodes and monomials, in meshio's names and node order.

Reference cells are the unit simplex {x >= 0, x_1 + ... + x_d <= 1} and the unit cube [0, 1]^d. Corner nodes
come first, then one node per edge in the order of `EDGES`, then the centre if there is one. meshio follows
VTK: in the tetrahedron with ten nodes the last two edges are 1-3 and 2-3 (Gmsh files exchange them, meshio
does not).

References
----------
VTK file formats, cell types VTK_LINE to VTK_BIQUADRATIC_QUAD (node order; from memory, checked in the tests
by the Kronecker property and by volumes of curved cells).
"""

from __future__ import annotations

from itertools import product

__all__ = ["CORNERS", "EDGES", "LAYOUT", "monomials"]

CORNERS: dict[str, tuple[tuple[float, ...], ...]] = {
    "line": ((0,), (1,)),
    "triangle": ((0, 0), (1, 0), (0, 1)),
    "quad": ((0, 0), (1, 0), (1, 1), (0, 1)),
    "tetra": ((0, 0, 0), (1, 0, 0), (0, 1, 0), (0, 0, 1)),
    "hexahedron": (
        (0, 0, 0), (1, 0, 0), (1, 1, 0), (0, 1, 0),
        (0, 0, 1), (1, 0, 1), (1, 1, 1), (0, 1, 1),
    ),
}  # fmt: skip

EDGES: dict[str, tuple[tuple[int, int], ...]] = {
    "line": ((0, 1),),
    "triangle": ((0, 1), (1, 2), (2, 0)),
    "quad": ((0, 1), (1, 2), (2, 3), (3, 0)),
    "tetra": ((0, 1), (1, 2), (2, 0), (0, 3), (1, 3), (2, 3)),
}

# name: (parent with the same corners, degree, has nodes on edges, has a node at the centre)
LAYOUT: dict[str, tuple[str, int, bool, bool]] = {
    "line": ("line", 1, False, False),
    "line3": ("line", 2, True, False),
    "triangle": ("triangle", 1, False, False),
    "triangle6": ("triangle", 2, True, False),
    "quad": ("quad", 1, False, False),
    "quad8": ("quad", 2, True, False),
    "quad9": ("quad", 2, True, True),
    "tetra": ("tetra", 1, False, False),
    "tetra10": ("tetra", 2, True, False),
    "hexahedron": ("hexahedron", 1, False, False),
}


def monomials(name: str) -> list[tuple[int, ...]]:
    """Return the exponents that span the cell's shape functions, one tuple per function.

    Simplices: total degree at most k. Cubes: degree at most k in every variable; the eight-node quadrilateral
    leaves out x^2 y^2 (serendipity).
    """
    parent, degree, _, _ = LAYOUT[name]
    dim = len(CORNERS[parent][0])
    exponents = list(product(range(degree + 1), repeat=dim))
    if parent in ("triangle", "tetra"):
        exponents = [e for e in exponents if sum(e) <= degree]
    if name == "quad8":
        exponents.remove((2, 2))
    return exponents
