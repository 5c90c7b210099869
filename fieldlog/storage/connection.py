"""Opening the database, and the one way to write to it. Nothing here knows a table."""

from __future__ import annotations

import fcntl
import functools
import os
import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from enum import Enum
from pathlib import Path
from typing import NoReturn, ParamSpec, TypeVar

# sqlite-utils takes pysqlite3 where it is installed. Every part of the program must use the same SQLite: two
# libraries in one process on one file undo each other's locks.
from sqlite_utils.utils import sqlite3 as sqlite3  # type: ignore[attr-defined]  # noqa: PLC0414

from fieldlog.errors import (
    ConfigError,
    ForeignFileError,
    NotFoundError,
    StorageBusyError,
    StorageError,
    StorageFullError,
)

APPLICATION_ID = 0x464C4F47  # "FLOG", in the file's header: tells our files from those of other programs
SCHEMA_VERSION = 1  # the number of migrations in schema.py
LIBRARY_VERSION: tuple[int, ...] = sqlite3.sqlite_version_info
BUSY_SECONDS = 10.0

_LOCK_POLL_SECONDS = 0.001

P = ParamSpec("P")
R = TypeVar("R")


class Connection(sqlite3.Connection):
    """A connection that knows its file and how long to wait for another writer."""

    path: Path
    busy_seconds: float


class Journal(Enum):
    """How commits are made durable: journal mode and the synchronous level that loses nothing with it."""

    WAL = ("wal", "FULL")
    # EXTRA also syncs the folder after the journal is gone; with FULL a power cut can roll back a commit.
    ROLLBACK = ("truncate", "EXTRA")


def journal_for(library: tuple[int, ...]) -> Journal:
    """Return the journal that is sound with this version of SQLite.

    From 3.7.0 to 3.51.2 a race at the reset of the write-ahead log can lose committed rows when two connections
    are open; mended in 3.51.3 and, in their branches, 3.50.7 and 3.44.6 (sqlite.org/wal.html, the WAL-reset bug).
    """
    mended = library >= (3, 51, 3) or (3, 50, 7) <= library < (3, 51) or (3, 44, 6) <= library < (3, 45)
    return Journal.WAL if mended or library < (3, 7) else Journal.ROLLBACK


@contextmanager
def errors_of_sqlite() -> Iterator[None]:
    """Turn errors of SQLite that come from disk, lock or file into the family of fieldlog; let bugs through."""
    try:
        yield
    except sqlite3.Error as error:
        _raise_as_ours(error)


def at_the_edge(function: Callable[P, R]) -> Callable[P, R]:
    """Return `function` with errors_of_sqlite around it; every public function of storage that runs SQL has it."""

    @functools.wraps(function)
    def guarded(*args: P.args, **kwargs: P.kwargs) -> R:
        try:
            return function(*args, **kwargs)
        except sqlite3.Error as error:
            _raise_as_ours(error)

    return guarded


def _raise_as_ours(error: sqlite3.Error) -> NoReturn:
    # Matched on SQLite's own name: its texts change from version to version.
    name = getattr(error, "sqlite_errorname", None) or ""
    if name.startswith("SQLITE_FULL"):
        raise StorageFullError(
            "writing to the log: no room on the disk, nothing of this step was kept; make room and try again",
            sqlite=name,
        ) from error
    if name.startswith(("SQLITE_BUSY", "SQLITE_LOCKED")):
        raise StorageBusyError(
            "the database: another writer held it for too long; try again in a moment", sqlite=name
        ) from error
    if name.startswith("SQLITE_NOTADB"):
        raise ForeignFileError(
            "the database: the file is not an SQLite database; check the path, or restore a backup", sqlite=name
        ) from error
    if name.startswith("SQLITE_CORRUPT"):
        raise StorageError(
            "the database: the file is damaged; stop writing and restore a backup beside it", sqlite=name
        ) from error
    if name.startswith(("SQLITE_IOERR", "SQLITE_READONLY", "SQLITE_CANTOPEN", "SQLITE_PERM")):
        raise StorageError(
            f"the database: the disk or the file's rights refused ({error}); check room, rights and the disk",
            sqlite=name,
        ) from error
    if name.startswith("SQLITE_CONSTRAINT"):
        raise StorageError(f"the database refuses what was asked: {error}", sqlite=name) from error
    raise error


