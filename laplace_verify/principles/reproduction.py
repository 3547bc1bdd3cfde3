"""How far an answer misses a field whose data it was given, for the laws on constants and affine fields."""

from __future__ import annotations

import numpy as np
from hypothesis import strategies as st

from laplace_verify.principles import strategies
from laplace_verify.principles.law import Trial
from laplace_verify.principles.limits import Measurement
from laplace_verify.principles.posed import Posed
from laplace_verify.principles.reading import seen
from laplace_verify.solvers import Adapter

__all__ = ["inapplicable", "misses", "problems"]


def inapplicable(solver: Adapter) -> str | None:
    """Return why no problem can be drawn, or None."""
    return strategies.beyond(solver)


def problems(solver: Adapter, degree: int) -> st.SearchStrategy[Posed]:
    """Return a strategy for problems with a field of degree 0 or 1 within the declared capabilities."""
    return strategies.posed_for(solver, degree=degree, floating=True)


def misses(trial: Trial, size: int) -> Measurement:
    """Return max |u_h - u| over the answer's points, divided by the largest boundary value."""
    field = trial.posed.field
    if field is None:
        raise TypeError("a field is needed to compare with")
    points, values = seen(trial, size)
    exact = field.value(points)
    gap = values - exact
    # the level of a pure Neumann answer may be left open: half the range of the gap is left
    free = trial.problem.constant is not None and not trial.solver.fixes_constant
    shown = [int(np.argmax(gap)), int(np.argmin(gap))] if free else [int(np.argmax(np.abs(gap)))]
    violation = (gap.max() - gap.min()) / 2.0 if free else np.abs(gap).max()
    unit, worst = trial.posed.size, shown[0]
    place = tuple(round(c, 6) for c in points[worst].tolist())
    return Measurement(
        violation=float(violation) / unit,
        points=points[shown],
        words=f"at {place} the answer is {values[worst]:.6g} instead of {exact[worst]:.6g}"
        + (" and elsewhere off by another amount" if free else ""),
        body=(
            f"points = {[tuple(point) for point in points[shown].tolist()]}",
            "gap = answer.value_at(points) - exact.value(points)",
            f"{'(gap.max() - gap.min()) / 2' if free else 'abs(gap).max()'} / {unit!r}",
        ),
    )
