"""What is due by the rows of each edition; windows by NFPA 25 3.7 as cited in test_windows."""

from __future__ import annotations

from dataclasses import replace
from datetime import date, timedelta
from fractions import Fraction
from typing import Any

import msgspec
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.assessment.due import DueItem, DueList, due_lists, profiles_in_force
from fieldlog.records.history import (
    AlarmTest,
    Drain,
    DrainTest,
    FlowTest,
    ForwardFlowTest,
    Gauge,
    GaugeComparison,
    GaugeReading,
    Reading,
    Repair,
    Supply,
    SupplyHistory,
    System,
    ValveFound,
    ValveStatusTest,
)
from fieldlog.records.rules import AppliesWhen, Frequency, Rule, RuleProfile, Trigger
from fieldlog.rules.loader import Adoption, load, resolve

AS_OF = date(2024, 9, 17)


def profile(edition: str = "2017", *approved: str, since: date = date(1990, 2, 3), **changes: Any) -> RuleProfile:
    name = edition if edition.startswith(("us_", "eu", "au_")) else f"us_inspection_{edition}"
    adoption = Adoption(
        approved_by="A. Licensed",
        approved_on=since,
        in_force_from=since,
        judged_on="low_day",
        approved_rows=approved,
    )
    values = msgspec.structs.asdict(resolve(load(name), adoption))
    return RuleProfile(**(values | {"uid": f"profile-{name}", "entry": 12} | changes))


def local_profile(*rules: Rule) -> RuleProfile:
    return profile("2017", rules=rules, uid="profile-local")


def psi(value: str, gauge: str | None = None) -> Reading:
    return Reading(psi=float(value), exact_psi=Fraction(value), value=value, unit="psi", gauge=gauge)


def drained(on: date, entry: int = 31, **changes: Any) -> DrainTest:
    plain = DrainTest(
        entry=entry,
        subject=f"test-{entry}",
        performed_on=on,
        drain="d",
        static_before=psi("71"),
        residual=psi("58"),
    )
    return replace(plain, **changes)


def wet(uid: str = "north", **changes: Any) -> System:
    return replace(System(uid=uid, entry=7, name=f"{uid} riser", type="wet"), **changes)


def history(*systems: System, profiles: tuple[RuleProfile, ...] = (), **changes: Any) -> SupplyHistory:
    supply = changes.pop("supply", Supply(uid="main", entry=5, name="street main", kind="public_main"))
    return replace(SupplyHistory(site="site", supply=supply, systems=systems, profiles=profiles), **changes)


def items(held: SupplyHistory, rule: str, as_of: date = AS_OF) -> list[DueItem]:
    return [item for due in due_lists(held, as_of) for item in due.items if item.rule == rule]


def only(held: SupplyHistory, rule: str, as_of: date = AS_OF) -> DueItem:
    (item,) = items(held, rule, as_of)
    return item


def one_list(held: SupplyHistory) -> DueList:
    (due,) = due_lists(held, AS_OF)
    return due


# --- Profiles ----------------------------------------------------------------------------------------------------


def test_without_a_profile_nothing_is_due() -> None:
    assert due_lists(history(wet(drain_tests=(drained(date(2011, 3, 4)),))), AS_OF) == ()


def test_a_profile_out_of_force_asks_nothing() -> None:
    ended = profile("2011", in_force_until=date(2019, 6, 2))
    assert due_lists(history(wet(), profiles=(ended,)), AS_OF) == ()


def test_each_profile_gives_its_own_list_and_nothing_is_merged() -> None:
    held = history(
        wet(drain_tests=(drained(date(2023, 11, 8)),)), profiles=(profile(), profile("us_occupational_safety"))
    )
    lists = due_lists(held, AS_OF)
    assert [due.standard for due in lists] == ["NFPA 25", "29 CFR 1910.159"]
    assert [item.rule for due in lists for item in due.items].count("main_drain.each") == 2


