"""Problems in (r, z) and r: the axis, the operator, Green's identity of rings, integrals of space, files."""

import math

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.special import eval_legendre

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.problems import case_from_json, case_to_json, energy_of_solution
from laplace_verify.problems.coordinates import cone_exponent, metric
from laplace_verify.problems.rings import ring_source

SECTION = lv.Rectangle((0.0, -0.5), (0.8, 0.9))
SLEEVE = lv.Rectangle((0.3, -0.5), (0.8, 0.9))
SWIRL = fields.solid(3, 0) + fields.point_source((0, 0, -2))
LOG = fields.axisymmetric(fields.radial("cylinder", 1, 2))


def section(shape=SECTION, conditions=(), field=None, **more):
    field = fields.axisymmetric(SWIRL) if field is None else field
    return lv.case(shape, dict(conditions), field, coordinates="axisymmetric", **more)


# -- the axis ------------------------------------------------------------------------------------------------


def test_side_on_the_axis_is_a_piece_of_its_own_kind_without_data():
    problem = section(conditions={"right": "neumann", "top": lv.robin(2)}).problem
    assert problem.coordinates == "axisymmetric"
    assert problem.pieces.names == ("axis", "right", "bottom", "top")
    axis = problem.pieces["axis"]
    assert axis.kind == "axis"
    assert problem.shape.pieces["axis"].measure == pytest.approx(1.4)
    for question in (axis.data, axis.alpha):
        with pytest.raises(lv.ProblemError, match="is the axis r = 0"):
            question([[0.0, 0.2]])


def test_the_axis_is_no_condition_of_the_case():
    assert section(conditions={"right": "neumann"}).conditions == {"dirichlet", "neumann"}


def test_hollow_cylinder_has_no_axis():
    problem = section(SLEEVE).problem
    assert problem.pieces.names == ("left", "right", "bottom", "top")
    assert {piece.kind for piece in problem.pieces} == {"dirichlet"}


def test_shell_touches_the_axis_twice():
    problem = section(lv.HalfAnnulus((0, 0), 0.5, 1.0)).problem
    assert [piece.name for piece in problem.pieces if piece.kind == "axis"] == ["axis-1", "axis-2"]


def test_split_axis_stays_the_axis():
    problem = section(SECTION.split(left=[0.5])).problem
    assert [piece.name for piece in problem.pieces if piece.kind == "axis"] == ["axis-1", "axis-2"]


def test_problem_with_given_data_needs_none_on_the_axis():
    given = {"right": lv.neumann(0), "bottom": lv.dirichlet(1), "top": lv.dirichlet("x**2")}
    posed = lv.problem(SECTION, given, coordinates="axisymmetric")
    assert posed.pieces["axis"].kind == "axis"
    assert posed.pieces["top"].data([[0.5, 0.9]]).tolist() == [0.25]
    with pytest.raises(lv.ProblemError, match="missing: left"):  # the twin: Cartesian, the side needs data
        lv.problem(SECTION, given)


@pytest.mark.parametrize(
    ("shape", "coordinates", "message"),
    [
        (lv.Rectangle((-0.1, 0), (1, 1)), "axisymmetric", "r >= 0"),
        (lv.Disc((0, 0), 1.0), "axisymmetric", "one half of the section"),
        (lv.Interval(0, 1), "axisymmetric", "shape of the plane"),
        (lv.Interval(-1, 1), "radial-sphere", "r >= 0"),
        (lv.Rectangle((0, 0), (1, 1)), "radial-cylinder", "needs an Interval"),
        (lv.Ball((0, 0, 0), 1.0), "axisymmetric", "shape of the plane"),
        (lv.Rectangle((0, 0), (1, 1)), "axisymetric", "'axisymmetric'"),
        (lv.Interval(1, 2), None, "unknown coordinates"),
        (lv.HalfSpace(2), "axisymmetric", "need a bounded shape"),
    ],
)
def test_shapes_that_do_not_fit_the_coordinates_are_refused(shape, coordinates, message):
    with pytest.raises(lv.ProblemError, match=message):
        lv.case(shape, {}, fields.affine((0,) * shape.dim, 1), coordinates=coordinates)


