"""Rectangle with data on one side, zero or insulated elsewhere: Fourier series, never summed naively.

Four ways of giving the data f, all with the same boundary value problem

    f on one side,   u = 0 or d_n u = 0 on both neighbours,   u = 0 or d_n u = 0 on the opposite side:

polynomial pieces (exact sums by polylogarithms, `plate_strip` and `plate_row`), a rule for the Fourier
coefficients with a bound of their decay (`plate_modes`), an exponential (`plate_exponential`), or a smooth
function (`plate_smooth`).

References
----------
Carslaw & Jaeger (1959), Conduction of heat in solids, 2nd ed., ch. V, for the series (from memory,
unchecked); the sums in closed form are derived in the modules named.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from typing import Any

from laplace_verify.contexts import Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.exact import NUMERAL, exact_point
from laplace_verify.fields.piecewise import Piecewise, level
from laplace_verify.fields.plate import Plate, side_ends
from laplace_verify.fields.plate_exponential import Exponential, PlateExponential
from laplace_verify.fields.plate_modes import CoefficientRule, PlateModes
from laplace_verify.fields.plate_pieces import PlatePieces
from laplace_verify.fields.plate_smooth import PlateSmooth

__all__ = ["rectangle_series"]


def rectangle_series(
    lower: Iterable[Number],
    upper: Iterable[Number],
    data: Piecewise | Exponential | CoefficientRule | Number | str | Callable[[Any], Any],
    neighbours: str = "zero",
    side: str = "top",
    far: str = "zero",
) -> Plate:
    """Return the harmonic u in a rectangle with `data` on one side, zero or insulation on the other three.

    Parameters
    ----------
    lower, upper : pairs of numbers
        Opposite corners; decimals in strings are exact.
    data : data, number, formula string or callable
        Values on `side`: `piecewise`, `ramp`, `step`, `tent`, `parabola` or a number (closed form);
        `exponential` (a short series with a proven tail);
        `coefficient_rule` or `modes` (Fourier coefficients); a formula string or a function of the coordinate
        along the side, x on top and bottom, y on left and right, smooth on the closed side (coefficients by
        fast Fourier transform, basis "uncertified").
    neighbours : "zero" or "insulated"
        u = 0 or d_n u = 0 on the two sides next to it.
    side : "left", "right", "bottom" or "top"
        Where the data are.
    far : "zero" or "insulated"
        u = 0 or d_n u = 0 on the opposite side.

    Returns
    -------
    Field
        u on the closed rectangle, equal to the data on the side. u scales like the data, the gradient like
        data per length.

    Notes
    -----
    Singular points are declared where the odd (zero neighbours) or even (insulated) continuation of the data
    jumps: exponent 0 and kind "jump" for the data themselves, where u has no value; exponent p and kind
    "power" for the p-th derivative, where u behaves like r^p log r (p = 1: infinite gradient). For a
    coefficient rule nothing is declared; with algebraic decay points very near the side may need more terms
    than the bound allows and are refused.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> u = fields.rectangle_series((0, 0), (1, 1), 1)
    >>> bool(abs(u.value([[0.5, 0.5]])[0] - 0.25) < 1e-15)  # four rotations add up to 1
    True
    >>> pool = fields.rectangle_series((0, 0), (4, 1), fields.ramp(0, 1), neighbours="insulated")
    >>> pool.value([[2.0, 1.0], [0.5, 0.0]]).tolist()
    [0.5, 0.0]

    Raises
    ------
    FieldError
        If the corners, the words or the data are not as described.
    """
    lower, upper = exact_point(lower, "lower", (2,)), exact_point(upper, "upper", (2,))
    common: dict[str, Any] = {
        "lower": lower, "upper": upper, "side": side, "neighbours": neighbours, "far": far,
    }  # fmt: skip
    if isinstance(data, CoefficientRule):
        return PlateModes(**common, rule=data.rule, bound=data.bound, ratio=data.ratio, power=data.power)
    if isinstance(data, Exponential):
        return PlateExponential(**common, rate=data.rate, height=data.height)
    if isinstance(data, Piecewise):
        ends = side_ends(lower, upper, side)
        if not ends[0] < ends[1]:
            raise FieldError(f"lower must lie below and left of upper, got {lower} and {upper}")
        breaks, rows = data.on(*ends)
        return PlatePieces(**common, breaks=breaks, coefficients=rows)
    if callable(data) or (isinstance(data, str) and not NUMERAL.fullmatch(data)):
        return PlateSmooth(**common, data=data)
    return rectangle_series(lower, upper, level(data, "data"), neighbours, side, far)
