"""Reading the log. Rows become `Entry` here and nowhere else."""

from __future__ import annotations

import json
from collections.abc import Collection, Iterable
from typing import Any

import msgspec

from fieldlog.records.entries import Current, Entry
from fieldlog.storage.columns import site_of
from fieldlog.storage.connection import Connection, at_the_edge

_ENTRY = "select e.number, e.received_at, e.sha256, e.link, e.via, e.signature, e.text from entries e "
_IN_FORCE = (
    "select e.number, e.received_at, e.sha256, e.link, e.via, e.signature, e.text "
    "from current c join entries e on e.number = c.number and c.withdrawn = 0 "
)
_CURRENT = "select subject, kind, number, uid, forked, withdrawn from current "
_FIRST = "(select number from entries where uid = ?)"  # leads from a subject to its row of current
# All kinds where none is named.
_OF_KINDS = "and (?2 is null or c.kind in (select value from json_each(?2))) order by e.number"

_OF_KIND = "where c.kind in (select value from json_each(?)) order by e.number"
_OF_UIDS = "where e.uid in (select value from json_each(?)) order by e.number"
# Two parts, since the index holds only later versions.
_OF_SUBJECT = (
    "where e.number in (select number from entries where uid = ?1 and subject = ?1 union all "
    "select number from entries where subject = ?1 and subject <> uid) order by e.number"
)

_Row = tuple[int, str, str, str, str, str | None, str]


@at_the_edge
def entry_by_uid(connection: Connection, uid: str) -> Entry | None:
    """Return the entry of this uid."""
    return _one(connection.execute(_ENTRY + "where e.uid = ?", (uid,)))


@at_the_edge
def entry_by_number(connection: Connection, number: int) -> Entry | None:
    """Return the entry of this number."""
    return _one(connection.execute(_ENTRY + "where e.number = ?", (number,)))


@at_the_edge
def entry_by_link(connection: Connection, link: str) -> Entry | None:
    """Return the entry whose link this is: the newest one when a report with this head was made."""
    # Asked when a report is verified, some seconds apart at most; walking the table is cheaper than an index.
    return _one(connection.execute(_ENTRY + "where e.link = ?", (link,)))


@at_the_edge
def entries_by_uid(connection: Connection, uids: Iterable[str]) -> list[Entry]:
    """Return the entries of these uids by number; a uid that is not on file is left out."""
    found = connection.execute(_ENTRY + _OF_UIDS, (json.dumps(list(uids)),))
    return _all(found)


@at_the_edge
def after(connection: Connection, number: int, limit: int = 1000) -> list[Entry]:
    """Return the entries after this number."""
    return _all(connection.execute(_ENTRY + "where e.number > ? order by e.number limit ?", (number, limit)))


@at_the_edge
def versions(connection: Connection, subject: str) -> list[Entry]:
    """Return all versions of a subject, the first one first."""
    return _all(connection.execute(_ENTRY + _OF_SUBJECT, (subject,)))


@at_the_edge
def entries_of_site(connection: Connection, site: str) -> list[Entry]:
    """Return all versions of everything on a site, by number."""
    return _all(connection.execute(_ENTRY + "where e.site = ? order by e.number", (site,)))


@at_the_edge
def entries_of_organisation(connection: Connection) -> list[Entry]:
    """Return all versions of what belongs to no site and may be read by all of the organisation."""
    return _all(connection.execute(_ENTRY + "where e.site is null order by e.number"))


@at_the_edge
def in_force_at_site(connection: Connection, site: str, kinds: Collection[str] = ()) -> list[Entry]:
    """Return what is in force on a site, by number."""
    return _all(connection.execute(_IN_FORCE + "where c.site = ?1 " + _OF_KINDS, (site, _kinds(kinds))))


@at_the_edge
def in_force_of_organisation(connection: Connection, kinds: Collection[str] = ()) -> list[Entry]:
    """Return what is in force and belongs to no site, by number."""
    return _all(connection.execute(_IN_FORCE + "where c.site is ?1 " + _OF_KINDS, (None, _kinds(kinds))))


