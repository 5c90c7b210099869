"""Whichever statement fails, nothing of its transaction stays, and the next one succeeds."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from pathlib import Path

import pytest

from fieldlog.errors import StorageFullError
from fieldlog.storage import chain, current, log, people, statements
from fieldlog.storage.connection import Connection, transaction
from fieldlog.storage.schema import open_database
from tests.faults.failing import FailingConnection, failing
from tests.storage import made
from tests.storage.made import (
    AT,
    LATER,
    OTHER_SITE,
    PERSON,
    SITE,
    SUPPLY,
    drain_test,
    entry,
    register,
    uid,
    version,
)


def add_all_kinds_of_outcome(connection: Connection) -> None:
    """Entries, a correction, a fork, a repeat, refusals, something that waits and something released."""
    first = drain_test(31)
    batch = [
        first,
        version(first, 41, uid(31)),
        version(first, 42, uid(31)),
        register()[2],
        drain_test(31, reason="another"),
        drain_test(32, site=OTHER_SITE),
        entry("note", uid(33), site=uid(99)),
        entry("site", uid(98)),
    ]
    with transaction(connection):
        log.append(connection, batch, "tablet", LATER)
        statements.mark_sites_dirty(connection, [SITE])


def rebuild(connection: Connection) -> None:
    with transaction(connection):
        current.rebuild_current(connection)


def judge(connection: Connection) -> None:
    with transaction(connection):
        statements.put(connection, SUPPLY, SITE, 8, [])


def add_person(connection: Connection) -> None:
    with transaction(connection):
        people.add_login(connection, people.Login("zoe", PERSON, "technician", AT))
        people.grant(connection, PERSON, SITE, AT)


@pytest.fixture
def connection(tmp_path: Path) -> Iterator[FailingConnection]:
    path = tmp_path / "fieldlog.sqlite"
    usual = open_database(path, create=True)
    made.take(usual, *register(), entry("note", uid(34), site=uid(98)))
    usual.close()
    opened = failing(path)
    yield opened
    opened.close()


@pytest.mark.parametrize("write", [add_all_kinds_of_outcome, rebuild, judge, add_person])
def test_nothing_stays_of_a_transaction_whose_nth_statement_fails(
    connection: FailingConnection, write: Callable[[Connection], None]
) -> None:
    before = made.dump(connection)
    for fails_at in range(1, 100):
        connection.statements, connection.fails_at = 0, fails_at
        try:
            write(connection)
        except StorageFullError as error:
            said = error.message
            connection.fails_at = 0
            assert "make room" in said
            assert not connection.in_transaction
            assert made.dump(connection) == before
        else:
            break
    connection.fails_at = 0
    assert fails_at > 3
    assert chain.check(connection).fault is None
    assert made.dump(connection) != before or write is rebuild
