"""Every public function of storage, run against a locked database, says that another holds it.

The list is made by looking: a new function without a case here fails `test_every_function_has_a_case`.
"""

from __future__ import annotations

import importlib
import inspect
import pkgutil
from collections.abc import Callable, Iterator
from datetime import date
from pathlib import Path

import pytest

import fieldlog.storage
from fieldlog.errors import StorageBusyError
from fieldlog.records.entries import Refusal
from fieldlog.storage import (
    backup,
    chain,
    connection,
    current,
    entries,
    log,
    people,
    refusals,
    reports,
    schema,
    statements,
    waiting,
)
from fieldlog.storage.connection import Connection
from tests.storage.made import AT, LATER, PERSON, SITE, SUPPLY, SYSTEM, VISIT, drain_test, register, take, uid

TODAY = date(2024, 5, 8)
REFUSED = refusals.refused_text(Refusal(uid(31), "input", "text", "not JSON"), "{", AT, "import")
WAITS = waiting.WaitingText(uid(31), "{}", "a1" * 32, None, "form", AT, uid(88), "site")
REPORT = reports.StoredReport("a1" * 32, VISIT, VISIT, 3, LATER, "b2" * 32, 48_123)

WITHOUT_A_CASE = {
    "chain.link": "runs no SQL",
    "columns.columns_of": "runs no SQL",
    "columns.site_of": "runs no SQL",
    "connection.at_the_edge": "is what is tested",
    "connection.errors_of_sqlite": "is what is tested",
    "connection.journal_for": "runs no SQL",
    "connection.require_transaction": "runs no SQL",
    "connection.schema_version": "runs inside opening",
    "current.in_force_after": "runs no SQL",
    "current.replay": "runs inside rebuild_current and check",
    "current.rows_of": "runs inside append",
    "current.write_rows": "runs inside append and rebuild_current",
    "refusals.refused_text": "runs no SQL",
    **{f"files.{name}": "runs no SQL" for name in ("put", "read", "has", "path_of", "names")},
}


def begun(held: Connection) -> None:
    with connection.transaction(held):
        pass


