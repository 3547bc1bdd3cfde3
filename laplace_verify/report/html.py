"""The report as one HTML file: nothing outside it is needed to read it, and no script.

The templates beside this module are filled with escaping always on; only the figures, which we draw
ourselves and whose text matplotlib escapes, are put in as they are.
"""

from __future__ import annotations

import re
from functools import cache

from jinja2 import Environment, PackageLoader, StrictUndefined
from markupsafe import Markup

from laplace_verify.report import content
from laplace_verify.report.text import SYMBOLS, VERDICT_WORDS, printable

__all__ = ["to_html"]

_CODE = re.compile(r"(<pre>.*?</pre>)", re.DOTALL)
_BLANK = re.compile(r"\s*\n")  # empty lines, and spaces at the end of a line


def to_html(document: content.Document, figures: dict[str, str]) -> str:
    """Return the document as a complete HTML page; `figures` maps keys of pictures to SVG of our making."""
    safe = {key: Markup(svg) for key, svg in figures.items()}
    text: str = _environment().get_template("report.html.jinja").render(document=document, figures=safe)
    parts = _CODE.split(text)  # code, which keeps its blank lines, at the odd places
    parts[::2] = [_BLANK.sub("\n", part) for part in parts[::2]]
    return printable("".join(parts))


@cache
def _environment() -> Environment:
    environment = Environment(
        loader=PackageLoader("laplace_verify.report", "templates"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    environment.filters["css"] = lambda verdict: VERDICT_WORDS[verdict].replace(" ", "-")
    environment.filters["symbol"] = lambda verdict: SYMBOLS[verdict]
    environment.filters["words"] = lambda verdict: VERDICT_WORDS[verdict]
    environment.tests["instance_of"] = lambda entry, name: isinstance(entry, getattr(content, name))
    return environment