@at_the_edge
def in_force_at_visit(connection: Connection, visit: str, kinds: Collection[str] = ()) -> list[Entry]:
    """Return the versions in force of everything that was made or changed on a visit, by number.

    A correction by the office stands here in place of what it corrects, though it was not made on the visit.
    """
    first = "(select f.number from entries v join entries f on f.uid = v.subject where v.visit = ?1) "
    return _all(connection.execute(_IN_FORCE + "where c.first in " + first + _OF_KINDS, (visit, _kinds(kinds))))


@at_the_edge
def in_force_of_system(connection: Connection, system: str, kinds: Collection[str] = ()) -> list[Entry]:
    """Return what is in force about a system, by number; the system's own entry is asked for by its subject."""
    return _all(connection.execute(_IN_FORCE + "where c.system = ?1 " + _OF_KINDS, (system, _kinds(kinds))))


@at_the_edge
def in_force_of_kind(connection: Connection, *kinds: str) -> list[Entry]:
    """Return what is in force of these kinds everywhere, by number."""
    return _all(connection.execute(_IN_FORCE + _OF_KIND, (json.dumps(kinds),)))


@at_the_edge
def in_force_of(connection: Connection, subject: str) -> Entry | None:
    """Return the version of a subject that is in force; None where it is unknown or withdrawn."""
    return _one(connection.execute(_IN_FORCE + "where c.first = " + _FIRST, (subject,)))


@at_the_edge
def current_of(connection: Connection, subject: str) -> Current | None:
    """Return what is known of a subject's present state, also when it is withdrawn."""
    found = connection.execute(_CURRENT + "where first = " + _FIRST, (subject,)).fetchone()
    return _current(*found) if found else None


@at_the_edge
def forked(connection: Connection) -> list[Current]:
    """Return the subjects that were changed twice from the same version and are not settled."""
    return [_current(*row) for row in connection.execute(_CURRENT + "where forked = 1 order by number")]


@at_the_edge
def count(connection: Connection) -> int:
    """Return the number of entries."""
    # Numbers have no gaps, so the newest one is the count.
    found: int = connection.execute("select coalesce(max(number), 0) from entries").fetchone()[0]
    return found


@at_the_edge
def counts_by_kind(connection: Connection) -> dict[str, int]:
    """Return the number of subjects of each kind, withdrawn ones included."""
    return dict(connection.execute("select kind, count(*) from current group by kind order by kind").fetchall())


def _kinds(kinds: Collection[str]) -> str | None:
    return json.dumps(list(kinds)) if kinds else None


def _one(rows: Iterable[_Row]) -> Entry | None:
    return next(iter(_all(rows)), None)


def _all(rows: Iterable[_Row]) -> list[Entry]:
    return [_entry(*row) for row in rows]


class _Outline(msgspec.Struct, gc=False):
    """The fields of a text; its form was checked when it came."""

    uid: str
    kind: str
    subject: str
    author: str
    made_at: str
    body: dict[str, Any]
    site: str | None = None
    system: str | None = None
    visit: str | None = None
    based_on: str | None = None
    reason: str | None = None
    withdrawn: bool = False
    device: str | None = None
    device_number: int | None = None


_outline_of = msgspec.json.Decoder(_Outline).decode


def _entry(  # noqa: PLR0913, PLR0917  the columns of _ENTRY, in order
    number: int, received_at: str, sha256: str, link: str, via: str, signature: str | None, text: str
) -> Entry:
    outline = _outline_of(text)
    return Entry(
        number=number,
        received_at=received_at,
        sha256=sha256,
        link=link,
        via=via,
        text=text,
        signature=signature,
        uid=outline.uid,
        kind=outline.kind,
        subject=outline.subject,
        author=outline.author,
        made_at=outline.made_at,
        body=outline.body,
        site=site_of(outline.kind, outline.subject, outline.site),
        system=outline.system,
        visit=outline.visit,
        based_on=outline.based_on,
        reason=outline.reason,
        withdrawn=outline.withdrawn,
        device=outline.device,
        device_number=outline.device_number,
    )


def _current(subject: str, kind: str, number: int, uid: str, forked_: int, withdrawn: int) -> Current:
    return Current(subject, kind, number, uid, forked=bool(forked_), withdrawn=bool(withdrawn))
