"""The table of the seeded-fault exercise, as text, Markdown or CSV."""

from __future__ import annotations

import csv
import io
from collections.abc import Sequence

from tabulate import tabulate

from laplace_verify.diagnosis.exercise import Outcome

__all__ = ["exercise_csv", "exercise_markdown", "exercise_rows", "exercise_summary"]

HEADERS = ("fault", "effect", "as it should", "caught by", "law broken", "first suspect", "right")
SHORT = 3
EFFECTS = ("order", "accuracy", "harmless")


def exercise_rows(outcomes: Sequence[Outcome], limit: int | None = SHORT) -> list[tuple[str, ...]]:
    """Return one row a fault; lists of cases are cut short after `limit` entries."""
    rows: list[tuple[str, ...]] = []
    for found in outcomes:
        signs = found.failing or [f"{case} (open)" for case in found.open]
        signs = signs or [f"remark on {remark.partition(':')[0]}" for remark in found.remarks]
        shown = list(dict.fromkeys(signs))
        more = len(shown) - limit if limit is not None else 0
        by = ", ".join(shown[:limit]) + (f" and {more} more" if more > 0 else "")
        judged = "" if found.fault.effect == "harmless" else _yes(found.suspected)
        suspect = "" if found.fault.effect == "harmless" else found.suspect
        rows.append((found.name, found.fault.effect, _yes(found.caught), by, found.law, suspect, judged))
    return rows


def exercise_summary(outcomes: Sequence[Outcome]) -> str:
    """Return the rates by effect, the share of right first suspects and the false alarms, a line each."""
    lines = []
    said = {"order": "FAIL", "accuracy": "at least remarked", "harmless": "pass"}
    for effect in EFFECTS:
        chosen = [found for found in outcomes if found.fault.effect == effect]
        if chosen:
            good = sum(found.caught for found in chosen)
            lines.append(f"{effect}: {good} of {len(chosen)} {said[effect]}")
    caught = [found for found in outcomes if found.fault.effect != "harmless" and found.caught]
    if caught:
        shares = [("", caught)]
        shares += [(f" ({effect})", [f for f in caught if f.fault.effect == effect]) for effect in EFFECTS]
        lines += [f"first suspect right{which}: {_share(group)}" for which, group in shares if group]
    laws = [found for found in outcomes if found.fault.effect != "harmless" and found.laws]
    if laws:
        count = sum(found.law != "none" for found in laws)
        share = f"{count} of {len(laws)} ({100 * count / len(laws):.0f} %)"
        lines.append(f"of the faults that change answers, caught by the laws alone: {share}")
    return "\n".join([*lines, _sound(outcomes)])


def _share(outcomes: Sequence[Outcome]) -> str:
    """Return how many first suspects are right."""
    right = sum(found.suspected for found in outcomes)
    return f"{right} of {len(outcomes)} ({100 * right / len(outcomes):.0f} %)"


def _sound(outcomes: Sequence[Outcome]) -> str:
    """Return the false alarms: what the sound samples get on the cases of their faults."""
    verdicts = {
        (found.fault.sample, case): verdict for found in outcomes for case, verdict in found.sound.items()
    }
    said = []
    for words, kinds in (("FAIL", ("FAIL",)), ("stay open", ("INCONCLUSIVE", "ERROR"))):
        alarms = [f"{case} ({sample})" for (sample, case), verdict in verdicts.items() if verdict in kinds]
        said.append(f"{len(alarms)} {words}" + (f" ({', '.join(alarms)})" if alarms else ""))
    samples = len({sample for sample, _ in verdicts})
    return f"sound solvers: of {len(verdicts)} cases over {samples} samples {', '.join(said)}"


def exercise_markdown(outcomes: Sequence[Outcome], command: str) -> str:
    """Return the whole report as Markdown."""
    table = tabulate(exercise_rows(outcomes), headers=HEADERS, tablefmt="github", disable_numparse=True)
    faults = "\n".join(
        f"- **{found.name}** ({found.fault.sample}): {found.fault.description}." for found in outcomes
    )
    summary = "\n".join(f"- {line}" for line in exercise_summary(outcomes).splitlines())
    return (
        "# Seeded faults\n\n"
        f"Written by `{command}`. Known mistakes are put into the sample solvers, one at a time; the table "
        "says which cases catch them, which law is broken first when laws are tried in turn, without an "
        'exact solution, and what the diagnosis suspects first. Effect "order": slower convergence '
        'or a wrong limit, which must FAIL; "accuracy": a larger error or a floor, which must at '
        'least be remarked; "harmless": another way of doing it right, which must pass. The first suspect '
        "is right if it contains one of the words that are written down with the fault.\n\n"
        f"{summary}\n\n{table}\n\n## The faults\n\n{faults}\n"
    )


def exercise_csv(outcomes: Sequence[Outcome]) -> str:
    """Return the table as CSV (RFC 4180), lists in full."""
    stream = io.StringIO()
    writer = csv.writer(stream, lineterminator="\r\n")
    writer.writerow(HEADERS)
    writer.writerows(exercise_rows(outcomes, None))
    return stream.getvalue()


def _yes(what: bool) -> str:
    """Return yes or no."""
    return "yes" if what else "no"
