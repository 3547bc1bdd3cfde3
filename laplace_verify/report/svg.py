"""A matplotlib figure as SVG that can stand inside an HTML page beside others.

matplotlib numbers the parts of every figure alike (``figure_1``, ``axes_1``), refers to some by
``url(#...)`` and sets one style rule for the whole document. Inside a page groups lose their ids, all others
get the figure's key as a prefix, the rule moves to the root element, coordinates are cut to
hundredths of a point, and title and description are added for those who listen
instead of look.
"""

from __future__ import annotations

import io
import re
from html import escape
from typing import TYPE_CHECKING

from laplace_verify.report.style import drawing

if TYPE_CHECKING:
    from matplotlib.figure import Figure

__all__ = ["figure_to_svg"]

_GROUP = re.compile(r'<g id="[^"]+"')
_ID = re.compile(r'\bid="([^"]+)"')
_REFERENCE = re.compile(r'(url\(#|xlink:href="#)')
_DROPPED = re.compile(r"<metadata>.*?</metadata>\s*|<style[^>]*>[^<]*</style>\s*|<!--.*?-->\s*", re.DOTALL)
_TAG = re.compile(r"<[^>]+>")
_LONG = re.compile(r"(?<![\w.])-?\d+\.\d{3,}")  # a number with more than two decimals; data URIs hold no "."
_ROOT = re.compile(r"<svg\b[^>]*>", re.DOTALL)


def figure_to_svg(figure: Figure, *, key: str, title: str, alt: str) -> str:
    """Return the figure as an ``<svg>`` element whose ids begin with `key`.

    Same figure and key, same text: the salt of generated ids is fixed and no date is written.
    """
    buffer = io.StringIO()
    with drawing():
        figure.savefig(buffer, format="svg", metadata={"Date": None, "Creator": None})
    text = buffer.getvalue()
    text = _DROPPED.sub("", text[text.index("<svg") :])
    text = _GROUP.sub("<g", text)
    prefix = re.sub(r"[^A-Za-z0-9-]", "-", key)
    text = _TAG.sub(lambda tag: _LONG.sub(_hundredths, tag.group()), text)
    text = _ID.sub(rf'id="{prefix}-\1"', text)
    text = _REFERENCE.sub(rf"\g<1>{prefix}-", text).replace("xlink:href", "href")
    box = re.search(r'viewBox="([^"]+)"', text)
    view = box.group(1) if box else "0 0 400 300"
    root = (
        f'<svg viewBox="{view}" role="img" aria-labelledby="{prefix}-title {prefix}-desc" '
        f'style="stroke-linejoin: round; stroke-linecap: butt">\n'
        f'<title id="{prefix}-title">{escape(title)}</title>\n<desc id="{prefix}-desc">{escape(alt)}</desc>'
    )
    return _ROOT.sub(lambda _: root, text, count=1).strip()


def _hundredths(found: re.Match[str]) -> str:
    """Return a coordinate, in points, to hundredths, which is finer than any screen or printer."""
    return f"{float(found.group()):.2f}".rstrip("0").rstrip(".")