def test_an_old_test_is_judged_by_the_profile_of_its_own_day() -> None:
    old = profile("2011", in_force_until=date(2019, 6, 2))
    new = profile("2017", since=date(2019, 6, 3))
    assert profiles_in_force((old, new), date(2015, 4, 9)) == (old,)
    assert profiles_in_force((old, new), date(2020, 4, 9)) == (new,)


def test_what_is_due_follows_the_edition_in_force_on_the_day_asked() -> None:
    gauge = Gauge(uid="g", entry=9, of="system", owner="north", side="supply")
    read = GaugeReading(entry=33, performed_on=date(2019, 3, 20), reading=psi("71", "g"))
    old = profile("2011", in_force_until=date(2019, 6, 2))
    new = profile("2017", since=date(2019, 6, 3))
    held = history(wet(gauges=(gauge,), gauge_readings=(read,)), profiles=(old, new))
    # Monthly in 2011: April. Quarterly in 2017: 20 June, not later than 20 July.
    assert only(held, "gauge_reading.wet", date(2019, 5, 7)).latest == date(2019, 4, 30)
    assert only(held, "gauge_reading.wet", date(2019, 6, 7)).latest == date(2019, 7, 20)


# --- States and windows ------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("as_of", "state"),
    [
        (date(2024, 12, 14), "not yet"),
        (date(2025, 3, 14), "not yet"),
        (date(2025, 3, 15), "due"),
        (date(2025, 6, 15), "due"),
        (date(2025, 6, 16), "overdue"),
    ],
)
def test_an_annual_test_is_due_after_a_year_and_overdue_after_fifteen_months(as_of: date, state: str) -> None:
    held = history(wet(drain_tests=(drained(date(2024, 3, 15), 44),)), profiles=(profile(),))
    item = only(held, "main_drain.each", as_of)
    assert (item.earliest, item.due, item.latest) == (date(2024, 12, 15), date(2025, 3, 15), date(2025, 6, 15))
    assert (item.last_done, item.last_entry) == (date(2024, 3, 15), 44)
    assert item.state == state


def test_what_was_never_done_is_due_with_no_record() -> None:
    item = only(history(wet(), profiles=(profile(),)), "main_drain.each")
    assert item.state == "no record"
    assert (item.earliest, item.due, item.latest, item.last_entry) == (None, None, None, None)


def test_a_new_system_without_tests_is_counted_from_its_installation() -> None:
    held = history(wet(installed_on=date(2024, 2, 8)), profiles=(profile(),))
    assert only(held, "main_drain.each", date(2024, 9, 17)).state == "not yet"
    assert only(held, "main_drain.each", date(2025, 9, 17)).state == "no record"


def test_a_system_that_is_not_there_yet_asks_nothing() -> None:
    held = history(wet(installed_on=date(2026, 2, 8)), profiles=(profile(),))
    assert items(held, "main_drain.each") == []


def test_a_system_asks_nothing_of_a_supply_it_is_not_on_yet() -> None:
    held = history(wet(on_supply_since=date(2024, 9, 17)), profiles=(profile(),))
    assert items(held, "main_drain.each", date(2024, 9, 16)) == []
    assert len(items(held, "main_drain.each", date(2024, 9, 17))) == 1


def test_a_system_asks_nothing_of_a_supply_it_has_left() -> None:
    held = history(wet(on_supply_until=date(2024, 9, 17)), profiles=(profile(),))
    assert items(held, "main_drain.each", date(2024, 9, 17)) == []
    assert len(items(held, "main_drain.each", date(2024, 9, 16))) == 1


def test_a_test_after_the_day_asked_is_not_known() -> None:
    held = history(wet(drain_tests=(drained(date(2023, 5, 6)), drained(date(2025, 5, 6), 61))), profiles=(profile(),))
    assert only(held, "main_drain.each").last_done == date(2023, 5, 6)


@pytest.mark.parametrize("changes", [{"not_done": "drain outlet blocked by ice"}, {"residual": None}])
def test_a_test_that_was_not_done_or_has_no_residual_does_not_count(changes: dict[str, Any]) -> None:
    held = history(wet(drain_tests=(drained(date(2024, 5, 6), **changes),)), profiles=(profile(),))
    assert only(held, "main_drain.each").state == "no record"


