"""Poisson's formula for the disc: u from its values on the rim, summed or integrated in closed form.

With z = (x + i y - centre) / radius,

    data a_0 + sum a_n cos(n theta) + b_n sin(n theta):   u = Re F(z),  F = a_0 + sum (a_n - i b_n) z^n,

by Horner's scheme; the gradient is u_x = Re F', u_y = -Im F'. Constant values on arcs are in `disc_arcs`. A
smooth function of theta is replaced by its trigonometric polynomial through 32, 64, ... equidistant samples,
doubled until the last quarter of the coefficients is lost in rounding.

References
----------
Axler, Bourdon & Ramey (2001), Harmonic function theory, ch. 1 (from memory, unchecked).
"""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from functools import lru_cache
from typing import Any

import numpy as np

from laplace_verify.contexts import FLOAT, Number
from laplace_verify.errors import FieldError
from laplace_verify.fields._samples import converged, sampled
from laplace_verify.fields.base import Field
from laplace_verify.fields.disc import DiscField
from laplace_verify.fields.disc_arcs import Arcs, DiscArcs
from laplace_verify.fields.exact import NUMERAL, Exact, exact, show
from laplace_verify.fields.polylog import horner
from laplace_verify.fields.singular import Basis
from laplace_verify.fields.specs import registered

__all__ = ["DiscFourier", "DiscSmooth", "Fourier", "fourier", "poisson_disc"]

MOST = 4096  # coefficients of a list
FLOAT_SAMPLES = 16384
PRECISE_SAMPLES = 1024


@dataclass(frozen=True, slots=True, kw_only=True)
class Fourier:
    """Data a_0 + sum a_n cos(n theta) + b_n sin(n theta); `fourier` makes them."""

    cosines: tuple[Exact, ...]
    sines: tuple[Exact, ...]

    def __post_init__(self) -> None:
        """Make the coefficients exact.

        Raises
        ------
        FieldError
            If there are none, too many, or one is no finite number.
        """
        for name in ("cosines", "sines"):
            given = getattr(self, name)
            if isinstance(given, str) or not isinstance(given, Iterable):
                raise FieldError(f"{name} must be a list of numbers, got {given!r}")
            listed = tuple(exact(c, f"{name}[{i}]") for i, c in enumerate(given))
            if len(listed) > MOST:
                raise FieldError(f"{name} may have {MOST} entries, got {len(listed)}")
            object.__setattr__(self, name, listed)
        if not self.cosines and not self.sines:
            raise FieldError("Fourier data need at least one coefficient, got none")


def fourier(cosines: Iterable[Number] = (), sines: Iterable[Number] = ()) -> Fourier:
    """Return data cosines[0] + sum_{n >= 1} cosines[n] cos(n theta) + sines[n-1] sin(n theta).

    >>> from laplace_verify import fields
    >>> u = fields.poisson_disc((0, 0), 2, fields.fourier((1, 0, 4), (0, 0, 8)))  # 1 + x^2 - y^2 + Im z^3
    >>> u.value([[1.0, 0.0], [0.0, 1.0], [1.0, 1.0]]).tolist()
    [2.0, -1.0, 3.0]

    Raises
    ------
    FieldError
        If there is no coefficient or one is no finite number.
    """
    return Fourier(cosines=cosines, sines=sines)  # type: ignore[arg-type]  # made exact there


@registered("disc-fourier")
@dataclass(frozen=True, slots=True, kw_only=True)
class DiscFourier(DiscField):
    """Finite Fourier data on the rim; `poisson_disc` makes one."""

    cosines: tuple[Exact, ...]
    sines: tuple[Exact, ...]

    def __post_init__(self) -> None:
        """Check disc and coefficients."""
        DiscField.__post_init__(self)
        checked = Fourier(cosines=self.cosines, sines=self.sines)
        object.__setattr__(self, "cosines", checked.cosines)
        object.__setattr__(self, "sines", checked.sines)

    @property
    def degree(self) -> int:
        """Of the harmonic polynomial that u is."""
        last = max((n for n, c in enumerate(self.cosines) if c), default=0)
        return max(last, max((n for n, c in enumerate(self.sines, start=1) if c), default=0))

    def conjugate(self) -> Field:
        """Return Im F, whose data are a_n sin(n theta) - b_n cos(n theta)."""
        cosines = (0, *(-c for c in self.sines))
        return DiscFourier(centre=self.centre, radius=self.radius, cosines=cosines, sines=self.cosines[1:])

    def _data_text(self) -> str:
        terms = [(c, f"cos {n} theta" if n else "") for n, c in enumerate(self.cosines) if c]
        terms += [(c, f"sin {n} theta") for n, c in enumerate(self.sines, start=1) if c]
        shown = " + ".join(f"{show(c)} {name}".strip() for c, name in terms[:4]) or "0"
        return shown + (" + ..." if len(terms) > 4 else "")

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        return _value(ctx, _numbers(ctx, self.cosines, self.sines), self._scaled(ctx, x))

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002  # no cut
        return _gradient(
            ctx, _numbers(ctx, self.cosines, self.sines), self._scaled(ctx, x), ctx.number(self.radius)
        )


