"""Which reports were made."""

from __future__ import annotations

import pytest

from fieldlog.errors import ConflictError, StorageError
from fieldlog.storage import reports
from fieldlog.storage.connection import Connection, sqlite3
from fieldlog.storage.reports import StoredReport
from tests.storage.made import LATER, SITE, VISIT, entry, take, uid

SIGN_OFF, NEXT_SIGN_OFF = uid(51), uid(52)
FIRST = StoredReport("a1" * 32, VISIT, SIGN_OFF, 1, LATER, "b2" * 32, 48_123)
SECOND = StoredReport("c3" * 32, VISIT, NEXT_SIGN_OFF, 2, LATER, "d4" * 32, 49_321)


@pytest.fixture
def signed(connection: Connection) -> Connection:
    take(connection, *(entry("sign_off", own, site=SITE, visit=VISIT) for own in (SIGN_OFF, NEXT_SIGN_OFF)))
    return connection


def test_reports_are_found_by_digest_and_by_visit(signed: Connection) -> None:
    reports.add(signed, SECOND)
    reports.add(signed, FIRST)
    assert reports.by_sha256(signed, FIRST.sha256) == FIRST
    assert reports.by_sha256(signed, "e5" * 32) is None
    assert reports.of_visit(signed, VISIT) == [FIRST, SECOND]
    assert reports.of_visit(signed, SITE) == []
    assert reports.every(signed) == [SECOND, FIRST]


@pytest.mark.parametrize("again", [FIRST, StoredReport("e5" * 32, VISIT, NEXT_SIGN_OFF, 1, LATER, "f6" * 32, 51_000)])
def test_a_revision_is_made_once(signed: Connection, again: StoredReport) -> None:
    reports.add(signed, FIRST)
    with pytest.raises(ConflictError, match="revision 1"):
        reports.add(signed, again)
    assert reports.every(signed) == [FIRST]


def test_a_report_is_of_a_visit_and_a_sign_off_in_the_log(signed: Connection) -> None:
    with pytest.raises(StorageError, match="FOREIGN KEY"):
        reports.add(signed, StoredReport("a1" * 32, uid(88), SIGN_OFF, 1, LATER, "b2" * 32, 48_123))


@pytest.mark.parametrize(
    "statement",
    [
        "update reports set size = 3",
        "delete from reports",
        "replace into reports select sha256, visit, sign_off, 3, made_at, unsigned_sha256, 5 from reports",
    ],
)
def test_reports_stay_as_they_are(signed: Connection, statement: str) -> None:
    reports.add(signed, FIRST)
    with pytest.raises(sqlite3.IntegrityError, match="never"):
        signed.execute(statement)
    assert reports.every(signed) == [FIRST]
