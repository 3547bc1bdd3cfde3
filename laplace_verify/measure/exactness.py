"""Harmonic polynomials that a scheme reproduces must come out to round-off at every size.

A solver that declares ``reproduces_degree = d`` promises exact values at its own points for the harmonic
polynomials of degree up to d. This sees wrong constants, quadrature weights, tags of boundary pieces and
corner nodes that no order shows, because it leaves no error of discretisation to hide in. It holds on flat
pieces and for one material, whatever the spacings and the ratio of the sides; elsewhere nothing is concluded.

Source: the patch test is the case d = 1 (Strang & Fix 1973, section 4.2; from memory, unchecked).
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from laplace_verify.measure.results import Level
from laplace_verify.measure.series import FLOOR_MARGIN, ROUND_OFF
from laplace_verify.measure.signs import Sign

if TYPE_CHECKING:
    from laplace_verify.measure.exact import Exact
    from laplace_verify.measure.norms import Measured
    from laplace_verify.problems import Case
    from laplace_verify.solvers import Adapter, Answer

__all__ = ["exactness_faults", "nodal_error", "promised_degree"]


def nodal_error(answer: Answer, exact: Exact, measured: Measured) -> float:
    """Return max |u_h - u| at the answer's own points over max |u|; of a callable, where it was sampled."""
    if answer.points is None or answer.values is None or answer.location != "point":
        return float(np.max(np.abs(measured.signed))) / measured.scale
    error = answer.values - exact.values(answer.points) - measured.shift
    return float(np.max(np.abs(error[np.isfinite(error)]), initial=0.0)) / measured.scale


def promised_degree(solver: Adapter, case: Case) -> int | None:
    """Return the degree of the case's polynomial if the solver promises to reproduce it, else None."""
    degree, problem = case.exact.degree, case.problem
    if solver.reproduces_degree is None or degree is None or degree > solver.reproduces_degree:
        return None
    flat = not any(piece.curved for piece in problem.pieces)
    return degree if flat and not problem.interfaces and problem.coordinates == "cartesian" else None


def exactness_faults(solver: Adapter, case: Case, levels: Sequence[Level]) -> list[Sign]:
    """Return a fault for the first size at which a promised polynomial is not exact to round-off."""
    degree = promised_degree(solver, case)
    if degree is None:
        return []
    allowed = FLOOR_MARGIN * max(solver.error_floor or 0.0, ROUND_OFF)
    for level in levels:
        if level.nodal is not None and not level.nodal <= allowed:
            text = (
                f"size {level.size}: a harmonic polynomial of degree {degree} is missed by {level.nodal:.1e} "
                f"of its size at the solver's own points; the solver declares reproduces_degree = "
                f"{solver.reproduces_degree}, so that only round-off ({allowed:.0e}) may be left: FAIL"
            )
            return [Sign(kind="inexact polynomial", text=text)]
    return []
