"""Files appear whole or not at all."""

import pytest

from laplace_verify.errors import RecordError
from laplace_verify.files import write_atomically


def test_a_file_replaces_the_old_one_and_leaves_nothing_else(tmp_path):
    target = tmp_path / "new" / "table.csv"
    write_atomically(target, b"old")
    write_atomically(target, b"new")
    assert target.read_bytes() == b"new"
    assert list(target.parent.iterdir()) == [target]


def test_a_file_that_cannot_be_written_is_refused_by_name(tmp_path):
    (tmp_path / "file").write_text("in the way")
    with pytest.raises(RecordError, match=r"cannot write .*table\.csv"):
        write_atomically(tmp_path / "file" / "table.csv", b"")
