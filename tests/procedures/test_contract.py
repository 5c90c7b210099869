"""Entries are forever: what each kind must be able to say, held against its type by dotted path.

A field may be added; none of these may go, change its name or what may be chosen.
"""

from __future__ import annotations

import types
from typing import Any, Union, get_args, get_origin, get_type_hints

import msgspec
import pytest

from fieldlog.procedures.bodies import fields
from fieldlog.procedures.catalogue import PROCEDURES
from fieldlog.procedures.limits import metas_of

ANY_TEST = (
    "performed_on item answers start end witness instruments.id instruments.certificate instruments.certificate_on "
    "weather valves.id valves.found valves.left valves.shut_at valves.opened_at pump_state tank_level.value as_found "
    "as_left restored.valves restored.pressures restored.alarms.who restored.alarms.at done not_done_reason standing "
    "kept.field kept.code kept.shown cautions photos.sha256 photos.size photos.caption note"
)
READING = "{0}.value {0}.unit {0}.gauge {0}.low {0}.high {0}.pump_state"
DURATION = "{0}.seconds {0}.how"


def reading(*names: str) -> str:
    return " ".join(READING.format(name) for name in names)


def duration(*names: str) -> str:
    return " ".join(DURATION.format(name) for name in names)


SAYS = {
    "organisation": "name licence licence_expires",
    "person": "name licence licence_expires employer",
    "site": "name address zone units.pressure units.flow units.length height_mark",
    "supply": "kind backflow_preventer pressure_reducing_valve prv_static.value prv_residual.value "
    "tank_level_reference.value points.pump_state points.flow.value points.pressure.value",
    "system": "type riser base_elevation.value supply drain.id drain.size.value drain.outlet "
    "drain.outlet_elevation.value drain.length.value drain.k.value feed.length.value feed.inside_diameter.value "
    "feed.c feed.fittings feed.stated_loss.flow.value feed.stated_loss.loss.value feed.of hose_point valves.id "
    "valves.name valves.place valves.normal alarm installed_on occupancy heated air_supervised header",
    "gauge": "of supply side taps behind range.value division.value grade elevation.value installed_on replaces "
    "certificate certificate_on",
    "design_record": "demand.flow.value demand.pressure.value includes_inside_hose hose_inside.value "
    "hose_outside.value hose_point supply.static.value supply.residual.value supply.flow.value density.value "
    "area.value c elevation.value by made_on",
    "visit": "state planned_for assigned not_done.item not_done.reason not_done.agreed_for weather pump_state "
    "monitoring discharge",
    "main_drain_test": f"{ANY_TEST} drain at fully_open turns took_full_flow running_clear drain_unchanged "
    f"{reading('static_before', 'residual', 'static_after', 'system_side_before')} {duration('return_seconds')} "
    "did_not_recover steady confirmed drain_pitot.value conditions source serves",
    "gauge_reading": f"{ANY_TEST} {reading('readings.pressure')} readings.cock_open readings.returns_to_zero "
    "readings.relief_setting.value room_temperature.value",
    "inspectors_test": f"{ANY_TEST} by bypass_reason orifice_k.value "
    f"{duration('to_device', 'to_bell', 'to_panel', 'to_monitoring', 'trip', 'delivery', 'quick_opening')} "
    f"{reading('static', 'flowing', 'air_at_start', 'water_at_start', 'air_at_trip')} full_flow reset "
    "retard_setting.seconds refill_minutes low_points_drained low_air_alarm",
    "flow_test": f"{ANY_TEST} supply at {reading('static', 'points.residual', 'points.discharge_pressure')} "
    "points.outlets.size.value points.outlets.coefficient points.outlets.factor points.outlets.pitot.value "
    "points.flow.value elevation.value",
    "forward_flow_test": f"{ANY_TEST} flow.value measured_by {reading('upstream', 'downstream', 'at_riser')} "
    "target.value",
    "valve_status_test": f"{ANY_TEST} valve closed_at closed_by closed_why reopened_at flow_seen outlet "
    f"{reading('pressure')} supervised_normal",
    "gauge_comparison": f"{ANY_TEST} gauge reference points.reference.value points.shown.value points.direction "
    "outcome tapped temperature.value",
    "deficiency": "item text photos.sha256 class proposed_by decided_by began_at ended_at notified.who notified.how "
    "notified.at interim due retest",
    "remedy": "deficiency done_on by evidence restores confirmed_by",
    "note": "text photos.sha256",
    "sign_off": "covers.uid covers.sha256 signers.person signers.role signers.name signers.licence signers.strokes "
    "signers.typed signers.typed_reason summary",
    "event": "what about sha256 text",
    "rule_profile": "standard catalogue_id catalogue_sha256 edition overrides.rule approved_by approved_on "
    "in_force_from in_force_until rules.id",
}
CHOICES = {
    "supply.kind": "public_main gravity_tank pressure_tank fire_pump parallel",
    "system.type": "wet dry preaction deluge standpipe",
    "gauge.side": "supply system air",
    "gauge.grade": "4A 3A 2A 1A A B C D",
    "main_drain_test.pump_state": "none off jockey running",
    "flow_test.at": "street lead_in base_of_riser test_header",
    "gauge_comparison.outcome": "kept adjusted replaced",
    "deficiency.class_": "noncritical critical impairment",
    "remedy.restores": "restriction drain gauge",
    "design_record.includes_inside_hose": "yes no unknown",
    "visit.state": "planned open closed",
}
LONGER_CHOICES = {
    "supply.backflow_preventer": ("none", "one of several feeds", "sole feed"),
    "supply.pressure_reducing_valve": ("none", "one of several feeds", "sole feed"),
    "gauge.taps": ("riser", "drain connection", "header", "unknown"),
    "main_drain_test.standing": ("routine", "acceptance", "after repair"),
    "main_drain_test.source": ("witnessed", "information sign", "old record"),
    "main_drain_test.confirmed": ("no", "second look", "second gauge"),
}


