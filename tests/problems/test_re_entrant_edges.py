"""Singular edges and vertices of solids: regularity, data along them, refusals, conditions."""

import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.errors import ProblemError

BLOCK = lv.Prism(lv.LShape(1.0), 0.0, 0.5)
EDGE = fields.along_z(fields.wedge("2/3"), slope="1/2")


def test_exponents_are_those_of_edge_and_domain():
    case = lv.case(BLOCK, {}, EDGE)
    assert case.regularity.solution == pytest.approx(2 / 3, rel=1e-15)
    assert case.regularity.domain == pytest.approx(2 / 3, rel=1e-15)
    assert len(case.regularity.jumps) == 0
    assert case.regularity.scale == pytest.approx(0.5, rel=1e-12)  # the height; not how the line goes on
    smooth = lv.case(BLOCK, {"side-6": "neumann"}, fields.solid(2, 0))
    assert math.isinf(smooth.regularity.solution)
    assert smooth.regularity.domain == pytest.approx(1 / 3, rel=1e-12)
    beside = lv.case(lv.Box((-1, -1, 0), (-0.25, 1, 1)), {}, EDGE)
    assert math.isinf(beside.regularity.solution)
    assert beside.regularity.scale == pytest.approx(0.25, rel=1e-12)


def test_vertex_counts_where_all_its_faces_carry_dirichlet_conditions():
    u, cube = fields.solid(3, 2), lv.NotchedCube(1.0)
    assert lv.case(cube, {}, u).regularity.domain == pytest.approx(0.454173734301, abs=1e-12)
    insulated = {"notch-x": "neumann", "notch-y": "neumann", "notch-z": "neumann"}
    assert lv.case(cube, insulated, u).regularity.domain == pytest.approx(2 / 3, rel=1e-12)
    assert lv.case(cube, {"notch-x": "neumann"}, u).regularity.domain == pytest.approx(1 / 3, rel=1e-12)
    renamed = lv.case(cube.renamed(**{"notch-x": "recess"}), {}, u)
    assert renamed.regularity.domain == pytest.approx(0.454173734301, abs=1e-12)


def test_flux_along_the_edge_has_a_limit_where_the_edge_ends():
    """K du/dz on the top, where grad u is infinite but the derivative along the edge is not."""
    growing = EDGE + fields.solid(2, 0) + fields.affine((0, 0, 2))  # on the edge u = z^2 + 2 z
    case = lv.case(BLOCK, {"top": "neumann", "bottom": "neumann"}, growing, 3.0)
    corner = np.array([[0.0, 0.0, 0.5]])
    assert case.problem.pieces["top"].data(corner)[0] == pytest.approx(3.0 * 3.0, rel=1e-10)
    assert case.problem.pieces["bottom"].data(corner * 0)[0] == pytest.approx(-3.0 * 2.0, rel=1e-10)


def test_flux_on_the_edge_is_zero_on_an_insulated_face_and_infinite_on_another():
    mixed = fields.along_z(fields.wedge("1/3"))
    on = np.array([[0.0, 0.0, 0.2]])
    insulated = lv.case(BLOCK, {"side-6": "neumann"}, mixed)
    assert insulated.problem.pieces["side-6"].data(on)[0] == pytest.approx(0.0, abs=1e-9)
    metered = lv.case(BLOCK, {"side-1": "neumann"}, mixed)
    with pytest.raises(ProblemError, match="no finite limit"):
        metered.problem.pieces["side-1"].data(on)


@pytest.mark.parametrize(
    ("shape", "field", "message"),
    [
        (lv.Box((-1, -1, 0), (1, 1, 1)), EDGE, "is singular along an edge inside"),
        (lv.Box((0.5, -1, 0), (1.5, 0.2, 1)), EDGE, "jumps across a plane inside"),
        (
            lv.Prism(lv.LShape(1.0), 0, 1),
            fields.along_z(fields.wedge("2/3", cut=1.0)),
            "jumps across a plane",
        ),
        (
            lv.Box((-1, -1, -1), (1, 1, 1)),
            fields.half_edge("2/3", (1, 1, 1)),
            "singular point .* inside|edge inside",
        ),
        (lv.NotchedCube(1.0), fields.half_edge("2/3", (-1, 1, 1)), "jumps across a plane inside"),
        (lv.Ball((0, 0, -2), 1), fields.cone("3/4"), "along an edge inside"),
    ],
)
def test_singular_lines_and_sheets_inside_are_refused(shape, field, message):
    with pytest.raises(ProblemError, match=message):
        lv.case(shape, {}, field)


def test_cone_of_the_wrong_angle_is_refused_on_the_axis():
    below = lv.ConeSection(1.0, 0.6 * math.pi)
    lv.case(below, {}, fields.axisymmetric(fields.cone("3/4")), coordinates="axisymmetric")
    with pytest.raises(ProblemError, match="no value on the axis"):
        lv.case(
            lv.HalfDisc((0, 0), 1.0),
            {},
            fields.axisymmetric(fields.cone("3/4").shifted((0, 0, 2))),
            coordinates="axisymmetric",
        )


def test_dimensional_twin_keeps_edges_and_vertices():
    case = lv.catalogue["notched-cube-edges"].scaled(length=2.0, value=3.0)
    assert case.problem.shape.size == pytest.approx(1.6)
    assert case.regularity.solution == pytest.approx(2 / 3)
    block = lv.catalogue["corner-block-waves"].scaled(length=(0.5, "m"))
    plain = lv.catalogue["corner-block-waves"]
    point = np.array([[-0.2, 0.3, 0.1]])
    assert block.exact.value(0.5 * point)[0] == pytest.approx(plain.exact.value(point)[0], rel=1e-13)
    cone = lv.catalogue["conical-notch-cold"].scaled(length=2.0)
    assert cone.problem.shape.half_angle == lv.catalogue["conical-notch-cold"].problem.shape.half_angle
