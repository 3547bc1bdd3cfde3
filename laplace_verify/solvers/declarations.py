"""What an adapter may declare, and the rate each kind of method promises in each norm.

A formal order p, given as one number, means by kind of method:

- finite difference, finite volume, spectral, stochastic, other: p in the max, L1 and L2 norms;
- finite element: p in the max, L1 and L2 norms, p - 1 in the H1 seminorm and the energy norm (degree k on
  shape-regular meshes: p = k + 1; the max norm of linear elements loses a logarithm, which an observed order
  does not show);
- boundary element: p in the max and L2 norms inside the domain.

A dict gives the orders norm by norm and nothing else. "exponential" holds in every norm of the solution.

References
----------
Ciarlet (1978), The Finite Element Method for Elliptic Problems, theorems 3.2.2 and 3.2.5; max norm: Rannacher
& Scott (1982) (from memory, unchecked).
"""

from __future__ import annotations

import inspect
from collections.abc import Collection, Iterable, Mapping
from itertools import pairwise
from typing import Any, Final, Literal, TypeAlias

import numpy as np

from laplace_verify.errors import AdapterError, nearest_names

__all__ = [
    "CONDITIONS",
    "CONDUCTIVITIES",
    "COORDINATES",
    "KINDS",
    "NORMS",
    "SHAPES",
    "Exponential",
    "FormalOrder",
    "check_norm",
    "names_among",
    "order_in",
]

Exponential: TypeAlias = Literal["exponential"]
FormalOrder: TypeAlias = float | Exponential | Mapping[str, float | Exponential]

KINDS: Final = (
    "finite difference", "finite volume", "finite element", "spectral", "boundary element", "stochastic",
    "other",
)  # fmt: skip
SHAPES: Final = (
    "interval", "rectangle", "box", "disc", "ellipse", "annulus", "sector", "l-shape", "polygon", "ball",
    "spheroid", "spherical-shell", "cylinder", "half-space", "strip", "exterior", "exterior-disc",
    "exterior-ellipse", "exterior-polygon", "exterior-screen", "exterior-ball", "exterior-spheroid",
    "exterior-round-plate", "elliptic-ring", "spheroidal-shell", "half-disc", "half-annulus",
    "confocal-parabolas",
    "cone-section", "prism", "prism-l-shape", "prism-polygon", "notched-cube",
)  # fmt: skip
CONDITIONS: Final = ("dirichlet", "neumann", "robin", "periodic")
CONDUCTIVITIES: Final = ("scalar", "tensor", "regions")
COORDINATES: Final = ("cartesian", "axisymmetric", "radial-cylinder", "radial-sphere")
FORMULATIONS: Final = ("direct", "indirect")
DISCRETISATIONS: Final = ("collocation", "Galerkin")
NORMS: Final = ("max", "L1", "L2", "H1-semi", "energy")
PREFIXES: Final = ("trace", "flux", "fluxdensity", "quantity", "probe")

OFFERED: Final = ("wanted", "seed")  # keywords that a study passes to every solver that has them
KEYWORDS: Final = (
    "name", "kind", "order", "dims", "shapes", "conditions", "conductivity", "coordinates", "unbounded",
    "error_floor", "reproduces_degree", "discrete_laws", "fixes_constant", "checks_well_posedness",
    "clearance", "formulation", "discretisation", "sizes", "claims", "known", "expected",
)  # fmt: skip

_VALUE_NORMS = ("max", "L1", "L2")
_GRADIENT_NORMS = ("H1-semi", "energy")


def names_among(
    argument: str, given: Iterable[str] | None, known: Collection[str], default: Iterable[str]
) -> frozenset[str]:
    """Return the declared names as a set, `default` if None.

    Raises
    ------
    AdapterError
        If `given` is a bare string, empty, or holds an unknown name (the nearest is shown).
    """
    if given is None:
        return frozenset(default)
    if isinstance(given, str):
        raise AdapterError(
            f"{argument} must be a set of names, got the string {given!r}; write {{{given!r}}}"
        )
    try:
        names = list(given)
    except TypeError:
        raise AdapterError(f"{argument} must be a set of names, got {given!r}") from None
    if not names:
        raise AdapterError(f"{argument} must not be empty; leave it out to claim every one")
    for name in names:
        if name not in known:
            raise AdapterError(f"{argument}: {name!r} is unknown; {nearest_names(str(name), known)}")
    return frozenset(names)


def one_of(argument: str, given: object, known: Collection[str]) -> str:
    """Return a declared name after checking it."""
    if not isinstance(given, str) or given not in known:
        raise AdapterError(f"{argument} must be one of {', '.join(known)}; got {given!r}; "
                           f"{nearest_names(str(given), known)}")  # fmt: skip
    return given


