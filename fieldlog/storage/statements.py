"""Statements as judged last, and which supplies to judge again. Derived: all of it can be made anew."""

from __future__ import annotations

import json
from collections.abc import Iterable, Sequence
from datetime import date

import msgspec

from fieldlog.records.statement import SystemStatement
from fieldlog.storage.connection import Connection, at_the_edge, require_transaction

_statement_of = msgspec.json.Decoder(SystemStatement).decode
_STATEMENT = "select statement from statements "
_WORST_FIRST = "order by rank, system, profile"
_NEWEST = "(select coalesce(max(number), 0) from entries)"


@at_the_edge
def put(
    connection: Connection, supply: str, site: str, through_number: int, statements: Sequence[SystemStatement]
) -> None:
    """Put these in place of all statements on the systems of a supply; inside a transaction.

    `through_number` is the newest entry that was judged. The supply stays dirty where a newer one came meanwhile.
    """
    require_transaction(connection)
    connection.execute("delete from statements where supply = ?", (supply,))
    connection.executemany(
        # Replace: a system that has moved here leaves no statement behind with the supply it was on.
        "insert or replace into statements (system, profile, supply, site, rank, version, through_number, "
        "valid_until, statement) values (?, ?, ?, ?, ?, ?, ?, ?, ?)",
        [_row(supply, site, each) for each in statements],
    )
    connection.execute("delete from dirty_supplies where supply = ? and since_number <= ?", (supply, through_number))
    connection.execute(
        "insert into judged_supplies (supply, through_number, valid_until) values (?, ?, ?) "
        "on conflict (supply) do update set through_number = excluded.through_number, "
        "valid_until = excluded.valid_until",
        (supply, through_number, _earliest(statements)),
    )


@at_the_edge
def of_supply(connection: Connection, supply: str) -> list[SystemStatement]:
    """Return the statements on the systems of a supply, the most worrying first."""
    return _all(connection.execute(_STATEMENT + "where supply = ? " + _WORST_FIRST, (supply,)))


@at_the_edge
def of_site(connection: Connection, site: str) -> list[SystemStatement]:
    """Return the statements on the systems of a site, the most worrying first."""
    return _all(connection.execute(_STATEMENT + "where site = ? " + _WORST_FIRST, (site,)))


@at_the_edge
def of_system(connection: Connection, system: str) -> list[SystemStatement]:
    """Return the statements on a system, one for each rule profile, the most worrying first."""
    return _all(connection.execute(_STATEMENT + "where system = ? " + _WORST_FIRST, (system,)))


@at_the_edge
def every(connection: Connection) -> list[SystemStatement]:
    """Return all statements, the most worrying first."""
    return _all(connection.execute(_STATEMENT + _WORST_FIRST))


@at_the_edge
def mark_dirty(connection: Connection, supplies: Iterable[str]) -> None:
    """Mark supplies to be judged again; in the transaction that added the entries."""
    _mark(connection, "select value from json_each(?)", json.dumps(list(supplies)))


@at_the_edge
def mark_sites_dirty(connection: Connection, sites: Iterable[str]) -> None:
    """Mark all supplies of these sites; in the transaction that added the entries."""
    _mark(
        connection,
        "select subject from current where kind = 'supply' and site in (select value from json_each(?))",
        json.dumps(list(sites)),
    )


@at_the_edge
def mark_all_dirty(connection: Connection) -> None:
    """Mark every supply: something all of them rest on has changed."""
    _mark(connection, "select subject from current where kind = 'supply' and ? is not null", "all")


@at_the_edge
def due(connection: Connection, today: date) -> list[str]:
    """Return the supplies to be judged: marked, never judged, or changed by time alone."""
    found = connection.execute(
        "select subject from current where kind = 'supply' and ("
        "subject in (select supply from dirty_supplies) or withdrawn = 0 and "
        "subject not in (select supply from judged_supplies where valid_until is null or valid_until > ?)"
        ") order by first",
        (today.isoformat(),),
    )
    return [supply for (supply,) in found]


@at_the_edge
def dirty(connection: Connection) -> list[str]:
    """Return the supplies that are marked."""
    return [supply for (supply,) in connection.execute("select supply from dirty_supplies order by supply")]


@at_the_edge
def forget(connection: Connection) -> None:
    """Drop all statements and marks, so that every supply is judged anew; inside a transaction."""
    require_transaction(connection)
    for table in ("statements", "dirty_supplies", "judged_supplies"):
        connection.execute(f"delete from {table}")  # noqa: S608


def _mark(connection: Connection, supplies: str, argument: str) -> None:
    require_transaction(connection)
    connection.execute(
        f"insert into dirty_supplies (supply, since_number) select supply, {_NEWEST} "  # noqa: S608
        f"from (with chosen (supply) as ({supplies}) select supply from chosen) where true "
        "on conflict (supply) do update set since_number = excluded.since_number",
        (argument,),
    )


def _row(supply: str, site: str, statement: SystemStatement) -> tuple[str | int | bytes | None, ...]:
    return (
        statement.system,
        statement.profile or "",
        supply,
        site,
        statement.worst.rank,
        statement.version,
        statement.through_number,
        statement.valid_until.isoformat() if statement.valid_until else None,
        msgspec.json.encode(statement),
    )


def _earliest(statements: Sequence[SystemStatement]) -> str | None:
    return min((each.valid_until.isoformat() for each in statements if each.valid_until), default=None)


def _all(rows: Iterable[tuple[bytes]]) -> list[SystemStatement]:
    return [_statement_of(statement) for (statement,) in rows]
