"""Hypothesis strategies for harmonic fields, shapes, conditions and whole problems.

Everything is valid as drawn: sizes and coefficients are small whole numbers, nothing is drawn first and
thrown away after. They shrink towards the unit square, Dirichlet data, K = 1 and fields of low degree.
What cannot be drawn, such as a ball in the plane, is refused with `hypothesis.errors.InvalidArgument`
when the strategy is made.

>>> from hypothesis import given, settings
>>> from laplace_verify.principles import strategies
>>> @settings(database=None, max_examples=5)
... @given(strategies.cases(dim=2, shapes={"rectangle"}))
... def solves(case):
...     assert case.exact.dim == case.problem.dim == 2
>>> solves()
"""

from __future__ import annotations

from collections.abc import Collection, Iterable
from dataclasses import replace
from typing import Literal

from hypothesis import strategies as st
from hypothesis.errors import InvalidArgument

from laplace_verify import fields
from laplace_verify.errors import nearest_names
from laplace_verify.fields import Field
from laplace_verify.geometry import Shape
from laplace_verify.principles._shapes import DRAWN, shape_of_kind
from laplace_verify.principles.motions import Motion, motions_of, moved
from laplace_verify.principles.posed import Conductivity, Posed
from laplace_verify.problems import Case, Problem
from laplace_verify.solvers import Adapter

__all__ = [
    "affine_fields",
    "cases",
    "cases_for",
    "conditions",
    "conductivities",
    "drawable",
    "harmonic_fields",
    "pairs",
    "posed",
    "posed_for",
    "problems_for",
    "shapes",
    "shapes_of",
    "transformed",
]

KINDS = ("dirichlet", "neumann", "robin")
MATERIALS = ("scalar", "tensor")
SCALARS = (1.0, 2.0, 0.5)
TENSORS: dict[int, tuple[tuple[tuple[float, ...], ...], ...]] = {
    1: (((2.0,),),),
    2: (((2.0, 0.0), (0.0, 1.0)), ((2.0, 1.0), (1.0, 2.0))),
    3: (
        ((2.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0)),
        ((2.0, 1.0, 0.0), (1.0, 2.0, 0.0), (0.0, 0.0, 1.0)),
    ),
}
RARE = 4  # one in five
SLOPES = st.integers(-3, 3)
MOST_PIECES = 6  # of the shapes drawn
FIRST_SLOPES = st.sampled_from((1, 2, 3, -1, -2))  # never 0: the field is not a constant


def shapes(dim: int | None = None, kinds: Iterable[str] | None = None) -> st.SearchStrategy[Shape]:
    """Return a strategy for bounded shapes, of one dimension and of the given kinds if these are given.

    A kind includes its special cases: "polygon" draws rectangles and L-shapes too.

    Raises
    ------
    InvalidArgument
        If `dim` is not 1, 2 or 3, a kind is unknown, or no kind has that dimension.

    Examples
    --------
    >>> shapes(dim=3, kinds={"disc"})
    Traceback (most recent call last):
    ...
    hypothesis.errors.InvalidArgument: no 3-D shape can be drawn of the kinds disc
    """
    dims = (1, 2, 3) if dim is None else (_dim(dim),)
    wanted = None if kinds is None else _names(kinds, "kind of shape", tuple(DRAWN))
    found = drawable(dims, wanted)
    if not found:
        raise InvalidArgument(f"no {dim}-D shape can be drawn of the kinds {', '.join(sorted(wanted or ()))}")
    return shape_of_kind(found)


def shapes_of(family: type[Shape]) -> st.SearchStrategy[Shape]:
    """Return a strategy for shapes of one class and no special cases of it.

    Raises
    ------
    InvalidArgument
        If no shape of the class can be drawn.
    """
    found = [kind for kind, (drawn, _) in DRAWN.items() if drawn is family]
    if not found:
        raise InvalidArgument(f"no shape is drawn of {family!r}; {nearest_names('', DRAWN)}")
    return shape_of_kind(found)


