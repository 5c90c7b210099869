"""Files by their hash: whole or not at all, and checked when read."""

from __future__ import annotations

import errno
import os
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.errors import InputError, NotFoundError, StorageError, StorageFullError
from fieldlog.storage import files

# FIPS 180-4 example: SHA-256 of "abc".
ABC = "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"


def everything(folder: Path) -> set[str]:
    return {path.name for path in folder.rglob("*") if path.is_file()}


def test_what_was_put_is_read(tmp_path: Path) -> None:
    folder = tmp_path / "files"
    assert not files.has(folder, ABC)
    assert files.put(folder, b"abc") == ABC
    assert files.put(folder, b"abc") == ABC
    assert files.read(folder, ABC) == b"abc"
    assert files.has(folder, ABC)
    assert files.path_of(folder, ABC) == folder / "ba" / ABC
    assert list(files.names(folder)) == [ABC]
    assert everything(folder) == {ABC}
    assert files.path_of(folder, ABC).stat().st_mode & 0o077 == 0


def test_what_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(NotFoundError, match="there is no file ba78"):
        files.read(tmp_path, ABC)
    assert list(files.names(tmp_path)) == []


@pytest.mark.parametrize("name", ["", "../../etc/passwd", ABC.upper(), ABC[:-1], ABC + "\n"])
def test_nothing_but_a_digest_names_a_file(tmp_path: Path, name: str) -> None:
    with pytest.raises(InputError, match="is not a SHA-256"):
        files.path_of(tmp_path, name)


def test_a_damaged_file_is_named_and_written_again(tmp_path: Path) -> None:
    files.put(tmp_path, b"abc")
    files.path_of(tmp_path, ABC).write_bytes(b"abx")
    with pytest.raises(StorageError, match="is damaged"):
        files.read(tmp_path, ABC)
    files.put(tmp_path, b"abc")
    assert files.read(tmp_path, ABC) == b"abc"


@pytest.mark.parametrize(
    ("number", "raised"),
    [(errno.ENOSPC, StorageFullError), (errno.EDQUOT, StorageFullError), (errno.EIO, StorageError)],
)
@pytest.mark.parametrize("call", ["fsync", "fdopen"])
def test_a_disk_that_refuses_leaves_nothing_behind(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, call: str, number: int, raised: type[StorageError]
) -> None:
    def refuses(*arguments: object) -> None:
        raise OSError(number, os.strerror(number))

    monkeypatch.setattr(os, call, refuses)
    with pytest.raises(StorageError) as error:
        files.put(tmp_path, b"abc")
    assert type(error.value) is raised
    monkeypatch.undo()
    assert everything(tmp_path) == set()


def test_file_and_folders_are_synced_before_put_returns(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    synced: list[str] = []
    real = os.fsync

    def fsync(descriptor: int) -> None:
        synced.append(Path(f"/proc/self/fd/{descriptor}").readlink().suffix or "folder")
        real(descriptor)

    monkeypatch.setattr(os, "fsync", fsync)
    files.put(tmp_path, b"abc")
    assert synced == [".part", "folder", "folder"]


def test_a_folder_without_rights_or_none_at_all(tmp_path: Path) -> None:
    (tmp_path / "ba").write_text("in the way")
    with pytest.raises(StorageError, match="refused"):
        files.put(tmp_path, b"abc")


@given(st.binary(max_size=300))
def test_any_bytes_come_back(tmp_path_factory: pytest.TempPathFactory, content: bytes) -> None:
    folder = tmp_path_factory.getbasetemp() / "any"
    assert files.read(folder, files.put(folder, content)) == content
