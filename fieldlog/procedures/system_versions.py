"""The versions of a system, read in time: on which supply it was when, and since when its drain is as it is."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from datetime import date
from itertools import pairwise

import msgspec

from fieldlog.procedures.system import Drain, System
from fieldlog.records.entries import Entry


@dataclass(frozen=True, slots=True)
class Version:
    """One version of a system."""

    entry: Entry
    body: System


def versions_of(in_force: Entry, by_uid: Mapping[str, Entry]) -> tuple[Version, ...]:
    """Return the version in force and those it replaced, newest first; what a fork left aside is not among them."""
    return tuple(_back_from(in_force, by_uid))


def _back_from(in_force: Entry, by_uid: Mapping[str, Entry]) -> Iterator[Version]:
    entry: Entry | None = in_force
    while entry is not None:
        yield Version(entry, msgspec.convert(entry.body, System))
        entry = by_uid.get(entry.based_on or "")


class SuppliesInTime:
    """On which supply a system was on which day.

    A version that names another supply with `on_supply_since` is a move; without it, the supply was recorded wrongly
    before, and the system counts as having always been on the one named last.
    """

    def __init__(self, versions: Sequence[Version]) -> None:
        self._spans: list[tuple[date, str]] = []  # newest first, each since an earlier day than the one before
        for since, supply in _stated(versions):
            if not self._spans or since < self._spans[-1][0]:
                self._spans.append((since, supply))

    def on(self, day: date) -> str | None:
        """Return the supply on a day; None before the first."""
        return next((supply for since, supply in self._spans if since <= day), None)

    def has_been_on(self, supply: str) -> bool:
        """Return whether the system is or was on the supply."""
        return any(supply == other for _, other in self._spans)

    def since(self, supply: str) -> date | None:
        """Return since when the system is, or last was, on the supply; None where that is not stated."""
        since = next((since for since, other in self._spans if other == supply), date.min)
        return None if since == date.min else since

    def left_on(self, supply: str) -> date | None:
        """Return from which day the system was on another supply; None while it is on this one."""
        left = None
        for since, other in self._spans:
            if other == supply:
                return left
            left = since
        return left


def drain_changed_on(versions: Sequence[Version]) -> date | None:
    """Return since when the drain is as it is: as stated, else the day of the version that named another drain.

    Only parts that both versions state are held against each other; completing a record changes no drain.
    """
    if versions[0].body.drain_changed_on is not None:
        return versions[0].body.drain_changed_on
    for newer, older in pairwise(versions):
        if _differ(newer.body.drain, older.body.drain):
            return date.fromisoformat(newer.entry.made_at[:10])
    return None


def _stated(versions: Sequence[Version]) -> Iterator[tuple[date, str]]:
    """Yield since when each version has the system on its supply; one that is silent follows the one it replaced."""
    for place, version in enumerate(versions):
        supply, since = version.body.supply, None
        for older in versions[place:]:
            if older.body.supply != supply:
                break
            since = since or older.body.on_supply_since
        yield since or date.min, supply


def _differ(drain: Drain | None, other: Drain | None) -> bool:
    if drain is None or other is None:
        return False
    pairs = [(_folded(drain.id), _folded(other.id)), (_folded(drain.outlet), _folded(other.outlet))]
    sizes = [None if one.size is None else one.size.exact() for one in (drain, other)]
    return any(now != then for now, then in [*pairs, tuple(sizes)] if now is not None and then is not None)


def _folded(text: str | None) -> str | None:
    return None if text is None else " ".join(text.casefold().split())
