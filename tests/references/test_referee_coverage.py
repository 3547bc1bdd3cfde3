"""How much of the stored values is confirmed by another route, and that every route has its tests."""

from pathlib import Path

import laplace_verify as lv
from laplace_verify.references import CONFIRMATIONS, confirmation_of, probes_of

CASES = lv.catalogue.select(ill_posed=False)


LEAST = 0.98  # left out: points of sides on which kernels are infinite, hot vertices of boxes


def test_every_case_is_confirmed():
    assert all(confirmation_of(case) is not None for case in CASES)


def test_most_of_the_stored_values_are_confirmed():
    every = confirmed = 0.0
    for case in CASES:
        points, by = len(probes_of(case)), confirmation_of(case)
        every += points
        confirmed += points * by[1].share if by is not None else 0
    assert confirmed >= LEAST * every, confirmed / every


def test_each_route_is_run_by_the_test_that_bears_its_name():
    here = Path(__file__).parent
    named = {
        path.stem.removeprefix("test_referee_"): path.read_text() for path in here.glob("test_referee_*.py")
    }
    del named["coverage"]
    assert set(named) == set(CONFIRMATIONS)
    for name, text in named.items():
        assert f'ROUTE = "{name}"' in text


def test_a_case_without_solution_is_confirmed_by_nothing():
    assert confirmation_of(lv.catalogue.select(ill_posed=True)[0]) is None


def test_a_field_of_a_kind_that_no_route_can_do_is_confirmed_by_nothing():
    formula = lv.field("exp(x)*cos(y)")
    assert confirmation_of(lv.case(lv.Rectangle((0, 0), (1, 1)), {}, formula)) is None
