"""Every seeded fault shows where theory says it must, and nowhere else."""

from __future__ import annotations

import pickle

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.cases import catalogue
from laplace_verify.geometry import Rectangle
from laplace_verify.problems import case, robin
from laplace_verify.solvers.samples import ALL, FAULTS, five_point

PLATE = Rectangle((0, 0), (1.5, 1))
WAVE = fields.exp_trig(1.3, "cos", centre=(0.1, 0.2))
TENSOR = np.array([[2.0, 0.7], [0.7, 1.0]])
FIXED = case(PLATE, {}, WAVE, 2.5)
FLUX = case(PLATE, {"left": "neumann", "top": "neumann"}, WAVE, 2.5)
PLAIN_FLUX = case(PLATE, {"left": "neumann", "top": "neumann"}, WAVE)
CONVECTION = case(PLATE, {"left": robin(2.0)}, WAVE, 2.5)
OBLIQUE_FLUX = case(PLATE, {"left": "neumann"}, fields.stretched(WAVE, TENSOR), TENSOR)
SIZES = (16, 32, 64)


def orders(solver, posed):
    """Return the observed orders in the maximum norm at the nodes."""
    errors = []
    for n in SIZES:
        answer = solver.solve(posed.problem, n)
        errors.append(np.max(np.abs(answer.values - posed.exact.value(answer.points))))
    return np.log2(np.array(errors[:-1]) / errors[1:])


def same_as_sound(fault, posed):
    """Tell whether a fault leaves the answer of the sound solver as it is."""
    faulty, sound = (solver.solve(posed.problem, 16).values for solver in (FAULTS[fault].adapter, five_point))
    return bool(np.max(np.abs(faulty - sound)) < 1e-10)


def test_the_sound_solver_is_second_order_on_every_case_of_this_file():
    for posed in (FIXED, FLUX, PLAIN_FLUX, CONVECTION, OBLIQUE_FLUX):
        assert np.all(np.abs(orders(five_point, posed) - 2.0) < 0.1)


@pytest.mark.parametrize("posed", [FLUX, PLAIN_FLUX, OBLIQUE_FLUX])
def test_a_one_sided_flux_condition_is_first_order(posed):
    found = orders(FAULTS["first-order flux"].adapter, posed)
    assert np.all((found > 0.85) & (found < 1.15)), found


def test_a_one_sided_flux_condition_shows_nothing_where_the_second_normal_derivative_vanishes():
    affine = case(PLATE, {"left": "neumann", "top": "neumann"}, fields.affine([1.0, 2.0], 0.5))
    assert same_as_sound("first-order flux", affine)


@pytest.mark.parametrize(
    ("fault", "posed"),
    [
        ("flux sign", FLUX),
        ("flux for gradient", FLUX),
        ("half-cell factor", FLUX),
        ("robin coefficient", CONVECTION),
        ("dirichlet side not carried", FIXED),
    ],
)
def test_other_faults_stop_convergence(fault, posed):
    found = orders(FAULTS[fault].adapter, posed)
    assert np.all(np.abs(found) < 0.3), found


@pytest.mark.parametrize("fault", [name for name in FAULTS if "dirichlet" not in name])
def test_no_fault_in_a_derivative_condition_shows_with_dirichlet_data_only(fault):
    assert same_as_sound(fault, FIXED)


def test_the_conductivity_in_a_flux_shows_only_where_it_is_not_one():
    assert same_as_sound("flux for gradient", PLAIN_FLUX)
    assert not same_as_sound("flux for gradient", FLUX)


def test_neumann_faults_leave_robin_conditions_alone_and_the_other_way_round():
    for fault in ("first-order flux", "flux sign", "flux for gradient", "half-cell factor"):
        assert same_as_sound(fault, CONVECTION)
    assert same_as_sound("robin coefficient", FLUX)


def test_faults_declare_what_the_sound_solver_declares_and_say_what_is_wrong():
    for name, fault in FAULTS.items():
        declared, sound = fault.adapter.describe(), five_point.describe()
        assert name in declared.pop("name")
        sound.pop("name")
        assert declared == sound
        assert len(fault.description) > 20


def test_samples_and_faults_travel_between_processes():
    for adapter in (*ALL, *(fault.adapter for fault in FAULTS.values())):
        copy = pickle.loads(pickle.dumps(adapter))
        assert copy.name == adapter.name
    again = pickle.loads(pickle.dumps(FAULTS["flux sign"].adapter))
    first, second = (solver.solve(FLUX.problem, 8).values for solver in (again, FAULTS["flux sign"].adapter))
    np.testing.assert_array_equal(first, second)


def test_faults_name_cases_that_the_sound_solver_can_do():
    samples = {solver.name: solver for solver in ALL}
    for name, fault in FAULTS.items():
        assert fault.shown_by, name
        for id_ in fault.shown_by:
            assert samples[fault.sample].refuses(catalogue[id_].problem) is None, (name, id_)
