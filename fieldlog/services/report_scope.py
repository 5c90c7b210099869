"""What a report of a visit is about: its entries, names, units, histories and statements, gathered once."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from datetime import date
from functools import cached_property

from fieldlog.errors import ConflictError, NotFoundError
from fieldlog.procedures.histories import Typed, typed_entry
from fieldlog.records.entries import Entry
from fieldlog.records.history import SupplyHistory
from fieldlog.records.statement import SystemStatement
from fieldlog.services import judging
from fieldlog.services.sites import units_of
from fieldlog.storage import entries, log
from fieldlog.storage.connection import Connection
from fieldlog.units import SiteUnits


@dataclass(frozen=True)
class Scope:
    """One visit with all that its report draws on."""

    organisation: Entry
    site: Entry
    visit: Typed
    sign_off: Typed
    covered: tuple[Typed, ...]
    histories: tuple[SupplyHistory, ...]
    said: tuple[SystemStatement, ...]
    name_of: Callable[[str], str]
    head: str
    newest: int

    @property
    def units(self) -> SiteUnits:
        """The units the site's people read."""
        return units_of(self.site)

    @property
    def on(self) -> date:
        """The day of the visit."""
        day: date = self.visit.body.on or self.sign_off.body.signed_on
        return day

    @cached_property
    def tested_systems(self) -> frozenset[str]:
        """Systems that a covered entry is about."""
        found = {one.entry.system for one in self.covered if one.entry.system}
        found |= {uid for one in self.covered for uid in getattr(one.body, "serves", ())}
        return frozenset(found)


def scope_of(connection: Connection, visit: str, today: date) -> Scope:
    """Return the scope of a signed-off visit.

    Raises
    ------
    NotFoundError
        If there is no such visit.
    ConflictError
        If it is not signed off, or what was signed is no longer what is in force.
    """
    entry = entries.in_force_of(connection, visit)
    if entry is None or entry.kind != "visit" or entry.site is None:
        raise NotFoundError(f"no visit {visit}; list them with `fieldlog report`")
    sign_off = _sign_off(connection, visit)
    covered = tuple(_covered(connection, one.uid, one.sha256) for one in sign_off.body.covers)
    site = entries.in_force_of(connection, entry.site)
    if site is None:
        raise NotFoundError(f"the site {entry.site} of the visit is not on file")
    judging.judge_due(connection, today)
    histories = judging.site_histories(connection, entry.site)
    said = [said for history in histories for said in judging.statements_on(history, today)]
    newest = log.head(connection)
    return Scope(
        organisation=entries.in_force_of_kind(connection, "organisation")[0],
        site=site,
        visit=typed_entry(entry),
        sign_off=sign_off,
        covered=covered,
        histories=histories,
        said=tuple(sorted(said, key=lambda one: one.worst.rank)),
        name_of=_names(connection, entry.site),
        head=newest.link,
        newest=newest.number,
    )


def is_changed_since(connection: Connection, scope: Scope) -> bool:
    """Return whether an entry that was signed has been corrected or withdrawn since."""
    return any(
        (current := entries.in_force_of(connection, one.entry.subject)) is None or current.uid != one.entry.uid
        for one in scope.covered
        if one.entry.kind != "visit"
    )


def _sign_off(connection: Connection, visit: str) -> Typed:
    found = [entry for entry in entries.in_force_at_visit(connection, visit) if entry.kind == "sign_off"]
    if not found:
        raise ConflictError(f"the visit {visit} is not signed off; a report is made of what was signed")
    return typed_entry(found[-1])


def _covered(connection: Connection, uid: str, sha256: str) -> Typed:
    entry = entries.entry_by_uid(connection, uid)
    if entry is None:
        raise ConflictError(f"the signed entry {uid} has not arrived; make the report when it has")
    if entry.sha256 != sha256:
        raise ConflictError(f"entry {entry.number} is not the text that was signed; sign the visit again")
    return typed_entry(entry)


def _names(connection: Connection, site: str) -> Callable[[str], str]:
    known: Sequence[Entry] = [
        *entries.in_force_of_organisation(connection),
        *entries.in_force_at_site(connection, site),
    ]
    names = {entry.subject: str(entry.body["name"]) for entry in known if entry.body.get("name")}
    return lambda uid: names.get(uid, uid)
