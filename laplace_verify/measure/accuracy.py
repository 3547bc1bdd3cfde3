"""What an order does not see: a large error constant, and gradients that stay wrong under right values.

*Error constant.* Interpolating the exact solution at the nodes of the solver's own mesh leaves an error of
the order of the method with a constant that depends on the mesh alone. A sound method stays within a small
multiple of it where solution and shape are smooth enough (Cea's lemma and its duals for elements, the
discrete maximum principle for differences; the sample solvers stay below 4 on every such case of the
catalogue). A wrong weight or penalty can keep the order and cost far more.

*Nodes.* An answer is measured as its user evaluates it, between nodes too. Where the nodes converge a whole
order faster than that, the shape functions of the cells are the limit, not the scheme.

*Gradients.* If the values converge, so do gradients of any consistent recovery; one that does not has a wrong
scale or sign.

*Precision.* Values that are all numbers of 32 bits, where those of the exact solution are not, were rounded
to single precision, which an error of discretisation hides.

All are remarks: no theorem gives the constants.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np

from laplace_verify.arrays import Array, BoolArray
from laplace_verify.measure.norms import weighted_norm
from laplace_verify.measure.orders import line_order
from laplace_verify.measure.results import Level
from laplace_verify.measure.series import differences
from laplace_verify.measure.signs import Sign

if TYPE_CHECKING:
    from laplace_verify.measure.exact import Exact
    from laplace_verify.measure.smoothness import Smoothness
    from laplace_verify.solvers import Answer

__all__ = ["accuracy_remarks", "interpolation_error", "precision_remarks"]

FACTOR = 10.0
FELL, STAYED = 0.3, 0.7  # last over first: what has clearly converged, what has not at all
FASTER = 0.8
FEWEST = 16  # values of 32 bits that are no chance: of doubles one in 2^29 is
LEAST = 1e-3  # relative error of a gradient below which a stall is put down to precision
EXACT = 1e-12  # of max |u|: interpolation that leaves no more is exact


def interpolation_error(answer: Answer, exact: Exact) -> float | None:
    """Return the L2 error of interpolating u at the answer's nodes by the shape functions of its cells.

    None for answers without cells or with values of cells, and where u has no value at a node.
    """
    mesh = answer.mesh
    if mesh is None or answer.location != "point":
        return None
    nodal = exact.values(mesh.nodes)
    if not np.isfinite(nodal).all():
        return None
    degree = max(block.element.degree for block in mesh.blocks)
    samples = mesh.quadrature(2 * degree + 2, nodal)
    error = samples.values - exact.values(samples.points)
    known = np.isfinite(error)
    found = weighted_norm(samples.weights[known], error[known])
    size = float(np.max(np.abs(nodal), initial=0.0)) * float(np.sqrt(samples.weights.sum()))
    return found if found > EXACT * size else None


def accuracy_remarks(levels: Sequence[Level], smoothness: Smoothness) -> list[Sign]:
    """Return remarks on the error constant of the finest level and on gradients that do not converge."""
    judged = [level for level in levels if level.judged]
    if not judged:
        return []
    return [*_constant(judged[-1], smoothness), *_between(judged), *_gradients(judged, smoothness)]


def precision_remarks(answer: Answer, exact: Exact) -> list[Sign]:
    """Remark nodal values of 32 bits where most of the exact ones need more."""
    if answer.points is None or answer.values is None or answer.location != "point":
        return []
    known = exact.values(answer.points)
    short = np.isfinite(known) & ~_of_single_precision(known)
    if np.count_nonzero(short) < FEWEST or not _of_single_precision(answer.values[short]).all():
        return []
    text = "the values handed back are numbers of single precision (32 bits): an array is stored in it"
    return [Sign(kind="single-precision values", text=text)]


def _of_single_precision(values: Array) -> BoolArray:
    """Return which values are numbers of 32 bits."""
    with np.errstate(over="ignore"):  # beyond the largest of them it is none
        same: BoolArray = values.astype(np.float32).astype(np.float64) == values
    return same


def _constant(level: Level, smoothness: Smoothness) -> list[Sign]:
    """Remark an error far above that of interpolation, where no singularity explains it."""
    error, best = level.errors.get("L2"), level.interpolation
    if error is None or best is None or not smoothness.smooth or smoothness.domain < 1:
        return []
    if not error > FACTOR * best:
        return []
    text = (
        f"size {level.size}: the L2 error {error:.2e} is {error / best:.0f} times that of interpolating the "
        f"exact solution on the same mesh (sound samples stay below {FACTOR:g}): the order may hold and yet "
        "a weight, a penalty or a boundary closure cost accuracy"
    )
    return [Sign(kind="large error constant", text=text)]


def _between(levels: Sequence[Level]) -> list[Sign]:
    """Remark values at nodes that converge an order faster than values between them."""
    spacing = [level.h for level in levels]
    nodes = line_order(spacing, [level.nodal for level in levels])
    overall = line_order(spacing, [level.errors.get("L2") for level in levels])
    if nodes is None or overall is None or levels[-1].interpolation is None or nodes < overall + FASTER:
        return []
    text = (
        f"at the solver's own points the error falls at order {nodes:.1f}, between them (L2) at "
        f"{overall:.1f}: the shape functions of the cells limit it; hand back cells of a higher degree, or "
        "points without cells"
    )
    return [Sign(kind="limited between nodes", text=text)]


def _gradients(levels: Sequence[Level], smoothness: Smoothness) -> list[Sign]:
    """Remark gradient norms that stay while the values converge."""
    first, last = levels[0], levels[-1]
    value = [level.errors.get("L2", level.errors.get("max")) for level in (first, last)]
    if len(levels) < 3 or smoothness.solution < 1.0 or None in value:
        return []
    if not (value[1] or 0.0) <= FELL * (value[0] or 0.0):
        return []
    stuck = [
        norm for norm, error in last.errors.items()
        if differences(norm) and norm in first.errors and error > STAYED * first.errors[norm]
        and last.relative[norm] > LEAST
    ]  # fmt: skip
    if not stuck:
        return []
    text = (
        f"the values converge but {', '.join(stuck)} does not: look at scale and sign of the gradients or "
        "fluxes handed back"
    )
    return [Sign(kind="stuck gradients", text=text)]
