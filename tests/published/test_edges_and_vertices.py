"""Exponents of cones, edges and vertices, and capacities of bodies in space, against published values."""

import math
from functools import partial

import mpmath
import numpy as np
import pytest
import scipy.sparse as sp
from scipy.sparse.linalg import eigsh

import laplace_verify as lv
from laplace_verify import fields

# P_nu(cos A) = 0, the outside of a cone of half-angle pi - A (Jackson, Classical Electrodynamics, sec. 3.4;
# Hobson 1931; from memory, unchecked). 135 degrees: printed 0.463; all digits by another implementation of
# Legendre functions.
CONES = [
    pytest.param("2/3", "0.601509309391253805", id="120 degrees"),
    pytest.param("3/4", "0.463098561780106473", id="135 degrees"),
    pytest.param("5/6", "0.346183940648344986", id="150 degrees"),
    pytest.param("17/18", "0.201220371212730199", id="170 degrees"),
]


@pytest.mark.parametrize(("share", "published"), CONES)
def test_exponent_outside_a_cone(share, published):
    value, radius, basis = fields.cone_exponent(share, digits=30)
    with mpmath.workdps(40):
        assert abs(value - mpmath.mpf(published)) <= mpmath.mpf("1e-18") / 2 + radius
    assert basis == "tail bound"
    case = lv.case(
        lv.ConeSection(1.0, math.pi * float(fields.cone(share).share)),
        {},
        fields.axisymmetric(fields.cone(share)),
        coordinates="axisymmetric",
    )
    assert case.regularity.domain == pytest.approx(
        float(published), rel=1e-12
    )  # found by another root finder
    assert case.regularity.solution == pytest.approx(float(published), rel=1e-15)


def test_exponents_of_cones_where_legendres_functions_are_polynomials():
    """P_2 vanishes at 54.7356 degrees (exponent 2), P_1 at 90 (exponent 1): Jackson, section 3.4."""
    share = math.acos(1 / math.sqrt(3)) / math.pi
    assert float(fields.cone_exponent(share).value) == pytest.approx(2.0, abs=4e-15)
    wide, narrow = fields.cone_exponent("4999/10000").value, fields.cone_exponent("5001/10000").value
    assert narrow < 1 < wide
    assert float(wide + narrow) / 2 == pytest.approx(1.0, abs=1e-6)


def test_exponents_of_a_cube_without_an_octant():
    """Vertex 0.4541737 (Schmitz, Volk & Wendland 1993), edges 2/3 (Grisvard 1985); from memory, unchecked.

    A 14-digit figure in circulation, 0.45417371533061, agrees to 7 digits only: two computations independent
    of each other (spectral Rayleigh-Ritz, particular solutions in 40 digits) give 0.4541737343.
    """
    (vertex,) = lv.NotchedCube(1.0).sharp_vertices
    assert vertex.exponent == pytest.approx(0.4541737, abs=5e-8)
    assert abs(vertex.exponent - 0.45417371533061) > 1e-8
    edges = [j for j in lv.NotchedCube(1.0).junctions if j.opening > math.pi + 1e-9]
    assert [math.pi / j.opening for j in edges] == pytest.approx([2 / 3] * 3, rel=1e-15)


def between(corners, cells, a, b):
    """Return the node a steps towards the first and b towards the second corner of a face."""
    return a * corners[0] + b * corners[1] + (cells - a - b) * corners[2]


def dirichlet_exponent_of_the_notch(cells):
    """Exponent from the first eigenvalue of the Laplacian on the sphere without its octant triangle.

    Linear elements on the octahedron's eight faces, cut into cells^2 triangles each and moved to the sphere;
    lambda (lambda + 1) is the eigenvalue.
    """
    points, triangles = {}, []

    def node(p):
        return points.setdefault(tuple(np.round(p, 9)), len(points))

    for signs in np.ndindex(2, 2, 2):
        s = 1 - 2 * np.array(signs)
        if (s > 0).all():
            continue  # the octant that is missing
        at = partial(between, np.diag(s) / cells, cells)
        for i in range(cells):
            for j in range(cells - i):
                triangles.append([node(at(i, j)), node(at(i + 1, j)), node(at(i, j + 1))])
                if i + j + 1 < cells:
                    triangles.append([node(at(i + 1, j)), node(at(i + 1, j + 1)), node(at(i, j + 1))])
    flat = np.array(list(points))
    held = (flat >= -1e-9).all(axis=1)
    sphere = flat / np.linalg.norm(flat, axis=1, keepdims=True)
    corners = sphere[np.array(triangles)]
    sides = np.roll(corners, -1, axis=1) - np.roll(corners, 1, axis=1)  # opposite each corner
    area = np.linalg.norm(np.cross(sides[:, 0], sides[:, 1]), axis=1) / 2
    stiff = np.einsum("tik,tjk->tij", sides, sides) / (4 * area)[:, None, None]
    mass = (np.ones((3, 3)) + np.eye(3)) / 12 * area[:, None, None]
    rows, columns = np.repeat(triangles, 3, axis=1).ravel(), np.tile(triangles, (1, 3)).ravel()
    free = np.flatnonzero(~held)
    a, b = (
        sp.csr_array((m.ravel(), (rows, columns)), shape=(len(flat),) * 2)[free][:, free].tocsc()
        for m in (stiff, mass)
    )
    found = eigsh(a, k=1, M=b, sigma=0.3, return_eigenvectors=False, v0=np.ones(len(free)))[0]
    return math.sqrt(found + 0.25) - 0.5


def test_exponent_of_the_vertex_by_elements_on_the_sphere():
    """The eigenvalue falls like h^(4/3), the regularity of the triangle's corners: extrapolated by it."""
    coarse, fine = dirichlet_exponent_of_the_notch(16), dirichlet_exponent_of_the_notch(32)
    limit = fine + (fine - coarse) / (2 ** (4 / 3) - 1)
    (vertex,) = lv.NotchedCube(1.0).sharp_vertices
    assert limit == pytest.approx(vertex.exponent, abs=5e-4)
    assert fine > vertex.exponent + 1e-4  # the twin: elements alone lie above
