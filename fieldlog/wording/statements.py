"""The sentences of one statement: state, size, certainty, next step; and what the tests could not show."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from fieldlog.assessment.codes import ReasonCode
from fieldlog.records.statement import (
    BlindLoss,
    ExpectedBand,
    Margin,
    Statement,
    SystemStatement,
    TenPercent,
    Trend,
)
from fieldlog.units import SiteUnits
from fieldlog.wording.quantities import Reader, counted, day, listed, month_name, percent, rounded
from fieldlog.wording.reasons import reason_sentence, reason_with_entries
from fieldlog.wording.steps import next_sentence

_BASES = {
    "flow test": ("Measured margin", "by the newest flow test"),
    "forward-flow test": ("Measured margin", "by the newest forward-flow test"),
    "design supply curve": (
        "Estimated margin",
        "by the supply curve of the design record; no flow test on file measured it",
    ),
    "pump test": ("Measured margin", "by the newest pump test"),
}
_AGAINST = {
    "acceptance": "acceptance",
    "new reference": "the new reference",
    "previous": "the previous test",
    "best": "the best on file",
}


def statement_sentence(statement: SystemStatement, units: SiteUnits, names: Mapping[str, str] | None = None) -> str:
    """Return the first paragraph: state, size, certainty, next step.

    `names` gives what people call the gauges, systems and supplies that a reason names by uid.
    """
    parts = [state_sentence(statement), *_size_sentences(statement, units, names or {})]
    if statement.next:
        parts.append(f"Next step: {next_sentence(statement.next[0])}.")
    return " ".join(parts)


def state_sentence(statement: SystemStatement) -> str:
    """Return the state as a sentence of its own, with a worse earlier one that still stands."""
    sentence = f"{statement.statement.value.capitalize()}."
    if statement.earlier is not None:
        sentence += f" The earlier statement stands until a comparable test: {statement.earlier.value}."
    return sentence


def system_sentences(
    statement: SystemStatement, units: SiteUnits, names: Mapping[str, str] | None = None
) -> tuple[str, ...]:
    """Return the comparison with earlier tests, every reason and every finding, each with its entries."""
    compared = (
        ten_percent_sentence(statement.ten_percent),
        *(ten_percent_doubt_sentence(one) for one in statement.ten_percent if one.flagged),
    )
    # The flagged comparisons stand in the first sentence already, to the same digits.
    found = [one for one in (*statement.reasons, *statement.findings) if one.code != ReasonCode.TEN_PERCENT]
    said = (*compared, *(reason_with_entries(one, units, names) for one in found))
    return tuple(dict.fromkeys(sentence for sentence in said if sentence))


def _size_sentences(statement: SystemStatement, units: SiteUnits, names: Mapping[str, str]) -> list[str]:
    reasons = [reason_sentence(reason, units, names) for reason in statement.reasons[:1]]
    if statement.statement is Statement.SUSPECTED_IMPAIRMENT:
        return reasons
    margin = deciding_margin(statement)
    finer = digits_of(statement, units)
    size = [margin_sentence(margin, units, is_low_day=_is_low_day(statement), finer=finer)] if margin else []
    if statement.reasons and statement.reasons[0].code in {ReasonCode.BELOW_DEMAND, ReasonCode.MARGIN_MEASURED}:
        return size or reasons
    if statement.statement is Statement.CHANGED:
        if any(compared.flagged for compared in statement.ten_percent):
            reasons = [ten_percent_sentence(statement.ten_percent)]
        return [*reasons, *size]
    return [*size, *reasons]


def deciding_margin(statement: SystemStatement) -> Margin | None:
    """Return the margin of a low day, else that of the day of the test."""
    return statement.margin_low_day or statement.margin_on_day


def _is_low_day(statement: SystemStatement) -> bool:
    return statement.margin_low_day is not None


def digits_of(statement: SystemStatement, units: SiteUnits) -> int:
    """Return how many more digits this statement's pressures need, so that their print agrees with it."""
    margin = deciding_margin(statement)
    if margin is None:
        return 0
    blind = statement.blind_loss
    compared: list[tuple[tuple[float, ...], float]] = [
        ((margin.rule_margin_psi,), margin.low_psi),
        ((margin.rule_margin_psi,), margin.median_psi),
    ]
    if blind is not None and blind.loss_psi is not None:
        compared.append(((blind.loss_psi, margin.rule_margin_psi), margin.median_psi))
    met = [(parts, larger) for parts, larger in compared if sum(parts) <= larger]
    return max((Reader(units).digits_to_agree(parts, larger) for parts, larger in met), default=0)


def margin_sentence(margin: Margin, units: SiteUnits, *, is_low_day: bool = False, finer: int = 0) -> str:
    """Return the margin with its band and what it rests on; every pressure in it is rounded down."""
    noun, basis = _BASES.get(margin.basis, ("Estimated margin", f"by {margin.basis}"))
    reader = Reader(units)
    median = reader.estimate(margin.median_psi, "down", finer=finer)
    band = reader.margin_band(margin.low_psi, margin.high_psi, finer=finer)
    when = " on a low day" if is_low_day else ""
    short = ", short of what is required" if margin.median_psi < 0 else ""
    return f"{noun} at the recorded design demand{when}: {median}{short} (estimated band {band}), {basis}."


