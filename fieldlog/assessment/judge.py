"""Judging one supply: a statement a system, with its reasons, the next step and what its tests can't show."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field, replace
from datetime import date, datetime, timedelta

from fieldlog.assessment import constants
from fieldlog.assessment.alarm_times import alarm_findings
from fieldlog.assessment.blind_loss import blind_loss
from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.comparable import Comparisons, Conditions, comparisons, conditions_of, own_faults
from fieldlog.assessment.drain_index import Index, drain_k, index_of
from fieldlog.assessment.expected import Expected, expected
from fieldlog.assessment.gauge_readings import gauge_findings
from fieldlog.assessment.impairment import on_record
from fieldlog.assessment.interpretation import places_by_signs, places_to_look
from fieldlog.assessment.known import known_on, next_record_after
from fieldlog.assessment.measured_supply import Measured, demand_of, measured_supply
from fieldlog.assessment.next_steps import cannot_show, next_steps
from fieldlog.assessment.reading_error import Instruments, instruments, replaced_sigma
from fieldlog.assessment.standing import standing_signs
from fieldlog.assessment.statement import Evidence, Verdict, decide
from fieldlog.assessment.ten_percent import ten_percent
from fieldlog.assessment.trend import trends
from fieldlog.assessment.valve_states import shut_spells
from fieldlog.assessment.windows import add_months
from fieldlog.records.history import DrainTest, SupplyHistory, System
from fieldlog.records.rules import RuleProfile
from fieldlog.records.statement import BlindLoss, ExpectedBand, Reason, Statement, SystemStatement

_UNEQUAL_PUMP = {ReasonCode.PUMP_STATE_DIFFERS, ReasonCode.PUMP_STARTED}


@dataclass(frozen=True, slots=True)
class _Scene:
    """What stays the same while one system is judged."""

    history: SupplyHistory  # as known on the day
    system: System  # with the tests of the window
    whole: System  # with all tests: what they say of valves and of an altered drain does not age
    profile: RuleProfile | None
    as_of: date
    conditions: Conditions
    found: dict[int, Index | None] = field(default_factory=dict)  # by id of the test

    @property
    def instruments(self) -> Instruments:
        return self.conditions.instruments

    def index(self, test: DrainTest) -> Index | None:
        if id(test) not in self.found:
            supply = self.history.supply
            level_ft = supply.tank_level_reference_ft if supply.kind == "gravity_tank" else None
            self.found[id(test)] = index_of(test, self.system, self.instruments, level_ft)
        return self.found[id(test)]

    def indexes(self, tests: Iterable[DrainTest]) -> list[Index]:
        return [one for one in map(self.index, tests) if one is not None]


def judge(
    history: SupplyHistory, as_of: date, profile: RuleProfile | None, version: str
) -> tuple[SystemStatement, ...]:
    """Return a statement for each system on the supply, by one rule profile.

    Parameters
    ----------
    history : SupplyHistory
        Everything on record about the supply; order of its records does not matter [-].
    as_of : date
        The day judged: later records do not count [-].
    profile : RuleProfile | None
        The rules in force; None: the adopted standard is not recorded [-].
    version : str
        Version of the program, kept with each statement [-].

    Returns
    -------
    tuple[SystemStatement, ...]
        One a system, in the history's order [-].

    References
    ----------
    DEVELOPERS.md, Method §8.
    """
    known = known_on(history, as_of)
    gauges = instruments(known, as_of)
    later = next_record_after(history, as_of)
    said = []
    for whole in known.systems:
        system = _windowed(whole)
        conditions = replace(conditions_of(known.supply, whole, gauges), system=system)
        scene = _Scene(known, system, whole, profile, as_of, conditions)
        said.append(_judge(scene, version, later))
    return tuple(said)


def _windowed(system: System) -> System:
    """Return the system with its newest tests and every acceptance test: more would only cost time."""
    tests = system.drain_tests
    kept = [test for test in tests[: -constants.MOST_TESTS] if test.standing == "acceptance"]
    return replace(system, drain_tests=(*kept, *tests[-constants.MOST_TESTS :]))


def _judge(scene: _Scene, version: str, later: date | None) -> SystemStatement:
    evidence = _evidence(scene, scene.system.drain_tests)
    verdict = decide(evidence)
    measured = evidence.measured
    return SystemStatement(
        system=scene.system.uid,
        profile=None if scene.profile is None else scene.profile.uid,
        statement=verdict.statement,
        earlier=_worse_before(scene, evidence, verdict),
        reasons=verdict.reasons,
        next=next_steps(verdict, evidence),
        ten_percent=evidence.ten_percent,
        margin_on_day=measured.margin,
        expected=_bands(evidence, verdict),
        trends=evidence.trends,
        blind_loss=evidence.blind,
        cannot_show=cannot_show(scene.history, scene.system),
        findings=_findings(scene),
        checks=evidence.checks,
        through_number=scene.history.through_number,
        as_of=scene.as_of,
        valid_until=_valid_until(scene, measured, later),
        version=version,
    )


def _evidence(scene: _Scene, tests: Sequence[DrainTest]) -> Evidence:
    """Return what the statement after the last of these tests rests on."""
    measured = measured_supply(scene.history, scene.system, scene.profile, scene.as_of)
    read = [test for test in tests if test.residual is not None]
    signs = standing_signs(tests, scene.conditions, lambda compared: _bands_of(scene, compared))
    plain = Evidence(
        scene.history.supply, scene.system, scene.instruments, scene.profile, scene.as_of, measured,
        impairment=(*signs, *on_record(scene.whole, scene.profile, scene.as_of)),
        left_out=len(scene.whole.drain_tests) - len(scene.system.drain_tests),
    )  # fmt: skip
    return _with_newest(scene, plain, read) if read else plain


def _with_newest(scene: _Scene, plain: Evidence, read: Sequence[DrainTest]) -> Evidence:
    compared = comparisons(read, scene.conditions)
    newest, earlier = scene.index(compared.newest), scene.indexes(compared.earlier)
    gauge_sigma_psi = _gauge_sigma_psi(scene, compared)
    bands = _widened(expected(earlier), gauge_sigma_psi)
    counted = [*earlier, newest] if newest is not None and not compared.differs else earlier
    k = drain_k(scene.system.drain, [*compared.earlier, compared.newest])
    return replace(
        plain,
        measured=_without_unequal_pump(plain.measured, compared),
        compared=compared,
        newest=newest,
        earlier=earlier,
        bands=bands,
        bands_now=expected(counted),
        ten_percent=ten_percent(compared, scene.instruments, scene.profile),
        trends=trends(counted),
        blind=_blind(scene, compared, earlier, k, gauge_sigma_psi),
        checks=_checks(scene, compared, newest, plain.impairment),
        gauge_sigma_psi=gauge_sigma_psi,
        drain_k=k,
    )


def _bands_of(scene: _Scene, compared: Comparisons) -> Expected | None:
    return _widened(expected(scene.indexes(compared.earlier)), _gauge_sigma_psi(scene, compared))


def _widened(bands: Expected | None, gauge_sigma_psi: float) -> Expected | None:
    return None if bands is None else bands.with_new_gauge(gauge_sigma_psi)


def _gauge_sigma_psi(scene: _Scene, compared: Comparisons) -> float:
    newest = compared.newest
    before = [test.residual for test in compared.earlier if test.residual is not None]
    if newest.residual is None:
        return 0.0
    return replaced_sigma(newest.residual, before, scene.instruments, newest.performed_on)


def _without_unequal_pump(measured: Measured, compared: Comparisons) -> Measured:
    """Return the same without a margin where the newest test was made in another state of the pump."""
    if not any(reason.code in _UNEQUAL_PUMP for reason in compared.differs):
        return measured
    return replace(measured, margin=None)


def _blind(
    scene: _Scene, compared: Comparisons, earlier: Sequence[Index], k: float | None, gauge_sigma_psi: float
) -> BlindLoss | None:
    """Return the blind loss by the comparable tests since the reference; None where no index speaks of demand."""
    newest, demand = scene.index(compared.newest), demand_of(scene.system)
    supply = scene.history.supply
    speaks = supply.pressure_reducing_valve == "none" and supply.kind not in {"pressure_tank", "parallel"}
    if newest is None or compared.differs or demand is None or k is None or not (k > 0 and speaks):
        return None
    since = None if compared.reference is None else compared.reference.performed_on
    counted = [one for one in earlier if since is None or one.test.performed_on >= since]
    return blind_loss(counted, newest, k, demand.flow_gpm, gauge_sigma_psi)


def _checks(
    scene: _Scene, compared: Comparisons, newest: Index | None, impairment: Sequence[Reason]
) -> tuple[str, ...]:
    own = {str(reason.code) for reason in impairment if compared.newest.entry in reason.entries}
    notes = () if newest is None else newest.static.notes
    is_bled_off = any(note.code == ReasonCode.TRAPPED_PRESSURE for note in notes)
    alone = places_by_signs(own, is_bled_off=is_bled_off)
    other = compared.reference or compared.previous
    then = None if other is None else scene.index(other)
    held = () if newest is None or then is None else places_to_look(newest, then)
    return tuple(dict.fromkeys((*alone, *held)))


def _worse_before(scene: _Scene, evidence: Evidence, verdict: Verdict) -> Statement | None:
    """Return the worse statement that a newest test which can't be compared does not replace."""
    compared = evidence.compared
    if verdict.statement != Statement.NOT_COMPARABLE or compared is None or not compared.differs:
        return None
    tests = scene.system.drain_tests
    for count in range(len(tests) - 1, 0, -1):
        read = [test for test in tests[:count] if test.residual is not None]
        if not read or own_faults(read[-1], scene.instruments):
            continue
        if not comparisons(read, scene.conditions).differs:
            before = decide(_evidence(scene, tests[:count])).statement
            return before if before.rank < Statement.NOT_COMPARABLE.rank else None
    return None