def check_norm(norm: object, argument: str = "order") -> str:
    """Return a norm's name after checking it: "max", ..., "flux:top", or "flux" for all pieces."""
    if isinstance(norm, str):
        head, colon, tail = norm.partition(":")
        if norm in NORMS or (head in PREFIXES and (not colon or tail)):
            return norm
    raise AdapterError(f"{argument}: {norm!r} is no norm; {nearest_names(str(norm), (*NORMS, *PREFIXES))}")


def check_order(given: object) -> FormalOrder:
    """Return a formal order after checking it: a positive number, "exponential", or a dict by norm."""
    if isinstance(given, Mapping):
        if not given:
            raise AdapterError('order must not be an empty dict; write order=2 or order={"max": 2}')
        return {check_norm(norm): _check_rate(f"order[{norm!r}]", rate) for norm, rate in given.items()}
    return _check_rate("order", given)


def _check_rate(argument: str, given: object) -> float | Exponential:
    """Check one rate."""
    if given == "exponential":
        return "exponential"
    number = isinstance(given, int | float | np.integer | np.floating) and not isinstance(given, bool)
    if not (number and 0 < float(given) < np.inf):  # type: ignore[arg-type]  # checked to be a number
        raise AdapterError(f'{argument} must be a positive number or "exponential", got {given!r}')
    return float(given)  # type: ignore[arg-type]  # checked above


def order_in(norm: str, kind: str, order: FormalOrder) -> float | Exponential | None:
    """Return the formal order in a norm, None if the declaration promises none there.

    Examples
    --------
    >>> order_in("H1-semi", "finite element", 2.0), order_in("L2", "finite element", 2.0)
    (1.0, 2.0)
    >>> order_in("H1-semi", "finite difference", 2.0) is None
    True
    >>> order_in("flux:top", "other", {"flux": 1.5})
    1.5
    """
    check_norm(norm)
    if isinstance(order, Mapping):
        return order.get(norm, order.get(norm.partition(":")[0]))
    if order == "exponential":
        return "exponential" if norm in NORMS else None
    if kind == "boundary element":
        return order if norm in ("max", "L2") else None
    if norm in _VALUE_NORMS:
        return order
    if kind == "finite element" and norm in _GRADIENT_NORMS and order > 1:
        return order - 1
    return None


def check_function(function: object) -> None:
    """Refuse what cannot be called as ``solve(problem, n)``, with `wanted` and `seed` if it asks for them."""
    if not callable(function):
        raise AdapterError(f"solve must be a function of (problem, n), got {type(function).__name__}")
    try:
        signature = inspect.signature(function)
        signature.bind(None, 8, **{name: None for name in OFFERED if name in signature.parameters})
    except ValueError:  # compiled functions may have no signature: the first call will tell
        return
    except TypeError as cause:
        name = getattr(function, "__name__", repr(function))
        raise AdapterError(
            f"solve must accept two positional arguments, {name}(problem, n): {cause}"
        ) from cause


def check_declaration(given: Mapping[str, Any]) -> dict[str, Any]:
    """Return every attribute of an adapter but its function, checked, with defaults filled in."""
    for name in given:
        if name not in KEYWORDS:
            raise AdapterError(f"adapt has no argument {name!r}; {nearest_names(name, KEYWORDS)}")
    for name in ("kind", "order"):
        if name not in given:
            raise AdapterError(f'{name} must be declared, as in adapt(kind="finite difference", order=2)')
    get = given.get
    kind = one_of("kind", given["kind"], KINDS)
    shapes = get("shapes")
    return {
        "name": _text("name", get("name")),
        "kind": kind,
        "order": check_order(given["order"]),
        "dims": _dims(get("dims")),
        "shapes": None if shapes is None else names_among("shapes", shapes, SHAPES, ()),
        "conditions": names_among("conditions", get("conditions"), CONDITIONS, CONDITIONS[:3]),
        "conductivity": names_among("conductivity", get("conductivity"), CONDUCTIVITIES, ("scalar",)),
        "coordinates": names_among("coordinates", get("coordinates"), COORDINATES, ("cartesian",)),
        "unbounded": _flag("unbounded", get("unbounded", False)),
        "error_floor": _number("error_floor", get("error_floor"), positive=True),
        "reproduces_degree": _whole("reproduces_degree", get("reproduces_degree")),
        "discrete_laws": frozenset(_texts("discrete_laws", get("discrete_laws", ()))),
        "fixes_constant": _flag("fixes_constant", get("fixes_constant", False)),
        "checks_well_posedness": _flag("checks_well_posedness", get("checks_well_posedness", False)),
        "clearance": _number("clearance", get("clearance"), positive=False) or 0.0,
        "formulation": _of_boundary("formulation", get("formulation"), kind, FORMULATIONS),
        "discretisation": _of_boundary("discretisation", get("discretisation"), kind, DISCRETISATIONS),
        "sizes": _sizes(get("sizes")),
        "claims": tuple(_texts("claims", get("claims", ()))),
        "known": {
            case: _reason(f"known[{case!r}]", why) for case, why in _mapping("known", get("known")).items()
        },
        "expected": {
            norm: _claim(norm, claim) for norm, claim in _mapping("expected", get("expected")).items()
        },
    }


