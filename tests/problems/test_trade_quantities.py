"""Capacitance, resistance, shape factor, torsion constant, added mass: against values known by hand."""

from __future__ import annotations

import math
from fractions import Fraction

import mpmath
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.geometry import PairShell
from laplace_verify.problems import (
    added_mass,
    capacitance_coefficient,
    case_from_json,
    case_to_json,
    conductance_between,
    energy_of_solution,
    flux_density_at,
    flux_through,
    resistance_between,
    shape_factor_between,
    torsion_constant,
    value_at,
)


def coax(**wanted):
    # u = 5 - 3 log r between r = 1/2 and r = 2, K = 4
    field = fields.log_source((0, 0), -3) + fields.affine((0, 0), 5)
    return lv.case(lv.Annulus((0, 0), 0.5, 2.0), {}, field, 4.0, quantities=wanted)


def one(case):
    (quantity,) = case.quantities.values()
    return quantity


def within(quantity, exact):
    assert abs(quantity.value - exact) <= quantity.radius <= 1e-9 * (1 + abs(exact))


def test_a_coaxial_line() -> None:
    # Gauss' law: charge 2 pi K 3 over the difference 3 log 4; density K 3/r (Smythe 1968, from memory)
    found = coax(
        c=conductance_between("inner", "outer"),
        r=resistance_between("inner", "outer"),
        s=shape_factor_between("inner", "outer"),
        d=flux_density_at((0.0, -0.5), "inner"),
        e=energy_of_solution(),
    ).quantities
    within(found["c"], 8 * math.pi / math.log(4))
    within(found["r"], math.log(4) / (8 * math.pi))
    within(found["s"], 2 * math.pi / math.log(4))
    within(found["d"], 24.0)
    within(found["e"], found["c"].value * (3 * math.log(4)) ** 2)  # Dirichlet's integral = C V^2
    assert found["c"].drive == pytest.approx((3 * math.log(4),), rel=1e-14)
    assert found["d"].direction == pytest.approx((0.0, 1.0))  # out of the dielectric, into the conductor


def test_both_pieces_give_one_conductance() -> None:
    found = coax(a=conductance_between("inner", "outer"), b=conductance_between("outer", "inner")).quantities
    assert found["a"].value == pytest.approx(found["b"].value, rel=1e-13)


def test_capacitance_matrix_of_two_spheres() -> None:
    # Maxwell's images, equal spheres of radius R, gap g: C_11 = 4 pi R sinh m sum 1/sinh((2n - 1) m),
    # C_12 = -4 pi R sinh m sum 1/sinh(2n m), cosh m = 1 + g/(2R) (Smythe 1968, 5.08, from memory)
    bodies = lv.Exterior([lv.Ball((0, 0, 1.25), 1.0), lv.Ball((0, 0, -1.25), 1.0)])
    first, second = bodies.pieces.names
    wanted = {"own": capacitance_coefficient(first, first), "mutual": capacitance_coefficient(second, first)}
    window = PairShell((0.0, 0.0, 0.0), 1.0, 0.5, 4.0)
    field = fields.sphere_pair(1, "1/2") * 3
    case = lv.case(bodies, {}, field, at_infinity="decay", quantities=wanted, window=window)
    found = case.quantities
    m = math.acosh(1.25)
    own, mutual = (math.sinh(m) * math.fsum(1 / math.sinh(n * m) for n in range(k, 80, 2)) for k in (1, 2))
    assert found["own"].value == pytest.approx(4 * math.pi * own, rel=1e-12)
    assert found["mutual"].value == pytest.approx(-4 * math.pi * mutual, rel=1e-12)


def test_a_lone_ball_against_infinity() -> None:
    ball = lv.Exterior(lv.Ball((0, 0, 0), 0.7))
    wanted = {"c": conductance_between("surface", "infinity")}
    found = lv.case(ball, {}, fields.point_source((0, 0, 0), 2), 3.0, at_infinity="decay", quantities=wanted)
    within(one(found), 4 * math.pi * 0.7 * 3)


