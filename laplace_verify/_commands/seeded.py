"""`seeded-faults`: what the suite catches of known mistakes in the sample solvers."""

from __future__ import annotations

import argparse
import os
import sys
from pathlib import Path
from typing import Any

from laplace_verify._commands.common import described, say

__all__ = ["add_seeded_faults"]


def add_seeded_faults(commands: Any) -> None:
    """Describe the command."""
    parser = described(
        commands,
        "seeded-faults",
        "put known coding mistakes into the sample solvers and print what catches them",
        'seeded-faults --faults "flux sign" "first-order flux"',
    )
    parser.add_argument("--faults", nargs="+", metavar="NAME", help="names of faults (default: all)")
    parser.add_argument("--list", action="store_true", help="list the faults, run nothing")
    parser.add_argument("--no-principles", action="store_true", help="leave out the laws")
    parser.add_argument("--out", metavar="DIR", type=Path, help="write README.md and outcomes.csv there too")
    parser.add_argument("--workers", type=int, default=os.cpu_count() or 1, help="default: one a core")
    parser.add_argument("--seed", type=int, default=0, help="of everything random (default 0)")
    parser.set_defaults(run=_seeded_faults)


def _seeded_faults(options: argparse.Namespace) -> int:
    """Print the table; exit status 1 if a fault is not caught or a harmless one is."""
    from tabulate import tabulate
    from tqdm import tqdm

    from laplace_verify.diagnosis import chosen_faults, exercise
    from laplace_verify.files import write_atomically
    from laplace_verify.report.exercise import (
        HEADERS,
        exercise_csv,
        exercise_markdown,
        exercise_rows,
        exercise_summary,
    )

    faults = chosen_faults(options.faults)
    if options.list:
        listed = [(name, fault.effect, fault.kind, fault.sample) for name, fault in faults.items()]
        say(tabulate(listed, headers=("fault", "effect", "kind", "sample"), tablefmt="simple"))
        return 0
    with tqdm(total=len(faults), file=sys.stderr, unit="fault") as bar:
        outcomes = []
        for found in exercise(
            faults, workers=options.workers, principles=not options.no_principles, seed=options.seed
        ):
            outcomes.append(found)
            bar.update()
    rows = [(*row[:5], row[5][:60], row[6]) for row in exercise_rows(outcomes)]
    say(tabulate(rows, headers=HEADERS, tablefmt="simple", disable_numparse=True))
    say(f"\n{exercise_summary(outcomes)}")
    if options.out is not None:
        command = "laplace-verify seeded-faults" + ("" if options.faults is None else " --faults ...")
        write_atomically(options.out / "README.md", exercise_markdown(outcomes, command).encode())
        write_atomically(options.out / "outcomes.csv", exercise_csv(outcomes).encode())
        say(f"written: {options.out / 'README.md'}\nwritten: {options.out / 'outcomes.csv'}")
    return int(not all(found.caught for found in outcomes))
