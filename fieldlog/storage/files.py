"""Photos and reports, each under the SHA-256 of its bytes. A file is there whole or not at all."""

from __future__ import annotations

import errno
import os
import re
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from fieldlog.canonical import sha256_hex
from fieldlog.errors import InputError, NotFoundError, StorageError, StorageFullError

_NO_ROOM = {errno.ENOSPC, errno.EDQUOT, errno.EFBIG}
_DIGEST = re.compile(r"[0-9a-f]{64}")


def put(folder: Path, content: bytes) -> str:
    """Return the SHA-256 of `content` once it is on the disk for good.

    Raises
    ------
    StorageFullError
        If there is no room; nothing is left behind.
    StorageError
        If the disk refuses.
    """
    sha256 = sha256_hex(content)
    target = path_of(folder, sha256)
    with _errors_of_disk(target):
        if _holds(target, content):
            return sha256
        target.parent.mkdir(mode=0o700, parents=True, exist_ok=True)
        _write(target, content)
        # The names too have to reach the disk: of the file in its folder, and of the folder in the one above.
        _sync_folder(target.parent)
        _sync_folder(folder)
    return sha256


def read(folder: Path, sha256: str) -> bytes:
    """Return the bytes whose SHA-256 this is.

    Raises
    ------
    NotFoundError
        If they are not on file.
    StorageError
        If the file is damaged or can't be read.
    """
    path = path_of(folder, sha256)
    try:
        with _errors_of_disk(path):
            content = path.read_bytes()
    except FileNotFoundError as error:
        raise NotFoundError(f"there is no file {sha256} in {folder}; it may not have arrived yet") from error
    if sha256_hex(content) != sha256:
        raise StorageError(f"{path} is damaged: its bytes are not those it is named by; restore it from a backup")
    return content


def has(folder: Path, sha256: str) -> bool:
    """Return whether the file is there; its bytes are checked when they are read."""
    return path_of(folder, sha256).is_file()


def path_of(folder: Path, sha256: str) -> Path:
    """Return where the file of this digest stands, or would.

    Raises
    ------
    InputError
        If it is no SHA-256 in hexadecimal: it may come from outside and must not name another path.
    """
    if not _DIGEST.fullmatch(sha256):
        raise InputError(f"{sha256[:80]!r} is not a SHA-256; give 64 hexadecimal digits", field="sha256")
    return folder / sha256[:2] / sha256


def names(folder: Path) -> Iterator[str]:
    """Yield the digests of all files in the folder, in order."""
    for path in sorted(folder.glob("[0-9a-f][0-9a-f]/*")):
        if _DIGEST.fullmatch(path.name):
            yield path.name


def _holds(target: Path, content: bytes) -> bool:
    """Tell whether the file is there and sound; a damaged one is written again."""
    try:
        return target.read_bytes() == content
    except FileNotFoundError:
        return False


def _write(target: Path, content: bytes) -> None:
    descriptor, name = tempfile.mkstemp(dir=target.parent, prefix=".", suffix=".part")
    try:
        with os.fdopen(descriptor, "wb") as stream:
            stream.write(content)
            stream.flush()
            os.fsync(stream.fileno())
        Path(name).replace(target)
    except BaseException:
        Path(name).unlink(missing_ok=True)
        raise


def _sync_folder(folder: Path) -> None:
    descriptor = os.open(folder, os.O_RDONLY)
    try:
        os.fsync(descriptor)
    finally:
        os.close(descriptor)


@contextmanager
def _errors_of_disk(path: Path) -> Iterator[None]:
    try:
        yield
    except FileNotFoundError:
        raise
    except OSError as error:
        if error.errno in _NO_ROOM:
            raise StorageFullError(f"writing {path}: no room on the disk; make room and try again") from error
        raise StorageError(f"{path}: the disk refused ({error.strerror}); check rights and the disk") from error
