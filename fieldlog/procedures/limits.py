"""Limits that no shape can say: quantities that can't be negative, days and times that no calendar has.

They follow from the types of a body: each quantity has a usual bound, which a field may narrow by
`Meta(extra={"least": "0"})` or `Meta(extra={"above": "0"})`. Only what can't be an honest record is a problem here;
what is merely odd is a question (questions.py).
"""

from __future__ import annotations

import types
from collections.abc import Callable
from datetime import date, datetime
from fractions import Fraction
from functools import cache
from typing import Annotated, Any, Union, get_args, get_origin, get_type_hints

import msgspec

from fieldlog.procedures.procedure import Body, Problem
from fieldlog.units import Area, Density, Diameter, Discharge, Flow, Quantity

# Nothing that is inspected is older, and no plan reaches further; outside of it a year is a typing slip.
FIRST_YEAR, LAST_YEAR = 1800, 2199
_USUAL_BOUNDS: dict[type[Quantity], str] = {Flow: "least", Diameter: "above", Area: "above", Density: "above",
                                            Discharge: "above"}  # fmt: skip

_Check = Callable[[Any, str, list[Problem]], None]


def limit_problems(body: msgspec.Struct) -> list[Problem]:
    """Return what in a body lies outside its limits, by dotted path."""
    found: list[Problem] = []
    _walk(body, "", found)
    return found


def limits_of(metas: list[msgspec.Meta], bare: Any) -> dict[str, str]:  # noqa: ANN401  a type of any shape
    """Return the limits of a field, for forms: least, above, most, shortest, longest."""
    bound = _bound(metas, bare)
    said = {} if bound is None else {bound: "0"}
    for meta in metas:
        stated = {"least": meta.ge, "most": meta.le, "shortest": meta.min_length, "longest": meta.max_length}
        said |= {name: str(limit) for name, limit in stated.items() if limit is not None}
    return said


def is_before(one: str, other: str) -> bool:
    """Return whether a time with its zone is before another; both were found to be times."""
    return datetime.fromisoformat(one) < datetime.fromisoformat(other)


def metas_of(hint: Any) -> tuple[list[msgspec.Meta], Any]:  # noqa: ANN401  a type annotation of any shape
    """Return what is said of a field's type, outermost first, and the bare type without None."""
    if get_origin(hint) is Annotated:
        inner, *found = get_args(hint)
        deeper, bare = metas_of(inner)
        return [meta for meta in found if isinstance(meta, msgspec.Meta)] + deeper, bare
    if get_origin(hint) in {Union, types.UnionType}:
        options = [option for option in get_args(hint) if option is not type(None)]
        if len(options) == 1:
            return metas_of(options[0])
    return [], hint


def _walk(part: msgspec.Struct, before: str, found: list[Problem]) -> None:
    for name, said, check in _plan(type(part)):
        value = getattr(part, name)
        if value is not None and value != ():
            check(value, f"{before}{said}", found)


@cache
def _plan(body_type: type[msgspec.Struct]) -> tuple[tuple[str, str, _Check], ...]:
    """Return which fields are to be looked at: attribute, name in JSON, how."""
    hints = get_type_hints(body_type, include_extras=True)
    checks = [(info.name, info.encode_name, _check_of(hints[info.name])) for info in msgspec.structs.fields(body_type)]
    return tuple((name, said, check) for name, said, check in checks if check is not None)


def _check_of(hint: Any) -> _Check | None:  # noqa: ANN401
    metas, bare = metas_of(hint)
    if get_origin(bare) is tuple:
        each = _check_of(get_args(bare)[0])
        return None if each is None else _each(each)
    if bare is date:
        return _check_day
    if any((meta.extra or {}).get("is_moment") for meta in metas):
        return _check_moment
    if not isinstance(bare, type):
        return None
    if issubclass(bare, Quantity):
        return _check_of_quantity(metas, bare)
    return _check_part if issubclass(bare, Body) and _plan(bare) else None


def _check_of_quantity(metas: list[msgspec.Meta], quantity: type[Quantity]) -> _Check | None:
    bound = _bound(metas, quantity)
    has_swing = any(info.name == "low" for info in msgspec.structs.fields(quantity))
    if bound is None:
        return _check_swing if has_swing else None

    def check(value: Quantity, path: str, found: list[Problem]) -> None:
        if _is_zero(value.value) if bound == "above" else False:
            found.append(Problem(path, f"0 {value.unit} can't be; give a {quantity.noun} above 0"))
        elif value.value.startswith("-") and not _is_zero(value.value):
            found.append(Problem(path, f"{value.value} {value.unit} can't be; give a {quantity.noun} without its sign"))
        if has_swing:
            _check_swing(value, path, found)

    return check


def _bound(metas: list[msgspec.Meta], bare: Any) -> str | None:  # noqa: ANN401
    for meta in metas:
        for name in ("least", "above"):
            if name in (meta.extra or {}):
                return name
    usual = (_USUAL_BOUNDS.get(kind) for kind in bare.__mro__) if isinstance(bare, type) else iter(())
    return next((bound for bound in usual if bound is not None), None)


def _is_zero(value: str) -> bool:
    return not value.strip("-0.")


def _each(check: _Check) -> _Check:
    def check_each(values: tuple[Any, ...], path: str, found: list[Problem]) -> None:
        for index, value in enumerate(values):
            check(value, f"{path}[{index}]", found)

    return check_each


def _check_part(part: msgspec.Struct, path: str, found: list[Problem]) -> None:
    _walk(part, f"{path}.", found)


def _check_swing(reading: Any, path: str, found: list[Problem]) -> None:  # noqa: ANN401  a PressureReading
    low, high = reading.low, reading.high
    if low is not None and high is not None and Fraction(low) > Fraction(high):
        found.append(Problem(f"{path}.low", f"the needle swung from {low} down to {high}; give the low value as low"))


def _check_day(day: date, path: str, found: list[Problem]) -> None:
    if not FIRST_YEAR <= day.year <= LAST_YEAR:
        found.append(Problem(path, f"the year {day.year} can't be; give one from {FIRST_YEAR} to {LAST_YEAR}"))


def _check_moment(text: str, path: str, found: list[Problem]) -> None:
    try:
        moment = datetime.fromisoformat(text)
    except ValueError:
        found.append(Problem(path, f"{text} is no time of the calendar; write it as 2026-10-03T09:30+02:00"))
        return
    _check_day(moment.date(), path, found)
