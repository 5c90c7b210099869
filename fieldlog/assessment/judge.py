"""Judging one supply: a statement a system, with its reasons, the next step and what its tests can't show."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from datetime import date, timedelta

from fieldlog.assessment.alarm_times import alarm_findings
from fieldlog.assessment.blind_loss import blind_loss
from fieldlog.assessment.comparable import Comparisons, Conditions, comparisons
from fieldlog.assessment.drain_index import Index, drain_k, index_of
from fieldlog.assessment.expected import expected
from fieldlog.assessment.gauge_readings import gauge_findings
from fieldlog.assessment.interpretation import places_to_look
from fieldlog.assessment.measured_supply import Measured, measured_supply
from fieldlog.assessment.next_steps import cannot_show, next_steps
from fieldlog.assessment.reading_error import Instruments, instruments
from fieldlog.assessment.statement import Evidence, Verdict, decide
from fieldlog.assessment.ten_percent import ten_percent
from fieldlog.assessment.trend import trends
from fieldlog.assessment.windows import add_months
from fieldlog.records.history import DrainTest, SupplyHistory, System
from fieldlog.records.rules import RuleProfile
from fieldlog.records.statement import BlindLoss, ExpectedBand, Reason, Statement, SystemStatement


@dataclass(frozen=True, slots=True)
class _Scene:
    """What stays the same while one system is judged."""

    history: SupplyHistory
    system: System
    profile: RuleProfile | None
    as_of: date
    instruments: Instruments


def judge(
    history: SupplyHistory, as_of: date, profile: RuleProfile | None, version: str
) -> tuple[SystemStatement, ...]:
    """Return a statement for each system on the supply, by one rule profile.

    Parameters
    ----------
    history : SupplyHistory
        Everything on record about the supply; order of its tests does not matter [-].
    as_of : date
        The day judged: later tests do not count [-].
    profile : RuleProfile or None
        The rules in force; None: the adopted standard is not recorded [-].
    version : str
        Version of the program, kept with each statement [-].

    Returns
    -------
    tuple of SystemStatement
        One a system, in the history's order [-].

    References
    ----------
    DEVELOPERS.md, Method §8.
    """
    found = instruments(history, as_of)
    scenes = (_Scene(history, system, profile, as_of, found) for system in history.systems)
    return tuple(_judge(scene, version) for scene in scenes if _stands(scene.system, as_of))


def _stands(system: System, as_of: date) -> bool:
    return system.on_supply_until is None or as_of < system.on_supply_until


def _judge(scene: _Scene, version: str) -> SystemStatement:
    tests = _tests(scene)
    evidence = _evidence(scene, tests)
    verdict = decide(evidence)
    earlier = _worse_before(scene, tests, verdict)
    measured = evidence.measured
    return SystemStatement(
        system=scene.system.uid,
        profile=None if scene.profile is None else scene.profile.uid,
        statement=verdict.statement,
        earlier=earlier,
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
        valid_until=_valid_until(scene, measured),
        version=version,
    )


def _tests(scene: _Scene) -> list[DrainTest]:
    """Return the tests that count: with a residual, up to the day judged, oldest first."""
    tests = [
        test for test in scene.system.drain_tests if test.residual is not None and test.performed_on <= scene.as_of
    ]
    return sorted(tests, key=lambda test: (test.performed_on, test.entry))


def _evidence(scene: _Scene, tests: Sequence[DrainTest]) -> Evidence:
    level_ft = tests[-1].tank_level_ft if tests else None
    measured = measured_supply(scene.history, scene.system, scene.profile, scene.as_of, level_ft)
    if not tests:
        return Evidence(
            scene.history.supply, scene.system, scene.instruments, scene.profile, scene.as_of, measured
        )
    conditions = Conditions(scene.history.supply, scene.system, scene.instruments)
    compared = comparisons(tests, conditions)
    newest = index_of(tests[-1], scene.system, scene.instruments)
    earlier = _indexes(scene, compared.earlier)
    return Evidence(
        supply=scene.history.supply,
        system=scene.system,
        instruments=scene.instruments,
        profile=scene.profile,
        as_of=scene.as_of,
        measured=measured,
        compared=compared,
        newest=newest,
        earlier=earlier,
        bands=expected(earlier),
        bands_now=expected([*earlier, newest] if newest is not None and not compared.differs else earlier),
        ten_percent=ten_percent(compared, scene.instruments, scene.profile),
        trends=trends([*earlier, newest] if newest is not None else earlier),
        blind=_blind(scene, compared, earlier, newest),
        checks=_checks(scene, compared, newest),
    )


def _indexes(scene: _Scene, tests: Iterable[DrainTest]) -> list[Index]:
    found = (index_of(test, scene.system, scene.instruments) for test in tests)
    return [one for one in found if one is not None]


def _blind(
    scene: _Scene, compared: Comparisons, earlier: Sequence[Index], newest: Index | None
) -> BlindLoss | None:
    """Return the blind loss by the comparable tests since the reference."""
    design = scene.system.design
    if newest is None or compared.differs or design is None or design.demand_flow_gpm is None:
        return None
    since = None if compared.reference is None else compared.reference.performed_on
    counted = [one for one in earlier if since is None or one.test.performed_on >= since]
    return blind_loss(counted, newest, drain_k(scene.system.drain), design.demand_flow_gpm)


def _checks(scene: _Scene, compared: Comparisons, newest: Index | None) -> tuple[str, ...]:
    other = compared.reference or compared.previous
    then = None if other is None else index_of(other, scene.system, scene.instruments)
    return () if newest is None or then is None else places_to_look(newest, then)


def _worse_before(scene: _Scene, tests: Sequence[DrainTest], verdict: Verdict) -> Statement | None:
    """Return the worse statement of earlier tests that a newest one that can't be compared does not replace."""
    if verdict.statement != Statement.NOT_COMPARABLE:
        return None
    for count in range(len(tests) - 1, 0, -1):
        before = decide(_evidence(scene, tests[:count])).statement
        if before != Statement.NOT_COMPARABLE:
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


def _valid_until(scene: _Scene, measured: Measured) -> date | None:
    """Return the last day on which the statement holds if nothing arrives: time alone changes it after."""
    days = []
    profile = scene.profile
    if profile is not None:
        days.append(profile.in_force_until)
        months = profile.flow_test_valid_months()
        if measured.flow_test is not None and months is not None:
            days.append(add_months(measured.flow_test.performed_on, months))
    days += [other.in_force_from - timedelta(days=1) for other in scene.history.profiles]
    if any(valve.shut_at and not valve.opened_at for test in scene.system.drain_tests for valve in test.valves):
        days.append(scene.as_of)  # a valve's clock runs
    return min((day for day in days if day is not None and day >= scene.as_of), default=None)
