"""Unbounded problems: what is said of infinity is checked, windows fit, files bring everything back."""

import math

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.problems import case_from_json, case_to_json, energy_of_solution

DISC = lv.Exterior(lv.Disc((0, 0), 1.5))
ELLIPSE = lv.Exterior(lv.Ellipse((0, 0), (2, 1)))
BALL = lv.Exterior(lv.Ball((0, 0, 1), 1))

GOOD = {
    "decay": (DISC, fields.dipole((0.5, 0), (1, 2)), "decay"),
    "bounded": (DISC, fields.dipole((0.5, 0), (1, 2)) + fields.affine((0, 0), 1), "bounded"),
    "log": (DISC, 2 * fields.log_source((0.1, 0.2)) + fields.affine((0, 0), 3), ("log", 2)),
    "flow": (ELLIPSE, fields.flow_past((2, 1), (1, "0.3")), ("flow", (1, 0.3), 0)),
    "turning": (ELLIPSE, fields.flow_past((2, 1), (1, "0.3"), 2, part="stream"), ("flow", (-0.3, 1), 2)),
    "space": (BALL, fields.point_source((0, 0, 1)), "decay"),
    "space flow": (BALL, fields.spheroid_flow("x", (1, 1), (0, 0, 1)), ("flow", (1, 0, 0), 0)),
    "half-space": (lv.HalfSpace(3), fields.loaded_disc(1), "decay"),
    "half-plane": (lv.HalfSpace(2), fields.dipole((0, -1), (1, 0)), "decay"),
    "strip": (lv.Strip(2, 0, 1), fields.affine((0, 2), 1), "bounded"),
    "callable": (DISC, fields.field(lambda x, y: x / (x**2 + y**2)), "decay"),
}
good = pytest.mark.parametrize(("shape", "field", "known"), GOOD.values(), ids=GOOD.keys())


@good
def test_fields_that_behave_as_said_make_cases(shape, field, known):
    case = lv.case(shape, {}, field, at_infinity=known)
    assert case.problem.at_infinity is not None
    assert case.window.bounded
    assert shape.contains(case.window.sample(50, seed=1)).all()
    for piece in shape.pieces:
        assert case.problem.pieces[piece.name].kind == "dirichlet"


@good
def test_files_bring_infinity_and_window_back(shape, field, known):
    if field.opaque:
        pytest.skip("a Python function cannot be written to a file")
    case = lv.case(shape, {}, field, at_infinity=known)
    text = case_to_json(case)
    again = case_from_json(text)
    assert case_to_json(again) == text
    assert again.problem.at_infinity == case.problem.at_infinity
    assert again.window == case.window
    assert b"at_infinity" not in case_to_json(lv.case(lv.Disc((0, 0), 1), {}, fields.polynomial(2)))


@pytest.mark.parametrize(
    ("shape", "field", "known", "message"),
    [
        (DISC, fields.log_source((0, 0)), "bounded", "does not behave as at_infinity='bounded'"),
        (DISC, fields.log_source((0, 0)), ("log", 2), "does not behave as at_infinity"),
        (DISC, fields.dipole((0, 0), (1, 0)) + fields.affine((0, 0), 1), "decay", "does not decay"),
        (DISC, fields.affine((1, 0)), ("flow", (1, 0.001), 0), "does not behave as at_infinity"),
        (ELLIPSE, fields.flow_past((2, 1), (1, 0), 2, part="stream"), ("flow", (0, 1), 0), "does not behave"),
        (BALL, fields.affine((0, 0, 0), 1), "decay", "does not decay"),
        (lv.HalfSpace(2), fields.log_source((0, -1)), "bounded", "does not behave"),
        (DISC, fields.field(lambda x, y: 1.0 + x / (x**2 + y**2)), "decay", "does not decay"),
        (DISC, fields.log_source((3, 0)) - fields.log_source((0, 0)), "bounded", "singular point"),
        (DISC, fields.dipole((0, 0), (1, 0)), None, "at_infinity must be"),
        (DISC, fields.dipole((0, 0), (1, 0)), ("flow", (1, 0, 0), 0), "at_infinity must be"),
        (DISC, fields.dipole((0, 0), (1, 0)), ("log", "one"), "charge of at_infinity must be a number"),
        (DISC, fields.dipole((0, 0), (1, 0)), ("log", math.nan), "charge of at_infinity must be finite"),
        (BALL, fields.point_source((0, 0, 1)), ("log", 1), "belongs to the plane"),
        (lv.Disc((0, 0), 1), fields.polynomial(2), "decay", "is for unbounded shapes only"),
    ],
)
def test_what_is_said_of_infinity_is_checked(shape, field, known, message):
    with pytest.raises(lv.ProblemError, match=message):
        lv.case(shape, {}, field, at_infinity=known)


@pytest.mark.parametrize(
    ("window", "message"),
    [
        (lv.Annulus((0, 0), 1.2, 3), "reaches out of Exterior"),
        (lv.Annulus((0, 0), 1.8, 3), "does not touch piece 'rim'"),
        (lv.Disc((0, 0), 3), "reaches out of"),
        (lv.Ball((0, 0, 0), 3), "the window has dimension 3"),
        (DISC, "window must be a bounded shape"),
    ],
)
def test_windows_that_do_not_fit_are_refused(window, message):
    with pytest.raises(lv.ProblemError, match=message):
        lv.case(DISC, {}, fields.dipole((0, 0), (1, 0)), at_infinity="decay", window=window)


