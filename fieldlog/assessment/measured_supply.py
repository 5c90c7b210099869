"""The measured supply at the recorded demand, and the margin above the required pressure, by kind of supply."""

from __future__ import annotations

import math
from dataclasses import dataclass
from datetime import date

from fieldlog.assessment import constants
from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.curve_at_base import BaseCurve, by_design, by_flow_test, by_stated_points
from fieldlog.assessment.windows import add_months
from fieldlog.hydraulics.formulas import elevation_pressure
from fieldlog.hydraulics.supply import PointCurve, SupplyCurve, drop_fraction
from fieldlog.records.history import Design, FlowTest, ForwardFlowTest, SupplyHistory, System
from fieldlog.records.rules import RuleProfile
from fieldlog.records.statement import Margin, Number, Reason

_SECTION = "2"
_WITHOUT_MARGIN = {"pressure_tank", "parallel"}


@dataclass(frozen=True, slots=True)
class Measured:
    """The margin, what it rests on, and why there is none or why it proves nothing."""

    margin: Margin | None = None
    curve: SupplyCurve | PointCurve | None = None
    flow_test: FlowTest | None = None
    below: tuple[Reason, ...] = ()  # short of the demand although no margin is given
    unproven: tuple[Reason, ...] = ()
    not_comparable: tuple[Reason, ...] = ()
    notes: tuple[Reason, ...] = ()


@dataclass(frozen=True, slots=True)
class Demand:
    """The recorded demand at the base of riser: flow in the riser, hose drawn upstream, pressure required."""

    flow_gpm: float
    outside_gpm: float
    required_psi: float
    without_inside_gpm: float  # where it is unknown whether the inside hose is in the figure


@dataclass(frozen=True, slots=True)
class _Asked:
    """Whose margin is asked for, when, and by which rules."""

    history: SupplyHistory
    system: System
    demand: Demand
    profile: RuleProfile | None
    as_of: date


def measured_supply(history: SupplyHistory, system: System, profile: RuleProfile | None, as_of: date) -> Measured:
    """Return the margin at the recorded demand by the newest flow test, or why there is none.

    Parameters
    ----------
    history : SupplyHistory
        The supply and its flow tests [-].
    system : System
        The system with its design record, feed and forward-flow tests [-].
    profile : RuleProfile | None
        The rules: age of a flow test, margin [-].
    as_of : date
        The day judged [-].

    Returns
    -------
    Measured
        Margin and reasons [psi].

    References
    ----------
    DEVELOPERS.md, Method §2 and §8; NFPA 13 and NFPA 291 for the curve.
    """
    demand = demand_of(system)
    barred = _barred(history, as_of)
    if barred is not None:
        return _without_margin(barred, None if demand is None else _forward_flow(system, demand, as_of), demand)
    if demand is None:
        return Measured(unproven=(_reason(ReasonCode.NO_DEMAND),))
    asked = _Asked(history, system, demand, profile, as_of)
    forward = _forward_flow(system, demand, as_of)
    flow_test = newest_flow_test(history, as_of)
    if forward is not None and (flow_test is None or forward.performed_on >= flow_test.performed_on):
        return _by_forward_flow(asked, forward)
    return _without_test(asked) if flow_test is None else _by_flow_test(asked, flow_test)


def newest_flow_test(history: SupplyHistory, as_of: date) -> FlowTest | None:
    """Return the newest flow test of the supply up to a day; of a fire pump only one with the pump running.

    Parameters
    ----------
    history : SupplyHistory
        The supply [-].
    as_of : date
        The day judged [-].

    Returns
    -------
    FlowTest | None
        The test [-].

    References
    ----------
    DEVELOPERS.md, Method §2.
    """
    is_pump = history.supply.kind == "fire_pump"
    tests = [
        test
        for test in history.flow_tests
        if test.performed_on <= as_of and (not is_pump or (test.pump_state == "running" and test.at == "test_header"))
    ]
    return max(tests, key=lambda test: (test.performed_on, test.entry), default=None)


def demand_of(system: System) -> Demand | None:
    """Return the recorded demand at the base of riser; None where none that can be is recorded.

    Parameters
    ----------
    system : System
        The system with its design record [-].

    Returns
    -------
    Demand | None
        Flows [gpm] and required pressure [psi].

    References
    ----------
    NFPA 13, hydraulic design information sign; DEVELOPERS.md, Method §10.
    """
    design = system.design
    if design is None or design.demand_flow_gpm is None or design.demand_pressure_psi is None:
        return None
    recorded_gpm = design.demand_flow_gpm
    if not (recorded_gpm > 0 and design.hose_outside_gpm >= 0 and design.hose_inside_gpm >= 0):
        return None
    with_inside_gpm = recorded_gpm if design.includes_inside_hose is True else recorded_gpm + design.hose_inside_gpm
    return Demand(with_inside_gpm, design.hose_outside_gpm, _required_at_base(design, system), recorded_gpm)


