"""Making the tables and bringing older ones up to date."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

from fieldlog.storage import connection as connections
from fieldlog.storage import schema
from fieldlog.storage.connection import SCHEMA_VERSION, Connection, connect
from fieldlog.storage.schema import open_database
from tests.storage import made

ROOT = Path(__file__).resolve().parents[2]

OPEN_TOGETHER = """
import sys
from pathlib import Path
from fieldlog.storage.schema import open_database
path = Path(sys.argv[1])
print("ready", flush=True)
sys.stdin.readline()
connection = open_database(path, create=True)
print(connection.execute("select count(*) from _sqlite_migrations").fetchone()[0])
"""


def test_the_version_counts_the_migrations() -> None:
    names = [migration.name for migration in schema.migrations._migrations]
    assert names == [str(number) for number in range(1, SCHEMA_VERSION + 1)]


def test_opening_again_changes_nothing(path: Path) -> None:
    first = open_database(path, create=True)
    made.take(first, *made.register())
    before = made.dump(first)
    first.close()
    second = open_database(path)
    assert made.dump(second) == before
    second.close()


def test_every_table_of_ours_is_strict(empty: Connection) -> None:
    tables = empty.execute("select name, strict from pragma_table_list where schema = 'main' and type = 'table'")
    loose = {name for name, strict in tables if not strict and not name.startswith(("sqlite_", "_sqlite_"))}
    assert loose == set()


def test_a_migration_that_fails_leaves_nothing_behind(path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(schema, "_REPORTS", ("create table half (way text) strict", "create nonsense"))
    with pytest.raises(connections.sqlite3.OperationalError):
        open_database(path, create=True)
    monkeypatch.undo()
    connection = open_database(path, create=True)
    assert connection.execute("select count(*) from sqlite_master where name = 'half'").fetchone() == (0,)
    connection.close()


@pytest.mark.slow
def test_two_processes_that_open_a_new_database_at_once(path: Path) -> None:
    command = [sys.executable, "-c", OPEN_TOGETHER, str(path)]
    pipe = subprocess.PIPE
    children = [subprocess.Popen(command, cwd=ROOT, stdin=pipe, stdout=pipe, stderr=pipe, text=True) for _ in range(2)]
    for child in children:
        assert child.stdout is not None
        assert child.stdout.readline() == "ready\n"
    for child in children:
        assert child.stdin is not None
        child.stdin.write("\n")
        child.stdin.flush()
    said = [child.communicate(timeout=60) for child in children]
    assert said == [(f"{SCHEMA_VERSION}\n", "")] * 2
    connect(path).close()
