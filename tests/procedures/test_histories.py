"""Entries of a site become one history a supply: in time, in force, in psi, gpm and ft, whatever their order."""

from __future__ import annotations

import random
from collections.abc import Mapping
from dataclasses import replace
from datetime import date
from fractions import Fraction
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.canonical import canonical_text, sha256_hex
from fieldlog.procedures.histories import histories
from fieldlog.procedures.read import parse
from fieldlog.records.entries import Entry
from fieldlog.records.history import StatedLoss, SupplyHistory, System


def uid(n: int) -> str:
    return f"{n:08x}-1111-4111-8111-111111111111"


SITE, MAIN, TANK, WET, DRY, GAUGE, NEW_GAUGE, OFFICE = (uid(n) for n in (7, 11, 12, 21, 22, 31, 32, 91))


def psi(value: str, **more: str) -> dict[str, str]:
    return {"value": value, "unit": "psi", **more}


def ft(value: str) -> dict[str, str]:
    return {"value": value, "unit": "ft"}


def entry(number: int, kind: str, body: Mapping[str, Any], **envelope: Any) -> Entry:
    """Return an entry as the log gives it; its text is one that intake takes."""
    own = envelope.pop("uid", uid(1000 + number))
    plain = {
        "uid": own, "subject": own, "author": OFFICE, "format": 1, "kind": kind, "body": body,
        "made_at": f"2026-10-03T09:00:{number % 60:02}Z", "site": SITE, **envelope,
    }  # fmt: skip
    text = canonical_text({name: value for name, value in plain.items() if value is not None})
    read = parse(text).envelope
    return Entry(
        number=number, received_at="2026-10-03T09:30:00Z", sha256=sha256_hex(text), link="", via="form", text=text,
        uid=read.uid, kind=read.kind, subject=read.subject, author=read.author, made_at=read.made_at, body=read.body,
        site=read.site, system=read.system, based_on=read.based_on, reason=read.reason,
    )  # fmt: skip


def version(number: int, of: Entry, body: Mapping[str, Any], **envelope: Any) -> Entry:
    """Return a later version of a subject."""
    return entry(
        number, of.kind, body, subject=of.subject, based_on=of.uid, reason="seen on site", system=of.system, **envelope
    )


SUPPLY = entry(2, "supply", {"name": "Quay main", "kind": "public_main"}, uid=MAIN)
OTHER_SUPPLY = entry(3, "supply", {"name": "Roof tank", "kind": "gravity_tank",
                                   "tank_level_reference": {"value": "3.048", "unit": "m"}}, uid=TANK)  # fmt: skip
DRAIN = {"id": "main drain", "size": {"value": "2", "unit": "in"}, "outlet": "yard sump", "outlet_elevation": ft("2")}
WET_BODY: dict[str, Any] = {
    "name": "Wet system", "type": "wet", "supply": MAIN, "base_elevation": {"value": "0.3048", "unit": "m"},
    "drain": DRAIN, "valves": [{"id": "V1"}, {"id": "V2", "normal": "shut"}],
    "feed": [
        {"length": ft("120"), "inside_diameter": {"value": "101.6", "unit": "mm"}, "c": 120, "nominal": "4",
         "fittings": {"gate valve": 2, "90 standard elbow": 3}},
        {"of": "check assembly", "stated_loss": [
            {"flow": {"value": "600", "unit": "gpm"}, "loss": psi("5")},
            {"flow": {"value": "300", "unit": "gpm"}, "loss": psi("4")}]},
    ],
}  # fmt: skip
WET_SYSTEM = entry(4, "system", WET_BODY, uid=WET)
DRY_SYSTEM = entry(5, "system", {"name": "Dry system", "type": "dry", "supply": MAIN}, uid=DRY)
OF_GAUGE = {
    "name": "G-14", "of": "system", "side": "supply", "taps": "riser", "behind": ["check"], "range": psi("300"),
    "division": psi("5"), "grade": "B", "elevation": ft("4"), "installed_on": "2016-02-03",
}  # fmt: skip
RISER_GAUGE = entry(6, "gauge", OF_GAUGE, uid=GAUGE, system=WET)
SITE_ENTRIES = (SUPPLY, OTHER_SUPPLY, WET_SYSTEM, DRY_SYSTEM, RISER_GAUGE)