@registered("disc-smooth")
@dataclass(frozen=True, slots=True, kw_only=True)
class DiscSmooth(DiscField):
    """A smooth function of theta on the rim; `poisson_disc` makes one."""

    data: str | Callable[[Any], Any]

    def __post_init__(self) -> None:
        """Sample the data once, so that bad ones are refused early."""
        DiscField.__post_init__(self)
        if not isinstance(self.data, str) and not callable(self.data):
            raise FieldError(f"data must be a formula or a function, got {type(self.data).__name__}")
        _transformed(FLOAT, self.data)

    @property
    def basis(self) -> Basis:
        """Uncertified: the function is known at its samples only."""
        return "uncertified"

    def _data_text(self) -> str:
        return self.data if isinstance(self.data, str) else f"{getattr(self.data, '__name__', 'f')}(theta)"

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # no cut
        return _value(ctx, _transformed(ctx, self.data), self._scaled(ctx, x))

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002  # no cut
        return _gradient(ctx, _transformed(ctx, self.data), self._scaled(ctx, x), ctx.number(self.radius))


def poisson_disc(
    centre: Iterable[Number], radius: Number, data: Fourier | Arcs | Number | str | Callable[[Any], Any]
) -> DiscField:
    """Return the harmonic u in a disc with `data` on its rim.

    Parameters
    ----------
    centre : pair of numbers
    radius : number > 0
    data : data, number, formula string or callable
        `fourier` (a finite sum, closed form), `arcs` (constant values on arcs, closed form), a number, or a
        formula in theta or a function of theta in radians, counter-clockwise from the x axis, smooth and of
        period 2 pi (basis "uncertified").

    Returns
    -------
    Field
        u on the closed disc, equal to the data on the rim. u scales like the data, the gradient like data per
        length.

    Notes
    -----
    Ends of arcs where the value changes are declared as singular points of kind "jump"; u has no value there.

    Examples
    --------
    >>> from laplace_verify import fields
    >>> u = fields.poisson_disc((0, 0), 1, "exp(cos(theta))*cos(sin(theta))")  # Re exp(z)
    >>> bool(abs(u.value([[0.5, 0.0]])[0] - 1.6487212707001282) < 1e-15)
    True

    Raises
    ------
    FieldError
        If the disc or the data are not as described.
    """
    common: dict[str, Any] = {"centre": centre, "radius": radius}
    if isinstance(data, Arcs):
        return DiscArcs(**common, turns=data.turns, values=data.values)
    if isinstance(data, Fourier):
        return DiscFourier(**common, cosines=data.cosines, sines=data.sines)
    if callable(data) or (isinstance(data, str) and not NUMERAL.fullmatch(data)):
        return DiscSmooth(**common, data=data)
    return DiscFourier(**common, cosines=(exact(data, "data"),), sines=())


def _value(ctx: Any, coefficients: list[Any], z: tuple[Any, Any]) -> Any:
    """Return Re F."""
    return horner(coefficients, z[0] + 1j * z[1] if ctx is FLOAT else ctx.mpc(*z)).real


def _gradient(ctx: Any, coefficients: list[Any], z: tuple[Any, Any], radius: Any) -> tuple[Any, Any]:
    """Return Re F' and -Im F', per length."""
    weighted = [n * c for n, c in enumerate(coefficients)][1:] or [0 * coefficients[0]]
    slope = horner(weighted, z[0] + 1j * z[1] if ctx is FLOAT else ctx.mpc(*z))
    return slope.real / radius, -slope.imag / radius


@lru_cache(maxsize=128)
def _numbers(ctx: Any, cosines: tuple[Exact, ...], sines: tuple[Exact, ...]) -> list[Any]:
    """Return a_n - i b_n, n = 0, 1, ..."""
    count = max(len(cosines), len(sines) + 1)
    real = [*cosines, *[0] * (count - len(cosines))]
    imaginary = [0, *sines, *[0] * (count - 1 - len(sines))]
    pairs = zip(real, imaginary, strict=True)
    if ctx is FLOAT:
        return [complex(ctx.number(a), -ctx.number(b)) for a, b in pairs]
    return [ctx.mpc(ctx.number(a), -ctx.number(b)) for a, b in pairs]


@lru_cache(maxsize=128)
def _transformed(ctx: Any, data: str | Callable[[Any], Any]) -> list[Any]:
    """Return the coefficients a_n - i b_n of a function of theta."""

    def transform(count: int) -> tuple[Any, Any]:
        coefficients: Any
        if ctx is FLOAT:
            f = sampled(data, "theta", ctx, 2 * np.pi * np.arange(count) / count)
            coefficients = 2 * np.fft.rfft(f)[:-1] / count
            size = np.abs(f).max()
        else:
            f = [sampled(data, "theta", ctx, 2 * ctx.pi * j / count) for j in range(count)]
            turn = [ctx.expjpi(-ctx.mpf(2 * m) / count) for m in range(count)]
            coefficients = [
                2 * ctx.fdot((v, turn[n * j % count]) for j, v in enumerate(f)) / count
                for n in range(count // 2)
            ]
            size = max(abs(v) for v in f)
        coefficients[0] = coefficients[0] / 2
        return coefficients, size

    most = FLOAT_SAMPLES if ctx is FLOAT else PRECISE_SAMPLES
    name = data if isinstance(data, str) else getattr(data, "__name__", "f")
    kept = converged(ctx, transform, most, name, "values that jump on the rim are given by arcs")
    return [complex(c) for c in kept] if ctx is FLOAT else list(kept)
