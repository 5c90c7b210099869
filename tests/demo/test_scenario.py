"""The scenario's entries: valid, the same each time, of every kind, by those who may make them, about nobody real."""

from __future__ import annotations

import json
import re
from collections.abc import Iterator
from datetime import date
from functools import cache
from itertools import pairwise
from typing import Any

import pytest

from fieldlog.assessment.codes import ReasonCode
from fieldlog.demo import scenario, story
from fieldlog.demo.pen import ORGANISATION, uid_of
from fieldlog.demo.plan import BASE_FT, GAUGE_FT, OUTLET_FT
from fieldlog.demo.visits import attendances
from fieldlog.procedures.catalogue import PROCEDURES, may_make
from fieldlog.procedures.read import Parsed, parse
from fieldlog.records.statement import Statement
from fieldlog.reports.strokes import segments
from tests.wording.forbidden import forbidden_in

AS_OF = date(2026, 12, 1)
ROLES = {
    "Technician A", "Technician B", "Office A", "Owner's representative A", "Licensed engineer A", "Designer A",
    "Monitoring desk", "water company desk", "fieldlog",
}  # fmt: skip
_OF_PEOPLE = {"by", "who", "decided_by", "proposed_by", "approved_by", "confirmed_by", "closed_by", "permission"}
_NOT_OURS = re.compile(r"https?:|www\.|@|\b(inc|ltd|llc|gmbh|corp)\b|[®™©]", re.IGNORECASE)


@cache
def texts(as_of: date = AS_OF) -> tuple[str, ...]:
    return tuple(arrival.text for _, arrivals in story.batches(as_of) for arrival in arrivals)


@cache
def entries() -> tuple[Parsed, ...]:
    return tuple(parse(text) for text in texts())


def bodies(*kinds: str) -> list[Any]:
    return [one.body for one in entries() if one.envelope.kind in kinds]


def strings(plain: Any, name: str = "") -> Iterator[tuple[str, str]]:
    """Every text in a body with the name of the field it stands in."""
    if isinstance(plain, str):
        yield name, plain
    elif isinstance(plain, dict):
        for key, value in plain.items():
            yield from strings(value, key)
    elif isinstance(plain, list):
        for value in plain:
            yield from strings(value, name)


def written_by_us() -> Iterator[tuple[str, str]]:
    """Texts of the scenario's own; those of a rule profile come from the shipped catalogue."""
    for text in texts():
        plain = json.loads(text)
        if plain["kind"] != "rule_profile":
            yield from strings(plain["body"] | {"reason": plain.get("reason", "none")})


def test_every_text_reads_back_as_an_entry() -> None:
    assert len(entries()) == len(texts()) > 1200


def test_two_runs_of_one_day_write_the_same_texts() -> None:
    again = tuple(arrival.text for _, arrivals in story.batches(AS_OF) for arrival in arrivals)
    assert again == texts()


def test_another_day_writes_as_many_entries_with_other_dates() -> None:
    other = texts(date(2028, 2, 29))
    assert len(other) == len(texts())
    assert not set(other) & set(texts())


def test_no_uid_stands_for_two_entries() -> None:
    uids = [one.envelope.uid for one in entries()]
    assert len(set(uids)) == len(uids)


def test_there_is_an_entry_of_every_kind_but_the_organisation_and_the_events_of_the_instance() -> None:
    assert {one.envelope.kind for one in entries()} == set(PROCEDURES) - {"organisation", "event"}


def test_everybody_made_only_what_their_role_may_make() -> None:
    roles = {uid_of(key): role for key, _, role, _ in scenario.PEOPLE} | {ORGANISATION: "office"}
    for one in entries():
        assert may_make(roles[one.envelope.author], one.envelope.kind), one.envelope


def test_nothing_is_of_a_day_to_come() -> None:
    day = AS_OF.isoformat()
    for one in entries():
        assert one.envelope.made_at[:10] <= day
        performed_on = getattr(one.body, "performed_on", None)
        assert performed_on is None or performed_on <= AS_OF


