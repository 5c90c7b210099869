"""Every kind: what a body may hold, what is refused and how, who makes it, what it is called."""

from __future__ import annotations

import importlib.util
import json
import re
from datetime import date
from pathlib import Path
from typing import Any, get_args

import msgspec
import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.canonical import canonical_text
from fieldlog.errors import InputError
from fieldlog.procedures.bodies import decode_body, fields, json_schema, plain_body
from fieldlog.procedures.catalogue import PROCEDURES, may_make, withheld_from
from fieldlog.procedures.compose import compose, import_uid
from fieldlog.procedures.envelope import Kind
from fieldlog.procedures.read import parse
from fieldlog.procedures.rows import rows
from fieldlog.rules import loader

_spec = importlib.util.spec_from_file_location("examples", Path(__file__).with_name("examples.py"))
assert _spec is not None
assert _spec.loader is not None
examples = importlib.util.module_from_spec(_spec)
_spec.loader.exec_module(examples)

KINDS = sorted(PROCEDURES)
PLACES = {"site": examples.GAUGE, "system": examples.SYSTEM, "visit": examples.OTHER}


def profile() -> dict[str, Any]:
    catalogue = loader.load("us_inspection_2017")
    adoption = loader.Adoption(
        approved_by="Licensed engineer A", approved_on=date(2026, 1, 5), in_force_from=date(2026, 1, 6),
        judged_on="low_day", approved_rows=tuple(catalogue.row_ids())[:5],
    )  # fmt: skip
    plain: dict[str, Any] = msgspec.to_builtins(loader.resolve(catalogue, adoption))
    return plain


examples.MINIMAL["rule_profile"] = examples.FULL["rule_profile"] = profile()
BODIES = [(kind, body) for bodies in (examples.MINIMAL, examples.FULL) for kind, body in sorted(bodies.items())]


def places_of(kind: str) -> dict[str, str]:
    names = {"site", "system"} if kind == "gauge" else PROCEDURES[kind].needs
    return {name: PLACES[name] for name in names}


def text_of(kind: str, body: dict[str, Any], **more: Any) -> str:
    needed = places_of(kind)
    plain = {
        "uid": examples.PERSON, "subject": examples.PERSON, "author": examples.OTHER, "format": 1, "kind": kind,
        "made_at": "2026-10-03T10:00:00Z", "body": body, **needed, **more,
    }  # fmt: skip
    return canonical_text(plain)


def test_catalogue_holds_every_kind_of_the_envelope() -> None:
    assert set(PROCEDURES) == set(get_args(Kind))


def test_there_is_an_example_of_every_kind() -> None:
    assert set(examples.MINIMAL) == set(examples.FULL) == set(PROCEDURES)


@pytest.mark.parametrize(("kind", "body"), BODIES)
def test_a_body_comes_back_as_it_went_in(kind: str, body: dict[str, Any]) -> None:
    parsed = parse(text_of(kind, body))
    again = compose(
        kind, parsed.body, uid=examples.PERSON, author=examples.OTHER, made_at="2026-10-03T10:00:00Z",
        **places_of(kind),
    )  # fmt: skip
    assert parse(again).body == parsed.body
    assert decode_body(kind, plain_body(parsed.body)) == parsed.body


@pytest.mark.parametrize("kind", sorted(set(PROCEDURES) - {"rule_profile"}))
def test_the_full_example_states_every_field(kind: str) -> None:
    stated = set(examples.FULL[kind])
    names = {field.encode_name for field in msgspec.structs.fields(PROCEDURES[kind].body)}
    # These two exclude another one that is stated.
    assert names - stated <= {"done", "not_done_reason"}


@pytest.mark.parametrize("kind", KINDS)
def test_every_field_has_a_label_in_plain_words(kind: str) -> None:
    if kind == "rule_profile":
        return  # shown by its own pages, not field by field
    for field in fields(PROCEDURES[kind].body):
        assert field.label[0].isupper() or field.label[0] == "K", field
        assert not re.search(r"\b(pass|fail|safe|adequate|compliant)", f"{field.label} {field.hint}".lower())


@pytest.mark.parametrize(("kind", "body"), BODIES)
def test_an_unknown_field_is_refused_by_name(kind: str, body: dict[str, Any]) -> None:
    with pytest.raises(InputError, match="colour") as refused:
        parse(text_of(kind, body | {"colour": "red"}))
    assert refused.value.field.startswith("body")


