"""Reading the log by what is asked of it."""

from __future__ import annotations

import time

import pytest

from fieldlog.records.entries import Entry
from fieldlog.storage import entries, log
from fieldlog.storage.connection import Connection
from tests.storage.made import (
    ORGANISATION,
    OTHER_SITE,
    PERSON,
    SITE,
    SUPPLY,
    SYSTEM,
    VISIT,
    drain_test,
    entry,
    register,
    take,
    uid,
    version,
)

GAUGE = uid(61)


@pytest.fixture
def filled(connection: Connection) -> Connection:
    first, second = drain_test(31), drain_test(32)
    take(
        connection,
        first,
        second,
        version(first, 41, uid(31)),
        version(second, 42, uid(32), "wrong system", withdrawn=True),
        entry("gauge", GAUGE, {"range": "0 to 300 psi"}),
        entry("note", uid(62), {"text": "padlock on the gate"}, site=OTHER_SITE),
    )
    return connection


def uids(found: list[Entry]) -> list[str]:
    return [each.uid for each in found]


def test_by_uid_number_and_link(filled: Connection) -> None:
    found = entries.entry_by_uid(filled, uid(41))
    assert found is not None
    assert entries.entry_by_number(filled, found.number) == found
    assert entries.entry_by_link(filled, found.link) == found
    assert entries.entries_by_uid(filled, [uid(41), uid(88), SITE]) == [entries.entry_by_uid(filled, SITE), found]


def test_what_is_not_there_is_none(filled: Connection) -> None:
    assert entries.entry_by_uid(filled, uid(88)) is None
    assert entries.entry_by_number(filled, 88) is None
    assert entries.entry_by_link(filled, "8" * 64) is None
    assert entries.current_of(filled, uid(88)) is None
    assert entries.in_force_of(filled, uid(88)) is None
    assert entries.versions(filled, uid(88)) == []


def test_a_later_version_is_no_subject(filled: Connection) -> None:
    assert entries.versions(filled, uid(41)) == []
    assert entries.current_of(filled, uid(41)) is None


def test_all_of_a_site(filled: Connection) -> None:
    assert uids(entries.entries_of_site(filled, SITE)) == [
        SITE,
        SUPPLY,
        SYSTEM,
        VISIT,
        uid(31),
        uid(32),
        uid(41),
        uid(42),
    ]


def test_what_belongs_to_no_site_is_the_organisations(filled: Connection) -> None:
    assert uids(entries.entries_of_organisation(filled)) == [ORGANISATION, PERSON, GAUGE]
    assert uids(entries.in_force_of_organisation(filled)) == [ORGANISATION, PERSON, GAUGE]
    assert uids(entries.in_force_of_organisation(filled, ["gauge"])) == [GAUGE]


def test_in_force_at_a_site(filled: Connection) -> None:
    assert uids(entries.in_force_at_site(filled, SITE)) == [SITE, SUPPLY, SYSTEM, VISIT, uid(41)]
    assert uids(entries.in_force_at_site(filled, SITE, ["main_drain_test", "system"])) == [SYSTEM, uid(41)]
    assert uids(entries.in_force_at_site(filled, OTHER_SITE)) == [OTHER_SITE, uid(62)]


def test_in_force_about_a_system(filled: Connection) -> None:
    assert uids(entries.in_force_of_system(filled, SYSTEM)) == [uid(41)]
    assert entries.in_force_of_system(filled, SYSTEM, ["note"]) == []


def test_in_force_at_a_visit_is_what_its_entries_have_become(filled: Connection) -> None:
    assert uids(entries.in_force_at_visit(filled, VISIT)) == [uid(41)]
    assert entries.in_force_at_visit(filled, VISIT, ["note"]) == []


def test_in_force_of_kinds(filled: Connection) -> None:
    assert uids(entries.in_force_of_kind(filled, "site")) == [SITE, OTHER_SITE]
    assert uids(entries.in_force_of_kind(filled, "site", "main_drain_test")) == [SITE, OTHER_SITE, uid(41)]


def test_paging_and_counting(filled: Connection) -> None:
    assert uids(entries.after(filled, 2, 3)) == [SITE, OTHER_SITE, SUPPLY]
    assert entries.after(filled, 13) == []
    assert entries.count(filled) == log.head(filled).number == 13
    assert entries.counts_by_kind(filled)["main_drain_test"] == 2


INDEXED = {
    "of_site": (entries._ENTRY + "where e.site = 'x' order by e.number", "entries_site"),
    "versions": (entries._ENTRY + entries._OF_SUBJECT, "entries_later_version"),
    "at_site": (entries._IN_FORCE + "where c.site = ?1 " + entries._OF_KINDS, "current_site"),
    "of_kind": (entries._IN_FORCE + entries._OF_KIND, "current_kind"),
    "of_system": (entries._IN_FORCE + "where c.system = ?1 " + entries._OF_KINDS, "current_system"),
    "forked": (entries._CURRENT + "where forked = 1 order by number", "current_forked"),
}


@pytest.mark.parametrize("name", INDEXED)
def test_no_question_walks_a_whole_table(filled: Connection, name: str) -> None:
    statement, index = INDEXED[name]
    arguments = ["x"] * (2 if "?2" in statement else 1 if "?" in statement else 0)
    plan = [row[3] for row in filled.execute("explain query plan " + statement, arguments)]
    assert any(index in step for step in plan), plan
    assert not any(step.startswith(("SCAN e", "SCAN c")) and "INDEX" not in step for step in plan), plan


def test_the_register_alone_has_one_version_each(connection: Connection) -> None:
    for envelope, arrival in register():
        (only,) = entries.versions(connection, envelope.subject)
        assert only.text == arrival.text
    assert entries.forked(connection) == []


@pytest.mark.slow
def test_reading_a_site_does_not_depend_on_what_else_there_is(connection: Connection) -> None:
    """A site of a few entries among many of another is read without walking those."""
    tests = [drain_test(number) for number in range(1000, 7000)]
    take(connection, *tests, entry("note", uid(62), site=OTHER_SITE))
    began = time.perf_counter()
    for _ in range(20):
        entries.in_force_at_site(connection, OTHER_SITE)
    few = time.perf_counter() - began
    began = time.perf_counter()
    entries.in_force_at_site(connection, SITE)
    assert few / 20 < (time.perf_counter() - began) / 4