def drain_test(number: int, on: str, **change: Any) -> Entry:
    system = change.pop("system", WET)
    return entry(number, "main_drain_test", test_body(on, **change), system=system)


def test_body(on: str, **change: Any) -> dict[str, Any]:
    body = {
        "performed_on": on, "static_before": psi("72", gauge=GAUGE), "residual": psi("54", gauge=GAUGE),
        "fully_open": True, "took_full_flow": True,
    }  # fmt: skip
    return body | change


test_body.__test__ = False  # type: ignore[attr-defined]


def history(*in_force: Entry, earlier: tuple[Entry, ...] = (), of: str = MAIN) -> SupplyHistory:
    return next(one for one in histories(in_force, earlier) if one.supply.uid == of)


def system(read: SupplyHistory, of: str = WET) -> System:
    return next(one for one in read.systems if one.uid == of)


def test_each_supply_has_its_own_history() -> None:
    found = {one.supply.uid: one for one in histories(SITE_ENTRIES)}
    assert set(found) == {MAIN, TANK}
    assert [one.name for one in found[MAIN].systems] == ["Dry system", "Wet system"]
    assert found[TANK].systems == ()
    assert found[TANK].supply.tank_level_reference_ft == pytest.approx(10)
    assert found[MAIN].through_number == 6


def test_particulars_are_read_in_psi_gpm_ft_and_in() -> None:
    read = system(history(*SITE_ENTRIES))
    assert read.base_elevation_ft == pytest.approx(1)
    assert read.drain is not None
    assert (read.drain.size_in, read.drain.outlet, read.drain.outlet_elevation_ft) == (2, "yard sump", 2)
    pipe, device = read.feed
    assert (pipe.length_ft, pipe.inside_diameter_in) == (120, pytest.approx(4))  # type: ignore[union-attr]
    assert pipe.fittings == (("90 standard elbow", 3), ("gate valve", 2))  # type: ignore[union-attr]
    assert device == StatedLoss(((300.0, 4.0), (600.0, 5.0)), "check assembly")
    assert (read.valves, read.normally_shut) == (("V1", "V2"), ("V2",))


def test_a_reading_keeps_what_was_entered_beside_its_exact_value() -> None:
    body = {"residual": {"value": "3.80", "unit": "bar", "gauge": GAUGE, "low": "3.7", "high": "3.9",
                         "pump_state": "running"}}  # fmt: skip
    (test,) = system(history(*SITE_ENTRIES, drain_test(41, "2024-05-06", **body))).drain_tests
    read = test.residual
    assert read is not None
    assert (read.value, read.unit, read.gauge, read.pump_state) == ("3.80", "bar", GAUGE, "running")
    assert read.exact_psi == Fraction("3.80") * 100000 * Fraction("0.00064516") / Fraction("4.4482216152605")
    assert read.low_psi == pytest.approx(3.7 * 14.5038, rel=1e-4)
    assert read.high_psi == pytest.approx(3.9 * 14.5038, rel=1e-4)