def _required_at_base(design: Design, system: System) -> float:
    pressure_psi = design.demand_pressure_psi or 0.0
    if design.elevation_ft is None or system.base_elevation_ft is None:
        return pressure_psi
    return pressure_psi + float(elevation_pressure(design.elevation_ft - system.base_elevation_ft))


def _barred(history: SupplyHistory, as_of: date) -> Reason | None:
    """Return why no margin is ever given on this supply as it stands."""
    supply = history.supply
    if supply.pressure_reducing_valve != "none":
        return _reason(ReasonCode.BEHIND_REDUCING_VALVE, (supply.entry,), place=supply.pressure_reducing_valve)
    is_pump_untested = (
        supply.kind == "fire_pump"
        and newest_flow_test(history, as_of) is None
        and by_stated_points(supply).curve is None
    )
    if supply.kind in _WITHOUT_MARGIN or is_pump_untested:
        return _reason(ReasonCode.KIND_WITHOUT_OWN_TEST, (supply.entry,), kind=supply.kind)
    return None


def _without_margin(barred: Reason, forward: ForwardFlowTest | None, demand: Demand | None) -> Measured:
    """Return what a supply without a margin shows: a forward-flow test at demand is its own test."""
    if forward is None or forward.riser_psi is None or demand is None:
        return Measured(not_comparable=(barred,))
    if forward.riser_psi < demand.required_psi:
        numbers: dict[str, Number] = {
            "riser_psi": forward.riser_psi,
            "required_psi": demand.required_psi,
            "flow_gpm": forward.flow_gpm,
            "performed_on": forward.performed_on.isoformat(),
        }
        short = Reason(ReasonCode.FORWARD_FLOW_SHORT, numbers, (forward.entry,), "11")
        return Measured(below=(short,), unproven=(barred,))
    kind = str(barred.numbers.get("kind", "reducing valve"))
    own = _reason(ReasonCode.NO_MARGIN_OF_KIND, (forward.entry,), kind=kind)
    return Measured(unproven=(own,))


def _forward_flow(system: System, demand: Demand, as_of: date) -> ForwardFlowTest | None:
    """Return the newest forward-flow test at or above the demand, with the pressure at the riser."""
    found = [
        test
        for test in system.forward_flow_tests
        if test.performed_on <= as_of and test.riser_psi is not None and test.flow_gpm >= demand.flow_gpm
    ]
    return max(found, key=lambda test: (test.performed_on, test.entry), default=None)


def _by_forward_flow(asked: _Asked, test: ForwardFlowTest) -> Measured:
    old, notes = _age(asked, test.performed_on, test.entry)
    available_psi = math.nan if test.riser_psi is None else test.riser_psi
    margin = _margin(asked, available_psi, "forward-flow test", (test.entry,), constants.MARGIN_BAND_PSI)
    return Measured(margin, unproven=old, notes=notes)


def _without_test(asked: _Asked) -> Measured:
    """Return the margin by stated points of a pump or by the design's curve: never proven."""
    missing = (_reason(ReasonCode.NO_FLOW_TEST),)
    supply, design = asked.history.supply, asked.system.design
    if supply.kind == "fire_pump":
        base, basis, entry, half_psi = by_stated_points(supply), "stated points", supply.entry, 0.0
        notes: tuple[Reason, ...] = ()
    elif design is not None:
        base, basis, entry = by_design(asked.system, design), "design supply curve", design.entry
        half_psi = constants.DESIGN_BAND_PSI
        notes = (_reason(ReasonCode.DESIGN_CURVE_ONLY, (design.entry,)),) if base.curve is not None else ()
    else:
        return Measured(unproven=missing)
    unproven = (*missing, *base.unproven)
    if base.curve is None:
        return Measured(unproven=unproven, notes=base.notes)
    available_psi = _available_psi(base.curve, asked.demand)
    if math.isnan(available_psi):
        return Measured(curve=base.curve, unproven=(*unproven, _beyond(asked.demand)), notes=(*notes, *base.notes))
    half_psi = _half_psi(base, max(half_psi, constants.MARGIN_BAND_PSI))
    margin = _margin(asked, available_psi, basis, (entry,), half_psi)
    inside = _inside_hose_notes(asked, base.curve)
    return Measured(margin, base.curve, unproven=unproven, notes=(*notes, *base.notes, *inside))


def _by_flow_test(asked: _Asked, test: FlowTest) -> Measured:
    old, notes = _age(asked, test.performed_on, test.entry)
    base = by_flow_test(asked.history.supply, asked.system, test)
    notes, unproven = (*notes, *base.notes), (*old, *base.unproven)
    if base.curve is None:
        return Measured(flow_test=test, below=_below_before_feed(asked, base, test), unproven=unproven, notes=notes)
    available_psi = _available_psi(base.curve, asked.demand)
    if math.isnan(available_psi):
        return Measured(None, base.curve, test, unproven=(*unproven, _beyond(asked.demand)), notes=notes)
    small_drop, extrapolated = _extrapolation(asked, test)
    notes = (*notes, *extrapolated, *_inside_hose_notes(asked, base.curve))
    if small_drop:
        return Measured(None, base.curve, test, unproven=(*unproven, *small_drop), notes=notes)
    basis = "pump test" if asked.history.supply.kind == "fire_pump" else "flow test"
    margin = _margin(asked, available_psi, basis, (test.entry,), _half_psi(base, constants.MARGIN_BAND_PSI))
    return Measured(margin, base.curve, test, unproven=unproven, notes=notes)


