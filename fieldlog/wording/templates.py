"""Sentences with places for numbers: the unit is read from each number's name, the rounding from its place.

`{loss_psi:up}` is an estimated pressure rounded up, `{residual_psi:read}` a recorded one, `{reduction:10}` a
percentage that was found to reach ten, `{gauge}` the name of what a uid stands for. A sentence is a tuple of
parts: the first always stands, each later one only where all its numbers are known.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from datetime import date
from decimal import Decimal
from string import Formatter

from fieldlog.records.statement import Number
from fieldlog.units import SiteUnits
from fieldlog.wording.quantities import Reader, Rounding, capital, day, listed, percent, rounded, seconds

_ISO_DAY = re.compile(r"([0-9]{4}-[0-9]{2}-[0-9]{2})(?:T([0-9]{2}:[0-9]{2}).*)?")
_ROUNDINGS: Mapping[str, Rounding] = {"up": "up", "down": "down"}
# Of these nothing is said where they are nought.
_SILENT_AT_ZERO = {"hose_outside_gpm", "rule_margin_psi"}
# What people type (a valve, a gauge, a drain) is printed as typed; other texts are codes with words of their own.
_TYPED = {"valve", "gauge", "because", "drain"}
_WORDS: Mapping[str, str] = {
    "partly": "part shut",
    "none": "no pump",
    "off": "pump off",
    "jockey": "jockey pump running",
    "running": "pump running",
    "public_main": "a public main",
    "gravity_tank": "a gravity tank",
    "pressure_tank": "a pressure tank",
    "fire_pump": "a fire pump",
    "parallel": "of several parallel feeds",
    "street": "the street",
    "lead_in": "the lead-in",
    "base_of_riser": "the base of riser",
    "test_header": "the test header",
    "sole feed": "the sole feed",
    "device": "alarm device",
    "bell": "local bell",
    "monitoring": "monitoring service",
    "previous": "the previous test",
    "reference": "the reference",
    "new reference": "the new reference",
    "best": "the best on file",
    "fully_open": "whether the drain was fully open",
    "took_full_flow": "whether the outlet took full flow",
    "running_clear": "whether the drain ran clear",
    "drain_unchanged": "whether the drain was unchanged",
    "tank_level": "the level of the tank",
    "steady": "whether static after was steady",
    "gauge_tap": "where the gauge taps",
    "pump_state": "whether a pump ran",
    "feed altered": "an altered feed",
}
_BASES: Mapping[str, str] = {
    "flow test": "the newest flow test",
    "pump test": "the newest pump test",
    "forward-flow test": "the newest forward-flow test",
    "design supply curve": "the supply curve of the design record, which no flow test on file measured",
}


@dataclass(frozen=True, slots=True)
class _Shown:
    """One number of a finding, written when its place in the sentence is known."""

    name: str
    value: Number
    reader: Reader
    names: Mapping[str, str]

    def __format__(self, spec: str) -> str:
        if spec == "typed":
            return str(self.value)
        if isinstance(self.value, bool):
            return _confirmed(is_confirmed=self.value) if self.name == "is_confirmed" else str(self.value).lower()
        if isinstance(self.value, str):
            return self._words(self.value)
        if self.value is None or not math.isfinite(self.value):
            return "not known"
        return self._quantity(float(self.value), spec)

    def _words(self, text: str) -> str:
        if when := _ISO_DAY.fullmatch(text):
            clock = f", {when[2]}" if when[2] else ""
            return f"{day(date.fromisoformat(when[1]))}{clock}"
        if self.name in _TYPED:
            return self.names.get(text, text)
        if self.name == "basis":
            return _BASES.get(text, text)
        known = [self.names.get(word) or _WORDS.get(word, word) for word in text.split(", ")]
        return listed(known)

    def _quantity(self, value: float, spec: str) -> str:
        for suffix, written in _BY_SUFFIX.items():
            if self.name == suffix or self.name.endswith(f"_{suffix}"):
                return written(self.reader, value, spec)
        return rounded(value, 0 if value == int(value) else 3)


def _confirmed(*, is_confirmed: bool) -> str:
    return "confirmed by a second look or gauge" if is_confirmed else "not confirmed by a second look"


def _pressure(reader: Reader, psi: float, spec: str) -> str:
    first, _, second = spec.partition("-")
    if first == "read":
        return reader.pressure(psi, _ROUNDINGS.get(second, "nearest"))
    return reader.estimate(psi, _ROUNDINGS.get(first, "nearest"))


def _share(_reader: Reader, share: float, spec: str) -> str:
    if spec.isdigit():
        return percent(share, reaches=True, limit=Decimal(spec))
    if spec == "up":
        return f"{_trimmed(rounded(100 * share, 2, 'up'))} %"
    return f"{_trimmed(rounded(100 * share, 1))} %"


def _hours(_reader: Reader, hours: float, spec: str) -> str:
    return f"{_trimmed(rounded(hours, 1, _ROUNDINGS.get(spec, 'nearest')))} h"


def _trimmed(text: str) -> str:
    return text.rstrip("0").rstrip(".") if "." in text else text


_BY_SUFFIX: Mapping[str, Callable[[Reader, float, str], str]] = {
    "psi": _pressure,
    "gpm": lambda reader, gpm, _: reader.flow(gpm),
    "ft": lambda reader, ft, _: reader.length(ft),
    "share": _share,
    "reduction": _share,
    "increase": _share,
    "drop": _share,
    "hours": _hours,
    "months": lambda _reader, months, _: f"{rounded(months, 0)} months",
    "seconds": lambda _reader, duration_s, _: seconds(duration_s),
    "s": lambda _reader, duration_s, _: seconds(duration_s),
}


def filled(
    template: str | tuple[str, ...], numbers: Mapping[str, Number], units: SiteUnits, names: Mapping[str, str]
) -> str:
    """Return the sentence with its numbers written in `units`; one that is needed and not given is "not known"."""
    first, *rest = (template,) if isinstance(template, str) else template
    reader = Reader(units)
    parts = [first, *(part for part in rest if _is_known(part, numbers))]
    places = {name: _Shown(name, numbers.get(name), reader, names) for part in parts for name in places_of(part)}
    text = capital("".join(parts).format_map(places))
    return text if text.endswith((".", "?")) else f"{text}."


def places_of(template: str | tuple[str, ...]) -> set[str]:
    """Return the names of the numbers that `template` has a place for."""
    return {name for _, name, _, _ in Formatter().parse("".join(template)) if name}


def _is_known(part: str, numbers: Mapping[str, Number]) -> bool:
    return all(
        numbers.get(name) is not None and numbers[name] != "" and not (name in _SILENT_AT_ZERO and numbers[name] == 0)
        for name in places_of(part)
    )
