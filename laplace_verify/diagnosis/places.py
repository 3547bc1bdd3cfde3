"""Where the errors of the failing cases sit.

Of the points of the finest level, those with the largest 5 % of |u_h - u| are assigned to the nearest
boundary piece (by its drawn outline) and so to a condition. A condition is named if it holds clearly more
of them than of all points. Singular points are treated alike: the largest errors within a tenth of the
case's size. Score: share of the failing cases in which it is so, times 0.8.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt
from scipy.spatial import cKDTree

from laplace_verify.arrays import Array
from laplace_verify.campaign.record import CaseInfo, Record
from laplace_verify.diagnosis.finding import Finding, case_list, counted
from laplace_verify.measure.results import Study

__all__ = ["crowded_places", "places"]

_WEIGHT = 0.8
_SHARE = 0.6  # of the failing cases, and of the largest errors
_LIFT = 1.5  # how many times more than of all points
_TOP = 0.05
_MAPPED = "failing cases with an error map"


def places(record: Record, failing: Sequence[Study]) -> list[Finding]:
    """Return the places near which the largest errors of most failing cases sit."""
    found: dict[str, list[Study]] = {}
    seen = 0
    for study in failing:
        info = record.case(study.case_id)
        if info is None or study.error_map is None or len(study.error_map.errors) < 20:
            continue
        seen += 1
        for place in crowded_places(study, info):
            found.setdefault(place, []).append(study)
    return [
        Finding(
            text=f"The largest errors sit {place} in {counted(len(studies), seen, _MAPPED)}",
            evidence=f"largest {_TOP:.0%} of the errors on the finest level; cases: {case_list(studies)}",
            score=_WEIGHT * len(studies) / len(failing),
            studies=tuple(studies),
            place=place,
        )
        for place, studies in sorted(found.items())
        if len(studies) >= _SHARE * seen
    ]


def crowded_places(study: Study, info: CaseInfo) -> list[str]:
    """Return, in words, near which conditions and points the largest errors of one study crowd."""
    if study.error_map is None:
        return []
    points = np.asarray(study.error_map.points, dtype=np.float64)
    errors = np.abs(np.asarray(study.error_map.errors, dtype=np.float64))
    top = np.argsort(errors, kind="stable")[-max(int(_TOP * len(errors)), 5) :]
    crowded = []
    nearest = _nearest_condition(points, info)
    for condition in sorted(set(nearest.tolist())):
        share, base = float(np.mean(nearest[top] == condition)), float(np.mean(nearest == condition))
        if share >= _SHARE and share >= _LIFT * base:
            crowded.append(f"next to pieces with a {condition.capitalize()} condition")
    if info.regularity is not None and info.regularity.singular_points:
        distance, _ = cKDTree(np.asarray(info.regularity.singular_points, dtype=np.float64)).query(points)
        close = np.asarray(distance) < 0.1 * float(np.ptp(points, axis=0).max())
        share, base = float(np.mean(close[top])), float(np.mean(close))
        if share >= _SHARE and share >= _LIFT * base:
            crowded.append("around the singular points of the solution")
    return crowded


def _nearest_condition(points: Array, info: CaseInfo) -> npt.NDArray[np.str_]:
    """Return the condition of the piece nearest to each point; an empty array if no outline is known."""
    drawn = [piece for piece in info.pieces if piece.outline]
    if not drawn:
        return np.array([], dtype=np.str_)
    distances = np.array(
        [cKDTree(_dense(np.asarray(piece.outline, dtype=np.float64))).query(points)[0] for piece in drawn]
    )
    conditions = np.array([piece.condition for piece in drawn], dtype=np.str_)
    nearest: npt.NDArray[np.str_] = conditions[np.argmin(distances, axis=0)]
    return nearest


def _dense(outline: Array) -> Array:
    """Return a polyline with 20 points on every segment; points in space and end points as they are."""
    if outline.shape[1] != 2 or len(outline) < 2:
        return outline
    t = np.linspace(0.0, 1.0, 20, endpoint=False)[:, np.newaxis, np.newaxis]
    between = outline[:-1] + t * np.diff(outline, axis=0)
    return np.vstack([between.reshape(-1, 2), outline[-1:]])
