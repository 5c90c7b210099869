"""Which of the six statements applies: the first in their order, with its reasons."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from datetime import date

from fieldlog.assessment import constants
from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.comparable import Comparisons
from fieldlog.assessment.drain_index import Index
from fieldlog.assessment.expected import Expected
from fieldlog.assessment.measured_supply import Measured
from fieldlog.assessment.reading_error import Instruments
from fieldlog.records.history import Supply, System
from fieldlog.records.rules import RuleProfile
from fieldlog.records.statement import BlindLoss, Number, Reason, Statement, TenPercent, Trend

_SECTION = "8"


@dataclass(frozen=True, slots=True)
class Evidence:
    """All that a statement about one system rests on."""

    supply: Supply
    system: System
    instruments: Instruments
    profile: RuleProfile | None
    as_of: date
    measured: Measured
    compared: Comparisons | None = None
    newest: Index | None = None
    earlier: Sequence[Index] = ()
    bands: Expected | None = None  # by the earlier tests: the newest is held against it
    bands_now: Expected | None = None  # with the newest: for the next visit
    ten_percent: tuple[TenPercent, ...] = ()
    trends: tuple[Trend, ...] = ()
    blind: BlindLoss | None = None
    checks: tuple[str, ...] = ()
    impairment: tuple[Reason, ...] = ()  # signs that stand
    gauge_sigma_psi: float = 0.0  # of a gauge replaced since
    drain_k: float | None = None
    left_out: int = 0  # older tests that are not judged by


@dataclass(frozen=True, slots=True)
class Verdict:
    """The statement with its reasons, the deciding ones first."""

    statement: Statement
    reasons: tuple[Reason, ...]


def decide(evidence: Evidence) -> Verdict:
    """Return the first statement that applies, with all reasons, the deciding ones first.

    Parameters
    ----------
    evidence : Evidence
        What is on record and computed [-].

    Returns
    -------
    Verdict
        Statement and reasons [-].

    References
    ----------
    DEVELOPERS.md, Method §8.
    """
    groups = (
        (Statement.SUSPECTED_IMPAIRMENT, list(evidence.impairment)),
        (Statement.BELOW_DEMAND, list(_below(evidence))),
        (Statement.CHANGED, list(_changed(evidence))),
        (Statement.NOT_COMPARABLE, list(_not_comparable(evidence))),
        (Statement.UNPROVEN, list(_unproven(evidence))),
    )
    beside = list(_beside(evidence))
    for place, (statement, reasons) in enumerate(groups):
        if reasons:
            later = [reason for _, others in groups[place + 1 :] for reason in others]
            return Verdict(statement, (*reasons, *later, *beside))
    return Verdict(Statement.HOLDING, (Reason(ReasonCode.HOLDING, {}, (), _SECTION), *beside))


def _below(evidence: Evidence) -> Iterator[Reason]:
    yield from evidence.measured.below
    margin = evidence.measured.margin
    if margin is not None and margin.median_psi < 0:
        numbers: dict[str, Number] = {
            "margin_psi": margin.median_psi,
            "available_psi": margin.median_psi + margin.required_psi,
            "required_psi": margin.required_psi,
            "demand_flow_gpm": margin.demand_flow_gpm,
        }
        yield Reason(ReasonCode.BELOW_DEMAND, numbers, margin.entries, _SECTION)


def _changed(evidence: Evidence) -> Iterator[Reason]:
    compared = evidence.compared
    if compared is None:
        return
    now = compared.newest.residual
    residuals = {
        test.entry: test.residual
        for test in (compared.reference, compared.previous)
        if test is not None and test.residual is not None
    }
    for row in evidence.ten_percent:
        then = residuals.get(row.entry)
        if row.flagged and now is not None and then is not None:
            numbers: dict[str, Number] = {
                "against": row.against,
                "reduction": row.reduction,
                "residual_psi": now.psi,
                "reference_psi": then.psi,
            }
            yield Reason(ReasonCode.TEN_PERCENT, numbers, (compared.newest.entry, row.entry), "3")
    if compared.newest.confirmed != "no":
        yield from _outside_bands(evidence)


def _outside_bands(evidence: Evidence) -> Iterator[Reason]:
    newest, bands, compared = evidence.newest, evidence.bands, evidence.compared
    if newest is None or bands is None or compared is None or compared.differs:
        return
    is_confirmed = compared.newest.confirmed != "no"
    static_psi = newest.static_at_reference_psi
    if not bands.static.holds(static_psi):
        numbers: dict[str, Number] = {
            "static_psi": static_psi,
            "low_psi": bands.static.low,
            "high_psi": bands.static.high,
            "is_confirmed": is_confirmed,
        }
        yield Reason(ReasonCode.STATIC_OUTSIDE_BAND, numbers, (newest.test.entry,), "6")
    residual = bands.residual(newest.static.psi)
    if not residual.holds(newest.residual_psi):
        numbers = {
            "residual_psi": newest.residual_psi,
            "low_psi": residual.low,
            "high_psi": residual.high,
            "is_confirmed": is_confirmed,
        }
        yield Reason(ReasonCode.RESIDUAL_OUTSIDE_BAND, numbers, (newest.test.entry,), "6")


def _not_comparable(evidence: Evidence) -> Iterator[Reason]:
    compared = evidence.compared
    if compared is not None and compared.differs:
        numbers: dict[str, Number] = {"performed_on": compared.newest.performed_on.isoformat()}
        yield Reason(ReasonCode.NEWEST_NOT_COMPARABLE, numbers, (compared.newest.entry,), "1")
        yield from compared.differs
    yield from evidence.measured.not_comparable


def _unproven(evidence: Evidence) -> Iterator[Reason]:
    yield from evidence.measured.unproven
    compared = evidence.compared
    if compared is None:
        yield Reason(ReasonCode.NO_DRAIN_TEST, {}, (), _SECTION)
    else:
        count = len(compared.earlier) + (0 if compared.differs else 1)
        if count < 2:
            yield Reason(ReasonCode.FEW_COMPARABLE, {"tests": count}, (compared.newest.entry,), _SECTION)
        if compared.unstated:
            said = ", ".join(compared.unstated)
            yield Reason(ReasonCode.CONDITIONS_NOT_STATED, {"conditions": said}, (compared.newest.entry,), "1")
        if compared.newest.confirmed == "no":
            yield from _outside_bands(evidence)
    if evidence.profile is None:
        yield Reason(ReasonCode.NO_PROFILE, {}, (), _SECTION)
    yield from _thin_margin(evidence)
    yield from _blind(evidence)


def _thin_margin(evidence: Evidence) -> Iterator[Reason]:
    margin = evidence.measured.margin
    if margin is None or margin.median_psi < 0:
        return
    if not margin.low_psi >= margin.rule_margin_psi:
        low: dict[str, Number] = {"low_psi": margin.low_psi, "rule_margin_psi": margin.rule_margin_psi}
        yield Reason(ReasonCode.MARGIN_LOW_BOUND, low, margin.entries, _SECTION)


def _blind(evidence: Evidence) -> Iterator[Reason]:
    """Return that a loss which uses up the margin might not have shown, or that nobody can say."""
    compared, blind, margin = evidence.compared, evidence.blind, evidence.measured.margin
    if compared is None or compared.differs or margin is None or margin.median_psi < 0:
        return
    if blind is None:
        code = ReasonCode.DRAIN_SIZE_UNKNOWN if evidence.drain_k is None else ReasonCode.BLIND_LOSS_UNKNOWN
        yield Reason(code, {}, (compared.newest.entry,), _SECTION)
        return
    left_psi = margin.median_psi - margin.rule_margin_psi
    if blind.loss_psi is None or not blind.loss_psi <= left_psi:
        numbers: dict[str, Number] = {"loss_psi": blind.loss_psi, "left_psi": left_psi}
        yield Reason(ReasonCode.BLIND_LOSS_ABOVE_MARGIN, numbers, (), _SECTION)


def _beside(evidence: Evidence) -> Iterator[Reason]:
    """Return what is said beside any statement: the margin, the index, how readings were made."""
    yield from _margin_reason(evidence)
    yield from evidence.measured.notes
    if evidence.profile is not None and evidence.profile.judged_on == "low_day" and evidence.measured.margin:
        yield Reason(ReasonCode.LOW_DAY_NOT_JUDGED, {}, (), _SECTION)
    compared, newest = evidence.compared, evidence.newest
    if compared is None:
        return
    yield from compared.notes
    if newest is not None:
        yield from newest.static.notes
        yield from newest.notes
        numbers: dict[str, Number] = {"index": newest.index, "sigma": newest.sigma}
        if evidence.earlier:
            numbers["earlier"] = evidence.earlier[-1].index
        yield Reason(ReasonCode.DRAIN_INDEX, numbers, (newest.test.entry,), "4")
    yield from _reading_notes(evidence)
    yield from _set_points(evidence)
    yield from _circumstances(evidence, compared)


def _circumstances(evidence: Evidence, compared: Comparisons) -> Iterator[Reason]:
    newest = evidence.newest
    if evidence.left_out:
        yield Reason(ReasonCode.OLDER_TESTS_LEFT_OUT, {"tests": evidence.left_out}, (), "9")
    if newest is not None and newest.level_psi != 0:
        numbers: dict[str, Number] = {"correction_psi": -newest.level_psi}
        yield Reason(ReasonCode.TANK_LEVEL_CORRECTED, numbers, (newest.test.entry,), "2")
    if evidence.gauge_sigma_psi > 0:
        numbers = {"sigma_psi": evidence.gauge_sigma_psi}
        yield Reason(ReasonCode.GAUGE_REPLACED, numbers, (compared.newest.entry,), "1")
    if evidence.supply.kind == "fire_pump":
        yield Reason(ReasonCode.PUMP_INDEX_ONLY, {}, (), "2")


def _margin_reason(evidence: Evidence) -> Iterator[Reason]:
    margin = evidence.measured.margin
    if margin is None:
        return
    test, design = evidence.measured.flow_test, evidence.system.design
    numbers: dict[str, Number] = {
        "margin_psi": margin.median_psi,
        "low_psi": margin.low_psi,
        "high_psi": margin.high_psi,
        "rule_margin_psi": margin.rule_margin_psi,
        "available_psi": margin.median_psi + margin.required_psi,
        "required_psi": margin.required_psi,
        "demand_flow_gpm": margin.demand_flow_gpm,
        "hose_outside_gpm": 0.0 if design is None else design.hose_outside_gpm,
        "basis": margin.basis,
    }
    if test is not None:
        numbers["performed_on"] = test.performed_on.isoformat()
    yield Reason(ReasonCode.MARGIN_MEASURED, numbers, margin.entries, "2")


def _reading_notes(evidence: Evidence) -> Iterator[Reason]:
    compared, instruments = evidence.compared, evidence.instruments
    if compared is None or compared.newest.residual is None:
        return
    reading, entries = compared.newest.residual, (compared.newest.entry,)
    heap = instruments.heaps.get(id(reading))
    gauge = instruments.gauge(reading)
    recorded = None if gauge is None else gauge.division_psi
    if heap is not None and (recorded is None or heap > recorded * 1.001):
        yield Reason(ReasonCode.HEAPED_READINGS, {"step_psi": heap}, entries, "1")
    if instruments.division_psi(reading) is None:
        yield Reason(ReasonCode.DIVISION_UNKNOWN, {"assumed_psi": constants.UNKNOWN_DIVISION_PSI}, entries, "1")
    before = compared.newest.static_before
    if before is not None and reading.exact_psi > before.exact_psi:
        numbers: dict[str, Number] = {"residual_psi": reading.psi, "static_psi": before.psi}
        yield Reason(ReasonCode.RESIDUAL_ABOVE_STATIC, numbers, entries, "4")


def _set_points(evidence: Evidence) -> Iterator[Reason]:
    """Return where a pressure behind a reducing valve is off its set point, beyond twice its error and 3 psi."""
    compared, supply = evidence.compared, evidence.supply
    if compared is None or supply.pressure_reducing_valve == "none":
        return
    newest = compared.newest
    pairs = (
        ("static", newest.static_before, supply.prv_static_psi),
        ("residual", newest.residual, supply.prv_residual_psi),
    )
    for of, reading, set_psi in pairs:
        if reading is None or set_psi is None:
            continue
        limit_psi = max(2 * evidence.instruments.sigma_psi(reading), 3.0)
        if abs(reading.psi - set_psi) > limit_psi:
            numbers: dict[str, Number] = {"of": of, "read_psi": reading.psi, "set_psi": set_psi}
            yield Reason(ReasonCode.SET_POINT_DIFFERS, numbers, (newest.entry,), "2")
