"""Small meshes with every cell kind, straight and curved, shared by the tests of this folder."""

import numpy as np
import pytest

from laplace_verify.solvers.elements import ELEMENTS


class MeshMaker:
    """Build meshes of the unit interval, square or cube from any cell kind."""

    @staticmethod
    def corners(name, n):
        """Return corner nodes and corner connectivity of a parent cell kind on the unit cube."""
        dim = ELEMENTS[name].dim
        axes = np.meshgrid(*[np.linspace(0, 1, n + 1)] * dim, indexing="ij")
        nodes = np.column_stack([axis.ravel() for axis in axes])
        index = np.arange(len(nodes)).reshape((n + 1,) * dim)
        if dim == 1:
            return nodes, np.column_stack([index[:-1], index[1:]])
        if dim == 2:
            quads = np.stack([index[:-1, :-1], index[1:, :-1], index[1:, 1:], index[:-1, 1:]], axis=-1)
            quads = quads.reshape(-1, 4)
            if name == "quad":
                return nodes, quads
            return nodes, np.vstack([quads[:, [0, 1, 2]], quads[:, [0, 2, 3]]])
        corner = [
            index[i : n + i, j : n + j, k : n + k].ravel()
            for i, j, k in ELEMENTS["hexahedron"].nodes.astype(int)
        ]
        hexes = np.column_stack(corner)
        if name == "hexahedron":
            return nodes, hexes
        # Kuhn's subdivision: one tetrahedron per ordering of the axes, all along the diagonal 0-6.
        kuhn = [(0, 1, 2, 6), (0, 2, 3, 6), (0, 3, 7, 6), (0, 7, 4, 6), (0, 4, 5, 6), (0, 5, 1, 6)]
        return nodes, np.vstack([hexes[:, list(tetra)] for tetra in kuhn])

    def __call__(self, name, n=3, bend=None):
        """Return nodes and {name: cells}; `bend` maps nodes (n, d) to nodes, edge nodes included."""
        kind = ELEMENTS[name]
        parents = {2: "line", 3: "triangle", 4: "tetra" if kind.dim == 3 else "quad", 8: "hexahedron"}
        parent = ELEMENTS[parents[kind.corners]]
        nodes, cells = self.corners(parent.name, n)
        places = np.einsum("qk,mkd->mqd", parent.shape(kind.nodes), nodes[cells])
        # Nodes shared by neighbours are merged, so that the mesh is continuous.
        flat = places.reshape(-1, kind.dim)
        _, first, inverse = np.unique(np.round(flat, 9), axis=0, return_index=True, return_inverse=True)
        points = flat[first] if bend is None else bend(flat[first])
        return points, {name: inverse.reshape(places.shape[:2])}


@pytest.fixture(scope="session")
def make_mesh():
    """Return the mesh maker."""
    return MeshMaker()


@pytest.fixture(scope="session")
def affine_map():
    """Return an affine map of R^d with no symmetry, and its determinant."""

    def build(dim):
        matrix = np.array([[1.3, 0.4, -0.2], [0.25, 0.9, 0.3], [-0.15, 0.35, 1.1]])[:dim, :dim]
        shift = np.array([0.7, -0.4, 0.2])[:dim]
        return (lambda points: points @ matrix.T + shift), abs(float(np.linalg.det(matrix)))

    return build


@pytest.fixture(scope="session")
def bend():
    """Return a smooth map close to the identity that makes every edge curved."""

    def warp(points):
        dim = points.shape[1]
        result = points.copy()
        for axis in range(dim):
            other = points[:, (axis + 1) % dim]
            result[:, axis] += 0.06 * np.sin(2.1 * other + 0.4 * points[:, axis] + axis)
        return result

    return warp