# By connection: what is called on one that was opened before the lock was taken.
BY_CONNECTION: dict[str, Callable[[Connection], object]] = {
    "chain.check": chain.check,
    "connection.transaction": begun,
    "current.rebuild_current": current.rebuild_current,
    "entries.after": lambda c: entries.after(c, 3),
    "entries.count": entries.count,
    "entries.counts_by_kind": entries.counts_by_kind,
    "entries.current_of": lambda c: entries.current_of(c, SITE),
    "entries.entries_by_uid": lambda c: entries.entries_by_uid(c, [SITE]),
    "entries.entries_of_organisation": entries.entries_of_organisation,
    "entries.entries_of_site": lambda c: entries.entries_of_site(c, SITE),
    "entries.entry_by_link": lambda c: entries.entry_by_link(c, "8" * 64),
    "entries.entry_by_number": lambda c: entries.entry_by_number(c, 3),
    "entries.entry_by_uid": lambda c: entries.entry_by_uid(c, SITE),
    "entries.forked": entries.forked,
    "entries.in_force_at_site": lambda c: entries.in_force_at_site(c, SITE),
    "entries.in_force_at_visit": lambda c: entries.in_force_at_visit(c, VISIT),
    "entries.in_force_of": lambda c: entries.in_force_of(c, SITE),
    "entries.in_force_of_kind": lambda c: entries.in_force_of_kind(c, "site"),
    "entries.in_force_of_organisation": entries.in_force_of_organisation,
    "entries.in_force_of_system": lambda c: entries.in_force_of_system(c, SYSTEM),
    "entries.versions": lambda c: entries.versions(c, SITE),
    "log.append": lambda c: log.append(c, [drain_test(31)], "form", LATER),
    "log.head": log.head,
    "people.add_login": lambda c: people.add_login(c, people.Login("zoe", PERSON, "office", AT)),
    "people.change_role": lambda c: people.change_role(c, "zoe", "owner"),
    "people.grant": lambda c: people.grant(c, PERSON, SITE, AT),
    "people.login_of": lambda c: people.login_of(c, "zoe"),
    "people.logins": people.logins,
    "people.people_granted": lambda c: people.people_granted(c, SITE),
    "people.remove_login": lambda c: people.remove_login(c, "zoe"),
    "people.revoke": lambda c: people.revoke(c, PERSON, SITE),
    "people.sites_granted": lambda c: people.sites_granted(c, PERSON),
    "refusals.count": refusals.count,
    "refusals.keep": lambda c: refusals.keep(c, [REFUSED]),
    "refusals.kept": refusals.kept,
    "refusals.kept_of": lambda c: refusals.kept_of(c, uid(31)),
    "reports.add": lambda c: reports.add(c, REPORT),
    "reports.by_sha256": lambda c: reports.by_sha256(c, "a1" * 32),
    "reports.every": reports.every,
    "reports.of_visit": lambda c: reports.of_visit(c, VISIT),
    "statements.dirty": statements.dirty,
    "statements.due": lambda c: statements.due(c, TODAY),
    "statements.every": statements.every,
    "statements.forget": statements.forget,
    "statements.mark_all_dirty": statements.mark_all_dirty,
    "statements.mark_dirty": lambda c: statements.mark_dirty(c, [SUPPLY]),
    "statements.mark_sites_dirty": lambda c: statements.mark_sites_dirty(c, [SITE]),
    "statements.of_site": lambda c: statements.of_site(c, SITE),
    "statements.of_supply": lambda c: statements.of_supply(c, SUPPLY),
    "statements.of_system": lambda c: statements.of_system(c, SYSTEM),
    "statements.put": lambda c: statements.put(c, SUPPLY, SITE, 8, []),
    "waiting.count": waiting.count,
    "waiting.digests_of": lambda c: waiting.digests_of(c, [uid(31)]),
    "waiting.every": waiting.every,
    "waiting.is_empty": waiting.is_empty,
    "waiting.keep": lambda c: waiting.keep(c, [WAITS]),
    "waiting.release": lambda c: waiting.release(c, [uid(88)]),
}
BY_PATH: dict[str, Callable[[Path], object]] = {
    "backup.back_up": lambda path: backup.back_up(path, path.with_name("copy.sqlite")),
    "backup.check_backup": backup.check_backup,
    "backup.restore": lambda path: backup.restore(path, path.with_name("copy.sqlite")),
    "connection.connect": connection.connect,
    "connection.connect_read_only": connection.connect_read_only,
    "connection.connect_unmigrated": connection.connect_unmigrated,
    "connection.keeper": connection.keeper,
    "schema.open_database": schema.open_database,
}


def public_functions() -> set[str]:
    names = set()
    for found in pkgutil.iter_modules(fieldlog.storage.__path__):
        module = importlib.import_module(f"fieldlog.storage.{found.name}")
        for name, function in inspect.getmembers(module, inspect.isfunction):
            if function.__module__ == module.__name__ and not name.startswith("_"):
                names.add(f"{found.name}.{name}")
    return names


def test_every_function_has_a_case() -> None:
    assert public_functions() == {*BY_CONNECTION, *BY_PATH, *WITHOUT_A_CASE}


@pytest.fixture
def locked(path: Path, monkeypatch: pytest.MonkeyPatch) -> Iterator[Connection]:
    """Give a connection to a database that another one has locked against reading too."""
    monkeypatch.setattr(connection, "LIBRARY_VERSION", (3, 40, 1))  # a rollback journal: readers can be shut out
    monkeypatch.setattr(connection, "BUSY_SECONDS", 0.02)
    holder = schema.open_database(path, create=True)
    take(holder, *register())
    waiting_one = connection.connect(path)
    holder.execute("begin exclusive")
    yield waiting_one
    holder.execute("rollback")
    holder.close()
    waiting_one.close()


@pytest.mark.parametrize("name", BY_CONNECTION)
def test_a_locked_database_is_named_as_such(locked: Connection, name: str) -> None:
    if name != "connection.transaction":
        locked.execute("begin")  # takes no lock yet: functions that need a transaction find one
    with pytest.raises(StorageBusyError, match="another writer held it"):
        BY_CONNECTION[name](locked)


@pytest.mark.parametrize("name", BY_PATH)
def test_a_locked_database_is_named_as_such_at_opening(locked: Connection, path: Path, name: str) -> None:
    with pytest.raises(StorageBusyError, match="another writer held it"):
        BY_PATH[name](path)
    assert not path.with_name("copy.sqlite").exists()
