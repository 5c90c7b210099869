"""Reads the catalogue's TOML files: shared rows, and an edition's cells that say how often and how surely.

An edition's file answers every shared row that has no mark of its own, or says why it is absent; nothing is taken
over in silence. What one edition takes over from another loses its clause, since clause numbers move.
"""

from __future__ import annotations

import tomllib
from importlib import resources
from importlib.resources.abc import Traversable
from typing import Any, Literal, TypeVar

import msgspec

from fieldlog.errors import ConfigError, InputError, NotFoundError
from fieldlog.records.criteria import Positive
from fieldlog.records.rules import Basis, Override, Rule, RuleId, Words
from fieldlog.rules.row_fields import field_of

EXAMPLES = "local_examples"
_Row = dict[str, Any]


class _Strict(msgspec.Struct, frozen=True, forbid_unknown_fields=True, kw_only=True):
    pass


class Header(_Strict, frozen=True, kw_only=True):
    """What a file is; without an edition it only holds rows for others."""

    id: Words
    title: Words
    standard: Words
    edition: Words | None = None
    based_on: str | None = None
    taken_over_as: Literal["from memory"] | None = None


class Interval(_Strict, frozen=True, kw_only=True):
    """What an edition means by "quarter" or "year"."""

    every: Positive
    unit: Literal["day", "week", "month", "year"]
    anchor: Literal["calendar", "last done", "baseline"]
    mark: Basis
    least: Positive | None = None
    most: Positive | None = None
    gap_unit: Literal["day", "month"] | None = None
    source: Words | None = None


class CatalogueFile(_Strict, frozen=True, kw_only=True):
    """One file as it stands."""

    catalogue: Header
    intervals: dict[str, Interval] = {}
    row: tuple[_Row, ...] = ()
    cell: dict[RuleId, _Row] = {}


class LocalExample(_Strict, frozen=True, kw_only=True):
    """Overrides that some locality has, to be taken up or left."""

    id: Words
    title: Words
    mark: Basis
    source: Words
    overrides: tuple[Override, ...]


class _ExamplesFile(_Strict, frozen=True, kw_only=True):
    example: tuple[LocalExample, ...]


_File = TypeVar("_File", CatalogueFile, _ExamplesFile)


class Merged(msgspec.Struct, frozen=True, kw_only=True):
    """A file with what it is based on: rows by id, cells by row, intervals by word."""

    header: Header
    rows: dict[str, _Row]
    cells: dict[str, _Row]
    intervals: dict[str, Interval]


def shipped() -> Traversable:
    """Return the folder of the catalogue that comes with the program."""
    return resources.files("fieldlog.rules") / "catalogue"


def names(folder: Traversable) -> list[str]:
    """Return the names of the catalogue files, without the examples, in order."""
    stems = [path.name.removesuffix(".toml") for path in folder.iterdir() if path.name.endswith(".toml")]
    return sorted(stem for stem in stems if stem != EXAMPLES)


def read_header(folder: Traversable, name: str) -> Header:
    """Return the header of one file."""
    return _read(folder, name, CatalogueFile).catalogue


def read_examples(folder: Traversable) -> tuple[LocalExample, ...]:
    """Return the examples of local overrides."""
    return _read(folder, EXAMPLES, _ExamplesFile).example


def read_rules(folder: Traversable, name: str) -> tuple[Header, tuple[Rule, ...]]:
    """Return the header and the typed rows of one catalogue.

    Raises
    ------
    ConfigError
        If a file or row is not as it must be; names the file and the row.
    """
    merged = _merged(folder, name, ())
    _require_known(merged, name)
    return merged.header, tuple(
        _rule(merged, row_id, name) for row_id in merged.rows if "absent" not in merged.cells.get(row_id, {})
    )


def _read(folder: Traversable, name: str, kind: type[_File]) -> _File:
    path = folder / f"{name}.toml"
    if not path.is_file():
        raise NotFoundError(f"no catalogue {name!r}; there are {', '.join(names(folder))}")
    try:
        return msgspec.convert(tomllib.loads(path.read_text(encoding="utf-8")), kind)
    except (tomllib.TOMLDecodeError, msgspec.ValidationError) as error:
        raise ConfigError(f"rules file {name}.toml: {error}; mend the file") from error