def test_the_list_puts_the_worst_first() -> None:
    late = wet("late", drain_tests=(drained(date(2021, 5, 6)),))
    fresh = wet("fresh", drain_tests=(drained(date(2024, 5, 6), 52),))
    held = history(fresh, late, wet("never"), profiles=(profile(),))
    order = [item.systems for item in one_list(held).items if item.rule == "main_drain.each"]
    assert order == [("late",), ("never",), ("fresh",)]


# --- Marks -------------------------------------------------------------------------------------------------------


def test_a_row_nobody_approved_is_not_required_and_shows_no_clause() -> None:
    item = only(history(wet(), profiles=(profile(),)), "main_drain.each")
    assert (item.required, item.clause, item.mark) == (False, None, "read")


def test_an_approved_row_is_required_by_its_clause() -> None:
    item = only(history(wet(), profiles=(profile("2017", "main_drain.each"),)), "main_drain.each")
    assert (item.required, item.clause, item.mark) == (True, "NFPA 25 (2017) 13.2.5", "approved")


# --- Conditions --------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("device", "place", "edition", "count"),
    [
        ("backflow_preventer", "sole feed", "2011", 1),  # NFPA 25 (2011) 13.2.5, in a secondary source
        ("pressure_reducing_valve", "sole feed", "2014", 1),
        ("backflow_preventer", "one of several feeds", "2011", 0),
        ("backflow_preventer", "none", "2014", 0),
        ("backflow_preventer", "sole feed", "1998", 0),  # quarterly for every drain in that edition
    ],
)
def test_a_sole_feed_through_a_device_asks_one_quarterly_drain_test(
    device: str, place: str, edition: str, count: int
) -> None:
    supply = Supply(uid="main", entry=5, name="street main", kind="public_main")
    supply = replace(supply, **{device: place})
    held = history(wet("a"), wet("b"), supply=supply, profiles=(profile(edition),))
    assert len(items(held, "main_drain.sole_feed")) == count


def test_any_drain_downstream_answers_the_quarterly_test() -> None:
    supply = Supply(uid="main", entry=5, name="street main", kind="public_main", backflow_preventer="sole feed")
    systems = (
        wet("a", drain_tests=(drained(date(2024, 2, 6)),)),
        wet("b", drain_tests=(drained(date(2024, 7, 31), 53),)),
    )
    item = only(history(*systems, supply=supply, profiles=(profile("2014"),)), "main_drain.sole_feed")
    assert item.systems == ("a", "b")
    assert (item.last_entry, item.due) == (53, date(2024, 10, 31))
    assert (item.earliest, item.latest) == (date(2024, 9, 30), date(2024, 11, 30))


def test_the_1998_edition_asks_every_riser_each_quarter() -> None:
    held = history(wet("a", header="h"), wet("b", header="h"), profiles=(profile("1998"),))
    assert [item.systems for item in items(held, "main_drain.each")] == [("a",), ("b",)]


def test_one_test_serves_the_systems_of_a_header_from_2011_on() -> None:
    systems = (
        wet("a", header="h", drain_tests=(drained(date(2024, 4, 3), 57),)),
        wet("b", header="h"),
        wet("c"),
    )
    found = {
        item.systems: item.last_entry for item in items(history(*systems, profiles=(profile(),)), "main_drain.each")
    }
    assert found == {("a", "b"): 57, ("c",): None}


def test_a_header_without_tests_is_counted_from_its_first_system() -> None:
    systems = (
        wet("a", header="h", installed_on=date(2007, 4, 3)),
        wet("b", header="h", installed_on=date(1999, 6, 5)),
    )
    assert only(history(*systems, profiles=(profile(),)), "main_drain.each").due == date(2000, 6, 5)


def test_a_header_waits_for_no_fact_that_is_sure_of_one_of_its_systems() -> None:
    rule = msgspec.structs.replace(LOOK, per="header", applies_when=AppliesWhen(heated=True))
    systems = (wet("a", header="h"), wet("b", header="h", heated=True))
    item = only(history(*systems, profiles=(local_profile(rule),)), "look")
    assert (item.systems, item.unstated) == (("a", "b"), ())