def test_conditions_on_the_axis_are_refused():
    with pytest.raises(lv.ProblemError, match="takes no condition"):
        section(conditions={"axis": "neumann"})


def test_mixed_tensors_are_refused_and_diagonal_ones_are_not():
    with pytest.raises(lv.ProblemError, match="must be diagonal"):
        section(conductivity=[[2, 0.1], [0.1, 1]])
    stretched = fields.axisymmetric(fields.stretched(fields.solid(2, 0), [[4, 0, 0], [0, 4, 0], [0, 0, 1]]))
    assert section(field=stretched, conductivity=[[4, 0], [0, 1]]).problem.tensor.tolist() == [[4, 0], [0, 1]]
    with pytest.raises(lv.ProblemError, match="is no solution"):  # the twin: the tensor turned round
        section(field=stretched, conductivity=[[1, 0], [0, 4]])


# -- the equation --------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("shape", "coordinates", "field"),
    [
        (SECTION, "axisymmetric", fields.polynomial(2)),  # harmonic in the plane
        (SLEEVE, "axisymmetric", fields.affine((1, 0))),
        (SLEEVE, "axisymmetric", fields.log_source((0, 0))),
        (SLEEVE, "cartesian", LOG),
        (lv.Interval(0.5, 2), "radial-cylinder", fields.radial("sphere", 1, 2)),
        (lv.Interval(0.5, 2), "radial-sphere", fields.radial("cylinder", 1, 2)),
        (lv.Interval(0.5, 2), "radial-sphere", fields.affine((1,))),
        (lv.Interval(0.5, 2), "cartesian", fields.radial("sphere", 1, 2)),
    ],
)
def test_solutions_of_another_operator_are_refused(shape, coordinates, field):
    with pytest.raises(lv.ProblemError, match=r"is no solution: div\(K grad u\)"):
        lv.case(shape, {}, field, coordinates=coordinates)


def test_singular_points_on_the_axis_inside_the_body_are_refused():
    inside = fields.axisymmetric(fields.point_source((0, 0, 0)))
    with pytest.raises(lv.ProblemError, match="on the axis, inside the body"):
        section(field=inside)
    section(SLEEVE, field=inside)  # the twin: a bore
    with pytest.raises(lv.ProblemError, match="no value on the axis"):
        section(field=LOG)
    section(SLEEVE, field=LOG)
    with pytest.raises(lv.ProblemError, match="singular point"):
        lv.case(lv.Interval(0, 1), {}, fields.radial("sphere", 0, 1), coordinates="radial-sphere")


def test_green_identity_of_rings_sees_what_points_do_not():
    """1/s about the centre satisfies the equation at every point off the centre, but not in the ball."""
    pole = lv.field("(x**2 + (y - 0.1)**2)**(-1/2)")
    with pytest.raises(lv.ProblemError, match="Green's third identity"):
        section(lv.HalfDisc((0, 0), 1.0), field=pole)
    section(lv.HalfAnnulus((0, 0), 0.4, 1.0), field=pole)
    section(lv.HalfDisc((0, 0), 1.0), field=lv.field("y**3 - 3*y*x**2/2"))
    with pytest.raises(lv.ProblemError, match="no value on the axis"):
        lv.case(lv.Interval(0, 1), {}, lv.field("log(x)", dim=1), coordinates="radial-cylinder")
    lv.case(lv.Interval(0.2, 1), {}, lv.field("log(x)", dim=1), coordinates="radial-cylinder")


def test_ring_source_is_the_point_source_turned_about_the_axis():
    """Quadrature over the angle of 1/(4 pi K_r sqrt(K_z) rho), and differences for the gradient."""
    place, k = np.array([0.7, -0.2]), np.array([2.25, 0.49])
    for point in ([0.3, 0.4], [0.72, -0.21], [1e-9, 0.5], [0.0, 0.1], [5.0, -3.0]):

        def over_angle(r, z):
            def density(angle):
                across = r**2 + place[0] ** 2 - 2 * r * place[0] * math.cos(angle)
                return 1 / math.sqrt(across / k[0] + (z - place[1]) ** 2 / k[1])

            whole = 2 * quad(density, 0.0, math.pi, points=[0.05], epsabs=1e-13, epsrel=1e-13, limit=400)[0]
            return whole / (4 * math.pi * k[0] * math.sqrt(k[1]))

        g, gradient = ring_source(np.array([point]), place, k)
        r, z = point
        assert g[0] == pytest.approx(over_angle(r, z), rel=1e-11)
        h = 1e-4  # the point (0.72, -0.21) is 0.02 away: truncation (h/0.02)^2
        slopes = [
            (over_angle(r + h, z) - over_angle(r - h, z)) / (2 * h),
            (over_angle(r, z + h) - over_angle(r, z - h)) / (2 * h),
        ]
        np.testing.assert_allclose(gradient[0], slopes, rtol=1e-4, atol=1e-7)


