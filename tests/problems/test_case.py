from __future__ import annotations

import math

import numpy as np
import pytest
from scipy import special

import laplace_verify as lv

HARMONIC_2D = "exp(pi*y)*sin(pi*x)"


def test_unnamed_pieces_are_dirichlet(square) -> None:
    case = lv.case(square, {"top": "neumann"}, lv.fields.polynomial(3), id="warm-plate", tags=["smooth"])
    assert [piece.kind for piece in case.problem.pieces] == ["dirichlet", "dirichlet", "dirichlet", "neumann"]
    assert case.conditions == {"dirichlet", "neumann"}
    assert (case.dim, case.id, case.problem.name, case.tags) == (2, "warm-plate", "warm-plate", {"smooth"})


def test_data_of_a_case_are_derived_never_given(square) -> None:
    for condition in (lv.dirichlet(1), lv.robin(1, 0)):
        with pytest.raises(lv.ProblemError, match="piece 'top': data of a case are derived"):
            lv.case(square, {"top": condition}, lv.fields.affine((1, 1)))


@pytest.mark.parametrize("bad", ["Case 7", "a_b", "-a", "", "../etc", 7])
def test_ids_are_plain_words(square, bad) -> None:
    with pytest.raises(lv.ProblemError, match="id must be lower-case words"):
        lv.case(square, {}, lv.fields.affine((1, 1)), id=bad)


def test_the_solution_must_be_a_field_of_the_right_dimension(square) -> None:
    with pytest.raises(
        lv.ProblemError, match=r"must be a field, got function; wrap .* laplace_verify\.field"
    ):
        lv.case(square, {}, lambda x, _y: x)
    with pytest.raises(lv.ProblemError, match=r"field has dimension 3, the shape .* has dimension 2"):
        lv.case(square, {}, lv.fields.affine((1, 1, 1)))
    with pytest.raises(lv.ProblemError, match=r"field has dimension 1.*say dim=2"):
        lv.case(square, {}, lv.field("x"))
    assert lv.case(square, {}, lv.field("x", dim=2)).dim == 2


# -- singular points and cuts --------------------------------------------------------------------------------


def test_a_pole_inside_is_named() -> None:
    with pytest.raises(lv.ProblemError, match=r"singular point \(log\) inside at \(0\.25, 0\.5\)"):
        lv.case(lv.Disc((0, 0), 1.0), {}, lv.fields.log_source((0.25, 0.5)))


def test_a_source_on_the_boundary_is_refused_and_one_just_outside_is_fine(square) -> None:
    with pytest.raises(lv.ProblemError, match="on the boundary"):
        lv.case(square, {}, lv.fields.log_source((0.5, 1.0)))
    near = lv.case(square, {}, lv.fields.log_source((0.5, 1.05)))
    assert near.regularity.scale == pytest.approx(0.05, rel=1e-12)


def test_a_cut_through_the_interior_is_named() -> None:
    # the default cut of a wedge, 7 pi/4, bisects the missing quadrant of the L-shape; pi/4 crosses the plate
    assert lv.case(lv.LShape(1.0), {}, lv.fields.wedge("2/3")).id == "case"
    with pytest.raises(lv.ProblemError, match=r"branch cut from .* crosses the interior, for example at"):
        lv.case(lv.LShape(1.0), {}, lv.fields.wedge("2/3", cut=math.pi / 4))


def test_a_cut_that_clips_a_corner_is_found(square) -> None:
    # along x + y = 0.0005: inside only within a triangle of that size at the origin
    clipping = lv.fields.wedge("1/2", cut=3 * math.pi / 4, apex=(2.0, -1.9995))
    with pytest.raises(lv.ProblemError, match="crosses the interior"):
        lv.case(square, {}, clipping)
    missing = lv.fields.wedge("1/2", cut=3 * math.pi / 4, apex=(2.0, -2.0005))
    assert lv.case(square, {}, missing).regularity.solution == math.inf


def test_a_cut_along_the_boundary_is_allowed(slit_disc) -> None:
    case = lv.case(slit_disc, {}, lv.fields.wedge("1/2", cut=2 * math.pi))
    assert case.regularity.solution == 0.5


# -- the equation --------------------------------------------------------------------------------------------


def test_a_field_that_is_not_harmonic_shows_point_and_residual(square) -> None:
    with pytest.raises(lv.ProblemError, match=r"div\(K grad u\) = 4 at \(0\.\d+, 0\.\d+\)"):
        lv.case(square, {}, lv.field("x**2 + y**2"))


