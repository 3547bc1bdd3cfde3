"""Where the reference cases lie: beside the package in a checkout, inside it once installed."""

from __future__ import annotations

from pathlib import Path

from laplace_verify.errors import RecordError, UnknownCaseError, nearest_names
from laplace_verify.problems import case_from_json
from laplace_verify.references.stored import StoredReference

__all__ = ["load_reference", "reference_folder"]

PACKAGE = Path(__file__).resolve().parent.parent
PLACES = (PACKAGE / "_reference_cases", PACKAGE.parent / "reference_cases")


def reference_folder() -> Path:
    """Return the folder of the reference cases, one JSON file a case.

    Raises
    ------
    RecordError
        If the installation lacks it.

    Examples
    --------
    >>> (reference_folder() / "plate-saddle.json").exists()
    True
    """
    for place in PLACES:
        if place.is_dir():
            return place
    raise RecordError(
        f"no folder of reference cases, neither {PLACES[0].name} in the package nor {PLACES[1].name} in a "
        "checkout; install the package again, or write them with: laplace-verify regenerate cases"
    )


def load_reference(case_id: str) -> StoredReference:
    """Return the stored values of a case; none are kept for many cases.

    Raises
    ------
    UnknownCaseError
        If there is no file for this case; the nearest ids are named.
    RecordError
        If the file cannot be read.

    Examples
    --------
    >>> load_reference("plate-saddle").values[0].point
    ('0.3', '0.7')
    """
    folder = reference_folder()
    path = folder / f"{case_id}.json"
    known = sorted(file.stem for file in folder.glob("*-*.json"))
    if case_id not in known:
        raise UnknownCaseError(f"no reference case is called {case_id!r}; {nearest_names(case_id, known)}")
    try:
        content = path.read_bytes()
    except OSError as cause:
        raise RecordError(f"{path.name} cannot be read: {cause}") from cause
    return StoredReference(case_id=case_id, values=case_from_json(content, path.name).stored)