@pytest.mark.parametrize(
    ("kind", "change", "field"),
    [
        ("main_drain_test", {"residual": {"value": "54,5", "unit": "psi"}}, "body.residual.value"),
        ("main_drain_test", {"residual": {"value": "54", "unit": "mmHg"}}, "body.residual.unit"),
        ("main_drain_test", {"residual": 54}, "body.residual"),
        ("main_drain_test", {"performed_on": "3 Oct"}, "body.performed_on"),
        ("main_drain_test", {"fully_open": "yes"}, "body.fully_open"),
        ("main_drain_test", {"done": "partly"}, "body.not_done_reason"),
        ("main_drain_test", {"valves": [{"id": "V1", "left": "open", "shut_at": "2026-10-03T10:00Z",
                                         "opened_at": "2026-10-03T10:30+01:00"}]}, "body.valves[0].opened_at"),
        ("system", {"feed": [{}]}, "body.feed[0]"),
        ("system", {"feed": [{"c": 120, "of": "check assembly"}]}, "body.feed[0]"),
        ("system", {"feed": [{"of": "check assembly"}]}, "body.feed[0].stated_loss"),
        ("system", {"feed": [{"c": 120}]}, "body.feed[0].length"),
        ("system", {"valves": [{"id": "V1"}, {"id": "V1"}]}, "body.valves"),
        ("system", {"type": "misty"}, "body.type"),
        ("gauge", {"of": "supply"}, "body.supply"),
        ("gauge", {"replaces": examples.OTHER}, "body.installed_on"),
        ("gauge", {"installed_on": "2026-03-04", "ended_on": "2026-03-03"}, "body.ended_on"),
        ("gauge", {"of": "organisation"}, "site"),
        ("gauge", {"replaces": examples.PERSON, "installed_on": "2026-03-04"}, "body.replaces"),
        ("remedy", {"evidence": "  "}, "body.evidence"),
        ("deficiency", {"began_at": "2026-10-03T09:00Z", "ended_at": "2026-10-03T10:30+02:00"}, "body.ended_at"),
        ("valve_status_test", {"closed_at": "2026-10-03T09:00Z", "reopened_at": "2026-10-02T09:00Z"},
         "body.reopened_at"),
        ("gauge", {"range": examples.psi("60"), "division": examples.psi("60")}, "body.division"),
        ("site", {"zone": "Nowhere/Else"}, "body.zone"),
        ("flow_test", {"points": [{"residual": examples.psi("60")}]}, "body.points[0].flow"),
        ("inspectors_test", {"by": "bypass"}, "body.bypass_reason"),
        ("gauge_reading", {"readings": [{"pressure": examples.psi("60")}]}, "body.readings[0].pressure.gauge"),
        ("gauge_comparison", {"reference": examples.GAUGE}, "body.reference"),
        ("deficiency", {"class": "impairment"}, "body.began_at"),
        ("visit", {"state": "planned"}, "body.planned_for"),
        ("design_record", {"supply": {"static": examples.psi("60"), "residual": examples.psi("70"),
                                      "flow": {"value": "900", "unit": "gpm"}}}, "body.supply.residual"),
        ("sign_off", {"signers": [{"role": "technician", "name": "A", "strokes": "M 1 2 <script>"}]},
         "body.signers[0].strokes"),
        ("sign_off", {"signers": [{"role": "technician", "name": "A", "typed": "A"}]}, "body.signers[0].typed_reason"),
    ],
)  # fmt: skip
def test_what_can_not_be_is_refused_with_field_and_mend(kind: str, change: dict[str, Any], field: str) -> None:
    with pytest.raises(InputError) as refused:
        parse(text_of(kind, examples.MINIMAL[kind] | change))
    assert refused.value.field == field
    assert len(refused.value.message) > len(field) + 10


def test_a_test_that_was_not_done_needs_only_its_reason() -> None:
    parse(text_of("main_drain_test", {"performed_on": "2026-10-03", "done": "not", "not_done_reason": "frozen drain"}))


@pytest.mark.parametrize(
    ("more", "field"),
    [
        ({"subject": examples.OTHER}, "based_on"),
        ({"subject": examples.OTHER, "based_on": examples.OTHER}, "reason"),
        ({"based_on": examples.OTHER}, "based_on"),
        ({"withdrawn": True}, "withdrawn"),
        ({"device": examples.OTHER}, "device_number"),
        ({"made_at": "2026-10-03 10:00"}, "made_at"),
        ({"uid": "X"}, "uid"),
    ],
)
def test_an_envelope_that_does_not_fit_is_refused_by_field(more: dict[str, Any], field: str) -> None:
    with pytest.raises(InputError) as refused:
        parse(text_of("note", examples.MINIMAL["note"], **more))
    assert refused.value.field == field


