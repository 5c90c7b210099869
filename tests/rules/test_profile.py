"""From a catalogue to an approved profile: overrides, approval row by row, and what the accessors read."""

from __future__ import annotations

import math
from datetime import date
from fractions import Fraction
from typing import Any

import msgspec
import pytest

from fieldlog.canonical import canonical_text
from fieldlog.errors import InputError
from fieldlog.procedures.rule_profile import RuleProfileBody, check_rule_profile, rule_profile
from fieldlog.records.criteria import MarginRule, RelativeToBaseline, TimeLimit
from fieldlog.records.rules import Approval, Frequency, Override, Rule, RuleProfile, is_required
from fieldlog.rules.loader import Adoption, load, local_examples, resolve
from fieldlog.rules.row_fields import field_of, with_field
from fieldlog.units import Pressure

UID = "5f0c9a3e-8f53-4a0e-9d0a-3b1f7a5f9c21"
EDITION_2017 = load("us_inspection_2017")


def adoption(*rows: str) -> Adoption:
    return Adoption(
        approved_by="A. Licensed",
        approved_on=date(2019, 5, 14),
        in_force_from=date(2019, 6, 3),
        judged_on="low_day",
        approved_rows=rows,
    )


def change(rule: str, field: str, value: Any) -> Override:
    return Override(rule=rule, field=field, value=value, reason="the authority having jurisdiction says so")


def profile_of(*rows: str, overrides: tuple[Override, ...] = (), catalogue: str = "us_inspection_2017") -> RuleProfile:
    values = resolve(load(catalogue), adoption(*rows), overrides)
    body = msgspec.json.decode(canonical_text(msgspec.to_builtins(values)), type=RuleProfileBody)
    check_rule_profile(body)
    return rule_profile(body, UID, 37)


def test_a_profile_carries_its_entry_and_where_its_values_come_from() -> None:
    profile = profile_of("main_drain.each")
    assert (profile.uid, profile.entry) == (UID, 37)
    assert (profile.standard, profile.edition) == ("NFPA 25", "2017")
    assert profile.catalogue_sha256 == EDITION_2017.sha256


def test_only_the_rows_somebody_checked_are_required() -> None:
    profile = profile_of("main_drain.each", "main_drain.ten_percent")
    required = {rule.id for rule in profile.rules if is_required(rule)}
    assert required == {"main_drain.each", "main_drain.ten_percent"}


def test_an_approved_row_says_by_whom_when_and_what_it_was_before() -> None:
    rule = profile_of("main_drain.ten_percent").rule("main_drain.ten_percent")
    assert rule is not None
    assert rule.approval == Approval(by="A. Licensed", on=date(2019, 5, 14), before="from memory")


def test_a_row_can_t_be_called_approved_without_a_name() -> None:
    with pytest.raises(ValueError, match="approval"):
        Rule(id="sign", item="Sign", activity="inspection", mark="approved", source="invented")


def test_ten_percent_is_an_exact_ten() -> None:
    assert profile_of().reduction_percent() == Fraction(10)


def test_the_limits_of_the_us_profile_are_those_of_their_rows() -> None:
    # NFPA 72 (2022) 17.13.2: 90 s; NFPA 13 since 1980: five minutes; 14.3.1(15): 50 % longer delivery;
    # NFPA 25 (1998) 2-3.2: 3 % of full scale, every five years. Ten hours and 66 months are from memory.
    profile = profile_of()
    assert profile.alarm_limit_s("device") == 90
    assert profile.alarm_limit_s("bell") == 300
    assert profile.alarm_limit_s("total") == 100
    assert profile.delivery_increase_percent() == Fraction(50)
    assert profile.gauge_accuracy_percent_full_scale() == Fraction(3)
    assert profile.gauge_compare_months() == 60
    assert profile.valve_shut_limit_hours() == 10
    assert profile.flow_test_valid_months() == 66


def test_the_1998_edition_has_four_hours_for_a_shut_valve() -> None:
    assert profile_of(catalogue="us_inspection_1998").valve_shut_limit_hours() == 4  # from memory


