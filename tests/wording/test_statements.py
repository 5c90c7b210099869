"""The first paragraph of a statement: state, size, certainty, next step; numbers never rounded to the bright "
"side."""

from __future__ import annotations

import re
from dataclasses import replace
from datetime import date

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.assessment.codes import NextCode, ReasonCode
from fieldlog.records.statement import (
    BlindLoss,
    ExpectedBand,
    Margin,
    Reason,
    Statement,
    SystemStatement,
    TenPercent,
    Trend,
)
from fieldlog.units import SiteUnits, pressure_in
from fieldlog.wording.statements import (
    blind_loss_sentence,
    demand_sentence,
    digits_of,
    expected_sentence,
    margin_sentence,
    standing_sentence,
    statement_sentence,
    ten_percent_doubt_sentence,
    ten_percent_sentence,
    trend_sentence,
)
from tests.wording.forbidden import forbidden_in, is_plain

PSI = SiteUnits()
BAR = SiteUnits(pressure="bar", flow="L/min", length="m")
UNITS = (PSI, BAR, SiteUnits(pressure="kPa", flow="L/min"))
MARGIN = Margin(11.8, 6.8, 16.8, 5.0, 620.0, 46.5, "flow test", (12,))
SAID = SystemStatement(
    system="s1", profile="p1", statement=Statement.UNPROVEN,
    reasons=(Reason(ReasonCode.FEW_COMPARABLE, {"tests": 1}),),
    next=(NextCode.FORWARD_FLOW_TEST, NextCode.NEXT_TEST), ten_percent=(), through_number=8127,
    as_of=date(2026, 10, 12), valid_until=date(2027, 1, 3), version="1", margin_low_day=MARGIN,
)  # fmt: skip
ACCEPTANCE = TenPercent("acceptance", 0.1555, True, 12)
PREVIOUS = TenPercent("previous", 0.1, True, 6904)


def test_the_first_paragraph_holds_state_size_certainty_reason_and_next_step() -> None:
    assert statement_sentence(SAID, PSI) == (
        "Unproven. Measured margin at the recorded design demand on a low day: 11 psi (estimated band 6 to 16), "
        "by the "
        "newest flow test. Comparable main drain tests on record: 1; two are needed. "
        "Next step: a forward-flow test at the recorded demand."
    )


def test_a_change_begins_with_what_changed() -> None:
    changed = replace(
        SAID, statement=Statement.CHANGED, ten_percent=(ACCEPTANCE, PREVIOUS), next=(NextCode.FIND_CAUSE,)
    )
    assert statement_sentence(changed, BAR) == (
        "Changed. Residual is 15.6 % below acceptance and 10.0 % below the previous test. The ten percent "
        "criterion "
        "asks for the cause. Measured margin at the recorded design demand on a low day: 0.8 bar (estimated "
        "band 0.4 "
        "to 1.1), by the newest flow test. Next step: find the cause of the lower residual."
    )


def test_a_suspected_impairment_speaks_of_nothing_else() -> None:
    reason = Reason(ReasonCode.RESIDUAL_NEAR_ZERO, {"residual_psi": 4.0, "limit_psi": 6.8})
    said = replace(SAID, statement=Statement.SUSPECTED_IMPAIRMENT, reasons=(reason,), next=(NextCode.CHECK_VALVES_NOW,))
    assert statement_sentence(said, PSI) == (
        "Suspected impairment. Residual was 4 psi at full flow; 6.8 psi or less counts as nearly none. "
        "Next step: check every valve on the feed before you leave."
    )


def test_an_earlier_worse_statement_is_printed_with_not_comparable() -> None:
    said = replace(SAID, statement=Statement.NOT_COMPARABLE, earlier=Statement.CHANGED)
    assert statement_sentence(said, PSI).startswith(
        "Not comparable. The earlier statement stands until a comparable test: changed. "
    )