def test_people_are_roles_only() -> None:
    for name, text in written_by_us():
        if name in _OF_PEOPLE:
            assert text in ROLES, (name, text)
    for kind in ("person", "sign_off"):
        for body in bodies(kind):
            names = [body.name] if kind == "person" else [signer.name for signer in body.signers]
            assert set(names) <= ROLES


def test_sites_are_plainly_invented() -> None:
    for body in bodies("site"):
        assert re.fullmatch(r"\d Example \w+", body.address)
        assert body.owner == f"Owner of {body.name}"
    assert len({body.name for body in bodies("site")}) == 7


def test_no_firm_brand_or_address_of_the_net_is_named() -> None:
    for name, text in written_by_us():
        assert not _NOT_OURS.search(text), (name, text)


def test_no_result_is_called_by_a_word_that_is_not_ours() -> None:
    for name, text in written_by_us():
        if name not in {"uid", "sha256", "strokes"}:
            assert forbidden_in(text) == [], (name, text)


def test_units_are_mixed() -> None:
    units = {(body.units.pressure, body.units.flow, body.units.length) for body in bodies("site")}
    assert units == {("psi", "gpm", "ft"), ("bar", "L/min", "m"), ("kPa", "L/min", "m")}


def test_every_kind_of_supply_and_of_system_is_there() -> None:
    assert {body.kind for body in bodies("supply")} == {
        "public_main", "gravity_tank", "pressure_tank", "fire_pump", "parallel",
    }  # fmt: skip
    assert {body.pressure_reducing_valve for body in bodies("supply")} == {"none", "sole feed"}
    assert {body.type for body in bodies("system")} == {"wet", "dry", "preaction", "deluge", "standpipe"}


def test_one_site_has_no_rule_profile_and_the_others_one_approved_by_the_engineer() -> None:
    profiles = bodies("rule_profile")
    assert len(profiles) == 6
    assert {profile.approved_by for profile in profiles} == {"Licensed engineer A"}


def test_heights_on_record_are_those_the_simulator_reads_at() -> None:
    for gauge in (body for body in bodies("gauge") if body.of == "system"):
        assert gauge.elevation.ft == pytest.approx(GAUGE_FT, abs=0.17)  # half of 0.1 m
    for system in bodies("system"):
        assert system.base_elevation.ft == pytest.approx(BASE_FT, abs=0.17)
        assert system.drain.outlet_elevation.ft == pytest.approx(OUTLET_FT, abs=0.17)


def test_some_design_records_are_missing() -> None:
    assert len(bodies("design_record")) < len({system.key for site in scenario.sites(AS_OF) for system in site.systems})


@pytest.mark.parametrize("site", scenario.sites(AS_OF), ids=lambda site: site.key)
def test_a_site_was_visited_over_ten_years_up_to_a_few_months_ago(site: Any) -> None:
    visits = attendances(site, AS_OF)
    days = [visit.on for visit in visits]
    assert days == sorted(set(days))
    assert (days[-1] - days[0]).days == pytest.approx(3652, abs=2)
    assert 0 < (AS_OF - days[-1]).days < 200
    assert len(visits) == 10 * site.visits_a_year + 1


@pytest.mark.parametrize("site", scenario.sites(AS_OF), ids=lambda site: site.key)
def test_the_gauges_of_a_site_are_read_every_quarter_for_ten_years(site: Any) -> None:
    here = [one for one in entries() if one.envelope.site == uid_of(site.key)]
    read: list[Any] = [one.body for one in here if one.envelope.kind == "gauge_reading"]
    days = [body.performed_on for body in read]
    gaps = {(after - day).days for day, after in pairwise(days)}
    assert gaps <= {90, 91, 92}
    assert len(days) == 10 * 4 + 1
    assert all(len(body.readings) == len(site.systems) for body in read)