def test_a_harmonic_field_solves_nothing_for_another_tensor(square) -> None:
    k = [[2.0, 0.0], [0.0, 1.0]]
    with pytest.raises(lv.ProblemError, match=r"is no solution: div\(K grad u\) = 2 at"):
        lv.case(square, {}, lv.fields.polynomial(2), k)
    assert lv.case(square, {}, lv.fields.stretched(lv.fields.polynomial(2), k), k).dim == 2
    assert lv.case(square, {}, lv.field("x**2 - 2*y**2"), k).dim == 2


def test_a_small_defect_is_seen(square) -> None:
    with pytest.raises(lv.ProblemError, match="is no solution"):
        lv.case(square, {}, lv.field("x**2 - 1.000001*y**2"))


def test_a_line_must_be_straight() -> None:
    bar = lv.Interval(0, 2)
    assert (
        lv.case(bar, {"right": "neumann"}, lv.field("3*x - 1"), 2.0).problem.pieces["right"].data([2.0])
        == 6.0
    )
    with pytest.raises(lv.ProblemError, match=r"div\(K grad u\) = 4"):
        lv.case(bar, {}, lv.field("x**2"), 2.0)
    with pytest.raises(lv.ProblemError, match="Green's third identity misses"):
        lv.case(bar, {}, lv.field("sqrt((x - 1)**2)"))  # |x - 1|: straight but for a kink
    with pytest.raises(lv.ProblemError, match="Green's third identity misses"):  # a jump near one end
        lv.case(bar, {}, lv.field(lambda x: np.where(x < 0.1, x, 2 * x)))


def test_a_wrong_gradient_is_found(square) -> None:
    def u(x, y):
        return np.exp(x) * np.cos(y)

    right = lv.field(u, gradient=lambda x, y: (np.exp(x) * np.cos(y), -np.exp(x) * np.sin(y)))
    wrong = lv.field(u, gradient=lambda x, y: (np.exp(x) * np.cos(y), np.exp(x) * np.sin(y)))
    assert lv.case(square, {}, right).dim == 2
    with pytest.raises(lv.ProblemError, match=r"gradient of .* is wrong"):
        lv.case(square, {}, wrong)


def test_functions_of_floats_only_are_checked_as_well_as_floats_allow(square) -> None:
    def bessel(x, y):  # J_0(x) cosh(y) solves another equation; scipy takes no mpmath numbers
        return special.j0(x) * np.cosh(y)

    def circular(x, y):
        return np.array([math.exp(a) for a in x]) * np.cos(y)

    assert lv.case(square, {}, lv.field(circular)).dim == 2
    with pytest.raises(lv.ProblemError, match="is no solution"):
        lv.case(square, {}, lv.field(bessel))


def test_a_field_that_is_undefined_inside_is_refused(square) -> None:
    with pytest.raises(lv.ProblemError, match="cannot be evaluated inside"):
        lv.case(square, {}, lv.field("log(x - 2) + y"))


# -- Green's third identity ----------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("shape", "text"),
    [
        pytest.param(lv.Rectangle((0, 0), (1, 1)), "log((x - 0.3)**2 + (y - 0.6)**2)", id="source"),
        pytest.param(lv.Rectangle((0, 0), (1, 1)), "(x - 0.3)/((x - 0.3)**2 + (y - 0.6)**2)", id="dipole"),
        pytest.param(lv.Disc((0, 0), 1.0), "1e-4*log((x - 0.8)**2 + y**2)", id="weak source near the rim"),
        pytest.param(lv.Rectangle((-1, -1), (1, 1)), "theta", id="jump across the negative axis"),
        pytest.param(lv.Box((0, 0, 0), (1, 1, 1)), "1/sqrt((x-0.5)**2 + (y-0.3)**2 + (z-0.6)**2)", id="3-D"),
    ],
)
def test_what_the_equation_cannot_see_inside_breaks_greens_identity(shape, text) -> None:
    with pytest.raises(lv.ProblemError, match=r"Green's third identity misses its value at \(.*\) by"):
        lv.case(shape, {}, lv.field(text))


