"""The observed order of a sequence of errors, between levels and by a fit with an interval.

Model: ln e_k = ln C + p ln h_k + delta_k, where delta is noise of standard deviation sigma plus next-order
terms D (h_k/h_0)^q with unknown D ~ N(0, sD^2). In logarithms this is a linear Gaussian model, whose best
linear estimate is generalised least squares with

    Sigma = sigma^2 I + sD^2 sum_q v_q v_q^T,   v_q = (h_k/h_0)^q,   q = 1, 2 and the expected order,
    (ln C, p) = (X^T Sigma^-1 X)^-1 X^T Sigma^-1 ln e,   X = [1, ln h],
    se = sqrt(cov_pp) sqrt(max(1, chi^2/(K - 2))).

The coarse levels, which are furthest from the asymptotic range, are thereby trusted least; q equal to the
expected order stands for a start at which the error is saturated.

References
----------
Aitken 1935, "On least squares and linear combination of observations", Proc. R. Soc. Edinburgh 55, 42-48
(generalised least squares; from memory, unchecked). The choice of Sigma is derived here.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
import numpy.typing as npt

from laplace_verify.arrays import Array
from laplace_verify.errors import AnswerError

__all__ = ["OrderFit", "fit_order", "line_order", "noise_level", "pair_orders"]

SATURATION = 0.5  # sD: relative size of the next-order terms on the coarsest level
NESTED_NOISE, USUAL_NOISE, UNRELATED_NOISE = 0.03, 0.05, 0.1


@dataclass(frozen=True, slots=True, kw_only=True)
class OrderFit:
    """A fitted order p, its standard error, C of e = C h^p, and the weights of p = weights . ln e."""

    order: float
    error: float
    constant: float
    chi2: float
    weights: tuple[float, ...]

    @property
    def low(self) -> float:
        """Two standard errors below the order."""
        return self.order - 2 * self.error

    @property
    def high(self) -> float:
        """Two standard errors above the order."""
        return self.order + 2 * self.error


def pair_orders(h: npt.ArrayLike, errors: npt.ArrayLike) -> list[float | None]:
    """Return ln(e_k/e_{k+1}) / ln(h_k/h_{k+1}) between neighbours, None where an error is 0 or missing.

    Parameters
    ----------
    h, errors : array_like, shape (K,)
        Spacings and errors, coarsest first; NaN marks a missing error.

    Returns
    -------
    list of float or None, length K - 1

    Examples
    --------
    >>> pair_orders([1.0, 0.5, 0.25], [0.4, 0.1, 0.025])
    [2.0, 2.0]
    """
    spacing, size = np.asarray(h, dtype=np.float64), np.asarray(errors, dtype=np.float64)
    found: list[float | None] = []
    for k in range(len(spacing) - 1):
        usable = size[k] > 0 and size[k + 1] > 0 and spacing[k] != spacing[k + 1]
        found.append(
            math.log(size[k] / size[k + 1]) / math.log(spacing[k] / spacing[k + 1]) if usable else None
        )
    return found


def line_order(h: Sequence[float], errors: Sequence[float | None], levels: int = 3) -> float | None:
    """Return the slope of the least-squares line of ln e over ln h through the last levels that have both.

    None with fewer than two such levels, or where one of the errors is 0.

    >>> round(line_order([1.0, 0.5, 0.25, 0.125], [9.0, 0.4, 0.1, 0.025]), 12)
    2.0
    """
    known = [(x, e) for x, e in zip(h, errors, strict=True) if e is not None and math.isfinite(x)][-levels:]
    if len(known) < 2 or not all(x > 0 and e > 0 for x, e in known):
        return None
    x, y = np.log(np.array(known)).T
    return float((x - x.mean()) @ y / ((x - x.mean()) @ (x - x.mean())))


def fit_order(
    h: npt.ArrayLike, errors: npt.ArrayLike, expected: float | None = None, noise: float = USUAL_NOISE
) -> OrderFit:
    """Return the order p of e = C h^p (1 + D h^q + ...) by generalised least squares.

    Parameters
    ----------
    h, errors : array_like, shape (K,)
        Spacings falling and positive errors, coarsest first, K >= 3; any refinement ratios.
    expected : float, optional
        The expected order, if there is one: the exponent of a saturated start.
    noise : float
        Relative scatter sigma of the errors: 0.03 for nested structured refinement, 0.05 by default, 0.1 for
        unrelated unstructured meshes.

    Raises
    ------
    AnswerError
        If there are fewer than three levels, an error is not positive, or the spacings do not fall.

    Examples
    --------
    >>> fit = fit_order([1/8, 1/16, 1/32, 1/64], [4e-2, 1e-2, 2.5e-3, 6.25e-4], expected=2.0)
    >>> round(fit.order, 6), round(fit.error, 2)
    (2.0, 0.11)
    """
    spacing, size = np.asarray(h, dtype=np.float64), np.asarray(errors, dtype=np.float64)
    _check_sequence(spacing, size)
    ratio = spacing / spacing[0]
    exponents = [1.0, 2.0] + ([expected] if expected is not None and expected > 0 else [])
    sigma = noise**2 * np.eye(len(ratio))
    for q in exponents:
        sigma += SATURATION**2 * np.outer(ratio**q, ratio**q)
    design = np.column_stack([np.ones_like(ratio), np.log(ratio)])  # ln(h/h0): well scaled; shifts C only
    inverse = np.linalg.inv(sigma)
    covariance = np.linalg.inv(design.T @ inverse @ design)
    gain: Array = covariance @ design.T @ inverse
    logs = np.log(size)
    level, order = gain @ logs
    misfit = logs - design @ np.array([level, order])
    chi2 = float(misfit @ inverse @ misfit)
    spread = math.sqrt(max(1.0, chi2 / (len(ratio) - 2)))
    return OrderFit(
        order=float(order),
        error=math.sqrt(covariance[1, 1]) * spread,
        constant=float(np.exp(min(level - order * math.log(spacing[0]), 700.0))),
        chi2=chi2,
        weights=tuple(float(w) for w in gain[1]),
    )


def noise_level(kind: str, sizes: Sequence[int], h: Sequence[float]) -> float:
    """Return the scatter to assume for a sequence of grids.

    0.03 for structured refinement: h follows 1/size within 2.5 %, or grids of finite differences or volumes
    are nested (every size a multiple of the one before). 0.1 if h does not follow 1/size within 5 % (meshes
    without relation), and for stochastic methods, whose errors are random themselves. 0.05 otherwise.

    >>> noise_level("finite difference", [8, 16, 32], [1/8, 1/16, 1/32])
    0.03
    >>> noise_level("finite element", [8, 16, 32], [0.13, 0.05, 0.03])
    0.1
    """
    if kind == "stochastic":
        return UNRELATED_NOISE
    if len(sizes) < 2:
        return USUAL_NOISE
    n, spacing = np.asarray(sizes, dtype=np.float64), np.asarray(h, dtype=np.float64)
    followed = (spacing[:-1] / spacing[1:]) / (n[1:] / n[:-1])
    # (n + 1)^d unknowns make the default h deviate from 1/n by up to 1/n: that is no scatter
    slack = 1.5 / n[:-1]
    if np.any(np.abs(followed - 1) > 0.05 + slack):
        return UNRELATED_NOISE
    if np.all(np.abs(followed - 1) <= 0.025):
        return NESTED_NOISE
    nested = all(fine % coarse == 0 for coarse, fine in pairwise(sizes))
    structured = kind in ("finite difference", "finite volume")
    return NESTED_NOISE if nested and structured else USUAL_NOISE


def _check_sequence(spacing: Array, size: Array) -> None:
    """Refuse a sequence to which no line can be fitted."""
    if spacing.ndim != 1 or spacing.shape != size.shape or len(spacing) < 3:
        raise AnswerError(
            f"h and errors must be sequences of the same length >= 3, got shapes {spacing.shape} and "
            f"{size.shape}"
        )
    if not (np.isfinite(spacing).all() and spacing[-1] > 0 and np.all(np.diff(spacing) < 0)):
        raise AnswerError(f"h must be positive and fall from level to level, got {spacing.tolist()}")
    if not (np.isfinite(size).all() and np.all(size > 0)):
        raise AnswerError(f"errors must be positive and finite, got {size.tolist()}")
