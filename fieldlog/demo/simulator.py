"""What gauges would have shown at an invented supply: seeded, pure, in psi and gpm.

A supply has a static that moves with season, day, decline and steps; a system adds the resistance of its own feed and
a drain that is an orifice; a gauge adds its bias, its division and the eye of the reader.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from datetime import date

import numpy as np
from scipy.optimize import brentq

from fieldlog.hydraulics.formulas import FLOW_EXPONENT


@dataclass(frozen=True, slots=True)
class Change:
    """Something that happens on a day: a step by `amount`, or from then on by `amount` a year."""

    on: date
    amount: float
    is_yearly: bool = False
    until: date | None = None

    def at(self, day: date) -> float:
        """Return how much of it there is on a day."""
        if day < self.on or (self.until is not None and day >= self.until):
            return 0.0
        return self.amount * (day - self.on).days / 365.25 if self.is_yearly else self.amount


@dataclass(frozen=True, slots=True)
class TrueSupply:
    """A supply as it is: static at the base of riser and resistance up to the hose point."""

    static_psi: float
    resistance: float  # psi/gpm^1.85
    season_psi: float = 1.5
    day_psi: float = 0.7
    changes: tuple[Change, ...] = ()

    def static_on(self, day: date, noise: np.random.Generator) -> float:
        """Return the static of a day, in psi; lowest in August."""
        season = self.season_psi * math.cos(2 * math.pi * (day.timetuple().tm_yday - 45) / 365.25)
        moved = sum(change.at(day) for change in self.changes)
        return self.static_psi + season + moved + float(noise.normal(0.0, self.day_psi))


@dataclass(frozen=True, slots=True)
class TrueSystem:
    """A system's own feed and drain; each change multiplies the feed's resistance by its amount."""

    feed: float  # psi/gpm^1.85
    drain_k: float
    restrictions: tuple[Change, ...] = ()
    drain_changes: tuple[Change, ...] = ()  # each multiplies the drain's K

    def resistance_on(self, day: date) -> float:
        """Return the resistance of the feed on a day."""
        factors = [change.at(day) for change in self.restrictions]
        return self.feed * math.prod(factor for factor in factors if factor > 0)

    def drain_k_on(self, day: date) -> float:
        """Return the K of the drain on a day."""
        factors = [change.at(day) for change in self.drain_changes]
        return self.drain_k * math.prod(factor for factor in factors if factor > 0)


@dataclass(frozen=True, slots=True)
class TrueGauge:
    """A gauge: the psi of its smallest division, its bias and what happened to it."""

    division_psi: float
    bias_psi: float = 0.0
    reader_psi: float = 0.3
    shifts: tuple[Change, ...] = ()

    def shows(self, pressure_psi: float, day: date, noise: np.random.Generator) -> float:
        """Return what a person notes, in psi: a multiple of the division."""
        moved = self.bias_psi + sum(shift.at(day) for shift in self.shifts)
        shown = pressure_psi + moved + float(noise.normal(0.0, self.reader_psi))
        return max(round(shown / self.division_psi), 0) * self.division_psi


@dataclass(frozen=True, slots=True)
class Flowing:
    """What is so while a drain flows."""

    flow_gpm: float
    residual_psi: float


def drain_open(static_psi: float, resistance: float, drain_k: float) -> Flowing:
    """Return flow and residual of a fully open drain: where supply curve and orifice meet."""

    def missing_psi(flow_gpm: float) -> float:
        return float(static_psi - resistance * flow_gpm**FLOW_EXPONENT - (flow_gpm / drain_k) ** 2)

    most_gpm = drain_k * math.sqrt(static_psi)
    flow_gpm = float(brentq(missing_psi, 0.0, most_gpm, xtol=1e-9))
    return Flowing(flow_gpm, (flow_gpm / drain_k) ** 2)


def resistance_of(loss_psi: float, flow_gpm: float) -> float:
    """Return the resistance that loses so much at a flow."""
    return float(loss_psi / flow_gpm**FLOW_EXPONENT)


def decimal_text(value: float, step: float) -> str:
    """Return a value in steps of a division as decimal text with the division's decimals."""
    decimals: int = max(-math.floor(math.log10(step) + 1e-9), 0)
    text: str = f"{round(value / step) * step:.{decimals}f}"
    return text
