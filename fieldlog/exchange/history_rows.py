"""One row of cells into the text of one entry, or everything that is wrong with it."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from datetime import date
from uuid import UUID

import msgspec

from fieldlog.errors import InputError
from fieldlog.exchange.columns import Found
from fieldlog.exchange.history_bodies import BodyReader
from fieldlog.exchange.history_cells import Options, RowCells
from fieldlog.exchange.history_places import Place, PlaceReader
from fieldlog.exchange.lookup import Lookup
from fieldlog.procedures.bodies import decode_body
from fieldlog.procedures.catalogue import PROCEDURES
from fieldlog.procedures.compose import compose, import_uid
from fieldlog.procedures.main_drain_test import MainDrainTest
from fieldlog.procedures.questions import Earlier, questions
from fieldlog.units import Pressure, SiteUnits
from fieldlog.wording.quantities import day
from fieldlog.wording.questions import question_sentence

_NOTHING_EARLIER = Earlier()
_PSI_IN = {unit: float(size) for unit, size in Pressure.sizes.items()}
_ANY_UNITS = SiteUnits()


@dataclass(frozen=True, slots=True)
class Built:
    """The entry that a row becomes."""

    uid: str
    text: str
    says: str
    notes: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Refused:
    """What is wrong with a row: (column, what was found and the mend)."""

    problems: tuple[tuple[str, str], ...]


class RowBuilder:
    """Builds entries from the rows of one file; equal rows of it are counted."""

    def __init__(self, columns: Sequence[Found], lookup: Lookup, author: str, options: Options) -> None:
        self._row_columns = {one.row_column: one for one in columns if one.row_column}
        self._places = PlaceReader(lookup, options)
        self._bodies = BodyReader(columns, options)
        self._lookup = lookup
        self._author = author
        self._seen: set[bytes] = set()
        self._repeats: dict[bytes, int] = {}

    def build(self, cells: Sequence[str]) -> Built | Refused:
        """Return the entry, or all that is wrong with the row."""
        row = RowCells(cells, self._row_columns)
        place = self._places.read(row)
        read = self._bodies.read(row, place) if place.kind else None
        if row.problems or read is None or place.performed_on is None:
            return Refused(tuple(row.problems))
        says = f"{self._about(place, place.performed_on)}: {', '.join(read.said) or 'no readings'}"
        try:
            body = decode_body(place.kind, read.plain)
            return self._composed(place, place.performed_on, body, says)
        except InputError as error:
            column = self._bodies.column_of(place.kind, error.field.removeprefix("body."))
            return Refused(((column, error.message.removeprefix("body.")),))

    def _composed(self, place: Place, performed_on: date, body: msgspec.Struct, says: str) -> Built:
        about = place.system or place.supply or place.gauge or place.site or ""
        uid = import_uid(about, place.kind, performed_on, body, 1)
        repeat = self._count(UUID(uid).bytes)
        if repeat > 1:
            uid = import_uid(about, place.kind, performed_on, body, repeat)
        text = compose(
            place.kind,
            body,
            uid=uid,
            author=self._author,
            made_at=f"{performed_on.isoformat()}T00:00:00Z",
            site=place.site,
            system=place.system,
        )
        return Built(uid, text, says, _notes(body, repeat))

    def _count(self, first_uid: bytes) -> int:
        """Return how many rows of this file, with this one, are equal to it."""
        if first_uid not in self._seen:
            self._seen.add(first_uid)
            return 1
        self._repeats[first_uid] = self._repeats.get(first_uid, 1) + 1
        return self._repeats[first_uid]

    def _about(self, place: Place, performed_on: date) -> str:
        named = [
            self._lookup.name(noun, uid)
            for noun, uid in (("system", place.system), ("supply", place.supply), ("site", place.site))
            if uid is not None
        ]
        return f"{PROCEDURES[place.kind].label} of {day(performed_on)}, {', '.join(named)}"


def _notes(body: msgspec.Struct, repeat: int) -> tuple[str, ...]:
    notes = []
    if repeat > 1:
        notes.append(f"equal to {repeat - 1} row{'s' if repeat > 2 else ''} above; kept as a test of its own")
    if isinstance(body, MainDrainTest) and _may_be_odd(body):
        notes += [question_sentence(one, _ANY_UNITS) for one in questions(body, _NOTHING_EARLIER)]
    return tuple(notes)


def _may_be_odd(body: MainDrainTest) -> bool:
    """Return whether the exact questions are worth their time: most rows of a long history are not odd."""
    before, residual, after, system_side = (
        float(reading.value) * _PSI_IN[reading.unit] if reading is not None else None
        for reading in (body.static_before, body.residual, body.static_after, body.system_side_before)
    )
    if before is None or residual is None or system_side is not None:
        return True
    if body.fully_open is False or body.took_full_flow is False:
        return True
    return min(before, residual) <= 0 or residual > 0.99 * before or (after is not None and after < 0.91 * before)
