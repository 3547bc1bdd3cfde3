"""Published corner problems, solved afresh by `fit_corners`: point values, coefficients, a conformal modulus.

Columns named "computed" below were found by conformal maps (elliptic functions, Schwarz-Christoffel) in 40 to
220 digits, a route that this package does not use; printed figures are quoted beside them.
"""

from functools import cache

import mpmath
import pytest

from laplace_verify.references import CornerFit, CornerTerms, SideData, fit_corners

COLD, INSULATED = SideData(), SideData(kind="neumann")


def near(found, expected, rtol):
    with mpmath.workdps(40):
        return abs(found - mpmath.mpf(expected)) <= mpmath.mpf(rtol) * abs(mpmath.mpf(expected))


def coefficient(field, j):
    """Return c_j without the scale: of r^λ_j."""
    corner = next(c for c in field.precise.corners if c.coefficients)
    with mpmath.workdps(40):
        exponent = mpmath.mpf(corner.powers.multiple(j)) * mpmath.pi / mpmath.mpf(corner.opening)
        if abs(corner.opening / mpmath.pi - 1.5) < 1e-12:
            exponent = mpmath.mpf(2 * j) / 3
        elif abs(corner.opening / mpmath.pi - 1) < 1e-12:
            exponent = mpmath.mpf(corner.powers.multiple(j))
        scale = mpmath.mpf(corner.scale.numerator) / corner.scale.denominator
        return mpmath.mpf(corner.coefficients[j - 1]) / scale**exponent


# L-shape [0, 2]^2 without (1, 2]^2, u = x^2 on the boundary. Trefethen, NA-Digest, November 2018; Gopal and
# Trefethen 2019, SIAM J. Numer. Anal. 57, 2074-2094: u(0.99, 0.99) = 1.0267919261073... (printed). Computed
# by a Schwarz-Christoffel map and Poisson's integral.
CHALLENGE = {
    ("0.99", "0.99"): "1.0267919261073619606",
    ("0.9", "0.9"): "1.0061329398363424603",
    ("0.5", "0.5"): "0.5121059240611235224",
    ("0.1", "0.1"): "0.04101734116336453992",
}


@cache
def challenge():
    corners = [CornerTerms(vertex=k, logs=(2,)) for k in (0, 1, 2, 4, 5)]
    return fit_corners(
        CornerFit(
            vertices=(("0", "0"), ("2", "0"), ("2", "1"), ("1", "1"), ("1", "2"), ("0", "2")),
            sides=(SideData(data="x**2"),) * 6,
            corners=(CornerTerms(vertex=3, powers=56, logs=(2,)), *corners),
            degree=90,
            centre=("0.75", "0.75"),
            digits=26,
            density=140,
        )
    )


@pytest.mark.parametrize(("point", "expected"), list(CHALLENGE.items()))
def test_l_shape_challenge(point, expected):
    field = challenge()
    value, radius, basis = field.enclosure(point, 20)
    assert basis == "maximum-principle bound"
    assert radius < 1e-19
    assert near(value, expected, "1e-19")


def test_l_shape_challenge_as_printed():
    """The printed value is cut off, not rounded."""
    assert mpmath.nstr(challenge().at(("0.99", "0.99"), 20), 20).startswith("1.0267919261073")


# Motz 1947; coefficients of r^(k+1/2) cos((k+1/2) theta) in the rectangle (-1, 1) x (0, 1), u = 500 on x = 1.
# Printed lists (Li, Mathon and Sermer 1987; Lu, Hu and Li 2004) agree at the start (401.162453745234416,
# 87.6559201950879) and lose about half a digit a coefficient; these are computed by two elliptic maps.
MOTZ = [
    "401.1624537452344204431378", "87.65592019508791696478412", "17.23791507944680928738604",
    "-8.071215259698134449822306", "1.440272717022856980863416", "0.331054885920736057539356",
    "0.2754373445091808000914977", "-0.08693299452553668864222471", "0.03360487842653695112765266",
    "0.01538437448256940202443357", "0.007302301674026923281760918", "-0.003184113916297926497048615",
    "0.001220646109540543524412703", "0.0005309654801062209968166693", "0.0002715121819422628076353009",
    "-0.0001200463737035793087097002", "0.00005053983191069173911782822", "0.00002316682350740477652329933",
    "0.00001153524912503320506133979", "-0.000005295739043643509557889693",
    "0.000002291249200950898143787654",
]  # fmt: skip
MOTZ_VALUES = {
    ("0", "0.5"): "176.045447213260636",
    ("0.5", "0.5"): "330.755283946322356",
    ("-0.5", "0.5"): "88.4547996469075362",
    ("0", "1"): "204.320126474656329",
    ("0.5", "0"): "317.063247701453735",
    ("1/28", "1/28"): "83.6712711663228976",
    ("-1", "0.5"): "65.5318404717741509",
    ("-1", "1"): "91.3597470506873422",
}


@cache
def motz():
    return fit_corners(
        CornerFit(
            vertices=(("-1", "0"), ("0", "0"), ("1", "0"), ("1", "1"), ("-1", "1")),
            sides=(COLD, INSULATED, SideData(data="500"), INSULATED, INSULATED),
            corners=(CornerTerms(vertex=1, powers=210),),
            digits=28,
            density=170,
        )
    )


