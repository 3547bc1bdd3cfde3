"""The record of a verification run: plain data from which every line of every report is computed.

The JSON file opens with ``format`` and ``format_version``, so that a reader in any language knows what it
holds. Field names are those of the dataclasses below and of `Study`, `Level`, `Order` and `Check`. JSON has
no number for "not a number" and the infinities; they are written as an object with one key: ``{"number":
"nan"}``, ``"inf"`` or ``"-inf"``. Every other float is the shortest decimal that reads back to the same
bits.
"""

from __future__ import annotations

import math
import os
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import msgspec

from laplace_verify.errors import RecordError
from laplace_verify.files import json_content, write_atomically
from laplace_verify.measure.results import Study
from laplace_verify.principles.results import Check
from laplace_verify.problems.drawing import PieceInfo

__all__ = [
    "FORMAT",
    "FORMAT_VERSION",
    "CaseInfo",
    "Environment",
    "PieceInfo",
    "QuantityInfo",
    "Record",
    "RegularityInfo",
    "Settings",
    "SolverIdentity",
    "check_record",
    "record_from_json",
    "record_to_json",
]

FORMAT = "laplace-verify record"
FORMAT_VERSION = 1
_NUMBER = "number"  # key of the object that stands for a float JSON cannot hold


@dataclass(frozen=True, slots=True, kw_only=True)
class SolverIdentity:
    """Which solver was verified and what it declared about itself before the run."""

    name: str
    kind: str
    order: str  # declared formal order in words: "2", "max 2, L2 2, H1-semi 1", "exponential"
    capabilities: dict[str, str] = field(default_factory=dict)  # "shapes" -> "disc, rectangle", ...
    module: str = ""  # where the solver was loaded from, "module:object"
    source_sha256: str | None = None  # of the source file, if there is one
    known: dict[str, str] = field(default_factory=dict)  # case id -> reason of an accepted deviation


@dataclass(frozen=True, slots=True, kw_only=True)
class Environment:
    """Software and machine of the run."""

    python: str
    numpy: str
    scipy: str
    platform: str
    cpus: int
    packages: dict[str, str] = field(default_factory=dict)  # further versions worth keeping


@dataclass(frozen=True, slots=True, kw_only=True)
class Settings:
    """What was asked for. None stands for "not restricted" (cases, time) or "by default" (sizes)."""

    seed: int = 0
    sizes: tuple[int, ...] | None = None
    cases: tuple[str, ...] | None = None
    principles: bool = True
    time_limit: float | None = None  # seconds per study
    budget: float | None = None  # seconds per study for sizes beyond the planned ones


@dataclass(frozen=True, slots=True, kw_only=True)
class RegularityInfo:
    """Smoothness of exact solution and domain: exponents of r at the worst point; inf is smooth."""

    solution: float
    domain: float
    scale: float
    singular_points: tuple[tuple[float, ...], ...] = ()
    jumps: tuple[tuple[float, ...], ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True)
class QuantityInfo:
    """Exact value of a quantity of a case, with unit and error radius."""

    name: str
    value: float
    unit: str = ""
    radius: float = 0.0


@dataclass(frozen=True, slots=True, kw_only=True)
class CaseInfo:
    """What a report tells about a case."""

    id: str
    title: str
    dim: int
    shape: str
    statement: str = ""
    reading: str = ""
    formula: str = ""
    conductivity: str = "1"
    pieces: tuple[PieceInfo, ...] = ()
    regularity: RegularityInfo | None = None
    quantities: tuple[QuantityInfo, ...] = ()
    tags: tuple[str, ...] = ()
    sources: tuple[str, ...] = ()
    ill_posed: str = ""  # why there is no solution, or no single one; "" if there is


@dataclass(frozen=True, slots=True, kw_only=True)
class Record:
    """One verification run: who, with what, what was asked, what was found.

    `studies` has one entry a case in the order of the catalogue, `checks` one a law, `cases` one `CaseInfo`
    for every study. `started` and `finished` are ISO 8601 times with an offset.
    """

    package_version: str
    solver: SolverIdentity
    environment: Environment
    settings: Settings
    command: str = ""  # the command line or call that repeats the run
    started: str = ""
    finished: str = ""
    studies: tuple[Study, ...] = ()
    checks: tuple[Check, ...] = ()
    cases: tuple[CaseInfo, ...] = ()
    format_version: int = FORMAT_VERSION

    def case(self, case_id: str) -> CaseInfo | None:
        """Return what is known about the case of this id, None if nothing is."""
        return next((info for info in self.cases if info.id == case_id), None)


