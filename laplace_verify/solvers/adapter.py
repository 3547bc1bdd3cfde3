"""The adapter: a user's solve function with what it can do, and the one door through which it is called.

What a solve function ``solve(problem, n) -> Answer`` undertakes: it approximates the solution of
div(K grad u) = 0 in ``problem.shape`` under the conditions of ``problem.pieces``, the better the larger the
resolution number n, and it depends on nothing but its arguments.
"""

from __future__ import annotations

import contextlib
import importlib
import importlib.util
import inspect
import sys
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass, replace
from pathlib import Path
from typing import TYPE_CHECKING, Any, Required, TypedDict, Unpack, overload

import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.errors import AdapterError, AnswerError, LaplaceVerifyError
from laplace_verify.solvers._imports import module_from_file
from laplace_verify.solvers.answer import Answer
from laplace_verify.solvers.declarations import (
    Exponential,
    FormalOrder,
    check_declaration,
    check_function,
    order_in,
)

if TYPE_CHECKING:
    from laplace_verify.problems import Problem

__all__ = ["Adapter", "Refused", "adapt"]

SolveFunction = Callable[..., Answer]


class Refused(LaplaceVerifyError, RuntimeError):  # noqa: N818  # raised as `raise Refused(reason)`
    """What a solver raises when it declines a problem, such as an ill-posed one.

    From a solver that declares `checks_well_posedness` it means that the problem is ill-posed, unless
    `beyond` says that the problem is sound but more than the solver can do.

    >>> raise Refused("pure flux data do not balance")
    Traceback (most recent call last):
    ...
    laplace_verify.solvers.adapter.Refused: pure flux data do not balance
    """

    def __init__(self, reason: str, beyond: bool = False) -> None:
        super().__init__(reason)
        self.reason = str(reason)
        self.beyond = beyond


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Adapter:
    """A solve function with its declared capabilities; made by `adapt`, which documents every attribute.

    Calling the adapter calls the function itself; `solve` also checks what comes back.
    """

    function: SolveFunction
    name: str
    kind: str
    order: FormalOrder
    dims: frozenset[int]
    shapes: frozenset[str] | None
    conditions: frozenset[str]
    conductivity: frozenset[str]
    coordinates: frozenset[str]
    unbounded: bool
    error_floor: float | None
    reproduces_degree: int | None
    discrete_laws: frozenset[str]
    fixes_constant: bool
    checks_well_posedness: bool
    clearance: float
    formulation: str | None
    discretisation: str | None
    sizes: tuple[int, ...] | None
    claims: tuple[str, ...]
    known: Mapping[str, str]
    expected: Mapping[str, tuple[float | Exponential, str]]

    def __call__(self, *arguments: Any, **keywords: Any) -> Any:
        """Call the solve function as it was written."""
        return self.function(*arguments, **keywords)

    def __reduce__(self) -> tuple[Any, ...]:
        """Travel by name where an adapter stands under its function's own name, as decorated ones do."""
        values = {slot: getattr(self, slot) for slot in self.__slots__}
        module = getattr(self.function, "__module__", None)
        name = getattr(self.function, "__qualname__", "")
        home = sys.modules.get(module) if module else None
        found = _attribute(home, name)
        if isinstance(found, Adapter) and found.function is self.function:
            del values["function"]  # pickle would look it up by name and find the adapter instead
            place = (module, name, getattr(home, "__file__", None))
            return _by_name, (*place, None if found is self else values)
        return _by_values, (values,)

    def takes(self, keyword: str) -> bool:
        """Whether the solve function has a parameter of that name."""
        return keyword in _keywords(self.function)

    def default(self, keyword: str) -> float | None:
        """Return the positive number that is the default of a parameter of the solve function, else None.

        >>> adapt(lambda problem, n, tolerance=1e-8: None, kind="other", order=2).default("tolerance")
        1e-08
        """
        try:
            parameter = inspect.signature(self.function).parameters.get(keyword)
        except (TypeError, ValueError):  # compiled functions may have no signature
            return None
        value = None if parameter is None else parameter.default
        if not isinstance(value, int | float) or isinstance(value, bool) or not value > 0:
            return None
        return float(value)

    def formal_order(self, norm: str) -> float | Exponential | None:
        """Return the declared order in a norm; None if the declaration promises none there."""
        return order_in(norm, self.kind, self.order)

    def refuses(self, problem: Problem) -> str | None:
        """Return why the problem is beyond the declared capabilities, or None if it is not."""
        shape = problem.shape
        # The kind "axis" belongs to the coordinates, which are declared apart.
        needed = {piece.kind for piece in problem.pieces} - {"axis"}
        fits_shape = self.shapes is None or any(shape.is_a(kind) for kind in self.shapes)
        for fits, what, declared, met in (
            (problem.dim in self.dims, "dim", self.dims, {problem.dim}),
            (shape.bounded or self.unbounded, "bounded shapes", (), {f"an unbounded {shape.kind}"}),
            (fits_shape, "shapes", self.shapes or (), {shape.kind}),
            (needed <= self.conditions, "conditions", self.conditions, needed - self.conditions),
            (
                _material(problem) in self.conductivity,
                "conductivity",
                self.conductivity,
                {_material(problem)},
            ),
            (problem.coordinates in self.coordinates, "coordinates", self.coordinates, {problem.coordinates}),
        ):
            if not fits:
                scope = f"{what} {_listed(declared)}".rstrip()
                return f"{self.name} is declared for {scope}; the problem has {_listed(met)}"
        if problem.ill_posed is not None and not self.checks_well_posedness:
            return (
                f"the problem is ill-posed ({problem.ill_posed}), and {self.name} does not declare that it "
                "checks whether problems are well posed (checks_well_posedness)"
            )
        return None

    def solve(
        self,
        problem: Problem,
        size: int,
        wanted: Array | None = None,
        *,
        tolerance: float | None = None,
        initial: Any = None,
        duration: float | None = None,
        seed: int | None = None,
    ) -> Answer:
        """Solve, and check the answer against the problem.

        `wanted` (points at which values will be asked for), `tolerance`, `initial`, `duration` and `seed`
        reach the solve function only if they are given and its signature has them. `initial` is a first
        guess: a function of points (n, d) that returns values (n,); `duration` is the time to march for, of
        solvers that march in time to the steady state. What the function prints goes to stderr.

        Raises
        ------
        AnswerError
            If what comes back cannot be measured; names solver, problem and size. Exceptions of the solver
            itself pass through.
        """
        offered = {
            "wanted": wanted,
            "tolerance": tolerance,
            "initial": initial,
            "duration": duration,
            "seed": seed,
        }
        accepted = _keywords(self.function)
        keywords = {key: value for key, value in offered.items() if value is not None and key in accepted}
        try:
            with contextlib.redirect_stdout(sys.stderr):
                answer = self.function(problem, size, **keywords)
            return as_answer(answer).validated(problem)
        except AnswerError as cause:
            raise AnswerError(f"{self.name} on {problem.name}, n = {size}: {cause}") from cause

    def describe(self) -> dict[str, Any]:
        """Return the declaration as plain data that JSON can hold, without the function."""
        result: dict[str, Any] = {}
        for slot in self.__slots__:
            if slot != "function":
                result[slot] = _plain(getattr(self, slot))
        return result


