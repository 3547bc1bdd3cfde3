"""Whether the iteration of a solver stops early: one size solved again with a tighter tolerance.

It is done for solvers whose function has a parameter `tolerance` with a number for its default. The error of
the iteration adds to that of the discretisation, so an order can fall, or an error stay up, for its sake.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from laplace_verify.measure.results import Level
from laplace_verify.measure.signs import Sign

if TYPE_CHECKING:
    from collections.abc import Sequence

    from laplace_verify.measure.running import Runner

__all__ = ["iteration_remarks"]

TIGHTER = 0.01
CHANGED = 0.1  # of the error: more than this was the iteration's


def iteration_remarks(runner: Runner, levels: Sequence[Level]) -> list[Sign]:
    """Return a remark if a tolerance a hundred times tighter changes the L2 error of the finest size."""
    tolerance = runner.solver.default("tolerance")
    if tolerance is None or not levels or "L2" not in levels[-1].errors:
        return []
    last = levels[-1]
    try:
        again = runner.run(last.size, tolerance=TIGHTER * tolerance).level.errors["L2"]
    except (Exception, SystemExit) as cause:
        text = (
            f"size {last.size} broke with the tolerance {TIGHTER * tolerance:.1e} in place of "
            f"{tolerance:.1e}: {type(cause).__name__}: {cause}"
        )
        return [Sign(kind="breaks when tightened", text=text)]
    error = last.errors["L2"]
    if abs(again - error) <= CHANGED * error:
        return []
    text = (
        f"the iteration stops early: a tolerance of {TIGHTER * tolerance:.1e} in place of {tolerance:.1e} "
        f"changes the L2 error at size {last.size} from {error:.2e} to {again:.2e}"
    )
    return [Sign(kind="early stop", text=text)]