def _merged(folder: Traversable, name: str, seen: tuple[str, ...]) -> Merged:
    if name in seen:
        raise ConfigError(f"rules file {name}.toml is based on itself through {', '.join(seen)}; mend based_on")
    file = _read(folder, name, CatalogueFile)
    if file.catalogue.id != name:
        raise ConfigError(f"rules file {name}.toml calls itself {file.catalogue.id!r}; name both alike")
    own_rows = _by_id(file.row, name)
    if file.catalogue.based_on is None:
        return Merged(header=file.catalogue, rows=own_rows, cells=file.cell, intervals=file.intervals)
    below = _merged(folder, file.catalogue.based_on, (*seen, name))
    twice = own_rows.keys() & below.rows.keys()
    if twice:
        raise ConfigError(f"rules file {name}.toml: rows {', '.join(sorted(twice))} stand there already; use a cell")
    taken = {row_id: _taken_over(cell, below, file.catalogue) for row_id, cell in below.cells.items()}
    intervals = {word: _interval_taken_over(item, file.catalogue) for word, item in below.intervals.items()}
    return Merged(
        header=file.catalogue,
        rows=below.rows | own_rows,
        cells=taken | file.cell,
        intervals=intervals | file.intervals,
    )


def _by_id(rows: tuple[_Row, ...], name: str) -> dict[str, _Row]:
    found: dict[str, _Row] = {}
    for place, row in enumerate(rows, start=1):
        row_id = row.get("id")
        if not isinstance(row_id, str) or row_id in found:
            raise ConfigError(f"rules file {name}.toml, row {place}: id {row_id!r} is missing or stands twice")
        found[row_id] = row
    return found


def _taken_over(cell: _Row, below: Merged, header: Header) -> _Row:
    if "absent" in cell:
        return cell
    kept = {key: value for key, value in cell.items() if key != "clause"}
    kept["from_memory"] = [path for path in cell.get("from_memory", []) if path != "clause"]
    if header.taken_over_as is not None:
        said = f"as the {below.header.edition} edition, as far as recalled"
        kept |= {"mark": header.taken_over_as, "source": said, "from_memory": []}
    return kept


def _interval_taken_over(interval: Interval, header: Header) -> Interval:
    if header.taken_over_as is None:
        return interval
    return msgspec.structs.replace(interval, mark=header.taken_over_as)


def _require_known(merged: Merged, name: str) -> None:
    if merged.header.edition is None:
        raise ConfigError(f"rules file {name}.toml holds rows for other files; load one that has an edition")
    strange = merged.cells.keys() - merged.rows.keys()
    if strange:
        raise ConfigError(f"rules file {name}.toml: cells {', '.join(sorted(strange))} have no row; mend their ids")
    silent = [row_id for row_id, row in merged.rows.items() if "mark" not in row and row_id not in merged.cells]
    if silent:
        raise ConfigError(f"rules file {name}.toml: rows {', '.join(silent)} have no cell; give one, or say absent")


def _rule(merged: Merged, row_id: str, name: str) -> Rule:
    where = f"rules file {name}.toml, row {row_id}"
    plain = dict(merged.rows[row_id] | merged.cells.get(row_id, {}))
    if plain.get("mark") == "from memory":
        plain.setdefault("source", "from memory")
    _spell_out_frequency(plain, merged.intervals, where)
    try:
        rule = msgspec.convert(plain, Rule)
        for path in rule.from_memory:
            field_of(rule, path)
    except (msgspec.ValidationError, InputError) as error:
        raise ConfigError(f"{where}: {error}; mend the row or its cell") from error
    if rule.mark == "approved":
        raise ConfigError(f"{where}: a shipped row can't be approved; mark it read or from memory")
    return rule


def _spell_out_frequency(plain: _Row, intervals: dict[str, Interval], where: str) -> None:
    word, season = plain.pop("every", None), plain.pop("season", None)
    if word is None:
        return
    if word not in intervals:
        raise ConfigError(f"{where}: {word!r} is not among the intervals {', '.join(intervals)}")
    parts = {key: value for key, value in msgspec.to_builtins(intervals[word]).items() if value is not None}
    mark = parts.pop("mark")
    parts.pop("source", None)
    plain["frequency"] = parts | ({} if season is None else {"season": {"name": season}})
    if mark == "from memory" and plain.get("mark") == "read":
        unread = [f"frequency.{key}" for key in ("anchor", "least", "most") if key in parts]
        plain["from_memory"] = [*plain.get("from_memory", []), *unread]