def affine_fields(dim: int) -> st.SearchStrategy[Field]:
    """Return a strategy for u = a . x + c with small whole numbers, never a constant."""
    axes = _dim(dim)
    slopes = st.tuples(FIRST_SLOPES, SLOPES, SLOPES)
    return st.builds(lambda a, c: fields.affine(a[:axes], c), slopes, SLOPES)


def harmonic_fields(dim: int = 2, degree: int = 4, *, waves: bool = True) -> st.SearchStrategy[Field]:
    """Return a strategy for entire harmonic fields that are not affine (in 1-D there are none: affine ones).

    An affine field plus a harmonic polynomial of degree 2 to `degree` or, with `waves`, e^y cos x and the
    like.

    Raises
    ------
    InvalidArgument
        If `dim` is not 1, 2 or 3, or `degree` is less than 2.
    """
    if _dim(dim) == 1:
        return affine_fields(1)
    if isinstance(degree, bool) or not isinstance(degree, int) or not 2 <= degree < 100:
        raise InvalidArgument(
            f"degree must be a whole number from 2 to 99, got {degree!r}: 0 and 1 are affine fields"
        )
    bent = _polynomials(dim, degree)
    if waves:
        bent = bent | _waves(dim)
    return st.builds(
        lambda slopes, constant, factor, field: _added(field, factor, slopes[:dim], constant),
        st.tuples(SLOPES, SLOPES, SLOPES),
        SLOPES,
        FIRST_SLOPES,
        bent,
    )


def conditions(shape: Shape, kinds: Iterable[str] | None = None) -> st.SearchStrategy[dict[str, str | float]]:
    """Return a strategy for conditions: {piece name: "neumann" or Robin's alpha}, Dirichlet ones left out.

    At least one piece fixes the constant (Dirichlet, else Robin), unless "neumann" is the only kind.

    Raises
    ------
    InvalidArgument
        If a kind is unknown or there is none.
    """
    allowed = [kind for kind in KINDS if kind in _names(kinds, "kind of condition", KINDS)]
    return _conditions(shape.pieces.names, allowed)


def conductivities(dim: int, kinds: Iterable[str] = ("scalar",)) -> st.SearchStrategy[Conductivity]:
    """Return a strategy for K: a positive number ("scalar"), or rows of a symmetric matrix ("tensor").

    Raises
    ------
    InvalidArgument
        If a kind is unknown or `dim` is not 1, 2 or 3.
    """
    allowed = _names(kinds, "kind of conductivity", MATERIALS)
    values: tuple[Conductivity, ...] = SCALARS if "scalar" in allowed else ()
    return st.sampled_from(values + (TENSORS[_dim(dim)] if "tensor" in allowed else ()))


def cases(
    dim: int | None = None,
    shapes: Iterable[str] | None = None,
    conditions: Iterable[str] | None = None,
    conductivity: Iterable[str] = ("scalar",),
    degree: int = 4,
) -> st.SearchStrategy[Case]:
    """Return a strategy for cases: a shape, a smooth exact field, conditions, a conductivity.

    Raises
    ------
    InvalidArgument
        If no such case exists.
    """
    dims = (1, 2, 3) if dim is None else (_dim(dim),)
    wanted = None if shapes is None else _names(shapes, "kind of shape", tuple(DRAWN))
    return posed(dims, wanted, conditions, conductivity, degree=degree).map(Posed.case)


def cases_for(solver: Adapter, degree: int = 4) -> st.SearchStrategy[Case]:
    """Return a strategy for cases within the declared capabilities of a solver.

    Raises
    ------
    InvalidArgument
        If nothing that can be drawn is within them.
    """
    reason = beyond(solver)
    if reason is not None:
        raise InvalidArgument(reason)
    return posed_for(solver, degree=degree).map(Posed.case)


def problems_for(solver: Adapter, degree: int = 4) -> st.SearchStrategy[Problem]:
    """Return a strategy for problems within the declared capabilities of a solver; see `cases_for`."""
    return cases_for(solver, degree).map(lambda case: case.problem)


