"""Comparison.

If the data of v are nowhere smaller than those of u - values on Dirichlet pieces, flux densities n . K grad
on Neumann pieces, n . K grad + alpha on Robin pieces - then v >= u in the whole shape: v - u has data >= 0
and so no negative minimum, neither inside nor, by Hopf's lemma, on a Neumann or Robin piece (Protter &
Weinberger, Maximum Principles in Differential Equations, 1967, chapter 2, theorems 5 to 9; Gilbarg &
Trudinger, 2nd edition, theorem 3.3 and lemma 3.4; from memory, unchecked).

Conditions of validity: at least one Dirichlet or Robin piece; K a number.

Data: u is any harmonic field, v = u + a . x + c with c just so large that the data of v - u on Dirichlet
and Robin pieces are >= 0. The sign of a is the one with which a . x flows out through fewer Neumann pieces;
these become Dirichlet pieces or, without such, Robin ones. So whatever enters with a wrong sign lowers the
answer where it should raise it.

Tolerance: the largest u_h - v_h, relative to the largest boundary value, *exactly* if the solver declares
"comparison" among its ``discrete_laws`` (M-matrix schemes), else *in the limit* at the declared order (see
`limits`).
"""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
from hypothesis import strategies as st

from laplace_verify import fields
from laplace_verify.arrays import Array
from laplace_verify.fields import Field
from laplace_verify.principles import strategies
from laplace_verify.principles.law import Finding, Law, Trial
from laplace_verify.principles.limits import Measurement, declared_or_in_the_limit, rate_of
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.side_by_side import largest, together
from laplace_verify.problems import Piece
from laplace_verify.solvers import Adapter

__all__ = ["COMPARISON"]

DEGREE = 3
ON_PIECE = 65  # points at which the data of v - u are looked at
ALONG = 1e-12
MARGIN = 1.0  # added on curved pieces, whose extremes may lie between these points


def _inapplicable(solver: Adapter) -> str | None:
    if not solver.conditions & {"dirichlet", "robin"}:
        return f"{solver.name} does not declare Dirichlet or Robin conditions, which fix the level"
    return strategies.beyond_numbers(solver)


@st.composite
def _pairs(draw: st.DrawFn, solver: Adapter) -> Posed:
    drawn = draw(strategies.posed_for(solver, materials={"scalar"}, degree=DEGREE))
    slope = draw(strategies.affine_fields(drawn.shape.dim))
    slope = min(slope, -1 * slope, key=lambda way: len(_draining(drawn, way)))
    holding: str | float = "dirichlet" if "dirichlet" in solver.conditions else 1.0
    conditions = {**drawn.conditions, **dict.fromkeys(_draining(drawn, slope), holding)}
    lower = replace(
        drawn, conditions={name: kind for name, kind in conditions.items() if kind != "dirichlet"}
    )
    raised = slope + fields.affine((0,) * lower.shape.dim, _lift(lower, slope))
    if lower.field is None:
        raise TypeError("a field is needed to add to")
    upper = replace(lower, field=lower.field + raised)
    return replace(lower, beside={"upper": upper}, note=f"; raised by {raised.formula}, whose data are >= 0")


def _draining(posed: Posed, slope: Field) -> list[str]:
    """Return the names of the Neumann pieces through which a field would flow out."""
    pieces = posed.problem().pieces
    return [piece.name for piece in pieces if piece.kind == "neumann" and np.min(_inflow(piece, slope)) < 0.0]


def _inflow(piece: Piece, field: Field) -> Array:
    """Return n . grad of a field at points of a piece, 0 where it runs along it up to rounding."""
    points, normals, _ = piece.sample(ON_PIECE)
    flow = np.sum(normals * field.gradient(points), axis=1)
    return np.where(np.abs(flow) < ALONG, 0.0, flow)


def _lift(posed: Posed, slope: Field) -> int:
    """Return the smallest whole number that, added to a field, leaves none of its data below 0."""
    outline, least = posed.shape.outline(ON_PIECE), []
    k = posed.conductivity
    for piece in posed.problem().pieces:
        if piece.kind == "neumann":
            continue  # no constant reaches it
        data = slope.value(outline[piece.name])
        alpha = posed.conditions.get(piece.name)
        if isinstance(alpha, int | float) and isinstance(k, int | float):
            data = data + k / alpha * np.min(_inflow(piece, slope))
        least.append(float(np.min(data)) - (MARGIN if piece.curved else 0.0))
    return math.ceil(-min(least) - ALONG)


def _problems(solver: Adapter) -> st.SearchStrategy[Posed]:
    return _pairs(solver)


def _measure(trial: Trial, size: int) -> Measurement:
    points, lower, beside = together(trial, size)
    upper = beside["upper"]
    return largest(
        points,
        lower - upper,
        max(trial.posed.size, trial.companions["upper"].posed.size),
        "at {place} the answer is {lower}, and {upper} for larger data",
        "(answer.value_at(x) - upper.value_at(x))[0]",
        {"lower": lower, "upper": upper},
    )


def _judge(trial: Trial) -> Finding:
    return declared_or_in_the_limit(COMPARISON.name, trial, _measure, rate_of(trial))


COMPARISON = Law(
    name="comparison",
    statement="where the data are larger, the solution is nowhere smaller",
    inapplicable=_inapplicable,
    problems=_problems,
    judge=_judge,
)
