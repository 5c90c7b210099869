"""Fields of a rule by their path ("criteria.0.percent"), for overrides and for the marks of single values."""

from __future__ import annotations

from typing import Any

import msgspec

from fieldlog.errors import InputError
from fieldlog.records.rules import Rule

# A row's name and how surely it is known are not a locality's to change; approval has its own way.
_FIXED = {"id", "mark", "source", "from_memory", "approval"}


def field_of(rule: Rule, path: str) -> object:
    """Return the stored form of the field of `rule` at `path`.

    Raises
    ------
    InputError
        If the row has no such field, or leaves it out.
    """
    found: Any = msgspec.to_builtins(rule)
    for part in path.split("."):
        if isinstance(found, dict) and part in found:
            found = found[part]
        elif isinstance(found, (list, tuple)) and part.isdecimal() and int(part) < len(found):
            found = found[int(part)]
        else:
            raise InputError(f"row {rule.id}: no field {path!r} is set; name one that is", field=path)
    return found


def with_field(rule: Rule, path: str, value: object) -> Rule:
    """Return `rule` with another value at `path`; lists grow by one at most.

    Raises
    ------
    InputError
        If the row knows no such field, the value does not fit it, or the field is not to be changed.
    """
    parts = path.split(".")
    if parts[0] in _FIXED:
        raise InputError(f"row {rule.id}: {parts[0]} can't be overridden; name another field", field=path)
    plain = _put(msgspec.to_builtins(rule), parts, value, f"row {rule.id}, {path}")
    try:
        return msgspec.convert(plain, Rule)
    except (msgspec.ValidationError, ValueError) as error:
        raise InputError(f"row {rule.id}, {path}: {error}; mend the field or its value", field=path) from error


def _put(holder: object, parts: list[str], value: object, where: str) -> object:
    if not parts:
        return value
    first, rest = parts[0], parts[1:]
    if isinstance(holder, dict):
        return {**holder, first: _put(holder.get(first, {}), rest, value, where)}
    if isinstance(holder, (list, tuple)) and first.isdecimal() and int(first) <= len(holder):
        items = [*holder, {}] if int(first) == len(holder) else list(holder)
        items[int(first)] = _put(items[int(first)], rest, value, where)
        return items
    raise InputError(f"{where}: nothing stands at {first!r}; name a field of the row", field=where)