def test_what_no_row_says_is_none() -> None:
    profile = profile_of(catalogue="us_fire_code")
    assert profile.reduction_percent() is None
    assert profile.flow_test_valid_months() is None
    assert profile.valve_shut_limit_hours() is None
    assert profile.alarm_limit_s("device") is None
    assert profile.alarm_limit_s("monitoring") is None
    assert profile.delivery_increase_percent() is None
    assert profile.delivery_limit_s(volume_gal=620.0) is None
    assert profile.gauge_accuracy_percent_full_scale() is None
    assert profile.gauge_compare_months() is None
    assert profile.margin_psi(38.0, 52.0) == 0.0
    assert profile.rule("main_drain.each") is None


def test_a_family_with_absolute_criteria_has_no_ten_percent() -> None:
    assert profile_of(catalogue="european_insurers").reduction_percent() is None
    assert profile_of(catalogue="au_service").reduction_percent() is None


@pytest.mark.parametrize(
    ("volume_gal", "hazard", "limit_s"),
    [
        (None, None, None),
        (500.0, None, None),  # NFPA 13: no limit up to 500 gal
        (620.0, None, 60),
        (750.0, None, 60),
        (760.0, None, None),
        (None, "ordinary 1", 50),  # by hazard: from memory
        (None, "extra", 45),
        (620.0, "high piled", 40),  # the strictest counts
    ],
)
def test_delivery_has_a_limit_only_where_volume_or_hazard_says_so(
    volume_gal: float | None, hazard: str | None, limit_s: float | None
) -> None:
    assert profile_of().delivery_limit_s(volume_gal, hazard) == limit_s


@pytest.mark.parametrize(
    ("example", "margin_psi"),
    [
        # Published local rules; required 38 psi, available 160 psi.
        ("margin_greater_of_ten_percent_or_10_psi", 16.0),
        ("margin_greater_of_five_percent_or_5_psi", 8.0),
        ("margin_5_psi", 5.0),
        ("margin_2_psi", 2.0),
        ("margin_10_psi", 10.0),
    ],
)
def test_a_local_margin_is_taken_from_its_example(example: str, margin_psi: float) -> None:
    overrides = local_examples()[example].overrides
    rows = {override.rule for override in overrides}
    assert profile_of(*rows, overrides=overrides).margin_psi(38.0, 160.0) == pytest.approx(margin_psi)


@pytest.mark.parametrize(("which_wins", "margin_psi"), [("greater", 9.5), ("lesser", 7.0), ("sum", 16.5)])
def test_a_margin_of_two_parts_says_which_counts(which_wins: str, margin_psi: float) -> None:
    margin = {
        "kind": "margin_rule", "absolute": {"value": "7", "unit": "psi"}, "percent": "25",
        "percent_of": "required", "which_wins": which_wins,
    }  # fmt: skip
    profile = profile_of("margin", overrides=(change("margin", "criteria.0", margin),))
    assert profile.margin_psi(38.0, 160.0) == pytest.approx(margin_psi)


def test_a_margin_in_bar_is_read_in_psi() -> None:
    overrides = (change("margin", "criteria.0.absolute", {"value": "0.5", "unit": "bar"}),)
    # 0.5 bar = 50 kPa; 6.894757 kPa a psi (NIST SP 811).
    assert profile_of("margin", overrides=overrides).margin_psi(38.0, 160.0) == pytest.approx(50 / 6.894757, rel=1e-6)


def test_a_margin_of_an_unknown_pressure_is_unknown_and_not_small() -> None:
    overrides = local_examples()["margin_greater_of_ten_percent_or_10_psi"].overrides
    assert math.isnan(profile_of("margin", overrides=overrides).margin_psi(38.0, math.nan))


def test_a_margin_of_two_parts_that_does_not_say_which_counts_is_refused() -> None:
    with pytest.raises(ValueError, match="which_wins"):
        MarginRule(absolute=Pressure(value="7", unit="psi"), percent="25", percent_of="required")


