"""Grid convergence without an exact value: extrapolation from grids of any ratio.

With phi_1, phi_2, phi_3 on the fine, medium and coarse grid, r21 = h2/h1, r32 = h3/h2, eps21 = phi_2 - phi_1
and eps32 = phi_3 - phi_2, the apparent order p solves

    p = | ln|eps32/eps21| + q(p) | / ln r21,   q(p) = ln[(r21^p - s)/(r32^p - s)],   s = sign(eps32/eps21),

phi_ext = (r21^p phi_1 - phi_2)/(r21^p - 1) and the index is Fs |(phi_1 - phi_2)/phi_1| / (r21^p - 1) with the
safety factor Fs = 1.25. Two grids give no order: with one that is assumed Fs = 3. Four or more grids are
fitted (`grid_fit`).

References
----------
Celik, Ghia, Roache, Freitas, Coleman & Raad 2008, "Procedure for estimation and reporting of uncertainty due
to discretization in CFD applications", J. Fluids Eng. 130, 078001. Roache 1994, J. Fluids Eng. 116, 405-413,
for the safety factors 1.25 with three grids and 3 with two.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Literal, TypeAlias

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array
from laplace_verify.errors import AnswerError
from laplace_verify.measure.grid_fit import fit_values
from laplace_verify.measure.grid_table import grid_table
from laplace_verify.measure.table import Format

__all__ = ["GridConvergence", "grid_convergence"]

SAFETY, SAFETY_OF_TWO = 1.25, 3.0
LARGEST_ORDER = 40.0  # a larger apparent order says no more than "converged"
LARGEST_EXPONENT = 300.0  # keeps r^p far from overflow for grids of extreme ratio

Behaviour: TypeAlias = Literal["monotone", "oscillatory", "divergent", "converged", "assumed order"]


@dataclass(frozen=True, slots=True, kw_only=True)
class GridConvergence:
    """The estimate from two, three or more grids, finest first.

    `order`, `extrapolated`, `index` and `extrapolated_error` are None where the values give none (`behaviour`
    "divergent" or "converged"). `index`, `approximate_error` = |(phi_1 - phi_2)/phi_1| and
    `extrapolated_error` = |(phi_ext - phi_1)/phi_ext| are fractions, not percent; `uncertainty` = index
    |phi_1| has the unit of phi. `coarse_index` is the index of the second grid; coarse_index / (r21^order
    index), near 1 in the asymptotic range, is `asymptotic_ratio` (three grids only). `deviation` is the
    standard deviation of the fit to four or more grids, in the unit of phi.
    """

    values: tuple[float, ...]
    h: tuple[float, ...]
    behaviour: Behaviour
    order: float | None = None
    extrapolated: float | None = None
    index: float | None = None
    uncertainty: float | None = None
    safety_factor: float | None = None
    approximate_error: float | None = None
    extrapolated_error: float | None = None
    coarse_index: float | None = None
    asymptotic_ratio: float | None = None
    deviation: float | None = None
    note: str = ""

    @property
    def ratios(self) -> tuple[float, ...]:
        """Refinement ratios r21 = h2/h1, r32 = h3/h2, ..."""
        return tuple(coarse / fine for fine, coarse in zip(self.h, self.h[1:], strict=False))

    def table(self, fmt: Format = "text", name: str = "phi", cells: tuple[float, ...] | None = None) -> str:
        """Return N, r21, r32, phi, p, phi_ext, e_a, e_ext and GCI as "text", "markdown" or "latex".

        Parameters
        ----------
        fmt : str
            "text", "markdown" or "latex" (booktabs).
        name : str
            What phi is.
        cells : tuple of float, optional
            Numbers of cells N, finest first; without them the spacings h are shown.

        Raises
        ------
        RecordError
            If `fmt` is unknown.
        """
        return grid_table(self, fmt, name, cells)


def grid_convergence(values: npt.ArrayLike, h: npt.ArrayLike, order: float | None = None) -> GridConvergence:
    """Return extrapolated value, apparent order and grid convergence index of two, three or more grids.

    Parameters
    ----------
    values : array_like, shape (K,)
        One number per grid, finest first, K >= 2.
    h : array_like, shape (K,)
        Representative spacings, finest (smallest) first; any ratios. Ratios are kept unrounded.
    order : float, optional
        The order to assume with two grids, which cannot show one; not allowed with more.

    Returns
    -------
    GridConvergence
        `behaviour` is "monotone", "oscillatory" (the differences change sign: the order is an estimate at
        best), "divergent" (the differences do not shrink with h: no order), "converged" (the finest values
        agree to rounding: no order can be seen) or, with two grids, "assumed order".

    Raises
    ------
    AnswerError
        If there are not two or more finite values, the spacings do not rise from the finest on, or `order` is
        missing for two grids, given for more, or not positive.

    Notes
    -----
    It estimates a discretisation error without knowing the solution; it is no bound.

    References
    ----------
    Celik et al. 2008, J. Fluids Eng. 130, 078001, steps 3 to 5; Roache 1994; for four or more grids see
    `laplace_verify.measure.grid_fit`.

    Examples
    --------
    >>> found = grid_convergence([0.97050, 0.96854, 0.96178], [1, 2, 4])
    >>> round(found.order, 5), round(found.extrapolated, 5), found.behaviour
    (1.78617, 0.9713, 'monotone')
    """
    phi, spacing = _checked(values, h)
    if (order is not None) != (len(phi) == 2):
        raise AnswerError(
            f"order must be given with two grids, which cannot show one, and only then; got {len(phi)} grids "
            f"and order={order!r}"
        )
    if order is not None and not 0 < order < LARGEST_ORDER:
        raise AnswerError(f"order must lie between 0 and {LARGEST_ORDER:g}, got {order!r}")
    if order is not None:
        return _two_grids(phi, spacing, float(order))
    if abs(phi[1] - phi[0]) <= 4 * np.finfo(np.float64).eps * float(np.max(np.abs(phi))):
        return _without_order("converged", phi, spacing, extrapolated=float(phi[0]))
    return _three_grids(phi, spacing) if len(phi) == 3 else _many_grids(phi, spacing)


def _checked(values: npt.ArrayLike, h: npt.ArrayLike) -> tuple[Array, Array]:
    """Return values and spacings as arrays, or say what is wrong with them."""
    phi = np.asarray(values, dtype=np.float64)
    spacing = np.asarray(h, dtype=np.float64)
    if phi.ndim != 1 or len(phi) < 2 or not np.isfinite(phi).all():
        raise AnswerError(f"values must be two or more finite numbers, finest grid first, got {values!r}")
    rising = spacing.shape == phi.shape and bool(np.isfinite(spacing).all() and spacing[0] > 0)
    if not (rising and np.all(np.diff(spacing) > 0)):
        raise AnswerError(f"h must be {len(phi)} spacings rising from the finest, got {h!r}")
    return phi, spacing


def _two_grids(phi: Array, h: Array, order: float) -> GridConvergence:
    """Return the index at an assumed order, with the safety factor 3."""
    fine, coarse = (float(v) for v in phi)
    growth = float(h[1] / h[0]) ** order
    extrapolated = fine + (fine - coarse) / (growth - 1)
    uncertainty = SAFETY_OF_TWO * abs(fine - coarse) / (growth - 1)
    return GridConvergence(
        values=(fine, coarse), h=tuple(h.tolist()), behaviour="assumed order", order=order,
        extrapolated=extrapolated, uncertainty=uncertainty, safety_factor=SAFETY_OF_TWO,
        index=_share(uncertainty, fine), approximate_error=_share(fine - coarse, fine),
        extrapolated_error=_share(extrapolated - fine, extrapolated),
    )  # fmt: skip


def _three_grids(phi: Array, h: Array) -> GridConvergence:
    """Return the estimate of Celik et al. 2008."""
    fine, medium, coarse = (float(v) for v in phi)
    r21, r32 = float(h[1] / h[0]), float(h[2] / h[1])
    eps21, eps32 = medium - fine, coarse - medium
    order = _apparent_order(eps32 / eps21, r21, r32)
    if order is None:
        return _without_order("divergent", phi, h)
    growth = r21**order
    extrapolated = (growth * fine - medium) / (growth - 1)
    uncertainty = SAFETY * abs(eps21) / (growth - 1)
    index = _share(uncertainty, fine)
    coarse_index = _share(SAFETY * eps32 / (r32**order - 1), medium)
    return GridConvergence(
        values=(fine, medium, coarse), h=tuple(h.tolist()),
        behaviour="monotone" if eps32 / eps21 > 0 else "oscillatory",
        order=order, extrapolated=extrapolated, index=index, uncertainty=uncertainty, safety_factor=SAFETY,
        approximate_error=_share(eps21, fine),
        extrapolated_error=_share(extrapolated - fine, extrapolated),
        coarse_index=coarse_index,
        asymptotic_ratio=coarse_index / (growth * index) if coarse_index is not None and index else None,
    )  # fmt: skip


def _many_grids(phi: Array, h: Array) -> GridConvergence:
    """Return the estimate of a least-squares fit to four or more grids."""
    fit = fit_values(phi, h)
    if fit is None:
        return _without_order("divergent", phi, h)
    fine = float(phi[0])
    return GridConvergence(
        values=tuple(phi.tolist()), h=tuple(h.tolist()), behaviour=fit.behaviour, order=fit.order,
        extrapolated=fit.limit, uncertainty=fit.uncertainty, safety_factor=fit.safety_factor,
        index=_share(fit.uncertainty, fine), approximate_error=_share(float(phi[1]) - fine, fine),
        extrapolated_error=_share(fit.limit - fine, fit.limit), deviation=fit.deviation, note=fit.words,
    )  # fmt: skip


def _share(part: float, whole: float) -> float | None:
    """Return |part/whole|, None of nothing."""
    return abs(part / whole) if whole else None


def _without_order(
    behaviour: Behaviour, phi: Array, h: Array, extrapolated: float | None = None
) -> GridConvergence:
    """Return a result that names the behaviour and leaves the order open."""
    fine = float(phi[0])
    return GridConvergence(
        values=tuple(phi.tolist()), h=tuple(h.tolist()), behaviour=behaviour, extrapolated=extrapolated,
        approximate_error=_share(float(phi[1]) - fine, fine),
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