def test_rounds_between_visits_belong_to_no_visit_and_no_sign_off() -> None:
    between = {
        one.envelope.uid for one in entries() if one.envelope.kind == "gauge_reading" and one.envelope.visit is None
    }
    assert len(between) == 20 * 6  # of the sites visited twice a year
    assert not between & {covered.uid for body in bodies("sign_off") for covered in body.covers}


def test_corrections_name_what_they_replace_and_why() -> None:
    corrected = [one.envelope for one in entries() if one.envelope.based_on and one.envelope.kind == "main_drain_test"]
    assert len(corrected) == 1
    assert corrected[0].based_on == corrected[0].subject
    assert "typing slip" in str(corrected[0].reason)


def test_one_duplicate_is_withdrawn_and_one_subject_was_changed_twice() -> None:
    notes = [one.envelope for one in entries() if one.envelope.kind == "note"]
    assert sum(note.withdrawn is True for note in notes) == 1
    bases = [note.based_on for note in notes if note.based_on]
    assert [base for base in set(bases) if bases.count(base) > 1] == [uid_of("mill/note/fork")]


def test_signatures_are_drawn_alike_by_one_person_and_never_the_same() -> None:
    drawn: dict[str, list[str]] = {}
    for body in bodies("sign_off"):
        for signer in body.signers:
            drawn.setdefault(signer.name, []).append(signer.strokes)
    assert set(drawn) == {"Technician A", "Technician B", "Owner's representative A"}
    for strokes in drawn.values():
        assert len(set(strokes)) == len(strokes)
        assert all([segment.letter for segment in segments(path)] == ["M", *"C" * 9] for path in strokes)


def test_every_sign_off_covers_tests_of_its_visit_and_says_that_only_these_were_done() -> None:
    by_uid = {one.envelope.uid: one.envelope for one in entries()}
    for one in entries():
        if one.envelope.kind == "sign_off":
            body: Any = one.body
            assert {by_uid[covered.uid].visit for covered in body.covers} == {one.envelope.visit}
            assert "Only the listed items were inspected or tested." in body.summary


def test_what_was_due_and_not_done_has_a_reason_and_a_date() -> None:
    left = [item for body in bodies("visit") for item in body.not_done]
    assert [item.reason for item in left] == ["permission of the water company awaited"]
    assert left[0].agreed_for > AS_OF


def test_each_of_the_six_statements_and_of_the_causes_is_meant_for_a_system() -> None:
    systems = [system for site in scenario.sites(AS_OF) for system in site.systems]
    assert {system.expected for system in systems} == set(Statement)
    assert {cause for system in systems for cause in system.because} >= {
        ReasonCode.TEN_PERCENT, ReasonCode.RESIDUAL_OUTSIDE_BAND, ReasonCode.STATIC_OUTSIDE_BAND,
        ReasonCode.NEW_REFERENCE, ReasonCode.GAUGE_REPLACED, ReasonCode.NOT_FULLY_OPEN,
        ReasonCode.PUMP_STATE_DIFFERS, ReasonCode.BEHIND_REDUCING_VALVE, ReasonCode.SET_POINT_DIFFERS,
        ReasonCode.KIND_WITHOUT_OWN_TEST, ReasonCode.BELOW_DEMAND, ReasonCode.FLOW_TEST_OLD, ReasonCode.NO_FLOW_TEST,
        ReasonCode.NO_DEMAND, ReasonCode.NO_PROFILE, ReasonCode.BLIND_LOSS_ABOVE_MARGIN, ReasonCode.HOLDING,
        ReasonCode.VALVE_FOUND_NOT_OPEN, ReasonCode.NOT_RECOVERED, ReasonCode.RESIDUAL_NEAR_ZERO,
        ReasonCode.IMPAIRMENT_OPEN, ReasonCode.TRAPPED_PRESSURE, ReasonCode.DELIVERY_LONGER,
    }  # fmt: skip