def test_a_percent_of_nothing_named_is_refused() -> None:
    with pytest.raises(ValueError, match="percent_of"):
        MarginRule(percent="25")


def test_an_override_changes_one_field_and_no_other() -> None:
    overrides = (change("main_drain.each", "frequency.every", 2),)
    changed = profile_of("main_drain.each", overrides=overrides, catalogue="us_occupational_safety")
    before = load("us_occupational_safety")
    rule = changed.rule("main_drain.each")
    assert rule is not None
    assert rule.frequency == Frequency(every=2, unit="year", anchor="last done")
    assert changed.rule("inspectors_test") == before.rule("inspectors_test")


def test_an_override_may_add_what_the_row_leaves_out() -> None:
    overrides = local_examples()["reports_filed_in_five_business_days"].overrides
    rule = profile_of("records.fire_code", overrides=overrides, catalogue="us_fire_code").rule("records.fire_code")
    assert rule is not None
    assert rule.record is not None
    assert (rule.record.keep_years, rule.record.filing_business_days) == (3, 5)


@pytest.mark.parametrize(
    ("rule", "field", "value"),
    [
        ("main_drain.every", "frequency.every", 2),  # no such row
        ("main_drain.each", "frequency.often", 2),  # no such field
        ("main_drain.each", "colour", "blue"),
        ("main_drain.each", "frequency.every", "two"),  # no such value
        ("main_drain.each", "frequency.every", 3),  # three years are not within nine to fifteen months
        ("main_drain.ten_percent", "criteria.4.percent", "12"),  # no such criterion
        ("main_drain.ten_percent", "criteria.0.percent", 12.5),  # a binary number
        ("main_drain.ten_percent", "mark", "read"),
        ("main_drain.ten_percent", "id", "main_drain.twelve_percent"),
        ("main_drain.ten_percent", "approval.by", "Nobody"),
    ],
)
def test_an_override_of_something_unknown_or_unfit_is_refused(rule: str, field: str, value: Any) -> None:
    with pytest.raises(InputError):
        resolve(EDITION_2017, adoption("main_drain.each", "main_drain.ten_percent"), (change(rule, field, value),))


def test_an_override_that_nobody_approved_is_refused() -> None:
    with pytest.raises(InputError, match="approved"):
        resolve(EDITION_2017, adoption("main_drain.each"), (change("main_drain.ten_percent", "note", "local"),))


def test_an_approved_row_that_does_not_exist_is_refused() -> None:
    with pytest.raises(InputError, match="no_such_row"):
        resolve(EDITION_2017, adoption("no_such_row"))


def test_overrides_within_one_another_are_refused() -> None:
    whole = change(
        "main_drain.ten_percent", "criteria.0", field_of(EDITION_2017.rule("main_drain.ten_percent"), "criteria.0")
    )
    part = change("main_drain.ten_percent", "criteria.0.percent", "12")
    with pytest.raises(InputError, match="twice"):
        resolve(EDITION_2017, adoption("main_drain.ten_percent"), (part, whole))


def test_a_field_that_is_not_set_can_t_be_read() -> None:
    with pytest.raises(InputError, match="frequency"):
        field_of(EDITION_2017.rule("main_drain.ten_percent"), "frequency.every")


def test_of_two_limits_the_strictest_counts() -> None:
    rows = list(EDITION_2017.rules)
    stricter = msgspec.structs.replace(
        EDITION_2017.rule("alarm.device_limit"),
        id="alarm.local",
        criteria=(TimeLimit(quantity="alarm_device", limit_s=75),),
    )
    profile = msgspec.structs.replace(profile_of(), rules=(*rows, stricter))
    assert profile.alarm_limit_s("device") == 75