@at_the_edge
def connect(path: Path, *, busy_seconds: float | None = None) -> Connection:
    """Return a connection to an existing fieldlog database of the present schema.

    Raises
    ------
    NotFoundError
        If there is no such file.
    ForeignFileError
        If it is not ours, or of a newer or older fieldlog.
    ConfigError
        If the file needs a mended SQLite and this one is not.
    StorageError
        If the file can't be read.
    """
    connection = connect_unmigrated(path, busy_seconds=busy_seconds)
    try:
        _require_present_schema(connection)
    except BaseException:
        connection.close()
        raise
    return connection


@at_the_edge
def connect_unmigrated(path: Path, *, create: bool = False, busy_seconds: float | None = None) -> Connection:
    """Return a connection to a fieldlog database of any schema up to ours; with `create`, an empty one is made."""
    if not path.is_file():
        if not create:
            raise NotFoundError(f"{path}: there is no database; run `fieldlog init`, or set FIELDLOG_INSTANCE")
        _make_empty(path)
    connection = _opened(path, busy_seconds, mode="rw")
    try:
        # Before any setting: the journal mode is kept in the file, and a foreign file is left as it was.
        _require_ours(connection, may_be_empty=create)
        _set_up(connection)
    except BaseException:
        connection.close()
        raise
    return connection


@at_the_edge
def connect_read_only(path: Path, *, busy_seconds: float | None = None) -> Connection:
    """Return a connection that reads a fieldlog database of the present schema and changes no byte of it.

    Raises
    ------
    NotFoundError
        If there is no such file.
    ForeignFileError
        If it is not ours, or of a newer or older fieldlog.
    StorageError
        If the file can't be read.
    """
    if not path.is_file():
        raise NotFoundError(f"{path}: there is no such file; check the path")
    connection = _opened(path, busy_seconds, mode="ro")
    try:
        _require_ours(connection, may_be_empty=False)
        _require_present_schema(connection)
    except BaseException:
        connection.close()
        raise
    return connection


def schema_version(connection: Connection) -> int:
    """Return the number of migrations the file has seen."""
    version: int = connection.execute("pragma user_version").fetchone()[0]
    return version


def _require_ours(connection: Connection, *, may_be_empty: bool) -> None:
    application = connection.execute("pragma application_id").fetchone()[0]
    is_empty = connection.execute("select count(*) from sqlite_master").fetchone()[0] == 0
    if application != APPLICATION_ID and not (may_be_empty and is_empty):
        raise ForeignFileError(
            f"{connection.path} is not a fieldlog database (application id {application:#x}); check the path",
            application_id=application,
        )
    version = schema_version(connection)
    if version > SCHEMA_VERSION:
        raise ForeignFileError(
            f"{connection.path} has schema {version}, this fieldlog knows up to {SCHEMA_VERSION}; install a newer "
            "fieldlog",
            schema=version,
        )


def _opened(path: Path, busy_seconds: float | None, *, mode: str) -> Connection:
    seconds = BUSY_SECONDS if busy_seconds is None else busy_seconds
    connection: Connection = sqlite3.connect(
        f"{path.absolute().as_uri()}?mode={mode}",
        timeout=seconds,
        isolation_level=None,
        uri=True,
        factory=Connection,
    )
    connection.path, connection.busy_seconds = path, seconds
    return connection


def _make_empty(path: Path) -> None:
    try:
        path.touch(mode=0o600)  # it holds names and addresses; SQLite would make it readable to all
    except OSError as error:
        raise StorageError(f"{path} can't be made ({error.strerror}); check the folder and its rights") from error


