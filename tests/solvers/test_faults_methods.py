"""Seeded faults outside finite differences are seen where they say so; sound samples are not blamed."""

from __future__ import annotations

import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.cases import catalogue
from laplace_verify.measure.verdict import Verdict
from laplace_verify.solvers.samples import ALL, FAULTS
from laplace_verify.solvers.samples.faults_boundary import BOUNDARY_FAULTS
from laplace_verify.solvers.samples.faults_elements import ELEMENT_FAULTS
from laplace_verify.solvers.samples.faults_quadratic import QUADRATIC_FAULTS
from laplace_verify.solvers.samples.faults_sources import SOURCE_FAULTS
from laplace_verify.solvers.samples.faults_spectral import SPECTRAL_FAULTS
from laplace_verify.solvers.samples.faults_walks import WALK_FAULTS

TABLES = (ELEMENT_FAULTS, QUADRATIC_FAULTS, BOUNDARY_FAULTS, SPECTRAL_FAULTS, SOURCE_FAULTS, WALK_FAULTS)
SEEDED = {name: fault for table in TABLES for name, fault in table.items()}
SAMPLES = {solver.name: solver for solver in ALL}
# one fault of every kind of solver, on a case small enough for every run
QUICK = {
    "half the edge": "plate-flux-left",
    "middles permuted": "plate-cubic",
    "jump left out": "plate-saddle",
    "data negated": "plate-flux-left",
    "half the flux": "disc-flux",
}


def test_names_are_unique_over_all_tables():
    assert sum(map(len, TABLES)) == len(SEEDED)
    assert set(SEEDED) < set(FAULTS)


def test_there_are_enough_of_every_effect():
    effects = [fault.effect for fault in SEEDED.values()]
    assert effects.count("order") >= 40
    assert effects.count("accuracy") >= 8
    assert effects.count("harmless") >= 12


@pytest.mark.parametrize(("name", "id_"), QUICK.items())
def test_a_fault_fails_where_the_sound_solver_passes(name, id_):
    fault = SEEDED[name]
    assert lv.study(fault.adapter, catalogue[id_]).verdict is Verdict.FAIL
    assert lv.study(SAMPLES[fault.sample], catalogue[id_]).verdict is Verdict.PASS


def test_harmless_ways_change_the_answer_by_round_off_or_by_the_error_of_the_method():
    shape = catalogue["plate-tensor-oblique-fixed"].problem
    for name in ("conductivity transposed", "nodes numbered backwards"):
        faulty = SEEDED[name].adapter.solve(shape, 8)
        sound = SAMPLES[SEEDED[name].sample].solve(shape, 8)
        order = [np.lexsort(answer.points.round(9).T) for answer in (faulty, sound)]
        np.testing.assert_allclose(faulty.values[order[0]], sound.values[order[1]], rtol=0, atol=1e-11)