def test_the_fall_of_a_static_and_the_turn_of_a_test_gauge_are_other_limits() -> None:
    of_static = RelativeToBaseline(percent="4", quantity="static", comparison=">=", against=("previous",))
    ten = msgspec.structs.replace(EDITION_2017.rule("main_drain.ten_percent"), id="static", criteria=(of_static,))
    five_years = EDITION_2017.rule("gauge_comparison.five_years")
    yearly = Frequency(every=1, unit="year", anchor="last done")
    test_gauge = msgspec.structs.replace(five_years, id="test_gauge", per="test gauge", frequency=yearly)
    profile = msgspec.structs.replace(profile_of(), rules=(*EDITION_2017.rules, ten, test_gauge))
    assert profile.reduction_percent() == Fraction(10)
    assert profile.gauge_compare_months() == 60


def test_a_profile_holds_from_its_first_to_its_last_day() -> None:
    profile = msgspec.structs.replace(profile_of(), in_force_until=date(2022, 9, 30))
    days = [date(2019, 6, 2), date(2019, 6, 3), date(2022, 9, 30), date(2022, 10, 1)]
    assert [profile.is_in_force(day) for day in days] == [False, True, True, False]


def test_a_later_catalogue_changes_nothing_in_an_approved_profile() -> None:
    # The body alone gives the profile: no catalogue is opened, and a sum no catalogue has is taken.
    stored = msgspec.to_builtins(resolve(EDITION_2017, adoption("main_drain.each")))
    stored["catalogue_id"], stored["catalogue_sha256"] = "a_catalogue_long_gone", "7" * 64
    body = msgspec.convert(stored, RuleProfileBody)
    check_rule_profile(body)
    assert rule_profile(body, UID, 37).reduction_percent() == Fraction(10)


def body_with(**changes: Any) -> RuleProfileBody:
    overrides = (change("main_drain.ten_percent", "criteria.0.percent", "8"),)
    stored = msgspec.to_builtins(resolve(EDITION_2017, adoption("main_drain.ten_percent"), overrides))
    return msgspec.convert(stored | changes, RuleProfileBody)


def test_the_body_of_a_resolved_profile_is_taken() -> None:
    body = body_with()
    check_rule_profile(body)
    assert rule_profile(body, UID, 41).reduction_percent() == Fraction(8)


def test_a_body_that_ends_before_it_begins_is_refused() -> None:
    with pytest.raises(InputError, match="in_force_until"):
        check_rule_profile(body_with(in_force_until="2018-04-05"))


def test_a_body_whose_rows_do_not_hold_its_overrides_is_refused() -> None:
    other = {"rule": "main_drain.ten_percent", "field": "criteria.0.percent", "value": "7", "reason": "local"}
    with pytest.raises(InputError, match="overrides"):
        check_rule_profile(body_with(overrides=[other]))


def test_a_body_whose_override_names_no_row_is_refused() -> None:
    other = {"rule": "main_drain.gone", "field": "criteria.0.percent", "value": "7", "reason": "local"}
    with pytest.raises(InputError, match="overrides"):
        check_rule_profile(body_with(overrides=[other]))


def test_a_body_whose_override_was_not_approved_is_refused() -> None:
    row = msgspec.to_builtins(EDITION_2017.rule("margin"))
    other = {"rule": "margin", "field": "item", "value": row["item"], "reason": "local"}
    with pytest.raises(InputError, match="approve"):
        check_rule_profile(body_with(overrides=[other]))


def test_a_body_with_a_row_twice_is_refused() -> None:
    row = msgspec.to_builtins(EDITION_2017.rule("margin"))
    with pytest.raises(InputError, match="twice"):
        check_rule_profile(body_with(rules=[row, row], overrides=[]))


@pytest.mark.parametrize(
    "changes",
    [
        {"rules": []},
        {"approved_by": ""},
        {"judged_on": "average_day"},
        {"catalogue_sha256": "7"},
        {"in_force_from": "2019-02-30"},
        {"colour": "blue"},
    ],
)
def test_a_body_of_another_shape_is_refused(changes: dict[str, Any]) -> None:
    with pytest.raises(msgspec.ValidationError):
        body_with(**changes)


def test_putting_a_field_back_leaves_the_row_as_it_was() -> None:
    rule = EDITION_2017.rule("main_drain.each")
    assert with_field(rule, "frequency.most", field_of(rule, "frequency.most")) == rule