def test_all_that_decides_comes_through() -> None:
    body = {
        "drain": "main drain", "at": "riser", "standing": "acceptance", "source": "old record", "steady": True,
        "static_after": psi("71"), "return_seconds": {"seconds": 9}, "running_clear": True, "drain_unchanged": True,
        "system_side_before": psi("95"), "confirmed": "second gauge", "drain_pitot": psi("18"), "pump_state": "off",
        "tank_level": ft("9"), "valves": [{"id": "V1", "found": "shut", "left": "open", "shut_at": "2024-05-01T08:00Z",
                                          "opened_at": "2024-05-06T09:10Z"}],
        "done": "partly", "not_done_reason": "frost",
    }  # fmt: skip
    (test,) = system(history(*SITE_ENTRIES, drain_test(41, "2024-05-06", **body))).drain_tests
    assert (test.drain, test.at, test.standing, test.source) == ("main drain", "riser", "acceptance", "old record")
    assert (test.fully_open, test.took_full_flow, test.running_clear, test.drain_unchanged) == (True,) * 4
    assert (test.steady, test.return_s, test.confirmed, test.drain_pitot_psi) == (True, 9, "second gauge", 18)
    assert (test.pump_state, test.tank_level_ft, test.not_done, test.via) == ("off", 9, "frost", "form")
    assert test.valves[0].shut_at == "2024-05-01T08:00Z"
    assert test.system_side_before is not None


def test_a_test_that_was_not_done_is_no_test() -> None:
    not_done = {"performed_on": "2024-05-06", "done": "not", "not_done_reason": "frozen drain"}
    read = history(*SITE_ENTRIES, entry(41, "main_drain_test", not_done, system=WET))
    assert system(read).drain_tests == ()


def test_tests_stand_by_their_day_and_then_by_their_number() -> None:
    tests = [drain_test(41, "2024-05-06"), drain_test(42, "2021-05-04"), drain_test(43, "2024-05-06")]
    read = system(history(*SITE_ENTRIES, *tests))
    assert [(one.performed_on.year, one.entry) for one in read.drain_tests] == [(2021, 42), (2024, 41), (2024, 43)]


def test_a_correction_is_read_in_place_of_what_it_corrects_and_marked() -> None:
    first = drain_test(41, "2024-05-06")
    mended = version(47, first, test_body("2024-05-06", residual=psi("45")))
    (test,) = system(history(*SITE_ENTRIES, mended, earlier=(first, mended))).drain_tests
    assert (test.entry, test.subject, test.corrected) == (47, first.subject, True)
    assert test.residual is not None
    assert test.residual.psi == 45
    (before,) = system(history(*SITE_ENTRIES, first)).drain_tests
    assert not before.corrected


def test_what_was_withdrawn_is_not_in_force_and_so_not_read() -> None:
    kept, withdrawn = drain_test(41, "2024-05-06"), drain_test(42, "2024-05-07")
    read = history(*SITE_ENTRIES, kept, earlier=(*SITE_ENTRIES, kept, withdrawn))
    assert [test.entry for test in system(read).drain_tests] == [41]


def test_a_replaced_gauge_ends_when_the_next_begins() -> None:
    new = entry(8, "gauge", OF_GAUGE | {"name": "G-15", "installed_on": "2021-06-07", "replaces": GAUGE},
                uid=NEW_GAUGE, system=WET)  # fmt: skip
    old, now = system(history(*SITE_ENTRIES, new)).gauges
    assert (old.name, old.ended_on, now.name, now.ended_on) == ("G-14", date(2021, 6, 7), "G-15", None)
    assert (old.owner, old.tap, old.behind, old.full_scale_psi, old.division_psi) == (WET, "riser", ("check",), 300, 5)


def test_a_gauge_taken_out_ends_that_day_though_another_replaces_it_later() -> None:
    taken_out = version(9, RISER_GAUGE, OF_GAUGE | {"ended_on": "2021-06-01"})
    new = entry(10, "gauge", OF_GAUGE | {"installed_on": "2021-06-07", "replaces": GAUGE}, uid=NEW_GAUGE, system=WET)
    assert system(history(SUPPLY, WET_SYSTEM, taken_out, new)).gauges[0].ended_on == date(2021, 6, 1)


def test_where_two_replace_the_same_gauge_it_ended_with_the_first() -> None:
    later, first = (
        entry(number, "gauge", OF_GAUGE | {"installed_on": on, "replaces": GAUGE}, uid=uid(number), system=WET)
        for number, on in ((40, "2022-05-06"), (41, "2021-06-07"))
    )
    assert system(history(*SITE_ENTRIES, later, first)).gauges[0].ended_on == date(2021, 6, 7)


