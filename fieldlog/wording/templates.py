"""Sentences with places for numbers: the unit is read from each number's name, the rounding from its place.

`{loss_psi:up}` is an estimated pressure rounded up, `{residual_psi:read}` a recorded one, `{reduction_share}` a
percentage, `{gauge}` the name of what a uid stands for. A number without a unit in its name is a count.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from datetime import date
from string import Formatter

from fieldlog.records.statement import Number
from fieldlog.units import SiteUnits
from fieldlog.wording.quantities import Reader, Rounding, capital, day, percent, rounded, seconds

_ISO_DAY = re.compile(r"[0-9]{4}-[0-9]{2}-[0-9]{2}")
_ROUNDINGS: Mapping[str, Rounding] = {"up": "up", "down": "down", "": "nearest"}


@dataclass(frozen=True, slots=True)
class _Shown:
    """One number of a finding, written when its place in the sentence is known."""

    name: str
    value: Number
    reader: Reader
    names: Mapping[str, str]

    def __format__(self, spec: str) -> str:
        if isinstance(self.value, bool):
            return "yes" if self.value else "no"
        if isinstance(self.value, str):
            return self._words(self.value)
        if self.value is None or not math.isfinite(self.value):
            return "not known"
        return self._quantity(float(self.value), spec)

    def _words(self, text: str) -> str:
        if _ISO_DAY.fullmatch(text):
            return day(date.fromisoformat(text))
        return self.names.get(text, text)

    def _quantity(self, value: float, spec: str) -> str:
        for suffix, written in _BY_SUFFIX.items():
            if self.name.endswith(suffix):
                return written(self.reader, value, spec)
        decimals = 0 if value == int(value) else 3
        return rounded(value, decimals)


def _pressure(reader: Reader, psi: float, spec: str) -> str:
    if spec == "read":
        return reader.pressure(psi)
    return reader.estimate(psi, _ROUNDINGS[spec])


def _pressure_rate(reader: Reader, psi: float, spec: str) -> str:
    return f"{reader.estimate(psi, _ROUNDINGS[spec], finer=1)} a year"


def _share(_reader: Reader, share: float, _spec: str) -> str:
    return percent(share)


def _plain_percent(_reader: Reader, value: float, _spec: str) -> str:
    return percent(value / 100)


_BY_SUFFIX: Mapping[str, Callable[[Reader, float, str], str]] = {
    "_psi_per_year": _pressure_rate,
    "_psi": _pressure,
    "_gpm": lambda reader, gpm, _: reader.flow(gpm),
    "_ft": lambda reader, ft, _: reader.length(ft),
    "_share": _share,
    "_percent": _plain_percent,
    "_hours": lambda _reader, hours, _: f"{rounded(hours, 1).removesuffix('.0')} h",
    "_years": lambda _reader, years, _: f"{rounded(years, 1).removesuffix('.0')} years",
    "_days": lambda _reader, days, _: f"{rounded(days, 0)} days",
    "_s": lambda _reader, duration, _: seconds(duration),
}


def filled(template: str, numbers: Mapping[str, Number], units: SiteUnits, names: Mapping[str, str]) -> str:
    """Return `template` with its numbers written in `units`; a number that is not given reads "not known"."""
    reader = Reader(units)
    places = {name: _Shown(name, numbers.get(name), reader, names) for name in places_of(template)}
    return capital(template.format_map(places))


def places_of(template: str) -> set[str]:
    """Return the names of the numbers that `template` has a place for."""
    return {name for _, name, _, _ in Formatter().parse(template) if name}