@pytest.mark.parametrize(
    ("shape", "field", "exact"),
    [
        # Saint-Venant 1855: pi a^3 b^3/(a^2 + b^2), w = -(a^2 - b^2)/(a^2 + b^2) x y, a = 2, b = 1
        (lv.Ellipse((0, 0), (2.0, 1.0)), fields.polynomial(2, "im") * "-3/10", math.pi * 8 / 5),
        # square-root-of-three a^4/80 for the equilateral triangle of side a = 2 sqrt 3, inradius 1:
        # w = (3 x^2 y - y^3)/(6 times the inradius) up to sign, one side on x = -1
        (
            lv.Polygon([(-1, -math.sqrt(3)), (2, 0), (-1, math.sqrt(3))]),
            fields.polynomial(3, "im") * "-1/6",
            math.sqrt(3) * 144 / 80,
        ),
    ],
)
def test_torsion_constants_by_the_warping_function(shape, field, exact) -> None:
    conditions = dict.fromkeys(shape.pieces.names, "neumann")
    for scale in (1, -7):  # the twist is read off the field
        case = lv.case(shape, conditions, field * scale, 2.5, quantities={"J": torsion_constant()})
        within(one(case), exact)
        assert one(case).drive == pytest.approx((scale,), rel=1e-9)


@pytest.mark.parametrize(
    ("axes", "stream", "exact"),
    [
        # Lamb 1932, art. 71: pi b^2 per unit density for the motion along a, and a quarter of the flow's own
        # area for the circle
        (("2", "1"), (1.5, 0.0), math.pi),
        (("2", "1"), (0.0, -0.5), 4 * math.pi),
        (("3/5", "3/5"), (1.0, 2.0), math.pi * 0.36),
    ],
)
def test_added_mass_of_ellipses_in_a_stream(axes, stream, exact) -> None:
    body = lv.Ellipse((0, 0), tuple(float(Fraction(a)) for a in axes))
    field = fields.flow_past(axes, tuple(str(v) for v in stream))
    case = lv.case(
        lv.Exterior(body),
        {"rim": "neumann"},
        field,
        1.3,
        at_infinity=("flow", stream, 0.0),
        quantities={"m": added_mass()},
    )
    within(one(case), 1.3 * exact)


def test_added_mass_of_a_moving_ball() -> None:
    # half the displaced mass: phi = -v . x R^3/(2 r^3) (Lamb 1932, art. 92)
    field = fields.dipole((0, 0, 0), (-1, -2, 0)) * "1/2"
    case = lv.case(
        lv.Exterior(lv.Ball((0, 0, 0), 1.0)),
        {"surface": "neumann"},
        field,
        at_infinity="decay",
        quantities={"m": added_mass()},
    )
    within(one(case), 2 * math.pi / 3)
    assert one(case).drive == pytest.approx((1, 2, 0), abs=1e-12)


def test_resistances_of_layers_add_up() -> None:
    # 0.8/2 + 0.7/0.5 for unit area
    bar = lv.Interval(0.0, 1.5)
    k = lv.layers((1,), ["4/5"], {"steel": 2.0, "cork": 0.5})
    field = fields.by_region(k, [fields.affine((1,)), fields.affine((4,), "-12/5")])
    wanted = {"R": resistance_between("right", "left", exact="9/5")}
    found = one(lv.case(bar, {}, field, k, quantities=wanted))
    assert found.value == 1.8
    with pytest.raises(lv.ProblemError, match="a shape factor supposes one number"):
        lv.case(bar, {}, field, k, quantities={"S": shape_factor_between("right", "left")})


