"""The rates of conforming finite elements of degree k = p - 1 on quasi-uniform meshes.

Notation: s and d the exponents of solution and domain. Best approximation gives O(h^min(k, s)) in the energy;
duality with the regularity of the domain adds min(1, d) in L2 and min(k, d) at a fixed distance from the
boundary, where the singularity acts through pollution only.

References
----------
Strang & Fix 1973, "An analysis of the finite element method"; Babuska 1970; Ciarlet 1978, "The finite element
method for elliptic problems". Nitsche & Schatz 1974, Math. Comp. 28, 937-958 (interior estimates). Apel,
Nicaise & Pfefferer 2016, "Discretization of the Poisson equation with non-smooth data", IMA J. Numer. Anal.
(jumps: L2 only). Rannacher & Scott 1982, Math. Comp. 38, 437-445 (gradients). All from memory, unchecked.
"""

from __future__ import annotations

from laplace_verify.measure.smoothness import Method, Promise, Smoothness, declared_only, is_functional
from laplace_verify.measure.theory_grids import OPEN

__all__ = ["finite_element"]

CEA = "min(k, s) = {rate:g} by best approximation (Cea; Strang & Fix 1973; Babuska 1970)"
NITSCHE = "{rate:g} = min(k, s) + min(1, d), at most k + 1, by duality (Aubin-Nitsche; Strang & Fix 1973)"
INSIDE = (
    "{rate:g} = min(k, s) + min(k, d), at most k + 1, at a fixed distance from the boundary (Nitsche & "
    "Schatz 1974)"
)
JUMP = "{rate:g} in L2 for data with jumps, up to a logarithm (Apel, Nicaise & Pfefferer 2016)"
NO_ENERGY = "a solution with jumping data has no finite energy, so theory promises no rate in {norm}"
GRADIENT = "{k:g}: the gradient converges uniformly on convex domains (Rannacher & Scott 1982)"


def finite_element(norm: str, declared: float | None, method: Method, smoothness: Smoothness) -> Promise:
    """Return what holds for conforming elements; their degree is one less than the order in L2."""
    p = method.formal("L2")
    if not isinstance(p, int | float):
        return Promise(None, False, "no formal order is declared in L2, from which the degree follows")
    k, s, d = float(p) - 1.0, smoothness.solution, smoothness.domain
    if norm in ("H1-semi", "energy"):
        if not s > 0:
            return Promise(None, False, NO_ENERGY.format(norm=norm))
        rate = smoothness.capped(k)
        return Promise(rate, True, CEA.format(rate=rate))
    if norm in ("L1", "L2") and s >= 0:
        rate = min(k + 1, min(k, s) + min(1.0, d))
        basis = (NITSCHE if s > 0 else JUMP).format(rate=rate)
        if method.clearance > 0 and s > 0:
            rate = min(k + 1, min(k, s) + min(k, d))
            basis = INSIDE.format(rate=rate)
        return Promise(rate, norm == "L2", basis if norm == "L2" else f"not below the L2 rate: {basis}")
    if norm == "max" and s > 0:
        return Promise(
            smoothness.capped(k + 1), False, "up to logarithms and on smooth meshes; shown, does not decide"
        )
    if norm.startswith("flux:") and smoothness.smooth and d > 1:
        return Promise(k, True, GRADIENT.format(k=k))
    if is_functional(norm) and declared is not None:
        return declared_only(norm, declared, smoothness)
    return Promise(None, False, OPEN)