@pytest.mark.parametrize(
    ("supervised", "rules", "unstated"),
    [
        (True, ["gauge_reading.air_supervised"], ()),
        (False, ["gauge_reading.air_not_supervised"], ()),
        (None, ["gauge_reading.air_not_supervised", "gauge_reading.air_supervised"], ("air supervised",)),
    ],
)
def test_air_gauges_follow_supervision_and_name_it_where_it_is_not_on_record(
    supervised: bool | None, rules: list[str], unstated: tuple[str, ...]
) -> None:
    air = Gauge(uid="air", entry=9, of="system", owner="dry", side="air")
    water = Gauge(uid="water", entry=10, of="system", owner="dry", side="supply")
    dry = wet("dry", type="dry", air_supervised=supervised, gauges=(air, water))
    found = [
        item for item in one_list(history(dry, profiles=(profile(),))).items if item.rule.startswith("gauge_reading")
    ]
    assert sorted(item.rule for item in found) == rules
    assert {item.gauge for item in found} == {"air"}
    assert {item.unstated for item in found} == {unstated}


@pytest.mark.parametrize(
    ("alarm", "rules"),
    [
        ("water motor", {"waterflow.mechanical": ()}),
        ("vane", {"waterflow.vane_or_pressure": ()}),
        (None, {"waterflow.mechanical": ("alarm kind",), "waterflow.vane_or_pressure": ("alarm kind",)}),
    ],
)
def test_waterflow_alarms_are_asked_by_their_kind(alarm: str | None, rules: dict[str, tuple[str, ...]]) -> None:
    found = one_list(history(wet(alarm=alarm), profiles=(profile(),))).items
    assert {item.rule: item.unstated for item in found if item.rule.startswith("waterflow")} == rules


LOOK = Rule(
    id="look",
    item="Looked at",
    activity="inspection",
    mark="from memory",
    source="invented",
    satisfied_by="main_drain_test",
    frequency=Frequency(every=2, unit="year", anchor="last done"),
)


@pytest.mark.parametrize(
    ("when", "system", "unstated"),
    [
        (AppliesWhen(heated=False), wet(heated=False), ()),
        (AppliesWhen(heated=False), wet(heated=True), None),
        (AppliesWhen(heated=True), wet(), ("heated",)),
        (AppliesWhen(on_header=True), wet(header="h"), ()),
        (AppliesWhen(on_header=True), wet(), None),
        (AppliesWhen(on_header=False), wet(), ()),
        (AppliesWhen(occupancies=("storage",)), wet(occupancy="storage"), ()),
        (AppliesWhen(occupancies=("storage",)), wet(occupancy="office"), None),
        (AppliesWhen(installed_from=date(1987, 5, 6)), wet(installed_on=date(1987, 5, 6)), ()),
        (AppliesWhen(installed_from=date(1987, 5, 6)), wet(installed_on=date(1987, 5, 5)), None),
        (AppliesWhen(installed_before=date(1987, 5, 6)), wet(installed_on=date(1987, 5, 5)), ()),
        (AppliesWhen(installed_before=date(1987, 5, 6)), wet(installed_on=date(1987, 5, 6)), None),
        (AppliesWhen(installed_before=date(1987, 5, 6)), wet(), ("installed on",)),
        (AppliesWhen(supply_kinds=("gravity_tank",)), wet(), None),
        (AppliesWhen(supply_kinds=("gravity_tank", "public_main")), wet(), ()),
        (AppliesWhen(feed_through=("backflow_preventer",)), wet(), None),
        (AppliesWhen(system_types=("dry", "preaction")), wet(), None),
    ],
)
def test_a_condition_holds_does_not_hold_or_waits_for_a_fact(
    when: AppliesWhen, system: System, unstated: tuple[str, ...] | None
) -> None:
    rule = msgspec.structs.replace(LOOK, applies_when=when)
    found = items(history(system, profiles=(local_profile(rule),)), "look")
    assert [item.unstated for item in found] == ([] if unstated is None else [unstated])