def _dims(given: Iterable[int] | None) -> frozenset[int]:
    """Check the dimensions."""
    if given is None:
        return frozenset((1, 2, 3))
    if isinstance(given, int):
        raise AdapterError(f"dims must be a set of dimensions, got {given!r}; write {{{given!r}}}")
    dims = list(given)
    if not dims or any(isinstance(dim, bool) or dim not in (1, 2, 3) for dim in dims):
        raise AdapterError(f"dims must be a set of 1, 2 and 3, got {given!r}")
    return frozenset(int(dim) for dim in dims)


def _sizes(given: Iterable[int] | None) -> tuple[int, ...] | None:
    """Check the resolution numbers."""
    if given is None:
        return None
    try:
        sizes = list(given)
    except TypeError:
        raise AdapterError(
            f"sizes must be increasing whole numbers such as (8, 16, 32, 64), got {given!r}"
        ) from None
    whole = all(isinstance(n, int | np.integer) and not isinstance(n, bool) and n >= 1 for n in sizes)
    if not whole or any(b <= a for a, b in pairwise(sizes)):
        raise AdapterError(f"sizes must be increasing whole numbers such as (8, 16, 32, 64), got {given!r}")
    if len(sizes) < 3:
        raise AdapterError(f"sizes must be three or more, else no order can be observed; got {given!r}")
    return tuple(int(n) for n in sizes)


def _flag(argument: str, given: object) -> bool:
    """Check a yes or no."""
    if not isinstance(given, bool):
        raise AdapterError(f"{argument} must be True or False, got {given!r}")
    return given


def _number(argument: str, given: object, *, positive: bool) -> float | None:
    """Check a number, positive or at least 0."""
    if given is None:
        return None
    if isinstance(given, int | float | np.integer | np.floating) and not isinstance(given, bool):
        number = float(given)
        if np.isfinite(number) and (number > 0 if positive else number >= 0):
            return number
    raise AdapterError(f"{argument} must be {'positive' if positive else 'at least 0'}, got {given!r}")


def _whole(argument: str, given: object) -> int | None:
    """Check a whole number of at least 0."""
    if given is None:
        return None
    if isinstance(given, bool) or not isinstance(given, int | np.integer) or given < 0:
        raise AdapterError(f"{argument} must be a whole number of at least 0, got {given!r}")
    return int(given)


def _of_boundary(argument: str, given: object, kind: str, known: Collection[str]) -> str | None:
    """Check what only boundary elements have."""
    if given is None:
        return None
    if kind != "boundary element":
        raise AdapterError(f'{argument} belongs to kind="boundary element", but kind is {kind!r}')
    return one_of(argument, given, known)


def _mapping(argument: str, given: object) -> dict[str, Any]:
    """Check a dict with names as keys."""
    if given is None:
        return {}
    if not isinstance(given, Mapping) or not all(isinstance(key, str) for key in given):
        raise AdapterError(f"{argument} must be a dict with names as keys, got {given!r}")
    return dict(given)


def _reason(argument: str, given: object) -> str:
    """Check a reason."""
    if not isinstance(given, str) or not given.strip():
        raise AdapterError(f"{argument} must be the reason in words, got {given!r}")
    return given


def _claim(norm: str, given: object) -> tuple[float | Exponential, str]:
    """Check the order expected in a norm in place of theory's, and the reason for it."""
    check_norm(norm, "expected")
    if not isinstance(given, tuple | list) or len(given) != 2:
        raise AdapterError(
            f"expected[{norm!r}] must be an order and the reason for it, such as "
            f'(2, "mesh graded to the corner"), got {given!r}'
        )
    order, reason = given
    return _check_rate(f"expected[{norm!r}]", order), _reason(f"expected[{norm!r}]", reason)


def _text(argument: str, given: object) -> str | None:
    """Check a text that is not empty."""
    if given is not None and (not isinstance(given, str) or not given.strip()):
        raise AdapterError(f"{argument} must be a text, got {given!r}")
    return given


def _texts(argument: str, given: object) -> list[str]:
    """Check a collection of texts."""
    if isinstance(given, str) or not isinstance(given, Iterable):
        raise AdapterError(f"{argument} must be a set or list of texts, got {given!r}")
    texts = list(given)
    if not all(isinstance(text, str) and text.strip() for text in texts):
        raise AdapterError(f"{argument} must hold texts only, got {given!r}")
    return texts
