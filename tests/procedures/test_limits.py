"""What lies outside of a type's limits is refused by its field, in words of people."""

from __future__ import annotations

import copy
import importlib.util
import json
import re
from pathlib import Path
from typing import Any

import pytest

from fieldlog.canonical import canonical_text
from fieldlog.errors import InputError
from fieldlog.procedures.bodies import decode_body, fields, json_schema
from fieldlog.procedures.catalogue import PROCEDURES
from fieldlog.procedures.envelope import parse_envelope
from fieldlog.procedures.flow_test import Outlet
from fieldlog.procedures.system import FeedPart

_spec = importlib.util.spec_from_file_location("examples", Path(__file__).with_name("examples.py"))
assert _spec is not None
assert _spec.loader is not None
examples = importlib.util.module_from_spec(_spec)
_spec.loader.exec_module(examples)


def changed(kind: str, path: str, value: Any) -> dict[str, Any]:
    """Return the full example with another value at a dotted path."""
    body = copy.deepcopy(examples.FULL[kind])
    *way, last = [int(step) if step.isdigit() else step for step in re.split(r"[.\[\]]+", path.rstrip("]"))]
    inner = body
    for step in way:
        inner = inner[step]
    inner[last] = value
    return body


def refused(kind: str, path: str, value: Any) -> InputError:
    with pytest.raises(InputError) as caught:
        decode_body(kind, changed(kind, path, value))
    return caught.value


@pytest.mark.parametrize(
    ("kind", "path", "value"),
    [
        ("main_drain_test", "drain_pitot.value", "-18"),
        ("flow_test", "points[0].outlets[0].pitot.value", "-28"),
        ("flow_test", "points[0].outlets[0].size.value", "0.0"),
        ("flow_test", "points[0].outlets[0].size.value", "-2.5"),
        ("flow_test", "points[0].outlets[0].coefficient", "0.00"),
        ("flow_test", "points[0].outlets[0].coefficient", "1.1"),
        ("flow_test", "main_size.value", "0"),
        ("forward_flow_test", "flow.value", "-600"),
        ("design_record", "demand.flow.value", "-620"),
        ("design_record", "demand.pressure.value", "-46.5"),
        ("design_record", "density.value", "0"),
        ("design_record", "area.value", "0.00"),
        ("design_record", "c", 19),
        ("system", "drain.size.value", "0"),
        ("system", "drain.k.value", "0"),
        ("system", "drain.length.value", "-18"),
        ("system", "feed[0].inside_diameter.value", "0"),
        ("system", "feed[0].length.value", "-90"),
        ("system", "feed[1].stated_loss[0].loss.value", "-5"),
        ("system", "feed[1].stated_loss[0].flow.value", "-600"),
        ("supply", "points[0].pressure.value", "-118"),
        ("supply", "prv_static.value", "-75"),
        ("gauge", "range.value", "0"),
        ("gauge", "division.value", "-5"),
        ("gauge_reading", "readings[0].relief_setting.value", "0"),
        ("inspectors_test", "orifice_k.value", "-5.6"),
        ("inspectors_test", "trip.seconds", -12),
        ("main_drain_test", "performed_on", "1799-12-31"),
        ("main_drain_test", "performed_on", "2200-01-01"),
        ("main_drain_test", "performed_on", "2026-02-30"),
        ("main_drain_test", "instruments[0].certificate_on", "0001-01-01"),
        ("main_drain_test", "restored.alarms.at", "2026-02-30T10:12Z"),
        ("main_drain_test", "restored.alarms.at", "2026-02-03T10:12+99:00"),
        ("main_drain_test", "witness", "   "),
        ("main_drain_test", "witness", "A\nB"),
        ("main_drain_test", "witness", "A\n"),
        ("main_drain_test", "witness", "\x1b[2J"),
        ("main_drain_test", "note", "bell\x07"),
        ("main_drain_test", "residual.value", "54\n"),
        ("main_drain_test", "residual.gauge", examples.GAUGE + "\n"),
        ("main_drain_test", "start", "09:30\n"),
        ("gauge_comparison", "reference_accuracy", "12"),
        ("deficiency", "began_at", "2026-10-03T24:30Z"),
        ("visit", "not_done[0].agreed_for", "3027-04-02"),
        ("sign_off", "summary", "seen \x1b]0;"),
    ],
)
def test_what_lies_outside_its_limits_is_refused_by_field(kind: str, path: str, value: Any) -> None:
    error = refused(kind, path, value)
    assert error.field == f"body.{path.removesuffix('.value')}" or error.field == f"body.{path}"
    assert re.search(r"give|write|mend|expected", error.message)
    assert "regex" not in error.message


