"""Partitions of space, fields pieced together from regions, and Kellogg's corner."""

import json
import math
from fractions import Fraction

import mpmath
import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.fields.partitions import Layers, Sectors, Shells, partition_from_spec

WALL = Layers(direction=(1, 0), positions=("1/3", "3/4"), names=("brick", "felt", "plaster"))
PIPE = Shells(centre=("1/10", 0), radii=("1/5", "1/4"), names=("water", "steel", "soil"))
BOARD = Sectors(apex=(0, 0), rays=((1, 0), (0, 1), (-1, 0), (0, -1)), names=())
KINK = fields.by_region(
    WALL,
    {
        "brick": fields.affine((3, 1)),
        "felt": fields.affine((12, 1), -3),
        "plaster": fields.affine((4, 1), 3),
    },
)


@pytest.mark.parametrize(
    ("partition", "points", "numbers"),
    [
        (WALL, [(0.0, 5.0), (0.5, -1.0), (0.8, 0.0)], [0, 1, 2]),
        (PIPE, [(0.1, 0.1), (0.1, 0.22), (1.0, 1.0)], [0, 1, 2]),
        (BOARD, [(1, 2), (-1, 2), (-1, -2), (1, -2)], [0, 1, 2, 3]),
    ],
)
def test_every_point_lies_in_the_region_that_a_drawing_shows(partition, points, numbers) -> None:
    assert partition.locate(points).tolist() == numbers
    for number in range(len(partition.names)):
        inside = partition.contains(points, number)
        assert inside.tolist() == [n == number for n in numbers]


def test_a_point_on_an_interface_belongs_to_both_closed_regions_and_to_no_third() -> None:
    on = [(1 / 3, 0.2)]
    assert WALL.contains(on, 0).all()
    assert WALL.contains(on, 1).all()
    assert not WALL.contains(on, 2).any()
    assert WALL.on_interface(np.array(on)).all()
    assert not WALL.on_interface(np.array([(1 / 3 + 1e-12, 0.2)])).any()


def test_precise_points_are_told_from_an_interface_at_one_third_exactly() -> None:
    assert WALL.on_interface(np.zeros((1, 2)), (Fraction(1, 3), 0)).all()
    assert not WALL.on_interface(np.zeros((1, 2)), (1 / 3, 0)).any()  # the float64 next to it


@pytest.mark.parametrize("partition", [WALL, PIPE, BOARD])
def test_partitions_survive_json_exactly(partition) -> None:
    assert partition_from_spec(json.loads(json.dumps(partition.spec()))) == partition


@pytest.mark.parametrize("partition", [WALL, PIPE, BOARD])
def test_an_enlarged_partition_holds_the_enlarged_points(partition) -> None:
    points = np.random.default_rng(3).uniform(-1, 1, (50, 2))
    assert (partition.scaled(2.5).locate(2.5 * points) == partition.locate(points)).all()


@pytest.mark.parametrize(
    ("call", "message"),
    [
        (lambda: Layers(direction=(0, 0), positions=(1,), names=()), "zero vector"),
        (lambda: Layers(direction=(1,), positions=(2, 1), names=()), "must rise"),
        (lambda: Layers(direction=(1,), positions=(), names=()), "at least one number"),
        (lambda: Layers(direction=(1,), positions=(1,), names=("a", "a")), "different words"),
        (lambda: Layers(direction=(1,), positions=(1,), names=("a",)), "need 2 names"),
        (lambda: Shells(centre=(0, 0), radii=(-1,), names=()), "positive"),
        (lambda: Sectors(apex=(0, 0), rays=((1, 0),), names=()), "two or more rays"),
        (lambda: Sectors(apex=(0, 0), rays=((1, 0), (0, -1), (0, 1)), names=()), "counter-clockwise"),
        (lambda: partition_from_spec({"partition": "onion"}), "unknown kind of partition"),
        (lambda: partition_from_spec({"partition": "layers", "positions": [1]}), "cannot be made of"),
        (lambda: WALL.number("brik"), "no region is named 'brik'"),
    ],
)
def test_partitions_that_make_no_sense_are_refused(call, message) -> None:
    with pytest.raises(lv.FieldError, match=message):
        call()


def test_value_and_gradient_are_those_of_the_points_own_region() -> None:
    points = [(0.1, 2.0), (0.5, 0.0), (1.0, 0.0)]
    assert KINK.value(points).tolist() == [2.3, 3.0, 7.0]
    assert KINK.gradient(points).tolist() == [[3, 1], [12, 1], [4, 1]]


