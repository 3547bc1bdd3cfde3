"""Grid convergence without an exact value: extrapolation from three grids of any ratio.

With phi_1, phi_2, phi_3 on the fine, medium and coarse grid, r21 = h2/h1, r32 = h3/h2, eps21 = phi_2 - phi_1
and eps32 = phi_3 - phi_2, the apparent order p solves

    p = | ln|eps32/eps21| + q(p) | / ln r21,   q(p) = ln[(r21^p - s)/(r32^p - s)],   s = sign(eps32/eps21),

phi_ext = (r21^p phi_1 - phi_2)/(r21^p - 1) and the index is 1.25 |(phi_1 - phi_2)/phi_1| / (r21^p - 1).

References
----------
Celik, Ghia, Roache, Freitas, Coleman & Raad 2008, "Procedure for estimation and reporting of uncertainty due
to discretization in CFD applications", J. Fluids Eng. 130, 078001. Roache 1994, J. Fluids Eng. 116, 405-413,
for the safety factor 1.25 with three grids.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal

import numpy as np
import numpy.typing as npt

from laplace_verify.errors import AnswerError

__all__ = ["GridConvergence", "grid_convergence"]

SAFETY = 1.25
LARGEST_ORDER = 40.0  # a larger apparent order says no more than "converged"
LARGEST_EXPONENT = 300.0  # keeps r^p far from overflow for grids of extreme ratio


@dataclass(frozen=True, slots=True, kw_only=True)
class GridConvergence:
    """The estimate from three grids.

    `order`, `extrapolated`, `index` and `extrapolated_error` are None where the three values give none
    (`behaviour` "divergent" or "converged"). `index`, `approximate_error` = |(phi_1 - phi_2)/phi_1| and
    `extrapolated_error` = |(phi_ext - phi_1)/phi_ext| are fractions, not percent. `coarse_index` is the index
    of the medium grid; coarse_index / (r21^order index), near 1 in the asymptotic range, is
    `asymptotic_ratio`.
    """

    extrapolated: float | None
    order: float | None
    index: float | None
    behaviour: Literal["monotone", "oscillatory", "divergent", "converged"]
    approximate_error: float | None
    extrapolated_error: float | None
    coarse_index: float | None
    asymptotic_ratio: float | None


def grid_convergence(values: npt.ArrayLike, h: npt.ArrayLike) -> GridConvergence:
    """Return the extrapolated value, apparent order and grid convergence index of three grids.

    Parameters
    ----------
    values : array_like, shape (3,)
        One number per grid, finest first.
    h : array_like, shape (3,)
        Representative spacings, finest (smallest) first; any ratios. Ratios are kept unrounded.

    Returns
    -------
    GridConvergence
        `behaviour` is "monotone", "oscillatory" (the differences change sign: the order is an estimate at
        best), "divergent" (the differences do not shrink with h: no order) or "converged" (the two finest
        agree to rounding: no order can be seen).

    Raises
    ------
    AnswerError
        If there are not three finite values or the spacings do not rise from the finest on.

    Notes
    -----
    It estimates a discretisation error without knowing the solution; it is no bound.

    References
    ----------
    Celik et al. 2008, J. Fluids Eng. 130, 078001, steps 3 to 5.

    Examples
    --------
    >>> found = grid_convergence([0.97050, 0.96854, 0.96178], [1, 2, 4])
    >>> round(found.order, 5), round(found.extrapolated, 5), found.behaviour
    (1.78617, 0.9713, 'monotone')
    """
    phi = np.asarray(values, dtype=np.float64)
    spacing = np.asarray(h, dtype=np.float64)
    if phi.shape != (3,) or not np.isfinite(phi).all():
        raise AnswerError(f"values must be three finite numbers, finest grid first, got {values!r}")
    if spacing.shape != (3,) or not (np.isfinite(spacing).all() and 0 < spacing[0] < spacing[1] < spacing[2]):
        raise AnswerError(f"h must be three spacings rising from the finest, got {h!r}")
    fine, medium, coarse = (float(v) for v in phi)
    r21, r32 = float(spacing[1] / spacing[0]), float(spacing[2] / spacing[1])
    eps21, eps32 = medium - fine, coarse - medium
    scale = float(np.max(np.abs(phi)))
    approximate = abs(eps21 / fine) if fine else None
    if abs(eps21) <= 4 * np.finfo(np.float64).eps * scale:
        return _without_order("converged", approximate, fine)
    order = _apparent_order(eps32 / eps21, r21, r32)
    if order is None:
        return _without_order("divergent", approximate, None)
    growth = r21**order
    extrapolated = (growth * fine - medium) / (growth - 1)
    index = None if approximate is None else SAFETY * approximate / (growth - 1)
    coarse_index = SAFETY * abs(eps32 / medium) / (r32**order - 1) if medium else None
    return GridConvergence(
        extrapolated=extrapolated,
        order=order,
        index=index,
        behaviour="monotone" if eps32 / eps21 > 0 else "oscillatory",
        approximate_error=approximate,
        extrapolated_error=abs((extrapolated - fine) / extrapolated) if extrapolated else None,
        coarse_index=coarse_index,
        asymptotic_ratio=coarse_index / (growth * index) if coarse_index is not None and index else None,
    )


def _without_order(
    behaviour: Literal["divergent", "converged"], approximate: float | None, extrapolated: float | None
) -> GridConvergence:
    """Return a result that names the behaviour and leaves the order open."""
    return GridConvergence(
        extrapolated=extrapolated, order=None, index=None, behaviour=behaviour, approximate_error=approximate,
        extrapolated_error=None, coarse_index=None, asymptotic_ratio=None,
    )  # fmt: skip


def _apparent_order(ratio: float, r21: float, r32: float) -> float | None:
    """Return the p > 0 with |eps32/eps21| = (r32^p - s) r21^p / (r21^p - s), or None if there is none.

    This is the fixed-point equation of the reference solved for the ratio. The right side rises with p, so
    bisection finds the only root; the fixed-point iteration of the paper can cycle for small p. For s = 1 the
    limit p -> 0 is ln r32/ln r21, for s = -1 it is 1: a smaller ratio is divergence.
    """
    sign = math.copysign(1.0, ratio)
    target = math.log(abs(ratio)) if ratio else -math.inf

    def excess(p: float) -> float:
        """Return the logarithm of the right side minus that of the left."""
        # expm1 keeps the digits of r^p - 1 as p -> 0
        top = math.expm1(p * math.log(r32)) if sign > 0 else r32**p + 1
        bottom = math.expm1(p * math.log(r21)) if sign > 0 else r21**p + 1
        return math.log(top) + p * math.log(r21) - math.log(bottom) - target

    low, high = 1e-6, min(LARGEST_ORDER, LARGEST_EXPONENT / math.log(r21 * r32))
    if not excess(low) < 0 < excess(high):
        return None
    while high - low > 1e-15 * high:
        middle = 0.5 * (low + high)
        if middle in (low, high):
            break
        low, high = (middle, high) if excess(middle) < 0 else (low, middle)
    return 0.5 * (low + high)
