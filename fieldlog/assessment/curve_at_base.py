"""Supply curves brought to the base of riser: from a flow test, from the design record, from stated points."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from statistics import fmean

from fieldlog.assessment import constants
from fieldlog.assessment.codes import ReasonCode
from fieldlog.errors import OutOfRangeError
from fieldlog.hydraulics.pipe import Pipe
from fieldlog.hydraulics.supply import LossCurve, PointCurve, SupplyCurve
from fieldlog.records.history import Design, FlowTest, PipeRun, Supply, System
from fieldlog.records.statement import Number, Reason

_SECTION = "2"


@dataclass(frozen=True, slots=True)
class BaseCurve:
    """A curve at the base of riser, or why there is none; `before_feed` where only the feed is missing."""

    curve: SupplyCurve | PointCurve | None = None
    before_feed: SupplyCurve | None = None
    unproven: tuple[Reason, ...] = ()
    notes: tuple[Reason, ...] = ()
    elevation_is_missing: bool = False


def by_flow_test(supply: Supply, system: System, test: FlowTest) -> BaseCurve:
    """Return the curve that a flow test gives at the base of riser.

    Parameters
    ----------
    supply : Supply
        The supply: of a fire pump the points are interpolated, not a power of the flow [-].
    system : System
        The system with its feed and elevation [-].
    test : FlowTest
        The test [-].

    Returns
    -------
    BaseCurve
        Curve [psi, gpm].

    References
    ----------
    NFPA 291; DEVELOPERS.md, Method §2.
    """
    points = _one_a_flow(test.points)
    is_usable = test.static_psi > 0 and all(residual < test.static_psi and flow > 0 for flow, residual in points)
    if not points or not is_usable:
        return BaseCurve(unproven=(unusable("flow test", test.entry),))
    rise_ft, missing = _rise_ft(system, test)
    if supply.kind == "fire_pump":
        curve = PointCurve(((0.0, test.static_psi), *points)).at_elevation(rise_ft)
        return BaseCurve(curve, notes=missing, elevation_is_missing=bool(missing))
    source = SupplyCurve.from_points(test.static_psi, points).at_elevation(rise_ft)
    if test.at not in {"base_of_riser", "test_header"} and not system.feed:
        reason = Reason(ReasonCode.FEED_NOT_RECORDED, {"at": test.at}, (test.entry,), _SECTION)
        return BaseCurve(None, source, (reason,), missing, bool(missing))
    try:
        if test.at in {"base_of_riser", "test_header"}:
            at_base, through_all = _split_at_hose_point(source, system)
        else:
            at_base, through_all = through_feed(source, system), ()
    except OutOfRangeError:
        return BaseCurve(unproven=(unusable("feed", system.entry),), notes=missing)
    return BaseCurve(at_base, notes=(*missing, *through_all), elevation_is_missing=bool(missing))


def by_design(system: System, design: Design) -> BaseCurve:
    """Return the curve that the design record states, at the base of riser.

    Parameters
    ----------
    system : System
        The system with its feed and elevation [-].
    design : Design
        The record [-].

    Returns
    -------
    BaseCurve
        Curve [psi, gpm]; none where the record states none.

    References
    ----------
    NFPA 13, hydraulic design information sign.
    """
    static, residual, flow = design.supply_static_psi, design.supply_residual_psi, design.supply_flow_gpm
    if static is None or residual is None or flow is None:
        return BaseCurve()
    if not (residual < static and flow > 0):
        return BaseCurve(unproven=(unusable("design supply", design.entry),))
    try:
        curve = through_feed(SupplyCurve.from_flow_test(static, residual, flow), system)
    except OutOfRangeError:
        return BaseCurve(unproven=(unusable("feed", system.entry),))
    if design.supply_elevation_ft is not None and system.base_elevation_ft is not None:
        return BaseCurve(curve.at_elevation(system.base_elevation_ft - design.supply_elevation_ft))
    return BaseCurve(curve, notes=(_missing_elevation("design supply", design.entry),), elevation_is_missing=True)


def by_stated_points(supply: Supply) -> BaseCurve:
    """Return the curve of a running fire pump by the points stated with its supply.

    Parameters
    ----------
    supply : Supply
        The supply [-].

    Returns
    -------
    BaseCurve
        Curve [psi, gpm]; none from fewer than two points.

    References
    ----------
    DEVELOPERS.md, Method §2.
    """
    points = _one_a_flow([(flow, pressure) for state, flow, pressure in supply.points if state == "running"])
    if len(points) < 2 or points[0][0] < 0:
        return BaseCurve()
    missing = _missing_elevation("stated points", supply.entry)
    return BaseCurve(PointCurve(points), notes=(missing,), elevation_is_missing=True)


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

    Raises
    ------
    OutOfRangeError
        If a pipe of the feed can't be, or has a fitting that the table does not hold.

    References
    ----------
    DEVELOPERS.md, Method §2: two segments.
    """
    for part in system.feed:
        if isinstance(part, PipeRun):
            pipe = Pipe(part.length_ft, part.inside_diameter_in, part.c, part.fittings, part.nominal_in)
            curve = curve.through(pipe)
        elif part.points:
            if not all(flow >= 0 and loss >= 0 for flow, loss in part.points):
                raise OutOfRangeError(f"listed loss of {part.of}: {part.points}; give flows and losses from 0 up")
            curve = curve.with_loss(LossCurve(part.points))
    return curve


def unusable(of: str, entry: int) -> Reason:
    """Return that recorded figures can't be computed with, and which."""
    return Reason(ReasonCode.FIGURES_UNUSABLE, {"of": of}, (entry,), _SECTION)


def _one_a_flow(points: Sequence[tuple[float, float]]) -> tuple[tuple[float, float], ...]:
    """Return the points by flow; of several at one flow the mean pressure."""
    by_flow: dict[float, list[float]] = {}
    for flow, pressure in points:
        by_flow.setdefault(flow, []).append(pressure)
    return tuple((flow, fmean(pressures)) for flow, pressures in sorted(by_flow.items()))


def _split_at_hose_point(curve: SupplyCurve, system: System) -> tuple[SupplyCurve, tuple[Reason, ...]]:
    """Return a curve measured at the base of riser in its two segments, as far as the feed is on record."""
    path = through_feed(SupplyCurve(curve.static_psi, 0.0), system)
    if not path.losses and 0 < path.a_path < curve.a_source:
        return SupplyCurve(curve.static_psi, curve.a_source - path.a_path, path.a_path), ()
    hose_gpm = 0.0 if system.design is None else system.design.hose_outside_gpm
    if not hose_gpm > 0:
        return curve, ()
    return curve, (Reason(ReasonCode.HOSE_THROUGH_ALL, {"hose_outside_gpm": hose_gpm}, (), _SECTION),)


def _rise_ft(system: System, test: FlowTest) -> tuple[float, tuple[Reason, ...]]:
    if system.base_elevation_ft is not None and test.elevation_ft is not None:
        return system.base_elevation_ft - test.elevation_ft, ()
    if test.at == "base_of_riser":
        return 0.0, ()
    of = "base of riser" if system.base_elevation_ft is None else "flow test"
    return 0.0, (_missing_elevation(of, test.entry),)


def _missing_elevation(of: str, entry: int) -> Reason:
    numbers: dict[str, Number] = {"of": of, "sigma_psi": constants.UNKNOWN_ELEVATION_PSI}
    return Reason(ReasonCode.ELEVATION_MISSING, numbers, (entry,), "1")
