"""What the commands share: describing a command, printing, refusing unknown names."""

from __future__ import annotations

import argparse
import sys
from collections.abc import Iterable, Sequence
from typing import Any

from laplace_verify.errors import ProblemError, nearest_names

__all__ = ["among", "described", "note", "say"]


def described(commands: Any, name: str, what: str, example: str) -> argparse.ArgumentParser:
    """Add a command with one line of help and an example."""
    parser: argparse.ArgumentParser = commands.add_parser(
        name,
        help=what,
        description=what[0].upper() + what[1:] + ".",
        epilog=f"example: laplace-verify {example}",
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    return parser


def among(option: str, given: Sequence[str], known: Iterable[str]) -> None:
    """Refuse names that no case has."""
    for name in given:
        if name not in known:
            raise ProblemError(f"no case has the {option} {name!r}; {nearest_names(name, known)}")


def say(text: str) -> None:
    """Print a result."""
    print(text)  # noqa: T201


def note(text: str) -> None:
    """Print what is no result."""
    print(text, file=sys.stderr)  # noqa: T201
