"""`gci`: the grid convergence index of a table of values on several grids."""

from __future__ import annotations

import argparse
from pathlib import Path
from typing import Any

from laplace_verify._commands.common import described, say

__all__ = ["add_gci"]


def add_gci(commands: Any) -> None:
    """Describe the command."""
    parser = described(commands, "gci", "print the grid convergence index of values on grids", "gci flow.csv")
    parser.add_argument(
        "file",
        metavar="FILE.csv",
        type=Path,
        help='first column "h" (spacing) or "N" (number of cells), then one column a quantity',
    )
    parser.add_argument(
        "--dim", type=int, choices=(1, 2, 3), default=2, help="h = N^(-1/dim) where N is given (default 2)"
    )
    parser.add_argument("--order", type=float, help="order to assume where the file holds two grids only")
    parser.add_argument("--format", choices=("text", "markdown", "latex"), default="text")
    parser.set_defaults(run=_gci)


def _gci(options: argparse.Namespace) -> int:
    """Print a table for every column; exit status 1 if one of them diverges."""
    from laplace_verify.measure import grid_convergence
    from laplace_verify.measure.grid_table import read_grids

    grids = read_grids(options.file, options.dim)
    diverges = False
    for number, (name, values) in enumerate(grids.columns.items()):
        found = grid_convergence(values, grids.h, options.order)
        diverges |= found.behaviour == "divergent"
        say(("\n" if number else "") + found.table(options.format, name, grids.cells))
    return int(diverges)
