"""Discs, annuli, balls and shells against published formulas and values computed for them."""

import math

import mpmath
import numpy as np
import pytest

import laplace_verify as lv

ETA = 4e-7 * math.pi * 299792458  # ohm, impedance of free space (SI before 2019, as in the tables)


def test_disc_with_half_of_its_rim_hot():
    # Jackson, problem 2.13; Churchill & Brown: u = 1/2 + arctan(2y/(1 - r^2))/pi; from memory, 19 digits
    # computed.
    with mpmath.workdps(30):
        step = lv.fields.poisson_disc((0, 0), 1, lv.fields.arcs((0, "1/2"), (1, 0)))
        assert abs(step.at((0, "1/2"), digits=25) - mpmath.mpf("0.79516723530086654835")) < mpmath.mpf(
            "1e-19"
        )
        signs = lv.fields.poisson_disc((0, 0), 1, lv.fields.arcs((0, "1/2"), (1, -1)))
        assert abs(signs.at((0, "1/2"), digits=25) - mpmath.mpf("0.5903344706017330967")) < mpmath.mpf(
            "1e-18"
        )


def test_annulus_and_shell_at_their_middle():
    # ln r / ln 2 and 2/r - 1: any text, common practice; 20 digits computed, 1/3 exact.
    with mpmath.workdps(40):
        annulus = lv.fields.log_source((0, 0), 1 / mpmath.log(2))
        assert abs(annulus.at(("3/2", 0)) - mpmath.mpf("0.58496250072115618145")) < mpmath.mpf("1e-20")
    shell = lv.fields.point_source((0, 0, 0), 2) + lv.fields.affine((0, 0, 0), -1)
    assert shell.value([[0.0, 1.5, 0.0]])[0] == pytest.approx(1 / 3, rel=1e-15, abs=0)


def test_coaxial_line_by_its_flux():
    # Z0 = eta/(2 pi) ln(b/a), any transmission-line text, common practice; 14 digits computed for b/a = 2.
    # The flux through the outer circle at unit difference is the capacity over eps0, 2 pi / ln 2, and Z0 =
    # eta / capacity.
    case = lv.case(
        lv.Annulus((0, 0), 1.0, 2.0),
        {},
        lv.fields.log_source((0, 0), 1 / math.log(2)),
        quantities={"capacity": lv.flux_through("outer")},
    )
    capacity = case.quantities["capacity"]
    assert ETA / capacity.value == pytest.approx(41.5600594031672, rel=1e-13, abs=0)
    assert capacity.radius < 1e-12


def images(radius, centre, outer):
    """Places of the two sources whose field is constant on |x| = outer and on the circle inside."""
    with mpmath.workdps(50):
        total = (outer**2 + mpmath.mpf(centre) ** 2 - mpmath.mpf(radius) ** 2) / mpmath.mpf(centre)
        root = mpmath.sqrt(total**2 - 4 * mpmath.mpf(outer) ** 2)
        return (total - root) / 2, (total + root) / 2


def test_eccentric_circles_by_two_sources():
    # C/eps0 = 2 pi / arccosh((R^2 + r^2 - c^2)/(2 R r)), R = 2, r = 1, c = 1/2: Smythe 1968 (transmission
    # lines) and Incropera & DeWitt, table 4.1 case 7 (conduction); 19 digits computed.
    near, far = images(1, mpmath.mpf("0.5"), 2)
    field = lv.fields.log_source((near, 0)) - lv.fields.log_source((far, 0))
    with mpmath.workdps(30):
        inside = [field.at(p, digits=28) for p in (("3/2", 0), ("1/2", 1), ("-1/2", 0))]
        outside = [field.at(p, digits=28) for p in ((2, 0), ("6/5", "8/5"), (-2, 0))]
        for values in (inside, outside):
            assert max(values) - min(values) < mpmath.mpf("1e-26")  # constant on each circle
        capacity = 2 * mpmath.pi / (outside[0] - inside[0])
        assert abs(capacity - mpmath.mpf("10.416652692323709859")) < mpmath.mpf("1e-17")
    case = lv.case(
        lv.Annulus((0, 0), 1.0, 2.0, (0.5, 0.0)),
        {},
        field * (1 / (outside[0] - inside[0])),
        quantities={"capacity": lv.flux_through("outer")},
    )
    assert case.quantities["capacity"].value == pytest.approx(10.416652692323709859, rel=1e-12, abs=0)