def posed(
    dims: Iterable[int],
    kinds: Collection[str] | None,
    conditions: Iterable[str] | None = None,
    conductivity: Iterable[str] = ("scalar",),
    *,
    degree: int = 4,
    waves: bool = True,
    floating: bool = False,
) -> st.SearchStrategy[Posed]:
    """Return a strategy for problems with an exact field of degree 0 (constants), 1, or up to `degree`.

    `floating` ones, with Neumann conditions alone, are among them if it is asked for.
    """
    found = drawable(dims, kinds)
    if not found:
        raise InvalidArgument(
            f"no shape can be drawn of the dimensions {sorted(dims)} and kinds {sorted(kinds or ())}"
        )
    allowed = [kind for kind in KINDS if kind in _names(conditions, "kind of condition", KINDS)]
    materials = _names(conductivity, "kind of conductivity", MATERIALS)
    return _posed(found, allowed, sorted(materials), degree, waves, floating and "neumann" in allowed)


def posed_for(
    solver: Adapter,
    *,
    materials: Iterable[str] = MATERIALS,
    degree: int = 4,
    waves: bool = True,
    floating: bool = False,
) -> st.SearchStrategy[Posed]:
    """Return a strategy for problems as `posed` makes them, within the declared capabilities of a solver."""
    conductivity = solver.conductivity & set(materials)
    return posed(
        solver.dims,
        solver.shapes,
        conditions_of(solver),
        conductivity,
        degree=degree,
        waves=waves,
        floating=floating,
    )


def conditions_of(solver: Adapter) -> frozenset[str]:
    """Return the declared kinds of condition that can be drawn."""
    return solver.conditions & set(KINDS)


@st.composite
def pairs(draw: st.DrawFn, drawn: st.SearchStrategy[Posed], degree: int = 3) -> tuple[Posed, Posed]:
    """Draw a problem, and a second one with the same shape, conditions and K, but data of another field."""
    first = draw(drawn)
    return first, replace(first, field=draw(_solutions(first.shape.dim, first.conductivity, degree)))


@st.composite
def transformed(draw: st.DrawFn, drawn: st.SearchStrategy[Posed]) -> tuple[Posed, Posed, Motion]:
    """Draw a problem whose K is a number, its picture under a motion, and the motion.

    The motions are those that take the shape to one of its own kind: reflections, shifts, quarter turns,
    changes of scale, of x and y; oblique turns where the shape allows. Fields must be affine or harmonic
    polynomials, as ``posed(..., waves=False)`` draws them.
    """
    posed = draw(drawn)
    choices = motions_of(posed.shape)
    motion = choices[
        draw(st.integers(0, 59)) % len(choices)
    ]  # as many choices for every shape (see `_shapes`)
    return posed, moved(posed, motion), motion


def drawable(dims: Iterable[int], kinds: Collection[str] | None) -> list[str]:
    """Return the kinds of shape that can be drawn within declared dimensions and kinds, simplest first."""
    among = set(dims)
    return [
        name
        for name, (family, _) in DRAWN.items()
        if family.dim in among and (kinds is None or name in kinds or family.kinds & set(kinds))
    ]


def beyond(solver: Adapter) -> str | None:
    """Return why nothing that can be drawn is within the declared capabilities, None if something is."""
    if not drawable(solver.dims, solver.shapes):
        given = ", ".join(sorted(solver.shapes or ()))
        return f"{solver.name} is declared for shapes that are not drawn: {given}"
    for what, declared, drawn in (
        ("conditions", solver.conditions, KINDS),
        ("conductivity", solver.conductivity, MATERIALS),
        ("coordinates", solver.coordinates, ("cartesian",)),
    ):
        if not declared & set(drawn):
            given = ", ".join(sorted(declared))
            return f"{solver.name} is declared for {what} {given}; drawn are {', '.join(drawn)}"
    return None


def beyond_numbers(solver: Adapter) -> str | None:
    """Return as `beyond` why no problem can be drawn whose conductivity is a number."""
    if "scalar" not in solver.conductivity:
        return f"{solver.name} does not solve problems whose conductivity is a number, as the law asks"
    return beyond(solver)


