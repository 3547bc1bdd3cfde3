"""On the boundary, at corners and singular points `at` gives the limit where there is one, else FieldError.

A limit is looked for along directions into the shape, at three distances that fall by the same factor: the
changes must die away, and all directions must lead to the same number. Slits and piles have a limit a lip,
which is asked for by its side. Many digits are asked for where the field is cheap.
"""

import itertools

import mpmath
import numpy as np
import pytest

import laplace_verify as lv
from laplace_verify.measure.windows import through_window
from laplace_verify.references import confirmation_of

IDS = [case.id for case in lv.catalogue.select(ill_posed=False)]
DIE = 0.2  # how much of a change is left when the distance falls by `STEP` digits: r^0.06 and better
MOST = 10  # points of a case
STEP = 15  # powers of ten between distances, at most: interfaces are told apart to 50 digits
TURNS = 100  # directions tried in the plane, and twice as many in space


def digits_of(case):
    """200 where a closed form is cheap, 60 elsewhere, less for a fit."""
    cheap = confirmation_of(case) is not None and confirmation_of(case)[0] == "balls"
    return min(200 if cheap else 60, case.exact.most_digits)


def exact(point):
    """Coordinates as decimals: short ones are meant, others are those of the float."""
    texts = ((format(round(float(c), 13) + 0.0, ".12g"), float(c)) for c in point)
    return tuple(text if abs(float(text) - c) < 4e-16 else repr(c) for text, c in texts)


def _off_decimals(point):
    """How far a point is from one in short decimals: on a curved edge others lie beside it by a rounding."""
    return float(np.abs(point - np.round(point, 12)).max())


def places(case):
    """Singular points and corners, then points of every piece."""
    shape, found = through_window(case).problem.shape if case.window else case.problem.shape, []

    def on(points):
        return [p for p in points if shape.contains([p], tol=1e-9 * shape.extent)[0]]

    # others cannot be named: the float beside an irrational point is not it
    found += on(s.point for s in case.exact.singularities if _off_decimals(np.array(s.point)) < 1e-15)
    found += [min(junction.points, key=_off_decimals) for junction in shape.junctions]
    for share, piece in itertools.product((0.25, 0.4), shape.pieces):
        found.append(
            piece.point(np.full((1, 2 if shape.dim == 3 else 1), share) if shape.dim > 1 else [0.0])[0]
        )
    kept = []
    for p in found:
        if all(np.abs(np.subtract(p, q)).max() > 1e-9 * shape.extent for q in kept):
            kept.append(np.asarray(p, dtype=float))
    return shape, kept[:MOST]


def inwards(shape, point, generator):
    """Up to three directions from a point into the shape, far from each other."""
    tried = generator.normal(size=(TURNS * (shape.dim - 1) or 2, shape.dim))
    tried /= np.linalg.norm(tried, axis=1)[:, None]
    close = point + 1e-5 * shape.extent * tried
    depth = np.where(shape.contains(close), shape.distance(close), 0.0) / shape.extent
    good = tried[depth > 2e-6]
    chosen = list(good[:1])
    while len(chosen) < min(3, len(good)):
        away = np.min([np.linalg.norm(good - d, axis=1) for d in chosen], axis=0)
        chosen.append(good[np.argmax(away)])
    return chosen


def limit(function, point, direction, digits):
    """The numbers a function tends to along a direction and how far off they may be, None if it does not."""
    unit = [mpmath.mpf(float(c)) for c in direction]
    rows = []
    for k in (1, 2, 3):
        reach = mpmath.mpf(10) ** (-min(digits // 5, STEP) * k)
        rows.append(function([mpmath.mpf(c) + reach * d for c, d in zip(point, unit, strict=True)], None))
    first, last = (
        max(abs(a - b) for a, b in zip(before, after, strict=True))
        for before, after in itertools.pairwise(rows)
    )
    noise = (1 + max(abs(a) for a in rows[2])) * mpmath.mpf(10) ** (3 - digits)
    return (rows[2], 2 * last + noise) if last <= DIE * first + noise else None


def agree(one, other):
    """Whether two sets of numbers, each with its tolerance, are one."""
    return all(abs(a - b) <= one[1] + other[1] for a, b in zip(one[0], other[0], strict=True))


def given(function, sides, point):
    """The numbers that a function gives on some sides, and its last refusal."""
    found, refusal = [], None
    for side in sides:
        try:
            found.append((function(point, side), 0))
        except lv.FieldError as error:
            refusal = error
    return found, refusal


def flaw(function, lips, point, directions, digits):
    """What is wrong with the numbers of a function at a point of the closed shape, "" if nothing is."""
    limits = [limit(function, point, d, digits) for d in directions]
    one = None not in limits and all(agree(a, b) for a, b in itertools.combinations(limits, 2))
    found, refusal = given(function, (None,), point)
    if refusal is not None and "two values" in str(refusal):
        found, _ = given(function, lips, point)
        one = None not in limits if len(found) == len(lips) else one
    if not found:
        return f"has the limit {limits[0][0]} but is refused: {refusal}" if one else ""
    if not one:
        return f"has no limit ({limits}) but {found} is returned"
    strange = [tends for tends in limits if not any(agree(tends, numbers) for numbers in found)]
    return f"tends to {strange[0][0]}, not {found}" if strange else ""


def flaws(case, field, digits):
    """Lines that name point and flaw."""
    shape, points = places(case)
    generator = np.random.default_rng(len(case.id))
    functions = {
        "u": lambda x, side: (field.at(x, digits, side=side),),
        "grad u": lambda x, side: field.gradient_at(x, digits, side=side),
    }
    with mpmath.workdps(digits + 20):
        for place in points:
            directions = inwards(shape, place, generator)
            for name, function in functions.items():
                found = flaw(function, (1, -1), exact(place), directions, digits)
                if found:
                    yield f"{case.id}: {name} at {place} {found}"


@pytest.mark.long
@pytest.mark.parametrize("id_", IDS)
def test_limits_where_they_exist_and_refusals_where_they_do_not(id_):
    case = lv.catalogue[id_]
    assert not list(flaws(case, case.exact, digits_of(case)))


def _refuse(point, _):
    if point[0] == "0":
        raise lv.FieldError("no value")
    return (abs(point[0]) + point[1],)


@pytest.mark.parametrize(
    ("function", "words"),
    [
        (lambda x, _: (mpmath.mpf(x[0]),), ""),
        (lambda x, _: (mpmath.mpf(x[0] if x[0] != "0" else "1e-20"),), "tends to"),
        (_refuse, "has the limit"),
        (lambda x, _: (mpmath.atan2(mpmath.mpf(x[1]), x[0]),), "has no limit"),
        (
            lambda x, _: (mpmath.log(mpmath.hypot(*map(mpmath.mpf, x)) + mpmath.mpf("1e-300")),),
            "has no limit",
        ),
    ],
)
def test_wrong_limits_and_wrong_refusals_are_seen(function, words):
    with mpmath.workdps(80):
        found = flaw(function, (1, -1), exact((0.0, 0.0)), [(0.6, 0.8), (0.8, -0.6)], 60)
    assert found == "" if not words else words in found, found