def _require_present_schema(connection: Connection) -> None:
    version = schema_version(connection)
    if version < SCHEMA_VERSION:
        raise ForeignFileError(
            f"{connection.path} has schema {version}, this fieldlog works with {SCHEMA_VERSION}; open it once "
            "with a fieldlog command to bring it up to date",
            schema=version,
        )


def _set_up(connection: Connection) -> None:
    """Make the settings: the write-ahead log is kept in the file, all else ends with the connection."""
    mode, synchronous = journal_for(LIBRARY_VERSION).value
    found = connection.execute("pragma journal_mode").fetchone()[0]
    if found == "wal" and mode != "wal":
        raise ConfigError(
            f"{connection.path} is kept with a write-ahead log, which SQLite "
            f"{'.'.join(map(str, LIBRARY_VERSION))} can damage; install pysqlite3 0.6.1 or newer"
        )
    if found != mode:
        with _writers_turn(connection):  # two processes that change it at once lock each other out
            connection.execute(f"pragma journal_mode = {mode}")
    connection.execute(f"pragma synchronous = {synchronous}")
    connection.execute("pragma foreign_keys = on")
    # Without it INSERT OR REPLACE deletes the old row without firing the trigger that forbids deleting.
    connection.execute("pragma recursive_triggers = on")


def keeper(path: Path) -> Connection:
    """Return a connection to be kept open by its process, after any fork.

    While it is open, closing the last connection of a request does not fold the write-ahead log into the file.
    """
    return connect(path)


@contextmanager
def transaction(connection: Connection) -> Iterator[Connection]:
    """Hold the only write transaction; commit at the end, or roll back and let the error through.

    Raises
    ------
    StorageBusyError
        If another writer held the database for too long.
    StorageFullError
        If there was no room; nothing was kept.
    StorageError
        If the disk refused; nothing was kept.
    """
    if connection.in_transaction:
        raise RuntimeError("a transaction is already open on this connection; the caller owns it")
    with _writers_turn(connection), errors_of_sqlite():
        connection.execute("begin immediate")
        try:
            yield connection
            connection.execute("commit")
        except BaseException as error:
            _roll_back(connection, error)
            raise


def require_transaction(connection: Connection) -> None:
    """Refuse to go on outside a transaction: rows that belong together would be committed one by one."""
    if not connection.in_transaction:
        raise RuntimeError("open a transaction first; the caller owns it")


def _roll_back(connection: Connection, error: BaseException) -> None:
    if not connection.in_transaction:  # SQLite has rolled back by itself, as it does on a full disk
        return
    try:
        connection.execute("rollback")
    except sqlite3.Error as second:
        error.add_note(f"rolling back failed too: {second}; SQLite rolls back when the file is opened again")


@contextmanager
def _writers_turn(connection: Connection) -> Iterator[None]:
    """Hold the lock file beside the database.

    SQLite's own wait backs off and is unfair: under eight writers some waited for seconds; with this lock the
    longest wait was a small part of one.
    """
    descriptor = _open_lock(connection.path)
    try:
        _take_lock(descriptor, connection.busy_seconds)
        yield
    finally:
        os.close(descriptor)  # gives the lock back, as does the end of the process


def _open_lock(path: Path) -> int:
    try:
        return os.open(path.with_name(path.name + ".lock"), os.O_RDWR | os.O_CREAT | os.O_CLOEXEC, 0o600)
    except OSError as error:
        raise StorageError(
            f"the lock file beside {path} can't be opened ({error.strerror}); check the folder's rights and room"
        ) from error


def _take_lock(descriptor: int, busy_seconds: float) -> None:
    give_up_at = time.monotonic() + busy_seconds
    while True:
        try:
            fcntl.flock(descriptor, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            if not time.monotonic() < give_up_at:
                raise StorageBusyError(
                    "the database: another writer held it for too long; try again in a moment"
                ) from None
            time.sleep(_LOCK_POLL_SECONDS)
        else:
            return
