"""Spheres (circles, pairs of ends) that fit inside a shape and the balls in them, with points and weights.

The mean is taken by the trapezoidal rule with 64 points on circles and by 8 Gauss points times 16 on
spheres, which is exact for harmonic polynomials of degree 15 and less; over the radius of a ball by 3 Gauss
points for the weight r^(d-1).
"""

from __future__ import annotations

import numpy as np
from scipy.special import roots_jacobi

from laplace_verify.arrays import Array
from laplace_verify.principles.law import Trial

__all__ = ["ball", "sphere", "spheres_inside"]

ON_CIRCLE = 64
GAUSS, AROUND = 8, 16
SHELLS = 3
DRAWN_CENTRES, CENTRES = 64, 8
SHARE = 0.6  # of the distance to the boundary


def sphere(centre: Array, radius: float) -> tuple[Array, Array]:
    """Return points (m, d) on the sphere (circle, pair of ends) and weights (m,) with sum one.

    >>> import numpy as np
    >>> points, weights = sphere(np.array([1.0, 0.0]), 2.0)
    >>> round(float(weights @ points[:, 0] ** 2), 12)  # 1 + 2^2 / 2
    3.0
    """
    dim = len(centre)
    if dim == 1:
        return centre + radius * np.array([[-1.0], [1.0]]), np.array([0.5, 0.5])
    if dim == 2:
        angle = 2.0 * np.pi * np.arange(ON_CIRCLE) / ON_CIRCLE
        ring = np.stack([np.cos(angle), np.sin(angle)], axis=1)
        return centre + radius * ring, np.full(ON_CIRCLE, 1.0 / ON_CIRCLE)
    z, weights = np.polynomial.legendre.leggauss(GAUSS)
    angle = 2.0 * np.pi * np.arange(AROUND) / AROUND
    level, turn = (part.ravel() for part in np.meshgrid(z, angle, indexing="ij"))
    across = np.sqrt(1.0 - level**2)
    unit = np.stack([across * np.cos(turn), across * np.sin(turn), level], axis=1)
    return centre + radius * unit, np.repeat(weights / (2.0 * AROUND), AROUND)


def ball(centre: Array, radius: float) -> tuple[Array, Array]:
    """Return points (m, d) in the ball (disc, segment) and weights (m,) with sum one.

    >>> import numpy as np
    >>> points, weights = ball(np.array([1.0, 0.0]), 2.0)
    >>> round(float(weights @ points[:, 0] ** 2), 12)  # 1 + 2^2 / 4
    2.0
    """
    nodes, shares = roots_jacobi(SHELLS, 0.0, len(centre) - 1.0)
    shells = [sphere(centre, radius * (1.0 + node) / 2.0) for node in nodes.tolist()]
    weights = [share * part for share, (_, part) in zip(shares / shares.sum(), shells, strict=True)]
    return np.concatenate([points for points, _ in shells]), np.concatenate(weights)


def spheres_inside(trial: Trial) -> tuple[Array, Array, Array, Array]:
    """Return eight spheres that fit inside, away from the declared clearance.

    They are about the deepest of 64 seeded points; the radius is 0.6 of the distance to the boundary.

    Returns
    -------
    centres (m, d), radii (m,), points (m k, d) on one sphere after the other, weights (m, k)
    """
    shape = trial.problem.shape
    drawn = shape.sample(DRAWN_CENTRES, seed=trial.seed)
    depth = shape.distance(drawn)
    chosen = np.argsort(-depth, kind="stable")[:CENTRES]
    centres = drawn[chosen]
    radii = SHARE * np.maximum(depth[chosen] - trial.solver.clearance * shape.extent, 0.0)
    spheres = [sphere(centre, radius) for centre, radius in zip(centres, radii.tolist(), strict=True)]
    return centres, radii, np.concatenate([p for p, _ in spheres]), np.array([w for _, w in spheres])
