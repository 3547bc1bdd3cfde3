"""What is known at infinity: None on bounded shapes, else one of four conditions.

    "decay"                        u -> 0
    "bounded"                      u stays bounded
    ("log", charge)                u - charge log |x| stays bounded; plane only
    ("flow", vector, circulation)  u - vector . x + circulation/(2 pi) log |x| stays bounded; with circulation
                                   (plane only) u is a stream function

In the plane a bounded function outside bodies tends to a constant and has no net charge, in space one that
tends to 0 decays like charge/r. Flux conditions alone leave a constant free unless u decays.

That an exact field behaves as said is checked at two great distances in several directions, in 40 digits:
what is left after the growing part must not change any more (a logarithm would), and vanish if u is to decay.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from typing import Any, Literal, TypeAlias

import mpmath
import numpy as np

from laplace_verify.arrays import Array
from laplace_verify.errors import FieldError, GeometryError, ProblemError
from laplace_verify.fields import Field
from laplace_verify.geometry import Shape, Windowed, check_window, default_window
from laplace_verify.geometry.planes import HalfSpace, Plane, Strip
from laplace_verify.problems.compatibility import BALANCE
from laplace_verify.problems.materials import Materials
from laplace_verify.problems.pieces import Piece
from laplace_verify.problems.quantities import QuantitySpec

__all__ = [
    "AtInfinity",
    "as_at_infinity",
    "as_window",
    "check_far",
    "check_infinite_quantities",
    "check_net_flux",
    "fixes_constant",
    "one_region",
    "point_constant",
    "scaled_at_infinity",
]

AtInfinity: TypeAlias = (
    Literal["decay", "bounded"]
    | tuple[Literal["log"], float]
    | tuple[Literal["flow"], tuple[float, ...], float]
    | None
)

FAR = (1e7, 1e10)  # in extents
ROUGH = (1e3, 1e6)  # the same, for functions that can be had in float64 only
SETTLED = 1e-6  # largest change between the two, relative to the size of u near by
ROUGH_SETTLED = 2e-2
SEED = 7013
DIRECTIONS = 8
EPS = float(np.finfo(np.float64).eps)

USAGE = 'at_infinity must be "decay" (u -> 0), "bounded", ("log", charge) or ("flow", vector, circulation); '


def as_at_infinity(given: Any, shape: Shape) -> AtInfinity:
    """Return the condition at infinity, checked against the shape.

    Raises
    ------
    ProblemError
        If it is missing on an unbounded shape, given on a bounded one, or of another form.

    Examples
    --------
    >>> from laplace_verify.geometry import Disc, Exterior
    >>> as_at_infinity(("log", 2), Exterior(Disc((0, 0), 1)))
    ('log', 2.0)
    """
    if shape.bounded:
        if given is not None:
            raise ProblemError(f"at_infinity={given!r} is for unbounded shapes only; {shape!r} is bounded")
        return None
    if given in ("decay", "bounded"):
        return given  # type: ignore[no-any-return]  # one of the two
    kind = given[0] if isinstance(given, tuple | list) and given else None
    if kind == "log" and len(given) == 2 and shape.dim == 2:
        return ("log", _number(given[1], "charge"))
    if kind == "flow" and len(given) == 3:
        vector = tuple(_number(v, "vector") for v in np.atleast_1d(np.asarray(given[1], dtype=object)))
        circulation = _number(given[2], "circulation")
        if len(vector) == shape.dim and not (circulation and shape.dim == 3):
            return ("flow", vector, circulation)
    raise ProblemError(
        f"{USAGE}in {shape.dim}-D, for {shape!r}, got {given!r}"
        + ("; a logarithm or a circulation belongs to the plane" if shape.dim == 3 else "")
    )


def _number(value: Any, name: str) -> float:
    """Return a finite float."""
    try:
        number = float(value)
    except (TypeError, ValueError) as cause:
        raise ProblemError(f"{name} of at_infinity must be a number, got {value!r}") from cause
    if not math.isfinite(number):
        raise ProblemError(f"{name} of at_infinity must be finite, got {value!r}")
    return number


def as_window(given: Any, shape: Shape) -> Shape | None:
    """Return the window of an unbounded shape, None of a bounded one.

    Raises
    ------
    ProblemError
        If it does not fit the shape, or a bounded shape is given one.
    """
    if shape.bounded:
        if given is not None:
            raise ProblemError(
                "window is for unbounded shapes only: norms are taken over a whole bounded shape"
            )
        return None
    try:
        return default_window(shape) if given is None else check_window(shape, given)
    except GeometryError as cause:
        raise ProblemError(str(cause)) from cause


def one_region(shape: Shape, conductivity: Any) -> None:
    """Refuse regions of different conductivity in an unbounded shape.

    Raises
    ------
    ProblemError
        If there are any.
    """
    if not shape.bounded and isinstance(conductivity, Materials):
        raise ProblemError(f"regions of different conductivity need a bounded shape, {shape!r} is unbounded")


def fixes_constant(at_infinity: AtInfinity) -> bool:
    """Return whether the condition at infinity fixes what flux conditions leave free."""
    return at_infinity == "decay"


def point_constant(given: Any, seen: Windowed, field: Field) -> Any:
    """Return ("point", x, v): what is given, else the exact value at a point deep in the window.

    Raises
    ------
    ProblemError
        If a mean is asked for.
    """
    if given is None:
        points = seen.sample(32, seed=SEED)
        deepest = points[int(np.argmin(np.abs(seen.distance(points) - seen.extent / 4.0)))]
        place = np.round(deepest / seen.extent, 2) * seen.extent
        return ("point", tuple(place.tolist()), float(field.value([place])[0]))
    if given[0] == "mean":
        raise ProblemError(f'an unbounded shape has no mean: give ("point", x, value), got {given!r}')
    return given


def check_far(field: Field, at_infinity: AtInfinity, seen: Windowed) -> None:
    """Refuse a field that does not behave at infinity as the problem says.

    Raises
    ------
    ProblemError
        With the place and by how much.
    """
    size = seen.extent
    scale = float(np.abs(field.value(seen.sample(64, seed=SEED))).max())
    try:
        _compare(field, at_infinity, seen, scale, [size * r for r in FAR], SETTLED)
    except FieldError as cause:
        if not field.opaque:
            raise ProblemError(f"{field.formula} cannot be evaluated far away: {cause}") from cause
        _compare(field, at_infinity, seen, scale, [size * r for r in ROUGH], ROUGH_SETTLED)


def _compare(
    field: Field,
    at_infinity: AtInfinity,
    seen: Windowed,
    scale: float,
    distances: list[float],
    tolerance: float,
) -> None:
    """Compare what is left of u at two distances in several directions."""
    for way in _directions(seen.whole):
        near, far = (_rest(field, at_infinity, seen, way, r, tolerance == SETTLED) for r in distances)
        vector = at_infinity[1] if isinstance(at_infinity, tuple) and at_infinity[0] == "flow" else ()
        # a vector given in float64 is off by a rounding, which the distance enlarges
        room = tolerance * max(scale, abs(near)) + EPS * distances[1] * math.hypot(*vector)
        if not abs(far - near) <= room:
            raise ProblemError(
                f"{field.formula} does not behave as at_infinity={at_infinity!r} says: less what grows it is "
                f"{near:.6g} at a distance of {distances[0]:.3g} in the direction "
                f"{way.round(3).tolist()} and {far:.6g} at {distances[1]:.3g}"
            )
        if at_infinity == "decay" and not abs(far) <= tolerance * scale:
            raise ProblemError(
                f"{field.formula} does not decay: it is {far:.6g} at a distance of {distances[1]:.3g}; "
                'say at_infinity="bounded"'
            )


def _directions(shape: Shape) -> Array:
    """Return seeded unit vectors that lead to infinity inside the shape."""
    ways = np.random.default_rng(SEED).standard_normal((DIRECTIONS, shape.dim))
    if isinstance(shape, Strip):
        ways[:, -1] = 0.0
    if isinstance(shape, HalfSpace):
        ways[:, -1] = np.abs(ways[:, -1])
    unit: Array = ways / np.sqrt((ways**2).sum(axis=1, keepdims=True))
    return unit


def _rest(
    field: Field, at_infinity: AtInfinity, seen: Windowed, way: Array, distance: float, precise: bool
) -> float:
    """Return u less its growing part."""
    lower, upper = seen.window.bounding_box
    middle = (lower + upper) / 2.0
    place = [float(c) for c in middle + distance * way]
    if isinstance(seen.whole, Strip):
        place[-1] = float(middle[-1])
    with mpmath.workdps(50):
        value = field.at(tuple(place), digits=40) if precise else mpmath.mpf(float(field.value([place])[0]))
        exact = [mpmath.mpf(c) for c in place]
        log = mpmath.log(mpmath.sqrt(mpmath.fsum(c * c for c in exact)))
        if isinstance(at_infinity, tuple) and at_infinity[0] == "log":
            value -= at_infinity[1] * log
        elif isinstance(at_infinity, tuple):
            value -= mpmath.fsum(mpmath.mpf(v) * c for v, c in zip(at_infinity[1], exact, strict=True))
            value += mpmath.mpf(at_infinity[2]) / (2 * mpmath.pi) * log
    return float(value)


def check_infinite_quantities(
    specs: Mapping[str, QuantitySpec], shape: Shape, at_infinity: AtInfinity
) -> None:
    """Refuse integrals that are infinite or are not carried by the boundary alone.

    The energy is the integral of u n . K grad u over the bodies if what is left at infinity vanishes: u
    decays, or is bounded in the plane.

    Raises
    ------
    ProblemError
        Naming the quantity.
    """
    infinite = [piece.name for piece in shape.pieces if isinstance(piece, Plane)]
    for name, spec in specs.items():
        kind, where = getattr(spec, "kind", None), getattr(spec, "where", None)
        piece = where[0] if isinstance(where, tuple) and where else where
        if kind != "exit gradient" and piece in infinite:
            raise ProblemError(f"quantity {name!r}: piece {piece!r} is unbounded; no {kind} is taken over it")
        if kind == "added mass" and infinite:
            raise ProblemError(f"quantity {name!r}: an added mass belongs to bodies in unbounded fluid")
        bodies_carry = at_infinity == "decay" or (at_infinity == "bounded" and shape.dim == 2)
        if kind == "energy" and (infinite or not bodies_carry):
            raise ProblemError(
                f"quantity {name!r}: the energy of an unbounded problem is taken only outside bodies, where "
                f"u decays (or is bounded, in the plane); here at_infinity is {at_infinity!r}"
            )


def check_net_flux(shape: Shape, pieces: Iterable[Piece], at_infinity: AtInfinity, tensor: Array) -> None:
    """Refuse flux data around bodies in the plane whose sum is not the charge at infinity.

    u ~ q log |x| carries the flux 2 pi q sqrt(det K) outwards through a great circle, which the bodies must
    give: the integral of n . K grad u over them, n into the bodies, is its negative. In space a net flux
    decays like 1/r.

    Raises
    ------
    ProblemError
        With both numbers.
    """
    kept = list(pieces)
    if shape.dim == 3 or any(isinstance(piece.boundary, Plane) for piece in kept):
        return
    charge = 0.0
    if isinstance(at_infinity, tuple):
        charge = at_infinity[1] if at_infinity[0] == "log" else -at_infinity[2] / (2.0 * math.pi)
    wanted = -2.0 * math.pi * charge * math.sqrt(float(np.linalg.det(tensor)))
    net = total = 0.0
    for piece in kept:
        points, _, weights = piece.quadrature(15, cell=shape.size / 16.0)
        values = piece.data(points)
        net, total = net + float(weights @ values), total + float(weights @ np.abs(values))
    if not abs(net - wanted) <= 100 * BALANCE * (total + abs(wanted)):
        raise ProblemError(
            f"flux data around bodies in the plane must carry the charge at infinity: their integral is "
            f"{net:.6g}, but at_infinity={at_infinity!r} needs {wanted:.6g}"
        )


def scaled_at_infinity(at_infinity: AtInfinity, length: float, value: float) -> AtInfinity:
    """Return the condition of a dimensional twin; log |x| changes by a constant, which is bounded."""
    if not isinstance(at_infinity, tuple):
        return at_infinity
    if at_infinity[0] == "log":
        return ("log", at_infinity[1] * value)
    return ("flow", tuple(v * value / length for v in at_infinity[1]), at_infinity[2] * value)
