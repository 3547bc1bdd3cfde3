"""The order to expect where the conductivity jumps across interfaces.

A solution of div(K grad u) = 0 with K constant per region is smooth on each side of an interface and has a
kink on it. What is proven:

*Grid lines or element edges on the interface.* Box methods and conservative differences whose faces carry
the harmonic mean (or whose cells lie on one side each) keep their order (Samarskii 1971, "Introduction to
the theory of difference schemes", chapter III: homogeneous schemes; Ewing, Iliev & Lazarov 2001, SIAM J.
Sci. Comput. 23); so do elements whose edges follow a straight interface, because best approximation is taken
region by region (Babuska 1970, Computing 5, 207-213; up to a logarithm in L2 for curved ones and linear
elements, Chen & Zou 1998, Numer. Math. 79, 175-202). All from memory, unchecked.

*Elements that the interface cuts.* Only O(h^(1/2)) in the energy and O(h) in L2 is left (Babuska 1970).

*Grids that the interface cuts.* The kink leaves an error of O(h) in the flux of the cut cells; no rate is
promised here.

So the declared order is held against a solver where all interfaces are planes along the axes, which a grid
can follow: to declare conductivity={"regions"} with an order is to say that it does. For oblique and curved
interfaces only what holds without alignment decides.
"""

from __future__ import annotations

from laplace_verify.measure.smoothness import Promise

__all__ = ["at_interface"]

ALIGNED = (
    "{basis}; with an interface only for grid lines or element edges that follow it (Samarskii 1971; "
    "Babuska 1970)"
)
CUT_ELEMENTS = (
    "{rate:g} in {norm} even for elements cut by the interface (Babuska 1970); fitted ones do better"
)
CUT_GRID = "interface off the axes: convergence, but no rate unless the grid follows it"
CUT_OTHER = "interface off the axes: the rate hangs on whether the grid follows it; shown, does not decide"
CUT_RATES = {"L2": 1.0, "H1-semi": 0.5, "energy": 0.5}


def at_interface(kind: str, norm: str, promise: Promise, interface: str) -> Promise:
    """Return what is promised with an interface, from what holds without.

    Parameters
    ----------
    kind, norm
        Kind of the method, and the norm.
    promise
        What holds for a solution of the same exponents in a homogeneous shape.
    interface
        "aligned", "oblique" or "curved".

    Examples
    --------
    >>> at_interface("finite element", "L2", Promise(2.0, True, ""), "curved")[:2]
    (1.0, True)
    >>> at_interface("finite difference", "max", Promise(2.0, True, ""), "aligned")[:2]
    (2.0, True)
    """
    expected, decides, basis = promise
    if kind == "stochastic":
        return promise
    if interface == "aligned":
        return Promise(expected, decides, ALIGNED.format(basis=basis))
    if kind == "finite element" and norm in CUT_RATES and decides and isinstance(expected, int | float):
        rate = min(float(expected), CUT_RATES[norm])
        return Promise(rate, True, CUT_ELEMENTS.format(rate=rate, norm=norm))
    if norm == "L2" and decides:
        return Promise("decrease", True, CUT_GRID)
    return Promise(None, False, CUT_OTHER)
