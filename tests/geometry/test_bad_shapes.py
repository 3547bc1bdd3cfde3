"""Degenerate shapes are refused when they are made, with the argument's name."""

import math

import pytest

import laplace_verify as lv

NAN, INF = float("nan"), float("inf")

BAD = [
    (lv.Interval, (1, 1), "b must exceed a"),
    (lv.Interval, (1, 0), "b must exceed a"),
    (lv.Interval, (NAN, 1), "a must be finite"),
    (lv.Interval, (0, INF), "b must be finite"),
    (lv.Interval, ("left", 1), "a must be a number, got 'left'"),
    (lv.Interval, ([0], 1), "a must be a number"),
    (lv.Interval, (1e16, 1e16 + 4), "float64 cannot resolve it; move it nearer or scale it"),
    (
        lv.Rectangle,
        ((0, 0), (1, 0)),
        "upper must exceed lower in every coordinate, got 0.0 and 0.0 in coordinate 1",
    ),
    (lv.Rectangle, ((0, 0), (-1, 1)), "upper must exceed lower"),
    (lv.Rectangle, ((0, 0, 0), (1, 1, 1)), "lower must be 2 numbers"),
    (lv.Rectangle, ((0, 0), (1, NAN)), "upper must be finite"),
    (lv.Rectangle, ((0, 0), (1, 1e-10)), "rectangle is degenerate"),
    (lv.Rectangle, ((0, "a"), (1, 1)), "lower must be 2 numbers"),
    (lv.Box, ((0, 0, 0), (1, 1, 0)), "upper must exceed lower"),
    (lv.Box, ((0, 0), (1, 1)), "lower must be 3 numbers"),
    (lv.Disc, ((0, 0), 0), "radius must be > 0, got 0"),
    (lv.Disc, ((0, 0), NAN), "radius must be finite"),
    (lv.Disc, ((0, 0), True), "radius must be a number"),
    (lv.Disc, (0, 1), "centre must be 2 numbers"),
    (lv.Disc, ((1e12, 0), 1), "move it nearer or scale it"),
    (lv.Disc, ((0, 0), 1e200), "at most 1e\\+100"),
    (lv.Ellipse, ((0, 0), (1, 0)), "semi_axes must be > 0"),
    (lv.Ellipse, ((0, 0), (1, -1)), "semi_axes must be > 0"),
    (lv.Ellipse, ((0, 0), (1, 1e-4)), "semi_axes must differ by less than a factor 1000"),
    (lv.Ellipse, ((0, 0), 1), "semi_axes must be 2 numbers"),
    (lv.Annulus, ((0, 0), 2, 1), "inner must be smaller than outer"),
    (lv.Annulus, ((0, 0), 1, 1), "inner must be smaller than outer"),
    (lv.Annulus, ((0, 0), 0, 1), "inner must be > 0"),
    (lv.Annulus, ((0, 0), 1, 2, (1, 0)), "the inner circle must lie inside the outer one"),
    (lv.Annulus, ((0, 0), 1, 2, (5, 0)), "the inner circle must lie inside the outer one"),
    (lv.Annulus, ((0, 0), 1, 2, (NAN, 0)), "inner_centre must be finite"),
    (lv.Sector, (0, 1), "radius must be > 0"),
    (lv.Sector, (1, 0), r"opening must lie in \(0, 2 pi\], in radians, got 0"),
    (lv.Sector, (1, -1), r"opening must lie in \(0, 2 pi\]"),
    (lv.Sector, (1, 270), r"opening must lie in \(0, 2 pi\], in radians, got 270"),
    (lv.Sector, (1, NAN), "opening must be finite"),
    (lv.Sector, (1, 1e-12), "sector is degenerate"),
    (lv.LShape, (0,), "size must be > 0"),
    (lv.LShape, (NAN,), "size must be finite"),
    (lv.Ball, ((0, 0, 0), -1), "radius must be > 0"),
    (lv.Ball, ((0, 0), 1), "centre must be 3 numbers"),
    (lv.SphericalShell, ((0, 0, 0), 1, 1), "inner must be smaller than outer"),
    (lv.SphericalShell, ((0, 0, 0), -1, 1), "inner must be > 0"),
    (lv.Cylinder, (1, 1, 1), "z1 must exceed z0"),
    (lv.Cylinder, (0, 0, 1), "radius must be > 0"),
    (lv.Cylinder, (1, NAN, 1), "z0 must be finite"),
    (lv.Prism, (lv.Rectangle((0, 0), (1, 1)), 0, 1), "over a rectangle it is a Box"),
    (lv.Prism, (lv.LShape(1).renamed(**{"side-1": "top"}), 0, 1), "no side of the base may be called 'top'"),
    (lv.Prism, (lv.LShape(1), 1, 1), "z1 must exceed z0"),
    (
        lv.Prism,
        (lv.Polygon([(0, 0), (1, 0), (0.75, 0.5), (1, 0), (2, 0), (2, 1), (0, 1.5)]), 0, 1),
        "must not have a slit",
    ),
    (lv.NotchedCube, (0,), "size must be > 0"),
    (lv.ConeSection, (1, 0), "half_angle must be > 0"),
    (lv.ConeSection, (1, math.pi), "half_angle must be less than pi"),
    (lv.ConeSection, (-1, 1), "radius must be > 0"),
]


@pytest.mark.parametrize(("shape", "arguments", "message"), BAD, ids=[f"{s.__name__}{a}" for s, a, _ in BAD])
def test_degenerate_shapes_are_refused(shape, arguments, message):
    with pytest.raises(lv.GeometryError, match=message):
        shape(*arguments)


def test_a_full_turn_is_the_largest_sector():
    assert lv.Sector(1, 2 * math.pi).opening == 2 * math.pi
    with pytest.raises(lv.GeometryError, match="opening"):
        lv.Sector(1, 2 * math.pi * (1 + 1e-12))


def test_errors_are_value_errors_too():
    with pytest.raises(ValueError, match="radius"):
        lv.Disc((0, 0), 0)
