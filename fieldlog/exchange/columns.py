"""Which header means which field of which kind: the plain fields of the procedures' types, by name or label."""

from __future__ import annotations

import re
import unicodedata
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field, replace
from datetime import date
from functools import cache

from fieldlog.errors import InputError
from fieldlog.procedures import bodies, fields
from fieldlog.procedures.catalogue import PROCEDURES
from fieldlog.procedures.flow_test import FlowPoint
from fieldlog.procedures.gauge_reading import OneReading
from fieldlog.procedures.typed import typed_decimal, typed_quantity, typed_seconds, typed_yes_no
from fieldlog.units import Pressure, Quantity

KINDS = ("main_drain_test", "gauge_reading", "inspectors_test", "flow_test", "forward_flow_test")

# Columns that say which entry a row is, in every kind; the first name is the one to print.
ROW_COLUMNS: Mapping[str, tuple[str, ...]] = {
    "site": ("site", "site name", "property", "building"),
    "system": ("system", "system name", "riser"),
    "supply": ("supply", "supply name"),
    "gauge": ("gauge", "gauge name", "gauge id", "gauge no"),
    "kind": ("kind", "kind of test", "test"),
    "performed_on": ("date", "test date", "date of test", "day"),
    "unit": ("unit", "units", "pressure unit"),
    "flow_unit": ("flow unit",),
}
_ALSO: Mapping[str, tuple[str, ...]] = {
    "note": ("notes", "remark", "remarks", "comment", "comments"),
    "pump_state": ("pump", "pump state"),
    "source": ("source",),
    "drain": ("drain id", "main drain"),
    "static_before": ("static", "static pressure", "initial static", "static 1"),
    "residual": ("residual pressure", "full flow pressure", "flowing pressure"),
    "static_after": ("final static", "return pressure", "static 2"),
    "return_seconds": ("return", "return time", "seconds to return"),
    "system_side_before": ("system side", "system side static"),
    "drain_pitot": ("pitot",),
    "to_device": ("alarm", "alarm time", "seconds to alarm"),
    "to_bell": ("bell", "bell time", "seconds to bell"),
    "to_panel": ("panel", "panel time"),
    "to_monitoring": ("monitoring", "monitoring time"),
    "trip": ("trip time", "seconds to trip"),
    "delivery": ("delivery time", "water delivery", "seconds to water"),
    "points[0].residual": ("residual 1",),
    "points[0].flow": ("flow 1", "measured flow"),
    "readings[0].pressure": ("reading", "gauge pressure"),
}
# Where the gauge of a row goes, if the reading is there.
GAUGE_OF: Mapping[str, tuple[str, ...]] = {
    "main_drain_test": ("static_before", "residual", "static_after"),
    "gauge_reading": ("readings[0].pressure",),
    "inspectors_test": ("static", "flowing"),
    "flow_test": ("static", "points[0].residual", "points[1].residual", "points[2].residual"),
    "forward_flow_test": ("at_riser",),
}
_KINDS_ALSO: Mapping[str, tuple[str, ...]] = {
    "main_drain_test": ("main drain", "drain test"),
    "gauge_reading": ("gauge", "gauge readings"),
    "inspectors_test": ("inspectors test", "inspector test"),
    "flow_test": ("flow", "hydrant flow test"),
    "forward_flow_test": ("forward flow",),
}
_LONGEST_CELL = 4000


@dataclass(frozen=True, slots=True)
class Target:
    """Where a cell goes in a kind's body, and how what was typed becomes a plain value."""

    path: str
    quantity: type[Quantity] | None = None
    is_seconds: bool = False
    plain: Callable[[str, str], object] | None = None
    choices: tuple[str, ...] = ()
    is_alias: bool = False

    def value(self, typed: str, header: str, unit: str | None) -> object:
        """Return the plain value typed under `header`; `unit` holds where the cell names none.

        Raises
        ------
        InputError
            If it is no such value; says what to write.
        """
        if self.quantity is not None:
            found = typed_quantity(typed, self.quantity, unit, header)
            return {"value": found.value, "unit": found.unit}
        if self.is_seconds:
            return {"seconds": typed_seconds(typed, header)}
        return self._choice(typed, header) if self.choices else self._plain(typed, header)

    def _choice(self, typed: str, header: str) -> str:
        folded = folded_name(typed)
        for choice in self.choices:
            if folded_name(choice) == folded:
                return choice
        raise InputError(f"{header}: {typed!r} is none of {', '.join(self.choices)}; write one of them", field=header)

    def _plain(self, typed: str, header: str) -> object:
        return self.plain(typed, header) if self.plain is not None else typed