def test_a_condition_for_a_person_is_passed_on() -> None:
    held = history(wet(), profiles=(profile(),), flow_tests=())
    assert only(held, "private_main.flow_test").also == "the supply has a private underground main"


# --- Gauges ------------------------------------------------------------------------------------------------------


def gauge_with(uid: str = "g", **changes: Any) -> Gauge:
    return replace(Gauge(uid=uid, entry=9, of="system", owner="north", side="supply"), **changes)


def read(on: date, gauge: str | None, entry: int = 71) -> GaugeReading:
    return GaugeReading(entry=entry, performed_on=on, reading=psi("66", gauge))


def test_each_gauge_has_its_own_reading() -> None:
    system = wet(
        gauges=(gauge_with("low"), gauge_with("high", side="system")),
        gauge_readings=(read(date(2024, 8, 2), "low", 72), read(date(2024, 3, 2), "high", 73)),
    )
    found = {
        item.gauge: (item.last_entry, item.state)
        for item in items(history(system, profiles=(profile(),)), "gauge_reading.wet")
    }
    assert found == {"low": (72, "not yet"), "high": (73, "overdue")}


def test_a_reading_without_a_gauge_counts_only_for_a_lone_gauge() -> None:
    lone = wet("lone", gauges=(gauge_with(owner="lone"),), gauge_readings=(read(date(2024, 8, 2), None),))
    assert only(history(lone, profiles=(profile(),)), "gauge_reading.wet").last_entry == 71
    two = replace(lone, gauges=(*lone.gauges, gauge_with("other", owner="lone")))
    assert {item.last_entry for item in items(history(two, profiles=(profile(),)), "gauge_reading.wet")} == {None}


def test_a_system_whose_gauge_is_not_on_file_is_named_all_the_same() -> None:
    held = history(wet(gauge_readings=(read(date(2024, 8, 2), None),)), profiles=(profile(),))
    item = only(held, "gauge_reading.wet")
    assert (item.gauge, item.systems, item.last_entry) == (None, ("north",), 71)


def test_a_supply_gauge_serves_the_systems_without_one() -> None:
    header = Gauge(uid="header", entry=9, of="supply", owner="main", side="supply")
    held = history(
        wet("a"),
        wet("b"),
        profiles=(profile(),),
        supply_gauges=(header,),
        gauge_readings=(read(date(2024, 8, 2), "header"), read(date(2024, 9, 2), "another", 79)),
    )
    item = only(held, "gauge_reading.wet")
    assert (item.gauge, item.systems, item.last_entry) == ("header", ("a", "b"), 71)


def test_a_gauge_that_was_replaced_asks_nothing_more() -> None:
    system = wet(
        gauges=(
            gauge_with("old", installed_on=date(2009, 4, 7), ended_on=date(2018, 8, 8)),
            gauge_with("new", installed_on=date(2018, 8, 8), entry=19),
        )
    )
    item = only(history(system, profiles=(profile(),)), "gauge_comparison.five_years")
    # Replaced on 2018-08-08: 54 to 66 months on.
    assert (item.gauge, item.last_entry) == ("new", 19)
    assert (item.earliest, item.due, item.latest) == (date(2023, 2, 8), date(2023, 8, 8), date(2024, 2, 8))
    assert item.state == "overdue"


def test_a_comparison_counts_as_well_as_a_replacement() -> None:
    comparison = GaugeComparison(
        entry=83, performed_on=date(2022, 6, 30), points_psi=((50.0, 51.0),), outcome="kept",
        reference_accuracy_percent=0.5, reference_full_scale_psi=200.0,
    )  # fmt: skip
    system = wet(gauges=(gauge_with(installed_on=date(2011, 5, 2), comparisons=(comparison,)),))
    item = only(history(system, profiles=(profile(),)), "gauge_comparison.five_years")
    assert (item.last_entry, item.due, item.state) == (83, date(2027, 6, 30), "not yet")


def test_a_gauge_of_unknown_age_never_compared_has_no_record() -> None:
    item = only(history(wet(gauges=(gauge_with(),)), profiles=(profile(),)), "gauge_comparison.five_years")
    assert (item.state, item.due) == ("no record", None)


