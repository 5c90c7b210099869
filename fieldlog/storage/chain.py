"""The chain that ties each entry to the one before, and the walk that finds the first entry that does not fit."""

from __future__ import annotations

import functools
import hashlib
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from operator import itemgetter
from typing import Any, cast

import msgspec

from fieldlog.canonical import sha256_hex
from fieldlog.storage.columns import Columns, columns_of
from fieldlog.storage.connection import Connection, at_the_edge, sqlite3
from fieldlog.storage.current import CurrentRow, Following

FIRST_LINK = "0" * 64  # stands for the link before the first entry

Row = tuple[Any, ...]
Progress = Callable[[int, int], None]  # entries checked, of how many

_PROGRESS_STEP = 10_000
_GUARDS = ("entries_follow", "entries_not_changed", "entries_not_deleted")


@dataclass(frozen=True, slots=True)
class Fault:
    """The first thing that does not fit, and the entry where it shows."""

    number: int
    uid: str  # empty where no entry of this number is there
    what: str  # missing, text, sha256, link, a column's name, head, current, guard
    message: str


@dataclass(frozen=True, slots=True)
class CheckResult:
    """What a walk of the chain found; `head` is the link of the last entry that fits."""

    checked: int
    head: str
    fault: Fault | None


def link(number: int, received_at: str, previous: str, sha256: str) -> str:
    """Return the link of an entry to the one before (DEVELOPERS.md "Canonical text, hash and link")."""
    text = f"fieldlog-link-1\n{number}\n{received_at}\n{previous}\n{sha256}\n"
    return hashlib.sha256(text.encode(errors="replace")).hexdigest()


@at_the_edge
def check(connection: Connection, progress: Progress | None = None, expected_head: str | None = None) -> CheckResult:
    """Walk the whole chain and return the first fault, if there is one.

    Each text is hashed again, each link computed again, each column compared with its text, and `current`
    compared with a replay. `expected_head` is a head known from elsewhere (a receipt, a report): entries cut off
    the end, or a chain computed anew as a whole, show only against one.
    """
    with _snapshot(connection):
        try:
            return _checked(connection, progress or _no_progress, expected_head)
        except sqlite3.OperationalError as error:
            if getattr(error, "sqlite_errorname", None):
                raise
            # An error of the reader, not of the library: a text is no longer UTF-8. It is to be named as changed.
            connection.text_factory = functools.partial(str, encoding="utf-8", errors="replace")
            return _checked(connection, progress or _no_progress, expected_head)


def _checked(connection: Connection, progress: Progress, expected_head: str | None) -> CheckResult:
    walk = _Walk(connection, expected_head)
    fault = walk.fault(progress) or _fault_of_guards(connection) or walk.fault_of_current()
    return CheckResult(walk.number, walk.head, fault)


def _no_progress(checked: int, entries: int) -> None:
    """Say nothing."""


@contextmanager
def _snapshot(connection: Connection) -> Iterator[None]:
    """Read one state of the database, whatever is written meanwhile."""
    usual = connection.text_factory
    connection.execute("savepoint checking")
    try:
        yield
    finally:
        connection.execute("release checking")
        connection.text_factory = usual


_ROWS = (
    f"select number, received_at, sha256, link, text, {', '.join(Columns._fields)} "  # noqa: S608
    "from entries order by number"
)
_UID = 5 + Columns._fields.index("uid")


