"""The errors of one norm, level by level, sorted into those that can be judged and those that cannot."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from laplace_verify.measure.results import Level

__all__ = ["MINIMUM_LEVELS", "ROUND_OFF", "TOO_COARSE", "Series", "differences", "series_of"]

MINIMUM_LEVELS = 4  # with fewer levels the error rates of the verdict are unpublished: no PASS
TOO_COARSE = "too coarse to be judged"  # how the note of a level above half the smallest length begins
ROUND_OFF = 1e-12  # relative floor of a direct solution in double precision; a declared floor overrides it
GRADIENT_FACTOR = 100.0  # differencing loses about 1/h of it
FLOOR_MARGIN = 10.0  # below ten floors the floor bends the slope


@dataclass(frozen=True, slots=True, kw_only=True)
class Series:
    """Sizes, spacings, errors and relative errors of the levels that count, coarsest first.

    `above` of them lie above ten times the floor (from the first to the last that does), the rest is at the
    floor. `exact` means that every level measured, judged or not, is at the floor. `left_out` maps sizes to
    reasons.
    """

    norm: str
    sizes: list[int]
    h: list[float]
    errors: list[float]
    relative: list[float]
    above: int
    exact: bool
    left_out: dict[str, str]

    @property
    def at_floor(self) -> int:
        """How many of the finest levels sit at the floor."""
        return len(self.sizes) - self.above


def differences(norm: str) -> bool:
    """Return whether a norm is one of the gradient, in which rounding is divided by h."""
    return norm in ("H1-semi", "energy") or norm.startswith(("flux:", "fluxdensity:"))


def series_of(norm: str, levels: Sequence[Level], error_floor: float | None) -> Series:
    """Return the errors in `norm` of the judged levels.

    Parameters
    ----------
    norm : str
        The norm.
    levels : sequence of Level
        All levels, coarsest first.
    error_floor : float, optional
        The relative error below which the author expects no convergence; default 1e-12 (1e-10 for gradients).
        Levels below ten times the floor are at the floor.
    """
    floor = max(error_floor or 0.0, ROUND_OFF)
    if differences(norm):
        floor *= GRADIENT_FACTOR if not error_floor else 1.0
    threshold = FLOOR_MARGIN * floor
    measured = [level for level in levels if norm in level.errors]
    exact = bool(measured) and all(level.relative[norm] <= threshold for level in measured)
    left_out = {str(level.size): level.note for level in measured if not level.judged}
    kept = [level for level in measured if level.judged]
    above = max((k + 1 for k, level in enumerate(kept) if not level.relative[norm] <= threshold), default=0)
    if not exact:
        for level in kept[above:]:
            left_out[str(level.size)] = f"error at the floor (relative error below {threshold:.0e})"
    return Series(
        norm=norm,
        sizes=[level.size for level in kept],
        h=[level.h for level in kept],
        errors=[level.errors[norm] for level in kept],
        relative=[level.relative[norm] for level in kept],
        above=above,
        exact=exact,
        left_out=left_out,
    )
