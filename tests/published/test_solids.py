"""Textbook values of solids with values given face by face. Sources from memory unless a title is given."""

import mpmath
import pytest

from laplace_verify import fields

CUBE = fields.box_faces((0, 0, 0), (1, 1, 1), top=1)
OPPOSITE = fields.box_faces((0, 0, 0), (1, 1, 1), top=1, bottom=1)
LID = fields.cylinder_faces(1, 0, 1, top=1)
MANTLE = fields.cylinder_faces(1, 0, 1, side=1)
TALL_LID = fields.cylinder_faces(1, 0, 2, top=1)
TALL_MANTLE = fields.cylinder_faces(1, 0, 2, side=1)
SPHERE = fields.hemispheres((0, 0, 0), 1, 1, -1)

VALUES = [
    # Unit cube, one hot face: the centre is 1/6 by symmetry; the rest by the double sine series
    # (Carslaw & Jaeger 1959, Conduction of Heat in Solids, ch. VI).
    pytest.param(CUBE, ("1/2", "1/2", "1/2"), "0.1666666666666666666666667", id="cube-centre"),
    pytest.param(CUBE, ("1/2", "1/2", "1/4"), "0.05101640474159350603490773", id="cube-below"),
    pytest.param(CUBE, ("1/2", "1/2", "3/4"), "0.45808681458067311152", id="cube-above"),
    pytest.param(CUBE, ("1/4", "1/4", "1/4"), "0.02612771009446531370601761", id="cube-quarter"),
    # Hollow cube, two opposite faces at V (Jackson, Classical Electrodynamics, problem 2.23).
    pytest.param(OPPOSITE, ("1/2", "1/2", "1/2"), "0.33333333333333333333", id="hollow-cube"),
    # Sine mode: sinh(pi/sqrt 2)/sinh(sqrt 2 pi).
    pytest.param(
        fields.box_mode((0, 0, 0), (1, 1, 1), (0, 0)),
        ("1/2", "1/2", "1/2"),
        "0.1071918761737940023477995",
        id="mode",
    ),
    # Finite cylinder, radius 1 (Carslaw & Jaeger 1959, ch. VIII).
    pytest.param(LID, (0, 0, "1/2"), "0.38391255885387182284", id="lid"),
    pytest.param(MANTLE, (0, 0, "1/2"), "0.23217488229225635431", id="mantle"),
    pytest.param(TALL_LID, (0, 0, 1), "0.1393371836109740803", id="tall-lid"),
    pytest.param(TALL_MANTLE, (0, 0, 1), "0.7213256327780518394", id="tall-mantle"),
    pytest.param(LID, ("1/2", 0, "1/2"), "0.30292312840399265262", id="lid-off-axis"),
    # Sphere with hemispheres at +-V, inside at z = a/2: twice the outside value at z = 2a by inversion
    # (Jackson, eqs. 2.22-2.27).
    pytest.param(SPHERE, (0, 0, "1/2"), "0.658359213500126182", id="hemispheres"),
    # Concentric spheres, 1 at r = 1 and 0 at r = 2: 2/r - 1.
    pytest.param(
        fields.shell_zonal((0, 0, 0), 1, 2, (1,), (0,)), (0, "3/2", 0), "0.33333333333333333333", id="shell"
    ),
]


@pytest.mark.parametrize(("field", "point", "value"), VALUES)
def test_value_is_the_published_one(field, point, value):
    digits = len(value.lstrip("0."))
    with mpmath.workdps(40):
        assert abs(field.at(point, 30) - mpmath.mpf(value)) <= mpmath.mpf(10) ** (
            1 - len(value.split(".")[1])
        )
        assert digits >= 17


def test_sphere_outside_is_half_of_the_inside_value():
    """V (1 - (z^2 - a^2)/(z sqrt(z^2 + a^2))) at z = 2a: 0.32917960675006309108 (Jackson, eq. 2.22)."""
    with mpmath.workdps(40):
        outside = 1 - mpmath.mpf(3) / (2 * mpmath.sqrt(5))
        assert abs(outside - mpmath.mpf("0.32917960675006309108")) <= mpmath.mpf("1e-20")
        assert abs(SPHERE.at((0, 0, "1/2"), 30) / 2 - outside) <= mpmath.mpf("1e-28")


def test_first_term_of_the_hollow_cube():
    """0.347546, the first term of the double series at the centre (Jackson, problem 2.23)."""
    mode = fields.box_mode((0, 0, 0), (1, 1, 1), (0, 0))
    with mpmath.workdps(20):
        first = 2 * 16 / mpmath.pi**2 * mode.at(("1/2", "1/2", "1/2"), 15)
        assert abs(first - mpmath.mpf("0.3475458487")) <= mpmath.mpf("1e-10")
