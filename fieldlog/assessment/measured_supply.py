"""The measured supply at the recorded demand, and the margin above the required pressure, by kind of supply."""

from __future__ import annotations

import math
from dataclasses import dataclass, field, replace
from datetime import date

from fieldlog.assessment import constants
from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.windows import add_months
from fieldlog.hydraulics.formulas import elevation_pressure
from fieldlog.hydraulics.pipe import Pipe
from fieldlog.hydraulics.supply import LossCurve, PointCurve, SupplyCurve, drop_fraction
from fieldlog.records.history import (
    Design,
    FlowTest,
    ForwardFlowTest,
    PipeRun,
    SupplyHistory,
    System,
)
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
    unproven: tuple[Reason, ...] = ()
    not_comparable: tuple[Reason, ...] = ()
    notes: tuple[Reason, ...] = ()


@dataclass(slots=True)
class _Found:
    """What is gathered on the way to a margin."""

    notes: list[Reason] = field(default_factory=list)
    unproven: list[Reason] = field(default_factory=list)
    elevation_is_missing: bool = False


@dataclass(frozen=True, slots=True)
class Demand:
    """The recorded demand at the base of riser: flow in the riser, hose drawn upstream, pressure required."""

    flow_gpm: float
    outside_gpm: float
    required_psi: float
    without_inside_gpm: float  # where it is unknown whether the inside hose is in the figure