def test_scaling_follows_the_dimensions() -> None:
    section = lv.Ellipse((0, 0), (2.0, 1.0))
    wanted = {"J": torsion_constant(), "w": flux_density_at((0.5, 0.25), (0.6, 0.8))}
    case = lv.case(section, {"rim": "neumann"}, fields.polynomial(2, "im") * "-3/10", quantities=wanted)
    twin = case.scaled(length=(0.1, "m"), value=(7.0, "m^2"))
    assert twin.quantities["J"].value == pytest.approx(1e-4 * case.quantities["J"].value, rel=1e-13)
    assert twin.quantities["J"].unit == "m^4"
    assert twin.quantities["J"].drive == pytest.approx((7.0 / 0.01,))
    assert twin.quantities["w"].value == pytest.approx(70 * case.quantities["w"].value, rel=1e-13)
    assert twin.quantities["w"].where == pytest.approx((0.05, 0.025))
    again = lv.case(twin.problem.shape, {"rim": "neumann"}, twin.exact, quantities={"J": torsion_constant()})
    assert one(again).value == pytest.approx(twin.quantities["J"].value, rel=1e-12)
    line = coax(c=conductance_between("inner", "outer")).scaled(length=(3, "mm"), conductivity=(2, "pF/m"))
    assert one(line).value == pytest.approx(16 * math.pi / math.log(4), rel=1e-12)
    assert one(line).unit == "pF/m"


def test_closed_forms_have_fifty_digits_and_survive_a_file() -> None:
    case = coax(
        c=conductance_between("inner", "outer", exact="8*pi/log(4)"),
        q=flux_through("inner", exact="24*pi"),
        z=value_at((1.0, 0.0), exact=5),
        d=flux_density_at((0.0, 2.0), "outer", exact=-6),
    )
    with mpmath.workdps(60):
        for name, exact in (("c", 8 * mpmath.pi / mpmath.log(4)), ("q", 24 * mpmath.pi), ("z", 5), ("d", -6)):
            digits = case.quantities[name].digits
            assert digits.basis == "closed form"
            assert mpmath.mpf(digits.radius) <= mpmath.mpf("1e-48")
            assert abs(mpmath.mpf(digits.value) - exact) <= mpmath.mpf(digits.radius)
    again = case_from_json(case_to_json(case))
    assert {n: q.digits for n, q in again.quantities.items()} == {
        n: q.digits for n, q in case.quantities.items()
    }
    assert case_to_json(again) == case_to_json(case)
    damaged = case_to_json(case).replace(b'"75.398', b'"75.397')
    with pytest.raises(lv.LaplaceVerifyError, match=r"quantities\.q: value is 75\.397"):
        case_from_json(damaged)


SQUARE = lv.Rectangle((-1, -1), (1, 1))


@pytest.mark.parametrize(
    ("make", "message"),
    [
        (lambda: coax(c=conductance_between("inner", "outside")), "no piece is named 'outside'"),
        (lambda: coax(c=conductance_between("inner", "inner")), "both pieces are at the level"),
        (lambda: coax(c=conductance_between("inner", "infinity")), "only where u decays"),
        (lambda: coax(c=capacitance_coefficient("inner", "outer")), "must be at level 0"),
        (lambda: coax(c=flux_density_at((1.0, 0.0), "inner")), "does not lie on the piece 'inner'"),
        (lambda: coax(c=flux_density_at((1.0, 0.0), (1.0, 1.0))), "must be a unit vector"),
        (lambda: coax(c=torsion_constant()), "the flux is not that of a twist"),
        (lambda: coax(c=added_mass()), "belongs to bodies in unbounded fluid"),
        (lambda: coax(c=conductance_between("inner", "outer", exact="8*pi/log(4.001)")), "disagrees"),
        (lambda: coax(c=flux_through("inner", exact="8*rho")), "exact must be a number.*unknown name 'rho'"),
        (
            lambda: lv.case(
                SQUARE, {}, fields.polynomial(2), quantities={"c": conductance_between("left", "top")}
            ),
            "u varies over the piece 'left'",
        ),
        (
            lambda: lv.case(
                lv.Exterior(lv.Disc((0, 0), 1.0)),
                {"rim": "neumann"},
                fields.elliptic_multipole(2, semi_axes=(1, 1)),
                at_infinity="decay",
                quantities={"c": added_mass()},
            ),
            "not that of rigid bodies",
        ),
    ],
)  # fmt: skip
def test_what_is_not_driven_so_is_refused(make, message) -> None:
    with pytest.raises(lv.ProblemError, match=f"quantity 'c'.*{message}"):
        make()
