"""Which reports were made: their digest, what they cover, their revision. Their bytes stand among the files."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import astuple, dataclass

from fieldlog.errors import ConflictError
from fieldlog.storage.connection import Connection, at_the_edge


@dataclass(frozen=True, slots=True)
class StoredReport:
    """A sealed report on file; `size` in bytes, `unsigned_sha256` of its bytes before the seal."""

    sha256: str
    visit: str
    sign_off: str
    revision: int
    made_at: str
    unsigned_sha256: str
    size: int


_REPORT = "select sha256, visit, sign_off, revision, made_at, unsigned_sha256, size from reports "


@at_the_edge
def add(connection: Connection, report: StoredReport) -> None:
    """Add a report that was made; its file is written before.

    Raises
    ------
    ConflictError
        If it, or this revision of its visit, is on file already.
    """
    if connection.execute(
        "select 1 from reports where sha256 = ? or visit = ? and revision = ?",
        (report.sha256, report.visit, report.revision),
    ).fetchone():
        raise ConflictError(
            f"revision {report.revision} of the report on visit {report.visit} is there already; make the next",
            visit=report.visit,
            revision=report.revision,
        )
    connection.execute(
        "insert into reports (sha256, visit, sign_off, revision, made_at, unsigned_sha256, size) "
        "values (?, ?, ?, ?, ?, ?, ?)",
        astuple(report),
    )


@at_the_edge
def by_sha256(connection: Connection, sha256: str) -> StoredReport | None:
    """Return the report of this digest."""
    return next(iter(_all(connection.execute(_REPORT + "where sha256 = ?", (sha256,)))), None)


@at_the_edge
def of_visit(connection: Connection, visit: str) -> list[StoredReport]:
    """Return the reports on a visit, the first revision first."""
    return _all(connection.execute(_REPORT + "where visit = ? order by revision", (visit,)))


@at_the_edge
def every(connection: Connection) -> list[StoredReport]:
    """Return all reports in the order they were made."""
    return _all(connection.execute(_REPORT + "order by rowid"))


def _all(rows: Iterable[tuple[str, str, str, int, str, str, int]]) -> list[StoredReport]:
    return [StoredReport(*row) for row in rows]