def _below_before_feed(asked: _Asked, base: BaseCurve, test: FlowTest) -> tuple[Reason, ...]:
    """Return that even without the losses of a feed that is not on record too little would be left."""
    if base.before_feed is None:
        return ()
    available_psi = _available_psi(base.before_feed, asked.demand)
    if not available_psi < asked.demand.required_psi:
        return ()
    numbers: dict[str, Number] = {
        "margin_psi": available_psi - asked.demand.required_psi,
        "available_psi": available_psi,
        "required_psi": asked.demand.required_psi,
        "demand_flow_gpm": asked.demand.flow_gpm,
    }
    return (Reason(ReasonCode.BELOW_DEMAND, numbers, (test.entry,), "8"),)


def _available_psi(curve: SupplyCurve | PointCurve, demand: Demand) -> float:
    return float(curve.available(demand.flow_gpm, demand.outside_gpm))


def _beyond(demand: Demand) -> Reason:
    return _reason(ReasonCode.DEMAND_BEYOND_POINTS, demand_gpm=demand.flow_gpm + demand.outside_gpm)


def _age(asked: _Asked, performed_on: date, entry: int) -> tuple[tuple[Reason, ...], tuple[Reason, ...]]:
    """Return that the test is older than the rule allows; or, beside it, that no rule says how old it may be."""
    if asked.profile is None:
        return (), ()
    on, months = performed_on.isoformat(), asked.profile.flow_test_valid_months()
    if months is None:
        return (), (_reason(ReasonCode.FLOW_TEST_AGE_NOT_RULED, (entry,), performed_on=on),)
    if asked.as_of <= add_months(performed_on, months):
        return (), ()
    return (_reason(ReasonCode.FLOW_TEST_OLD, (entry,), performed_on=on, months=months),), ()


def _extrapolation(asked: _Asked, test: FlowTest) -> tuple[tuple[Reason, ...], tuple[Reason, ...]]:
    """Return that the drop was too small to go beyond the tested flow; or, beside it, that it was gone beyond."""
    tested_gpm = max(flow for flow, _ in test.points)
    wanted_gpm = asked.demand.flow_gpm + asked.demand.outside_gpm
    if wanted_gpm <= tested_gpm:
        return (), ()
    drop = max(drop_fraction(test.static_psi, residual) for _, residual in test.points)
    if drop < constants.LEAST_DROP_SHARE:
        numbers: dict[str, Number] = {"drop": drop, "tested_gpm": tested_gpm}
        return (Reason(ReasonCode.FLOW_TEST_DROP_SMALL, numbers, (test.entry,), _SECTION),), ()
    numbers = {"tested_gpm": tested_gpm, "demand_gpm": wanted_gpm}
    return (), (Reason(ReasonCode.EXTRAPOLATED, numbers, (test.entry,), _SECTION),)


def _inside_hose_notes(asked: _Asked, curve: SupplyCurve | PointCurve) -> tuple[Reason, ...]:
    design, demand = asked.system.design, asked.demand
    if design is None or design.includes_inside_hose is not None or demand.flow_gpm == demand.without_inside_gpm:
        return ()
    margins = [
        float(curve.available(flow_gpm, demand.outside_gpm)) - demand.required_psi
        for flow_gpm in (demand.without_inside_gpm, demand.flow_gpm)
    ]
    numbers: dict[str, Number] = {
        "margin_without_psi": margins[0],
        "margin_with_psi": margins[1],
        "hose_inside_gpm": design.hose_inside_gpm,
    }
    return (Reason(ReasonCode.INSIDE_HOSE_UNKNOWN, numbers, (design.entry,), "10"),)


def _half_psi(base: BaseCurve, half_psi: float) -> float:
    if not base.elevation_is_missing:
        return half_psi
    return math.hypot(half_psi, constants.NORMAL_90 * constants.UNKNOWN_ELEVATION_PSI)


def _margin(asked: _Asked, available_psi: float, basis: str, entries: tuple[int, ...], half_psi: float) -> Margin:
    demand, profile = asked.demand, asked.profile
    median_psi = available_psi - demand.required_psi
    rule_psi = 0.0 if profile is None else profile.margin_psi(demand.required_psi, available_psi)
    return Margin(
        median_psi=median_psi,
        low_psi=median_psi - half_psi,
        high_psi=median_psi + half_psi,
        rule_margin_psi=rule_psi,
        demand_flow_gpm=demand.flow_gpm,
        required_psi=demand.required_psi,
        basis=basis,
        entries=entries,
    )


def _reason(code: ReasonCode, entries: tuple[int, ...] = (), **numbers: Number) -> Reason:
    return Reason(code, numbers, entries, _SECTION)
