"""Opening: which files are taken, which SQLite, with which settings; and the one transaction."""

from __future__ import annotations

import os
import subprocess
import sys
from pathlib import Path

import pytest

from fieldlog.errors import (
    ConfigError,
    ForeignFileError,
    NotFoundError,
    StorageBusyError,
    StorageError,
    StorageFullError,
)
from fieldlog.storage import connection as module
from fieldlog.storage.connection import (
    APPLICATION_ID,
    SCHEMA_VERSION,
    Connection,
    Journal,
    connect,
    connect_read_only,
    errors_of_sqlite,
    journal_for,
    keeper,
    sqlite3,
    transaction,
)
from fieldlog.storage.schema import open_database
from tests.storage import made

ROOT = Path(__file__).resolve().parents[2]


@pytest.mark.parametrize(
    ("library", "journal"),
    [
        # sqlite.org/wal.html names the versions; the numbers around each border, read in a quotation of it.
        ((3, 6, 23), Journal.WAL),
        ((3, 7, 0), Journal.ROLLBACK),
        ((3, 40, 1), Journal.ROLLBACK),
        ((3, 44, 5), Journal.ROLLBACK),
        ((3, 44, 6), Journal.WAL),
        ((3, 45, 0), Journal.ROLLBACK),
        ((3, 50, 6), Journal.ROLLBACK),
        ((3, 50, 7), Journal.WAL),
        ((3, 51, 2), Journal.ROLLBACK),
        ((3, 51, 3), Journal.WAL),
        ((3, 53, 4), Journal.WAL),
    ],
)
def test_the_write_ahead_log_is_used_where_it_is_sound(library: tuple[int, ...], journal: Journal) -> None:
    assert journal_for(library) is journal


def settings_of(connection: Connection) -> dict[str, object]:
    names = ("journal_mode", "synchronous", "foreign_keys", "recursive_triggers", "busy_timeout", "application_id")
    return {name: connection.execute(f"pragma {name}").fetchone()[0] for name in names}