def test_on_an_interface_the_value_is_common_and_the_gradient_needs_a_region() -> None:
    assert KINK.value([(0.75, 0.5)]).tolist() == [6.5]
    with pytest.raises(lv.FieldError, match=r"jumps at point 1 = .*one of brick, felt, plaster"):
        KINK.gradient([(0.5, 0.0), (0.75, 0.5)])
    assert KINK.gradient([(0.75, 0.5)], region="felt").tolist() == [[12, 1]]
    assert KINK.gradient([(0.75, 0.5)], region="plaster").tolist() == [[4, 1]]
    with pytest.raises(lv.FieldError, match=r"gradient of .* jumps"):
        KINK.gradient_at(("1/3", 0))
    assert KINK.gradient_at(("1/3", 0), region="brick")[0] == 3


def test_sums_and_moved_fields_keep_their_regions() -> None:
    moved = (2 * KINK + fields.affine((1, 0))).shifted(("1/4", 0)).scaled(2)
    assert moved.regions == ("brick", "felt", "plaster")
    assert moved.value([(2.0, 0.0)])[0] == pytest.approx(2 * 6.0 + 0.75, rel=1e-15)
    with pytest.raises(lv.FieldError, match="jumps"):
        moved.gradient([(2.0, 0.0)])  # 2 (3/4 + 1/4)
    assert moved.gradient([(2.0, 0.0)], region="felt").tolist() == [[12.5, 1.0]]
    assert fields.from_spec(json.loads(json.dumps(moved.spec()))) == moved
    with pytest.raises(lv.FieldError, match="no region"):
        moved.gradient([(2.0, 0.0)], region="cork")


def test_a_plain_field_is_itself_in_every_region() -> None:
    plain = fields.polynomial(2)
    assert plain.restricted("anywhere") is plain
    assert plain.regions == ()
    assert not plain.on_interface(np.zeros((3, 2))).any()


def test_a_pole_counts_only_in_the_region_that_holds_it() -> None:
    hollow = Shells(centre=(0, 0), radii=(1,), names=("core", "rest"))
    dipole, flat = fields.dipole((0, 0), (1, 0)), fields.affine((1, 0))
    assert fields.by_region(hollow, [flat, dipole]).singularities == ()
    assert len(fields.by_region(hollow, [dipole, flat]).singularities) == 1


@pytest.mark.parametrize(
    ("parts", "message"),
    [
        ({"brick": fields.affine((1, 0))}, "fields are needed for"),
        ([fields.affine((1, 0))], "3 regions need as many fields"),
        ([fields.affine((1,))] * 3, "has dimension 1"),
        ([KINK] * 3, "itself made of regions"),
    ],
)
def test_pieces_that_do_not_fit_are_refused(parts, message) -> None:
    with pytest.raises(lv.FieldError, match=message):
        fields.by_region(WALL, parts)


def test_kelloggs_corner_continues_value_and_flux_over_every_ray_to_fifty_digits() -> None:
    gamma = "3/10"
    u = fields.checkerboard(gamma, ("1/2", "-1/4"))
    with mpmath.workdps(60):
        ratio = mpmath.cot(mpmath.mpf(3) / 10 * mpmath.pi / 4) ** 2
        for (a, ka), (b, kb), along, normal in (
            (("first", ratio), ("second", 1), (0, 1), 0),
            (("second", 1), ("third", ratio), (-1, 0), 1),
            (("third", ratio), ("fourth", 1), (0, -1), 0),
            (("fourth", 1), ("first", ratio), (1, 0), 1),
        ):
            place = (Fraction(1, 2) + Fraction(along[0], 7), Fraction(-1, 4) + Fraction(along[1], 7))
            one, two = u.restricted(a), u.restricted(b)
            assert abs(one.at(place, 50) - two.at(place, 50)) < mpmath.mpf(10) ** -49
            fluxes = [k * part.gradient_at(place, 50)[normal] for k, part in ((ka, one), (kb, two))]
            assert abs(fluxes[0] - fluxes[1]) < mpmath.mpf(10) ** -48
            assert abs(fluxes[0]) > 0.1


def test_kelloggs_corner_scales_with_its_exponent_and_its_gradient_is_infinite_at_the_apex() -> None:
    u = fields.checkerboard("1/4")
    point = np.array([[0.3, 0.2], [-0.1, 0.4], [0.2, -0.7]])
    # r**gamma: a factor 16 in r is a factor 2 in u; three roundings
    np.testing.assert_allclose(u.value(16 * point), 2 * u.value(point), rtol=1e-15, atol=0)
    assert u.value([(0.0, 0.0)])[0] == 0
    with pytest.raises(lv.FieldError, match="infinite"):
        u.gradient([(0.0, 0.0)], region="first")
    assert u.singularities[0].exponent == 0.25
    assert u.cuts == ()


@pytest.mark.parametrize("gamma", [0, 2, -1, "nan"])
def test_exponents_out_of_range_are_refused(gamma) -> None:
    with pytest.raises(lv.FieldError, match="gamma"):
        fields.checkerboard(gamma)


def test_ratio_one_has_the_exponent_one() -> None:
    assert math.isclose(fields.checkerboard_ratio(1), 1.0, rel_tol=1e-15)