def check_record(record: Record) -> None:
    """Refuse what is no record: a study, say, where the whole run is needed.

    Raises
    ------
    RecordError
        Saying what was given.
    """
    if not isinstance(record, Record):
        raise RecordError(f"a Record is needed, as `verify` returns it, got {type(record).__name__}")


def record_to_json(record: Record, path: str | os.PathLike[str] | None = None) -> bytes:
    """Return the record as UTF-8 JSON, one line an entry; write it to `path` if one is given (atomically).

    Raises
    ------
    RecordError
        If the file cannot be written, or the record holds something JSON cannot (arrays, functions).
    """
    try:
        plain = _mark(msgspec.to_builtins(record))
    except TypeError as cause:
        raise RecordError(f"the record holds something that is not plain data: {cause}") from cause
    data = _laid_out({"format": FORMAT, **plain})
    if path is not None:
        write_atomically(Path(path), data)
    return data


def record_from_json(source: str | os.PathLike[str] | bytes) -> Record:
    """Read a record from a file, or from the bytes of one.

    Raises
    ------
    RecordError
        If the file cannot be read, is no JSON, is no record, has a newer version, or a field has the wrong
        type; the message names file and field.
    """
    if not isinstance(source, bytes | str | os.PathLike):
        raise RecordError(f"a record is read from a path or from bytes, got {type(source).__name__}")
    name, data = ("record", source) if isinstance(source, bytes) else (os.fspath(source), _read(source))
    plain = json_content(data, name)
    if not isinstance(plain, dict) or plain.pop("format", None) != FORMAT:
        raise RecordError(f"{name}: not a record: the field 'format' must be {FORMAT!r}")
    version = plain.get("format_version")
    if not isinstance(version, int) or isinstance(version, bool) or version < 1:
        raise RecordError(f"{name}: the field 'format_version' must be a positive integer, got {version!r}")
    if version > FORMAT_VERSION:
        raise RecordError(
            f"{name}: 'format_version' is {version}, this package reads up to {FORMAT_VERSION}; "
            "update laplace-verify"
        )
    try:
        return msgspec.convert(_unmark(plain), Record)
    except msgspec.ValidationError as cause:
        raise RecordError(f"{name}: {_field_message(cause)}") from cause


def _laid_out(plain: dict[str, Any]) -> bytes:
    """Return JSON with a line for every field and, in lists, for every entry: fit for `diff`, yet small."""
    fields = []
    for key, value in plain.items():
        text = msgspec.json.encode(value)
        if isinstance(value, list) and value:
            text = b"[\n" + b",\n".join(msgspec.json.encode(entry) for entry in value) + b"\n]"
        fields.append(msgspec.json.encode(key) + b": " + text)
    return b"{\n" + b",\n".join(fields) + b"\n}\n"


def _field_message(error: msgspec.ValidationError) -> str:
    """Turn "Expected X - at `$.a[...].b`" into a sentence that opens with the field."""
    text, _, place = str(error).partition(" - at `")
    path = place.rstrip("`").removeprefix("$").lstrip(".")
    return f"field '{path}': {text}" if path else text


def _mark(plain: Any) -> Any:
    """Replace floats that JSON cannot hold by marked objects."""
    if isinstance(plain, float):
        return plain if math.isfinite(plain) else {_NUMBER: repr(plain)}
    if isinstance(plain, dict):
        return {str(key): _mark(value) for key, value in plain.items()}
    if isinstance(plain, list | tuple):
        return [_mark(value) for value in plain]
    return plain


def _unmark(plain: Any) -> Any:
    """Undo `_mark`."""
    if isinstance(plain, dict):
        if plain.keys() == {_NUMBER} and plain[_NUMBER] in ("nan", "inf", "-inf"):
            return float(plain[_NUMBER])
        return {key: _unmark(value) for key, value in plain.items()}
    if isinstance(plain, list):
        return [_unmark(value) for value in plain]
    return plain


def _read(path: str | os.PathLike[str]) -> bytes:
    try:
        return Path(path).read_bytes()
    except OSError as cause:
        raise RecordError(f"cannot read {os.fspath(path)}: {cause.strerror or cause}") from cause