@pytest.mark.parametrize(
    ("kind", "path", "value"),
    [
        ("main_drain_test", "residual.value", "-3"),  # a suction
        ("main_drain_test", "drain_pitot.value", "0"),
        ("main_drain_test", "tank_level.value", "-0.4"),
        ("main_drain_test", "note", "two\nlines\tand a tab"),
        ("main_drain_test", "witness", "Zoë Ōba"),
        ("system", "base_elevation.value", "-12"),
        ("flow_test", "elevation.value", "-4"),
        ("supply", "points[0].flow.value", "0"),
        ("gauge", "normal_low.value", "-5"),
        ("design_record", "hose_outside.value", "0"),
        ("main_drain_test", "performed_on", "1884-05-06"),
    ],
)
def test_what_is_merely_odd_is_taken(kind: str, path: str, value: Any) -> None:
    decode_body(kind, changed(kind, path, value))


def test_a_swing_has_its_low_below_its_high() -> None:
    error = refused("main_drain_test", "residual.low", "57")
    assert error.field == "body.residual.low"
    assert "from 57 down to 56" in error.message


def test_several_limits_are_named_at_once() -> None:
    body = changed("system", "feed[0].length.value", "-90")
    body["drain"]["k"]["value"] = "-41.5"
    with pytest.raises(InputError, match=r"drain\.k: .*feed\[0\]\.length: "):
        decode_body("system", body)


@pytest.mark.parametrize(
    ("change", "field", "words"),
    [
        ({"type": "misty"}, "body.type", "use one of wet, dry, preaction, deluge, standpipe"),
        ({"heated": "yes"}, "body.heated", "true or false is expected, text was found"),
        ({"valves": [{"id": "V1", "normal": "ajar"}]}, "body.valves[0].normal", "use one of open, partly, shut"),
        ({"valves": [{"name": "Riser"}]}, "body.valves[0].id", "is needed; add it"),
        ({"valves": [{"id": "V1", "colour": "red"}]}, "body.valves[0].colour", "no field of this name"),
        ({"drain": 2}, "body.drain", "an object with named fields is expected, a whole number was found"),
        ({"installed_on": "3 Oct"}, "body.installed_on", "write it as 2026-10-03"),
        ({"name": ""}, "body.name", "it can't be empty"),
        ({"name": "n" * 201}, "body.name", "at most 200 characters"),
        ({"feed": [{"c": 161}]}, "body.feed[0].c", "at most 160 is expected"),
    ],
)
def test_a_refusal_says_what_is_expected_and_what_can_be_chosen(change: Any, field: str, words: str) -> None:
    with pytest.raises(InputError) as caught:
        decode_body("system", examples.MINIMAL["system"] | change)
    assert caught.value.field == field
    assert words in caught.value.message
    assert caught.value.message.startswith(f"{field}: ")


@pytest.mark.parametrize(
    ("change", "field"),
    [
        ({"made_at": "2026-99-99T10:00:00Z"}, "made_at"),
        ({"made_at": "2026-10-03T10:00:00Z\n"}, "made_at"),
        ({"uid": examples.GAUGE + "\n"}, "uid"),
        ({"kind": "inspection"}, "kind"),
        ({"reason": "\x1b"}, "reason"),
    ],
)
def test_the_envelope_has_limits_too(change: dict[str, Any], field: str) -> None:
    plain = {
        "uid": examples.GAUGE, "subject": examples.GAUGE, "author": examples.PERSON, "format": 1, "kind": "note",
        "made_at": "2026-10-03T10:00:00Z", "body": {"text": "Key with gate 12"},
    }  # fmt: skip
    parse_envelope(canonical_text(plain))
    with pytest.raises(InputError) as caught:
        parse_envelope(canonical_text(plain | change))
    assert caught.value.field == field


def test_texts_of_a_rule_profile_steer_no_terminal() -> None:
    with pytest.raises(InputError) as caught:
        decode_body("rule_profile", {"standard": "\x1b[2J"})
    assert caught.value.field == "body.standard"


def test_a_field_tells_its_limits_to_forms() -> None:
    limits = {field.name: field.limits for body in (Outlet, FeedPart) for field in fields(body)}
    assert limits["size"] == {"above": "0"}
    assert limits["pitot"] == {"least": "0"}
    assert limits["c"] == {"least": "20", "most": "160"}
    assert limits["of"] == {"shortest": "1", "longest": "200"}


@pytest.mark.parametrize("kind", sorted(PROCEDURES))
def test_patterns_mean_the_same_in_javascript(kind: str) -> None:
    patterns = re.findall(r'"pattern": "((?:[^"\\\\]|\\\\.)*)"', json.dumps(json_schema(kind)))
    assert not [pattern for pattern in patterns if re.search(r"\\\\[ZAzP]|\(\?P|\(\?<", pattern)]
