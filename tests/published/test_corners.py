"""Corner exponents, and convergence of differences and elements at corners, against published facts."""

import math
from itertools import pairwise

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.solvers.samples import five_point, p1_element


@pytest.mark.parametrize(
    ("shape", "conditions", "expected"),
    [
        pytest.param(lv.LShape(1.0), {}, 2 / 3, id="l-shape"),
        pytest.param(lv.LShape(1.0), {"side-6": "neumann"}, 1 / 3, id="l-shape, Dirichlet to Neumann"),
        pytest.param(lv.Sector(1.0, 2 * math.pi), {}, 1 / 2, id="slit"),
        pytest.param(
            lv.Rectangle((-1, 0), (1, 1)).split(bottom=[0.5]),
            {"bottom-1": "neumann"},
            1 / 2,
            id="straight change",
        ),
        pytest.param(lv.Rectangle((0, 0), (2, 1)), {"top": "neumann"}, 1.0, id="right angle, change"),
        pytest.param(lv.Rectangle((0, 0), (2, 1)), {}, 2.0, id="right angle"),
        pytest.param(lv.Box((0, 0, 0), (1, 1, 1)), {}, 2.0, id="edge of a box"),
    ],
)
def test_leading_exponent_of_a_corner(shape, conditions, expected):
    # pi/w and pi/(2 w): Kondrat'ev 1967; Grisvard 1985; Lehman 1959; edges: Dauge 1988. From memory; exact by
    # derivation.
    field = lv.fields.affine((1, 2) if shape.dim == 2 else (1, 2, 3))
    found = lv.case(shape, conditions, field).regularity.domain
    assert found == pytest.approx(expected, rel=1e-12, abs=0)


def test_exponent_of_the_octant_is_three():
    # Grisvard 1985; Dauge 1988, from memory: the function xyz, a solid harmonic of degree 3 that vanishes on
    # its faces.
    u = lv.fields.solid(3, -2)
    faces = np.array([[0.0, 0.3, 0.7], [0.4, 0.0, 0.2], [0.9, 0.5, 0.0]])
    assert u.value(faces) == pytest.approx(0.0, abs=1e-15)
    assert u.value([[0.2, 0.2, 0.2]]) / u.value([[0.1, 0.1, 0.1]]) == pytest.approx(2.0**3, rel=1e-14, abs=0)


# Five-point scheme on the L-shape, u = r^(2/3) sin(2/3 theta): order 2/3 in the maximum norm, 4/3 at a fixed
# point. Laasonen 1957/1958; Bramble, Hubbard & Zlamal 1968, from memory. Maxima for h = 1/8 ... 1/64 measured
# independently.
L_SHAPE_MAXIMA = [2.011e-2, 1.303e-2, 8.298e-3, 5.249e-3]


def nodal_errors(case, sizes):
    """Largest errors at the nodes, and errors at the fixed point (-1/2, 1/2)."""
    largest, fixed = [], []
    for n in sizes:
        answer = five_point.solve(case.problem, n)
        wrong = answer.values - case.exact.value(answer.points)
        largest.append(np.abs(wrong).max())
        point = np.array([[-0.5, 0.5]])
        fixed.append((answer.value_at(point) - case.exact.value(point))[0])
    return np.array(largest), np.array(fixed)


def test_five_point_scheme_at_a_re_entrant_corner():
    largest, fixed = nodal_errors(lv.catalogue["l-shape-corner"], (8, 16, 32, 64))
    assert largest == pytest.approx(L_SHAPE_MAXIMA, rel=5e-4, abs=0)  # four digits are given
    assert np.log2(largest[-2] / largest[-1]) == pytest.approx(2 / 3, abs=0.02)
    assert np.log2(fixed[-2] / fixed[-1]) == pytest.approx(4 / 3, abs=0.03)


@pytest.mark.slow
def test_study_finds_both_orders_at_a_re_entrant_corner():
    study = lv.study(five_point, lv.catalogue["l-shape-corner"])
    assert study.orders["max"].observed == pytest.approx(2 / 3, abs=0.05)
    assert study.orders["L2"].observed == pytest.approx(4 / 3, abs=0.1)
    assert study.verdict is lv.Verdict.PASS


def test_five_point_scheme_at_a_change_of_condition():
    # Same sources: order 1/2 in the maximum norm, 1 at a fixed point.
    case = lv.catalogue["plate-condition-change"]
    found = []
    for n in (16, 32, 64):
        answer = five_point.solve(case.problem, n)
        wrong = np.abs(answer.values - case.exact.value(answer.points)).max()
        point = np.array([[0.25, 0.35]])
        found.append([wrong, abs(answer.value_at(point) - case.exact.value(point))[0]])
    orders = np.log2(np.divide(found[-2], found[-1]))
    assert orders == pytest.approx([0.5, 1.0], abs=0.05)


def test_linear_elements_at_a_re_entrant_corner():
    # Energy error of order 2 min(p, alpha) = 4/3, the square of the H1 error: Strang & Fix 1973; Babuska,
    # Kellogg & Pitkaranta 1979, from memory (1.336 measured independently on a bent channel).
    study = lv.study(p1_element, lv.catalogue["l-shape-corner"], sizes=(16, 32, 64))
    assert 2 * study.orders["H1-semi"].observed == pytest.approx(4 / 3, abs=0.05)


def test_linear_elements_at_a_jump_do_not_pretend_a_maximum_norm():
    study = lv.study(p1_element, lv.catalogue["plate-hot-side"], sizes=(8, 16, 32))
    assert "max" not in study.deciding


# L-shape [0, 2]^2 without (1, 2]^2, u = x^2 on the boundary: u(0.99, 0.99) = 1.0267919261073..., Trefethen,
# NA-Digest, Nov. 2018; Gopal & Trefethen 2019, PNAS 116, 10223-10225. At (0.5, 0.5) 0.5121059240611235224, at
# (0.9, 0.9) 1.0061329398363424603, computed independently by a conformal map.
@pytest.mark.slow
@pytest.mark.parametrize(("place", "expected"), [(0.5, 0.5121059240611235), (0.9, 1.0061329398363425)])
def test_l_shape_with_squares_on_its_boundary(place, expected):
    # x = X + 1, y = 1 - Y turns the missing quadrant into that of LShape.
    basin = lv.LShape(1.0)
    problem = lv.problem(basin, {piece.name: lv.dirichlet("(x + 1)**2") for piece in basin.pieces})
    point = np.array([[place - 1, 1 - place]])
    values = [five_point.solve(problem, n).value_at(point)[0] for n in (40, 80, 160)]
    ratio = 2 ** (4 / 3)
    better = [(ratio * b - a) / (ratio - 1) for a, b in pairwise(values)]
    assert better[-1] == pytest.approx(expected, abs=2e-5)  # what is left falls like h^2
