"""A reference value kept in a file: decimal digits with an error radius and its basis."""

from __future__ import annotations

from dataclasses import dataclass
from decimal import Decimal, InvalidOperation

from laplace_verify.errors import ProblemError, nearest_names

__all__ = ["BASES", "StoredNumber", "StoredValue"]

BASES = ("closed form", "tail bound", "maximum-principle bound", "confirmed")


@dataclass(frozen=True, slots=True, kw_only=True)
class StoredValue:
    """u and grad u at a point, as decimal strings: |true value - value| <= radius.

    The gradient has a radius of its own: near a corner it is large, and so is half a unit in its last digit.

    Attributes
    ----------
    point
        Coordinates as decimal strings, exact.
    value, gradient
        u and the components of grad u.
    radius
        Error radius of the value, >= 0.
    gradient_radius
        Error radius of every component of the gradient, >= 0; by default `radius`.
    basis
        "closed form", "tail bound" or "maximum-principle bound" (proven), or "confirmed" (by the
        agreement of two independent computations, not proven).
    place
        Where the point lies, in words such as "1e-3 of the extent from top".

    Raises
    ------
    ProblemError
        If a string is no decimal number, the gradient has not one component per coordinate, or the basis is
        unknown.

    Examples
    --------
    >>> StoredValue(point=("0.5",), value="0.25", gradient=("1",), radius="0", basis="closed form").value
    '0.25'
    """

    point: tuple[str, ...]
    value: str
    gradient: tuple[str, ...]
    radius: str
    basis: str
    gradient_radius: str = ""
    place: str = ""

    def __post_init__(self) -> None:
        """Check every string."""
        for name, texts in (("point", self.point), ("gradient", self.gradient)):
            if not isinstance(texts, tuple | list) or not texts:
                raise ProblemError(
                    f"{name} of a stored value must be a tuple of decimal strings, got {texts!r}"
                )
            object.__setattr__(self, name, tuple(_decimal(name, text) for text in texts))
        _decimal("value", self.value)
        if not self.gradient_radius:
            object.__setattr__(self, "gradient_radius", self.radius)
        for name in ("radius", "gradient_radius"):
            _check_radius(name, getattr(self, name))
        if len(self.point) != len(self.gradient):
            raise ProblemError(
                f"a stored value at {self.point} needs {len(self.point)} derivatives, got "
                f"{len(self.gradient)}"
            )
        _check_basis(self.basis)


@dataclass(frozen=True, slots=True, kw_only=True)
class StoredNumber:
    """A single number as a decimal string: |true number - value| <= radius.

    Attributes
    ----------
    value, radius
        The number and its error radius, >= 0.
    basis
        As of `StoredValue`.

    Raises
    ------
    ProblemError
        If a string is no decimal number or the basis is unknown.

    Examples
    --------
    >>> StoredNumber(value="0.69314718", radius="1e-8", basis="closed form").radius
    '1e-8'
    """

    value: str
    radius: str
    basis: str

    def __post_init__(self) -> None:
        """Check every string."""
        _decimal("value", self.value)
        _check_radius("radius", self.radius)
        _check_basis(self.basis)


def _check_radius(name: str, text: str) -> None:
    """Refuse what is no decimal >= 0."""
    if not Decimal(_decimal(name, text)) >= 0:
        raise ProblemError(f"{name} of a stored value must be >= 0, got {text!r}")


def _check_basis(basis: str) -> None:
    """Refuse a basis that is none of `BASES`."""
    if basis not in BASES:
        raise ProblemError(f"unknown basis {basis!r} of a stored value; {nearest_names(basis, BASES)}")


def _decimal(name: str, text: str) -> str:
    """Return the text if it is a finite decimal number."""
    try:
        if isinstance(text, str) and Decimal(text).is_finite():
            return text
    except InvalidOperation:
        pass
    raise ProblemError(f"{name} of a stored value must be a decimal in a string such as '0.25', got {text!r}")