def test_gauges_of_supply_and_organisation_stand_beside_those_of_systems() -> None:
    header = entry(8, "gauge", {"name": "G-20", "of": "supply", "supply": MAIN, "taps": "header"}, uid=uid(33))
    test_gauge = entry(9, "gauge", {"name": "T-7", "of": "organisation", "certificate": "C-3", "range": psi("200")},
                       uid=uid(34), site=None)  # fmt: skip
    reading = entry(41, "gauge_reading", {"performed_on": "2024-05-06", "pump_state": "off", "readings": [
        {"pressure": psi("78", gauge=uid(33))}, {"pressure": psi("71", gauge=GAUGE, pump_state="running")},
    ]})  # fmt: skip
    read = history(*SITE_ENTRIES, header, test_gauge, reading)
    assert [gauge.name for gauge in read.supply_gauges] == ["G-20"]
    assert [gauge.name for gauge in read.organisation_gauges] == ["T-7"]
    assert [(one.reading.psi, one.pump_state) for one in read.gauge_readings] == [(78, "off")]
    assert [(one.reading.psi, one.pump_state) for one in system(read).gauge_readings] == [(71, "running")]


def test_a_comparison_stands_with_its_gauge_and_the_accuracy_of_its_reference() -> None:
    reference = entry(9, "gauge", {"name": "T-7", "of": "organisation", "range": psi("200")}, uid=uid(34), site=None)
    compared = entry(41, "gauge_comparison", {
        "performed_on": "2024-05-06", "gauge": GAUGE, "reference": uid(34), "reference_accuracy": "0.5",
        "certificate_on": "2024-01-05", "outcome": "kept",
        "points": [{"reference": psi("60"), "shown": psi("62")}, {"reference": psi("120"), "shown": psi("123")}],
    })  # fmt: skip
    (found,) = system(history(*SITE_ENTRIES, reference, compared)).gauges[0].comparisons
    assert found.points_psi == ((60, 62), (120, 123))
    assert (found.reference_accuracy_percent, found.reference_full_scale_psi) == (0.5, 200)
    assert found.certificate_on == date(2024, 1, 5)


def test_a_test_at_a_header_serves_every_system_it_names() -> None:
    test = drain_test(41, "2024-05-06", serves=[WET, DRY])
    read = history(*SITE_ENTRIES, test)
    assert [one.entry for one in system(read, WET).drain_tests] == [41]
    assert [one.entry for one in system(read, DRY).drain_tests] == [41]
    assert system(history(*SITE_ENTRIES, drain_test(42, "2024-05-06")), DRY).drain_tests == ()


MOVED = version(8, WET_SYSTEM, WET_BODY | {"supply": TANK, "on_supply_since": "2022-03-04"})
BEFORE, AFTER = drain_test(41, "2022-03-03"), drain_test(42, "2022-03-04")


def test_a_system_that_moved_has_each_test_on_the_supply_it_was_on() -> None:
    all_in_force = (SUPPLY, OTHER_SUPPLY, MOVED, BEFORE, AFTER)
    old = system(history(*all_in_force, earlier=(WET_SYSTEM, MOVED)))
    new = system(history(*all_in_force, earlier=(WET_SYSTEM, MOVED), of=TANK))
    assert ([test.entry for test in old.drain_tests], old.on_supply_until) == ([41], date(2022, 3, 4))
    assert ([test.entry for test in new.drain_tests], new.on_supply_since) == ([42], date(2022, 3, 4))
    assert (old.on_supply_since, new.on_supply_until) == (None, None)


