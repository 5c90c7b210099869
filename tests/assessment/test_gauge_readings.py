"""Routine gauge readings and comparisons with a certified gauge."""

from __future__ import annotations

from dataclasses import replace
from datetime import date
from typing import Any

import pytest

from fieldlog.assessment.gauge_readings import gauge_findings, is_out_of_accuracy
from fieldlog.assessment.reading_error import instruments
from fieldlog.records.history import Gauge, GaugeComparison, GaugeReading
from fieldlog.records.rules import RuleProfile
from tests.assessment.made import AS_OF, GAUGE, PROFILE, history, read, system

DIAL = replace(GAUGE, full_scale_psi=300.0, normal_low_psi=70.0, normal_high_psi=95.0)


def rounds(*values: str, **changes: Any) -> tuple[GaugeReading, ...]:
    return tuple(GaugeReading(80 + n, date(2024, 1 + n, 5), read(value), **changes) for n, value in enumerate(values))


def found(gauge: Gauge, readings: tuple[GaugeReading, ...] = (), by: RuleProfile | None = PROFILE) -> list[str]:
    given = history(system(gauges=(gauge,), gauge_readings=readings))
    return [str(one.code) for one in gauge_findings([gauge], readings, instruments(given, AS_OF), by, AS_OF)]


# Range 300 psi: 9.0 psi off is 3.000 percent, 9.1 psi is 3.033; within 3 percent is asked by NFPA 25, 5.3.2.
@pytest.mark.parametrize(("shown", "is_out"), [(69.0, False), (69.1, True), (51.0, False), (50.9, True)])
def test_a_gauge_may_differ_by_three_percent_of_full_scale_exactly(shown: float, is_out: bool) -> None:
    assert is_out_of_accuracy(shown - 60.0, 300.0, 3.0) is is_out
    for outcome in ("kept", None):
        compared = GaugeComparison(70, date(2023, 3, 1), ((60.0, shown),), outcome, 0.5, 160.0)  # type: ignore[arg-type]
        names = found(replace(DIAL, comparisons=(compared,)))
        assert names == (["gauge_out_of_accuracy"] if is_out else [])


def test_the_newest_comparison_of_a_gauge_that_was_kept_counts() -> None:
    bad = GaugeComparison(70, date(2021, 3, 1), ((60.0, 75.0),), "kept", 0.5, 160.0)
    good = GaugeComparison(71, date(2023, 3, 1), ((60.0, 61.0),), "kept", 0.5, 160.0)
    assert found(replace(DIAL, comparisons=(bad, good))) == []
    assert found(replace(DIAL, comparisons=(replace(bad, outcome="replaced"),))) == []


def test_without_a_rule_no_accuracy_is_asked() -> None:
    bad = GaugeComparison(70, date(2023, 3, 1), ((60.0, 75.0),), "kept", 0.5, 160.0)
    assert found(replace(DIAL, comparisons=(bad,)), by=None) == []


@pytest.mark.parametrize(
    ("value", "codes"),
    [("82", []), ("70", []), ("95", []), ("69", ["gauge_outside_range"]), ("96", ["gauge_outside_range"]),
     ("310", ["gauge_above_scale", "gauge_outside_range"])],
)  # fmt: skip
def test_a_reading_is_held_against_the_dial_and_the_gauge_s_normal_range(value: str, codes: list[str]) -> None:
    assert found(DIAL, rounds(value)) == codes


def test_a_reading_unlike_the_gauge_s_own_past_is_named_from_four_earlier_ones_on() -> None:
    plain = replace(DIAL, normal_low_psi=None, normal_high_psi=None)
    assert found(plain, rounds("81", "82", "80", "81", "73")) == ["gauge_unlike_past"]
    assert found(plain, rounds("81", "82", "80", "81", "82")) == []
    assert found(plain, rounds("82", "80", "81", "73")) == []


def test_readings_in_another_state_of_the_pump_are_another_past() -> None:
    plain = replace(DIAL, normal_low_psi=None, normal_high_psi=None)
    before = rounds("81", "82", "80", "81", pump_state="off")
    started = (GaugeReading(99, date(2024, 8, 5), read("120"), "running"),)
    assert found(plain, (*before, *started)) == []
