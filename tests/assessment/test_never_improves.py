"""What holds of every history: drawn ones, with odd values among them."""

from __future__ import annotations

import math
from dataclasses import replace
from datetime import date, timedelta
from typing import Any

import msgspec
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from fieldlog.assessment.judge import judge
from fieldlog.records.history import (
    AlarmTest,
    Design,
    Drain,
    DrainTest,
    FlowTest,
    ForwardFlowTest,
    GaugeComparison,
    GaugeReading,
    PipeRun,
    Reading,
    StatedLoss,
    Supply,
    SupplyHistory,
    System,
    ValveFound,
    ValveStatusTest,
)
from fieldlog.records.statement import Statement, SystemStatement
from tests.assessment.made import (
    AS_OF,
    BELOW,
    CHANGED,
    DESIGN,
    FLOW_TEST,
    GAUGE,
    HOLDING,
    IMPAIRED,
    MAIN,
    PROFILE,
    drained,
    history,
    read,
    said_of,
    system,
)

FIRST = date(2015, 3, 2)


def later(months: int) -> date:
    return FIRST + timedelta(days=30 * months + months % 7)


@st.composite
def years_of_tests(draw: st.DrawFn) -> list[DrainTest]:
    """One to nine tests of a supply that may weaken or be restricted, with standings and states drawn."""
    count = draw(st.integers(1, 9))
    tests = []
    for n in range(count):
        static = draw(st.integers(66, 88))
        drop = draw(st.sampled_from([14, 15, 15, 16, 17, 22, 28, 40, 60]))
        changes: dict[str, Any] = {"entry": 100 + n}
        if n == 0 and draw(st.booleans()):
            changes["standing"] = "acceptance"
        unstated = [name for name in ("fully_open", "drain_unchanged", "steady") if draw(st.integers(0, 7)) == 0]
        changes |= dict.fromkeys(unstated)
        if draw(st.booleans()):
            changes["confirmed"] = "second look"
        if draw(st.integers(0, 9)) == 0:
            changes["valves"] = (ValveFound("post", draw(st.sampled_from(["open", "shut", "partly"])), "open"),)
        tests.append(drained(later(10 * n), str(static), str(max(static - drop, 1)), **changes))
    return tests


NOT_COMPARABLE_CHANGES = [
    {"fully_open": False},
    {"took_full_flow": False},
    {"steady": False},
    {"drain": "another drain"},
    {"drain_unchanged": False},
    {"pump_state": "running"},
    {"residual": read("71", gauge="tap of the drain")},
]
OTHER_TAP = replace(GAUGE, uid="tap of the drain", tap="drain connection")
DESIGNS = [DESIGN, None, replace(DESIGN, demand_pressure_psi=73.0), replace(DESIGN, demand_pressure_psi=78.0)]


@settings(max_examples=120, deadline=None)
@given(
    years_of_tests(),
    st.integers(70, 90),
    st.integers(1, 16),
    st.sampled_from(NOT_COMPARABLE_CHANGES),
    st.sampled_from(DESIGNS),
)
def test_a_test_that_can_not_be_compared_never_improves_a_statement(
    tests: list[DrainTest], static: int, drop: int, changes: dict[str, Any], design: Design | None
) -> None:
    odd = replace(drained(later(100), str(static), str(static - drop), entry=300), **changes)
    given_before = history(system(*tests, gauges=(GAUGE, OTHER_TAP), design=design))
    given_after = history(system(*tests, odd, gauges=(GAUGE, OTHER_TAP), design=design))
    before, after = said_of(given_before), said_of(given_after)
    assert after.worst.rank <= before.worst.rank
    assert after.statement != HOLDING


@settings(max_examples=120, deadline=None)
@given(
    years_of_tests(),
    st.sampled_from([1.0, 2.0, 5.0, 10.0]),
    st.sampled_from([300.0, 420.0, 700.0]),
    st.integers(30, 80),
    st.sampled_from([0.75, 1.25, 2.0, None]),
)
def test_holding_is_never_said_when_a_loss_as_large_as_the_margin_might_not_have_shown(
    tests: list[DrainTest], division: float, flow: float, required: int, size: float | None
) -> None:
    design = replace(DESIGN, demand_flow_gpm=flow, demand_pressure_psi=float(required))
    gauge = replace(GAUGE, division_psi=division)
    drain = replace(system().drain, size_in=size)  # type: ignore[type-var]
    statement = said_of(history(system(*tests, design=design, gauges=(gauge,), drain=drain)))
    if statement.statement == HOLDING:
        margin, blind = statement.margin_on_day, statement.blind_loss
        assert margin is not None
        assert blind is not None
        assert blind.loss_psi is not None
        assert blind.loss_psi <= margin.median_psi - margin.rule_margin_psi
        assert margin.low_psi >= margin.rule_margin_psi
        assert blind.tests >= 1


