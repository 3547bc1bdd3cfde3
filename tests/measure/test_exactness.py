"""Polynomials that a scheme declares to reproduce."""

import dataclasses

import pytest

import laplace_verify as lv
from laplace_verify.measure import Verdict
from laplace_verify.measure.exactness import promised_degree
from laplace_verify.solvers.samples import five_point, p1_element

LONG = lv.Rectangle((0.3, -0.2), (6.3, 0.4))  # sides 10 to 1: spacings 10 to 1 too
CONDITIONS = {"left": "neumann", "top": lv.robin(3.0), "right": "neumann"}
OBLIQUE = [[2.0, 0.6], [0.6, 0.5]]


def declaring(solver, degree):
    return dataclasses.replace(solver, reproduces_degree=degree)


@pytest.mark.parametrize("solver", [five_point, p1_element], ids=lambda solver: solver.kind)
@pytest.mark.parametrize("conductivity", [1.0, 3.5, OBLIQUE], ids=["one", "number", "tensor"])
def test_affine_fields_come_out_exact_on_long_plates_under_every_condition(solver, conductivity):
    case = lv.case(LONG, CONDITIONS, lv.fields.affine((2, -1), "1/2"), conductivity)
    found = lv.study(solver, case)
    assert found.verdict is Verdict.PASS, found.reasons
    assert all(level.nodal <= 1e-11 for level in found.levels)


def test_a_promise_that_is_not_kept_fails_whatever_the_order():
    # Linear elements converge at order 2 on a polynomial of degree 3, but do not contain it.
    case = lv.case(LONG, CONDITIONS, lv.fields.polynomial(3, "re"))
    assert lv.study(p1_element, case).verdict is Verdict.PASS
    found = lv.study(declaring(p1_element, 3), case)
    assert found.verdict is Verdict.FAIL
    assert "size 8: a harmonic polynomial of degree 3 is missed by" in found.reasons[-1]
    assert "declares reproduces_degree = 3" in found.reasons[-1]


def test_five_points_are_exact_at_their_nodes_up_to_degree_three_on_squares():
    # The fourth differences of re z^3 vanish (Kantorovich & Krylov 1958; from memory, unchecked).
    square = lv.case(lv.Rectangle((0, 0), (1, 1)), {}, lv.fields.polynomial(3, "re"))
    assert lv.study(declaring(five_point, 3), square).verdict is Verdict.PASS
    fourth = lv.case(lv.Rectangle((0, 0), (1, 1)), {}, lv.fields.polynomial(4, "re"))
    assert lv.study(declaring(five_point, 4), fourth).verdict is Verdict.FAIL


def test_nothing_is_promised_on_curves_beyond_the_degree_or_for_other_fields():
    solver = declaring(p1_element, 2)
    assert promised_degree(solver, lv.catalogue["plate-saddle"]) == 2
    assert promised_degree(solver, lv.catalogue["plate-cubic"]) is None
    assert promised_degree(solver, lv.catalogue["plate-wave"]) is None
    disc = lv.case(lv.Disc((0, 0), 1), {}, lv.fields.affine((1, 0)))
    assert promised_degree(solver, disc) is None
    assert promised_degree(declaring(p1_element, None), lv.catalogue["plate-saddle"]) is None
