"""Questions about odd readings: asked once, the answer kept; they never block."""

from __future__ import annotations

import dataclasses
from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

from fieldlog.procedures.fields import PressureReading
from fieldlog.procedures.main_drain_test import MainDrainTest

# The ratios that a slip of unit leaves: bar for psi, kPa for psi, L/min for gpm; each within eight percent.
_SLIPS = {"psi and bar": 14.504, "kPa and psi": 6.895, "L/min and gpm": 3.785, "kPa and bar": 100.0}
_NEAR = 0.08


@dataclass(frozen=True, slots=True)
class Question:
    """One question: about which field, which kind, and the numbers to show."""

    field: str
    code: str
    shown: Mapping[str, str] = dataclasses.field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class Earlier:
    """What is known when a test is entered: last and acceptance values in psi, and each gauge's range in psi."""

    values_psi: Mapping[str, tuple[float, ...]] = dataclasses.field(default_factory=dict)  # by field of the body
    ranges_psi: Mapping[str, float] = dataclasses.field(default_factory=dict)  # by gauge


def drain_test_questions(body: MainDrainTest, earlier: Earlier) -> list[Question]:
    """Return what is worth asking about a main drain test before it is saved."""
    readings = {
        name: read
        for name in ("static_before", "residual", "static_after", "system_side_before")
        if (read := getattr(body, name)) is not None
    }
    found = [one for name, read in readings.items() for one in _about(name, read, earlier)]
    found += _about_order(readings)
    if body.fully_open is False or body.took_full_flow is False:
        found.append(Question("fully_open" if body.fully_open is False else "took_full_flow", "not_comparable"))
    return found


def _about(name: str, read: PressureReading, earlier: Earlier) -> list[Question]:
    found = []
    full_scale = earlier.ranges_psi.get(read.gauge or "")
    if full_scale is not None and read.psi > full_scale:
        found.append(Question(name, "above_range", {"range_psi": f"{full_scale:g}"}))
    if read.exact() < 0:
        found.append(Question(name, "below_zero"))
    for past in earlier.values_psi.get(name, ()):
        slip = _slip(read.psi, past)
        if slip is not None:
            found.append(Question(name, "unit_slip", {"between": slip, "earlier_psi": f"{past:g}"}))
            break
    return found


def _about_order(readings: Mapping[str, PressureReading]) -> list[Question]:
    found = []
    before, residual, after = (readings.get(name) for name in ("static_before", "residual", "static_after"))
    if before is not None and residual is not None and residual.exact() > before.exact():
        found.append(Question("residual", "residual_above_static"))
    if before is not None and after is not None and after.exact() < before.exact() * Fraction(9, 10):
        found.append(Question("static_after", "static_after_below_before"))
    system_side = readings.get("system_side_before")
    if before is not None and system_side is not None and system_side.psi > 175:  # usual relief setting, from memory
        found.append(Question("system_side_before", "above_relief_setting"))
    return found


def _slip(now_psi: float, past_psi: float) -> str | None:
    if now_psi <= 0 or past_psi <= 0:
        return None
    ratio = max(now_psi / past_psi, past_psi / now_psi)
    return next((name for name, size in _SLIPS.items() if abs(ratio / size - 1) < _NEAR), None)
