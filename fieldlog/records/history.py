"""What judgement is given: one supply with its systems, gauges and tests, in psi, gpm, ft and in.

Each record carries `entry`, the number of the log entry it was read from. None means "not stated"; a condition
that is not stated counts as unchanged and is named in the reasons.
"""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date
from fractions import Fraction
from typing import Literal

from fieldlog.records.rules import RuleProfile

PumpState = Literal["none", "off", "jockey", "running"]
Tap = Literal["riser", "drain connection", "header", "unknown"]
SupplyKind = Literal["public_main", "gravity_tank", "pressure_tank", "fire_pump", "parallel"]


@dataclass(frozen=True, slots=True)
class Reading:
    """One gauge reading as entered and in psi; `low_psi` and `high_psi` of a swinging needle."""

    psi: float
    exact_psi: Fraction
    value: str
    unit: str
    gauge: str | None = None
    low_psi: float | None = None
    high_psi: float | None = None
    pump_state: PumpState | None = None


@dataclass(frozen=True, slots=True)
class GaugeComparison:
    """A comparison with a reference gauge: error found (shown less reference) and the reference's accuracy."""

    entry: int
    performed_on: date
    points_psi: tuple[tuple[float, float], ...]  # (reference, shown)
    outcome: Literal["kept", "adjusted", "replaced"] | None
    reference_accuracy_percent: float | None
    reference_full_scale_psi: float | None
    certificate_on: date | None = None


@dataclass(frozen=True, slots=True)
class Gauge:
    """A pressure gauge through its life; a replaced one ends when the next begins."""

    uid: str
    entry: int
    of: Literal["system", "supply", "organisation"]
    owner: str  # uid of the system or supply; empty for the organisation's
    side: Literal["supply", "system", "air"] | None = None
    tap: Tap = "unknown"
    behind: tuple[str, ...] = ()  # check, alarm, backflow, prv between source and gauge
    full_scale_psi: float | None = None
    division_psi: float | None = None
    grade: str | None = None
    elevation_ft: float | None = None
    installed_on: date | None = None
    ended_on: date | None = None
    normal_low_psi: float | None = None
    normal_high_psi: float | None = None
    name: str = ""
    comparisons: tuple[GaugeComparison, ...] = ()


@dataclass(frozen=True, slots=True)
class Drain:
    """A main drain connection and its outlet."""

    id: str
    size_in: float | None = None
    outlet: str = ""
    outlet_elevation_ft: float | None = None
    length_ft: float | None = None
    k: float | None = None  # gpm/psi^0.5, once measured by pitot
    since: date | None = None  # a drain altered on this date starts a new reference


@dataclass(frozen=True, slots=True)
class PipeRun:
    """A straight run of pipe with fittings, on the way to the base of riser."""

    length_ft: float
    inside_diameter_in: float
    c: float
    fittings: tuple[tuple[str, int], ...] = ()  # (name as in the table of equivalent lengths, count)
    nominal_in: str | None = None


@dataclass(frozen=True, slots=True)
class StatedLoss:
    """A listed loss (backflow preventer, meter) by points, interpolated."""

    points: tuple[tuple[float, float], ...]  # (gpm, psi)
    of: str = ""


@dataclass(frozen=True, slots=True)
class ValveFound:
    """A valve as found and as left at a test."""

    id: str
    found: Literal["open", "partly", "shut"] | None = None
    left: Literal["open", "partly", "shut"] | None = None
    shut_at: str | None = None  # timestamps with offset
    opened_at: str | None = None


@dataclass(frozen=True, slots=True)
class DrainTest:
    """A main drain test."""

    entry: int
    subject: str
    performed_on: date
    drain: str | None
    static_before: Reading | None
    residual: Reading | None
    static_after: Reading | None = None
    steady: bool | None = None
    return_s: float | None = None
    did_not_recover: bool = False
    standing: Literal["routine", "acceptance", "after repair"] = "routine"
    source: Literal["witnessed", "information sign", "old record"] = "witnessed"
    at: Literal["lead-in", "riser"] | None = None
    fully_open: bool | None = None
    took_full_flow: bool | None = None
    running_clear: bool | None = None
    drain_unchanged: bool | None = None
    system_side_before: Reading | None = None
    confirmed: Literal["no", "second look", "second gauge"] = "no"
    drain_pitot_psi: float | None = None
    pump_state: PumpState | None = None  # for all readings that do not state their own
    tank_level_ft: float | None = None
    valves: tuple[ValveFound, ...] = ()
    not_done: str | None = None
    corrected: bool = False
    via: str = ""


@dataclass(frozen=True, slots=True)
class GaugeReading:
    """A routine reading of one gauge."""

    entry: int
    performed_on: date
    reading: Reading
    pump_state: PumpState | None = None


@dataclass(frozen=True, slots=True)
class AlarmTest:
    """An inspector's test: an alarm or trip test, never evidence of capacity."""

    entry: int
    performed_on: date
    item: str | None
    is_dry: bool
    alarm_s: float | None = None
    bell_s: float | None = None
    panel_s: float | None = None
    monitoring_s: float | None = None
    trip_s: float | None = None
    delivery_s: float | None = None
    did_not_come: bool = False  # the alarm never came
    is_full_flow: bool | None = None
    standing: Literal["routine", "acceptance", "after repair"] = "routine"
    air_start_psi: float | None = None
    air_trip_psi: float | None = None
    water_start_psi: float | None = None
    static_psi: float | None = None
    flowing_psi: float | None = None
    orifice_k: float | None = None


