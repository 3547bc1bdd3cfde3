"""The order theory lets us expect: the formal order after the regularity of solution and domain.

The rules are kept by kind of method, each with its theorems: `theory_grids`, `theory_elements`,
`theory_boundary`, `theory_other`, and `interfaces` for jumps of the conductivity. An order decides only where
a theorem proves it for the norm; elsewhere it is None or shown without deciding.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from laplace_verify.measure.interfaces import at_interface
from laplace_verify.measure.results import Rate
from laplace_verify.measure.smoothness import Method, Promise, Smoothness
from laplace_verify.measure.theory_boundary import boundary_element
from laplace_verify.measure.theory_elements import finite_element
from laplace_verify.measure.theory_grids import finite_difference, finite_volume
from laplace_verify.measure.theory_other import exponential, other, stochastic

__all__ = ["Expectation", "expected_order", "smallest_loss"]

NO_DEGREE = "no formal order is declared for this norm"
QUANTITY = "no rate is proven for this quantity, but it is finite and converges with the solution"
PROBE = "read off between nodes, so its error need not fall evenly: shown, does not decide"

GRIDLIKE: dict[str, Callable[[str, float, Method, Smoothness], Promise]] = {
    "finite difference": finite_difference,
    "finite volume": finite_volume,
    "boundary element": boundary_element,
    "spectral": other,  # of algebraic order; the exponential ones have their own rule
    "other": other,
}


@dataclass(frozen=True, slots=True, kw_only=True)
class Expectation:
    """What is expected in one norm, fixed before the run, and the theorem behind it (`basis`).

    `claimed` means that the author of the solver expects it, not theory.
    """

    norm: str
    formal: float | str | None
    expected: Rate
    decides: bool
    basis: str
    claimed: bool = False


def smallest_loss(expected: float) -> float:
    """Return the loss of order that a verdict is built to see: half the expected order, from 1/2 to 1.

    A first-order boundary closure in a second-order scheme (loss 1) and a method that stops converging
    where order 1/2 is expected (loss 1/2) are both caught. The tolerance is half of it.

    >>> smallest_loss(2.0), smallest_loss(2/3)
    (1.0, 0.5)
    """
    return min(1.0, max(expected / 2, 0.5))


def expected_order(method: Method, norm: str, smoothness: Smoothness) -> Expectation:
    """Return the expected order of a method in `norm`.

    Parameters
    ----------
    method : Method
        Kind, declared orders, and what else theory depends on.
    norm : str
        A norm of the study, such as "max" or "flux:top".
    smoothness : Smoothness
        The exponents of the case.

    Examples
    --------
    >>> corner = Smoothness(solution=2/3, domain=2/3)
    >>> found = expected_order(Method(kind="finite element", formal=lambda norm: 2), "L2", corner)
    >>> round(found.expected, 4), found.decides
    (1.3333, True)
    """
    declared = method.formal(norm)
    if norm.startswith("probe:"):
        return Expectation(norm=norm, formal=declared, expected=None, decides=False, basis=PROBE)
    promise = _promise(method, norm, declared, smoothness)
    if smoothness.interface and promise.expected is not None:
        promise = at_interface(method.kind, norm, promise, smoothness.interface)
    if norm.startswith("quantity:") and not promise.decides and method.kind != "stochastic":
        promise = Promise("decrease", True, QUANTITY)
    return Expectation(
        norm=norm, formal=declared, expected=promise.expected, decides=promise.decides, basis=promise.basis
    )


def _promise(method: Method, norm: str, declared: float | str | None, smoothness: Smoothness) -> Promise:
    """Return what theory promises in a shape of one material."""
    if declared == "exponential":
        return exponential(norm, smoothness)
    if method.kind == "stochastic":
        return stochastic(norm)
    number = float(declared) if isinstance(declared, int | float) else None
    if method.kind == "finite element":
        return finite_element(norm, number, method, smoothness)
    if number is None:
        return Promise(None, False, NO_DEGREE)
    return GRIDLIKE[method.kind](norm, number, method, smoothness)
