"""What was entered, as the rows of a report: labels from the types, values as entered, small parts in one line."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from datetime import date
from typing import Any

import msgspec

from fieldlog.procedures.bodies import fields
from fieldlog.procedures.fields import (
    Confirmation,
    Duration,
    Instrument,
    Kept,
    Photo,
    PressureReading,
    Restoration,
    ValveFound,
)
from fieldlog.procedures.flow_test import Outlet
from fieldlog.procedures.gauge_reading import OneReading
from fieldlog.units import Quantity

Names = Callable[[str], str]


@dataclass(frozen=True, slots=True)
class Row:
    """One line of a report: label, value and unit as entered, which gauge, and a note beside it."""

    label: str
    value: str
    unit: str = ""
    note: str = ""
    gauge: str = ""  # uid
    is_reading: bool = False  # a pressure read off a gauge


def rows(body: msgspec.Struct, names: Names = lambda uid: uid) -> list[Row]:
    """Return what was entered, in the order of the work; `names` tells by which name a uid goes."""
    return [row for row in _rows(body, names) if row.value]  # a part in which nothing was stated says nothing


def _rows(body: msgspec.Struct, names: Names, before: str = "") -> Iterator[Row]:
    for field in fields(type(body)):
        value = getattr(body, field.name)
        label = f"{before}{field.label}"
        if value is None or value in ((), {}):
            continue
        if isinstance(value, tuple) and isinstance(value[0], msgspec.Struct):
            yield from _of_many(value, names, label)
        elif isinstance(value, msgspec.Struct):
            yield from _of_struct(value, names, label)
        elif field.choices:
            yield Row(label, _CHOSEN.get((field.name, value)) or value.replace("_", " "))
        else:
            yield Row(label, _text(value, names))


# Choices that do not read as an answer by themselves.
_CHOSEN = {("done", "partly"): "partly done", ("done", "not"): "not done", ("pump_state", "none"): "no pump"}


def _of_many(values: Sequence[msgspec.Struct], names: Names, label: str) -> Iterator[Row]:
    in_a_line = _IN_A_LINE.get(type(values[0]))
    if in_a_line is not None:
        yield Row(label, "; ".join(in_a_line(value) for value in values))
        return
    for index, value in enumerate(values, start=1):
        yield from _of_struct(value, names, f"{label} {index}" if len(values) > 1 else label)


def _of_struct(value: msgspec.Struct, names: Names, label: str) -> Iterator[Row]:
    in_a_line = _IN_A_LINE.get(type(value))
    if isinstance(value, OneReading):
        yield _of_round(value, names)
    elif isinstance(value, PressureReading):
        yield _of_reading(value, label)
    elif isinstance(value, Quantity):
        yield Row(label, value.value, value.unit)
    elif isinstance(value, Duration):
        yield Row(label, str(value.seconds), "s", "" if value.how == "not stated" else f"by {value.how}")
    elif in_a_line is not None:
        yield Row(label, in_a_line(value))
    else:
        yield from _rows(value, names, f"{label}: ")


def _of_reading(value: PressureReading, label: str, *more: str) -> Row:
    parts = [f"needle swung {value.low or '?'} to {value.high or '?'}"] if value.low or value.high else []
    if value.pump_state:
        parts.append("no pump" if value.pump_state == "none" else f"pump {value.pump_state}")
    note = ", ".join([*parts, *(text for text in more if text)])
    return Row(label, value.value, value.unit, note, value.gauge or "", is_reading=True)


def _of_round(one: OneReading, names: Names) -> Row:
    """Return a routine reading under its gauge's name; only what is out of order is said beside it."""
    odd = (
        (one.good_condition, "not in good condition"),
        (one.cock_open, "isolating cock not open"),
        (one.returns_to_zero, "does not return to zero"),
    )
    said = [text for state, text in odd if state is False]
    return _of_reading(one.pressure, f"Gauge {names(one.pressure.gauge or '')}", *said, one.note or "")


def _valve(valve: ValveFound) -> str:
    parts = [f"{word} {state}" for word, state in (("found", valve.found), ("left", valve.left)) if state]
    times = ((valve.shut_at, "shut"), (valve.opened_at, "opened"))
    parts += [f"{word} {when}" for when, word in times if when]
    return f"{valve.id} {', '.join(parts)}".rstrip()


def _restoration(restored: Restoration) -> str:
    states = (("valves", restored.valves), ("pressures", restored.pressures), ("drain shut", restored.drain_shut))
    said = [f"{name} {'yes' if state else 'NO'}" for name, state in states if state is not None]
    if restored.alarms is not None:
        said.append(f"alarm points confirmed by {_confirmation(restored.alarms)}")
    return ", ".join(said)


def _confirmation(confirmed: Confirmation) -> str:
    return confirmed.who + (f", {confirmed.at}" if confirmed.at else "")


def _instrument(one: Instrument) -> str:
    parts = [one.id, f"certificate {one.certificate}" if one.certificate else "", _text(one.certificate_on or "", str)]
    return ", ".join(part for part in parts if part)


def _outlet(one: Outlet) -> str:
    factor = f", factor {one.factor}" if one.factor else ""
    size, pitot = (f"{quantity.value} {quantity.unit}" for quantity in (one.size, one.pitot))
    return f"{one.name or 'outlet'}: {size}, coefficient {one.coefficient}{factor}, pitot {pitot}"


def _photo(photo: Photo) -> str:
    return f"{photo.caption or 'photo'} ({photo.sha256[:12]}…)"


def _kept(kept: Kept) -> str:
    return f"{kept.field}: {kept.code.replace('_', ' ')}" + (f" ({kept.shown})" if kept.shown else "")


# Small parts that stand in one line.
_IN_A_LINE: Mapping[type, Callable[[Any], str]] = {
    ValveFound: _valve,
    Restoration: _restoration,
    Confirmation: _confirmation,
    Instrument: _instrument,
    Outlet: _outlet,
    Photo: _photo,
    Kept: _kept,
}


def _text(value: Any, names: Names) -> str:  # noqa: ANN401  any plain value
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, date):
        return value.isoformat()
    if isinstance(value, tuple):
        return ", ".join(_text(item, names) for item in value)
    if isinstance(value, dict):
        return ", ".join(f"{key} {item}" for key, item in value.items())
    return names(str(value))
