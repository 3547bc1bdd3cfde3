"""Fields outside a body whose exterior is mapped onto |w| > 1: multipoles, the logarithm, flows.

Let w(z) map the exterior of a body one to one onto |w| > 1 with w ~ z/c at infinity, c > 0; c is the
logarithmic capacity of the body. A family gives w and s = w/(dw/dz).

*Multipoles.* Re w^-n, Im w^-n and log |w| are harmonic outside, decay like |z|^-n and grow like log(|z|/c).
With n < 0 they grow: between two level lines of log |w|, pairs of n and -n serve.

*Flow.* F(z) = c (conj(V) w + V/w) - i G/(2 pi) log w has the velocity conj(dF/dz) -> V far away, the
circulation G, and Im F = 0 on the body. Re F is the potential (single-valued only if G = 0), Im F the stream
function.

References
----------
Milne-Thomson 1968, Theoretical Hydrodynamics, 5th ed., ch. VI; Ransford 1995, Potential Theory in the Complex
Plane, section 5.2 - both from memory, unchecked.
"""

from __future__ import annotations

import dataclasses
from abc import abstractmethod
from typing import Any

from laplace_verify.contexts import FLOAT
from laplace_verify.errors import FieldError
from laplace_verify.fields.base import Field
from laplace_verify.fields.combinations import combined
from laplace_verify.fields.exact import Exact, exact, exact_point, show, whole
from laplace_verify.fields.motions import show_point

__all__ = ["Flow", "Mapped", "Multipole"]

HIGHEST = 200


class Mapped(Field):
    """What fields outside a mapped body share; the body is that of a subclass."""

    __slots__ = ()

    @property
    def dim(self) -> int:
        """Two."""
        return 2

    @abstractmethod
    def _map(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, Any]:
        """Return w and s = w/(dw/dz), complex."""

    @abstractmethod
    def _capacity(self, ctx: Any) -> Any:
        """Return c."""

    @property
    @abstractmethod
    def body(self) -> str:
        """The body in words, such as ``the ellipse (2, 1) about (0, 0)``."""


class Multipole(Mapped):
    """Re w^-n, Im w^-n or log |w| (n = 0); a subclass is a dataclass with `n`, `part` and a body."""

    __slots__ = ()

    n: int
    part: str

    def _check_multipole(self) -> None:
        object.__setattr__(self, "n", whole(self.n, "n", -HIGHEST, HIGHEST))
        if self.part not in ("re", "im") or (self.n == 0 and self.part == "im"):
            raise FieldError(f'part must be "re" or "im" ("re" for n = 0, log |w|), got {self.part!r}')

    @property
    def growth(self) -> float:
        """Decays like |x|^-n; logarithmic for n = 0."""
        return -float(self.n)

    @property
    def formula(self) -> str:
        """Such as ``Re w^-2 [w outside the ellipse (2, 1) about (0, 0)]``."""
        name = f"{self.part.capitalize()} w^{-self.n}" if self.n else "log |w|"
        return f"{name} [w outside {self.body}]"

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        w, _ = self._map(ctx, x, side)
        if self.n == 0:
            return ctx.log(ctx.hypot(w.real, w.imag))
        power = self._power(w)
        return power.real if self.part == "re" else power.imag

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        w, s = self._map(ctx, x, side)
        return as_gradient(-self.n * self._power(w) / s if self.n else 1 / s, self.part)

    def _power(self, w: Any) -> Any:
        """Return w^-n, n != 0, by squaring: |n| roundings at most."""
        square, n = (1 / w, self.n) if self.n > 0 else (w, -self.n)
        result = None
        while n:
            if n & 1:
                result = square if result is None else result * square
            n >>= 1
            if n:
                square = square * square
        return result

    def conjugate(self) -> Field:
        """Return the other part: Re goes to Im, Im to -Re."""
        if self.n == 0:
            raise FieldError(f"{self.formula} has no conjugate: the angle grows by 2 pi with every turn")
        twin: Field = dataclasses.replace(self, part="im" if self.part == "re" else "re")  # type: ignore[type-var]  # subclasses are dataclasses
        return twin if self.part == "re" else combined((-1, twin))


class Flow(Mapped):
    """Re F or Im F; a subclass is a dataclass with `velocity`, `circulation`, `part` and a body."""

    __slots__ = ()

    velocity: tuple[Exact, ...]
    circulation: Exact
    part: str

    def _check_flow(self) -> None:
        object.__setattr__(self, "velocity", exact_point(self.velocity, "velocity", (2,)))
        object.__setattr__(self, "circulation", exact(self.circulation, "circulation"))
        if self.part not in ("potential", "stream"):
            raise FieldError(f'part must be "potential" or "stream", got {self.part!r}')
        if self.part == "potential" and self.circulation:
            raise FieldError(
                "the potential of a flow with circulation grows with every turn and is no function; take "
                'part="stream"'
            )

    @property
    def growth(self) -> float:
        """Linear."""
        return 1.0

    @property
    def formula(self) -> str:
        """Such as ``[potential of the flow (1, 0) past the ellipse (2, 1) about (0, 0)]``."""
        turning = f", circulation {show(self.circulation)}," if self.circulation else ""
        return f"[{self.part} of the flow {show_point(self.velocity)}{turning} past {self.body}]"

    def _velocity(self, ctx: Any) -> tuple[Any, Any]:
        """Return V and conj(V)."""
        p, q = (ctx.number(v) for v in self.velocity)
        return (complex(p, q), complex(p, -q)) if ctx is FLOAT else (ctx.mpc(p, q), ctx.mpc(p, -q))

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:
        w, _ = self._map(ctx, x, side)
        v, conj = self._velocity(ctx)
        total = self._capacity(ctx) * (conj * w + v / w)
        if self.part == "potential":
            return total.real
        if not self.circulation:
            return total.imag
        turn = ctx.number(self.circulation) / (2 * ctx.pi)
        return total.imag - turn * ctx.log(ctx.hypot(w.real, w.imag))

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:
        w, s = self._map(ctx, x, side)
        v, conj = self._velocity(ctx)
        slope = self._capacity(ctx) * (conj * w - v / w)
        if self.circulation:
            slope = slope - 1j * (ctx.number(self.circulation) / (2 * ctx.pi))
        return as_gradient(slope / s, "re" if self.part == "potential" else "im")

    def conjugate(self) -> Field:
        """Return the stream function of a potential, minus the potential of a stream function."""
        other = "stream" if self.part == "potential" else "potential"
        twin: Field = dataclasses.replace(self, part=other)  # type: ignore[type-var]  # subclasses are dataclasses
        return twin if self.part == "potential" else combined((-1, twin))


def as_gradient(slope: Any, part: str) -> tuple[Any, Any]:
    """Return the gradient of Re f or Im f from f'."""
    return (slope.real, -slope.imag) if part == "re" else (slope.imag, slope.real)
