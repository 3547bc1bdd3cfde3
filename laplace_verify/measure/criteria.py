"""Acceptance criteria, fixed before the solver runs: norms, expected orders, which of them decide."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import replace
from typing import TYPE_CHECKING

from laplace_verify.measure.expected import Expectation, expected_order
from laplace_verify.measure.functionals import probes
from laplace_verify.measure.smoothness import Method, Smoothness
from laplace_verify.problems.regularity import complement_exponent

if TYPE_CHECKING:
    from laplace_verify.problems import Case
    from laplace_verify.solvers import Adapter

__all__ = ["LEVEL", "expectations", "for_computed", "norms_of", "smoothness_of"]

LEVEL = "quantity:level"
IN_SPACE = (
    "as in the plane with norms of space: the axis is no corner, edges of rotation count as plane corners "
    "(Mercier & Raugel 1982, RAIRO Anal. Numer. 16, 405-461; from memory, unchecked)"
)
COMPUTED = "computed from the answer, not reported: it converges with u_h and grad u_h, at no proven rate"
INTERIOR = ("max", "L1", "L2", "H1-semi", "energy")


def norms_of(case: Case) -> list[str]:
    """Return every norm that may be measured on a case."""
    names = list(INTERIOR)
    for head in ("trace", "flux", "fluxdensity"):
        names += [f"{head}:{piece.name}" for piece in case.problem.pieces if piece.has_data]
    names += [f"quantity:{name}" for name in case.quantities]
    if case.problem.constant is not None:
        names.append(LEVEL)
    return names + [f"probe:{k}" for k in range(len(probes(case)))]


def expectations(solver: Adapter, case: Case) -> dict[str, Expectation]:
    """Return norm -> Expectation for a solver on a case: theory's, or what the author claims instead.

    The level of a pure Neumann answer decides only if the solver declares that it fixes the constant; its
    order is then that of the L2 error.
    """
    method = Method(
        kind=solver.kind, formal=solver.formal_order, clearance=solver.clearance,
        formulation=solver.formulation, discretisation=solver.discretisation,
    )  # fmt: skip
    smoothness = smoothness_of(case)
    found = {norm: expected_order(method, norm, smoothness) for norm in norms_of(case)}
    if case.problem.coordinates != "cartesian":
        found = {norm: replace(e, basis=f"{e.basis}; {IN_SPACE}") for norm, e in found.items()}
    if found["H1-semi"].decides and isinstance(case.problem.conductivity, float):
        basis = "a multiple of H1-semi where the conductivity is a number: shown, does not decide"
        found["energy"] = replace(found["energy"], decides=False, basis=basis)
    for norm in found:
        claim = solver.expected.get(norm, solver.expected.get(norm.partition(":")[0]))
        if claim is not None:
            rate, reason = claim
            basis = f"claimed by the author of the solver: {reason}"
            found[norm] = replace(found[norm], expected=rate, decides=True, basis=basis, claimed=True)
    if LEVEL in found:
        found[LEVEL] = _level(found["L2"], fixes=solver.fixes_constant)
    return found


def smoothness_of(case: Case) -> Smoothness:
    """Return the exponents of a case, those of the other side of its boundary too."""
    regularity, problem = case.regularity, case.problem
    return Smoothness(
        solution=regularity.solution,
        domain=regularity.domain,
        complement=complement_exponent(problem.shape, {piece.name: piece.kind for piece in problem.pieces}),
        interface=regularity.interface,
    )


def for_computed(criteria: Mapping[str, Expectation], computed: Iterable[str]) -> dict[str, Expectation]:
    """Return the criteria with those of quantities that the solver did not report: the error must decrease.

    They are computed here from its answer, by differences and quadrature whose rate is no property of the
    method. What the author claims stays.
    """
    changed = {
        norm: replace(criteria[norm], expected="decrease", decides=True, basis=COMPUTED)
        for norm in computed
        if norm in criteria and not criteria[norm].claimed and criteria[norm].expected is not None
    }
    return {**criteria, **changed}


def _level(volume: Expectation, *, fixes: bool) -> Expectation:
    """Return what is expected of the level of a pure Neumann answer."""
    if not fixes:
        basis = "the solver does not declare that it fixes the constant: shown, does not decide"
        return replace(volume, norm=LEVEL, expected=None, decides=False, basis=basis, claimed=False)
    return replace(
        volume, norm=LEVEL, basis=f"the mean of the error is bounded by its L2 norm: {volume.basis}"
    )
