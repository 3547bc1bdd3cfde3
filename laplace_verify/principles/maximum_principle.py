"""Maximum principle.

A solution of div(K grad u) = 0, continuous on the closed shape, takes its largest and its smallest value
on the boundary:

    min f <= u <= max f      where u = f on the boundary.

(Gilbarg & Trudinger, Elliptic Partial Differential Equations of Second Order, 2nd edition, theorem 3.1;
Protter & Weinberger, Maximum Principles in Differential Equations, 1967, chapter 2; from memory,
unchecked.) Discrete solutions keep it exactly if the matrix is an M-matrix (five- and seven-point
formulas; linear elements on meshes without obtuse angles).

Conditions of validity: Dirichlet conditions on the whole boundary, K a number.

Data: boundary values of a harmonic field, or, unless the solver claims exponential convergence or is a
boundary element method (both assume smooth data), rough continuous ones such as |x - a| - 2 |y - b|, with
kinks on the boundary and no relation to any harmonic function. On a line data are two numbers. Their
range is found by sampling every piece and looking more closely about the largest and smallest samples.

Tolerance: if the solver declares "maximum principle" among its ``discrete_laws``, *exactly* at two sizes
(see `limits`). Otherwise what sticks out of the range must vanish *in the limit*, at order one, or the
declared order if that is less: data with kinks allow no more.
"""

from __future__ import annotations

import numpy as np
from hypothesis import strategies as st

from laplace_verify.principles import strategies
from laplace_verify.principles._shapes import shape_of_kind
from laplace_verify.principles.law import Finding, Law, Trial
from laplace_verify.principles.limits import Measurement, declared_or_in_the_limit, rate_of
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reading import seen
from laplace_verify.problems import Piece
from laplace_verify.solvers import Adapter

__all__ = ["MAXIMUM_PRINCIPLE", "dirichlet_needed", "kinked"]

DEGREE = 3
COARSE = {1: 1, 2: 481, 3: 33}  # samples a piece; in space a side of a square of them
ZOOMS = 4
LEVELS = st.integers(1, 9)  # off zero: values lost from the data then leave their range
FACTORS = st.integers(-2, 2)
KINKS = (0.5, 0.25, 0.75)
NOT_ZERO = st.sampled_from((1, -1, 2, -2))


def dirichlet_needed(solver: Adapter) -> str | None:
    """Return why no problem with Dirichlet conditions all round and a number for K can be drawn, or None."""
    if "dirichlet" not in solver.conditions:
        return (
            f"{solver.name} does not declare Dirichlet conditions, which the law needs on the whole boundary"
        )
    return strategies.beyond_numbers(solver)


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    smooth = strategies.posed(solver.dims, solver.shapes, {"dirichlet"}, degree=DEGREE)
    assumes_smooth = isinstance(solver.order, str) or solver.kind == "boundary element"
    return smooth if assumes_smooth else smooth | kinked(strategies.drawable(solver.dims, solver.shapes))


@st.composite
def kinked(draw: st.DrawFn, found: list[str], places: tuple[float, ...] = KINKS) -> Posed:
    """Draw a shape with data that have kinks: m + sum of k_i |x_i - a_i|, a inside the bounding box.

    `places` are those of the kinks in parts of its sides.
    """
    shape = draw(shape_of_kind(found))
    lower, upper = shape.bounding_box
    terms = [str(draw(LEVELS))]
    for axis, (low, high) in enumerate(zip(lower.tolist(), upper.tolist(), strict=True)):
        factor = draw(FACTORS if axis else NOT_ZERO)
        place = low + draw(st.sampled_from(places)) * (high - low)
        if factor:
            size = "" if abs(factor) == 1 else f"{abs(factor)} * "
            kink = f"{size}sqrt(({'xyz'[axis]} - {place:g})**2)"
            terms.append(f"{'-' if factor < 0 else ''}{kink}")
    return Posed(shape=shape, conditions={}, data=" + ".join(terms))


def _range(trial: Trial) -> tuple[float, float]:
    """Return the smallest and the largest value of the data."""
    ends = [(_extreme(piece, -1.0), _extreme(piece, 1.0)) for piece in trial.problem.pieces]
    return min(low for low, _ in ends), max(high for _, high in ends)


def _extreme(piece: Piece, sign: float) -> float:
    """Return the largest (sign 1) or smallest (sign -1) value of the data on a piece."""
    dim = piece.boundary.dim
    axes, count = max(dim - 1, 1), COARSE[dim]
    lower, upper = np.zeros(axes), np.ones(axes)
    best = -np.inf
    for _ in range(ZOOMS):
        grid = np.meshgrid(
            *(np.linspace(a, b, count) for a, b in zip(lower, upper, strict=True)), indexing="ij"
        )
        t = np.stack([axis.ravel() for axis in grid], axis=1)
        values = sign * piece.data(piece.point(t[:, 0] if axes == 1 else t))
        place = t[int(np.argmax(values))]
        best = max(best, float(np.max(values)))
        step = (upper - lower) / max(count - 1, 1)
        lower, upper = np.clip(place - step, 0.0, 1.0), np.clip(place + step, 0.0, 1.0)
    return sign * best


def _measure(trial: Trial, size: int) -> Measurement:
    low, high = _range(trial)
    points, values = seen(trial, size)
    out = np.maximum(values - high, low - values)
    worst, unit = int(np.argmax(out)), trial.posed.size
    place = tuple(round(c, 6) for c in points[worst].tolist())
    return Measurement(
        violation=max(float(out[worst]), 0.0) / unit,
        points=points[worst : worst + 1],
        words=f"at {place} the answer is {values[worst]:.6g}, the data lie between {low:.6g} and {high:.6g}",
        body=(
            f"low, high = {low!r}, {high!r}  # of the data",
            f"values = answer.value_at({[tuple(points[worst].tolist())]})",
            f"max(values.max() - high, low - values.min()) / {unit!r}",
        ),
    )


def _judge(trial: Trial) -> Finding:
    rate = min(rate_of(trial), 1.0)
    return declared_or_in_the_limit(MAXIMUM_PRINCIPLE.name, trial, _measure, rate)


MAXIMUM_PRINCIPLE = Law(
    name="maximum principle",
    statement="no value is larger than the largest, or smaller than the smallest, on the boundary",
    inapplicable=dirichlet_needed,
    problems=_problems,
    judge=_judge,
)
