"""The whole story through the services: each system is said what the scenario meant, and a sealed report is made."""

from __future__ import annotations

from collections.abc import Callable
from datetime import UTC, date, datetime
from pathlib import Path

import pytest

from fieldlog.demo import scenario, story
from fieldlog.demo.pen import uid_of
from fieldlog.demo.plan import SystemPlan
from fieldlog.demo.story import DemoOutcome
from fieldlog.records.history import DrainTest, System
from fieldlog.records.statement import Statement
from fieldlog.services import instance, judging, reporting, sites
from fieldlog.services.instance import Instance
from fieldlog.services.sites import SystemRow
from fieldlog.settings import Settings
from fieldlog.storage import chain, entries, log

pytestmark = pytest.mark.slow

# Every season of the year, and a day of leap years.
DAYS = (date(2026, 2, 3), date(2026, 5, 21), date(2026, 8, 14), date(2027, 11, 9), date(2028, 2, 29))


def noon(day: date) -> datetime:
    return datetime(day.year, day.month, day.day, 12, tzinfo=UTC)


def no_progress(count: int) -> None:
    assert count == 1


def entered(folder: Path, day: date, progress: Callable[[int], None] = no_progress) -> Instance:
    made = instance.create_instance(Settings(folder))
    story.enter_history(made, noon(day), progress)
    return made


def plans(day: date) -> dict[str, SystemPlan]:
    return {uid_of(system.key): system for site in scenario.sites(day) for system in site.systems}


def codes(row: SystemRow) -> set[str]:
    return {str(reason.code) for reason in (*row.said.reasons, *row.said.findings)}


@pytest.fixture(scope="module")
def built(tmp_path_factory: pytest.TempPathFactory) -> tuple[Instance, DemoOutcome, int]:
    made = instance.create_instance(Settings(tmp_path_factory.mktemp("demo") / "instance"))
    steps: list[int] = []
    outcome = story.build(made, noon(DAYS[0]), steps.append)
    return made, outcome, sum(steps)


@pytest.mark.parametrize("day", DAYS, ids=str)
def test_each_system_is_said_what_the_scenario_meant_and_because_of_that(tmp_path: Path, day: date) -> None:
    rows = sites.system_rows(entered(tmp_path / "instance", day), day)
    meant = plans(day)
    said = {meant[row.said.system].key: row.said.statement for row in rows}
    assert said == {system.key: system.expected for system in meant.values()}
    missing = {
        system.key: lacking
        for row in rows
        for system in [meant[row.said.system]]
        if (lacking := {str(cause) for cause in system.because} - codes(row))
    }
    assert missing == {}


def test_all_six_statements_are_said(built: tuple[Instance, DemoOutcome, int]) -> None:
    rows = sites.system_rows(built[0], DAYS[0])
    assert {row.said.statement for row in rows} == set(Statement)


def test_no_margin_is_given_where_the_kind_of_supply_has_none(built: tuple[Instance, DemoOutcome, int]) -> None:
    barred = {uid_of(f"quarry-{number}") for number in (2, 3, 4)}
    rows = [row for row in sites.system_rows(built[0], DAYS[0]) if row.said.system in barred]
    assert [row.said.margin_on_day for row in rows] == [None, None, None]


def test_a_margin_by_forward_flow_test_is_among_them(built: tuple[Instance, DemoOutcome, int]) -> None:
    margins = [row.said.margin_on_day for row in sites.system_rows(built[0], DAYS[0])]
    assert {"flow test", "forward-flow test"} <= {margin.basis for margin in margins if margin is not None}


def test_the_outcome_names_what_was_made(built: tuple[Instance, DemoOutcome, int]) -> None:
    made, outcome, steps = built
    assert outcome.entries == entries.count(made.connection)
    assert outcome.head == log.head(made.connection).link
    assert outcome.systems == len(outcome.expected) == 22
    assert steps == story.steps(DAYS[0])
    told = "\n".join(outcome.lines())
    assert all(part in told for part in (outcome.folder, outcome.report, outcome.head, "invented"))


def test_the_outcome_tells_of_each_system_what_should_be_said(built: tuple[Instance, DemoOutcome, int]) -> None:
    told = {line.strip() for line in built[1].lines() if " · " in line}
    rows = sites.system_rows(built[0], DAYS[0])
    assert told == {f"{row.site.body['name']} · {row.system.body['name']} · {row.said.statement}" for row in rows}