def test_nights_and_steady_falls_are_honest_records() -> None:
    parse(text_of("main_drain_test", examples.MINIMAL["main_drain_test"] | {"start": "23:40", "end": "00:20"}))
    fell = {"static_after": examples.psi("61"), "steady": True, "did_not_recover": True}
    parse(text_of("main_drain_test", examples.MINIMAL["main_drain_test"] | fell))


def test_a_remedy_needs_words_or_a_photo_as_evidence() -> None:
    told = {name: value for name, value in examples.MINIMAL["remedy"].items() if name != "evidence"}
    with pytest.raises(InputError, match="say what shows"):
        parse(text_of("remedy", told))
    parse(text_of("remedy", told | {"photos": examples.TEST["photos"]}))


@pytest.mark.parametrize("missing", ["site", "system"])
def test_a_gauge_of_a_system_names_site_and_system(missing: str) -> None:
    plain = json.loads(text_of("gauge", examples.MINIMAL["gauge"]))
    del plain[missing]
    with pytest.raises(InputError) as refused:
        parse(canonical_text(plain))
    assert refused.value.field == missing


def test_a_test_without_its_system_is_refused() -> None:
    text = text_of("main_drain_test", examples.MINIMAL["main_drain_test"])
    plain = json.loads(text)
    del plain["system"]
    with pytest.raises(InputError, match="system"):
        parse(canonical_text(plain))


json_values = st.recursive(
    st.none() | st.booleans() | st.integers() | st.floats() | st.text(max_size=12),
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(st.text(max_size=8), inner, max_size=3),
    max_leaves=12,
)


@pytest.mark.parametrize("kind", KINDS)
@given(data=st.data())
def test_no_body_gives_anything_but_a_value_or_a_refusal(kind: str, data: st.DataObject) -> None:
    body = dict(data.draw(st.sampled_from([examples.MINIMAL[kind], examples.FULL[kind]])))
    names = sorted({field.encode_name for field in msgspec.structs.fields(PROCEDURES[kind].body)})
    for name in data.draw(st.lists(st.sampled_from(names), max_size=3)):
        body[name] = data.draw(json_values)
    refusal = refusal_of(kind, body)
    assert refusal is None or (refusal.field and refusal.message)


def refusal_of(kind: str, body: dict[str, Any]) -> InputError | None:
    try:
        decode_body(kind, body)
    except InputError as refused:
        return refused
    return None


@given(st.text(max_size=300) | st.binary(max_size=300).map(lambda raw: raw.decode("utf-8", "surrogateescape")))
def test_no_text_gives_anything_but_a_refusal(text: str) -> None:
    with pytest.raises(InputError):
        parse(text)


@given(json_values)
def test_no_json_gives_anything_but_a_refusal(value: object) -> None:
    with pytest.raises(InputError):
        parse(json.dumps(value))


@pytest.mark.parametrize(
    "text",
    ["[" * 100_000, '{"a":' * 5000 + "1" + "}" * 5000, "9" * 5000, '{"uid":' + "9" * 5000 + "}", "x" * 300_000],
)
def test_bombs_are_refused(text: str) -> None:
    with pytest.raises(InputError):
        parse(text)


@pytest.mark.parametrize("kind", KINDS)
def test_schema_for_the_tablet_names_every_field(kind: str) -> None:
    schema = json_schema(kind)
    name = PROCEDURES[kind].body.__name__
    fields_of = {field.encode_name for field in msgspec.structs.fields(PROCEDURES[kind].body)}
    assert set(schema["$defs"][name]["properties"]) == fields_of


@pytest.mark.parametrize(("kind", "body"), [one for one in BODIES if one[0] != "rule_profile"])
def test_report_rows_say_what_was_entered(kind: str, body: dict[str, Any]) -> None:
    printed = rows(decode_body(kind, body), lambda uid: {examples.GAUGE: "G-14"}.get(uid, uid))
    assert all(row.label and row.value and "None" not in row.value for row in printed)


def test_report_rows_of_a_main_drain_test() -> None:
    printed = {row.label: row for row in rows(decode_body("main_drain_test", examples.FULL["main_drain_test"]))}
    residual = printed["Residual, full flow"]
    assert (residual.value, residual.unit, residual.note) == ("54", "psi", "needle swung 52 to 56")
    assert printed["Valves on the way of the water"].value == "V1 found open, left open"
    assert printed["Time to return"].note == "by stop clock"