def _bands(evidence: Evidence, verdict: Verdict) -> tuple[ExpectedBand, ...]:
    """Return where the next readings should fall; a test that suggests an impairment is no measure of that."""
    is_suspect = verdict.statement == Statement.SUSPECTED_IMPAIRMENT
    bands = evidence.bands if is_suspect else evidence.bands_now
    return () if bands is None else (bands.band(),)


def _findings(scene: _Scene) -> tuple[Reason, ...]:
    gauges = [*scene.system.gauges, *scene.history.supply_gauges]
    readings = [*scene.system.gauge_readings, *scene.history.gauge_readings]
    return (
        *gauge_findings(gauges, readings, scene.instruments, scene.profile, scene.as_of),
        *alarm_findings(scene.system, scene.profile, scene.as_of),
    )


def _valid_until(scene: _Scene, measured: Measured, later: date | None) -> date | None:
    """Return the first day on which time alone changes the statement; None where nothing runs out."""
    days = [later, scene.system.on_supply_until]
    profile = scene.profile
    if profile is not None:
        if profile.in_force_until is not None:
            days.append(profile.in_force_until + timedelta(days=1))
        months = profile.flow_test_valid_months()
        tested = [test.performed_on for test in scene.system.forward_flow_tests]
        tested += [] if measured.flow_test is None else [measured.flow_test.performed_on]
        if months is not None:
            days += [add_months(on, months) + timedelta(days=1) for on in tested]
        days += _clocks(scene.whole, profile.valve_shut_limit_hours())
    days += [other.in_force_from for other in scene.history.profiles]
    return min((day for day in days if day is not None and day > scene.as_of), default=None)


def _clocks(system: System, limit_hours: float | None) -> list[date]:
    """Return the days on which shut valves reach the hours allowed."""
    if limit_hours is None:
        return []
    spells = [spell for spell in shut_spells(system).values() if spell.left is not None]
    shut = [spell.moment_shut for spell in spells]
    return [_day_of(moment, limit_hours) for moment in shut if moment is not None]


def _day_of(moment: datetime, hours: float) -> date:
    return (moment + timedelta(hours=hours)).date()