@pytest.mark.parametrize(
    ("shape", "text"),
    [
        pytest.param(lv.Rectangle((0, 0), (1, 1)), "log((x - 0.3)**2 + (y + 0.05)**2)", id="near source"),
        pytest.param(lv.Annulus((0, 0), 0.5, 1.0), "log(x**2 + y**2)", id="source in the hole"),
        pytest.param(lv.Ellipse((0, 0), (2.0, 0.5)), HARMONIC_2D, id="ellipse"),
        pytest.param(lv.Ball((0, 0, 0), 1.0), "1/sqrt(x**2 + y**2 + (z - 1.5)**2)", id="ball"),
    ],
)
def test_what_is_harmonic_in_the_shape_passes(shape, text) -> None:
    assert lv.case(shape, {}, lv.field(text)).exact.opaque


def test_greens_identity_settles_in_thin_shapes() -> None:
    """No interior point is farther than 5e-4 from the boundary: the kernel peaks there."""
    thin = lv.Rectangle((0, 0), (1, 1e-3))
    assert lv.case(thin, {}, lv.field("exp(x)*cos(y)")).dim == 2
    with pytest.raises(lv.ProblemError, match="Green's third identity misses"):
        lv.case(thin, {}, lv.field("log((x - 0.5)**2 + (y - 0.0005)**2)"))


def test_a_fast_function_needs_no_gradient(square) -> None:
    def wave(x, y):
        return np.exp(50 * (y - 1)) * np.cos(50 * x)

    assert lv.case(square, {"top": "neumann"}, lv.field(wave)).dim == 2


def test_greens_identity_knows_the_tensor() -> None:
    # log of x' K^{-1} x with K = diag(4, 1): a solution outside the origin
    k = [[4.0, 0.0], [0.0, 1.0]]
    text = "log((x - 0.5)**2/4 + (y - {})**2)"
    square = lv.Rectangle((0, 0), (1, 1))
    assert lv.case(square, {}, lv.field(text.format("1.2")), k).dim == 2
    with pytest.raises(lv.ProblemError, match="Green's third identity"):
        lv.case(square, {}, lv.field(text.format("0.4")), k)


def test_an_undeclared_singularity_on_the_boundary_is_not_waved_through(square) -> None:
    with pytest.raises(lv.ProblemError, match=r"singular points|Green's third identity|data of piece"):
        lv.case(square, {}, lv.field("log((x - 0.3)**2 + y**2)"))


def test_a_field_not_defined_on_the_boundary_is_refused_by_piece(square, half_known) -> None:
    with pytest.raises(lv.ProblemError, match="data of piece 'right': x is not defined at point 0"):
        lv.case(square, {}, half_known)
    assert lv.case(lv.Rectangle((0, 0), (0.9, 1)), {}, half_known).dim == 2


# -- pure Neumann --------------------------------------------------------------------------------------------


def test_the_constant_of_a_pure_neumann_case_is_the_mean(square) -> None:
    kinds = dict.fromkeys(square.pieces.names, "neumann")
    field = lv.fields.polynomial(2) + lv.fields.affine((1, 0), constant=3)
    case = lv.case(square, kinds, field)
    # means over the unit square: x^2 - y^2 gives 0, x gives 1/2
    assert case.problem.constant == ("mean", pytest.approx(3.5, rel=1e-13))
    assert lv.case(square, kinds, field, constant=("point", (1, 0), 5)).problem.constant[2] == 5.0
    with pytest.raises(lv.ProblemError, match=r"disagrees with the exact field, whose point value is 5\.0"):
        lv.case(square, kinds, field, constant=("point", (1, 0), 4))
    with pytest.raises(lv.ProblemError, match="whose mean value is 3"):
        lv.case(square, kinds, field, constant=("mean", 0))


def test_a_mean_that_vanishes_is_zero_and_not_rounding() -> None:
    """Rounding differs between machines, and files made from a case must not."""
    flux = {"rim": "neumann"}
    for shift, mean in ((0, 0.0), (5, 5.0)):
        field = lv.fields.polynomial(3) + lv.fields.affine((0, 0), shift)
        assert lv.case(lv.Disc((0, 0), 1), flux, field).problem.constant == ("mean", mean)


def test_a_case_with_u_given_somewhere_has_no_constant(square) -> None:
    assert lv.case(square, {"top": "neumann"}, lv.fields.affine((1, 0))).problem.constant is None
    with pytest.raises(lv.ProblemError, match="for pure Neumann problems only"):
        lv.case(square, {}, lv.fields.affine((1, 0)), constant=("mean", 0.5))