@settings(max_examples=120, deadline=None)
@given(years_of_tests(), st.randoms(use_true_random=False))
def test_the_order_of_tests_changes_nothing(tests: list[DrainTest], shuffled: Any) -> None:
    turned = list(tests)
    shuffled.shuffle(turned)
    assert said_of(history(system(*tests))) == said_of(history(system(*turned)))


@settings(max_examples=120, deadline=None)
@given(years_of_tests())
def test_the_same_readings_in_kilopascal_give_the_same_statement(tests: list[DrainTest]) -> None:
    def metric(one: Reading | None) -> Reading | None:
        return None if one is None else replace(one, unit="kPa", value="as converted exactly")

    turned = [
        replace(
            test,
            static_before=metric(test.static_before),
            residual=metric(test.residual),
            static_after=metric(test.static_after),
        )
        for test in tests
    ]
    assert said_of(history(system(*tests))) == said_of(history(system(*turned)))


@settings(max_examples=120, deadline=None)
@given(years_of_tests())
def test_a_flag_against_acceptance_or_previous_is_never_below_changed(tests: list[DrainTest]) -> None:
    statement = said_of(history(system(*tests)))
    if any(row.flagged for row in statement.ten_percent):
        assert statement.statement in {IMPAIRED, BELOW, CHANGED}


# Any records at all, with values no site has: a statement comes, never an error, and it can be kept.

numbers = st.one_of(st.sampled_from([-5.0, 0.0, 1.0, 66.0, 1e9]), st.integers(-500, 4000).map(lambda n: n / 10))
maybe = st.one_of(st.none(), numbers)
flags = st.sampled_from([None, True, False])
days = st.dates(date(1999, 1, 5), date(2027, 3, 4))
stamps = st.sampled_from([None, "2024-05-08T07:00:00-05:00", "2024-09-16T23:00:00Z", "2024-99-99T99:99Z"])
states = st.sampled_from([None, "none", "off", "jockey", "running"])


@st.composite
def readings(draw: st.DrawFn) -> Reading | None:
    if draw(st.integers(0, 5)) == 0:
        return None
    value = draw(st.one_of(st.integers(-20, 300), st.sampled_from([0, 65, 66, 80])))
    swing = draw(st.sampled_from([None, None, 4.0]))
    low, high = (None, None) if swing is None else (value - swing, value + swing)
    return replace(
        read(str(value), draw(st.sampled_from(["psi", "bar", "kPa"])), draw(st.sampled_from([None, "gauge-3", "?"]))),
        low_psi=low,
        high_psi=high,
        pump_state=draw(states),
    )


@st.composite
def any_drain_tests(draw: st.DrawFn) -> DrainTest:
    valves = st.builds(
        ValveFound,
        st.sampled_from(["post", "riser"]),
        st.sampled_from([None, "open", "partly", "shut"]),
        st.sampled_from([None, "open", "partly", "shut"]),
        stamps,
        stamps,
    )
    return DrainTest(
        entry=draw(st.integers(1, 10**6)),
        subject="s",
        performed_on=draw(days),
        drain=draw(st.sampled_from([None, "drain-7", "b"])),
        static_before=draw(readings()),
        residual=draw(readings()),
        static_after=draw(readings()),
        steady=draw(flags),
        return_s=draw(st.sampled_from([None, 0.0, 5.0, 400.0])),
        did_not_recover=draw(st.booleans()),
        standing=draw(st.sampled_from(["routine", "acceptance", "after repair"])),
        fully_open=draw(flags),
        took_full_flow=draw(flags),
        drain_unchanged=draw(flags),
        confirmed=draw(st.sampled_from(["no", "second look"])),
        drain_pitot_psi=draw(maybe),
        pump_state=draw(states),
        tank_level_ft=draw(maybe),
        valves=tuple(draw(st.lists(valves, max_size=2))),
    )