def test_its_routine_readings_stay_with_the_supply_it_was_on() -> None:
    rounds = [
        entry(50 + n, "gauge_reading", {"performed_on": on, "readings": [{"pressure": psi("71", gauge=GAUGE)}]})
        for n, on in enumerate(("2021-05-06", "2023-05-06"))
    ]
    all_in_force = (SUPPLY, OTHER_SUPPLY, MOVED, RISER_GAUGE, *rounds)
    old = system(history(*all_in_force, earlier=(WET_SYSTEM, MOVED)))
    new = system(history(*all_in_force, earlier=(WET_SYSTEM, MOVED), of=TANK))
    assert [one.entry for one in old.gauge_readings] == [50]
    assert [one.entry for one in new.gauge_readings] == [51]


def test_a_later_version_that_is_silent_about_the_move_keeps_it() -> None:
    repainted = version(9, replace(MOVED, subject=WET), WET_BODY | {"supply": TANK, "riser": "yard"})
    earlier = (WET_SYSTEM, MOVED, repainted)
    all_in_force = (SUPPLY, OTHER_SUPPLY, repainted, BEFORE, AFTER)
    assert [test.entry for test in system(history(*all_in_force, earlier=earlier, of=TANK)).drain_tests] == [42]
    assert [test.entry for test in system(history(*all_in_force, earlier=earlier)).drain_tests] == [41]


def test_a_supply_recorded_wrongly_was_never_its_supply() -> None:
    put_right = version(8, WET_SYSTEM, WET_BODY | {"supply": TANK})
    all_in_force = (SUPPLY, OTHER_SUPPLY, put_right, BEFORE, AFTER)
    earlier = (WET_SYSTEM, put_right)
    assert [test.entry for test in system(history(*all_in_force, earlier=earlier, of=TANK)).drain_tests] == [41, 42]
    assert history(*all_in_force, earlier=earlier).systems == ()


def test_a_system_that_came_back_is_on_its_supply_before_and_since() -> None:
    back = version(9, replace(MOVED, subject=WET), WET_BODY | {"on_supply_since": "2023-01-05"})
    later = drain_test(43, "2023-02-03")
    read = system(history(SUPPLY, OTHER_SUPPLY, back, BEFORE, AFTER, later, earlier=(WET_SYSTEM, MOVED, back)))
    assert [test.entry for test in read.drain_tests] == [41, 43]
    assert (read.on_supply_since, read.on_supply_until) == (date(2023, 1, 5), None)


@pytest.mark.parametrize(
    ("drain", "stated", "since"),
    [
        ({"outlet": "new sump"}, None, date(2025, 4, 3)),
        ({"size": {"value": "1.25", "unit": "in"}}, None, date(2025, 4, 3)),
        ({"id": "drain B"}, None, date(2025, 4, 3)),
        ({"outlet": "new sump"}, "2024-11-12", date(2024, 11, 12)),
        ({"outlet": "Yard  Sump"}, None, None),
        ({"size": {"value": "50.8", "unit": "mm"}}, None, None),
        ({"outlet_elevation": ft("5")}, None, None),
        ({"k": {"value": "41", "unit": "gpm/psi^0.5"}}, None, None),
    ],
)
def test_another_drain_starts_anew_on_the_day_stated_or_written_down(
    drain: dict[str, Any], stated: str | None, since: date | None
) -> None:
    body = WET_BODY | {"drain": DRAIN | drain} | ({"drain_changed_on": stated} if stated else {})
    altered = version(8, WET_SYSTEM, body, made_at="2025-04-03T08:00:00Z")
    read = system(history(SUPPLY, altered, earlier=(WET_SYSTEM, altered)))
    assert read.drain is not None
    assert read.drain.since == since


def test_a_drain_recorded_for_the_first_time_is_no_change() -> None:
    bare = entry(4, "system", {name: part for name, part in WET_BODY.items() if name != "drain"}, uid=WET)
    completed = version(8, bare, WET_BODY)
    read = system(history(SUPPLY, completed, earlier=(bare, completed)))
    assert read.drain is not None
    assert read.drain.since is None