def paths(body: Any, before: str = "") -> set[str]:
    """Return the dotted paths of every plain field of a type, by their names in JSON."""
    hints = get_type_hints(body, include_extras=True)
    found: set[str] = set()
    for info in msgspec.structs.fields(body):
        found |= {f"{before}{info.encode_name}"}
        for part in parts_of(hints[info.name]):
            found |= paths(part, f"{before}{info.encode_name}.")
    return found


def parts_of(hint: Any) -> list[type[msgspec.Struct]]:
    _, bare = metas_of(hint)
    if get_origin(bare) in {tuple, Union, types.UnionType}:
        return [part for inner in get_args(bare) for part in parts_of(inner)]
    return [bare] if isinstance(bare, type) and issubclass(bare, msgspec.Struct) else []


@pytest.mark.parametrize("kind", sorted(PROCEDURES))
def test_each_kind_can_say_what_it_must(kind: str) -> None:
    assert set(SAYS[kind].split()) - paths(PROCEDURES[kind].body) == set()


@pytest.mark.parametrize(
    ("field", "choices"), [*((f, tuple(c.split())) for f, c in CHOICES.items()), *LONGER_CHOICES.items()]
)
def test_what_may_be_chosen_is_fixed(field: str, choices: tuple[str, ...]) -> None:
    kind, name = field.split(".")
    (found,) = [one.choices for one in fields(PROCEDURES[kind].body) if one.name == name]
    assert found == choices


@pytest.mark.parametrize("kind", sorted(kind for kind, procedure in PROCEDURES.items() if procedure.is_test))
def test_a_test_has_its_steps_and_no_step_promises_a_result(kind: str) -> None:
    steps = PROCEDURES[kind].steps
    assert len(steps) > 1
    assert not [step for step in steps if {"pass", "fail", "safe", "adequate"} & set(step.lower().split())]


def test_tests_belong_to_a_site_and_where_they_are_about_one_to_a_system() -> None:
    needs = {kind: set(procedure.needs) for kind, procedure in PROCEDURES.items()}
    of_system = {"main_drain_test", "inspectors_test", "forward_flow_test", "valve_status_test", "design_record"}
    assert {kind for kind, names in needs.items() if "system" in names} == of_system
    of_nobody = {"organisation", "person", "site", "event", "rule_profile", "gauge", "gauge_comparison"}
    assert {kind for kind, names in needs.items() if "site" not in names} == of_nobody
    assert needs["sign_off"] == {"site", "visit"}