# -- integrals of space --------------------------------------------------------------------------------------


def test_metric_is_that_of_rings_and_shells():
    points = np.array([[0.0], [0.5], [2.0]])
    assert metric("cartesian", points).tolist() == [1, 1, 1]
    np.testing.assert_allclose(metric("radial-cylinder", points), 2 * math.pi * points[:, 0])
    np.testing.assert_allclose(metric("radial-sphere", points), 4 * math.pi * points[:, 0] ** 2)


def test_fluxes_energy_and_mean_are_those_of_the_body_in_space():
    wanted = {"top": lv.flux_through("top"), "energy": energy_of_solution()}
    flat = section(quantities={**wanted, "mantle": lv.flux_through("right")}, conductivity=1.5)
    body = lv.case(
        lv.Cylinder(0.8, -0.5, 0.9), {}, SWIRL, 1.5, quantities={**wanted, "mantle": lv.flux_through("side")}
    )
    for name, quantity in body.quantities.items():
        assert flat.quantities[name].value == pytest.approx(quantity.value, rel=1e-12), name
    around = dict.fromkeys(("right", "bottom", "top"), "neumann")
    mean = section(conditions=around).problem.constant
    in_space = lv.case(
        lv.Cylinder(0.8, -0.5, 0.9), dict.fromkeys(("side", "bottom", "top"), "neumann"), SWIRL
    ).problem.constant
    assert mean[0] == in_space[0] == "mean"
    assert mean[1] == pytest.approx(in_space[1], rel=1e-10)


def test_pure_flux_data_must_balance_in_space():
    ring = lv.Interval(0.5, 2.0)
    good = {"left": lv.neumann(-4.0), "right": lv.neumann(1.0)}
    lv.problem(ring, good, coordinates="radial-cylinder")
    for coordinates in ("cartesian", "radial-sphere"):
        with pytest.raises(lv.ProblemError, match="zero net flux"):
            lv.problem(ring, good, coordinates=coordinates)


def test_dimensional_twin_scales_as_space_does():
    wanted = {"out": lv.flux_through("right")}
    units = {"length": (2, "m"), "value": (10, "K"), "conductivity": (3, "W/(m K)")}
    wall, line, ball = lv.Interval(0.5, 2), fields.radial("cylinder", 1, 2), fields.radial("sphere", 1, 2)
    pipe = lv.case(wall, {}, line, coordinates="radial-cylinder", quantities=wanted)
    tank = lv.case(wall, {}, ball, coordinates="radial-sphere", quantities=wanted)
    block = section(quantities=wanted)
    for body, factor, unit in ((pipe, 30, "W/m"), (tank, 60, "W"), (block, 60, "W")):
        twin = body.scaled(**units)
        assert twin.problem.coordinates == body.problem.coordinates
        assert twin.quantities["out"].unit == unit
        assert twin.quantities["out"].value == pytest.approx(factor * body.quantities["out"].value)
        points = twin.problem.pieces["right"].sample(3)[0]
        np.testing.assert_allclose(
            twin.problem.pieces["right"].data(points), 10 * body.problem.pieces["right"].data(points / 2)
        )


# -- regularity ----------------------------------------------------------------------------------------------


def test_the_axis_is_no_corner_where_the_surface_is_flat():
    ball = section(lv.HalfDisc((0, 0), 1.0))
    assert ball.regularity.domain == math.inf
    assert section().regularity.domain == 2.0  # the edge of rotation at the mantle: pi/2 as in the plane
    mixed = section(conditions={"right": "neumann"})
    assert mixed.regularity.domain == 1.0


