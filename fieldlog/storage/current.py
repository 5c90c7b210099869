"""Which version of a subject is in force: one rule, used when entries arrive and when the table is made anew."""

from __future__ import annotations

import json
from collections.abc import Iterable, Iterator
from typing import NamedTuple

from fieldlog.storage.columns import Columns
from fieldlog.storage.connection import Connection, at_the_edge, require_transaction


class CurrentRow(NamedTuple):
    """A row of `current`; `first` is the number of the subject's first entry."""

    first: int
    subject: str
    kind: str
    site: str | None
    system: str | None
    performed_on: str | None
    number: int
    uid: str
    forked: int
    withdrawn: int


def in_force_after(before: CurrentRow | None, number: int, version: Columns) -> CurrentRow:
    """Return what is in force once `version` has its number.

    The first version is in force. A version based on the one in force replaces it. Any other is a fork: it is
    kept, the one in force stays, and the subject is marked. The mark goes with the next version that is based on
    the one in force and was not made on a tablet: it was composed where both versions could be seen. One made on
    a tablet comes into force, but its maker may not have known of the fork, so the mark stays.
    """
    if before is None:
        return _in_force(number, number, version, forked=0)
    if version.based_on != before.uid:
        return before._replace(forked=1)
    return _in_force(before.first, number, version, forked=before.forked if version.device is not None else 0)


def _in_force(first: int, number: int, version: Columns, forked: int) -> CurrentRow:
    return CurrentRow._make(
        (
            first, version.subject, version.kind, version.site, version.system, version.performed_on, number,
            version.uid, forked, version.withdrawn,
        )
    )  # fmt: skip


_COLUMNS = ", ".join(CurrentRow._fields)
# A subject is its first entry's uid, so the index of uids finds the row.
_ROWS_OF = (
    f"select {_COLUMNS} from current where first in "  # noqa: S608
    "(select number from entries where uid in (select value from json_each(?)))"
)
_UPSERT = (
    f"insert into current ({_COLUMNS}) values (?, ?, ?, ?, ?, ?, ?, ?, ?, ?) "  # noqa: S608
    "on conflict (first) do update set performed_on = excluded.performed_on, number = excluded.number, "
    "uid = excluded.uid, forked = excluded.forked, withdrawn = excluded.withdrawn"
)
_VERSIONS = f"select {', '.join(Columns._fields)}, number from entries order by number"  # noqa: S608


def rows_of(connection: Connection, subjects: Iterable[str]) -> dict[str, CurrentRow]:
    """Return the rows of these subjects, by subject."""
    found = connection.execute(_ROWS_OF, (json.dumps(list(subjects)),))
    return {row.subject: row for row in map(CurrentRow._make, found)}


def write_rows(connection: Connection, rows: Iterable[CurrentRow]) -> None:
    """Put the rows in place of those of the same subjects."""
    connection.executemany(_UPSERT, rows)


@at_the_edge
def rebuild_current(connection: Connection) -> int:
    """Make `current` anew from the entries and return its number of rows; inside a transaction."""
    require_transaction(connection)
    connection.execute("delete from current")
    write_rows(connection, replay(connection))
    rows: int = connection.execute("select count(*) from current").fetchone()[0]
    return rows


def replay(connection: Connection) -> Iterator[CurrentRow]:
    """Yield every row that the entries give: by `first`, and at the end those of subjects with later versions."""
    following = Following(connection)
    for row in connection.execute(_VERSIONS):
        settled = following.row_of(row[-1], Columns._make(row[:-1]))
        if settled is not None:
            yield settled
    yield from following.rest()


class Following:
    """Applies the rule to all entries in order, holding only subjects that have later versions."""

    def __init__(self, connection: Connection) -> None:
        later = connection.execute("select distinct subject from entries where subject <> uid")
        self._changed: dict[str, CurrentRow | None] = dict.fromkeys(subject for (subject,) in later)

    def row_of(self, number: int, version: Columns) -> CurrentRow | None:
        """Return the subject's row, or None while later versions are to come."""
        subject = version.subject
        if subject not in self._changed:
            return in_force_after(None, number, version)
        self._changed[subject] = in_force_after(self._changed[subject], number, version)
        return None

    def rest(self) -> Iterator[CurrentRow]:
        """Yield the rows of the subjects with later versions, once all entries were seen."""
        return filter(None, self._changed.values())
