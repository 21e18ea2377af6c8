"""A file is written whole or not at all."""

import errno
import os

import pytest

from starkiln.errors import StorageError
from starkiln.store import atomic_write


def test_bytes_and_text(tmp_path):
    assert atomic_write(tmp_path / "b", lambda s: s.write(b"\x00")).read_bytes() == b"\x00"
    text = atomic_write(tmp_path / "t", lambda s: s.write("\u00e9\n"), mode="w")
    assert text.read_bytes() == "\u00e9\n".encode()


def test_a_failure_leaves_what_stood_before(tmp_path):
    path = tmp_path / "a"
    path.write_text("old")

    def fail(stream):
        stream.write(b"half")
        raise OSError(errno.ENOSPC, "no space")

    with pytest.raises(StorageError, match="the disk is full; free some space"):
        atomic_write(path, fail)
    with pytest.raises(KeyboardInterrupt):
        atomic_write(path, lambda stream: (_ for _ in ()).throw(KeyboardInterrupt))
    assert path.read_text() == "old"
    assert list(tmp_path.iterdir()) == [path]


def test_permissions_are_those_of_an_ordinary_file(tmp_path):
    mask = os.umask(0o022)
    try:
        path = atomic_write(tmp_path / "a", lambda stream: stream.write(b""))
    finally:
        os.umask(mask)
    assert path.stat().st_mode & 0o777 == 0o644


def test_a_file_in_place_of_a_folder(tmp_path):
    (tmp_path / "a").write_text("")
    with pytest.raises(StorageError, match="is a file, not a folder"):
        atomic_write(tmp_path / "a" / "b", lambda stream: stream.write(b""))
