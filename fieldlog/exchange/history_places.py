"""Which entry a row is: its kind, day, site, system, supply and gauge, all on file already."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date

from fieldlog.exchange.columns import kind_named
from fieldlog.exchange.history_cells import Options, Remembered, RowCells
from fieldlog.exchange.lookup import Lookup
from fieldlog.exchange.typed_dates import typed_date
from fieldlog.procedures.catalogue import PROCEDURES

_OLDEST = date(1800, 1, 1)


@dataclass(frozen=True, slots=True)
class Place:
    """Kind and day of a test and what it is about, by uid; the kind is empty where it could not be read."""

    kind: str = ""
    performed_on: date | None = None
    site: str | None = None
    system: str | None = None
    supply: str | None = None
    gauge: str | None = None


class PlaceReader:
    """Reads the place of each row of one file."""

    def __init__(self, lookup: Lookup, options: Options) -> None:
        self._lookup = lookup
        self._options = options
        self._remembered = Remembered()

    def read(self, row: RowCells) -> Place:
        """Return what the row is about; what is wrong is noted in the row."""
        kind = self._kind(row)
        performed_on = self._day(row)
        site = self._named(row, "site", None)
        system = self._named(row, "system", site)
        supply = self._named(row, "supply", site)
        gauge = self._named(row, "gauge", site)
        for noun, uid in (("system", system), ("supply", supply), ("gauge", gauge)):
            site = site or self._lookup.site_of(noun, uid)
        _require(row, kind, "site", site)
        _require(row, kind, "system", system)
        if kind == "flow_test" and supply is None and not row.problems:
            supply = row.attempt(row.header("supply"), lambda: self._lookup.only_supply(system, site))
        return Place(kind, performed_on, site, system, supply, gauge)

    def _kind(self, row: RowCells) -> str:
        typed = row.typed("kind") or self._options.kind or ""
        found = row.attempt(
            row.header("kind"), lambda: self._remembered.once(("kind", typed), lambda: kind_named(typed))
        )
        return found or ""

    def _day(self, row: RowCells) -> date | None:
        typed, header = row.typed("performed_on"), row.header("performed_on")
        found = row.attempt(
            header, lambda: self._remembered.once(("day", typed), lambda: typed_date(typed, self._options.dates))
        )
        newest = self._options.newest
        if found is not None and (found < _OLDEST or (newest is not None and found > newest)):
            row.refuse(header, f"{typed!r} is not a day of the past; write the day of the test")
        return found

    def _named(self, row: RowCells, noun: str, site: str | None) -> str | None:
        typed = row.typed(noun)
        if not typed or (noun != "site" and row.has_problem(row.header("site"))):
            return None
        return row.attempt(
            row.header(noun),
            lambda: self._remembered.once((noun, typed, site or ""), lambda: self._lookup.find(noun, typed, site)),
        )


def _require(row: RowCells, kind: str, noun: str, uid: str | None) -> None:
    header = row.header(noun)
    if kind and uid is None and noun in PROCEDURES[kind].needs and not row.has_problem(header, row.header("site")):
        row.refuse(header, f"a {kind} names its {noun}; write it")