def test_the_european_family_reads_every_gauge_at_most_seven_days_apart() -> None:
    system = wet(gauges=(gauge_with(),), gauge_readings=(read(date(2024, 9, 11), "g"),))
    item = only(history(system, profiles=(profile("european_insurers"),)), "gauge_reading.all")
    assert (item.due, item.latest, item.state) == (date(2024, 9, 18), date(2024, 9, 18), "not yet")


def test_a_gauge_ends_on_the_day_the_next_begins() -> None:
    old = gauge_with("old", ended_on=date(2018, 8, 8))
    new = gauge_with("new", installed_on=date(2018, 8, 8))
    held = history(wet(gauges=(old, new)), profiles=(profile(),))
    assert [item.gauge for item in items(held, "gauge_comparison.five_years", date(2018, 8, 8))] == ["new"]
    assert [item.gauge for item in items(held, "gauge_comparison.five_years", date(2018, 8, 7))] == ["old"]


def test_a_reading_of_the_water_gauge_is_none_of_an_air_gauge_that_is_not_on_file() -> None:
    water = Gauge(uid="water", entry=10, of="system", owner="dry", side="supply")
    dry = wet("dry", type="dry", air_supervised=True, gauges=(water,), gauge_readings=(read(AS_OF, "water"),))
    item = only(history(dry, profiles=(profile(),)), "gauge_reading.air_supervised")
    assert (item.gauge, item.last_entry, item.unstated) == (None, None, ("gauge side",))


# --- Alarms, trips, flow tests -----------------------------------------------------------------------------------


def tripped(on: date, entry: int, **changes: Any) -> AlarmTest:
    return replace(AlarmTest(entry=entry, performed_on=on, item="valve", is_dry=True, trip_s=14.0), **changes)


def test_a_full_flow_trip_counts_as_a_trip_and_a_partial_one_not_as_full() -> None:
    tests = (tripped(date(2022, 10, 4), 91, is_full_flow=True), tripped(date(2024, 5, 7), 92, is_full_flow=False))
    held = history(wet("dry", type="dry", alarm_tests=tests), profiles=(profile(),))
    assert only(held, "dry.partial_trip").last_entry == 92
    full = only(held, "dry.full_trip")
    # NFPA 25 (2017): every three years; 30 to 40 months from 2022-10-04.
    assert (full.last_entry, full.due, full.latest) == (91, date(2025, 10, 4), date(2026, 2, 4))


def test_a_trip_without_an_alarm_time_is_no_alarm_test() -> None:
    tests = (tripped(date(2024, 5, 7), 92), tripped(date(2024, 2, 7), 93, bell_s=41.0))
    held = history(wet("dry", type="dry", alarm="vane", alarm_tests=tests), profiles=(profile(),))
    assert only(held, "waterflow.vane_or_pressure").last_entry == 93


def test_a_flow_test_counts_for_the_supply_and_a_pump_test_only_at_the_test_header() -> None:
    street = FlowTest(entry=96, performed_on=date(2024, 4, 18), at="street", static_psi=72.0, points=((940.0, 55.0),))
    header = replace(street, entry=97, performed_on=date(2023, 4, 18), at="test_header")
    supply = Supply(uid="main", entry=5, name="pump", kind="fire_pump")
    profiles = (profile("european_insurers"),)
    held = history(wet(), supply=supply, flow_tests=(street, header), profiles=profiles)
    assert only(held, "supply_test.quarterly").last_entry == 96
    assert only(held, "pump.full_load").last_entry == 97


def test_a_forward_flow_test_answers_the_backflow_row() -> None:
    test = ForwardFlowTest(entry=98, performed_on=date(2023, 10, 2), item="bfp", flow_gpm=600.0)
    supply = Supply(uid="main", entry=5, name="main", kind="public_main", backflow_preventer="one of several feeds")
    held = history(wet(forward_flow_tests=(test,)), supply=supply, profiles=(profile(),))
    item = only(held, "backflow.forward_flow")
    assert (item.last_entry, item.due, item.state) == (98, date(2024, 10, 2), "not yet")