@pytest.mark.parametrize(
    ("depth", "expected"), [("1", "4.7709841915608975399"), ("3/2", "3.5644279563827382235")]
)
def test_buried_cylinder_by_its_mirror_image(depth, expected):
    # Shape factor 2 pi / arccosh(2 z/D), D = 1: Incropera & DeWitt, table 4.1 case 2; 19 digits
    # computed.
    with mpmath.workdps(30):
        z = mpmath.mpf(1) * int(depth.split("/")[0]) / int(depth.split("/")[-1] if "/" in depth else 1)
        a = mpmath.sqrt(z**2 - mpmath.mpf(1) / 4)
        field = lv.fields.log_source((0, a)) - lv.fields.log_source((0, -a))
        ground = field.at(("7/3", 0), digits=28)
        surface = [field.at(p, digits=28) for p in ((0, z + 0.5), (0, z - 0.5), (0.5, z))]
        assert abs(ground) < mpmath.mpf("1e-27")
        assert max(surface) - min(surface) < mpmath.mpf("1e-26")
        assert abs(2 * mpmath.pi / abs(surface[0]) - mpmath.mpf(expected)) < mpmath.mpf("1e-18")


def test_two_cylinders_are_twice_a_buried_one():
    # Incropera & DeWitt, table 4.1 case 4, D = 1, w = 2: half of the buried cylinder's; 19 digits
    # computed.
    a = math.sqrt(3) / 2
    field = lv.fields.log_source((a, 0)) - lv.fields.log_source((-a, 0))
    difference = float(np.diff(field.value([[0.5, 0.0], [-0.5, 0.0]]))[0])
    assert 2 * math.pi / difference == pytest.approx(2.3854920957804487699, rel=1e-14, abs=0)


@pytest.mark.parametrize(("dim", "lower", "upper"), [(2, 1 / 3, 3), (3, 2 / 9, 6)])
def test_harnack_bounds_are_reached_by_the_poisson_kernel(dim, lower, upper):
    # R^(d-2) (R -+ r)/(R +- r)^(d-1) at r = R/2: Harnack 1887; Gilbarg & Trudinger 1977; Axler, Bourdon &
    # Ramey 2001, from memory, exact. The kernel (1 - |x|^2)/|x - p|^d, p = (1, 0, 0), has value 1 in the
    # centre.
    pole = (1,) + (0,) * (dim - 1)
    kernel = -2 * lv.fields.dipole(pole, pole)
    kernel += lv.fields.affine((0, 0), -1) if dim == 2 else lv.fields.point_source(pole, -1)
    points = np.zeros((3, dim))
    points[:, 0] = 0.0, -0.5, 0.5
    assert kernel.value(points) == pytest.approx([1.0, lower, upper], rel=1e-14, abs=0)


@pytest.mark.parametrize("id_", ["disc-fourier", "disc-convection", "ball-convection", "ball-solid"])
def test_mean_over_circles_and_spheres_is_the_value_in_the_centre(id_):
    # Mean-value property, the sources above; exact.
    case = lv.catalogue[id_]
    shape = case.problem.shape
    (_, (points, _, weights)), *_ = shape.boundary_quadrature(24).items()
    inner = np.array(shape.centre) + 0.7 * (points - np.array(shape.centre))
    mean = float(weights @ case.exact.value(inner)) / float(weights.sum())
    assert mean == pytest.approx(case.exact.value([shape.centre])[0], rel=1e-12, abs=1e-13)
