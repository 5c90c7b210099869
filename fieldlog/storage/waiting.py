"""Texts that name a site, subject, version, system or visit that has not arrived; kept until it does."""

from __future__ import annotations

import json
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from fieldlog.storage.connection import Connection, at_the_edge, require_transaction


@dataclass(frozen=True, slots=True)
class WaitingText:
    """A text as it came, and what it waits for."""

    uid: str
    text: str
    sha256: str
    signature: str | None
    via: str
    received_at: str
    waits_for: str
    field: str


_COLUMNS = "uid, text, sha256, signature, via, received_at, waits_for, field"


@at_the_edge
def every(connection: Connection) -> list[WaitingText]:
    """Return all waiting texts in the order of their arrival."""
    return [WaitingText(*row) for row in connection.execute(f"select {_COLUMNS} from waiting order by id")]  # noqa: S608


@at_the_edge
def count(connection: Connection) -> int:
    """Return the number of waiting texts."""
    found: int = connection.execute("select count(*) from waiting").fetchone()[0]
    return found


@at_the_edge
def is_empty(connection: Connection) -> bool:
    """Return whether no text waits, as is usual."""
    found: int = connection.execute("select exists (select 1 from waiting)").fetchone()[0]
    return found == 0


@at_the_edge
def keep(connection: Connection, texts: Sequence[WaitingText]) -> None:
    """Keep texts until what they wait for arrives."""
    connection.executemany(
        f"insert into waiting ({_COLUMNS}) values (?, ?, ?, ?, ?, ?, ?, ?)",  # noqa: S608
        [
            (
                each.uid,
                each.text,
                each.sha256,
                each.signature,
                each.via,
                each.received_at,
                each.waits_for,
                each.field,
            )
            for each in texts
        ],
    )


@at_the_edge
def digests_of(connection: Connection, uids: Iterable[str]) -> dict[str, str]:
    """Return the digests of the waiting texts among these uids, by uid."""
    found = connection.execute(
        "select uid, sha256 from waiting where uid in (select value from json_each(?))", (json.dumps(list(uids)),)
    )
    return dict(found.fetchall())


@at_the_edge
def release(connection: Connection, arrived: Iterable[str]) -> list[WaitingText]:
    """Return, and no longer keep, the texts that waited for one of these uids; inside a transaction."""
    require_transaction(connection)
    uids = json.dumps(list(arrived))
    found = connection.execute(
        f"select {_COLUMNS} from waiting where waits_for in (select value from json_each(?)) order by id",  # noqa: S608
        (uids,),
    )
    released = [WaitingText(*row) for row in found]
    if released:
        connection.execute("delete from waiting where waits_for in (select value from json_each(?))", (uids,))
    return released