@dataclass(frozen=True, slots=True)
class Found:
    """A column of the file at hand: its place, its header as written, the unit named there, its meaning."""

    index: int
    header: str
    row_column: str = ""
    targets: Mapping[str, Target] = field(default_factory=dict)
    unit: str | None = None


def folded_name(text: str) -> str:
    """Return `text` as names are compared: no case, apostrophes and hyphens, single spaces for any separator."""
    plain = unicodedata.normalize("NFKC", text).casefold().replace("’", "").replace("'", "")
    return re.sub(r"[\s_\-./:#,()\[\]]+", " ", plain).strip()


def kind_named(typed: str) -> str:
    """Return the kind of entry that a cell names.

    Raises
    ------
    InputError
        If a file of readings can't hold such a kind.
    """
    kind = _kind_names().get(folded_name(typed))
    if kind is None:
        raise InputError(f"kind: {typed!r} is none of {', '.join(KINDS)}; write one of them", field="kind")
    return kind


@cache
def _kind_names() -> dict[str, str]:
    return {
        folded_name(name): kind for kind in KINDS for name in (kind, PROCEDURES[kind].label, *_KINDS_ALSO.get(kind, ()))
    }


def read_header(cells: Sequence[str]) -> tuple[tuple[Found, ...], tuple[str, ...]]:
    """Return the columns understood and the headers that are not.

    Raises
    ------
    InputError
        If two columns mean the same field of the same kind.
    """
    found: list[Found] = []
    unknown: list[str] = []
    for index, cell in enumerate(cells):
        header = " ".join(cell.split())
        one = _found(index, header)
        if one is not None:
            found.append(one)
        elif header:
            unknown.append(header)
    return _told_apart(found), tuple(unknown)


def _told_apart(found: Sequence[Found]) -> tuple[Found, ...]:
    """Return the columns so that each field of each kind has one: a field's own name holds against an alias."""
    own = {place for one in found for place in _places(one, is_alias=False)}
    kept = [
        replace(
            one,
            targets={
                kind: target
                for kind, target in one.targets.items()
                if not (target.is_alias and (kind, target.path) in own)
            },
        )
        for one in found
    ]
    seen: dict[tuple[str, str], Found] = {}
    for one in kept:
        for place in {*_places(one, is_alias=False), *_places(one, is_alias=True)}:
            other = seen.setdefault(place, one)
            if other is not one:
                raise InputError(
                    f"the columns {other.header!r} and {one.header!r} mean the same; remove or rename one of them",
                    field=one.header,
                )
    return tuple(kept)


def _places(one: Found, *, is_alias: bool) -> set[tuple[str, str]]:
    if one.row_column:
        return set() if is_alias else {("", one.row_column)}
    return {(kind, target.path) for kind, target in one.targets.items() if target.is_alias == is_alias}


def _found(index: int, header: str) -> Found | None:
    if len(header) > _LONGEST_CELL:
        return None
    whole = folded_name(header)
    if row_column := _row_names().get(whole):
        return Found(index, header, row_column)
    if targets := _targets(whole):
        return Found(index, header, targets=targets)
    stem, tail = _split_unit(header)
    targets = _targets(folded_name(stem))
    unit = _unit_of_all(targets, tail)
    return None if unit is None or not targets else Found(index, header, targets=targets, unit=unit or None)


def _split_unit(header: str) -> tuple[str, str]:
    if tail := re.fullmatch(r"([^()\[\]]*)[(\[]([^()\[\]]*)[)\]]", header):
        return tail[1].rstrip(" ,_"), tail[2].strip()
    stem, _, last = header.replace("_", " ").replace(",", " ").rpartition(" ")
    return stem, last


