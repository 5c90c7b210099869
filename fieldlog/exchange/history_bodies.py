"""The body of an entry from the cells of its row."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any

from fieldlog.errors import InputError
from fieldlog.exchange.columns import GAUGE_OF, Found, Target, unit_named
from fieldlog.exchange.history_cells import Options, Remembered, RowCells
from fieldlog.exchange.history_places import Place
from fieldlog.units import Flow, Pressure, Quantity

_INSIDE_LIST = re.compile(r"([a-z_]+)\[([0-9]+)\]\.([a-z_]+)")
_UNIT_COLUMNS: Mapping[str, type[Quantity]] = {"unit": Pressure, "flow_unit": Flow}
_Units = Mapping[type[Quantity], str | None]


@dataclass(slots=True)
class PlainBody:
    """A body as plain values, and what it holds as people say it."""

    plain: dict[str, Any] = field(default_factory=dict)
    said: list[str] = field(default_factory=list)


class BodyReader:
    """Reads the body of each row of one file."""

    def __init__(self, columns: Sequence[Found], options: Options) -> None:
        self._columns = [one for one in columns if one.targets]
        self._of_file: _Units = {Pressure: options.pressure_unit, Flow: options.flow_unit}
        self._remembered = Remembered()

    def read(self, row: RowCells, place: Place) -> PlainBody:
        """Return the body; what is wrong is noted in the row."""
        units = self._units_of_row(row)
        body = PlainBody()
        for column in self._columns:
            if typed := row.at(column.index):
                value = self._value(row, column, column.targets.get(place.kind), typed, units)
                if value is not None:
                    path = column.targets[place.kind].path
                    _put(body.plain, path, value)
                    body.said.append(f"{_spoken(path)} {_spoken_value(value)}")
        _complete(row, body.plain, place)
        return body

    def column_of(self, kind: str, path: str) -> str:
        """Return the header of the column that a field of the body came from, else the field's own name."""
        for column in self._columns:
            target = column.targets.get(kind)
            if target is not None and (path == target.path or path.startswith(f"{target.path}.")):
                return column.header
        return path

    def _value(self, row: RowCells, column: Found, target: Target | None, typed: str, units: _Units) -> object:
        header = column.header
        if target is None:
            row.refuse(header, f"{header}: a row of this kind has no such field; empty the cell, or mend the kind")
            return None
        return row.attempt(header, lambda: target.value(typed, header, self._unit(typed, column, target, units)))

    def _units_of_row(self, row: RowCells) -> _Units:
        """Return the units that the row names in columns of their own."""
        return {
            quantity: self._named_unit(row, row_column, quantity)
            for row_column, quantity in _UNIT_COLUMNS.items()
            if row.typed(row_column)
        }

    def _named_unit(self, row: RowCells, row_column: str, quantity: type[Quantity]) -> str | None:
        typed = row.typed(row_column)
        unit = self._remembered.once((row_column, typed), lambda: unit_named(typed, quantity))
        if unit is None:
            known = ", ".join(quantity.units())
            row.refuse(row.header(row_column), f"{typed!r} is no unit of {quantity.noun}; use {known}")
        return unit

    def _unit(self, typed: str, column: Found, target: Target, units: _Units) -> str | None:
        """Return the unit of a bare number: the header's, else the row's, else the file's."""
        base = _base(target.quantity)
        if base is None:
            return column.unit
        of_row = units.get(base)
        if column.unit is not None and of_row not in {None, column.unit} and not _names_a_unit(typed):
            raise InputError(f"the header says {column.unit} and the row {of_row}; mend one of them")
        return column.unit or of_row or self._of_file[base]


def _names_a_unit(typed: str) -> bool:
    return any(character.isalpha() for character in typed)


def _base(quantity: type[Quantity] | None) -> type[Quantity] | None:
    return next((base for base in (Pressure, Flow) if quantity is not None and issubclass(quantity, base)), None)


def _put(plain: dict[str, Any], path: str, value: object) -> None:
    if inside := _INSIDE_LIST.fullmatch(path):
        plain.setdefault(inside[1], {}).setdefault(int(inside[2]), {})[inside[3]] = value
    else:
        plain[path] = value


def _complete(row: RowCells, plain: dict[str, Any], place: Place) -> None:
    """Add what the row says outside the body's own columns, and what follows from its being imported."""
    if place.performed_on is not None:
        plain["performed_on"] = place.performed_on.isoformat()
    if place.gauge is not None:
        _put_gauge(row, plain, place)
    for name in ("points", "readings"):
        if name in plain:
            plain[name] = [one for _, one in sorted(plain[name].items())]
    if place.kind == "main_drain_test":
        plain.setdefault("source", "old record")
    if place.kind == "inspectors_test" and "trip" in plain:
        plain.setdefault("kind", "trip")
    if place.kind == "flow_test" and place.supply is not None:
        plain["supply"] = place.supply


def _put_gauge(row: RowCells, plain: dict[str, Any], place: Place) -> None:
    readings = [reading for path in GAUGE_OF[place.kind] if (reading := _at(plain, path)) is not None]
    if not readings:
        row.refuse(row.header("gauge"), "a gauge is named without a pressure of it; write it, or empty the cell")
    for reading in readings:
        reading["gauge"] = place.gauge


def _at(plain: dict[str, Any], path: str) -> dict[str, Any] | None:
    found: dict[str, Any] | None
    if inside := _INSIDE_LIST.fullmatch(path):
        found = plain.get(inside[1], {}).get(int(inside[2]), {}).get(inside[3])
    else:
        found = plain.get(path)
    return found


def _spoken(path: str) -> str:
    if inside := _INSIDE_LIST.fullmatch(path):
        number = f" {int(inside[2]) + 1}" if inside[2] != "0" else ""
        return f"{inside[3]}{number}".replace("_", " ")
    return path.replace("_", " ")


def _spoken_value(value: object) -> str:
    if isinstance(value, dict):
        return f"{value['value']} {value['unit']}" if "value" in value else f"{value['seconds']} s"
    if isinstance(value, bool):
        return "yes" if value else "no"
    return str(value)