def test_settings_with_a_sound_sqlite(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(module, "LIBRARY_VERSION", (3, 51, 3))
    connection = open_database(path, create=True, busy_seconds=2.5)
    assert settings_of(connection) == {
        "journal_mode": "wal",
        "synchronous": 2,
        "foreign_keys": 1,
        "recursive_triggers": 1,
        "busy_timeout": 2500,
        "application_id": APPLICATION_ID,
    }
    connection.close()


def test_settings_with_an_affected_sqlite(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(module, "LIBRARY_VERSION", (3, 40, 1))
    connection = open_database(path, create=True)
    assert settings_of(connection)["journal_mode"] == "truncate"
    assert settings_of(connection)["synchronous"] == 3
    made.take(connection, *made.register())
    connection.close()


def test_an_affected_sqlite_refuses_a_file_with_a_write_ahead_log(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(module, "LIBRARY_VERSION", (3, 51, 3))
    open_database(path, create=True).close()
    monkeypatch.setattr(module, "LIBRARY_VERSION", (3, 51, 2))
    with pytest.raises(ConfigError, match=r"3\.51\.2 can damage; install pysqlite3"):
        connect(path)


def test_a_file_with_a_rollback_journal_goes_over_to_the_write_ahead_log(
    path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.setattr(module, "LIBRARY_VERSION", (3, 51, 2))
    open_database(path, create=True).close()
    monkeypatch.setattr(module, "LIBRARY_VERSION", (3, 51, 3))
    connection = connect(path)
    assert settings_of(connection)["journal_mode"] == "wal"
    connection.close()


WITHOUT_PYSQLITE3 = """
import sys
sys.modules["pysqlite3"] = None
from pathlib import Path
from fieldlog.storage import chain, connection
from fieldlog.storage.schema import open_database
from tests.storage import made
log = open_database(Path(sys.argv[1]), create=True)
made.take(log, *made.register())
result = chain.check(log)
mode = log.execute("pragma journal_mode").fetchone()[0]
sound = connection.journal_for(connection.LIBRARY_VERSION).value[0]
print(connection.sqlite3.__name__, result.checked, result.fault, mode, sound)
"""


@pytest.mark.slow
def test_the_standard_librarys_sqlite_does_as_well(path: Path) -> None:
    run = subprocess.run(
        [sys.executable, "-c", WITHOUT_PYSQLITE3, str(path)], cwd=ROOT, capture_output=True, text=True, check=True
    )
    name, checked, fault, mode, sound = run.stdout.split()
    assert (name, checked, fault) == ("sqlite3", "7", "None")
    assert mode == sound


def test_no_file_is_made_by_looking_for_one(path: Path) -> None:
    for opening in (connect, open_database, connect_read_only):
        with pytest.raises(NotFoundError, match="there is no"):
            opening(path)
    assert not path.exists()


def test_only_its_owner_may_read_a_new_database(path: Path) -> None:
    open_database(path, create=True).close()
    assert path.stat().st_mode & 0o077 == 0


@pytest.mark.parametrize("opening", [connect, connect_read_only, lambda path: open_database(path, create=True)])
def test_a_file_of_another_program_is_refused_and_left_as_it_was(path: Path, opening: object) -> None:
    foreign = sqlite3.connect(path)
    foreign.execute("create table songs (title text)")
    foreign.commit()
    foreign.close()
    before = path.read_bytes()
    with pytest.raises(ForeignFileError, match="is not a fieldlog database"):
        opening(path)  # type: ignore[operator]
    assert path.read_bytes() == before


@pytest.mark.parametrize("opening", [connect, connect_read_only, open_database])
def test_a_database_of_a_newer_fieldlog_is_refused(path: Path, opening: object) -> None:
    newer = open_database(path, create=True)
    newer.execute(f"pragma user_version = {SCHEMA_VERSION + 6}")
    newer.close()
    with pytest.raises(ForeignFileError, match=r"knows up to \d+; install a newer fieldlog"):
        opening(path)  # type: ignore[operator]


@pytest.mark.parametrize("opening", [connect, connect_read_only])
def test_a_database_of_an_older_schema_is_brought_up_to_date_first(path: Path, opening: object) -> None:
    older = open_database(path, create=True)
    older.execute(f"pragma user_version = {SCHEMA_VERSION - 1}")
    older.close()
    with pytest.raises(ForeignFileError, match="to bring it up to date"):
        opening(path)  # type: ignore[operator]


def test_a_file_that_is_no_database(path: Path) -> None:
    path.write_text("pressure readings of 2019, see the binder\n" * 40)
    for opening in (connect, open_database, connect_read_only):
        with pytest.raises(ForeignFileError, match="not an SQLite database"):
            opening(path)


def test_an_empty_file_is_not_taken_for_a_log(path: Path) -> None:
    path.touch()
    with pytest.raises(ForeignFileError):
        connect(path)


def test_a_damaged_file_is_named_as_damaged(path: Path) -> None:
    connection = open_database(path, create=True)
    made.take(connection, *made.register(), *(made.drain_test(number) for number in range(30, 400)))
    connection.execute("pragma wal_checkpoint(truncate)")
    connection.close()
    content = bytearray(path.read_bytes())
    content[2 * 4096 :] = b"\xa5" * (len(content) - 2 * 4096)
    path.write_bytes(content)
    with pytest.raises(StorageError, match="damaged"):
        made.take(open_database(path), made.drain_test(500))


@pytest.mark.skipif(os.geteuid() == 0, reason="the superuser reads everything")
def test_a_file_without_rights(path: Path) -> None:
    open_database(path, create=True).close()
    path.chmod(0)
    with pytest.raises(StorageError, match="rights"):
        connect(path)


def test_a_file_whose_log_can_not_be_opened(path: Path) -> None:
    open_database(path, create=True).close()
    path.with_name(path.name + "-wal").mkdir()
    with pytest.raises(StorageError, match="rights"):
        connect(path)


def test_a_lock_file_that_can_not_be_opened(path: Path) -> None:
    connection = open_database(path, create=True)
    lock = path.with_name(path.name + ".lock")
    lock.unlink()
    lock.mkdir()
    with pytest.raises(StorageError, match="lock file"):
        made.take(connection)
    connection.close()


def test_a_folder_that_is_not_there(tmp_path: Path) -> None:
    with pytest.raises(StorageError, match="can't be made"):
        open_database(tmp_path / "missing" / "fieldlog.sqlite", create=True)


def test_a_second_transaction_inside_the_first_is_a_mistake_of_the_caller(empty: Connection) -> None:
    with transaction(empty), pytest.raises(RuntimeError, match="already open"), transaction(empty):
        pass


def test_another_writer_is_waited_for_and_then_named(path: Path, empty: Connection) -> None:
    second = connect(path, busy_seconds=0.02)
    with transaction(empty), pytest.raises(StorageBusyError, match="another writer"), transaction(second):
        pass
    with transaction(second):
        pass
    second.close()


def test_a_writer_that_takes_no_lock_file_is_waited_for_too(path: Path, empty: Connection) -> None:
    second = connect(path, busy_seconds=0.02)
    empty.execute("begin immediate")
    with pytest.raises(StorageBusyError, match="another writer"), transaction(second):
        pass
    empty.execute("rollback")
    second.close()


def write_and_fail(connection: Connection) -> None:
    connection.execute("insert into dirty_supplies values ('a', 3)")
    raise ZeroDivisionError


def test_an_error_in_a_transaction_comes_through_as_itself(empty: Connection) -> None:
    with pytest.raises(ZeroDivisionError), transaction(empty):
        write_and_fail(empty)
    assert not empty.in_transaction
    assert empty.execute("select * from dirty_supplies").fetchall() == []


def test_a_failing_rollback_does_not_hide_the_first_error(empty: Connection) -> None:
    class Broken:
        in_transaction = True

        def execute(self, statement: str) -> None:
            raise sqlite3.OperationalError("disk I/O error")

    first = ValueError("the first")
    module._roll_back(Broken(), first)  # type: ignore[arg-type]
    assert first.__notes__ == [
        "rolling back failed too: disk I/O error; SQLite rolls back when the file is opened again"
    ]


def sqlite_error(name: str) -> sqlite3.OperationalError:
    error = sqlite3.OperationalError("said differently in every version")
    error.sqlite_errorname = name
    return error


@pytest.mark.parametrize(
    ("name", "ours"),
    [
        ("SQLITE_FULL", StorageFullError),
        ("SQLITE_BUSY", StorageBusyError),
        ("SQLITE_BUSY_SNAPSHOT", StorageBusyError),
        ("SQLITE_LOCKED_SHAREDCACHE", StorageBusyError),
        ("SQLITE_NOTADB", ForeignFileError),
        ("SQLITE_CORRUPT_INDEX", StorageError),
        ("SQLITE_IOERR_WRITE", StorageError),
        ("SQLITE_READONLY_DBMOVED", StorageError),
        ("SQLITE_CANTOPEN_ISDIR", StorageError),
        ("SQLITE_CONSTRAINT_TRIGGER", StorageError),
    ],
)
def test_errors_of_sqlite_become_ours_by_their_name(name: str, ours: type[StorageError]) -> None:
    with pytest.raises(StorageError) as raised, errors_of_sqlite():
        raise sqlite_error(name)
    assert type(raised.value) is ours
    assert raised.value.details == {"sqlite": name}
    assert isinstance(raised.value.__cause__, sqlite3.OperationalError)


def test_a_bug_in_a_statement_comes_through_as_itself(empty: Connection) -> None:
    with pytest.raises(sqlite3.OperationalError), errors_of_sqlite():
        empty.execute("select number from entry")


def test_with_a_keeper_the_write_ahead_log_outlives_other_connections(path: Path) -> None:
    log = path.with_name(path.name + "-wal")
    open_database(path, create=True).close()
    assert not log.exists()
    kept = keeper(path)
    connect(path).close()
    assert log.exists() == (settings_of(kept)["journal_mode"] == "wal")
    kept.close()


def test_fifty_connections_leave_no_descriptor_open(path: Path) -> None:
    open_database(path, create=True).close()
    before = len(list(Path("/proc/self/fd").iterdir()))
    for _ in range(50):
        connection = connect(path)
        with transaction(connection):
            pass
        connection.close()
    assert len(list(Path("/proc/self/fd").iterdir())) == before
