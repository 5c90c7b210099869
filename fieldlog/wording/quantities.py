"""Numbers as people read them: in the site's units, rounded to the safe side, never against what was decided.

A margin is rounded down and a loss up; where two printed numbers were compared, or a number with its limit,
enough digits are shown that the print agrees with the decision.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from datetime import date
from decimal import ROUND_CEILING, ROUND_FLOOR, ROUND_HALF_EVEN, Decimal
from typing import Literal

from fieldlog.units import SiteUnits, flow_in, length_in, pressure_in

Rounding = Literal["down", "up", "nearest"]

_ROUNDINGS = {"down": ROUND_FLOOR, "up": ROUND_CEILING, "nearest": ROUND_HALF_EVEN}
# Decimals of an estimate and of a recorded figure; an estimate is never surer than a psi or two.
_ESTIMATE_DECIMALS = {"psi": 0, "bar": 1, "kPa": -1}
_RECORDED_DECIMALS = {"psi": 1, "bar": 2, "kPa": 0}
_MONTHS = (
    "January", "February", "March", "April", "May", "June", "July", "August", "September", "October", "November",
    "December",
)  # fmt: skip


def rounded(value: float, decimals: int, rounding: Rounding = "nearest") -> str:
    """Return `value` with `decimals` digits after the point (negative: tens, hundreds), minus sign as U+2212."""
    if not math.isfinite(value):
        return "not a number" if math.isnan(value) else ("−∞" if value < 0 else "∞")
    if abs(value) >= 1e15:
        return f"{value:.3e}".replace("-", "−")
    # Twelve digits first: 0.1 + 0.2 must not be rounded up to 0.4.
    exact = Decimal(repr(float(f"{value:.12g}")))
    kept = exact.quantize(Decimal(1).scaleb(-decimals), rounding=_ROUNDINGS[rounding])
    if kept == 0:
        kept = abs(kept)
    return f"{kept:f}".replace("-", "−")


@dataclass(frozen=True, slots=True)
class Reader:
    """Writes quantities in one site's units."""

    units: SiteUnits

    def estimate(self, psi: float, rounding: Rounding = "nearest", *, finer: int = 0) -> str:
        """Return an estimated pressure with its unit; `finer` adds digits where two of them are compared."""
        return f"{self.bare_estimate(psi, rounding, finer=finer)} {self.units.pressure}"

    def bare_estimate(self, psi: float, rounding: Rounding = "nearest", *, finer: int = 0) -> str:
        """Return an estimated pressure without its unit."""
        decimals = _ESTIMATE_DECIMALS[self.units.pressure] + finer
        return rounded(pressure_in(psi, self.units.pressure), decimals, rounding)

    def margin_band(self, low_psi: float, high_psi: float, *, finer: int = 0) -> str:
        """Return a band of margins, both ends rounded down, without unit: "6 to 16"."""
        low = self.bare_estimate(low_psi, "down", finer=finer)
        return f"{low} to {self.bare_estimate(high_psi, 'down', finer=finer)}"

    def pressure(self, psi: float, rounding: Rounding = "nearest") -> str:
        """Return a recorded pressure with its unit."""
        unit = self.units.pressure
        return f"{_trimmed(rounded(pressure_in(psi, unit), _RECORDED_DECIMALS[unit], rounding))} {unit}"

    def flow(self, gpm: float) -> str:
        """Return a flow with its unit, to the whole unit."""
        return f"{rounded(flow_in(gpm, self.units.flow), 0)} {self.units.flow}"

    def length(self, ft: float) -> str:
        """Return a length or height with its unit."""
        return f"{_trimmed(rounded(length_in(ft, self.units.length), 1))} {self.units.length}"

    def digits_to_agree(self, parts_psi: Sequence[float], larger_psi: float) -> int:
        """Return how many more digits print `larger_psi`, rounded down, not under the parts, each rounded up.

        Three when none do: then the two are equal for every purpose.
        """
        for finer in range(3):
            parts = [_number(self.bare_estimate(part, "up", finer=finer)) for part in parts_psi]
            if sum(parts) <= _number(self.bare_estimate(larger_psi, "down", finer=finer)):
                return finer
        return 3


def percent(share: float, *, reaches: bool | None = None, limit: Decimal = Decimal(10)) -> str:
    """Return `share` as a percentage that agrees with whether it was found to reach `limit` percent.

    Four decimals at most; what lies closer is printed as the limit itself, or as "just under" it.
    """
    if not math.isfinite(share):
        return "an unknown share"
    if abs(100 * share - float(limit)) > 0.5:
        return f"{rounded(100 * share, 1)} %"
    is_reached = reaches if reaches is not None else 100 * share >= float(limit) - 1e-9
    for decimals in range(1, 5):
        text = rounded(100 * share, decimals)
        if (_number(text) >= limit) == is_reached:
            return f"{text} %"
    return f"{limit}.0 %" if is_reached else f"just under {limit} %"


def seconds(duration_s: float) -> str:
    """Return a duration: seconds up to two minutes, then minutes and seconds."""
    whole = round(duration_s)
    if whole <= 120:
        return f"{_trimmed(rounded(duration_s, 1))} s"
    return f"{whole // 60} min {whole % 60} s" if whole % 60 else f"{whole // 60} min"


def day(when: date) -> str:
    """Return a date as people write it: 12 March 2019."""
    return f"{when.day} {_MONTHS[when.month - 1]} {when.year}"


def month_name(month: int) -> str:
    """Return the English name of month 1 to 12."""
    return _MONTHS[month - 1]


def counted(count: int, noun: str, plural: str = "") -> str:
    """Return "1 test", "3 tests"."""
    return f"{count} {noun if count == 1 else plural or noun + 's'}"


def listed(words: Iterable[str]) -> str:
    """Return "a", "a and b", "a, b and c"."""
    items = list(words)
    if len(items) < 2:
        return "".join(items)
    return f"{', '.join(items[:-1])} and {items[-1]}"


def capital(text: str) -> str:
    """Return `text` with its first letter large."""
    return text[:1].upper() + text[1:]


def _trimmed(text: str) -> str:
    return text.rstrip("0").rstrip(".") if "." in text else text


def _number(text: str) -> Decimal:
    return Decimal(text.replace("−", "-"))
