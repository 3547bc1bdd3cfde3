"""Multipoles against the charges they stand for."""

import numpy as np
import pytest

from laplace_verify.fields.charge_clusters import Cluster

CHARGES = np.array([0.5, -0.3, 0.2, 0.07])
OFFSETS = np.array([0.1, 0.05, -0.02, 0.0])
CENTRE = 0.7


def charges_at(points):
    """Potential and gradient of the charges, summed one by one."""
    apart = points[:, None] - np.stack([0 * OFFSETS, 0 * OFFSETS, CENTRE + OFFSETS], axis=1)
    distance = np.linalg.norm(apart, axis=2)
    gradient = -(CHARGES / distance**3)[:, :, None] * apart
    return (CHARGES / distance).sum(axis=1), gradient.sum(axis=1)


def points_around(count=200):
    rays = np.random.default_rng(5).normal(size=(count, 3))
    rays[0] = (0, 0, 1)
    rays *= (1 + np.logspace(-9, 2, count))[:, None] / np.linalg.norm(rays, axis=1)[:, None]
    return rays + np.array([0, 0, CENTRE])


def errors(cluster):
    points = points_around()
    dz, flat = points[:, 2], points[:, 0] ** 2 + points[:, 1] ** 2
    across, along = cluster.slopes(dz, flat)
    value, gradient = charges_at(points)
    slopes = np.stack([across * points[:, 0], across * points[:, 1], along], axis=1)
    return np.abs(cluster.value(dz, flat) - value).max(), np.abs(slopes - gradient).max()


def test_a_cluster_has_the_potential_and_gradient_of_its_charges():
    cluster = Cluster.of(CENTRE, CHARGES, OFFSETS, nearest=1.0)
    assert 10 < len(cluster.moments) < 25  # ratio 0.1
    assert max(errors(cluster)) <= 2e-15


@pytest.mark.parametrize("lost", [0, 1, 5, 9])
def test_every_moment_counts(lost):
    whole = Cluster.of(CENTRE, CHARGES, OFFSETS, nearest=1.0)
    moments = list(whole.moments)
    moments[lost] += 1e-13
    assert max(errors(Cluster(CENTRE, tuple(moments)))) > 2e-15
