"""Every code has a sentence; every number stands in it with its unit; nothing forbidden is said."""

from __future__ import annotations

import inspect
import itertools
import re

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.assessment import codes, comparable
from fieldlog.assessment.codes import CannotShow, CheckCode, NextCode, ReasonCode
from fieldlog.procedures.questions import Question
from fieldlog.records.statement import Number, Reason
from fieldlog.units import SiteUnits
from fieldlog.wording import notices
from fieldlog.wording.questions import question_sentence
from fieldlog.wording.reasons import SENTENCES, reason_sentence, reason_with_entries
from fieldlog.wording.steps import cannot_show_sentence, next_sentence, refusal_sentence, what_to_check
from fieldlog.wording.templates import places_of
from tests.wording.forbidden import forbidden_in, is_plain

UNITS = (SiteUnits(), SiteUnits(pressure="bar", flow="L/min", length="m"), SiteUnits(pressure="kPa", flow="L/min"))
TEXTS: dict[str, str] = {
    "valve": "PIV-3", "found": "shut", "left": "partly", "gauge": "G-7", "began_at": "2026-03-04T10:15:00+01:00",
    "against": "acceptance", "basis": "flow test", "performed_on": "2019-03-12", "of": "static", "now": "running",
    "earlier": "none", "kind": "fire_pump", "place": "sole feed", "at": "street", "which": "bell",
    "static_state": "off", "residual_state": "running", "changed_on": "2021-05-04",
    "conditions": "fully_open, gauge_tap", "because": "the drain was altered",
}  # fmt: skip
ESTIMATES = {
    ReasonCode.BELOW_DEMAND, ReasonCode.MARGIN_MEASURED, ReasonCode.MARGIN_LOW_BOUND, ReasonCode.EXTRAPOLATED,
    ReasonCode.INSIDE_HOSE_UNKNOWN, ReasonCode.HOSE_THROUGH_ALL, ReasonCode.ELEVATION_MISSING,
    ReasonCode.STATIC_OUTSIDE_BAND, ReasonCode.RESIDUAL_OUTSIDE_BAND, ReasonCode.DESIGN_CURVE_ONLY,
    ReasonCode.BLIND_LOSS_ABOVE_MARGIN, ReasonCode.GAUGE_UNLIKE_PAST, ReasonCode.GAUGE_REPLACED,
}  # fmt: skip


def numbers_named_beside(code: ReasonCode) -> set[str]:
    """Return the names that the module of codes states beside a reason, or above it where they need the room."""
    lines = inspect.getsource(codes).splitlines()
    place = next(place for place, line in enumerate(lines) if f' = "{code.value}"' in line)
    said = lines[place].partition("#")[2]
    if not said:
        above = itertools.takewhile(lambda line: line.strip().startswith("#"), reversed(lines[:place]))
        said = " ".join(line.strip(" #") for line in reversed(list(above)))
        said = said if "," in said else ""
    names = [name.strip().rstrip("?") for name in said.partition(":")[0].split(",")]
    return {name for name in names if re.fullmatch(r"[a-z_]+", name)}


def sample(code: ReasonCode) -> dict[str, Number]:
    names = places_of(SENTENCES[code])
    found: dict[str, Number] = {}
    for place, name in enumerate(sorted(names)):
        if name == "is_confirmed":
            found[name] = True
        elif name in {"reduction", "increase", "share", "limit_share", "drop"}:
            found[name] = 0.61 + place / 50
        elif name == "earlier" and code == ReasonCode.DRAIN_INDEX:
            found[name] = 0.271
        else:
            found[name] = TEXTS.get(name, 23.5 + 7 * place)
    return found


@pytest.mark.parametrize("code", ReasonCode)
def test_every_number_of_a_reason_has_a_place_in_its_sentence(code: ReasonCode) -> None:
    assert places_of(SENTENCES[code]) == numbers_named_beside(code)


@pytest.mark.parametrize("units", UNITS, ids=lambda units: units.pressure)
@pytest.mark.parametrize("code", ReasonCode)
def test_every_reason_reads_as_a_sentence_in_the_readers_units(code: ReasonCode, units: SiteUnits) -> None:
    numbers = sample(code)
    sentence = reason_sentence(Reason(code, numbers, (12,)), units)
    assert is_plain(sentence), sentence
    assert not forbidden_in(sentence), sentence
    assert "not known" not in sentence
    for suffix, unit in (("_psi", units.pressure), ("_gpm", units.flow), ("_s", " s"), ("hours", " h")):
        with_unit = sum(1 for name in numbers if name.endswith(suffix))
        assert sentence.count(unit) >= with_unit, sentence


@pytest.mark.parametrize("code", sorted(ESTIMATES))
def test_every_estimate_is_called_one(code: ReasonCode) -> None:
    assert "estimate" in reason_sentence(Reason(code, sample(code)), UNITS[0])


@pytest.mark.parametrize("code", ReasonCode)
def test_a_reason_without_its_numbers_still_reads(code: ReasonCode) -> None:
    sentence = reason_sentence(Reason(code, {}), UNITS[0])
    assert is_plain(sentence), sentence


numbers = st.none() | st.floats(allow_nan=True, allow_infinity=True) | st.integers(-9, 9999) | st.booleans()


