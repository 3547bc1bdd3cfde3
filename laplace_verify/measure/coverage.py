"""Whether the errors of a stochastic answer lie within the standard errors that come with it.

With errors e_i and stated standard errors s_i at m points, R = sum e_i^2 / sum s_i^2 has the mean 1 if the
answer is unbiased and the s_i are right. Single quotients e_i/s_i are not used: where exits to some part of
the boundary are rare, few samples have a skew distribution and a variance that is not yet seen. How far R
strays from 1 depends on how far the points depend on one another, from chi^2 with m degrees of freedom over m
(independent) to chi^2 with one (the same walks for all). Beyond the quantile of the latter at a confidence of
99.9 % for the whole study the answer is biased or its standard errors are too small, however the points
depend: a fault. Beyond that of the former it is remarked.

Where errors are covered on every level, their order is that of the standard errors, sum e^2 = R sum s^2, with
next to no scatter. So a study whose few random errors leave the order open is settled by the stated ones.

References
----------
The chi-squared law of a sum of squared normal errors; Bonferroni's inequality over the levels: common
practice, no source.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np
from scipy.stats import chi2

from laplace_verify.measure.orders import line_order
from laplace_verify.measure.results import Coverage, Level, Order
from laplace_verify.measure.series import MINIMUM_LEVELS
from laplace_verify.measure.signs import Sign
from laplace_verify.measure.verdict import Verdict

if TYPE_CHECKING:
    from laplace_verify.measure.exact import Exact
    from laplace_verify.measure.norms import Measured
    from laplace_verify.solvers import Answer

__all__ = ["CONFIDENCE", "coverage_of", "judge_coverage", "settled_by_coverage"]

CONFIDENCE = 0.999
WIDTH = 2.0
TOO_LARGE = 0.1  # of R on every level: standard errors three times what they should be


def coverage_of(answer: Answer, exact: Exact, measured: Measured) -> Coverage | None:
    """Return how the errors of one answer compare with its standard errors; None if it states none."""
    if answer.standard_error is None:
        return None
    if answer.points is not None and answer.values is not None:
        errors = answer.values - exact.values(answer.points) - measured.shift
    else:
        errors = measured.signed
    stated = np.broadcast_to(np.asarray(answer.standard_error, dtype=np.float64), errors.shape)
    known = np.isfinite(errors) & (stated > 0)
    if not known.any():
        return None
    errors, stated = errors[known], stated[known]
    return Coverage(
        points=len(errors),
        ratio=float((errors**2).sum() / (stated**2).sum()),
        covered=float(np.mean(np.abs(errors) <= WIDTH * stated)),
        stated=float(np.sqrt(np.mean(stated**2))),
    )


def judge_coverage(levels: Sequence[Level]) -> tuple[list[Sign], list[Sign]]:
    """Return faults (each fails the study) and remarks from the levels that state standard errors."""
    stated = [(level.size, level.coverage) for level in levels if level.coverage is not None]
    faults, remarks = list[str](), list[str]()
    for size, found in stated:
        probability = (1 - CONFIDENCE) / len(stated)
        dependent = float(chi2.isf(probability, 1))
        independent = float(chi2.isf(probability, found.points)) / found.points
        said = (
            f"size {size}: squared errors are {found.ratio:.3g} times the squared standard errors and "
            f"{found.covered:.0%} of {found.points} points lie within two standard errors"
        )
        if not found.ratio <= dependent:
            faults.append(
                f"{said}; above {dependent:.3g} the answer is biased or its standard errors are too small, "
                f"at a confidence of {CONFIDENCE:.1%} over the study: FAIL"
            )
        elif found.ratio > independent:
            remarks.append(
                f"{said}; more than {independent:.3g} is a bias unless the points share their samples"
            )
    if stated and all(found.ratio < TOO_LARGE for _, found in stated):
        largest = max(found.ratio for _, found in stated)
        remarks.append(
            f"squared errors are at most {largest:.2g} times the squared standard errors, where 1 is "
            "expected: the standard errors are too large"
        )
    return _signs(faults), _signs(remarks)


def settled_by_coverage(orders: Mapping[str, Order], levels: Sequence[Level]) -> dict[str, Order]:
    """Return the orders, L2 settled where it is open and the errors are covered on four levels or more."""
    order, judged = orders.get("L2"), [level for level in levels if level.judged]
    sizes = [level.coverage.stated if level.coverage else None for level in judged]
    open_ = order is not None and order.decides and order.verdict is Verdict.INCONCLUSIVE
    if order is None or not open_ or len(judged) < MINIMUM_LEVELS or None in sizes:
        return dict(orders)
    if any(judge_coverage(levels)) or not isinstance(order.expected, float | int):
        return dict(orders)
    stated = line_order([level.h for level in judged], sizes)
    if stated is None or not stated >= order.expected - (order.tolerance or 0.0):
        return dict(orders)
    note = (
        f"L2: expected {order.expected:.3g}: PASS; the errors scatter too much to tell, but lie within the "
        f"standard errors on every level, and those fall at order {stated:.2f}"
    )
    return {**orders, "L2": replace(order, verdict=Verdict.PASS, finer=False, floor=None, note=note)}


def _signs(texts: Sequence[str]) -> list[Sign]:
    return [Sign(kind="wrong standard errors", text=text) for text in texts]
