"""Fifty digits of quantities, against antiderivatives by hand and against the field at another precision."""

from __future__ import annotations

from dataclasses import replace

import mpmath
import pytest

import laplace_verify as lv
from laplace_verify import fields
from laplace_verify.problems import case_from_json, case_to_json
from laplace_verify.references.quantity_digits import with_quantity_digits

PLATE = lv.case(
    lv.Rectangle((0, 0), (1.6, 0.9)),
    {},
    fields.exp_trig(2) + fields.polynomial(3),
    0.7,
    quantities={
        "value": lv.value_at((0.1, 0.3)),
        "density": lv.flux_density_at((0.4, 0.9), "top"),
        "flux": lv.flux_through("top"),
        "energy": lv.energy_of_solution(),
    },
)


def test_values_densities_and_fluxes_by_hand():
    found = with_quantity_digits(PLATE).quantities
    with mpmath.workdps(70):
        x, y, k = mpmath.mpf("0.4"), mpmath.mpf("0.9"), mpmath.mpf("0.7")
        cos, sin, exp = mpmath.cos, mpmath.sin, mpmath.exp
        p, q = mpmath.mpf("0.1"), mpmath.mpf("0.3")
        wanted = {
            # u = e^(2y) cos 2x + x^3 - 3 x y^2; the flux integrates k u_y = k (2 e^(2y) cos 2x - 6 x y)
            "value": exp(2 * q) * cos(2 * p) + p**3 - 3 * p * q * q,
            "density": k * (2 * exp(2 * y) * cos(2 * x) - 6 * x * y),
            "flux": k * (exp(2 * y) * sin(mpmath.mpf("3.2")) - 3 * mpmath.mpf("1.6") ** 2 * y),
        }
        for name, exact in wanted.items():
            digits = found[name].digits
            assert digits.basis == "closed form"
            assert mpmath.mpf(digits.radius) <= mpmath.mpf("1e-46")
            assert abs(mpmath.mpf(digits.value) - exact) <= mpmath.mpf(digits.radius)


def test_digits_survive_the_file():
    case = with_quantity_digits(PLATE)
    again = case_from_json(case_to_json(case))
    assert again.quantities["flux"].digits == case.quantities["flux"].digits
    assert case_to_json(again) == case_to_json(case)


def test_fluxes_round_a_source_past_a_turn_of_the_conjugate():
    # log r about a hole: the angle jumps by 2 pi on the left side; a side sees a quarter of the source
    hole = [(-0.25, -0.25), (0.25, -0.25), (0.25, 0.25), (-0.25, 0.25)]
    ring = lv.Polygon([(-1, -1), (1, -1), (1, 1), (-1, 1)], holes=[hole])
    wanted = {side: lv.flux_through(side) for side in ("side-2", "side-4")}
    around = lv.case(ring, {}, fields.log_source((0, 0)), quantities=wanted)
    found = with_quantity_digits(around).quantities
    with mpmath.workdps(60):
        for side in wanted:
            off = abs(mpmath.mpf(found[side].digits.value) - mpmath.pi / 2)
            assert off <= mpmath.mpf(found[side].digits.radius) <= mpmath.mpf("1e-48")
            assert found[side].digits.basis == "closed form"


def test_a_wrong_number_is_refused():
    wrong = {"value": replace(PLATE.quantities["value"], value=PLATE.quantities["value"].value + 1e-6)}
    with pytest.raises(lv.ProblemError, match="in 50 digits"):
        with_quantity_digits(replace(PLATE, quantities=wrong))