@pytest.mark.parametrize(
    ("compared", "said"),
    [
        ((ACCEPTANCE,), "Residual is 15.6 % below acceptance. The ten percent criterion asks for the cause."),
        (
            (TenPercent("acceptance", 0.0996, False, 12), TenPercent("previous", -0.034, False, 13)),
            "Residual is 9.96 % below acceptance and 3.4 % above the previous test. "
            "The ten percent criterion is not reached.",
        ),
        (
            (TenPercent("new reference", 0.02, False, 12), TenPercent("best", 0.21, None, 13)),
            "Residual is 2.0 % below the new reference and 21.0 % below the best on file. "
            "The ten percent criterion is not reached.",
        ),
        (
            (TenPercent("best", 0.21, None, 13),),
            "Residual is 21.0 % below the best on file. This comparison is shown only; it drives nothing.",
        ),
        (
            (TenPercent("previous", 0.0, False, 13),),
            "Residual is equal to the previous test. The ten percent criterion is not reached.",
        ),
        (
            (TenPercent("acceptance", 0.12, False, 12),),
            "Residual is 12.0 % below acceptance. The ten percent criterion is not reached.",
        ),
        ((), "There is no earlier comparable residual to compare with."),
    ],
)  # fmt: skip
def test_the_ten_percent_criterion_is_said_as_it_was_decided(compared: tuple[TenPercent, ...], said: str) -> None:
    assert ten_percent_sentence(compared) == said


def test_reading_error_stands_beside_the_criterion_and_lifts_nothing() -> None:
    said = ten_percent_doubt_sentence(replace(ACCEPTANCE, sigma=0.021))
    assert said.startswith("Reading error alone can move the comparison with acceptance by 4.2 percentage points")
    assert "estimate" in said
    assert ten_percent_doubt_sentence(ACCEPTANCE) == ""
    assert ten_percent_doubt_sentence(replace(ACCEPTANCE, sigma=float("nan"))) == ""


def test_the_blind_loss_is_said_with_what_a_finer_gauge_would_buy() -> None:
    blind = BlindLoss(11.2, 8.4, 600.0, 4)
    assert blind_loss_sentence(blind, PSI) == (
        "A loss of up to 12 psi (estimate) at the design demand would not have shown. With a test gauge read to "
        "0.5 psi: 9 psi (estimate). A forward-flow test at 600 gpm would measure it."
    )
    assert "With a test gauge read to 0.03 bar: 0.6 bar" in blind_loss_sentence(blind, BAR)
    assert "test gauge" not in blind_loss_sentence(replace(blind, with_half_psi_gauge_psi=11.1), PSI)


def test_a_blind_loss_without_end_is_said_in_words() -> None:
    said = blind_loss_sentence(BlindLoss(None, None, 600.0, 3), PSI)
    assert said.startswith("No loss short of a shut valve would surely have shown in these tests.")
    assert any(character.isdigit() for character in said.split(".")[-2])


def test_a_margin_below_nought_is_called_short() -> None:
    said = margin_sentence(replace(MARGIN, median_psi=-0.3, low_psi=-5.3, high_psi=4.7), PSI)
    assert "−1 psi, short of what is required (estimated band −6 to 4)" in said


def test_a_margin_from_the_design_curve_is_an_estimate_that_nobody_measured() -> None:
    said = margin_sentence(replace(MARGIN, basis="design supply curve"), PSI)
    assert said.startswith("Estimated margin")
    assert "no flow test on file measured it" in said


def test_the_demand_is_said_as_recorded() -> None:
    assert demand_sentence(MARGIN, PSI) == (
        "The recorded design demand is 620 gpm at 46.5 psi at the base of riser; the rule profile wants 5 psi "
        "above "
        "it. The demand is as recorded; it was not recalculated."
    )


def test_what_a_statement_rests_on_is_said() -> None:
    assert standing_sentence(SAID) == (
        "Judged as of 12 October 2026 on entries up to #8127; time alone changes it on 3 January 2027."
    )
    assert "Adopted standard not recorded" in standing_sentence(replace(SAID, profile=None))


def test_a_trend_is_two_figures_without_a_word_drawn_from_them() -> None:
    said = trend_sentence(Trend("static_psi", -1.72, -2.41, -0.93, 0.031, 8), PSI)
    assert said == (
        "Static over 8 dates: −1.72 psi a year by Theil-Sen (estimated band −2.41 to −0.93); Mann-Kendall p = 0.031."
    )
    assert "declin" not in said
    assert trend_sentence(Trend("drain_index", 0.0123, 0.001, 0.02, 0.0002, 6), PSI) == (
        "Drain index over 6 dates: 0.0123 a year by Theil-Sen (estimated band 0.0010 to 0.0200); "
        "Mann-Kendall p < 0.001."
    )


def test_the_expected_band_is_an_estimate_of_where_the_next_readings_fall() -> None:
    said = expected_sentence(ExpectedBand(4, 62.4, 70.2, 50.1, 58.8), PSI)
    assert said == (
        "Expected in April, by an estimate from the earlier tests: static 62 to 71 psi, residual 50 to 59 psi."
    )


