"""Units as text: enough algebra to write W/(m K) times K times m as W."""

from __future__ import annotations

import re
from dataclasses import dataclass

from laplace_verify.errors import ProblemError

__all__ = ["Units", "exponents", "unit_product"]

FACTOR = re.compile(r"([^\s*/·^()0-9.,+-]+)(?:\^?(-?\d+))?")


@dataclass(frozen=True, slots=True, kw_only=True)
class Units:
    """Units of a dimensional twin; "" where there is none.

    Attributes
    ----------
    length, value, conductivity
        Of coordinates, of u, and of K.
    """

    length: str = ""
    value: str = ""
    conductivity: str = ""

    def of(self, kind: str, dim: int) -> str:
        """Return the unit of a kind of quantity, see `exponents`.

        >>> metric = Units(length="m", value="K", conductivity="W/(m K)")
        >>> metric.of("flux", 3), metric.of("resistance", 3), metric.of("torsion constant", 2)
        ('W', 'K/W', 'm^4')
        """
        conductivity, value, length = exponents(kind, dim)
        return unit_product((self.conductivity, conductivity), (self.value, value), (self.length, length))


def exponents(kind: str, dim: int) -> tuple[int, int, int]:
    """Return how a kind of quantity scales with conductivity, value and length in `dim` dimensions of space.

    >>> exponents("energy", 3), exponents("capacitance", 2)
    ((1, 2, 1), (1, 0, 0))
    """
    return {
        "value": (0, 1, 0),
        "flux": (1, 1, dim - 2),
        "flux density": (1, 1, -1),
        "energy": (1, 2, dim - 2),
        "conductance": (1, 0, dim - 2),
        "capacitance": (1, 0, dim - 2),
        "resistance": (-1, 0, 2 - dim),
        "shape factor": (0, 0, dim - 2),
        "torsion constant": (0, 0, 4),
        "added mass": (1, 0, dim),
        "uplift": (0, 1, dim - 1),
        "discharge": (1, 1, dim - 2),
        "exit gradient": (0, 1, -1),
    }[kind]


def unit_product(*factors: tuple[str, int]) -> str:
    """Return the product of units raised to whole powers, simplified.

    >>> unit_product(("W/(m K)", 1), ("K", 1), ("m", 0))
    'W/m'
    >>> unit_product(("", 1), ("m", -2))
    '1/m^2'

    Raises
    ------
    ProblemError
        If a unit cannot be read.
    """
    powers: dict[str, int] = {}
    for unit, power in factors:
        for name, exponent in _read(unit).items():
            powers[name] = powers.get(name, 0) + exponent * power
    above = [_text(name, p) for name, p in powers.items() if p > 0]
    below = [_text(name, -p) for name, p in powers.items() if p < 0]
    if not below:
        return " ".join(above)
    under = below[0] if len(below) == 1 else f"({' '.join(below)})"
    return f"{' '.join(above) or '1'}/{under}"


def _text(name: str, power: int) -> str:
    return name if power == 1 else f"{name}^{power}"


def _read(unit: str) -> dict[str, int]:
    """Return the exponents of a unit such as "W/(m K)" or "kg m^2/s^3"."""
    over, _, under = unit.partition("/")
    if "/" in under:
        raise ProblemError(f"unit {unit!r} has two fraction bars; write kg/(m s)")
    powers: dict[str, int] = {}
    for part, sign in ((over, 1), (under, -1)):
        text = part.strip()
        if text == "1" or not text:
            continue
        if text.startswith("(") and text.endswith(")"):
            text = text[1:-1]
        if FACTOR.sub("", text).strip(" *·"):
            raise ProblemError(f"unit {unit!r} cannot be read; write it like W/(m K) or m^2/s")
        for name, exponent in FACTOR.findall(text):
            powers[name] = powers.get(name, 0) + sign * int(exponent or 1)
    return powers