def test_the_report_of_the_last_visit_is_sealed_and_equal_to_the_log(
    built: tuple[Instance, DemoOutcome, int],
) -> None:
    made, outcome, _ = built
    checked = reporting.verify_report(made, Path(outcome.report).read_bytes())
    assert checked.is_good
    visit = entries.in_force_of(made.connection, outcome.visit)
    assert visit is not None
    assert visit.body["state"] == "closed"
    assert [entry.body["state"] for entry in entries.versions(made.connection, outcome.visit)] == [
        "planned", "open", "closed",
    ]  # fmt: skip
    there = entries.in_force_at_visit(made.connection, outcome.visit)
    assert {(entry.kind == "event", entry.via) for entry in there} == {(False, "form"), (True, "server")}


def test_the_chain_is_whole(built: tuple[Instance, DemoOutcome, int]) -> None:
    assert chain.check(built[0].connection).fault is None


def test_the_fork_is_settled_the_duplicate_out_of_force_and_the_slip_corrected(
    built: tuple[Instance, DemoOutcome, int],
) -> None:
    connection = built[0].connection
    assert entries.forked(connection) == []
    settled = entries.in_force_of(connection, uid_of("mill/note/fork"))
    assert settled is not None
    assert settled.body["text"] == "Grate is 250 mm, measured again"
    double = entries.current_of(connection, uid_of("mill/note/double"))
    assert double is not None
    assert double.withdrawn
    slip = entries.versions(connection, uid_of("harbour/visit/4/harbour-1/drain"))
    assert len(slip) == 2
    assert slip[0].body["residual"]["value"] != slip[1].body["residual"]["value"]


def system_of(built: tuple[Instance, DemoOutcome, int], key: str) -> System:
    site = uid_of(key.partition("-")[0])
    histories = judging.site_histories(built[0].connection, site)
    return next(system for history in histories for system in history.systems if system.uid == uid_of(key))


def test_one_impairment_is_open_and_one_has_ended(built: tuple[Instance, DemoOutcome, int]) -> None:
    assert len(system_of(built, "ferry-2").impairments) == 1
    assert system_of(built, "harbour-2").impairments == ()
    found = entries.versions(built[0].connection, uid_of("harbour-2/flange"))
    assert ["ended_at" in version.body for version in found] == [False, True]
    status = system_of(built, "harbour-2").valve_status_tests
    assert [test.flow_seen for test in status] == [True]


def test_a_confirmed_repair_brought_the_residual_back(built: tuple[Instance, DemoOutcome, int]) -> None:
    system = system_of(built, "hill-1")
    repairs = [(repair.restores, repair.is_confirmed) for repair in system.repairs]
    assert repairs == [("restriction", True)]
    done_on = system.repairs[0].done_on
    standing = [test.standing for test in system.drain_tests if test.performed_on == done_on]
    assert standing == ["after repair"]
    drops = {test.performed_on: drop_of(test) for test in system.drain_tests}
    before = max(day for day in drops if day < done_on)
    assert drops[before] > 2 * drops[done_on]
    division_psi = 0.73  # 5 kPa
    assert drops[done_on] <= max(drop for day, drop in drops.items() if day < before) + 1.1 * division_psi


def drop_of(test: DrainTest) -> float:
    assert test.static_before is not None
    assert test.residual is not None
    return test.static_before.psi - test.residual.psi


def test_a_replaced_gauge_ends_where_the_new_one_begins(built: tuple[Instance, DemoOutcome, int]) -> None:
    old, new = system_of(built, "harbour-2").gauges
    assert (old.name, new.name) == ("G-14", "G-15")
    assert old.ended_on == new.installed_on == scenario.ago(DAYS[0], 0.25)


def test_a_rebuilt_drain_is_on_record_with_its_day(built: tuple[Instance, DemoOutcome, int]) -> None:
    drain = system_of(built, "north-2").drain
    assert drain is not None
    assert (drain.since, drain.k) == (scenario.ago(DAYS[0], 2.1), 32.0)


def test_two_instances_of_one_moment_have_the_same_log(tmp_path: Path) -> None:
    heads = [log.head(entered(tmp_path / name, DAYS[1]).connection) for name in ("one", "two")]
    assert heads[0] == heads[1]
    assert heads[0].number > 1200
