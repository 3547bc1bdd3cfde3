"""What ``hypothesis.strategies.from_type`` draws for fields, shapes, cases and problems.

Hypothesis calls `register` whenever it is imported (entry point "hypothesis"). That may be while this package
is itself being imported, and in sessions that draw nothing of it, so strategies are built on first use.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from hypothesis.strategies import SearchStrategy

__all__ = ["register"]


def register() -> None:
    """Register strategies for `Field`, `Case`, `Problem`, `Shape` and every kind of shape that is drawn.

    >>> from hypothesis import find, settings, strategies as st
    >>> import laplace_verify as lv
    >>> register()  # as Hypothesis does by itself
    >>> find(st.from_type(lv.Disc), lambda disc: True, settings=settings(database=None))
    Disc((0.0, 0.0), 1.0)
    """
    from hypothesis import strategies as st

    from laplace_verify import geometry
    from laplace_verify.fields import Field
    from laplace_verify.problems import Case, Problem

    st.register_type_strategy(Field, _later(lambda s: st.integers(1, 3).flatmap(s.harmonic_fields)))
    st.register_type_strategy(Case, _later(lambda s: s.cases()))
    st.register_type_strategy(Problem, _later(lambda s: s.cases().map(lambda case: case.problem)))
    st.register_type_strategy(geometry.Shape, _later(lambda s: s.shapes()))
    for family in (
        geometry.Annulus, geometry.Ball, geometry.Box, geometry.Cylinder, geometry.Disc, geometry.Ellipse,
        geometry.Interval, geometry.LShape, geometry.Polygon, geometry.Rectangle, geometry.Sector,
        geometry.SphericalShell,
    ):  # fmt: skip
        st.register_type_strategy(family, _later(_only(family)))


def _later(make: Callable[[Any], SearchStrategy[Any]]) -> SearchStrategy[Any]:
    """Return the strategy that is made of the module `strategies` on first use."""
    from hypothesis import strategies as st

    def made() -> SearchStrategy[Any]:
        from laplace_verify.principles import strategies

        return make(strategies)

    return st.deferred(made)


def _only(family: type) -> Callable[[Any], SearchStrategy[Any]]:
    """Return what makes the strategy for shapes of one family."""

    def make(strategies: Any) -> SearchStrategy[Any]:
        strategy: SearchStrategy[Any] = strategies.shapes_of(family)
        return strategy

    return make
