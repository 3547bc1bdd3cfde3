"""Resistances in series.

Where a flux q crosses surfaces of area A(s) one after the other, div(K grad u) = 0 is K A du/ds = q, so that
potentials drop by resistances: through plane layers of thickness l, a pipe's wall and a hollow sphere by

    q l / (K A),    q log(b/a) / (2 pi K) a length,    q (1/a - 1/b) / (4 pi K)

(Carslaw & Jaeger, Conduction of Heat in Solids, 2nd edition, 1959, sections 3.2, 7.2 and 9.3, from memory,
unchecked). It shows conductivities averaged wrongly at an interface, spacings taken for equal, and metric
factors of r that are missing or counted twice.

Conditions of validity: the solver declares conductivity "regions", for two layers across an interval, a
rectangle or a box, with Robin conditions only if there are no others; or coordinates "radial-cylinder",
"radial-sphere" or "axisymmetric", for r >= 1, with any conditions.

Tolerance: max |u_h - u| relative to the largest boundary value. Between plane layers u is affine in each, and
what is said of affine fields holds: *exactly* for finite differences, volumes and elements, without Robin
conditions, if no cell lies on both sides of the interface. All else *in the limit* at the declared order (see
`limits`).
"""

from __future__ import annotations

from fractions import Fraction

import numpy as np
from hypothesis import strategies as st

from laplace_verify import fields
from laplace_verify.geometry import Interval, Rectangle, Shape
from laplace_verify.principles import strategies
from laplace_verify.principles._shapes import shape_of_kind
from laplace_verify.principles.affine_fields import FIRST_DEGREE
from laplace_verify.principles.law import Finding, Law, Trial
from laplace_verify.principles.limits import exactly, in_the_limit, rate_of
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reproduction import misses
from laplace_verify.problems import layers
from laplace_verify.problems.coordinates import Coordinates
from laplace_verify.solvers import Adapter

__all__ = ["SERIES_RESISTANCE"]

PLANE = ("interval", "rectangle", "box")
CONTRASTS = st.sampled_from(((1, 3), (3, 1), (1, 2)))
SHARES = st.sampled_from((Fraction(1, 2), Fraction(1, 3)))
AXES = st.integers(0, 2)
SIDES = st.integers(1, 3)
LEVELS = st.integers(-3, 3)
SLOPES = st.sampled_from((1, 2, -1, -2))
TOUCHING = 1e-9


def _plane(solver: Adapter) -> list[str]:
    """Return the kinds of shape that layers can be drawn across."""
    if "regions" not in solver.conductivity or "cartesian" not in solver.coordinates:
        return []
    return [kind for kind in strategies.drawable(solver.dims, solver.shapes) if kind in PLANE]


def _round(solver: Adapter) -> list[Coordinates]:
    """Return the coordinates in which the wall of a pipe or a hollow sphere can be drawn."""
    found: list[tuple[Coordinates, str]] = [
        ("radial-cylinder", "interval"),
        ("radial-sphere", "interval"),
        ("axisymmetric", "rectangle"),
    ]
    drawn = strategies.drawable(solver.dims, solver.shapes) if "scalar" in solver.conductivity else []
    return [name for name, kind in found if name in solver.coordinates and kind in drawn]


def _inapplicable(solver: Adapter) -> str | None:
    if not strategies.conditions_of(solver):
        return strategies.beyond(solver)
    if _plane(solver) or _round(solver):
        return None
    return f"{solver.name} declares neither regions nor radial or axisymmetric coordinates on simple shapes"


@st.composite
def _layered(draw: st.DrawFn, found: list[str], kinds: frozenset[str]) -> Posed:
    """Draw two layers across a shape with a field that is affine in each."""
    shape = draw(shape_of_kind(found))
    axis, share, k = draw(AXES) % shape.dim, draw(SHARES), draw(CONTRASTS)
    slope, level = draw(SLOPES), draw(LEVELS)
    lower, upper = (Fraction(end[axis]) for end in np.asarray(shape.bounding_box).tolist())
    place = lower + share * (upper - lower)
    across = [int(i == axis) for i in range(shape.dim)]
    wall = layers(tuple(across), [place], {"first": k[0], "second": k[1]})
    along = [0 if across[i] else draw(LEVELS) for i in range(shape.dim)]
    # K du/ds is the same in both: slopes are those of the other layer, and the parts meet at the interface
    one, two = slope * k[1], slope * k[0]
    parts = [
        fields.affine([a + one * c for a, c in zip(along, across, strict=True)], level),
        fields.affine([a + two * c for a, c in zip(along, across, strict=True)], level + (one - two) * place),
    ]
    conditions = draw(strategies.conditions(shape, kinds))
    return Posed(shape=shape, conditions=conditions, field=fields.by_region(wall, parts), materials=wall)


@st.composite
def _radial(draw: st.DrawFn, found: list[Coordinates], kinds: frozenset[str]) -> Posed:
    """Draw the wall of a pipe, as a line or a section, or of a hollow sphere."""
    coordinates = draw(st.sampled_from(found))
    inner, thick, high, level, slope = draw(SIDES), draw(SIDES), draw(SIDES), draw(LEVELS), draw(SLOPES)
    about = "sphere" if coordinates == "radial-sphere" else "cylinder"
    field: fields.Field = fields.radial(about, level, slope)
    shape: Shape = Interval(inner, inner + thick)
    if coordinates == "axisymmetric":
        field, shape = fields.axisymmetric(field), Rectangle((inner, 0), (inner + thick, high))
    k = draw(strategies.conductivities(1))
    conditions = draw(strategies.conditions(shape, kinds))
    return Posed(shape=shape, conditions=conditions, conductivity=k, field=field, coordinates=coordinates)


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    kinds, plane, round_ = strategies.conditions_of(solver), _plane(solver), _round(solver)
    drawn = [_layered(plane, kinds - {"robin"} or kinds)] if plane else []
    return st.one_of([*drawn, _radial(round_, kinds)] if round_ else drawn)


def _aligned(trial: Trial) -> bool:
    """Whether no cell of the coarsest answer lies on both sides of the interface."""
    materials, answer = trial.posed.materials, trial.answer(trial.sizes[0])
    if materials is None or answer.cells is None or answer.points is None:
        return False
    sides = [materials.partition.contains(answer.points, k, TOUCHING) for k in range(2)]
    return all(
        bool(np.all(sides[0][nodes].all(axis=1) | sides[1][nodes].all(axis=1)))
        for nodes in answer.cells.values()
    )


def _judge(trial: Trial) -> Finding:
    robin = any(piece.kind == "robin" for piece in trial.problem.pieces)
    if trial.solver.kind in FIRST_DEGREE and not robin and _aligned(trial):
        return exactly(trial, misses)
    return in_the_limit(trial, misses, rate_of(trial))


SERIES_RESISTANCE = Law(
    name="resistances in series",
    statement="through layers, pipe walls and hollow spheres potentials drop by resistances",
    inapplicable=_inapplicable,
    problems=_problems,
    judge=_judge,
)
