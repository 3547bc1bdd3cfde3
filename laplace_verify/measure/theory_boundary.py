"""The rates of boundary elements: the potential inside, from a density on the boundary.

Notation: p declared order of the potential inside for smooth solutions, s the exponent of the solution, d and
c the exponents of the shape and of its complement. The density of a direct formulation is the flux of u
itself. That of an indirect one is the jump of the fluxes of u and of a solution outside, so that the corners
of the complement roughen it even where u is smooth: it behaves like r^(min(s, c) - 1). Evaluating the
potential at a fixed distance is testing the density with a smooth function; the dual density it is paired
with sees the corners from both sides, so Galerkin's method gives, by duality,

    min(p/2, s') + min(p/2, d, c),    s' = s (direct), min(s, d, c) (indirect),    at most p.

For collocation this gain is proven on smooth curves only; on polygons it is stable, but where solution or
density is singular nothing but convergence is promised without grading the elements. Where the flux itself is
smooth side by side (direct formulation, smooth u) the author's order is held against the method, but for what
re-entrant corners cost the dual density: its potential has the values of G(x, .), the solution with its pole
at the point x inside, which is smooth outside, so that the dual density sees the corners of the shape alone:

    min(p, p/2 + min(p/2, d)).

Next to the boundary and for traces no rate decides.

References
----------
Hsiao & Wendland 1981, "The Aubin-Nitsche lemma for integral equations", J. Integral Equations 3, 299-315
(duality). Costabel & Stephan 1985, "Boundary integral equations for mixed boundary value problems in
polygonal domains and Galerkin approximation", Banach Center Publ. 15, 175-251 (corners, both sides). Arnold &
Wendland 1983, Math. Comp. 41, 349-381, and Saranen & Wendland 1985, Math. Comp. 45, 91-108 (collocation on
smooth curves). Costabel & Stephan 1987, Math. Comp. 49, 461-478 (collocation on polygons). All from memory,
unchecked; the combination for indirect formulations and the dual density of direct ones are derived here.
"""

from __future__ import annotations

import math

from laplace_verify.measure.smoothness import Method, Promise, Smoothness
from laplace_verify.measure.theory_grids import OPEN

__all__ = ["boundary_element"]

SMOOTH = "declared order of the potential inside (Hsiao & Wendland 1981)"
NEAR = "quadrature next to the boundary may cost some in max unless a clearance is declared"
GALERKIN = (
    "min(p/2, {s:.3g}) + min(p/2, {dual:.3g}) = {rate:.3g} inside, {formulation} formulation: the density "
    "sees the corners {sides} (Costabel & Stephan 1985)"
)
REENTRANT = (
    "p/2 + {domain:.3g} = {rate:.3g} inside: the dual density sees the re-entrant corner "
    "(Hsiao & Wendland 1981)"
)
COLLOCATION = (
    "corners and no grading: convergence, but no rate is proven for {method} (Costabel & Stephan 1985)"
)


def boundary_element(norm: str, declared: float, method: Method, smoothness: Smoothness) -> Promise:
    """Return what holds for the potential inside; next to the boundary nothing is proven."""
    far = method.clearance > 0
    if norm not in ("max", "L2"):
        return Promise(None, False, OPEN)
    complement = smoothness.complement
    direct = method.formulation == "direct"
    cornerless = math.isinf(smoothness.domain) and complement is not None and math.isinf(complement)
    if smoothness.smooth and (cornerless or direct):
        rate = min(declared, declared / 2 + min(declared / 2, smoothness.domain))
        basis = SMOOTH if rate == declared else REENTRANT.format(domain=smoothness.domain, rate=rate)
        return Promise(rate, norm == "L2" or far, basis if far else f"{basis}; {NEAR}")
    if method.discretisation == "Galerkin" and method.formulation is not None and complement is not None:
        rate, basis = _galerkin(declared, direct, smoothness, complement)
        return Promise(rate, far, basis if far else f"{basis}; {NEAR}")
    if norm == "L2" or (far and smoothness.solution > 0):
        return Promise("decrease", True, COLLOCATION.format(method=method.discretisation or "this method"))
    return Promise(None, False, OPEN)


def _galerkin(p: float, direct: bool, smoothness: Smoothness, complement: float) -> tuple[float, str]:
    """Return rate and basis of a Galerkin method at a fixed distance from a boundary with corners."""
    dual = min(smoothness.domain, complement)
    s = smoothness.solution if direct else min(smoothness.solution, dual)
    rate = min(p, min(p / 2, s) + min(p / 2, dual))
    basis = GALERKIN.format(
        s=s, dual=dual, rate=rate, formulation="direct" if direct else "indirect",
        sides="of the shape" if direct else "of the shape and of its complement",
    )  # fmt: skip
    return rate, basis