# --- Events ------------------------------------------------------------------------------------------------------


def test_a_valve_shut_and_reopened_asks_a_main_drain_test() -> None:
    look = ValveStatusTest(
        entry=101, performed_on=date(2024, 9, 11), valve="V3", shut_at="2024-09-11T08:10:00+02:00",
        opened_at="2024-09-11T16:45:00+02:00",
    )  # fmt: skip
    held = history(
        wet(drain_tests=(drained(date(2024, 9, 10)),), valve_status_tests=(look,)),
        profiles=(profile("2011", "main_drain.after_valve"),),
    )
    item = only(held, "main_drain.after_valve")
    assert (item.valve, item.event, item.event_on, item.event_entry) == (
        "V3",
        "valve reopened",
        date(2024, 9, 11),
        101,
    )
    assert (item.state, item.required) == ("overdue", True)
    assert only(held, "main_drain.after_valve", date(2024, 9, 11)).state == "due"


def test_a_drain_test_on_the_day_of_reopening_or_later_answers_it() -> None:
    valve = ValveFound(id="V3", found="shut", left="open", opened_at="2024-09-11T16:45:00-05:00")
    done = drained(date(2024, 9, 11), valves=(valve,))
    held = history(wet(drain_tests=(done,)), profiles=(profile("2011"),))
    assert items(held, "main_drain.after_valve") == []


def test_a_valve_found_shut_and_left_open_was_reopened_that_day() -> None:
    shut = drained(date(2024, 9, 11), residual=None, valves=(ValveFound(id="V5", found="shut", left="open"),))
    held = history(wet(drain_tests=(shut,)), profiles=(profile("2011"),))
    assert only(held, "main_drain.after_valve").valve == "V5"


def test_a_valve_left_shut_was_not_reopened() -> None:
    shut = drained(date(2024, 9, 11), residual=None, valves=(ValveFound(id="V5", found="open", left="shut"),))
    held = history(wet(drain_tests=(shut,)), profiles=(profile("2011"),))
    assert items(held, "main_drain.after_valve") == []


def test_of_two_valves_each_is_named_with_its_first_unanswered_day() -> None:
    looks = tuple(
        ValveStatusTest(entry=entry, performed_on=day, valve=valve, opened_at=f"{day}T09:30:00+00:00")
        for entry, day, valve in [
            (111, date(2024, 8, 21), "V3"), (112, date(2024, 8, 14), "V3"), (113, date(2024, 8, 19), "V6"),
        ]
    )  # fmt: skip
    held = history(wet(valve_status_tests=looks), profiles=(profile("2011"),))
    found = {item.valve: item.event_on for item in items(held, "main_drain.after_valve")}
    assert found == {"V3": date(2024, 8, 14), "V6": date(2024, 8, 19)}


@pytest.mark.parametrize(
    ("event", "system"),
    [
        ("repair", wet(repairs=(Repair(entry=121, done_on=date(2024, 9, 12), restores="restriction"),))),
        ("feed changed", wet(entry=121, feed_changed_on=date(2024, 9, 12))),
        ("drain changed", wet(entry=121, drain=Drain(id="d", since=date(2024, 9, 12)))),
    ],
)
def test_other_events_ask_for_it_too_within_their_days(event: Any, system: System) -> None:
    rule = msgspec.structs.replace(LOOK, frequency=None, triggers=(Trigger(event=event, within_days=4),))
    held = history(system, profiles=(local_profile(rule),))
    item = only(held, "look", date(2024, 9, 16))
    assert (item.due, item.latest, item.event_entry, item.state) == (
        date(2024, 9, 12),
        date(2024, 9, 16),
        121,
        "due",
    )
    assert only(held, "look", date(2024, 9, 17)).state == "overdue"
    assert items(held, "look", date(2024, 9, 11)) == []


