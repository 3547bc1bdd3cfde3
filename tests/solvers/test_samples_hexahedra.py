"""Trilinear elements on solids: meshes that fill them, rates, exactness, fluxes; a twin that falls short."""

import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.errors import AdapterError
from laplace_verify.solvers.cells import CellMesh
from laplace_verify.solvers.samples import q1_element
from laplace_verify.solvers.samples.hexahedral_meshes import hexahedra

SOLIDS = {
    "box": lv.Box((0, 0, 0), (1.2, 0.9, 0.7)),
    "prism": lv.Prism(lv.LShape(1.0), 0.2, 0.7),
    "notched cube": lv.NotchedCube(0.8),
    "ball": lv.Ball((1, -0.5, 0.2), 2.0),
    "spheroid": lv.Spheroid((0, 0.3, 1), (1.0, 0.5)),
    "shell": lv.SphericalShell((0.1, 0, 0), 0.5, 1.2),
    "cylinder": lv.Cylinder(0.8, -0.5, 0.9),
}
solids = pytest.mark.parametrize("shape", [pytest.param(s, id=name) for name, s in SOLIDS.items()])


@solids
def test_meshes_fill_the_solid_and_name_every_face(shape):
    coarse, fine = hexahedra(shape, 4), hexahedra(shape, 8)
    gaps = []
    for mesh in (coarse, fine):
        volumes = CellMesh(mesh.points, {"hexahedron": mesh.cells}).volumes()  # refuses folded cells
        assert volumes.min() > 0
        gaps.append(abs(volumes.sum() / shape.measure - 1))
        faces = np.concatenate(list(mesh.boundary.values()))
        assert len(np.unique(np.sort(faces, axis=1), axis=0)) == len(faces)  # none counted twice
        assert set(mesh.boundary) == set(shape.pieces.names)
        assert all(len(found) for found in mesh.boundary.values())
        assert shape.contains(mesh.points, tol=1e-12).all()
        # closed: the normals of the outer faces, by their areas, add up to nothing
        a, b, c, d = np.moveaxis(mesh.points[faces], 1, 0)
        assert np.abs(np.cross(c - a, d - b).sum(axis=0)).max() <= 1e-12 * shape.measure
    assert fine.h < 0.6 * coarse.h
    curved = any(piece.curved for piece in shape.pieces)
    assert gaps[1] < 0.35 * gaps[0] if curved else gaps[1] <= 1e-13  # O(h^2)


@solids
def test_affine_solutions_are_exact_with_their_fluxes(shape):
    case = lv.case(shape, {}, fields.affine((1, -2, 3), 1), 1.5)
    answer = q1_element.solve(case.problem, 4)
    np.testing.assert_allclose(answer.values, case.exact.value(answer.points), rtol=0, atol=1e-9)
    scale = sum(map(abs, answer.fluxes.values()))
    assert abs(sum(answer.fluxes.values())) <= 1e-8 + 0.1 * scale  # shares along edges of round faces
    first = next(iter(case.problem.pieces))
    assert set(answer.fluxes) == set(case.problem.pieces.names)
    if not first.curved and shape.kind == "box":
        assert answer.fluxes["top"] == pytest.approx(1.5 * 3 * 1.2 * 0.9, rel=1e-8)


def test_level_of_a_pure_flux_problem_is_the_one_asked_for():
    for constant in (("mean", 0.25), ("point", (0.1, 0.2, 0.3), -1.0)):
        shape, u = SOLIDS["box"], fields.affine((1, 2, 0))
        level = -u.value([constant[1]])[0] + constant[2] if constant[0] == "point" else None
        level = constant[1] - u.value([[0.6, 0.45, 0.35]])[0] if level is None else level
        exact = u + fields.affine((0, 0, 0), level)
        case = lv.case(shape, dict.fromkeys(shape.pieces.names, "neumann"), exact, constant=constant)
        answer = q1_element.solve(case.problem, 4)
        np.testing.assert_allclose(answer.values, exact.value(answer.points), rtol=0, atol=1e-9)


@pytest.mark.slow
@pytest.mark.parametrize(
    "id_",
    ["box-convection", "corner-block", "corner-block-waves", "notched-cube-smooth"],
)
def test_sound_elements_keep_their_rates_and_never_fail(id_):
    study = lv.study(q1_element, lv.catalogue[id_], sizes=(6, 9, 13, 19))
    assert study.verdict in (lv.Verdict.PASS, lv.Verdict.INCONCLUSIVE), str(study)
    expected = study.orders["L2"].expected
    assert study.orders["L2"].observed >= expected - 0.2
    assert study.orders["H1-semi"].observed >= study.orders["H1-semi"].expected - 0.1


def test_edge_takes_away_a_third_of_the_order_in_energy():
    study = lv.study(q1_element, lv.catalogue["corner-block"], sizes=(4, 6, 9, 13))
    assert study.orders["H1-semi"].observed == pytest.approx(2 / 3, abs=0.06)
    assert study.orders["H1-semi"].expected == pytest.approx(2 / 3)


def test_flat_data_under_a_curve_are_first_order():
    """The twin: boundary data multiplied by 1 + h instead of the true ones fall short in L2."""
    case = lv.catalogue["ball-legendre"]

    @lv.adapt(name="careless", kind="finite element", order=q1_element.order, dims={3}, shapes={"ball"})
    def careless(problem, n):
        answer = q1_element.solve(problem, n)
        return lv.Answer(answer.points, answer.values * (1 + 0.2 / n), cells=answer.cells, h=answer.h)

    study = lv.study(careless, case, sizes=(4, 6, 9, 13))
    assert study.orders["L2"].observed < 1.6


def test_other_solids_are_declined():
    with pytest.raises(AdapterError, match="hexahedra for boxes and round solids"):
        hexahedra(lv.Prism(lv.Polygon([(0, 0), (1, 0), (0, 1)]), 0, 1), 4)
    sector = lv.case(lv.Sector(1, math.pi), {}, fields.polynomial(2))
    assert q1_element.refuses(sector.problem) is not None
