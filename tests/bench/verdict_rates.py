"""False alarms and misses of the verdict in use, over simulated sequences of errors.

    python tests/bench/verdict_rates.py [--sequences 2000] [--seed 1]

Every sequence is e_k = h_k^p (1 + D (h_k/h_0)^q) exp(sigma z_k) on h = 1/8, 1/16, ... with D uniform in
(-1/2, 1), q = 1 or 2 and z normal; a sound one has p = the expected order, a faulty one the loss less. A
level is added while the verdict is open. Printed are the share of sound sequences that FAIL, of faulty ones
that PASS, of either that stay open, and the mean number of levels.
"""

from __future__ import annotations

import argparse
from collections.abc import Iterator

import numpy as np
from tabulate import tabulate

from laplace_verify.measure import Level, Verdict
from laplace_verify.measure.expected import Expectation, smallest_loss
from laplace_verify.measure.judge import combine, judge

# expected order, loss, noise, most levels
RUNS = [
    (2.0, 1.0, 0.02, 6), (2.0, 1.0, 0.05, 6), (2.0, 1.0, 0.10, 7), (2.0, 0.5, 0.02, 6),
    (4 / 3, 2 / 3, 0.05, 6), (1.0, 0.5, 0.02, 6), (1.0, 0.5, 0.05, 6), (2 / 3, 0.5, 0.02, 6),
    (2 / 3, 0.5, 0.05, 6), (0.5, 0.5, 0.02, 6),
]  # fmt: skip
KINDS = {0.02: "finite difference", 0.05: "finite element", 0.10: "finite element"}


def sequence(
    generator: np.random.Generator, order: float, noise: float, levels: int
) -> tuple[np.ndarray, np.ndarray]:
    """Return spacings and errors of one refinement."""
    h = 2.0 ** -(3.0 + np.arange(levels))
    size, q = generator.uniform(-0.5, 1.0), generator.choice([1.0, 2.0])
    scatter = np.exp(noise * generator.standard_normal(levels))
    return h, h**order * (1 + size * (h / h[0]) ** q) * scatter


def verdict(h: np.ndarray, errors: np.ndarray, expected: float, kind: str) -> tuple[Verdict, int]:
    """Return the verdict once it is in, and how many levels it took."""
    criterion = Expectation(norm="L2", formal=expected, expected=expected, decides=True, basis="simulated")
    found = Verdict.INCONCLUSIVE
    for count in range(4, len(h) + 1):
        levels = [
            Level(size=round(1 / s), h=float(s), unknowns=0, seconds=0.0, errors={"L2": float(e)},
                  relative={"L2": float(e)})
            for s, e in zip(h[:count], errors[:count], strict=True)
        ]  # fmt: skip
        found, _, _ = combine(judge(levels, {"L2": criterion}, kind=kind))
        if found is not Verdict.INCONCLUSIVE:
            return found, count
    return found, len(h)


def row(generator: np.random.Generator, run: tuple[float, float, float, int], sequences: int) -> list[str]:
    """Return one line of the table."""
    expected, loss, noise, most = run
    ended: dict[str, list[tuple[Verdict, int]]] = {}
    for name, order in (("sound", expected), ("faulty", expected - loss)):
        ended[name] = [
            verdict(*sequence(generator, order, noise, most), expected, KINDS[noise])
            for _ in range(sequences)
        ]

    def share(name: str, wanted: Verdict) -> str:
        count = sum(found is wanted for found, _ in ended[name])
        return f"{100 * count / sequences:.2f}"

    mean = np.mean([count for results in ended.values() for _, count in results])
    return [
        f"{expected:.2f}", f"{loss:.2f}", f"{smallest_loss(expected):.2f}", f"{100 * noise:.0f}",
        share("sound", Verdict.FAIL), share("faulty", Verdict.PASS),
        share("sound", Verdict.INCONCLUSIVE), share("faulty", Verdict.INCONCLUSIVE), f"{mean:.1f}",
    ]  # fmt: skip


def table(sequences: int, seed: int) -> Iterator[list[str]]:
    """Yield the lines of the table."""
    generator = np.random.default_rng(seed)
    for run in RUNS:
        yield row(generator, run, sequences)


def main() -> None:
    """Print the table."""
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("--sequences", type=int, default=2000, help="of either kind in every line")
    parser.add_argument("--seed", type=int, default=1)
    options = parser.parse_args()
    headers = (
        "expected", "loss", "built to see", "noise %", "false alarms %", "misses %", "open, sound %",
        "open, faulty %", "levels",
    )  # fmt: skip
    lines = list(table(options.sequences, options.seed))
    print(tabulate(lines, headers=headers, disable_numparse=True, stralign="right"))
    print(f"\n0.00 % of {options.sequences} means below {300 / options.sequences:.2g} % at 95 %")


if __name__ == "__main__":
    main()
