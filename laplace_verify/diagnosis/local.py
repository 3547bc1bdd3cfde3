"""Where the error of the failing cases is largest, and how slowly it falls there.

The error of a scheme whose mistake sits in a boundary closure solves the discrete equation with wrong data,
so that it is largest at that piece (maximum principle) and spreads inward from it; a mistake in the equation
inside, or at an interface, leaves the largest error there. On the finest level a place is counted if its
error (within two mesh widths) comes within 5 % of the largest and falls half an order slower than the study
expects, or half an order slower than that of the interior. Inside counts only where no piece or interface
comes as near. Nothing is said where only the inside is measured (a declared clearance), or where the error
grows as it does when the equations are close to singular. Score: share of the failing cases, times 0.8.
"""

from __future__ import annotations

from collections.abc import Sequence
from statistics import median

from laplace_verify.campaign.record import CaseInfo, Record
from laplace_verify.diagnosis.finding import Finding, case_list, counted
from laplace_verify.measure.results import Study

__all__ = ["slow_places"]

_WEIGHT = 0.8
_SHARE = 0.6
_NEAR = 0.95  # of the largest error
_LOSS = 0.5  # of an order
_VALUES = ("max", "L1", "L2")
_FALLS = 0.2  # order from which an error is said to fall
_GROWS = -0.5  # order: the error is no closer to a limit at the place than anywhere else
_DERIVATIVES = ("next to pieces with a Neumann condition", "next to pieces with a Robin condition")
_EITHER = "next to pieces with a Neumann or Robin condition"  # one routine may assemble both
_INSIDE = "inside, away from all pieces"


def slow_places(record: Record, failing: Sequence[Study]) -> list[Finding]:
    """Return the kinds of places at which the errors of most failing cases are largest and fall slowly."""
    found: dict[str, list[Study]] = {}
    known = 0
    for study in failing:
        info = record.case(study.case_id)
        if info is None or not any(_last_errors(study).values()):
            continue
        known += 1
        for place in _slow_kinds(study, info):
            found.setdefault(place, []).append(study)
    either = [study for kind in _DERIVATIVES for study in found.get(kind, [])]
    if len({id(study) for study in either}) > max(len(found.get(kind, [])) for kind in _DERIVATIVES):
        found[_EITHER] = [study for study in failing if any(study is other for other in either)]
    return [
        _finding(record, place, studies, known, len(failing))
        for place, studies in sorted(found.items())
        if len(studies) >= _SHARE * known
    ]


def _slow_kinds(study: Study, info: CaseInfo) -> list[str]:
    """Return the kinds of places at which the error of one study is largest and falls too slowly."""
    errors, orders, kinds = _last_errors(study), study.local_orders, _kinds(study, info)
    largest = max(errors.values())
    near = [name for name, error in errors.items() if error >= _NEAR * largest]
    if set(errors) == {"interior"} or any((orders.get(name) or 0.0) < _GROWS for name in near):
        return []
    inside = orders.get("interior")
    expected = [study.orders[norm].expected for norm in _VALUES if norm in study.orders]
    due = [order for order in expected if isinstance(order, float | int)]
    limits = [limit - _LOSS for limit in (inside, min(due, default=None)) if limit is not None]
    slow = {
        kinds[name]
        for name in near
        if (order := orders.get(name)) is not None and any(order <= limit for limit in limits)
    }
    return sorted(slow - {_INSIDE} or slow)


def _finding(record: Record, place: str, studies: Sequence[Study], known: int, failing: int) -> Finding:
    """Put into words where the errors are largest and at what orders they fall there and elsewhere."""
    there: list[float] = []
    inside: list[float] = []
    elsewhere: list[float] = []
    for study in studies:
        info = record.case(study.case_id)
        kinds = {} if info is None else _kinds(study, info)
        for name, order in study.local_orders.items():
            if order is not None and name in kinds:
                own = kinds[name] == place or (place == _EITHER and kinds[name] in _DERIVATIVES)
                group = there if own else inside if name == "interior" else elsewhere
                group.append(order)
    slow = median(there)
    said = [f"falls at order {slow:.1f} there" if slow >= _FALLS else "does not fall there"]
    never = "not at all" if slow >= _FALLS else "nor"
    for orders, where in ((inside, "inside"), (elsewhere, "next to other pieces")):
        if orders:
            order = median(orders)
            said.append(f"at {order:.1f} {where}" if order >= _FALLS else f"{never} {where}")
    return Finding(
        text=f"The largest error lies {place} in {counted(len(studies), known, 'failing cases')} and "
        + ", ".join(said)
        + ("; look at the equation inside, or at what every case uses" if place == _INSIDE else ""),
        evidence=f"orders of the largest error within two mesh widths, medians; cases: {case_list(studies)}",
        score=_WEIGHT * len(studies) / failing,
        studies=tuple(studies),
        place=place,
    )


def _last_errors(study: Study) -> dict[str, float]:
    """Return place -> largest error on the finest level, corners left out: they belong to their pieces."""
    return {
        place: errors[-1]
        for place, errors in study.local.items()
        if errors and errors[-1] is not None and not place.startswith("corner ")
    }


def _kinds(study: Study, info: CaseInfo) -> dict[str, str]:
    """Return place -> its kind in words, as far as it is known."""
    conditions = {piece.name: piece.condition for piece in info.pieces}
    found = {}
    for place in _last_errors(study):
        if place == "interior":
            found[place] = _INSIDE
        elif place.startswith("interface "):
            found[place] = "at interfaces"
        elif conditions.get(place) == "axis":
            found[place] = "at the axis of symmetry"
        elif conditions.get(place) == "periodic":
            found[place] = "next to periodic pieces"
        else:
            found[place] = f"next to pieces with a {conditions.get(place, 'missing').capitalize()} condition"
    return found