def test_cone_tips_have_the_exponents_of_legendre_functions():
    cone = lv.Polygon([(0, 0), (1, 1), (0, 1)])
    tip = section(cone, field=fields.axisymmetric(fields.solid(2, 0))).regularity.domain
    assert tip == pytest.approx(cone_exponent(math.pi / 4, "dirichlet"))  # smaller than the two 4 and inf
    # whole degrees: P_2(cos w) = 0 at cos^2 w = 1/3, P_3'(cos w) = 0 at cos^2 w = 1/5
    assert cone_exponent(math.acos(1 / math.sqrt(3)), "dirichlet") == pytest.approx(2.0, abs=1e-9)
    assert abs(eval_legendre(2, 1 / math.sqrt(3))) < 1e-15
    assert cone_exponent(math.acos(1 / math.sqrt(5)), "neumann") == pytest.approx(3.0, abs=1e-9)
    # exponent 1/2 is reached at half the opening 130.7099 degrees: the root of P_1/2(cos w) by mpmath
    assert cone_exponent(math.radians(130.7099), "dirichlet") == pytest.approx(0.5, abs=1e-5)


def test_the_bore_is_a_length_to_be_resolved():
    assert section(lv.Rectangle((0.01, 0), (1, 1))).regularity.scale == pytest.approx(0.01)
    plane = lv.case(lv.Rectangle((0.01, 0), (1, 1)), {}, fields.affine((1, 0)))
    assert plane.regularity.scale == pytest.approx(0.99)


# -- layers --------------------------------------------------------------------------------------------------


def test_layers_across_the_radius():
    wall = lv.layers((1,), [1], {"steel": 4.0, "felt": 0.5})
    field = fields.by_region(wall, [fields.radial("cylinder", 0, "1/4"), fields.radial("cylinder", 0, 2)])
    made = lv.case(
        lv.Interval(0.5, 2),
        {},
        field,
        wall,
        coordinates="radial-cylinder",
        quantities={"out": lv.flux_through("right", exact=2 * math.pi)},
    )
    assert len(made.problem.interfaces) == 1
    wrong = fields.by_region(wall, [fields.radial("cylinder", 0, "1/4"), fields.radial("cylinder", 0, 1)])
    with pytest.raises(lv.ProblemError, match="flux"):
        lv.case(lv.Interval(0.5, 2), {}, wrong, wall, coordinates="radial-cylinder")
    with pytest.raises(lv.ProblemError, match="is no solution"):
        lv.case(lv.Interval(0.5, 2), {}, field, wall, coordinates="radial-sphere")


# -- files ---------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    "made",
    [
        section(
            conditions={"right": "neumann", "top": lv.robin(2)}, quantities={"top": lv.flux_through("top")}
        ),
        section(lv.HalfAnnulus((0, 0), 0.5, 1.0), conditions={"inner": "neumann"}),
        lv.case(lv.Interval(0, 1), {}, fields.radial("sphere", 2, 0), coordinates="radial-sphere"),
        lv.case(lv.Interval(1, 2), {}, fields.radial("cylinder", 2, 1), coordinates="radial-cylinder"),
    ],
    ids=["cylinder", "shell", "ball", "pipe"],
)
def test_json_keeps_coordinates_and_axis(made):
    text = case_to_json(made)
    again = case_from_json(text)
    assert case_to_json(again) == text
    assert again.problem.coordinates == made.problem.coordinates
    assert again.problem.pieces.names == made.problem.pieces.names
    assert [p.kind for p in again.problem.pieces] == [p.kind for p in made.problem.pieces]


def test_cartesian_files_do_not_speak_of_coordinates():
    text = case_to_json(lv.case(SECTION, {}, fields.polynomial(2)))
    assert b"coordinates" not in text
    assert case_from_json(text).problem.coordinates == "cartesian"


def test_wrong_coordinates_in_a_file_are_refused():
    text = case_to_json(section())
    with pytest.raises(lv.RecordError, match="problem"):
        case_from_json(text.replace(b'"axisymmetric",', b'"cartesian",', 1))
    with pytest.raises(lv.RecordError, match="coordinates"):
        case_from_json(text.replace(b'"axisymmetric",', b'"polar",', 1))