def test_a_valve_has_its_own_turn() -> None:
    rule = msgspec.structs.replace(LOOK, per="valve", satisfied_by="valve_status_test")
    look = ValveStatusTest(entry=131, performed_on=date(2023, 9, 30), valve="V2")
    held = history(wet(valves=("V2", "V4"), valve_status_tests=(look,)), profiles=(local_profile(rule),))
    assert {item.valve: item.due for item in items(held, "look")} == {"V2": date(2025, 9, 30), "V4": None}


def test_a_test_gauge_has_its_own_turn() -> None:
    rule = msgspec.structs.replace(LOOK, per="test gauge", satisfied_by="gauge_comparison")
    comparison = GaugeComparison(
        entry=83, performed_on=date(2023, 6, 30), points_psi=((50.0, 51.0),), outcome="kept",
        reference_accuracy_percent=0.1, reference_full_scale_psi=200.0,
    )  # fmt: skip
    gauge = Gauge(
        uid="t", entry=9, of="organisation", owner="org", installed_on=date(2024, 2, 3), comparisons=(comparison,)
    )
    item = only(history(wet(), profiles=(local_profile(rule),), organisation_gauges=(gauge,)), "look")
    assert (item.gauge, item.last_entry, item.due) == ("t", 83, date(2025, 6, 30))


# --- What no entry records ---------------------------------------------------------------------------------------


def test_rows_that_no_entry_records_are_named_and_never_called_due() -> None:
    due = one_list(history(wet(), profiles=(profile(),)))
    assert "fire_department_connection" in due.untracked
    assert "valve.sealed" in due.untracked
    assert "dry.interior" not in due.untracked  # no dry system here
    assert "main_drain.ten_percent" not in due.untracked  # a limit, nothing to do
    assert not {item.rule for item in due.items} & set(due.untracked)


def test_an_event_that_no_entry_records_is_named() -> None:
    # A full-flow trip is due after alteration too (2017), which no entry tells.
    assert "dry.full_trip" in one_list(history(wet("dry", type="dry"), profiles=(profile(),))).untracked


def test_a_season_without_months_waits_for_them() -> None:
    frequency = {"every": 1, "unit": "week", "anchor": "calendar", "season": {"name": "cold weather"}}
    rule = msgspec.structs.replace(LOOK, frequency=msgspec.convert(frequency, Frequency))
    item = only(history(wet(), profiles=(local_profile(rule),)), "look")
    assert item.unstated == ("months of the season",)


# --- Over two hundred years --------------------------------------------------------------------------------------

DAYS = st.dates(min_value=date(1900, 1, 1), max_value=date(2100, 12, 31))


@given(tests=st.lists(DAYS, max_size=5), as_of=DAYS, edition=st.sampled_from(["1998", "2014", "2023"]))
def test_states_and_windows_agree_on_any_day(tests: list[date], as_of: date, edition: str) -> None:
    drains = tuple(drained(day, 40 + place) for place, day in enumerate(tests))
    ever = profile(edition, since=date(1890, 5, 6))
    item = only(history(wet(drain_tests=drains), profiles=(ever,)), "main_drain.each", as_of)
    known = [day for day in tests if day <= as_of]
    assert item.last_done == (max(known) if known else None)
    if item.last_done is None:
        assert item.state == "no record"
        return
    assert item.due is not None
    assert item.latest is not None
    assert item.last_done < item.due <= item.latest
    assert item.state == ("not yet" if as_of < item.due else "due" if as_of <= item.latest else "overdue")


@given(as_of=DAYS, ago_days=st.integers(min_value=2, max_value=900))
def test_the_order_of_entries_changes_nothing(as_of: date, ago_days: int) -> None:
    drains = tuple(drained(as_of - timedelta(days=ago_days * step), 40 + step) for step in (3, 2, 5))
    ever = profile("2017", since=date(1880, 5, 6))
    forth = history(wet("a", drain_tests=drains), wet("b"), profiles=(ever,))
    back = history(wet("b"), wet("a", drain_tests=drains[::-1]), profiles=(ever,))
    assert {
        item for due in due_lists(forth, as_of) for item in due.items if item.gauge is None and len(item.systems) == 1
    } == {item for due in due_lists(back, as_of) for item in due.items if item.gauge is None and len(item.systems) == 1}
