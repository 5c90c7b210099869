"""Entries for tests, made from small numbers so that a failing test can be read."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from fieldlog.canonical import canonical_text
from fieldlog.procedures.envelope import Envelope, parse_envelope
from fieldlog.records.entries import Arrival
from fieldlog.storage import log
from fieldlog.storage.connection import Connection, transaction

AT = "2024-05-06T07:08:09Z"
LATER = "2024-05-07T17:18:19Z"

Made = tuple[Envelope, Arrival]


def uid(number: int) -> str:
    return f"{number:08x}-0000-4000-8000-{number:012x}"


ORGANISATION, PERSON, SITE, OTHER_SITE, SUPPLY, SYSTEM, VISIT = (uid(number) for number in range(11, 18))


def entry(kind: str, own: str, body: Mapping[str, Any] | None = None, **fields: Any) -> Made:
    """Make an entry; a field given as None is left out."""
    outer = {
        "uid": own,
        "format": 1,
        "kind": kind,
        "subject": own,
        "author": ORGANISATION,
        "made_at": "2024-05-06T06:54:32Z",
        "body": dict(body or {"name": f"{kind} {own[:8]}"}),
        **fields,
    }
    text = canonical_text({name: value for name, value in outer.items() if value is not None})
    return parse_envelope(text), Arrival(text)


def drain_test(number: int, **fields: Any) -> Made:
    body = {
        "performed_on": f"2023-{2 + number % 11:02}-17",
        "residual": {"value": f"{43 + number}", "unit": "psi"},
    }
    return entry("main_drain_test", uid(number), body, **{"site": SITE, "system": SYSTEM, "visit": VISIT, **fields})


def version(of: Made, number: int, based_on: str, says: str = "read again", **fields: Any) -> Made:
    """Make a later version of an entry's subject; its body says who made it."""
    first = of[0]
    return entry(
        fields.pop("kind", first.kind),
        uid(number),
        {**first.body, "says": says},
        **{
            "subject": first.subject,
            "site": first.site,
            "system": first.system,
            "based_on": based_on,
            "reason": says,
            **fields,
        },
    )


def register() -> list[Made]:
    """Make what stands at the beginning of most logs."""
    return [
        entry("organisation", ORGANISATION, {"name": "Müller & Söhne Brandschutz"}),
        entry("person", PERSON, {"name": "Zoë O'Neil"}),
        entry("site", SITE, {"name": "Kühlhaus \U0001f9ca"}),
        entry("site", OTHER_SITE, {"name": "倉庫"}),
        entry("supply", SUPPLY, {"kind": "public_main"}, site=SITE),
        entry("system", SYSTEM, {"type": "wet", "supply": SUPPLY}, site=SITE),
        entry("visit", VISIT, {"state": "open"}, site=SITE),
    ]


def take(connection: Connection, *made: Made, at: str = AT, via: Any = "import") -> log.Appended:
    with transaction(connection):
        return log.append(connection, made, via, at)


def dump(connection: Connection, *tables: str) -> dict[str, list[Any]]:
    """Return every row of these tables, or of all, and of the schema."""
    names = tables or [row[0] for row in connection.execute("select name from sqlite_master where type = 'table'")]
    return {
        name: connection.execute(f"select * from {name}").fetchall()  # noqa: S608
        for name in (*names, "sqlite_master")
    }