class Declaration(TypedDict, total=False):
    """The keywords of `adapt`, for type checkers."""

    name: str | None
    kind: Required[str]
    order: Required[FormalOrder]
    dims: Iterable[int] | None
    shapes: Iterable[str] | None
    conditions: Iterable[str] | None
    conductivity: Iterable[str]
    coordinates: Iterable[str]
    unbounded: bool
    error_floor: float | None
    reproduces_degree: int | None
    discrete_laws: Iterable[str]
    fixes_constant: bool
    checks_well_posedness: bool
    clearance: float
    formulation: str | None
    discretisation: str | None
    sizes: Sequence[int] | None
    claims: Iterable[str]
    known: Mapping[str, str] | None
    expected: Mapping[str, tuple[float | Exponential, str]] | None


@overload
def adapt(solve: SolveFunction, **declared: Unpack[Declaration]) -> Adapter: ...
@overload
def adapt(solve: None = None, **declared: Unpack[Declaration]) -> Callable[[SolveFunction], Adapter]: ...
def adapt(
    solve: SolveFunction | None = None, **declared: Unpack[Declaration]
) -> Adapter | Callable[[SolveFunction], Adapter]:
    """Declare what a solve function can do; a decorator, or a function of the solve function.

    What is left out means: any bounded shape of dimension 1 to 3, Dirichlet, Neumann and Robin conditions,
    scalar conductivity, cartesian coordinates.

    Parameters
    ----------
    solve : ``solve(problem, n) -> Answer``
    name : shown in reports; by default the function's name
    kind : "finite difference", "finite volume", "finite element", "spectral", "boundary element",
        "stochastic" or "other"
    order : formal order: a number, per norm as in ``{"max": 2, "H1-semi": 1}``, or "exponential"
    dims, shapes, conditions, conductivity, coordinates : sets of what it can do; a problem is taken on if
        everything it uses is in the set. "polygon" covers "rectangle" and "l-shape".
    unbounded : whether it can do unbounded shapes
    error_floor : errors below this (relative to the solution) are round-off or iteration error, not
        discretisation
    reproduces_degree : harmonic polynomials up to this degree come out exact to round-off
    discrete_laws : names of laws that hold exactly for its values
    fixes_constant : whether pure Neumann answers honour ``problem.constant``, so that their level is judged
    checks_well_posedness : whether it raises `Refused` on ill-posed problems: flux data that do not balance,
        a Robin coefficient below 0, a piece without a condition. It is then given some, and an answer fails;
        so does refusing a well-posed problem, unless as ``Refused(reason, beyond=True)``
    clearance : points nearer to the boundary than this (relative to the shape's size) do not decide
    formulation : "direct" or "indirect", for boundary elements
    discretisation : "collocation" or "Galerkin", for boundary elements
    sizes : resolution numbers it should be studied at, increasing, three or more
    claims : statements about the solver to be shown in its report
    known : case id and the reason why a failure there is known
    expected : norm -> (order, reason): the order to expect in that norm on every case instead of theory's, as
        in ``{"L2": (2, "mesh graded to the corners")}``; the norm then decides, and the report says whose
        claim it is

    Raises
    ------
    AdapterError
        Names the declaration at fault and the nearest known names.

    Examples
    --------
    >>> @adapt(kind="finite difference", order=2, dims={2}, shapes={"rectangle"}, conditions={"dirichlet"})
    ... def duct_grid(problem, n):
    ...     raise Refused("not written yet")
    >>> duct_grid.name, duct_grid.formal_order("L2"), duct_grid.formal_order("H1-semi")
    ('duct_grid', 2.0, None)
    """
    attributes = check_declaration(declared)

    def build(function: SolveFunction) -> Adapter:
        check_function(function)
        name = attributes["name"] or getattr(function, "__name__", type(function).__name__)
        return Adapter(**{**attributes, "function": function, "name": name})

    return build if solve is None else build(solve)


