"""The rates of finite differences and finite volumes.

Notation: p formal order, s and d the exponents of solution and domain. The truncation error h^p r^(s-2-p)
leaves a local error h^p r^(s-p) for r > h, capped by h^s at the corner, and a pollution h^(s+min(d,p)) r^(-d)
carried by the dual corner function. Their maximum is O(h^s). At a fixed distance from the boundary only the
pollution is left: O(h^min(p, s+min(d,p))). Integrated over two dimensions (edges in space have codimension
two) the squares give O(h^min(p, s+min(d,p), s+1)) in L2 and the moduli O(h^min(p, s+min(d,p), s+2)) in L1.
Where the local terms tie, p = s + 2 in L1, the integral of h^p/r^2 brings a factor ln(1/h), whose local order
1/ln(1/h) is about 1/4 on affordable grids: that much less is expected; so it is where r^s log r caps the
maximum.

References
----------
Gerschgorin 1930, Z. angew. Math. Mech. 10, 373-382; Forsythe & Wasow 1960 (maximum norm, smooth solution).
Laasonen 1957, "On the degree of convergence of discrete approximations for the solutions of the Dirichlet
problem", and Bramble, Hubbard & Zlamal 1968, SIAM J. Numer. Anal. 5 (corners: s at the corner, 2 pi/opening
inside). Wasow 1957 and Bramble, Hubbard & Thomee 1969 (discontinuous data: order 2 inside). Eymard, Gallouet
& Herbin 2000, "Finite volume methods". All from memory, unchecked. The integration is derived here.
"""

from __future__ import annotations

from laplace_verify.measure.smoothness import (
    LOGARITHM,
    Method,
    Promise,
    Smoothness,
    declared_only,
    is_functional,
)

__all__ = ["finite_difference", "finite_volume"]

SMOOTH = "order {p:g} for smooth solutions by the discrete maximum principle (Gerschgorin 1930)"
CORNER = (
    "min(p, s) = {rate:.3g} in the maximum norm at a singularity r^{s:.3g} (Laasonen 1957; Bramble, "
    "Hubbard & Zlamal 1968)"
)
LOGARITHMIC = (
    "r^{s:g} log r caps the maximum norm at {s:g}, less {loss} for the logarithm, whatever p (Laasonen 1957)"
)
INSIDE = (
    "min(p, s + min(d, p)) = {rate:.3g} at a fixed distance from the boundary: pollution of a singularity "
    "r^{s:.3g} (Bramble, Hubbard & Zlamal 1968; jumps: Bramble, Hubbard & Thomee 1969)"
)
JUMP = "no rate in the maximum norm where boundary data jump (Wasow 1957)"
OPEN = "no rate is proven for this norm and this kind of method"


def finite_difference(norm: str, declared: float, method: Method, smoothness: Smoothness) -> Promise:
    """Return what holds on a grid, in the maximum norm and the integral norms."""
    p, s, d = declared, smoothness.solution, smoothness.domain
    if norm in ("H1-semi", "energy") or is_functional(norm):
        return declared_only(norm, p, smoothness)
    if smoothness.smooth:
        return Promise(p, norm in ("max", "L1", "L2"), SMOOTH.format(p=p))
    if method.clearance > 0 and norm in ("max", "L1", "L2"):
        rate = min(p, s + min(d, p))
        return Promise(rate, True, INSIDE.format(rate=rate, s=s))
    if norm == "max" or norm.startswith("trace:"):
        return _maximum(norm, p, smoothness)
    return _integrated(norm, p, s, d)


def finite_volume(norm: str, declared: float, method: Method, smoothness: Smoothness) -> Promise:
    """Return the grid rates; only integral norms at the method's own points decide."""
    expected, decides, basis = finite_difference(norm, declared, method, smoothness)
    if norm in ("L1", "L2") and decides:
        return Promise(
            expected, True, f"{basis}; discrete norms of cell averages (Eymard, Gallouet & Herbin 2000)"
        )
    shown = f"{basis}; shown, not proven for finite volumes" if expected is not None else basis
    return Promise(expected, False, shown)


def _maximum(norm: str, p: float, smoothness: Smoothness) -> Promise:
    """Return the rate of a grid method in the maximum norm at a singularity."""
    s = smoothness.solution
    if not s > 0:
        return Promise(None, False, JUMP)
    rate = smoothness.capped(p)
    if smoothness.logarithmic and rate < p:
        return Promise(rate, norm == "max", LOGARITHMIC.format(s=s, loss=LOGARITHM))
    return Promise(rate, norm == "max", CORNER.format(rate=rate, s=s))


def _integrated(norm: str, p: float, s: float, d: float) -> Promise:
    """Return the rate of a grid method in L1 or L2 at a corner (module docstring)."""
    if norm not in ("L1", "L2") or not s >= 0:
        return Promise(None, False, OPEN)
    local = s + (1.0 if norm == "L2" else 2.0)
    rate = min(p, s + min(d, p), local)
    basis = (
        f"min(p, s + min(d, p), s + {local - s:g}) = {rate:.3g} in {norm}: local error and pollution of a "
        f"singularity r^{s:.3g} (Laasonen 1957; Bramble, Hubbard & Zlamal 1968; integration derived here)"
    )
    if norm == "L1" and rate == p == local:
        return Promise(rate - LOGARITHM, True, f"{basis}; less {LOGARITHM} for a logarithm")
    return Promise(rate, True, basis)