@st.composite
def any_systems(draw: st.DrawFn) -> System:
    feed = st.one_of(
        st.builds(PipeRun, numbers, numbers, numbers, st.sampled_from([(), (("90 standard elbow", 3),), (("?", 2),)])),
        st.builds(StatedLoss, st.lists(st.tuples(numbers, numbers), max_size=3).map(tuple)),
    )
    alarm = st.builds(
        AlarmTest,
        st.integers(1, 99),
        days,
        st.sampled_from([None, "a"]),
        st.booleans(),
        maybe,
        maybe,
        maybe,
        maybe,
        maybe,
        maybe,
        flags,
        st.sampled_from(["routine", "acceptance"]),
    )
    gauge = replace(
        GAUGE,
        full_scale_psi=draw(maybe),
        division_psi=draw(maybe),
        elevation_ft=draw(maybe),
        grade=draw(st.sampled_from([None, "A", "D"])),
        comparisons=tuple(
            draw(
                st.lists(
                    st.builds(
                        GaugeComparison,
                        st.integers(1, 99),
                        days,
                        st.lists(st.tuples(numbers, numbers), max_size=2).map(tuple),
                        st.sampled_from([None, "kept", "adjusted"]),
                        maybe,
                        maybe,
                    ),
                    max_size=2,
                )
            )
        ),
    )
    return System(
        uid="north",
        entry=7,
        name="north",
        type="wet",
        base_elevation_ft=draw(maybe),
        drain=draw(
            st.one_of(
                st.none(),
                st.builds(
                    Drain, st.just("drain-7"), maybe, st.just(""), maybe, maybe, maybe, st.one_of(st.none(), days)
                ),
            )
        ),
        feed=tuple(draw(st.lists(feed, max_size=2))),
        feed_changed_on=draw(st.one_of(st.none(), days)),
        gauges=(gauge,),
        design=draw(
            st.one_of(
                st.none(),
                st.builds(
                    Design,
                    st.just(9),
                    maybe,
                    maybe,
                    flags,
                    numbers,
                    numbers,
                    st.none(),
                    maybe,
                    maybe,
                    maybe,
                    maybe,
                    maybe,
                ),
            )
        ),
        drain_tests=tuple(draw(st.lists(any_drain_tests(), max_size=7))),
        alarm_tests=tuple(draw(st.lists(alarm, max_size=3))),
        gauge_readings=tuple(
            draw(
                st.lists(st.builds(GaugeReading, st.integers(1, 99), days, readings().filter(bool), states), max_size=6)
            )
        ),
        forward_flow_tests=tuple(
            draw(
                st.lists(
                    st.builds(ForwardFlowTest, st.just(55), days, st.none(), numbers, maybe, maybe, maybe), max_size=2
                )
            )
        ),
        valve_status_tests=tuple(
            draw(
                st.lists(
                    st.builds(ValveStatusTest, st.just(56), days, st.just("post"), stamps, stamps, flags), max_size=2
                )
            )
        ),
    )


@st.composite
def any_histories(draw: st.DrawFn) -> SupplyHistory:
    supply = Supply(
        uid="main",
        entry=5,
        name="main",
        kind=draw(st.sampled_from(["public_main", "gravity_tank", "pressure_tank", "fire_pump", "parallel"])),
        pressure_reducing_valve=draw(st.sampled_from(["none", "sole feed"])),
        prv_static_psi=draw(maybe),
        tank_level_reference_ft=draw(maybe),
        points=tuple(draw(st.lists(st.tuples(st.sampled_from(["running", "off"]), numbers, numbers), max_size=3))),
    )
    flow_tests = st.builds(
        FlowTest,
        st.just(21),
        days,
        st.sampled_from(["street", "lead_in", "base_of_riser", "test_header"]),
        numbers,
        st.lists(st.tuples(numbers, numbers), max_size=3).map(tuple),
        maybe,
        states,
    )
    return SupplyHistory(
        site="site",
        supply=supply,
        systems=(draw(any_systems()),),
        flow_tests=tuple(draw(st.lists(flow_tests, max_size=2))),
    )


def walk(value: Any) -> Any:
    if isinstance(value, dict):
        value = list(value.values())
    if isinstance(value, list | tuple):
        for one in value:
            yield from walk(one)
    else:
        yield value


@pytest.mark.slow
@settings(max_examples=60, deadline=None)
@given(any_histories(), st.booleans())
def test_any_records_at_all_give_a_statement_that_can_be_kept(given_history: SupplyHistory, has_profile: bool) -> None:
    known = replace(given_history, profiles=(PROFILE,))
    (statement,) = judge(known, AS_OF, PROFILE if has_profile else None, "0.1")
    assert isinstance(statement.statement, Statement)
    assert not [
        one for one in walk(msgspec.to_builtins(statement)) if isinstance(one, float) and not math.isfinite(one)
    ]
    assert msgspec.json.decode(msgspec.json.encode(statement), type=SystemStatement) == statement
    barred = given_history.supply.pressure_reducing_valve != "none" or given_history.supply.kind in {
        "pressure_tank",
        "parallel",
    }
    if barred:
        assert statement.margin_on_day is None
        assert statement.statement != HOLDING
    if not has_profile:
        assert statement.statement != HOLDING


@pytest.mark.parametrize("as_of", [date(1990, 1, 1), date(2200, 12, 31)])
def test_any_day_may_be_asked_about(as_of: date) -> None:
    given_history = history(
        system(*(drained(later(10 * n), "81", "66") for n in range(3))), flow_tests=(FLOW_TEST,), supply=MAIN
    )
    assert said_of(given_history, as_of=as_of).as_of == as_of
