"""Which tests may be compared, and with what the newest one is."""

from __future__ import annotations

from dataclasses import replace
from datetime import date
from typing import Any

import pytest

from fieldlog.assessment.comparable import Comparisons, comparisons, conditions_of
from fieldlog.assessment.reading_error import instruments
from fieldlog.records.history import DrainTest, System, ValveFound
from tests.assessment.made import AS_OF, DRAIN, GAUGE, MAIN, acceptance, drained, history, read, system


def compared(given: System, supply: Any = MAIN) -> Comparisons:
    found = instruments(history(given), AS_OF)
    return comparisons(given.drain_tests, conditions_of(supply, given, found))


def two(earlier: DrainTest, newest: DrainTest, **changes: Any) -> Comparisons:
    return compared(system(earlier, newest, **changes))


PLAIN = drained("2022-05-02", "81", "66")
RISER_LOW = replace(GAUGE, uid="gauge-4", tap="drain connection", name="other gauge")


def why(found: Comparisons) -> list[str]:
    return [str(reason.code) for reason in found.differs]


@pytest.mark.parametrize(
    ("changes", "code"),
    [
        ({"fully_open": False}, "not_fully_open"),
        ({"took_full_flow": False}, "not_full_flow"),
        ({"steady": False}, "not_settled"),
        ({"drain": "drain-8"}, "drain_differs"),
        ({"drain_unchanged": False}, "drain_altered"),
        ({"residual": read("66", gauge="gauge-4")}, "tap_differs"),
        ({"pump_state": "running"}, "pump_state_differs"),
        ({"valves": (ValveFound("post", found="partly", left="partly"),)}, "valve_state_differs"),
    ],
)
def test_each_condition_that_differs_is_named(changes: dict[str, Any], code: str) -> None:
    found = two(PLAIN, drained("2023-05-02", "81", "65", **changes), gauges=(GAUGE, RISER_LOW))
    assert code in why(found)
    assert found.previous is None


def test_no_pump_and_a_pump_that_is_off_are_the_same_state() -> None:
    assert not why(two(PLAIN, drained("2023-05-02", "81", "65", pump_state="off")))


def test_a_residual_read_above_the_check_valve_is_compared_with_none() -> None:
    system_side = replace(GAUGE, uid="upper", side="system", name="upper gauge")
    found = two(
        PLAIN, drained("2023-05-02", "81", "65", residual=read("65", gauge="upper")), gauges=(GAUGE, system_side)
    )
    assert why(found) == ["system_side_gauge"]


@pytest.mark.parametrize(
    "changed", [{"feed_changed_on": date(2022, 9, 3)}, {"drain": replace(DRAIN, since=date(2022, 9, 3))}]
)
def test_a_changed_feed_or_drain_starts_a_new_reference(changed: dict[str, Any]) -> None:
    first, second = drained("2023-05-02", "81", "60"), drained("2024-05-02", "81", "60")
    begins = compared(system(acceptance(), PLAIN, first, **changed))
    assert why(begins)
    after = compared(system(acceptance(), PLAIN, first, second, **changed))
    assert (after.reference, after.is_new_reference, after.earlier) == (first, True, (first,))
    assert {str(note.code) for note in after.notes} == {"new_reference"}


def test_nothing_is_compared_across_a_test_that_found_the_drain_altered() -> None:
    altered = drained("2023-05-02", "81", "60", drain_unchanged=False)
    found = compared(system(acceptance(), PLAIN, altered, drained("2024-05-02", "81", "60")))
    assert found.earlier == (altered,)
    assert found.reference is altered


def test_another_tap_starts_a_new_reference_too() -> None:
    moved = [drained(f"202{n}-05-02", "81", "60", gauge="gauge-4") for n in (3, 4)]
    found = compared(system(acceptance(), PLAIN, *moved, gauges=(GAUGE, RISER_LOW)))
    assert (found.reference, found.is_new_reference) == (moved[0], True)
    assert found.notes[0].numbers["because"] == "gauge tap"


def test_the_newest_acceptance_is_the_reference() -> None:
    again = acceptance("2020-06-01", "80", "62")
    best = drained("2021-05-02", "82", "68")
    found = compared(system(acceptance(), again, best, PLAIN, drained("2023-05-02", "81", "65")))
    assert (found.reference, found.previous, found.best) == (again, PLAIN, best)


def test_without_an_acceptance_none_is_invented() -> None:
    found = two(PLAIN, drained("2023-05-02", "81", "65"))
    assert (found.reference, found.previous) == (None, PLAIN)
    assert [str(note.code) for note in found.notes] == ["no_reference"]


def test_a_replaced_gauge_at_the_same_tap_stays_comparable() -> None:
    newer = replace(GAUGE, uid="gauge-9")
    assert not why(two(PLAIN, drained("2023-05-02", "81", "65", gauge="gauge-9"), gauges=(GAUGE, newer)))


@pytest.mark.parametrize(
    ("silent", "named"),
    [
        ({"fully_open": None}, "fully_open"),
        ({"took_full_flow": None}, "took_full_flow"),
        ({"drain_unchanged": None}, "drain_unchanged"),
        ({"steady": None}, "steady"),
        ({"residual": read("65", gauge=None)}, "gauge_tap"),
    ],
)
def test_a_condition_nobody_stated_counts_as_the_same_and_is_named(silent: dict[str, Any], named: str) -> None:
    found = two(PLAIN, drained("2023-05-02", "81", "65", **silent))
    assert not found.differs
    assert found.unstated == (named,)


def test_one_fully_stated_pair_is_enough() -> None:
    sign = acceptance(source="information sign", fully_open=None, took_full_flow=None)
    assert compared(system(sign, PLAIN, drained("2023-05-02", "81", "65"))).unstated == ()
    assert compared(system(sign, drained("2023-05-02", "81", "65"))).unstated == ("fully_open", "took_full_flow")


def test_of_a_fire_pump_its_state_must_be_stated_and_of_a_tank_its_level() -> None:
    tests = (replace(PLAIN, pump_state=None), drained("2023-05-02", "81", "65", pump_state=None))
    assert compared(system(*tests), replace(MAIN, kind="fire_pump")).unstated == ("pump_state",)
    assert compared(system(*tests), replace(MAIN, kind="gravity_tank")).unstated == ("tank_level",)
    assert compared(system(*tests)).unstated == ()