def test_report_rows_word_choices_and_leave_out_what_says_nothing() -> None:
    body = {"performed_on": "2026-10-03", "done": "not", "not_done_reason": "frost", "restored": {},
            "pump_state": "none", "valves": [{"id": "V1"}]}  # fmt: skip
    printed = {row.label: row.value for row in rows(decode_body("main_drain_test", body))}
    assert (printed["Done"], printed["Fire pump"], printed["Valves on the way of the water"]) == (
        "not done", "no pump", "V1",
    )  # fmt: skip
    assert "Normal condition restored" not in printed
    at = {row.label: row.value for row in rows(decode_body("flow_test", examples.MINIMAL["flow_test"] | {
        "at": "base_of_riser"}))}  # fmt: skip
    assert at["Gauge stood at"] == "base of riser"


# Who may make which kind (the contract's table).
TECHNICIAN_NOT = {"design_record", "rule_profile", "organisation", "person", "event"}


@pytest.mark.parametrize("kind", KINDS)
def test_who_may_make_which(kind: str) -> None:
    assert may_make("technician", kind) == (kind not in TECHNICIAN_NOT)
    assert may_make("office", kind) == (kind != "event")
    assert may_make("owner", kind) == (kind == "remedy")
    assert may_make("instance", kind) == (kind in {"event", "organisation"})
    assert not may_make("stranger", kind)


def test_an_owner_confirms_no_own_remedy() -> None:
    assert withheld_from("owner", "remedy") == {"confirmed_by"}
    assert withheld_from("office", "remedy") == withheld_from("technician", "remedy") == frozenset()
    for kind, procedure in PROCEDURES.items():
        names = {field.encode_name for field in msgspec.structs.fields(procedure.body)}
        assert names >= withheld_from("owner", kind)


def test_where_water_flows_the_usual_cautions_are_there() -> None:
    before = {
        "monitoring_told", "interlocks_held", "outlet_takes_full_flow", "not_frozen", "not_to_drain",
        "no_antifreeze_or_foam", "no_trip", "valves_open", "pump_attended", "protection_worn", "open_slowly",
    }  # fmt: skip
    after = {"drain_shut", "valves_secured", "pressures_back", "alarms_restored", "owner_told"}
    for kind in ("main_drain_test", "flow_test", "forward_flow_test", "inspectors_test", "valve_status_test"):
        cautions = PROCEDURES[kind].cautions
        assert {caution.code for caution in cautions if caution.when == "before"} >= before
        assert {caution.code for caution in cautions if caution.when == "after"} >= after
    assert "fire_watch" in {caution.code for caution in PROCEDURES["deficiency"].cautions}


def test_what_is_left_open_when_composing_is_left_out() -> None:
    body = decode_body("note", examples.MINIMAL["note"])
    text = compose(
        "note", body, uid=examples.PERSON, author=examples.OTHER, made_at="2026-10-03T10:00:00Z",
        site=examples.GAUGE, system=None, withdrawn=False, reason=None,
    )  # fmt: skip
    assert set(json.loads(text)) == {"author", "body", "format", "kind", "made_at", "site", "subject", "uid"}


def test_composing_refuses_what_intake_would() -> None:
    body = decode_body("note", examples.MINIMAL["note"])
    with pytest.raises(InputError, match="site"):
        compose("note", body, uid=examples.PERSON, author=examples.OTHER, made_at="2026-10-03T10:00:00Z")
    with pytest.raises(InputError, match="colour"):
        compose(
            "note", body, uid=examples.PERSON, author=examples.OTHER, made_at="2026-10-03T10:00:00Z",
            site=examples.GAUGE, colour="red",
        )  # fmt: skip


def test_an_imported_row_has_the_same_uid_each_time() -> None:
    body = decode_body("main_drain_test", examples.MINIMAL["main_drain_test"])
    first = import_uid(examples.SYSTEM, "main_drain_test", date(2026, 10, 3), body, 1)
    assert first == import_uid(examples.SYSTEM, "main_drain_test", date(2026, 10, 3), body, 1)
    others = {
        import_uid(examples.SYSTEM, "main_drain_test", date(2026, 10, 3), body, 2),
        import_uid(examples.OTHER, "main_drain_test", date(2026, 10, 3), body, 1),
        import_uid(examples.SYSTEM, "main_drain_test", date(2026, 10, 4), body, 1),
    }
    assert len(others | {first}) == 4
    assert first[14] == "5"  # a version 5 UUID