def demand_sentence(margin: Margin, units: SiteUnits) -> str:
    """Return the recorded demand that a margin is counted from."""
    reader = Reader(units)
    flow, required = reader.flow(margin.demand_flow_gpm), reader.pressure(margin.required_psi)
    sentence = f"The recorded design demand is {flow} at {required} at the base of riser"
    if margin.rule_margin_psi > 0:
        sentence += f"; the rule profile wants {reader.pressure(margin.rule_margin_psi)} above it"
    return f"{sentence}. The demand is as recorded; it was not recalculated."


def ten_percent_sentence(compared: Sequence[TenPercent]) -> str:
    """Return the comparison of the residual with earlier tests, and whether the criterion asks for the cause."""
    if not compared:
        return "There is no earlier comparable residual to compare with."
    sentence = f"Residual is {listed(_comparison(one) for one in compared)}."
    if any(one.flagged for one in compared):
        return f"{sentence} The ten percent criterion asks for the cause."
    if all(one.flagged is None for one in compared):
        return f"{sentence} This comparison is shown only; it drives nothing."
    return f"{sentence} The ten percent criterion is not reached."


def _comparison(one: TenPercent) -> str:
    against = _AGAINST.get(one.against, one.against)
    if one.reduction == 0:
        return f"equal to {against}"
    if one.reduction < 0:
        return f"{percent(-one.reduction, reaches=-one.reduction >= 0.1)} above {against}"
    return f"{percent(one.reduction, reaches=one.flagged)} below {against}"


def ten_percent_doubt_sentence(one: TenPercent) -> str:
    """Return how far reading error alone could move this comparison; empty when it is not known."""
    if one.sigma is None or not one.sigma > 0:
        return ""
    against = _AGAINST.get(one.against, one.against)
    points = rounded(200 * one.sigma, 1, "up")
    return (
        f"Reading error alone can move the comparison with {against} by {points} percentage points either way "
        "(an estimate, two standard deviations); it does not lift a flag."
    )


def blind_loss_sentence(blind: BlindLoss, units: SiteUnits, *, finer: int = 0) -> str:
    """Return the largest loss at the design demand that these tests could have missed, rounded up."""
    reader = Reader(units)
    flow = reader.flow(blind.demand_flow_gpm)
    measured = f"A forward-flow test at {flow} would measure it."
    half = "0.03 bar" if units.pressure == "bar" else reader.pressure(0.5)
    fine = blind.with_half_psi_gauge_psi
    finest = reader.estimate(fine, "up", finer=finer) if fine is not None else ""
    if blind.loss_psi is None:
        found = "No loss short of a shut valve would surely have shown in these tests."
    else:
        loss = reader.estimate(blind.loss_psi, "up", finer=finer)
        found = f"A loss of up to {loss} (estimate) at the design demand would not have shown."
        finest = "" if finest == loss else finest
    gain = f" With a test gauge read to {half}: {finest} (estimate)." if finest else ""
    return f"{found}{gain} {measured}"


def expected_sentence(band: ExpectedBand, units: SiteUnits) -> str:
    """Return where the next readings should fall."""
    static = _band(band.static_low_psi, band.static_high_psi, units)
    residual = _band(band.residual_low_psi, band.residual_high_psi, units)
    when = f" in {month_name(band.month)}" if band.month is not None else ""
    return f"Expected{when}, by an estimate from the earlier tests: static {static}, residual {residual}."


def _band(low_psi: float, high_psi: float, units: SiteUnits) -> str:
    reader = Reader(units)
    return f"{reader.bare_estimate(low_psi, 'down')} to {reader.estimate(high_psi, 'up')}"


def trend_sentence(trend: Trend, units: SiteUnits) -> str:
    """Return the two figures of a trend, without a word drawn from them."""
    slopes = (trend.slope_per_year, trend.slope_low_per_year, trend.slope_high_per_year)
    if trend.quantity == "static_psi":
        noun, unit = "Static", f" {units.pressure}"
        figures = [Reader(units).bare_estimate(slope, "nearest", finer=2) for slope in slopes]
    else:
        noun, unit = "Drain index", ""
        figures = [rounded(slope, 4) for slope in slopes]
    return (
        f"{noun} over {counted(trend.dates, 'date')}: {figures[0]}{unit} a year by Theil-Sen "
        f"(estimated band {figures[1]} to {figures[2]}); Mann-Kendall p {_p_value(trend.mann_kendall_p)}."
    )


def _p_value(p: float) -> str:
    return f"= {rounded(p, 3)}" if not p < 0.001 else "< 0.001"


def standing_sentence(statement: SystemStatement) -> str:
    """Return the day, the entries and the version that a statement rests on."""
    sentence = f"Judged as of {day(statement.as_of)} on entries up to #{statement.through_number}"
    if statement.valid_until is not None:
        sentence += f"; time alone changes it on {day(statement.valid_until)}"
    standard = "" if statement.profile is not None else " Adopted standard not recorded; nothing is due by a rule."
    return f"{sentence}.{standard}"
