"""The seeded-fault exercise: what the suite catches of known mistakes, and whether it points the right way.

Every fault is run on the cases that should show it and on contrasting ones, and so is the sound sample it was
made from. A fault whose effect is "order" is caught by a FAIL of a case or law; one whose effect is
"accuracy" by a verdict other than PASS or by a remark that the sound sample does not get; a "harmless" one
must neither FAIL nor stay open. Laws are tried in turn until one is broken. The first suspect is the first
that `diagnose` names, or the first new remark where nothing fails; it is right if it contains one of the
words that the fault expects.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Iterator, Sequence
from dataclasses import dataclass, replace

from laplace_verify.campaign import Record, verify
from laplace_verify.cases import catalogue
from laplace_verify.diagnosis.suspects import diagnose
from laplace_verify.errors import AdapterError, nearest_names
from laplace_verify.measure.results import Study
from laplace_verify.measure.verdict import Verdict
from laplace_verify.principles import LAWS, Check, check_principle
from laplace_verify.solvers.adapter import Adapter
from laplace_verify.solvers.samples import ALL, FAULTS, Fault

__all__ = ["Outcome", "chosen_faults", "contrast_for", "exercise"]

CONTRAST = (
    "rod-two-temperatures", "rod-fixed-and-flux", "plate-saddle", "plate-cubic", "plate-flux-top",
    "plate-convection-all-round", "plate-tensor-diagonal", "plate-tensor-oblique", "plate-layers-across",
    "l-shape-smooth", "l-shape-corner", "triangle-cubic", "disc-fourier", "annulus-flux-inside",
    "disc-convection", "pillar-section", "pipe-wall-two-temperatures", "plate-periodic-sides", "box-solid",
    "ball-solid", "float-losing-heat", "box-insulated-sides", "box-tensor-diagonal", "box-cooled-sides",
)  # fmt: skip
MOST_CONTRAST = 8
ACCEPTED = ("NOT_APPLICABLE", "NOT_RUN")


@dataclass(frozen=True, slots=True, kw_only=True)
class Outcome:
    """What became of one fault.

    `cases` and `laws` map names to verdicts, `sound` those of the sound sample on the same cases; `remarks`
    are those that the sound sample does not get.
    """

    name: str
    fault: Fault
    cases: dict[str, Verdict]
    laws: dict[str, Verdict]
    sound: dict[str, Verdict]
    remarks: tuple[str, ...]
    suspect: str

    @property
    def failing(self) -> list[str]:
        """Cases and laws that FAIL."""
        found = [name for name, verdict in self.cases.items() if verdict is Verdict.FAIL]
        return found + [f"law: {name}" for name, verdict in self.laws.items() if verdict is Verdict.FAIL]

    @property
    def law(self) -> str:
        """The law that is broken, "none", or "" if laws were not checked."""
        broken = [name for name, verdict in self.laws.items() if verdict is Verdict.FAIL]
        return broken[0] if broken else "none" if self.laws else ""

    @property
    def open(self) -> list[str]:
        """Cases that are neither PASS nor FAIL."""
        return [name for name, v in self.cases.items() if v in (Verdict.INCONCLUSIVE, Verdict.ERROR)]

    @property
    def caught(self) -> bool:
        """Whether the suite did what it should: see the module."""
        if self.fault.effect == "order":
            return bool(self.failing)
        if self.fault.effect == "accuracy":
            return bool(self.failing or self.open or self.remarks)
        return not self.failing and not self.open

    @property
    def suspected(self) -> bool:
        """Whether the first suspect names the right place."""
        return any(word.lower() in self.suspect.lower() for word in self.fault.suspects)


def chosen_faults(names: Iterable[str] | None = None) -> dict[str, Fault]:
    """Return the faults asked for, all of them by default.

    Raises
    ------
    AdapterError
        If there is no fault of a name; the nearest names are shown.
    """
    if names is None:
        return dict(FAULTS)
    chosen = {}
    for name in names:
        if name not in FAULTS:
            raise AdapterError(f"no seeded fault is called {name!r}; {nearest_names(name, FAULTS)}")
        chosen[name] = FAULTS[name]
    return chosen


def contrast_for(solver: Adapter, shown_by: Sequence[str]) -> list[str]:
    """Return up to eight other cases that a solver can do, from a fixed list that covers every feature."""
    found = [
        id_ for id_ in CONTRAST if id_ not in shown_by and solver.refuses(catalogue[id_].problem) is None
    ]
    return found[:MOST_CONTRAST]


def exercise(
    faults: dict[str, Fault],
    *,
    workers: int = 1,
    principles: bool = True,
    seed: int = 0,
    progress: Callable[[str], object] | None = None,
) -> Iterator[Outcome]:
    """Run every fault and yield what became of it.

    Parameters
    ----------
    faults
        Name -> fault.
    workers
        Child processes at a time.
    principles
        Whether laws are checked too, in turn until one is broken.
    seed
        Of everything random.
    progress
        Called with the name of a fault before it is run.
    """
    samples = {solver.name: solver for solver in ALL}
    usual: dict[str, dict[str, Study]] = {}  # sample -> case -> what the sound sample gets, run once
    for name, fault in faults.items():
        if progress is not None:
            progress(name)
        sound = samples[fault.sample]
        ids = [*fault.shown_by, *contrast_for(sound, fault.shown_by)]
        record = verify(fault.adapter, ids, principles=False, seed=seed, workers=workers)
        if principles:
            record = replace(record, checks=_until_broken(fault.adapter, seed))
        known = usual.setdefault(sound.name, {})
        new = [id_ for id_ in ids if id_ not in known]
        if new:
            ran = verify(sound, new, principles=False, seed=seed, workers=workers)
            known.update({study.case_id: study for study in ran.studies})
        yield _outcome(name, fault, record, [known[id_] for id_ in ids])


def _until_broken(solver: Adapter, seed: int) -> tuple[Check, ...]:
    """Return the checks of the laws in turn, up to the first that is broken."""
    checks: list[Check] = []
    for law in LAWS:
        checks.append(check_principle(solver, law, seed=seed))
        if checks[-1].verdict is Verdict.FAIL:
            break
    return tuple(checks)


def _outcome(name: str, fault: Fault, record: Record, usual: Sequence[Study]) -> Outcome:
    """Put together what a fault and its sound twin got."""
    known = {(study.case_id, what) for study in usual for what, _ in _remarked(study)}
    remarks = tuple(
        f"{study.case_id}: {text}"
        for study in record.studies
        for what, text in _remarked(study)
        if (study.case_id, what) not in known
    )
    return Outcome(
        name=name,
        fault=fault,
        cases=_verdicts(record.studies),
        laws={check.law: check.verdict for check in record.checks if check.verdict not in ACCEPTED},
        sound=_verdicts(usual),
        remarks=remarks,
        suspect=_first_suspect(record, remarks),
    )


def _verdicts(studies: Iterable[Study]) -> dict[str, Verdict]:
    """Return case -> verdict, cases that a solver cannot do left out."""
    return {study.case_id: study.verdict for study in studies if study.verdict not in ACCEPTED}


def _first_suspect(record: Record, remarks: Sequence[str]) -> str:
    """Return the first suspect, or what stands in for it where no study fails."""
    suspects = diagnose(record)
    if suspects:
        return suspects[0].text
    undecided = [s.reasons[0] for s in record.studies if s.verdict is Verdict.INCONCLUSIVE and s.reasons]
    broken = [f"law: {check.law}: {check.reason}" for check in record.checks if check.verdict is Verdict.FAIL]
    return next(iter([*broken, *undecided, *remarks]), "")


def _remarked(study: Study) -> list[tuple[str, str]]:
    """Return what is remarked of a study: the kind of a sign, or a norm that falls short, and the words."""
    short = [(norm, order.note) for norm, order in study.orders.items() if order.verdict is Verdict.FAIL]
    return [*((sign.kind, sign.text) for sign in study.signs), *short]
