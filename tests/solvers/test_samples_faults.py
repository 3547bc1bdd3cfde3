"""Every seeded fault shows where theory says it must, and nowhere else."""

from __future__ import annotations

import pickle

import numpy as np
import pytest

from laplace_verify import fields
from laplace_verify.cases import catalogue
from laplace_verify.geometry import Rectangle
from laplace_verify.measure import Verdict
from laplace_verify.measure.study import study
from laplace_verify.problems import case, robin
from laplace_verify.solvers.samples import ALL, FAULTS, five_point
from laplace_verify.solvers.samples.faults_grid_fluxes import FLUX_FAULTS
from laplace_verify.solvers.samples.finite_difference import SCHEME, solve_on_grid
from laplace_verify.solvers.samples.seeding import Seeds

PLATE = Rectangle((0, 0), (1.5, 1))
WAVE = fields.exp_trig(1.3, "cos", centre=(0.1, 0.2))
TENSOR = np.array([[2.0, 0.7], [0.7, 1.0]])
FIXED = case(PLATE, {}, WAVE, 2.5)
FLUX = case(PLATE, {"left": "neumann", "top": "neumann"}, WAVE, 2.5)
PLAIN_FLUX = case(PLATE, {"left": "neumann", "top": "neumann"}, WAVE)
CONVECTION = case(PLATE, {"left": robin(2.0)}, WAVE, 2.5)
OBLIQUE_FLUX = case(PLATE, {"left": "neumann"}, fields.stretched(WAVE, TENSOR), TENSOR)
SIZES = (16, 32, 64)
SAMPLES = {solver.name: solver for solver in ALL}
QUICK = {
    "flux sign": "rod-fixed-and-flux",
    "robin sign": "rod-both-convection",
    "metric factor doubled": "pipe-wall-two-temperatures",
    "conductivity of the lower neighbour": "rod-two-layers",
    "pinned twice": "rod-pure-flux",
    "level not restored": "rod-pure-flux",
    "regularised": "rod-pure-flux",
    "pi with four decimals": "pipe-thick-wall-flux",
    "dirichlet by rows of the unit matrix": "rod-two-temperatures",
    "balanced, then pinned": "pipe-pure-flux",
    "volumes: values of the next cell": "rod-two-temperatures",
    "volumes: weak penalty": "rod-two-temperatures",
    "volumes: ghost cells": "rod-two-temperatures",
}  # one-dimensional, a fraction of a second each


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


@pytest.mark.parametrize("fault", FLUX_FAULTS)
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
        declared, sound = fault.adapter.describe(), SAMPLES[fault.sample].describe()
        assert name in declared.pop("name")
        sound.pop("name")
        assert declared == sound
        assert len(fault.description) > 20
        assert fault.effect in ("order", "accuracy", "harmless")
        assert bool(fault.suspects) == (fault.effect != "harmless"), name


def test_samples_and_faults_travel_between_processes():
    for adapter in (*ALL, *(fault.adapter for fault in FAULTS.values())):
        copy = pickle.loads(pickle.dumps(adapter))
        assert copy.name == adapter.name
    again = pickle.loads(pickle.dumps(FAULTS["flux sign"].adapter))
    first, second = (solver.solve(FLUX.problem, 8).values for solver in (again, FAULTS["flux sign"].adapter))
    np.testing.assert_array_equal(first, second)


def test_faults_name_cases_that_the_sound_solver_can_do():
    for name, fault in FAULTS.items():
        assert fault.shown_by, name
        for id_ in fault.shown_by:
            assert SAMPLES[fault.sample].refuses(catalogue[id_].problem) is None, (name, id_)


def test_two_faults_of_one_name_are_refused():
    seeds = Seeds(sample=five_point, solve=solve_on_grid, scheme=SCHEME)
    facts = {"kind": "flux sign", "suspects": ("Neumann condition",), "shown_by": ("plate-flux-top",)}
    seeds.into("load", "lost", "the load is lost", **facts)(len)
    with pytest.raises(ValueError, match="'lost' exists already"):
        seeds.into("load", "lost", "the load is lost again", **facts)(len)


def shows(name, id_):
    """Fail unless a fault has the effect it is said to have on a case, and the sound solver passes it."""
    fault, posed = FAULTS[name], catalogue[id_]
    sound, found = study(SAMPLES[fault.sample], posed), study(fault.adapter, posed)
    assert sound.verdict is Verdict.PASS, str(sound)
    if fault.effect == "order":
        assert found.verdict is Verdict.FAIL, str(found)
    elif fault.effect == "harmless":
        assert found.verdict is Verdict.PASS, str(found)
    else:
        assert found.verdict is not Verdict.PASS or set(found.remarks) - set(sound.remarks), str(found)


@pytest.mark.parametrize(("name", "id_"), QUICK.items())
def test_faults_have_their_effect_in_one_dimension(name, id_):
    assert id_ in FAULTS[name].shown_by
    shows(name, id_)


@pytest.mark.long
@pytest.mark.parametrize(
    ("name", "id_"), [(name, id_) for name, fault in FAULTS.items() for id_ in fault.shown_by]
)
def test_faults_have_their_effect_on_every_case_said_to_show_it(name, id_):
    shows(name, id_)
