"""Cases kept in a folder of one's own, where `catalogue.with_folder` finds them."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

from laplace_verify.cases.catalogue import catalogue
from laplace_verify.errors import ProblemError, RecordError
from laplace_verify.problems import Case
from laplace_verify.problems.case import check_id
from laplace_verify.problems.schema import case_to_json
from laplace_verify.references.files import write_file

__all__ = ["save_case"]


def save_case(case: Case, folder: Path | str, id: str = "", title: str = "") -> Path:  # noqa: A002  # as in `case`
    """Write a case as a JSON file of its own, ``folder/<id>.json``, and return the path.

    A problem on which a law was broken is kept in this way as a permanent case.

    Parameters
    ----------
    case
        With an exact solution that can be written down.
    folder
        Made if it does not exist.
    id, title
        Of the case saved; by default its own.

    Raises
    ------
    ProblemError
        If the id is no id, or is taken by the catalogue or by another case in the folder.
    RecordError
        If `folder` is no path, the case cannot be written down, or the file cannot be written.

    Examples
    --------
    >>> import tempfile
    >>> from laplace_verify.cases import catalogue
    >>> from laplace_verify.cases.saving import save_case
    >>> folder = tempfile.mkdtemp()
    >>> save_case(catalogue["plate-saddle"], folder, "quay-wall").name
    'quay-wall.json'
    >>> len(catalogue.with_folder(folder)) - len(catalogue)
    1
    """
    if not isinstance(folder, str | Path):
        raise RecordError(f"a folder is named by a path, got {folder!r}")
    kept = replace(case, id=id or case.id, title=title or case.title)
    check_id(kept.id)
    if kept.id in catalogue:
        raise ProblemError(f"the id {kept.id!r} is taken by the catalogue; give another, as in id='my-plate'")
    path, content = Path(folder) / f"{kept.id}.json", case_to_json(kept)
    if path.exists() and path.read_bytes() != content:
        raise ProblemError(f"{path} holds another case; give another id")
    return write_file(path, content)
