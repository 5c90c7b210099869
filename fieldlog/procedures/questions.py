"""Questions about odd readings: asked once, the answer kept; they never block.

What can't be an honest record is refused by the types and their checks. What is merely odd is asked about here: a
slip of unit, a reading above its gauge's range, a residual above the static, a date ahead of the day.
"""

from __future__ import annotations

import dataclasses
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from datetime import date, timedelta
from fractions import Fraction
from typing import Any

import msgspec

from fieldlog.errors import OutOfRangeError
from fieldlog.hydraulics.pipe import fitting_length, nearest_nominal
from fieldlog.procedures.any_test import AnyTest
from fieldlog.procedures.fields import PressureReading
from fieldlog.procedures.flow_test import FlowTest
from fieldlog.procedures.inspectors_test import InspectorsTest
from fieldlog.procedures.main_drain_test import MainDrainTest
from fieldlog.procedures.system import System
from fieldlog.units import Flow

# The ratios that a slip of unit leaves: bar for psi, kPa for psi, L/min for gpm; each within eight percent.
_PRESSURE_SLIPS = {"psi and bar": 14.504, "kPa and psi": 6.895, "kPa and bar": 100.0}
_FLOW_SLIPS = {"L/min and gpm": 3.785}
_NEAR = 0.08
_RELIEF_PSI = 175  # usual setting of a wet system's relief valve, from memory
_FAR_ABOVE_PSI = 50  # our own: a system side so far above the supply is trapped pressure
_LONG_AGO = timedelta(days=366)


@dataclass(frozen=True, slots=True)
class Question:
    """One question: about which field, which kind, and the numbers to show."""

    field: str
    code: str
    shown: Mapping[str, str] = dataclasses.field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class Earlier:
    """What is known when something is entered: the day, and last and acceptance values.

    `values_psi` and `values_gpm` go by the dotted path of a field; routine readings by the uid of their gauge.
    """

    values_psi: Mapping[str, tuple[float, ...]] = dataclasses.field(default_factory=dict)
    values_gpm: Mapping[str, tuple[float, ...]] = dataclasses.field(default_factory=dict)
    ranges_psi: Mapping[str, float] = dataclasses.field(default_factory=dict)  # by gauge
    today: date | None = None


def questions(body: msgspec.Struct, earlier: Earlier) -> list[Question]:
    """Return what is worth asking about a body before it is saved."""
    found = [one for path, part in _quantities(body, "") for one in _about_quantity(path, part, earlier)]
    for kind, about in _ABOUT.items():
        if isinstance(body, kind):
            found += about(body, earlier)
    return found


def _quantities(part: Any, before: str) -> Iterator[tuple[str, PressureReading | Flow]]:  # noqa: ANN401  any value
    if isinstance(part, PressureReading | Flow):
        yield before, part
    elif isinstance(part, tuple):
        for index, inner in enumerate(part):
            yield from _quantities(inner, f"{before}[{index}]")
    elif isinstance(part, msgspec.Struct):
        for info in msgspec.structs.fields(part):
            path = f"{before}.{info.encode_name}" if before else info.encode_name
            yield from _quantities(getattr(part, info.name), path)


def _about_quantity(path: str, part: PressureReading | Flow, earlier: Earlier) -> Iterator[Question]:
    if isinstance(part, Flow):
        for slip, past_gpm in _slips(part.gpm, earlier.values_gpm.get(path, ()), _FLOW_SLIPS):
            yield Question(path, "flow_unit_slip", {"between": slip, "earlier_gpm": f"{past_gpm:g}"})
        return
    full_scale = earlier.ranges_psi.get(part.gauge or "")
    if full_scale is not None and part.psi > full_scale:
        yield Question(path, "above_range", {"range_psi": f"{full_scale:g}"})
    if part.exact() < 0:
        yield Question(path, "below_zero")
    if _is_outside_swing(part):
        yield Question(path, "outside_swing")
    past = earlier.values_psi.get(path) or earlier.values_psi.get(part.gauge or "", ())
    for slip, past_psi in _slips(part.psi, past, _PRESSURE_SLIPS):
        yield Question(path, "unit_slip", {"between": slip, "earlier_psi": f"{past_psi:g}"})


def _is_outside_swing(read: PressureReading) -> bool:
    value = Fraction(read.value)
    is_below = read.low is not None and value < Fraction(read.low)
    return is_below or (read.high is not None and value > Fraction(read.high))


def _slips(now: float, past: tuple[float, ...], sizes: Mapping[str, float]) -> list[tuple[str, float]]:
    """Return between which units a slip would explain the value, and against which earlier one; the first found."""
    for value in past:
        if now > 0 and value > 0:
            ratio = max(now / value, value / now)
            near = [name for name, size in sizes.items() if abs(ratio / size - 1) < _NEAR]
            if near:
                return [(near[0], value)]
    return []


def _about_any_test(body: AnyTest, earlier: Earlier) -> Iterator[Question]:
    if body.start is not None and body.end is not None and body.end < body.start:
        yield Question("end", "end_before_start")
    if earlier.today is None:
        return
    if body.performed_on > earlier.today:
        yield Question("performed_on", "date_ahead")
    elif earlier.today - body.performed_on > _LONG_AGO:
        yield Question("performed_on", "date_long_ago")


def _about_drain_test(body: MainDrainTest, _earlier: Earlier) -> Iterator[Question]:
    before, after, side = body.static_before, body.static_after, body.system_side_before
    yield from _about_rise(before, body.residual, "residual")
    if before is not None and after is not None and after.exact() < before.exact() * Fraction(9, 10):
        yield Question("static_after", "static_after_below_before")
    if side is not None and side.psi > _RELIEF_PSI:
        yield Question("system_side_before", "above_relief_setting")
    elif before is not None and side is not None and side.psi > before.psi + _FAR_ABOVE_PSI:
        yield Question("system_side_before", "system_side_far_above")
    for name in ("fully_open", "took_full_flow"):
        if getattr(body, name) is False:
            yield Question(name, "not_comparable")
    if body.did_not_recover and body.return_seconds is not None:
        yield Question("return_seconds", "returned_and_did_not")


def _about_flow_test(body: FlowTest, _earlier: Earlier) -> Iterator[Question]:
    for index, point in enumerate(body.points):
        yield from _about_rise(body.static, point.residual, f"points[{index}].residual")


def _about_inspectors_test(body: InspectorsTest, _earlier: Earlier) -> Iterator[Question]:
    yield from _about_rise(body.static, body.flowing, "flowing")


def _about_rise(static: PressureReading | None, residual: PressureReading | None, field: str) -> Iterator[Question]:
    if static is not None and residual is not None and residual.exact() > static.exact():
        yield Question(field, "residual_above_static")


def _about_system(body: System, _earlier: Earlier) -> Iterator[Question]:
    for index, part in enumerate(body.feed):
        for name in part.fittings:
            if part.inside_diameter is not None and not _is_listed(name, part.nominal, part.inside_diameter.inches):
                yield Question(f"feed[{index}].fittings", "fitting_not_listed", {"fitting": name})


def _is_listed(fitting: str, nominal: str | None, inside_diameter_in: float) -> bool:
    try:
        fitting_length(fitting, nominal or nearest_nominal(inside_diameter_in))
    except OutOfRangeError:
        return False
    return True


_ABOUT: Mapping[type[msgspec.Struct], Callable[[Any, Earlier], Iterator[Question]]] = {
    AnyTest: _about_any_test,
    MainDrainTest: _about_drain_test,
    FlowTest: _about_flow_test,
    InspectorsTest: _about_inspectors_test,
    System: _about_system,
}
