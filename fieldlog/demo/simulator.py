"""What gauges would have shown at an invented supply: seeded, pure, in psi and gpm.

A supply has a static that moves with season, day, tank level, decline and steps; a system adds the resistance of its
own feed and a drain that is an orifice; a gauge adds its height, its bias, its division and the eye of the reader.
"""

from __future__ import annotations

import hashlib
import math
from dataclasses import dataclass
from datetime import date

import numpy as np
from scipy.optimize import brentq

from fieldlog.hydraulics.formulas import FLOW_EXPONENT, elevation_pressure

_DAYS_OF_YEAR = 365.25
_HIGHEST_DAY = 45  # mid February; the lowest static of the year comes half a year later
_FT_IN_M = 1 / 0.3048


def dice(*words: object) -> np.random.Generator:
    """Return the noise that goes by these words: the same on every run, whatever else is drawn."""
    named = "/".join(str(word) for word in words)
    return np.random.default_rng(int.from_bytes(hashlib.sha256(named.encode()).digest()[:8], "big"))


@dataclass(frozen=True, slots=True)
class Change:
    """Something that happens on a day: a step by `amount`, or from then on by `amount` a year."""

    on: date
    amount: float
    is_yearly: bool = False
    until: date | None = None

    def at(self, day: date) -> float | None:
        """Return how much of it there is on a day; None before and after it."""
        if day < self.on or (self.until is not None and day >= self.until):
            return None
        return self.amount * (day - self.on).days / _DAYS_OF_YEAR if self.is_yearly else self.amount


def _found(changes: tuple[Change, ...], day: date) -> list[float]:
    return [amount for change in changes if (amount := change.at(day)) is not None]


@dataclass(frozen=True, slots=True)
class SupplyState:
    """A supply on one day: static at the base of riser, and the level of its tank if it has one."""

    static_psi: float
    tank_level_m: float | None = None


@dataclass(frozen=True, slots=True)
class TrueSupply:
    """A supply as it is: static at the base of riser and resistance up to the hose point."""

    static_psi: float
    resistance: float  # psi/gpm^1.85
    season_psi: float = 2.0
    day_psi: float = 2.5  # 1 sigma from day to day
    changes: tuple[Change, ...] = ()
    full_tank_m: float | None = None  # the static holds at this level; a tank stands up to 0.6 m below it

    def on(self, day: date, noise: np.random.Generator) -> SupplyState:
        """Return the supply as it is on a day."""
        season_psi = self.season_psi * math.cos(2 * math.pi * (day.timetuple().tm_yday - _HIGHEST_DAY) / _DAYS_OF_YEAR)
        static_psi = self.static_psi + season_psi + sum(_found(self.changes, day)) + noise.normal(0.0, self.day_psi)
        if self.full_tank_m is None:
            return SupplyState(float(static_psi))
        level_m = round(self.full_tank_m - float(noise.uniform(0.0, 0.6)), 1)
        return SupplyState(float(static_psi + elevation_pressure((level_m - self.full_tank_m) * _FT_IN_M)), level_m)


@dataclass(frozen=True, slots=True)
class TrueSystem:
    """A system's own feed and drain; a restriction multiplies the feed's resistance, an alteration the drain's K."""

    feed: float  # psi/gpm^1.85
    drain_k: float  # gpm/psi^0.5
    restrictions: tuple[Change, ...] = ()
    alterations: tuple[Change, ...] = ()

    def feed_on(self, day: date) -> float:
        """Return the resistance of the feed on a day, in psi/gpm^1.85."""
        return self.feed * math.prod(_found(self.restrictions, day))

    def drain_k_on(self, day: date) -> float:
        """Return the K of the drain on a day, in gpm/psi^0.5."""
        return self.drain_k * math.prod(_found(self.alterations, day))


@dataclass(frozen=True, slots=True)
class TrueGauge:
    """A gauge as it is: its bias, what happened to it, and how well it is read (1 sigma, psi)."""

    bias_psi: float = 0.0
    shifts: tuple[Change, ...] = ()
    reader_psi: float = 0.4

    def shows(self, pressure_psi: float, day: date, noise: np.random.Generator) -> float:
        """Return where the eye puts the needle, in psi, before it is rounded to a division."""
        moved_psi = self.bias_psi + sum(_found(self.shifts, day))
        return max(pressure_psi + moved_psi + float(noise.normal(0.0, self.reader_psi)), 0.0)


@dataclass(frozen=True, slots=True)
class Flowing:
    """What is so at the base of riser while a drain flows."""

    flow_gpm: float
    residual_psi: float


def drain_open(static_psi: float, resistance: float, drain_k: float, outlet_rise_ft: float = 0.0) -> Flowing:
    """Return flow and residual of a fully open drain: where the supply's curve and the orifice's meet.

    The outlet stands `outlet_rise_ft` above the base of riser, where static and residual hold.
    """
    rise_psi = float(elevation_pressure(outlet_rise_ft))

    def left_psi(flow_gpm: float) -> float:
        return float(static_psi - rise_psi - resistance * flow_gpm**FLOW_EXPONENT - (flow_gpm / drain_k) ** 2)

    most_gpm = drain_k * math.sqrt(static_psi - rise_psi)
    flow_gpm = float(brentq(left_psi, 0.0, most_gpm, xtol=1e-9))
    return Flowing(flow_gpm, (flow_gpm / drain_k) ** 2 + rise_psi)


def resistance_of(loss_psi: float, flow_gpm: float) -> float:
    """Return the resistance that loses so much at a flow, in psi/gpm^1.85."""
    return float(loss_psi / flow_gpm**FLOW_EXPONENT)


def left_at(static_psi: float, resistance: float, flow_gpm: float) -> float:
    """Return the pressure that is left at a flow, in psi."""
    return float(static_psi - resistance * flow_gpm**FLOW_EXPONENT)
