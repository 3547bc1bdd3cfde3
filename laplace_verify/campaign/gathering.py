"""Records of parts of a run (one study, one check) and the record of the whole put together from them."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from datetime import UTC, datetime

from laplace_verify.campaign.identity import case_info, environment, solver_identity
from laplace_verify.campaign.record import Record, Settings
from laplace_verify.cases import catalogue
from laplace_verify.errors import RecordError
from laplace_verify.measure import Study
from laplace_verify.principles import LAWS, Check
from laplace_verify.problems import Case
from laplace_verify.solvers import Adapter
from laplace_verify.version import __version__

__all__ = ["merged_record", "now", "partial_record"]


def now() -> str:
    """Return the time in UTC, to the second."""
    return datetime.now(UTC).isoformat(timespec="seconds")


def partial_record(solver: Adapter, seed: int, case: Case | None, result: Study | Check) -> Record:
    """Return the record of one study (with its case) or one check."""
    at = now()
    return Record(
        package_version=__version__,
        solver=solver_identity(solver),
        environment=environment(),
        settings=Settings(seed=seed),
        started=at,
        finished=at,
        studies=(result,) if isinstance(result, Study) else (),
        checks=(result,) if isinstance(result, Check) else (),
        cases=(case_info(case),) if case is not None else (),
    )


def merged_record(parts: Sequence[Record], command: str = "") -> Record:
    """Return one record of all parts, sorted by the catalogue and the laws, whatever order they came in.

    Raises
    ------
    RecordError
        If there are no parts.
    """
    if not parts:
        raise RecordError("there are no results to gather: no study and no check has run")
    cases = {info.id: info for part in parts for info in part.cases}
    studies = {study.case_id: study for part in parts for study in part.studies}
    checks = {check.law: check for part in parts for check in part.checks}
    ids = [id_ for id_ in catalogue if id_ in studies]
    ids += sorted(studies.keys() - set(ids))  # the user's own cases
    return replace(
        parts[0],
        settings=replace(parts[0].settings, cases=tuple(ids), principles=bool(checks)),
        command=command,
        started=min(part.started for part in parts),
        finished=max(part.finished for part in parts),
        studies=tuple(studies[id_] for id_ in ids),
        checks=tuple(checks[law] for law in LAWS if law in checks),
        cases=tuple(cases[id_] for id_ in ids),
    )