@pytest.mark.parametrize(("k", "expected"), list(enumerate(MOTZ)))
def test_motz_coefficients(k, expected):
    # the residual 1e-26 of 500 divides by the size of the term at r = sqrt(2)
    assert near(coefficient(motz(), k + 1), expected, "1e-18" if k > 12 else "1e-20")


@pytest.mark.parametrize(("point", "expected"), list(MOTZ_VALUES.items()))
def test_motz_values(point, expected):
    assert near(motz().at(point, 22), expected, "3e-18")


def test_motz_flux_is_a_conformal_modulus():
    """Through x = 1, by the stream function at its ends, over 500."""
    stream = motz().conjugate()
    with mpmath.workdps(40):
        flux = (stream.at((1, 1), 22) - stream.at((1, 0), 22)) / 500
        assert near(flux, "0.680634173059913335818587475031", "1e-20")


# Cracked beam: v = 0 on the crack, 1/8 on y = 1/2, no flux elsewhere, in (-1/2, 1/2) x (0, 1/2). Fix, Gulati
# and Wakoff 1973 (0.191118631972, -0.118116071967 from memory); computed by elliptic maps. Pairs vanish.
BEAM = {
    1: "0.1911186319718720890683", 2: "-0.1181160719665094684635", 5: "-0.01254698597718743625935",
    6: "-0.01903340370825706457906", 9: "-0.0006541248441535427911437", 10: "-0.007595934779542948195827",
    13: "-0.0005054114858172513492847", 14: "-0.004477115267917129981987",
}  # fmt: skip


@cache
def beam():
    return fit_corners(
        CornerFit(
            vertices=(("-0.5", "0"), ("0", "0"), ("0.5", "0"), ("0.5", "0.5"), ("-0.5", "0.5")),
            sides=(COLD, INSULATED, INSULATED, SideData(data="1/8"), INSULATED),
            corners=(CornerTerms(vertex=1, powers=190),),
            digits=28,
            density=150,
        )
    )


@pytest.mark.parametrize(("j", "expected"), list(BEAM.items()))
def test_cracked_beam_coefficients(j, expected):
    assert near(coefficient(beam(), j), expected, "1e-19")


@pytest.mark.parametrize("j", [3, 4, 7, 8])
def test_cracked_beam_pairs_vanish(j):
    assert abs(coefficient(beam(), j)) <= 1e-20


# L-shape (-1, 1)^2 without a quadrant, u = 0 on the inner and 1 on the long sides, no flux through the ends:
# coefficients of r^(2(2j-1)/3). Igarashi and Honma 1996; Elliotis, Georgiou and Xenophontos 2005, Appl. Math.
# Comput. 169, 485-499 (1.12798040105939, 0.16993386650225, -0.02304097399348 from memory); computed by
# conformal maps.
L_SHAPE = [
    "1.127980401059387939881", "0.1699338665022527293757", "-0.02304097399348036284724",
    "0.003471196658215537302548", "0.0009151570990869674687313", "-0.0001128038344564537394174",
    "0.00008771652448739227414237", "0.00002776031366914683220115", "-0.000004416157801839903668961",
    "0.00000275394568076411248678", "9.219619299205336438732e-7", "-1.554458758455505541075e-7",
]  # fmt: skip


@cache
def l_shape():
    one = SideData(data="1")
    return fit_corners(
        CornerFit(
            vertices=(("0", "0"), ("1", "0"), ("1", "1"), ("-1", "1"), ("-1", "-1"), ("0", "-1")),
            sides=(COLD, INSULATED, one, one, INSULATED, COLD),
            corners=(CornerTerms(vertex=0, powers=279, every=2),),
            digits=28,
            density=140,
        )
    )


@pytest.mark.parametrize(("j", "expected"), list(enumerate(L_SHAPE, start=1)))
def test_l_shape_flux_intensities(j, expected):
    assert near(coefficient(l_shape(), 2 * j - 1), expected, "1e-18")


def test_a_wrong_coefficient_is_seen():
    assert not near(coefficient(l_shape(), 1), "1.127980401059387939981", "1e-20")


# Kondrat'ev 1967; Grisvard 1985; Lehman 1959: leading exponents of corners.
EXPONENTS = [
    pytest.param((1, 0), (0, -1), "dd", "2/3", id="l-shape"),
    pytest.param((1, 0), (-1, 0), "dn", "1/2", id="straight-change"),
    pytest.param((1, 0), (0, -1), "nd", "1/3", id="l-shape-mixed"),
    pytest.param((1, 0), (1, 0), "dd", "1/2", id="slit"),
]


@pytest.mark.parametrize(("start", "stop", "sides", "expected"), EXPONENTS)
def test_leading_exponents(start, stop, sides, expected):
    from laplace_verify.fields import CornerSeries, corner_powers

    corner = CornerSeries(apex=(0, 0), start=start, stop=stop, sides=sides, coefficients=("1",))
    exponent = corner_powers((corner,)).singularities[0].exponent
    assert exponent == pytest.approx(eval_fraction(expected), rel=1e-15)


def eval_fraction(text):
    from fractions import Fraction

    return float(Fraction(text))