def measured_supply(
    history: SupplyHistory,
    system: System,
    profile: RuleProfile | None,
    as_of: date,
    tank_level_ft: float | None = None,
) -> Measured:
    """Return the margin at the recorded demand by the newest flow test, or why there is none.

    Parameters
    ----------
    history : SupplyHistory
        The supply and its flow tests [-].
    system : System
        The system with its design record, feed and forward-flow tests [-].
    profile : RuleProfile or None
        The rules: age of a flow test, margin [-].
    as_of : date
        The day judged [-].
    tank_level_ft : float, optional
        Level of a gravity tank at the newest drain test [ft].

    Returns
    -------
    Measured
        Margin and reasons [psi].

    References
    ----------
    DEVELOPERS.md, Method §2 and §8; NFPA 13 and NFPA 291 for the curve.
    """
    barred = _barred(history, as_of)
    if barred:
        return Measured(not_comparable=barred)
    demand = demand_of(system)
    if demand is None:
        return Measured(unproven=(_reason(ReasonCode.NO_DEMAND),))
    forward = _forward_flow(system, demand, as_of)
    flow_test = newest_flow_test(history, as_of)
    if forward is not None and (flow_test is None or forward.performed_on >= flow_test.performed_on):
        return _by_forward_flow(forward, demand, profile, as_of)
    if flow_test is None:
        return _by_design(system, demand, profile)
    measured = _by_flow_test(history, system, demand, flow_test, profile, tank_level_ft)
    return replace(
        measured, unproven=measured.unproven + _age(flow_test.performed_on, flow_test.entry, profile, as_of)
    )


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
    FlowTest or None
        The test [-].

    References
    ----------
    DEVELOPERS.md, Method §2.
    """
    is_pump = history.supply.kind == "fire_pump"
    tests = [
        test
        for test in history.flow_tests
        if test.performed_on <= as_of
        and (not is_pump or (test.pump_state == "running" and test.at == "test_header"))
    ]
    return tests[-1] if tests else None


def demand_of(system: System) -> Demand | None:
    """Return the recorded demand at the base of riser; None where none is recorded.

    Parameters
    ----------
    system : System
        The system with its design record [-].

    Returns
    -------
    Demand or None
        Flows [gpm] and required pressure [psi].

    References
    ----------
    NFPA 13, hydraulic design information sign; DEVELOPERS.md, Method §10.
    """
    design = system.design
    if design is None or design.demand_flow_gpm is None or design.demand_pressure_psi is None:
        return None
    recorded_gpm = design.demand_flow_gpm
    with_inside_gpm = (
        recorded_gpm if design.includes_inside_hose is True else recorded_gpm + design.hose_inside_gpm
    )
    return Demand(with_inside_gpm, design.hose_outside_gpm, _required_at_base(design, system), recorded_gpm)


def _required_at_base(design: Design, system: System) -> float:
    pressure_psi = design.demand_pressure_psi or 0.0
    if design.elevation_ft is None or system.base_elevation_ft is None:
        return pressure_psi
    return pressure_psi + float(elevation_pressure(design.elevation_ft - system.base_elevation_ft))


def _barred(history: SupplyHistory, as_of: date) -> tuple[Reason, ...]:
    supply = history.supply
    if supply.pressure_reducing_valve != "none":
        return (_reason(ReasonCode.BEHIND_REDUCING_VALVE, place=supply.pressure_reducing_valve),)
    if supply.kind in _WITHOUT_MARGIN:
        return (_reason(ReasonCode.KIND_WITHOUT_OWN_TEST, kind=supply.kind),)
    if supply.kind == "fire_pump" and newest_flow_test(history, as_of) is None:
        return (_reason(ReasonCode.KIND_WITHOUT_OWN_TEST, kind=supply.kind),)
    return ()


def _forward_flow(system: System, demand: Demand, as_of: date) -> ForwardFlowTest | None:
    found = [
        test
        for test in system.forward_flow_tests
        if test.performed_on <= as_of and test.riser_psi is not None and test.flow_gpm >= demand.flow_gpm
    ]
    return found[-1] if found else None


def _by_forward_flow(test: ForwardFlowTest, demand: Demand, profile: RuleProfile | None, as_of: date) -> Measured:
    found = _Found(unproven=list(_age(test.performed_on, test.entry, profile, as_of)))
    available_psi = test.riser_psi if test.riser_psi is not None else math.nan
    margin = _margin(available_psi, demand, profile, "forward-flow test", (test.entry,), found)
    return _measured(margin, None, None, found)


def _by_design(system: System, demand: Demand, profile: RuleProfile | None) -> Measured:
    found = _Found(unproven=[_reason(ReasonCode.NO_FLOW_TEST)])
    design = system.design
    curve = None if design is None else design_curve(design, system)
    if design is None or curve is None:
        return Measured(unproven=tuple(found.unproven))
    found.notes.append(_reason(ReasonCode.DESIGN_CURVE_ONLY, entries=(design.entry,)))
    available_psi = float(curve.available(demand.flow_gpm, demand.outside_gpm))
    if math.isnan(available_psi):
        return Measured(unproven=tuple(found.unproven), notes=tuple(found.notes))
    margin = _margin(available_psi, demand, profile, "design supply curve", (design.entry,), found)
    return _measured(margin, curve, None, found)


def design_curve(design: Design, system: System) -> SupplyCurve | None:
    """Return the supply curve the design record states, at the base of riser; None where it states none.

    Parameters
    ----------
    design : Design
        The design record [-].
    system : System
        Its system: feed and elevation [-].

    Returns
    -------
    SupplyCurve or None
        Curve [psi, gpm].

    References
    ----------
    NFPA 13, hydraulic design information sign.
    """
    static, residual, flow = design.supply_static_psi, design.supply_residual_psi, design.supply_flow_gpm
    if static is None or residual is None or flow is None or not (residual < static and flow > 0):
        return None
    curve = through_feed(SupplyCurve.from_flow_test(static, residual, flow), system)
    if design.supply_elevation_ft is not None and system.base_elevation_ft is not None:
        curve = curve.at_elevation(system.base_elevation_ft - design.supply_elevation_ft)
    return curve


def through_feed(curve: SupplyCurve, system: System) -> SupplyCurve:
    """Return the curve behind the system's own feed, from the hose point to the base of riser.

    Parameters
    ----------
    curve : SupplyCurve
        Curve at the hose point [psi, gpm].
    system : System
        The system whose feed it passes [-].

    Returns
    -------
    SupplyCurve
        Curve at the base of riser [psi, gpm].

    References
    ----------
    DEVELOPERS.md, Method §2: two segments.
    """
    for part in system.feed:
        if isinstance(part, PipeRun):
            curve = curve.through(
                Pipe(part.length_ft, part.inside_diameter_in, part.c, part.fittings, part.nominal_in)
            )
        elif part.points:
            curve = curve.with_loss(LossCurve(part.points))
    return curve


def _by_flow_test(
    history: SupplyHistory,
    system: System,
    demand: Demand,
    test: FlowTest,
    profile: RuleProfile | None,
    tank_level_ft: float | None,
) -> Measured:
    found = _Found()
    curve = _curve_at_base(history, system, test, found)
    if curve is None:
        return _measured(None, None, test, found)
    available_psi = float(curve.available(demand.flow_gpm, demand.outside_gpm))
    available_psi += _tank_correction(history, tank_level_ft, found)
    if math.isnan(available_psi):
        found.unproven.append(
            _reason(ReasonCode.DEMAND_BEYOND_POINTS, demand_gpm=demand.flow_gpm + demand.outside_gpm)
        )
        return _measured(None, curve, test, found)
    _note_extrapolation(found, test, demand)
    if any(reason.code == ReasonCode.FLOW_TEST_DROP_SMALL for reason in found.unproven):
        return _measured(None, curve, test, found)
    _note_inside_hose(found, curve, demand, system)
    basis = "pump test" if history.supply.kind == "fire_pump" else "flow test"
    margin = _margin(available_psi, demand, profile, basis, (test.entry,), found)
    return _measured(margin, curve, test, found)


def _curve_at_base(
    history: SupplyHistory, system: System, test: FlowTest, found: _Found
) -> SupplyCurve | PointCurve | None:
    if not all(residual < test.static_psi and flow > 0 for flow, residual in test.points):
        found.unproven.append(_reason(ReasonCode.NO_FLOW_TEST, entries=(test.entry,)))
        return None
    rise_ft = _rise_ft(system, test, found)
    if history.supply.kind == "fire_pump":
        return PointCurve(((0.0, test.static_psi), *test.points)).at_elevation(rise_ft)
    curve = SupplyCurve.from_points(test.static_psi, test.points).at_elevation(rise_ft)
    if test.at in {"base_of_riser", "test_header"}:
        return _split_at_hose_point(curve, system, found)
    if not system.feed:
        found.unproven.append(_reason(ReasonCode.FEED_NOT_RECORDED, entries=(test.entry,), at=test.at))
        return None
    return through_feed(curve, system)


def _split_at_hose_point(curve: SupplyCurve, system: System, found: _Found) -> SupplyCurve:
    """Return a curve measured at the base of riser in its two segments, as far as the feed is on record."""
    path = through_feed(SupplyCurve(curve.static_psi, 0.0), system)
    if not path.losses and 0 < path.a_path < curve.a_source:
        return SupplyCurve(curve.static_psi, curve.a_source - path.a_path, path.a_path)
    hose_gpm = 0.0 if system.design is None else system.design.hose_outside_gpm
    if hose_gpm > 0:
        found.notes.append(_reason(ReasonCode.HOSE_THROUGH_ALL, hose_outside_gpm=hose_gpm))
    return curve


def _rise_ft(system: System, test: FlowTest, found: _Found) -> float:
    if system.base_elevation_ft is not None and test.elevation_ft is not None:
        return system.base_elevation_ft - test.elevation_ft
    if test.at == "base_of_riser":
        return 0.0
    found.elevation_is_missing = True
    of = "base of riser" if system.base_elevation_ft is None else "flow test"
    numbers: dict[str, Number] = {"of": of, "sigma_psi": constants.UNKNOWN_ELEVATION_PSI}
    found.notes.append(Reason(ReasonCode.ELEVATION_MISSING, numbers, (test.entry,), "1"))
    return 0.0


def _tank_correction(history: SupplyHistory, level_ft: float | None, found: _Found) -> float:
    reference_ft = history.supply.tank_level_reference_ft
    if history.supply.kind != "gravity_tank" or level_ft is None or reference_ft is None:
        return 0.0
    correction_psi = float(elevation_pressure(level_ft - reference_ft))
    found.notes.append(_reason(ReasonCode.TANK_LEVEL_CORRECTED, correction_psi=correction_psi))
    return correction_psi


def _age(performed_on: date, entry: int, profile: RuleProfile | None, as_of: date) -> tuple[Reason, ...]:
    months = None if profile is None else profile.flow_test_valid_months()
    if months is None or as_of <= add_months(performed_on, months):
        return ()
    when = performed_on.isoformat()
    return (_reason(ReasonCode.FLOW_TEST_OLD, entries=(entry,), performed_on=when, months=months),)


def _note_extrapolation(found: _Found, test: FlowTest, demand: Demand) -> None:
    tested_gpm = max(flow for flow, _ in test.points)
    wanted_gpm = demand.flow_gpm + demand.outside_gpm
    if wanted_gpm <= tested_gpm:
        return
    drop = max(drop_fraction(test.static_psi, residual) for _, residual in test.points)
    if drop < constants.LEAST_DROP_SHARE:
        numbers: dict[str, Number] = {"drop": drop, "tested_gpm": tested_gpm}
        found.unproven.append(Reason(ReasonCode.FLOW_TEST_DROP_SMALL, numbers, (test.entry,), _SECTION))
    else:
        numbers = {"tested_gpm": tested_gpm, "demand_gpm": wanted_gpm}
        found.notes.append(Reason(ReasonCode.EXTRAPOLATED, numbers, (test.entry,), _SECTION))


def _note_inside_hose(found: _Found, curve: SupplyCurve | PointCurve, demand: Demand, system: System) -> None:
    design = system.design
    if design is None or design.includes_inside_hose is not None or demand.flow_gpm == demand.without_inside_gpm:
        return
    margins = [
        float(curve.available(flow_gpm, demand.outside_gpm)) - demand.required_psi
        for flow_gpm in (demand.without_inside_gpm, demand.flow_gpm)
    ]
    numbers: dict[str, Number] = {
        "margin_without_psi": margins[0],
        "margin_with_psi": margins[1],
        "hose_inside_gpm": design.hose_inside_gpm,
    }
    found.notes.append(Reason(ReasonCode.INSIDE_HOSE_UNKNOWN, numbers, (design.entry,), "10"))


def _margin(
    available_psi: float,
    demand: Demand,
    profile: RuleProfile | None,
    basis: str,
    entries: tuple[int, ...],
    found: _Found,
) -> Margin:
    half_psi = constants.MARGIN_BAND_PSI
    if found.elevation_is_missing:
        half_psi = math.hypot(half_psi, constants.NORMAL_90 * constants.UNKNOWN_ELEVATION_PSI)
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


def _measured(
    margin: Margin | None, curve: SupplyCurve | PointCurve | None, test: FlowTest | None, found: _Found
) -> Measured:
    return Measured(margin, curve, test, tuple(found.unproven), (), tuple(found.notes))


def _reason(code: ReasonCode, entries: tuple[int, ...] = (), **numbers: Number) -> Reason:
    return Reason(code, numbers, entries, _SECTION)