def test_completing_the_record_of_a_drain_is_no_change() -> None:
    bare = entry(4, "system", WET_BODY | {"drain": {"id": "main drain"}}, uid=WET)
    completed = version(8, bare, WET_BODY)
    read = system(history(SUPPLY, completed, earlier=(bare, completed)))
    assert read.drain is not None
    assert (read.drain.since, read.drain.size_in) == (None, 2)


IMPAIRED = entry(51, "deficiency", {
    "text": "Valve found part shut", "found_on": "2024-05-06", "class": "impairment", "proposed_by": "fieldlog",
    "began_at": "2024-05-06T08:10Z"}, system=WET)  # fmt: skip


def remedy(number: int, of: Entry, **change: Any) -> Entry:
    body = {"deficiency": of.subject, "done_on": "2024-05-09", "by": "Technician A", "evidence": "flow seen"}
    return entry(number, "remedy", body | change, system=of.system)


def test_a_repair_says_what_it_restores_and_whether_it_is_confirmed() -> None:
    for confirmed in ({}, {"confirmed_by": "Office A"}):
        read = system(history(*SITE_ENTRIES, IMPAIRED, remedy(52, IMPAIRED, restores="restriction", **confirmed)))
        (repair,) = read.repairs
        assert (repair.restores, repair.done_on, repair.system) == ("restriction", date(2024, 5, 9), WET)
        assert repair.is_confirmed == bool(confirmed)


def test_a_repair_of_the_drain_starts_its_history_anew() -> None:
    read = system(history(*SITE_ENTRIES, IMPAIRED, remedy(52, IMPAIRED, restores="drain")))
    assert read.drain is not None
    assert read.drain.since == date(2024, 5, 9)


def test_an_impairment_stands_until_its_end_or_a_confirmed_remedy() -> None:
    ended = version(53, IMPAIRED, dict(IMPAIRED.body) | {"ended_at": "2024-05-09T11:45Z"})
    cases = [
        ((IMPAIRED,), 1), ((ended,), 0), ((IMPAIRED, remedy(52, IMPAIRED)), 1),
        ((IMPAIRED, remedy(52, IMPAIRED, confirmed_by="Office A")), 0),
    ]  # fmt: skip
    for entries, count in cases:
        assert len(system(history(*SITE_ENTRIES, *entries)).impairments) == count
    assert system(history(*SITE_ENTRIES, IMPAIRED), DRY).impairments == ()


def test_an_impairment_of_the_whole_site_stands_for_every_system() -> None:
    whole = entry(51, "deficiency", dict(IMPAIRED.body))
    read = history(*SITE_ENTRIES, whole)
    assert [len(one.impairments) for one in read.systems] == [1, 1]
    repaired = history(*SITE_ENTRIES, whole, remedy(52, whole, confirmed_by="Office A", restores="restriction"))
    assert [(len(one.impairments), len(one.repairs)) for one in repaired.systems] == [(0, 1), (0, 1)]


def test_the_newest_design_record_counts_by_its_own_date() -> None:
    old = {"demand": {"flow": {"value": "620", "unit": "gpm"}, "pressure": psi("46")}, "made_on": "2016-01-02",
           "hose_outside": {"value": "946.352946", "unit": "L/min"}, "includes_inside_hose": "no",
           "supply": {"static": psi("78"), "residual": psi("60"), "flow": {"value": "1200", "unit": "gpm"}},
    }  # fmt: skip
    new = old | {"made_on": "2021-03-04"}
    read = system(history(*SITE_ENTRIES, entry(41, "design_record", new, system=WET),
                          entry(42, "design_record", old, system=WET)))  # fmt: skip
    assert read.design is not None
    assert (read.design.entry, read.design.made_on) == (41, date(2021, 3, 4))
    assert read.design.hose_outside_gpm == pytest.approx(250)
    assert (read.design.includes_inside_hose, read.design.supply_flow_gpm) == (False, 1200)