def test_bounded_shapes_take_no_window():
    with pytest.raises(lv.ProblemError, match="window is for unbounded shapes only"):
        lv.case(lv.Disc((0, 0), 1), {}, fields.polynomial(2), window=lv.Disc((0, 0), 0.5))
    with pytest.raises(lv.ProblemError, match="needs a window"):
        lv.case(
            lv.Exterior([lv.Disc((-2, 0), 1), lv.Disc((2, 0), 1)]),
            {},
            fields.dipole((2, 0), (1, 0)),
            at_infinity="decay",
        )


def test_constants_are_free_unless_u_decays():
    flow = fields.flow_past((2, 1), (1, 0))
    case = lv.case(ELLIPSE, {"rim": "neumann"}, flow, at_infinity=("flow", (1, 0), 0))
    kind, place, value = case.problem.constant
    assert kind == "point"
    assert value == flow.value([place])[0]
    decaying = lv.case(DISC, {"rim": "neumann"}, fields.dipole((0, 0), (1, 0)), at_infinity="decay")
    assert decaying.problem.constant is None
    with pytest.raises(lv.ProblemError, match="an unbounded shape has no mean"):
        lv.case(ELLIPSE, {"rim": "neumann"}, flow, at_infinity=("flow", (1, 0), 0), constant=("mean", 0))


def test_scaled_twins_keep_their_behaviour_at_infinity():
    case = lv.case(ELLIPSE, {}, GOOD["turning"][1], at_infinity=GOOD["turning"][2])
    twin = case.scaled(length=(3, "m"), value=(5, "m2/s"))
    assert twin.problem.at_infinity == ("flow", pytest.approx((-0.5, 5 / 3)), 10.0)
    assert twin.window == lv.EllipticRing((0, 0), (6, 3), (24, 21))
    again = lv.case(
        twin.problem.shape, {}, twin.exact, at_infinity=twin.problem.at_infinity, window=twin.window
    )
    assert again.regularity.scale == pytest.approx(twin.regularity.scale)


def test_quantities_of_unbounded_cases():
    # |grad u|^2 of x/r^2 outside r = a: integral of r^-4 = pi/a^2
    case = lv.case(
        DISC, {}, fields.dipole((0, 0), (1, 0)), at_infinity="decay",
        quantities={"energy": energy_of_solution(exact=math.pi / 2.25)},
    )  # fmt: skip
    assert case.quantities["energy"].value == pytest.approx(math.pi / 2.25, rel=1e-15)
    with pytest.raises(lv.ProblemError, match="energy of an unbounded problem"):
        lv.case(
            DISC,
            {},
            fields.log_source((0, 0)),
            at_infinity=("log", 1),
            quantities={"e": energy_of_solution()},
        )
    with pytest.raises(lv.ProblemError, match="piece 'bottom' is unbounded; no flux"):
        lv.case(
            lv.HalfSpace(3), {}, fields.loaded_disc(1), at_infinity="decay",
            quantities={"f": lv.flux_through("bottom")},
        )  # fmt: skip


def test_problems_with_given_data():
    posed = lv.problem(DISC, {"rim": lv.dirichlet("x")}, at_infinity=("log", 0.5))
    assert posed.at_infinity == ("log", 0.5)
    with pytest.raises(
        lv.ProblemError, match=r"must carry the charge at infinity: their integral is .*, but"
    ):
        lv.problem(DISC, {"rim": lv.neumann("x")}, at_infinity=("log", 0.5), constant=("point", (2, 0), 0))
    # n points into the body: u = q log r has n . grad u = -q/a
    kept = lv.problem(
        DISC, {"rim": lv.neumann(-0.5 / 1.5)}, at_infinity=("log", 0.5), constant=("point", (2, 0), 0)
    )
    assert kept.constant == ("point", (2.0, 0.0), 0.0)
    with pytest.raises(lv.ProblemError, match="an unbounded shape has no mean"):
        lv.problem(DISC, {"rim": lv.neumann(-0.5 / 1.5)}, at_infinity=("log", 0.5))
    with pytest.raises(lv.ProblemError, match=r"has no inside; a problem around it is posed on Exterior"):
        lv.problem(lv.Screen((0, 0), (1, 0)), {}, at_infinity="decay")
    with pytest.raises(lv.ProblemError, match="need a bounded shape"):
        lv.problem(DISC, {"rim": lv.dirichlet(0)}, lv.layers((1, 0), [0.0], [1.0, 2.0]), at_infinity="decay")


def test_data_on_the_two_sides_of_a_screen_are_the_limits_from_the_fluid():
    screen = lv.Exterior(lv.Screen((-1, 0), (1, 0)))
    case = lv.case(
        screen, {"back": "neumann"}, fields.elliptic_multipole(1, "im", semi_axes=(1, 0)), at_infinity="decay"
    )
    # Im w^-1 = -sin t at x = cos t: below the screen sin t < 0; its slope is d/dy there
    assert case.problem.pieces["front"].data([[0.6, 0.0]])[0] == pytest.approx(-0.8, rel=1e-14)
    slope = case.exact.gradient([[0.6, 0.0]], side=-1)[0, 1]
    assert case.problem.pieces["back"].data([[0.6, 0.0]])[0] == pytest.approx(slope, rel=1e-14)
    assert case.regularity.solution == 0.5
    assert case.regularity.domain == 0.25  # Dirichlet meets Neumann at the opening 2 pi


def test_openings_outside_make_weak_corners():
    case = lv.case(
        lv.Exterior(lv.Rectangle((-1, -1), (1, 1))), {}, fields.dipole((0, 0), (1, 0)), at_infinity="decay"
    )
    assert case.regularity.domain == pytest.approx(2 / 3)
    assert np.isinf(case.regularity.solution)
