"""What the definition of a case consists of, and how the modules of the families register theirs.

A family is a set of functions without arguments, one a case; the name of the function is the id
(``_long_duct`` defines "long-duct"). Nothing is built before a case is asked for.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Mapping
from dataclasses import dataclass, replace
from dataclasses import field as dataclass_field
from itertools import chain
from typing import Protocol

import numpy.typing as npt

from laplace_verify.cases.statement import statement_of
from laplace_verify.cases.tags import derived_tags
from laplace_verify.errors import ProblemError
from laplace_verify.fields import Field
from laplace_verify.geometry import Shape
from laplace_verify.problems import Case, Condition, Materials, case
from laplace_verify.problems.coordinates import Coordinates
from laplace_verify.problems.infinity import AtInfinity
from laplace_verify.problems.quantities import QuantitySpec

__all__ = ["HERE", "Definition", "Family", "joined"]

HERE = "derived here"


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Definition:
    """A case before it is built: arguments of `problems.case`, and words.

    Attributes
    ----------
    title, reading, sources
        Headline, physical reading in a plain sentence, literature.
    solution, note
        The solution as a readable formula, and further sentences for the statement, see `statement_of`.
    shape, field, conditions, conductivity, quantities, coordinates, at_infinity, window
        See `problems.case`.
    tags
        Words beyond those that follow from the mathematics, see `derived_tags`.
    reference_points
        Points, as decimal strings, at which values are stored beside those of `references.probes_of`.
    """

    title: str
    solution: str
    reading: str
    shape: Shape
    field: Field
    conditions: Mapping[str, str | Condition] = dataclass_field(default_factory=dict)
    conductivity: float | npt.ArrayLike | Materials = 1.0
    quantities: Mapping[str, QuantitySpec] = dataclass_field(default_factory=dict)
    tags: Iterable[str] = ()
    sources: Iterable[str] = (HERE,)
    note: str = ""
    coordinates: Coordinates = "cartesian"
    at_infinity: AtInfinity = None
    window: Shape | None = None
    reference_points: Iterable[tuple[str, ...]] = ()

    def build(self, id_: str) -> Case:
        """Return the case, checked like any user's own.

        Raises
        ------
        ProblemError
            See `problems.case`.
        """
        built = case(
            self.shape,
            self.conditions,
            self.field,
            self.conductivity,
            id=id_,
            title=self.title,
            reading=self.reading,
            sources=self.sources,
            quantities=self.quantities,
            coordinates=self.coordinates,
            at_infinity=self.at_infinity,
            window=self.window,
        )
        return replace(
            built,
            statement=statement_of(built, self.solution, self.note),
            tags=frozenset(self.tags) | derived_tags(built),
        )


class Buildable(Protocol):
    """What a case is built from: a `Definition`, or that of an ill-posed case."""

    def build(self, id_: str) -> Case:
        """Return the case of this id."""
        ...


Definer = Callable[[], Buildable]


class Family(dict[str, Definer]):
    """The cases of one module: id -> function that defines it; used as a decorator.

    >>> family = Family()
    >>> @family
    ... def _warm_plate():
    ...     ...
    >>> list(family)
    ['warm-plate']
    """

    def __call__(self, definer: Definer) -> Definer:
        """Register a function under its own name, with hyphens."""
        id_ = definer.__name__.strip("_").replace("_", "-")
        if id_ in self:
            raise ProblemError(f"two cases are called {id_!r}; every id must be unique")
        self[id_] = definer
        return definer


def joined(*families: Family) -> Family:
    """Return all cases of several families, in order.

    Raises
    ------
    ProblemError
        If two cases bear the same id.
    """
    everything = Family()
    for id_, definer in chain.from_iterable(family.items() for family in families):
        if id_ in everything:
            raise ProblemError(f"two cases are called {id_!r}; every id must be unique")
        everything[id_] = definer
    return everything
