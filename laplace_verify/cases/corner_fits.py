"""The corner fits of the catalogue: their problems, and the files that keep their coefficients.

A fit takes minutes, so its coefficients are kept in `cases/fitted/<name>.json`, one file a fit, with the
problem and the ansatz they belong to. `stale_fits` finds files that are missing or belong to an older
definition; `laplace-verify regenerate cases` makes those again, with the same bytes on every machine.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import asdict
from pathlib import Path
from typing import Any

import msgspec

from laplace_verify.errors import FieldError, RecordError, nearest_names
from laplace_verify.fields import CornerPowers, from_spec
from laplace_verify.references import CornerFit, CornerTerms, SideData, fit_corners
from laplace_verify.references.files import write_file

__all__ = ["FITS", "fitted", "make_fit", "stale_fits"]

FOLDER = Path(__file__).resolve().parent / "fitted"
FORMAT = "laplace-verify corner fit"

COLD, INSULATED = SideData(), SideData(kind="neumann")


def _logs(*vertices: int) -> tuple[CornerTerms, ...]:
    """Return terms z^2 log z at right angles where quadratic data do not match."""
    return tuple(CornerTerms(vertex=k, logs=(2,)) for k in vertices)


FITS: dict[str, CornerFit] = {
    "l-basin-smooth-data": CornerFit(
        vertices=(
            ("0", "0"), ("1.2", "0"), ("1.2", "0.8"), ("-0.9", "0.8"), ("-0.9", "-1"), ("0", "-1"),
        ),
        sides=(SideData(data="x**2 + y/2"),) * 6,
        corners=(CornerTerms(vertex=0, powers=120, logs=(2,)), *_logs(1, 2, 3, 4, 5)),
        degree=250,
        centre=("-0.2", "0.15"),
        digits=54,
        density=360,
    ),
    "t-plate-smooth-data": CornerFit(
        vertices=(
            ("-0.4", "0"), ("-0.4", "-0.9"), ("0.3", "-0.9"), ("0.3", "0"),
            ("1.1", "0"), ("1.1", "0.6"), ("-1", "0.6"), ("-1", "0"),
        ),
        sides=(SideData(data="x*x - x*y + 1"),) * 8,
        corners=(
            CornerTerms(vertex=0, powers=120, logs=(2,)),
            CornerTerms(vertex=3, powers=120, logs=(2,)),
            *_logs(1, 2, 4, 5, 6, 7),
        ),
        degree=210,
        centre=("0", "0.1"),
        digits=46,
        density=320,
    ),
    "slit-plate-smooth-data": CornerFit(
        vertices=(
            ("-0.8", "-0.7"), ("1", "-0.7"), ("1", "0"), ("0", "0"), ("1", "0"), ("1", "0.6"),
            ("-0.8", "0.6"),
        ),
        sides=(SideData(data="(x - 1)**3 + 2"),) * 7,
        corners=(CornerTerms(vertex=3, powers=440), *_logs(0, 1, 5, 6)),
        degree=220,
        digits=54,
        density=400,
    ),
    "plate-condition-change-smooth-data": CornerFit(
        vertices=(("-0.7", "0"), ("0", "0"), ("0.9", "0"), ("0.9", "0.8"), ("-0.7", "0.8")),
        sides=(
            INSULATED, SideData(data="x**2 + 1"), SideData(data="x**2 + 1"), SideData(data="x**2 + 1"),
            SideData(data="x**2 + 1"),
        ),
        corners=(CornerTerms(vertex=1, powers=220), *_logs(2, 3, 4)),
        degree=220,
        digits=54,
        density=330,
    ),
    "plate-hot-end-condition-change": CornerFit(
        vertices=(("-0.8", "0"), ("0", "0"), ("0.8", "0"), ("0.8", "0.75"), ("-0.8", "0.75")),
        sides=(COLD, INSULATED, SideData(data="5"), INSULATED, INSULATED),
        corners=(CornerTerms(vertex=1, powers=430),),
        digits=54,
        density=330,
    ),
    "cracked-bar": CornerFit(
        vertices=(("-0.7", "0"), ("0", "0"), ("0.75", "0"), ("0.75", "0.7"), ("-0.7", "0.7")),
        sides=(COLD, INSULATED, INSULATED, SideData(data="1/4"), INSULATED),
        corners=(CornerTerms(vertex=1, powers=440),),
        digits=54,
        density=330,
    ),
    "l-basin-two-levels": CornerFit(
        vertices=(
            ("0", "0"), ("0.8", "0"), ("0.8", "0.8"), ("-0.8", "0.8"), ("-0.8", "-0.8"), ("0", "-0.8"),
        ),
        sides=(COLD, INSULATED, SideData(data="3"), SideData(data="3"), INSULATED, COLD),
        corners=(CornerTerms(vertex=0, powers=559, every=2),),
        digits=54,
        density=300,
    ),
}  # fmt: skip


def fitted(name: str) -> CornerPowers:
    """Return the field of a fit from its file.

    Raises
    ------
    RecordError
        If there is no such fit, its file is missing, damaged, or belongs to another definition.

    Examples
    --------
    >>> fitted("cracked-bar").basis
    'maximum-principle bound'
    """
    if name not in FITS:
        raise RecordError(f"no corner fit is called {name!r}; {nearest_names(name, FITS)}")
    content = _content(name)
    if content is None or content.get("definition") != _definition(FITS[name]):
        raise RecordError(
            f"fitted/{name}.json is missing, damaged or belongs to an older definition; make it again with: "
            "laplace-verify regenerate cases"
        )
    try:
        field = from_spec(content["field"])
    except (FieldError, KeyError) as cause:
        raise RecordError(f"fitted/{name}.json: field: {cause}") from cause
    if not isinstance(field, CornerPowers):
        raise RecordError(f"fitted/{name}.json: field is no sum of corner powers")
    return field


def stale_fits() -> list[str]:
    """Return the names of the fits whose files are missing or belong to another definition."""
    return [
        name
        for name, fit in FITS.items()
        if (content := _content(name)) is None or content.get("definition") != _definition(fit)
    ]


def make_fit(name: str, folder: Path | None = None, note: Callable[[str], object] | None = None) -> Path:
    """Compute a fit and write its file.

    Parameters
    ----------
    name
        One of `FITS`.
    folder
        By default that of the package.
    note
        Called with a line of text.

    Raises
    ------
    RecordError
        If the file cannot be written.
    """
    field = fit_corners(FITS[name])
    content = {"format": FORMAT, "definition": _definition(FITS[name]), "field": field.spec()}
    data = msgspec.json.format(msgspec.json.encode(content), indent=1) + b"\n"
    if note is not None:
        note(f"corner fit {name}: |error| <= {field.radius} ({field.basis})")
    return write_file((folder or FOLDER) / f"{name}.json", data)


def _definition(fit: CornerFit) -> Any:
    """Return problem and ansatz as plain data, as JSON gives them back."""
    return msgspec.json.decode(msgspec.json.encode(asdict(fit)))


def _content(name: str) -> dict[str, Any] | None:
    """Return the content of a file, None if it is missing or no file of this kind."""
    try:
        content = msgspec.json.decode((FOLDER / f"{name}.json").read_bytes())
    except (OSError, msgspec.DecodeError):
        return None
    return content if isinstance(content, dict) and content.get("format") == FORMAT else None