class _Walk:
    """How far the chain holds."""

    def __init__(self, connection: Connection, expected_head: str | None) -> None:
        self.number = 0
        self.head = FIRST_LINK
        self._connection = connection
        self._expected_head = expected_head
        self._following = Following(connection)
        self._current = _CurrentTable(connection)

    def fault(self, progress: Progress) -> Fault | None:
        """Go forward to the end or the first fault."""
        entries: int = self._connection.execute("select count(*) from entries").fetchone()[0]
        is_expected_seen = self._expected_head in {None, FIRST_LINK}
        for row in self._connection.execute(_ROWS):
            if found := _fault_of_row(row, self.number + 1, self.head):
                return found
            self.number, self.head = row[0], row[3]
            if settled := self._following.row_of(self.number, Columns._make(row[5:])):
                self._current.compare(settled)
            is_expected_seen = is_expected_seen or self.head == self._expected_head
            if self.number % _PROGRESS_STEP == 0:
                progress(self.number, entries)
        progress(self.number, entries)
        return None if is_expected_seen else _unknown_head(self.number, self._expected_head)

    def fault_of_current(self) -> Fault | None:
        """Return the first subject whose row of `current` differs from what its entries say."""
        for row in self._following.rest():
            self._current.compare(row)
        return self._current.fault()


class _CurrentTable:
    """The rows that are there, beside those the entries give.

    Both come in the order of `first`, but for those of subjects with later versions, which are given last: what is
    found before its turn is set aside.
    """

    def __init__(self, connection: Connection) -> None:
        columns = ", ".join(CurrentRow._fields)
        self._there = connection.execute(f"select {columns} from current order by first")  # noqa: S608
        self._aside: dict[int, Row] = {}
        self._faulty: list[Row] = []

    def compare(self, expected: CurrentRow) -> None:
        """Note the row if it is not there as expected."""
        row = self._aside.pop(expected.first, None) or self._row_of(expected.first)
        if row != expected:
            self._faulty.append(expected)

    def fault(self) -> Fault | None:
        """Return the first of the rows noted and of those nobody expected."""
        faulty: list[Row] = [*self._faulty, *self._aside.values(), *self._there]
        if not faulty:
            return None
        first: Row = min(faulty, key=itemgetter(0))
        row = CurrentRow._make(first)
        message = f"the version in force of {row.subject} differs from what its entries say; run `fieldlog rebuild`"
        return Fault(row.first, row.subject, "current", message)

    def _row_of(self, first: int) -> Row | None:
        for row in self._there:
            if row[0] == first:
                return cast("Row", row)
            self._aside[row[0]] = row
            if row[0] > first:
                break
        return None


def _unknown_head(number: int, expected_head: str | None) -> Fault:
    message = (
        f"the chain holds through entry {number}, but no entry has the link {expected_head}: entries were cut off "
        "the end, or the chain was computed anew, or the head is of another log"
    )
    return Fault(number + 1, "", "head", message)


def _fault_of_row(row: Row, expected: int, previous: str) -> Fault | None:
    number, received_at, sha256, entry_link, text = row[:5]
    if number != expected:
        message = f"entry {expected} is not there; the next one is {number}"
        return Fault(expected, "", "missing", message)
    digest = sha256_hex(text)
    if digest != sha256:
        if link(number, received_at, previous, digest) == entry_link:
            return _fault(row, "sha256", "is not the hash of its text")
        return _fault(row, "text", "is not the one that was hashed")
    if link(number, received_at, previous, digest) != entry_link:
        return _fault(row, "link", "does not follow from number, time, hash and the link before")
    return _fault_of_columns(row, text)


def _fault_of_columns(row: Row, text: str) -> Fault | None:
    try:
        columns = columns_of(text)
    except msgspec.MsgspecError:
        return _fault(row, "text", "is not the JSON of an entry")
    if row[5:] == columns:
        return None
    name = next(name for name, has, says in zip(Columns._fields, row[5:], columns, strict=True) if has != says)
    return _fault(row, name, "differs from the text")


def _fault(row: Row, what: str, message: str) -> Fault:
    number, uid = row[0], row[_UID]
    return Fault(number, uid, what, f"entry {number} ({uid}): its {what} {message}")


def _fault_of_guards(connection: Connection) -> Fault | None:
    there = {name for (name,) in connection.execute("select name from sqlite_master where type = 'trigger'")}
    for name in _GUARDS:
        if name not in there:
            return Fault(0, "", "guard", f"the trigger {name}, which keeps entries as they are, is not there")
    return None
