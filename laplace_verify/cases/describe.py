"""A case in plain text: what it states, what is known, where it comes from."""

from __future__ import annotations

import math
from collections.abc import Sequence
from textwrap import TextWrapper
from typing import Any

from tabulate import tabulate

from laplace_verify.cases.statement import (
    conductivity_in_words,
    given_in_words,
    in_symbols,
    infinity_in_words,
    region_in_words,
)
from laplace_verify.problems import Case, Quantity

__all__ = ["basis_in_words", "describe", "regularity_in_words"]

WIDTH = 100


def describe(case: Case) -> str:
    """Return title, statement, pieces, regularity, quantities, reading, sources and tags of a case.

    Examples
    --------
    >>> from laplace_verify.cases import catalogue
    >>> print(describe(catalogue["rod-two-temperatures"]).splitlines()[0])
    Rod between two temperatures (rod-two-temperatures)
    """
    problem = case.problem
    region = in_symbols(region_in_words(problem.shape), problem.coordinates)
    facts = [
        ("shape", f"{region} ({problem.shape.kind}, {case.dim}-D)"),
        ("conductivity", conductivity_in_words(problem.conductivity)),
        ("exact solution", case.exact.formula),
        ("digits", basis_in_words(case)),
        ("regularity", regularity_in_words(case)),
    ]
    if problem.ill_posed is not None:
        facts = [*facts[:2], ("ill-posed", f"{problem.ill_posed}; a solver that checks refuses it")]
    if problem.coordinates != "cartesian":
        facts.insert(1, ("coordinates", f"{problem.coordinates}; integrals are those of space"))
    if case.window is not None:
        facts.insert(1, ("at infinity", infinity_in_words(problem.at_infinity)))
        facts.insert(2, ("norms over", region_in_words(case.window)))
    if problem.constant is not None:
        facts.append(("level", f"the {problem.constant[0]} of u is {problem.constant[-1]:.12g}"))
    parts = [
        f"{case.title} ({case.id})",
        _filled(case.statement),
        _filled(case.reading),
        "\n".join(_filled(f"{name:16}{text}", 16) for name, text in facts),
        _pieces(case),
        _quantities(case),
        "Sources\n" + "\n".join(_filled(source, 2) for source in case.sources),
        _filled("Tags: " + ", ".join(sorted(case.tags))),
    ]
    return "\n\n".join(part for part in parts if part)


def regularity_in_words(case: Case) -> str:
    """Return how smooth solution and domain are, and the smallest length.

    >>> from laplace_verify.cases import catalogue
    >>> regularity_in_words(catalogue["l-shape-corner"])
    'u - smooth ~ r^0.6667; domain exponent 0.6667; smallest length 1'
    """
    found = case.regularity
    if case.problem.ill_posed is not None:
        return "no solution, or several"
    if math.isinf(found.solution):
        solution = f"u smooth on {'each closed region' if found.interface else 'the closed shape'}"
    elif len(found.jumps):
        solution = "boundary data jump"
    else:
        solution = f"u - smooth ~ r^{found.solution:.4g}"
    domain = "no corner" if math.isinf(found.domain) else f"domain exponent {found.domain:.4g}"
    return f"{solution}; {domain}; smallest length {found.scale:.4g}"


def basis_in_words(case: Case) -> str:
    """Return why the digits of the exact solution can be believed."""
    return {
        "closed form": "closed form",
        "tail bound": "series with a proven bound of its tail",
        "maximum-principle bound": "corner fit with a bound of its error by the maximum principle",
        "confirmed": "confirmed by independent routes, not proven",
        "uncertified": "a function whose inside is unknown: not certified",
    }[case.exact.basis]


def _filled(text: str, indent: int = 0) -> str:
    """Return a paragraph; formulas are not broken at their minus signs."""
    return TextWrapper(WIDTH, subsequent_indent=" " * indent, break_on_hyphens=False).fill(text)


def _pieces(case: Case) -> str:
    """Return a table of the boundary pieces."""
    unit = case.units.length
    size = "size" if not unit else f"size ({unit if case.dim == 2 else f'{unit}^{case.dim - 1}'})"
    kinds = {piece.name: piece.kind for piece in case.problem.pieces}
    rows = [
        (piece.name, kinds.get(piece.name, "missing"), _given(case, piece.name), f"{piece.measure:.6g}")
        for piece in case.problem.shape.pieces
    ]
    return _table(rows, ("piece", "condition", "given", size))


def _given(case: Case, piece: str) -> str:
    """Return what is given on a piece; nothing on the axis of symmetry, or where a condition is missing."""
    return given_in_words(case._conditions[piece]) if piece in case._conditions else "nothing"


def _quantities(case: Case) -> str:
    """Return a table of the exact quantities."""
    if not case.quantities:
        return ""
    rows = [
        (name, f"{quantity.value:.15g} {quantity.unit}".rstrip(), f"{quantity.radius:.1e}", _where(quantity))
        for name, quantity in case.quantities.items()
    ]
    return _table(rows, ("quantity", "value", "radius", "is"))


def _table(rows: Sequence[tuple[str, ...]], headers: tuple[str, ...]) -> str:
    """Return a plain table of text."""
    return tabulate(rows, headers=headers, tablefmt="simple", disable_numparse=True)


def _where(quantity: Quantity) -> str:
    """Return what a quantity is, as a formula."""
    kind, where = quantity.kind, quantity.where
    formulas = {
        "flux": f"integral of n . K grad u over {where}",
        "energy": "integral of grad u . K grad u",
        "uplift": f"integral of u over {where}",
        "exit gradient": f"-n . grad u on {where} at ({_coordinates(quantity.place)})",
        "torsion constant": "torsion constant of the section",
        "added mass": "added mass of the bodies",
    }
    if kind in formulas:
        return formulas[kind]
    if kind == "discharge" and isinstance(where, tuple):
        start, stop = _coordinates(where[:2]), _coordinates(where[2:])
        return f"-K grad u across the section from ({start}) to ({stop}), from left to right"
    if kind == "flux density":
        return f"e . K grad u at ({_coordinates(where)}), e = ({_coordinates(quantity.direction)})"
    if isinstance(where, tuple) and isinstance(where[0], str):
        if kind == "capacitance":
            return f"flux through {where[0]} over the level of {where[1]}, the others at 0"
        return f"{kind} between {where[0]} and {where[1]}"
    return f"u({_coordinates(where)})"


def _coordinates(point: Any) -> str:
    """Return 0.1, 2."""
    return ", ".join(f"{c:.12g}" for c in point or ())
