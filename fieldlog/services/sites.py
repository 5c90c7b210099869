"""Finding sites and systems by the names people use, and what is said of them now."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from datetime import date

import msgspec

from fieldlog.errors import NotFoundError
from fieldlog.records.entries import Entry
from fieldlog.records.statement import SystemStatement
from fieldlog.services import judging
from fieldlog.services.instance import Instance
from fieldlog.storage import entries, statements
from fieldlog.units import SiteUnits


@dataclass(frozen=True, slots=True)
class SystemRow:
    """One system with its site and what is said of it, under one rule profile."""

    site: Entry
    system: Entry
    said: SystemStatement

    @property
    def units(self) -> SiteUnits:
        """The units the site's people read."""
        return units_of(self.site)


def site_named(instance: Instance, name: str) -> Entry:
    """Return the site of that name or uid.

    Raises
    ------
    NotFoundError
        If there is none; names those that are.
    """
    return _named(entries.in_force_of_kind(instance.connection, "site"), name, "site")


def system_rows(instance: Instance, today: date, *names: str) -> list[SystemRow]:
    """Return all systems, or those at the sites or of the names given, the most worrying first.

    Supplies that are marked, or whose statement time has overtaken, are judged before.

    Raises
    ------
    NotFoundError
        If a name is neither a site's nor a system's.
    """
    judging.judge_due(instance.connection, today)
    at = {entry.subject: entry for entry in entries.in_force_of_kind(instance.connection, "site")}
    systems = {entry.subject: entry for entry in entries.in_force_of_kind(instance.connection, "system")}
    wanted = _wanted(at.values(), systems.values(), names)
    rows = [
        SystemRow(at[str(system.site)], system, said)
        for said in statements.every(instance.connection)
        if (system := systems.get(said.system)) is not None and said.system in wanted
    ]
    return sorted(rows, key=_worry)


def units_of(site: Entry) -> SiteUnits:
    """Return the units of a site."""
    return msgspec.convert(site.body.get("units", {}), SiteUnits)


def _worry(row: SystemRow) -> tuple[int, float, str, str]:
    margin = row.said.margin_low_day or row.said.margin_on_day
    left_psi = float("inf") if margin is None else margin.low_psi
    return row.said.worst.rank, left_psi, _name(row.site), _name(row.system)


def _wanted(sites: Iterable[Entry], systems: Iterable[Entry], names: Sequence[str]) -> set[str]:
    systems = list(systems)
    if not names:
        return {entry.subject for entry in systems}
    found: set[str] = set()
    for name in names:
        at = {entry.subject for entry in sites if _goes_by(entry, name)}
        here = {entry.subject for entry in systems if entry.site in at or _goes_by(entry, name)}
        if not here and not at:
            _named([*sites, *systems], name, "site or system")
        found |= here
    return found


def _named(known: Sequence[Entry], name: str, what: str) -> Entry:
    found = [entry for entry in known if _goes_by(entry, name)]
    if len(found) == 1:
        return found[0]
    if found:
        uids = ", ".join(entry.subject for entry in found)
        raise NotFoundError(f"{len(found)} go by {name!r}; name one by its uid: {uids}")
    names = ", ".join(sorted(_name(entry) for entry in known)[:12]) or "none yet"
    raise NotFoundError(f"no {what} goes by {name!r}; on file: {names}")


def _goes_by(entry: Entry, name: str) -> bool:
    return entry.subject == name or _name(entry).casefold() == name.strip().casefold()


def _name(entry: Entry) -> str:
    return str(entry.body.get("name", ""))
