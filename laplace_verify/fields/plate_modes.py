"""Rectangle with data on one side given by their Fourier coefficients.

    f(s) = sum_{n >= 1} A_n sin(n pi s / a)                 zero neighbours
    f(s) = A_0 + sum_{n >= 1} A_n cos(n pi s / a)           insulated neighbours,   s from the lower end of
    the side

A finite list is summed completely; a rule comes with a bound of its decay, and the number of terms is what
the bound demands at the distance of the point from the side. A coefficient that breaks the bound is refused.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from functools import lru_cache
from typing import Any, TypeAlias

import numpy as np

from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields.exact import Exact, exact, show
from laplace_verify.fields.formula import Formula
from laplace_verify.fields.mode_sums import MOST_TERMS, Decay, mode_slopes, mode_value, side_angles
from laplace_verify.fields.plate import Plate
from laplace_verify.fields.singular import Basis
from laplace_verify.fields.specs import registered

__all__ = ["CoefficientRule", "PlateModes", "coefficient_rule", "modes"]

Rule: TypeAlias = tuple[Exact, ...] | str | Callable[[int], Number]
FIRST_LOOK = 32  # coefficients that tell the size of the series


@dataclass(frozen=True, slots=True, kw_only=True)
class CoefficientRule:
    """Coefficients |A_n| <= bound ratio^n n^-power; `coefficient_rule` and `modes` make them."""

    rule: Rule
    bound: Exact = 1
    ratio: Exact = 1
    power: Exact = 0

    def __post_init__(self) -> None:
        """Make numbers exact and read the formula once.

        Raises
        ------
        FieldError
            If a number is out of range, the list empty or the formula unreadable.
        """
        if isinstance(self.rule, str):
            _parsed(self.rule)
        elif not callable(self.rule):
            if not isinstance(self.rule, Iterable):
                raise FieldError(
                    f"coefficients must be a list, a formula in n or a function of n, got {self.rule!r}"
                )
            listed = tuple(exact(c, f"coefficients[{i}]") for i, c in enumerate(self.rule))
            if not 1 <= len(listed) <= MOST_TERMS:
                raise FieldError(
                    f"a list of coefficients must have 1 to {MOST_TERMS} entries, got {len(listed)}"
                )
            object.__setattr__(self, "rule", listed)
        for name in ("bound", "ratio", "power"):
            object.__setattr__(self, name, exact(getattr(self, name), name))
        if not self.bound > 0:
            raise FieldError(f"bound must be > 0, got {show(self.bound)}")
        if not 0 < self.ratio <= 1:
            raise FieldError(f"ratio must lie in (0, 1], got {show(self.ratio)}")
        if not 0 <= self.power <= 100:
            raise FieldError(f"power must lie in [0, 100], got {show(self.power)}")

    @property
    def listed(self) -> bool:
        """Whether the series is finite."""
        return isinstance(self.rule, tuple)


def coefficient_rule(
    rule: str | Callable[[int], Number], *, bound: Number = 1, ratio: Number = 1, power: Number = 0
) -> CoefficientRule:
    """Return data by a rule for their Fourier coefficients, |A_n| <= bound * ratio**n * n**-power for n >= 1.

    Parameters
    ----------
    rule : str or callable
        A formula in n, such as ``"2/(n*pi)"``, or a function of the whole number n that returns a number (a
        float counts with its exact binary value). Sines from n = 1; cosines from n = 0, A_0 being the mean.
    bound, ratio, power : numbers
        The decay, proven by whoever states it; it decides how many terms are summed.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> data = fields.coefficient_rule("(1/2)**n", ratio="1/2")
    >>> u = fields.rectangle_series((0, 0), (1, 1), data)
    >>> bool(abs(u.value([[0.5, 1.0]])[0] - 0.4) < 1e-15)  # sum of 2^-n sin(n pi/2) = 2/5
    True

    Raises
    ------
    FieldError
        If no decay is stated or a number is out of range.
    """
    result = CoefficientRule(rule=rule, bound=bound, ratio=ratio, power=power)  # type: ignore[arg-type]
    if not result.listed and result.ratio == 1 and result.power == 0:
        raise FieldError("state how the coefficients decay: ratio= below 1 or power= above 0")
    return result


def modes(coefficients: Iterable[Number]) -> CoefficientRule:
    """Return data that are a finite sum: A_1, A_2, ... of sines, or A_0, A_1, ... of cosines.

    >>> from laplace_verify import fields
    >>> u = fields.rectangle_series((0, 0), (1, 1), fields.modes([1]), side="bottom")
    >>> bool(abs(u.value([[0.5, 0.5]])[0] - 0.19926840766919334) < 1e-15)  # sinh(pi/2)/sinh(pi)
    True

    Raises
    ------
    FieldError
        If a coefficient is no finite number or there is none.
    """
    if isinstance(coefficients, str):
        raise FieldError(
            f"modes takes a list of numbers; for a formula use coefficient_rule, got {coefficients!r}"
        )
    return CoefficientRule(rule=tuple(coefficients))  # type: ignore[arg-type]  # made exact there


class ModeTable:
    """Coefficients of one context and their quotients by 1 - e^{-2kb}, computed as far as somebody asked."""

    def __init__(
        self, ctx: Any, listing: Callable[[range], Any], decay: Decay, slenderness: Any, mean: Any
    ) -> None:
        self.ctx, self.listing, self.slenderness, self.mean = ctx, listing, slenderness, mean
        self.known: dict[int, Any] = {}
        self.length = 0
        last = MOST_TERMS if decay.last is None else decay.last
        self.last = last
        size = max((abs(float(c)) for c in listing(range(1, min(FIRST_LOOK, last) + 1))), default=0.0)
        self.decay = Decay(
            bound=max(1.0, decay.bound / size) if size > 0 else 1.0,
            ratio=decay.ratio, power=decay.power, last=decay.last,
        )  # fmt: skip

    def upto(self, count: int, weight: int) -> Any:
        """Return n**weight A_n / (1 - e^{-2kb}) for n = 1 ... count."""
        if count > self.length:
            self.length = min(max(count, 2 * self.length), self.last)
            numbers = range(1, self.length + 1)
            listed = self.listing(numbers)
            if self.ctx is FLOAT:
                n = np.arange(1, self.length + 1, dtype=np.float64)
                divided = np.asarray(listed, dtype=np.float64) / -np.expm1(-n * self.slenderness)
                self.known = {0: divided, 1: n * divided}
            else:
                divided = [
                    -a / self.ctx.expm1(-n * self.slenderness) for n, a in zip(numbers, listed, strict=True)
                ]
                self.known = {0: divided, 1: [n * a for n, a in zip(numbers, divided, strict=True)]}
        return self.known[weight][:count]


def modes_solution(ctx: Any, plate: Plate, table: ModeTable, x: Any, d: Any, h: Any) -> Any:
    """Return the sum of all modes."""
    total = table.mean * plate.depth.linear(ctx, h)
    for near, far, _ in plate.depth.images(ctx, d, h):
        _, place = _place(ctx, plate, x, near, far)
        total = total + mode_value(ctx, plate.even, lambda n: table.upto(n, 0), table.decay, place)
    return total


def modes_slopes(ctx: Any, plate: Plate, table: ModeTable, x: Any, d: Any, h: Any) -> tuple[Any, Any]:
    """Return the derivatives of `modes_solution` along the side and in d."""
    along, depth = 0 * x, 0 * x
    for near, far, sign in plate.depth.images(ctx, d, h):
        gamma, place = _place(ctx, plate, x, near, far)
        slopes = mode_slopes(ctx, plate.even, lambda n: table.upto(n, 1), table.decay, place)
        along, depth = along + gamma * slopes[0], depth + sign * gamma * slopes[1]
    return along, depth + table.mean * plate.depth.slope(ctx)


def _place(ctx: Any, plate: Plate, x: Any, d: Any, h: Any) -> tuple[Any, tuple[Any, Any, Any, Any]]:
    """Return pi / a and the place that the mode sums take."""
    start, stop = plate.ends
    gamma = ctx.pi / ctx.number(stop - start)
    return gamma, (gamma * d, *side_angles(ctx, gamma, x, plate.ends), 2 * gamma * h)


def slenderness(ctx: Any, plate: Plate) -> Any:
    """Return 2 pi b / a, b the depth of the rectangle with zero opposite."""
    start, stop = plate.ends
    return 2 * ctx.pi * ctx.number(plate.depth.width / (stop - start))


@registered("rectangle-modes")
@dataclass(frozen=True, slots=True, kw_only=True)
class PlateModes(Plate):
    """Data by Fourier coefficients; `rectangle_series` makes one."""

    rule: Rule
    bound: Exact = 1
    ratio: Exact = 1
    power: Exact = 0

    def __post_init__(self) -> None:
        """Check the rule."""
        Plate.__post_init__(self)
        checked = CoefficientRule(rule=self.rule, bound=self.bound, ratio=self.ratio, power=self.power)
        for name in ("rule", "bound", "ratio", "power"):
            object.__setattr__(self, name, getattr(checked, name))

    @property
    def basis(self) -> Basis:
        """Closed form for a finite list, else tail bound."""
        return "closed form" if isinstance(self.rule, tuple) else "tail bound"

    def _data_text(self) -> str:
        kind = "cosine" if self.even else "sine"
        if isinstance(self.rule, tuple):
            return f"{kind} coefficients {', '.join(show(c) for c in self.rule[:4])}" + ", ..." * (
                len(self.rule) > 4
            )
        return f"{kind} coefficients {self.rule if isinstance(self.rule, str) else self.rule.__name__}"

    def _solve(self, ctx: Any, x: Any, d: Any, h: Any) -> Any:
        return modes_solution(ctx, self, _table(ctx, self), x, d, h)

    def _slopes(self, ctx: Any, x: Any, d: Any, h: Any) -> tuple[Any, Any]:
        return modes_slopes(ctx, self, _table(ctx, self), x, d, h)


@lru_cache(maxsize=64)
def _table(ctx: Any, plate: PlateModes) -> ModeTable:
    """Return the coefficients of a plate in one context."""
    rule, first = plate.rule, 0 if plate.even else 1
    last = None
    if isinstance(rule, tuple):
        last = max(len(rule) - 1 + first, 1)

    def listing(numbers: range) -> Any:
        return _checked(plate, _coefficients(ctx, rule, first, numbers), numbers)

    mean = _coefficients(ctx, rule, first, range(1))[0] if plate.even else ctx.number(0)
    decay = Decay(bound=float(plate.bound), ratio=float(plate.ratio), power=float(plate.power), last=last)
    return ModeTable(ctx, listing, decay, slenderness(ctx, plate), mean)


def _coefficients(ctx: Any, rule: Rule, first: int, numbers: range) -> Any:
    """Return A_n for the given n; `first` is the n of the first entry of a list."""
    if isinstance(rule, tuple):
        return [ctx.number(rule[n - first]) if 0 <= n - first < len(rule) else ctx.number(0) for n in numbers]
    if callable(rule):
        return [ctx.number(exact(rule(n), f"coefficient A_{n}")) for n in numbers]
    formula = _parsed(rule)
    if ctx is FLOAT:
        with np.errstate(all="ignore"):
            values = formula.value(ctx, {"n": np.array(numbers, dtype=np.float64)})
        return np.broadcast_to(np.asarray(values, dtype=np.float64), (len(numbers),))
    try:
        return [ctx.convert(formula.value(ctx, {"n": ctx.mpf(n)})) for n in numbers]
    except (ZeroDivisionError, ValueError) as cause:
        raise FieldError(f"coefficient rule {rule!r} has no value for an n in {numbers}: {cause}") from cause


def _checked(plate: PlateModes, listed: Any, numbers: range) -> Any:
    """Return the coefficients if they keep to their bound."""
    if isinstance(plate.rule, tuple):
        return listed
    n = np.array(numbers, dtype=np.float64)
    sizes = np.array([abs(float(a)) for a in listed])
    allowed = float(plate.bound) * float(plate.ratio) ** n * n ** -float(plate.power) * (1 + 1e-9) + 1e-300
    broken = np.flatnonzero(~(sizes <= allowed))
    if broken.size:
        k = broken[0]
        raise FieldError(
            f"coefficient A_{numbers[k]} has size {sizes[k]:.6g}, above the stated bound "
            f"{show(plate.bound)} * {show(plate.ratio)}**n * n**-{show(plate.power)} = {allowed[k]:.6g}: "
            "state a larger bound or a slower decay"
        )
    return listed


@lru_cache(maxsize=256)
def _parsed(text: str) -> Formula:
    """Return the formula of a rule, read once."""
    return Formula.parse(text, names=("n",))
