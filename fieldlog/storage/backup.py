"""A copy of the database that is known to be sound, while others write; and back again."""

from __future__ import annotations

import os
from collections.abc import Iterator
from contextlib import closing, contextmanager
from dataclasses import dataclass
from pathlib import Path

from fieldlog.errors import BrokenLogError, ConflictError, NotFoundError, StorageError, StorageFullError
from fieldlog.storage.chain import CheckResult, Progress, check
from fieldlog.storage.connection import Connection, at_the_edge, connect, connect_read_only, sqlite3


@dataclass(frozen=True, slots=True)
class Backup:
    """A checked copy: how many entries, the head it ends with, its size in bytes."""

    path: Path
    entries: int
    head: str
    size: int


@at_the_edge
def back_up(source: Path, target: Path, progress: Progress | None = None) -> Backup:
    """Copy the database to a new file and check the copy; only a sound one gets its name.

    Raises
    ------
    ConflictError
        If there is a file of that name.
    BrokenLogError
        If the copy's chain does not hold; the copy is kept beside, ending in `.unsound`.
    StorageFullError
        If there is no room; nothing is left behind.
    StorageError
        If the source can't be read or the copy not written.
    """
    with _new_file(target) as unfinished:
        with closing(connect(source)) as reader:
            _copy(reader, unfinished)
        result = check_backup(unfinished, progress)
        if result.fault is not None:
            unsound = unfinished.replace(target.with_name(target.name + ".unsound"))
            raise BrokenLogError(
                f"the copy was made, but {result.fault.message}; it is kept as {unsound}; run `fieldlog check-log`",
                number=result.fault.number,
            )
    return Backup(target, result.checked, result.head, target.stat().st_size)


@at_the_edge
def check_backup(path: Path, progress: Progress | None = None) -> CheckResult:
    """Return what a walk through a backup finds; it is opened for reading only.

    Raises
    ------
    ForeignFileError
        If it is not a fieldlog database, or of a newer or older fieldlog.
    StorageError
        If SQLite finds the file damaged.
    """
    with closing(connect_read_only(path)) as connection:
        said = connection.execute("pragma quick_check(1)").fetchone()[0]
        if said != "ok":
            raise StorageError(f"{path} is damaged ({said}); take another backup")
        return check(connection, progress)


@at_the_edge
def restore(backup: Path, target: Path, progress: Progress | None = None) -> Backup:
    """Copy a checked backup to where the program works; never over a file that is there.

    Raises
    ------
    ConflictError
        If there is a database already.
    BrokenLogError
        If the backup's chain does not hold.
    StorageError
        If the backup can't be read or the database not written.
    """
    result = check_backup(backup, progress)
    if result.fault is not None:
        raise BrokenLogError(
            f"{backup} can't be restored: {result.fault.message}; take an older backup", number=result.fault.number
        )
    with _new_file(target) as unfinished, closing(connect_read_only(backup)) as reader:
        _copy(reader, unfinished)
    connect(target).close()  # makes the settings that are kept in the file
    return Backup(target, result.checked, result.head, target.stat().st_size)


def _copy(reader: Connection, path: Path) -> None:
    with closing(sqlite3.connect(path, isolation_level=None)) as writer:
        # In one step: a copy by steps starts again whenever another connection writes, and beside a busy
        # writer never ends.
        try:
            reader.backup(writer, pages=-1)
        except sqlite3.OperationalError as error:
            # Unlike a statement's, this error bears no name of SQLite's, so its text has to do.
            kind = StorageFullError if "full" in str(error) else StorageError
            raise kind(f"copying to {path}: {error}; check room and rights there, then try again") from error
        # A write-ahead log needs files beside it; a backup is one file and can be read from a read-only medium.
        writer.execute("pragma journal_mode = delete")


@contextmanager
def _new_file(target: Path) -> Iterator[Path]:
    """Give a path to write to; what was written takes the target's name at the end, unless an error ends it."""
    if target.exists():
        raise ConflictError(f"{target} is there already; choose another name", path=str(target))
    if not target.parent.is_dir():
        raise NotFoundError(f"the folder {target.parent} is not there; make it first")
    unfinished = target.with_name(target.name + ".part")
    unfinished.unlink(missing_ok=True)
    unfinished.touch(mode=0o600)  # it holds names and addresses
    try:
        yield unfinished
        _sync(unfinished)
        unfinished.replace(target)
        _sync(target.parent)
    finally:
        unfinished.unlink(missing_ok=True)


def _sync(path: Path) -> None:
    descriptor = os.open(path, os.O_RDONLY)
    try:
        os.fsync(descriptor)
    finally:
        os.close(descriptor)