def _unit_of_all(targets: Mapping[str, Target], tail: str) -> str | None:
    """Return the unit that `tail` names for every target: "" where they need none, None if it is no such unit."""
    units = {_unit_of(target, tail) for target in targets.values()}
    return units.pop() if len(units) == 1 else None


def _unit_of(target: Target, tail: str) -> str | None:
    if target.is_seconds:
        return "" if folded_name(tail) in {"s", "sec", "secs", "second", "seconds"} else None
    return unit_named(tail, target.quantity) if target.quantity is not None else None


def unit_named(typed: str, quantity: type[Quantity] = Pressure) -> str | None:
    """Return the unit of `quantity` that was typed, None if it is none."""
    if not typed or typed[0].isdigit():
        return None
    try:
        return typed_quantity(f"2 {typed}", quantity, None, "unit").unit
    except InputError:
        return None


@cache
def _row_names() -> dict[str, str]:
    return {folded_name(name): key for key, names in ROW_COLUMNS.items() for name in (key, *names)}


@cache
def _kind_targets() -> dict[str, dict[str, Target]]:
    return {kind: dict(_named_targets(kind)) for kind in KINDS}


def _targets(folded: str) -> dict[str, Target]:
    return {kind: names[folded] for kind, names in _kind_targets().items() if folded in names}


def _named_targets(kind: str) -> Iterator[tuple[str, Target]]:
    """Yield (header, target); earlier names hold against later aliases."""
    targets = [(one, _target(path, one)) for path, one in _paths(kind)]
    known = {folded_name(name) for one, target in targets if target for name in (one.name, one.label)}
    for one, target in targets:
        if target is None:
            continue
        names = _names_at(target.path, one)
        own = {folded_name(name) for name in names}
        also = {folded_name(name) for name in _ALSO.get(target.path, ())} - known
        yield from ((name, target) for name in sorted(own - _row_names().keys()))
        yield from ((name, replace(target, is_alias=True)) for name in sorted(also - own - _row_names().keys()))


def _names_at(path: str, one: bodies.Field) -> tuple[str, ...]:
    place = re.search(r"\[([1-9])\]", path)
    after = f" {int(place[1]) + 1}" if place else ""
    return (f"{one.name}{after}", f"{one.label}{after}")


def _paths(kind: str) -> Iterator[tuple[str, bodies.Field]]:
    for one in bodies.fields(PROCEDURES[kind].body):
        if kind == "gauge_reading" and one.name == "readings":
            yield from ((f"readings[0].{inner.name}", inner) for inner in bodies.fields(OneReading)
                        if inner.name != "note")  # fmt: skip
        elif kind == "flow_test" and one.name == "points":
            for place in range(3):
                yield from ((f"points[{place}].{inner.name}", inner) for inner in bodies.fields(FlowPoint))
        elif one.name not in {"performed_on", "supply"}:
            yield one.name, one


def _target(path: str, one: bodies.Field) -> Target | None:
    bare = one.type
    if one.choices:
        return Target(path, choices=one.choices)
    if isinstance(bare, type) and issubclass(bare, Quantity):
        return Target(path, quantity=bare)
    if bare is fields.Duration:
        return Target(path, is_seconds=True)
    plain = _PLAIN.get(bare)
    return Target(path, plain=plain) if plain is not None else None


def _text(typed: str, header: str) -> str:
    if len(typed) > _LONGEST_CELL:
        raise InputError(f"{header}: longer than {_LONGEST_CELL} characters; shorten it", field=header)
    return typed


def _count(typed: str, header: str) -> int:
    number = typed_decimal(typed, header)
    if "." in number:
        raise InputError(f"{header}: {typed!r} is no whole number; write it without decimals", field=header)
    return int(number)


def _iso_day(typed: str, header: str) -> str:
    try:
        return date.fromisoformat(typed).isoformat()
    except ValueError as error:
        raise InputError(f"{header}: {typed!r} is no date; write year-month-day", field=header) from error


_PLAIN: Mapping[object, Callable[[str, str], object]] = {
    str: _text,
    bool: typed_yes_no,
    int: _count,
    date: _iso_day,
}