def as_answer(returned: object) -> Answer:
    """Return what a solve function gave back if it is an Answer.

    Raises
    ------
    AnswerError
        If it is anything else; the message shows how to wrap it.
    """
    if isinstance(returned, Answer):
        return returned
    if returned is None:
        raise AnswerError("the solve function returned None: end it with `return lv.Answer(points, values)`")
    if isinstance(returned, Refused):
        raise AnswerError("the solve function returned Refused(...): raise it instead")
    if isinstance(returned, tuple) and len(returned) in (2, 3):
        mend = "the tuple can be wrapped: `return lv.Answer(points, values)`"
    elif isinstance(returned, np.ndarray):
        mend = f"an array of shape {returned.shape} does not say where: `return lv.Answer(points, values)`"
    elif callable(returned):
        mend = "a function can be wrapped: `return lv.Answer(evaluate=f)`"
    else:
        mend = "write `return lv.Answer(points, values)` or `return lv.Answer(evaluate=f)`"
    raise AnswerError(f"the solve function must return an Answer, got {type(returned).__name__}; {mend}")


def _material(problem: Problem) -> str:
    """Return which kind of conductivity the problem has."""
    if len(problem.regions) > 1:  # a homogeneous problem has one region, the whole shape
        return "regions"
    return "tensor" if isinstance(problem.conductivity, np.ndarray) else "scalar"


def _keywords(function: SolveFunction) -> set[str]:
    """Return the names of the parameters that can be passed by keyword."""
    try:
        parameters = inspect.signature(function).parameters.values()
    except (TypeError, ValueError):  # compiled functions may have no signature
        return set()
    by_name = (inspect.Parameter.POSITIONAL_OR_KEYWORD, inspect.Parameter.KEYWORD_ONLY)
    return {parameter.name for parameter in parameters if parameter.kind in by_name}


def _listed(names: Iterable[object]) -> str:
    """Return names in a stable order, separated by commas."""
    return ", ".join(str(name) for name in sorted(names, key=str))


def _plain(value: Any) -> Any:
    """Return sets as sorted lists, mappings as dicts, the rest as it is."""
    if isinstance(value, frozenset | set):
        return sorted(value)
    if isinstance(value, Mapping):
        return {str(key): _plain(item) for key, item in value.items()}
    if isinstance(value, tuple | list):
        return [_plain(item) for item in value]
    if isinstance(value, np.ndarray | np.generic):
        return value.tolist()
    return value if value is None or isinstance(value, bool | int | float | str) else repr(value)


def _attribute(home: object, name: str) -> object:
    """Return the object a dotted name leads to, None if there is none."""
    for part in name.split("."):
        home = getattr(home, part, None)
    return home


def _by_name(module: str, name: str, file: str | None, values: Mapping[str, Any] | None) -> Adapter:
    """Find an adapter again in another process, by module or file; `values` are what differs from it."""
    if module in sys.modules:
        home = sys.modules[module]
    elif file is not None and Path(file).is_file() and not _importable(module):
        home = module_from_file(file)
    else:
        home = importlib.import_module(module)
    found = _attribute(home, name)
    if not isinstance(found, Adapter):
        raise AdapterError(
            f"{module} has no adapter {name!r} in this process; define it at the top of its file"
        )
    return found if values is None else replace(found, **values)


def _importable(module: str) -> bool:
    """Whether Python finds a module by its name."""
    try:
        return importlib.util.find_spec(module) is not None
    except ModuleNotFoundError:  # its package is missing
        return False


def _by_values(values: Mapping[str, Any]) -> Adapter:
    """Make an adapter again from its attributes."""
    return Adapter(**values)