def test_pitoted_outlets_of_a_flow_test_are_summed() -> None:
    # 0.90, 2-1/2 in., 40 psi: 1061 gpm (common practice, from a published worked example).
    outlet = {"size": {"value": "2.5", "unit": "in"}, "coefficient": "0.90", "pitot": psi("40")}
    body = {"performed_on": "2024-05-06", "supply": MAIN, "at": "street", "static": psi("84"), "elevation": ft("-3"),
            "points": [{"residual": psi("52"), "outlets": [outlet, outlet | {"factor": "0.83"}]},
                       {"residual": psi("70"), "flow": {"value": "2649.788", "unit": "L/min"}}]}  # fmt: skip
    (test,) = history(*SITE_ENTRIES, entry(41, "flow_test", body)).flow_tests
    assert test.points == ((pytest.approx(700, abs=0.1), 70), (pytest.approx(1061 * 1.83, rel=1e-3), 52))
    assert (test.static_psi, test.elevation_ft, test.pitots, test.at) == (84, -3, 2, "street")
    assert history(*SITE_ENTRIES, entry(41, "flow_test", body), of=TANK).flow_tests == ()


def test_other_tests_come_through() -> None:
    alarm = {"performed_on": "2024-05-06", "item": "vane", "did_not_sound": True, "static": psi("72")}
    trip = {"performed_on": "2024-05-07", "kind": "trip", "trip": {"seconds": 12}, "delivery": {"seconds": 41},
            "air_at_start": psi("38"), "full_flow": True, "standing": "acceptance"}  # fmt: skip
    forward = {"performed_on": "2024-05-08", "item": "assembly", "flow": {"value": "600", "unit": "gpm"},
               "at_riser": psi("66")}  # fmt: skip
    status = {"performed_on": "2024-05-09", "valve": "V1", "closed_at": "2024-05-09T08:10Z", "flow_seen": True}
    read = system(history(
        *SITE_ENTRIES, entry(41, "inspectors_test", alarm, system=WET), entry(42, "inspectors_test", trip, system=WET),
        entry(43, "forward_flow_test", forward, system=WET), entry(44, "valve_status_test", status, system=WET),
    ))  # fmt: skip
    never_came, dry = read.alarm_tests
    assert (never_came.item, never_came.did_not_come, never_came.alarm_s, never_came.static_psi) == (
        "vane",
        True,
        None,
        72,
    )
    assert (dry.is_dry, dry.trip_s, dry.delivery_s, dry.air_start_psi, dry.is_full_flow) == (True, 12, 41, 38, True)
    assert (read.forward_flow_tests[0].flow_gpm, read.forward_flow_tests[0].riser_psi) == (600, 66)
    assert (read.valve_status_tests[0].valve, read.valve_status_tests[0].flow_seen) == ("V1", True)


def test_a_forward_flow_test_without_its_flow_is_no_evidence() -> None:
    body = {"performed_on": "2024-05-08", "done": "partly", "not_done_reason": "outlet frozen", "at_riser": psi("66")}
    assert system(history(*SITE_ENTRIES, entry(43, "forward_flow_test", body, system=WET))).forward_flow_tests == ()


@given(st.randoms(use_true_random=False))
def test_the_order_of_entries_changes_nothing(shuffle: random.Random) -> None:
    confirmed = remedy(61, IMPAIRED, confirmed_by="Office A", restores="drain")
    new = entry(9, "gauge", OF_GAUGE | {"installed_on": "2021-06-07", "replaces": GAUGE}, uid=NEW_GAUGE, system=WET)
    in_force = [SUPPLY, OTHER_SUPPLY, MOVED, DRY_SYSTEM, RISER_GAUGE, new, BEFORE, AFTER, IMPAIRED, confirmed]
    earlier = [WET_SYSTEM, MOVED, *in_force]
    expected = histories(in_force, earlier)
    shuffle.shuffle(in_force)
    shuffle.shuffle(earlier)
    assert histories(in_force, earlier) == expected
