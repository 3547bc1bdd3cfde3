"""Files written at once or not at all."""

from __future__ import annotations

import os
from pathlib import Path
from tempfile import NamedTemporaryFile

from laplace_verify.errors import RecordError

__all__ = ["write_file"]


def write_file(path: Path, content: bytes) -> Path:
    """Write a file, replacing an older one, and return its path.

    Raises
    ------
    RecordError
        If it cannot be written.
    """
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        with NamedTemporaryFile(dir=path.parent, prefix=".", delete=False) as draft:
            draft.write(content)
        os.chmod(draft.name, 0o644)
        os.replace(draft.name, path)
    except OSError as cause:
        raise RecordError(f"{path} cannot be written: {cause}; give another folder") from cause
    return path
