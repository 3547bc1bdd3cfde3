"""Fields with properties that the families of the package do not have, and shapes used in several files."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import pytest

import laplace_verify as lv
from laplace_verify.fields import Singularity


@dataclass(frozen=True, slots=True, kw_only=True)
class Angle(lv.Field):
    """The polar angle about the origin, harmonic off the negative x axis; data jump at the origin."""

    @property
    def dim(self) -> int:
        return 2

    @property
    def formula(self) -> str:
        return "theta"

    @property
    def singularities(self) -> tuple[Singularity, ...]:
        return (Singularity(point=(0.0, 0.0), exponent=0.0, kind="jump"),)

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # fixed signature
        return ctx.atan2(x[1], x[0])

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002  # fixed signature
        square = x[0] * x[0] + x[1] * x[1]
        return -x[1] / square, x[0] / square


@dataclass(frozen=True, slots=True, kw_only=True)
class HalfKnown(lv.Field):
    """u = x, said to be known for x <= 0.95 only."""

    @property
    def dim(self) -> int:
        return 2

    @property
    def formula(self) -> str:
        return "x"

    def _value(self, ctx: Any, x: tuple[Any, ...], side: Any) -> Any:  # noqa: ARG002  # fixed signature
        return 1 * x[0]

    def _gradient(self, ctx: Any, x: tuple[Any, ...], side: Any) -> tuple[Any, ...]:  # noqa: ARG002  # fixed signature
        return 1 + 0 * x[0], 0 * x[0]

    def _valid(self, points: Any) -> Any:
        return points[:, 0] <= 0.95


@pytest.fixture
def half_known() -> lv.Field:
    return HalfKnown()


@pytest.fixture
def angle() -> lv.Field:
    return Angle()


@pytest.fixture
def square() -> lv.Rectangle:
    return lv.Rectangle((0, 0), (1, 1))


@pytest.fixture
def slit_disc() -> lv.Sector:
    """A disc of radius 1 slit along the positive x axis: start is the upper lip, end the lower one."""
    return lv.Sector(1.0, 2.0 * math.pi)
