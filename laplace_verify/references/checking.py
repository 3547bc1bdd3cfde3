"""Are the stored digits those of the exact field? They are recomputed, in more digits than are stored."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass

import mpmath

from laplace_verify.errors import ProblemError
from laplace_verify.problems import Case, StoredValue
from laplace_verify.references.stored import StoredReference

__all__ = ["CheckedValue", "check_reference"]


@dataclass(frozen=True, slots=True, kw_only=True)
class CheckedValue:
    """One stored value against its recomputation.

    Attributes
    ----------
    point
        Where.
    difference, gradient_difference
        Difference of u, and the largest of the components of grad u.
    radius, gradient_radius
        The stored radii plus those of the recomputation: what the differences may be.
    agrees
        Whether they are no more than that; False for NaN.
    """

    point: tuple[str, ...]
    difference: mpmath.mpf
    radius: mpmath.mpf
    gradient_difference: mpmath.mpf
    gradient_radius: mpmath.mpf
    agrees: bool


def check_reference(case: Case, stored: StoredReference | Iterable[StoredValue]) -> list[CheckedValue]:
    """Recompute stored values of a case and compare them within their radii.

    Parameters
    ----------
    case
        The case whose exact field is evaluated.
    stored
        What `load_reference` returns, or single values.

    Returns
    -------
    list of CheckedValue
        One for each stored point, in order.

    Raises
    ------
    ProblemError
        If the stored values belong to another case.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> from laplace_verify.geometry import Disc
    >>> from laplace_verify.problems import case
    >>> pool = case(Disc((0, 0), 1), {}, fields.polynomial(2))
    >>> wrong = StoredValue(point=("0.5", "0.1"), value="0.2401", gradient=("1", "-0.2"), radius="1e-9",
    ...                     basis="closed form")
    >>> check_reference(pool, [wrong])[0].agrees
    False
    """
    if isinstance(stored, StoredReference):
        if stored.case_id != case.id:
            raise ProblemError(f"these are the values of {stored.case_id!r}, the case is {case.id!r}")
        stored = stored.values
    return [_checked(case, value) for value in stored]


def _checked(case: Case, stored: StoredValue) -> CheckedValue:
    """Compare one stored value."""
    digits = max(len(text) for text in (stored.value, *stored.gradient)) + 10
    digits = min(digits, case.exact.most_digits)
    value, open_, _ = case.exact.enclosure(stored.point, digits=digits)
    gradient = case.exact.gradient_at(stored.point, digits=digits)
    with mpmath.workdps(digits + 15):
        largest = max(abs(g) for g in gradient)
        radius = mpmath.mpf(stored.radius) + 2 * open_
        sloped = mpmath.mpf(stored.gradient_radius) + largest * mpmath.mpf(10) ** -digits
        off = abs(mpmath.mpf(stored.value) - value)
        bent = [abs(mpmath.mpf(text) - g) for text, g in zip(stored.gradient, gradient, strict=True)]
        agrees = bool(off <= radius) and all(bool(b <= sloped) for b in bent)
        return CheckedValue(
            point=stored.point,
            difference=off,
            radius=radius,
            gradient_difference=max(bent),
            gradient_radius=sloped,
            agrees=agrees,
        )