@given(st.sampled_from(list(ReasonCode)), st.data(), st.sampled_from(UNITS))
def test_no_numbers_make_a_sentence_say_what_is_forbidden(
    code: ReasonCode, data: st.DataObject, units: SiteUnits
) -> None:
    drawn = {name: data.draw(numbers | st.sampled_from(list(TEXTS.values()))) for name in places_of(SENTENCES[code])}
    sentence = reason_with_entries(Reason(code, drawn, (3, 12)), units)
    assert not forbidden_in(sentence)
    assert "{" not in sentence
    assert sentence.endswith("(#3, #12)")


def test_codes_inside_a_sentence_have_words_and_typed_names_stay_as_typed() -> None:
    said = reason_sentence(Reason(ReasonCode.PUMP_STATE_DIFFERS, {"now": "jockey", "earlier": "off"}), UNITS[0])
    assert said == "The pump was in another state: jockey pump running now, pump off at the earlier test."
    said = reason_sentence(Reason(ReasonCode.VALVE_FOUND_NOT_OPEN, {"valve": "bell", "found": "partly"}), UNITS[0])
    assert said == "Valve bell was found part shut."
    said = reason_sentence(
        Reason(ReasonCode.CONDITIONS_NOT_STATED, {"conditions": "fully_open, took_full_flow, gauge_tap"}), UNITS[0]
    )
    assert said == (
        "Not stated, and taken as unchanged: whether the drain was fully open, whether the outlet took full "
        "flow and "
        "where the gauge taps."
    )


def test_every_condition_that_may_be_unstated_has_words() -> None:
    conditions = re.findall(r'yield "([a-z_]+)"', inspect.getsource(comparable))
    assert "fully_open" in conditions
    for condition in conditions:
        said = reason_sentence(Reason(ReasonCode.CONDITIONS_NOT_STATED, {"conditions": condition}), UNITS[0])
        assert not said.endswith(f": {condition}."), condition
        assert "_" not in said


def test_a_uid_is_printed_by_its_name() -> None:
    gauge = {"gauge": "u-1", "read_psi": 64.0, "low_psi": None, "high_psi": 60.0}
    said = reason_sentence(Reason(ReasonCode.GAUGE_OUTSIDE_RANGE, gauge), UNITS[0], {"u-1": "Riser gauge"})
    assert said == "Gauge Riser gauge read 64 psi, outside its normal range up to 60 psi."


def test_a_blind_loss_without_end_has_its_own_sentence() -> None:
    said = reason_sentence(Reason(ReasonCode.BLIND_LOSS_ABOVE_MARGIN, {"loss_psi": None, "left_psi": 7.9}), UNITS[0])
    assert said == (
        "No loss short of a shut valve would surely have shown in these tests; the estimated margin leaves 7 psi."
    )


@pytest.mark.parametrize("code", NextCode)
def test_every_next_step_reads_on_from_the_words_next_step(code: NextCode) -> None:
    sentence = f"Next step: {next_sentence(code)}."
    assert is_plain(sentence)
    assert not forbidden_in(sentence)


@pytest.mark.parametrize("code", CannotShow)
def test_every_limit_has_a_sentence(code: CannotShow) -> None:
    assert is_plain(cannot_show_sentence(code))
    assert not forbidden_in(cannot_show_sentence(code))


def test_every_place_to_look_has_words_in_the_order_given() -> None:
    said = what_to_check(tuple(CheckCode))
    assert len(set(said)) == len(CheckCode)
    assert not any(forbidden_in(one) for one in said)
    assert what_to_check(("strainer", "season")) == ("The strainer", "The season")


def test_the_standing_notices_say_nothing_forbidden() -> None:
    for name, said in vars(notices).items():
        if name.isupper() and isinstance(said, str):
            assert not forbidden_in(said), name
    for words in ("authority having jurisdiction", "Local codes", "manufacturers' data", "licensed practice"):
        assert words in notices.DEFER
    assert notices.DEFER in notices.EVERY_REPORT


@pytest.mark.parametrize(
    ("via", "source", "notice"),
    [
        ("tablet", "witnessed", ""),
        ("form", "witnessed", notices.NO_DEVICE_SIGNATURE),
        ("import", "witnessed", notices.IMPORTED),
        ("tablet", "old record", notices.IMPORTED),
        ("form", "information sign", notices.INFORMATION_SIGN),
    ],
)
def test_how_an_entry_came_in_is_said_where_it_limits_it(via: str, source: str, notice: str) -> None:
    assert notices.origin_notice(via, source) == notice


@pytest.mark.parametrize(
    ("code", "shown"),
    [
        ("above_range", {"range_psi": "200"}),
        ("below_zero", {}),
        ("unit_slip", {"between": "psi and bar", "earlier_psi": "65"}),
        ("residual_above_static", {}),
        ("static_after_below_before", {}),
        ("above_relief_setting", {}),
        ("not_comparable", {}),
    ],
)
def test_every_question_about_an_odd_reading_reads_as_one(code: str, shown: dict[str, str]) -> None:
    said = question_sentence(Question("static_before", code, shown), UNITS[1])
    assert is_plain(said), said
    assert not forbidden_in(said)


@pytest.mark.parametrize(
    ("code", "field", "message", "said"),
    [
        ("input", "residual", "residual: no unit; add psi", "Residual: no unit; add psi."),
        ("input", "residual", "no unit; add psi", "Residual: no unit; add psi."),
        ("conflict", "uid", "", "Already saved with another text; correct it instead."),
    ],
)
def test_a_refusal_names_its_field_and_mend(code: str, field: str, message: str, said: str) -> None:
    assert refusal_sentence(code, field, message) == said