psi = st.floats(-60, 120)
margins = st.builds(
    lambda median, below, above, rule, basis: Margin(
        median, median - below, median + above, rule, 620.0, 46.5, basis, (12,)
    ),
    psi, st.floats(0.5, 30), st.floats(0.5, 30), st.sampled_from([0.0, 5.0, 9.5, 10.0]),
    st.sampled_from(["flow test", "design supply curve", "forward-flow test", "pump test"]),
)  # fmt: skip
compared = st.builds(
    lambda against, reduction: TenPercent(against, reduction, None if against == "best" else reduction >= 0.1, 12),
    st.sampled_from(["acceptance", "previous", "best"]), st.floats(-0.9, 1),
)  # fmt: skip
statements = st.builds(
    replace, st.just(SAID),
    statement=st.sampled_from(Statement), earlier=st.none() | st.sampled_from(Statement),
    margin_low_day=st.none() | margins, margin_on_day=st.none() | margins,
    ten_percent=st.lists(compared, max_size=3).map(tuple),
    reasons=st.lists(st.sampled_from(ReasonCode).map(Reason), max_size=2).map(tuple),
    next=st.lists(st.sampled_from(NextCode), max_size=2).map(tuple),
    blind_loss=st.none() | st.builds(BlindLoss, st.none() | st.floats(0.01, 90), st.none() | st.floats(0.01, 90),
                                     st.just(600.0), st.integers(1, 9)),
)  # fmt: skip


@given(statements, st.sampled_from(UNITS))
def test_any_statement_reads_plainly_and_says_nothing_forbidden(said: SystemStatement, units: SiteUnits) -> None:
    sentence = statement_sentence(said, units)
    assert sentence.startswith(f"{said.statement.value.capitalize()}.")
    assert is_plain(sentence), sentence
    assert not forbidden_in(sentence), sentence
    if "margin at the recorded" in sentence:
        assert "estimate" in sentence


@given(margins, st.sampled_from(UNITS), st.integers(0, 2))
def test_no_number_of_a_margin_is_rounded_up(margin: Margin, units: SiteUnits, finer: int) -> None:
    said = margin_sentence(margin, units, finer=finer).replace("−", "-")
    shown = re.search(r": (\S+) \S+?,? .*\(estimated band (\S+) to (\S+)\)", said)
    assert shown is not None, said
    for text, truth_psi in zip(shown.groups(), (margin.median_psi, margin.low_psi, margin.high_psi), strict=True):
        assert float(text) <= pressure_in(truth_psi, units.pressure) + 1e-6


def shown_loss_and_margin(margin: Margin, loss_psi: float, units: SiteUnits) -> tuple[float, float]:
    blind = BlindLoss(loss_psi, None, 600.0, 3)
    finer = digits_of(replace(SAID, margin_low_day=margin, blind_loss=blind), units)
    loss = re.search(r"up to (\S+)", blind_loss_sentence(blind, units, finer=finer))
    available = re.search(r": (\S+) ", margin_sentence(margin, units, finer=finer))
    assert loss is not None
    assert available is not None
    return float(loss[1]), float(available[1].replace("−", "-"))


def test_more_digits_are_shown_where_whole_psi_would_contradict_the_statement() -> None:
    margin = replace(MARGIN, median_psi=11.9, low_psi=6.9, rule_margin_psi=0.0)
    assert shown_loss_and_margin(margin, 11.1, PSI) == (11.1, 11.9)
    assert shown_loss_and_margin(margin, 8.2, PSI) == (9.0, 11.0)


@given(margins, st.floats(0.004, 3), st.sampled_from(UNITS))
def test_a_blind_loss_within_the_margin_is_printed_within_it(margin: Margin, room_psi: float, units: SiteUnits) -> None:
    loss_psi = margin.median_psi - margin.rule_margin_psi - room_psi
    if loss_psi > 0:
        loss, available = shown_loss_and_margin(margin, loss_psi, units)
        rule = pressure_in(margin.rule_margin_psi, units.pressure)
        assert loss + rule <= available + {"psi": 0.003, "bar": 0.0003, "kPa": 0.03}[units.pressure]


@given(margins, st.floats(0.004, 30), st.sampled_from(UNITS))
def test_a_blind_loss_above_the_margin_is_never_printed_within_it(
    margin: Margin, excess_psi: float, units: SiteUnits
) -> None:
    loss_psi = margin.median_psi - margin.rule_margin_psi + excess_psi
    if loss_psi > 0:
        loss, available = shown_loss_and_margin(margin, loss_psi, units)
        assert loss + pressure_in(margin.rule_margin_psi, units.pressure) >= available - 1e-6