@st.composite
def _posed(
    draw: st.DrawFn,
    found: list[str],
    allowed: list[str],
    materials: list[str],
    degree: int,
    waves: bool,
    floating: bool,
) -> Posed:
    shape = draw(shape_of_kind(found))
    k = draw(conductivities(shape.dim, materials))
    field = draw(_solutions(shape.dim, k, degree, waves))
    chosen = draw(_conditions(shape.pieces.names, allowed))
    if floating and draw(st.integers(0, RARE)) == RARE:
        chosen = dict.fromkeys(shape.pieces.names, "neumann")
    return Posed(shape=shape, conditions=chosen, conductivity=k, field=field)


def _solutions(dim: int, k: Conductivity, degree: int, waves: bool = True) -> st.SearchStrategy[Field]:
    """Return a strategy for solutions of div(K grad u) = 0 of degree 0, 1, or up to `degree`."""
    if degree == 0:
        return st.builds(lambda c: fields.affine((0,) * dim, c), st.integers(1, 9))
    if degree == 1 or dim == 1:
        return affine_fields(dim)
    harmonic = harmonic_fields(dim, degree, waves=waves)
    return harmonic.map(lambda field: fields.stretched(field, k)) if isinstance(k, tuple) else harmonic


@st.composite
def _conditions(draw: st.DrawFn, names: tuple[str, ...], allowed: list[str]) -> dict[str, str | float]:
    # as many choices for every shape (see `_shapes`)
    drawn = draw(st.lists(st.sampled_from(allowed), min_size=MOST_PIECES, max_size=MOST_PIECES))
    alphas = draw(st.lists(st.integers(1, 3), min_size=MOST_PIECES, max_size=MOST_PIECES))
    fixing = draw(st.integers(0, MOST_PIECES - 1)) % len(names)
    kinds = dict(zip(names, drawn, strict=False))
    if allowed != ["neumann"]:
        kinds[names[fixing]] = allowed[0] if allowed[0] != "neumann" else "robin"
    chosen = zip(names, alphas, strict=False)
    return {
        name: alpha if kinds[name] == "robin" else kinds[name]
        for name, alpha in chosen
        if kinds[name] != "dirichlet"
    }


def _polynomials(dim: int, degree: int) -> st.SearchStrategy[Field]:
    """Return a strategy for harmonic polynomials of one degree in 2-D or 3-D."""
    degrees = st.integers(2, degree)
    if dim == 2:
        parts: st.SearchStrategy[Literal["re", "im"]] = st.sampled_from(("re", "im"))
        return st.builds(fields.polynomial, degrees, parts)
    return degrees.flatmap(lambda n: st.builds(fields.solid, st.just(n), st.integers(-n, n)))


def _waves(dim: int) -> st.SearchStrategy[Field]:
    """Return a strategy for e^y cos x, e^{2y} sin 2x and the like."""
    parts = st.sampled_from(("cos", "sin"))
    if dim == 2:
        return st.builds(fields.exp_trig, st.integers(1, 2), parts)
    return st.builds(fields.exp_trig, st.just((1, 1)), st.tuples(parts, parts))


def _added(field: Field, factor: int, slopes: tuple[int, ...], constant: int) -> Field:
    """Return factor * field + slopes . x + constant, without terms that are zero."""
    result = field if factor == 1 else factor * field
    return result + fields.affine(slopes, constant) if any(slopes) or constant else result


def _dim(dim: object) -> int:
    """Check a dimension."""
    if isinstance(dim, bool) or dim not in (1, 2, 3):
        raise InvalidArgument(f"dim must be 1, 2 or 3, got {dim!r}")
    return int(dim)


def _names(given: Iterable[str] | None, what: str, known: tuple[str, ...]) -> set[str]:
    """Check names against the known ones; None stands for all."""
    if given is None:
        return set(known)
    names = {given} if isinstance(given, str) else set(given)
    for name in sorted(names, key=str):
        if name not in known:
            raise InvalidArgument(f"unknown {what} {name!r}; {nearest_names(str(name), known)}")
    if not names:
        raise InvalidArgument(f"no {what} is given; {nearest_names('', known)}")
    return names