@dataclass(frozen=True, slots=True)
class FlowTest:
    """A supply flow test: residuals at measured flows, at a named place."""

    entry: int
    performed_on: date
    at: Literal["street", "lead_in", "base_of_riser", "test_header"]
    static_psi: float
    points: tuple[tuple[float, float], ...]  # (gpm, residual psi), pitoted outlets already summed
    elevation_ft: float | None = None  # of the gauge, above the site's height mark
    pump_state: PumpState | None = None
    pitots: int = 1  # outlets read by pitot: several narrow the flow's error
    gauge: str | None = None


@dataclass(frozen=True, slots=True)
class ForwardFlowTest:
    """A forward-flow test through a backflow preventer: evidence on capacity."""

    entry: int
    performed_on: date
    item: str | None
    flow_gpm: float
    upstream_psi: float | None = None
    downstream_psi: float | None = None
    riser_psi: float | None = None
    target_gpm: float | None = None


@dataclass(frozen=True, slots=True)
class ValveStatusTest:
    """A valve status test: flow seen at an outlet after a valve was reopened; never evidence on capacity."""

    entry: int
    performed_on: date
    valve: str
    shut_at: str | None = None  # timestamps with offset
    opened_at: str | None = None
    flow_seen: bool | None = None


@dataclass(frozen=True, slots=True)
class Design:
    """The hydraulic design record in force: demand at the base of riser as recorded."""

    entry: int
    demand_flow_gpm: float | None
    demand_pressure_psi: float | None
    includes_inside_hose: bool | None = None  # None: unknown
    hose_inside_gpm: float = 0.0
    hose_outside_gpm: float = 0.0
    hose_point: str | None = None
    supply_static_psi: float | None = None
    supply_residual_psi: float | None = None
    supply_flow_gpm: float | None = None
    supply_elevation_ft: float | None = None  # where the design's supply figures hold
    elevation_ft: float | None = None  # where the demand holds; None: base of riser
    made_on: date | None = None


@dataclass(frozen=True, slots=True)
class Repair:
    """A remedy that restores something: `restores` names what starts anew on that date."""

    entry: int
    done_on: date
    restores: Literal["restriction", "drain", "gauge"] | None
    system: str | None = None
    is_confirmed: bool = False


@dataclass(frozen=True, slots=True)
class OpenImpairment:
    """An impairment that has begun and not ended."""

    entry: int
    system: str | None
    began_at: str
    text: str = ""


@dataclass(frozen=True, slots=True)
class System:
    """One system with its riser on this supply."""

    uid: str
    entry: int
    name: str
    type: Literal["wet", "dry", "preaction", "deluge", "standpipe"]
    base_elevation_ft: float | None = None
    drain: Drain | None = None
    feed: tuple[PipeRun | StatedLoss, ...] = ()  # hose point to base of riser
    hose_point: str | None = None
    header: str | None = None
    installed_on: date | None = None
    occupancy: str | None = None
    heated: bool | None = None
    air_supervised: bool | None = None
    alarm: str | None = None  # kind of waterflow alarm
    valves: tuple[str, ...] = ()  # ids
    normally_shut: tuple[str, ...] = ()  # ids of valves whose normal position is not open
    on_supply_since: date | None = None
    on_supply_until: date | None = None  # from that day on another supply
    feed_changed_on: date | None = None
    design: Design | None = None
    gauges: tuple[Gauge, ...] = ()
    drain_tests: tuple[DrainTest, ...] = ()  # by performed_on, then entry
    gauge_readings: tuple[GaugeReading, ...] = ()
    alarm_tests: tuple[AlarmTest, ...] = ()
    forward_flow_tests: tuple[ForwardFlowTest, ...] = ()
    valve_status_tests: tuple[ValveStatusTest, ...] = ()
    repairs: tuple[Repair, ...] = ()
    impairments: tuple[OpenImpairment, ...] = ()


@dataclass(frozen=True, slots=True)
class Supply:
    """What feeds the systems; its kind decides what may be said of it."""

    uid: str
    entry: int
    name: str
    kind: SupplyKind
    backflow_preventer: Literal["none", "one of several feeds", "sole feed"] = "none"
    pressure_reducing_valve: Literal["none", "one of several feeds", "sole feed"] = "none"
    prv_static_psi: float | None = None
    prv_residual_psi: float | None = None
    tank_level_reference_ft: float | None = None
    points: tuple[tuple[str, float, float], ...] = ()  # (pump state, gpm, psi)


@dataclass(frozen=True, slots=True)
class SupplyHistory:
    """Everything on record about one supply, as far as entry `through_number`."""

    site: str
    supply: Supply
    systems: tuple[System, ...]
    flow_tests: tuple[FlowTest, ...] = ()
    supply_gauges: tuple[Gauge, ...] = ()
    organisation_gauges: tuple[Gauge, ...] = ()
    gauge_readings: tuple[GaugeReading, ...] = ()  # of the supply's gauges
    profiles: tuple[RuleProfile, ...] = ()
    through_number: int = 0
