"""What is odd is asked about, once and by field; what is not odd is not."""

from __future__ import annotations

import importlib.util
from datetime import date
from pathlib import Path
from typing import Any

import msgspec
import pytest

from fieldlog.procedures.bodies import decode_body
from fieldlog.procedures.catalogue import PROCEDURES
from fieldlog.procedures.questions import Earlier, questions
from fieldlog.units import SiteUnits
from fieldlog.wording.questions import question_sentence

_spec = importlib.util.spec_from_file_location("examples", Path(__file__).with_name("examples.py"))
assert _spec is not None
assert _spec.loader is not None
examples = importlib.util.module_from_spec(_spec)
_spec.loader.exec_module(examples)

psi = examples.psi
TODAY = date(2026, 10, 3)
EARLIER = Earlier(
    values_psi={"residual": (64.0, 58.0), examples.GAUGE: (70.0,), "static": (84.0,)},
    values_gpm={"points[0].flow": (1100.0,)},
    ranges_psi={examples.GAUGE: 200.0},
    today=TODAY,
)


def bar(value: str, **more: str) -> dict[str, str]:
    return {"value": value, "unit": "bar", **more}


def asked(kind: str, change: dict[str, Any], earlier: Earlier = EARLIER) -> list[tuple[str, str]]:
    body = decode_body(kind, examples.MINIMAL[kind] | change)
    found = questions(body, earlier)
    for one in found:
        assert "{" not in question_sentence(one, SiteUnits()), one
    return [(one.field, one.code) for one in found]


@pytest.mark.parametrize("kind", sorted(set(PROCEDURES) - {"rule_profile"}))
def test_nothing_is_asked_about_an_ordinary_entry(kind: str) -> None:
    assert asked(kind, {}) == []


@pytest.mark.parametrize(
    ("kind", "change", "field", "code"),
    [
        ("main_drain_test", {"static_before": bar("72"), "residual": bar("64")}, "residual",
         "unit_slip"),  # psi typed as bar: 14.5 times
        ("main_drain_test", {"residual": psi("4.4")}, "residual", "unit_slip"),  # bar typed as psi
        ("main_drain_test", {"residual": psi("440"), "static_before": psi("490")}, "residual", "unit_slip"),  # kPa: 6.9
        ("main_drain_test", {"residual": psi("220", gauge=examples.GAUGE), "static_before": psi("230")}, "residual",
         "above_range"),
        ("main_drain_test", {"residual": psi("-3")}, "residual", "below_zero"),
        ("main_drain_test", {"residual": psi("54", low="55", high="57")}, "residual", "outside_swing"),
        ("main_drain_test", {"residual": psi("73")}, "residual", "residual_above_static"),
        ("main_drain_test", {"static_after": psi("64")}, "static_after", "static_after_below_before"),
        ("main_drain_test", {"system_side_before": psi("176")}, "system_side_before", "above_relief_setting"),
        ("main_drain_test", {"system_side_before": psi("123")}, "system_side_before", "system_side_far_above"),
        ("main_drain_test", {"fully_open": False}, "fully_open", "not_comparable"),
        ("main_drain_test", {"took_full_flow": False}, "took_full_flow", "not_comparable"),
        ("main_drain_test", {"did_not_recover": True, "return_seconds": {"seconds": 9}}, "return_seconds",
         "returned_and_did_not"),
        ("main_drain_test", {"start": "23:40", "end": "00:20"}, "end", "end_before_start"),
        ("main_drain_test", {"performed_on": "2026-10-04"}, "performed_on", "date_ahead"),
        ("main_drain_test", {"performed_on": "2025-09-30"}, "performed_on", "date_long_ago"),
        ("gauge_reading", {"readings": [{"pressure": psi("4.8", gauge=examples.GAUGE)}]}, "readings[0].pressure",
         "unit_slip"),
        ("flow_test", {"points": [{"residual": psi("62"), "flow": {"value": "4160", "unit": "gpm"}}]}, "points[0].flow",
         "flow_unit_slip"),
        ("flow_test", {"points": [{"residual": psi("85"), "flow": {"value": "1100", "unit": "gpm"}}]},
         "points[0].residual", "residual_above_static"),
        ("inspectors_test", {"static": psi("84"), "flowing": psi("85")}, "flowing", "residual_above_static"),
        ("system", {"feed": [{"length": {"value": "90", "unit": "ft"}, "c": 120, "fittings": {"gate": 2},
                              "inside_diameter": {"value": "6.065", "unit": "in"}}]}, "feed[0].fittings",
         "fitting_not_listed"),
    ],
)  # fmt: skip
def test_what_is_odd_is_asked_about_once(kind: str, change: dict[str, Any], field: str, code: str) -> None:
    assert asked(kind, change) == [(field, code)]


@pytest.mark.parametrize(
    ("kind", "change"),
    [
        ("main_drain_test", {"residual": psi("45")}),  # much lower, and no slip of unit
        ("main_drain_test", {"static_after": psi("65")}),
        ("main_drain_test", {"performed_on": "2026-10-03"}),
        ("main_drain_test", {"performed_on": "2025-10-03"}),
        ("main_drain_test", {"residual": psi("54", low="52", high="56")}),
        ("main_drain_test", {"residual": psi("54", gauge=examples.GAUGE)}),
        ("main_drain_test", {"system_side_before": psi("120")}),
        ("flow_test", {"points": [{"residual": psi("62"), "flow": {"value": "2100", "unit": "gpm"}}]}),
        ("system", {"feed": [{"length": {"value": "90", "unit": "ft"}, "c": 120, "fittings": {"gate valve": 2},
                              "inside_diameter": {"value": "6.065", "unit": "in"}}]}),
    ],
)  # fmt: skip
def test_what_is_ordinary_is_not(kind: str, change: dict[str, Any]) -> None:
    assert asked(kind, change) == []


def test_without_anything_earlier_only_what_the_body_itself_tells_is_asked() -> None:
    assert asked("main_drain_test", {"performed_on": "2031-02-03", "residual": bar("4.4")}, Earlier()) == []


def test_the_question_shows_the_earlier_value() -> None:
    body = decode_body(
        "main_drain_test", examples.MINIMAL["main_drain_test"] | {"static_before": bar("72"), "residual": bar("64")}
    )
    (one,) = questions(body, EARLIER)
    assert one.shown == {"between": "psi and bar", "earlier_psi": "64"}
    assert question_sentence(one, SiteUnits()).startswith("Residual and the earlier 64")


def test_an_answered_question_can_be_kept_in_the_body() -> None:
    body = decode_body(
        "main_drain_test", examples.MINIMAL["main_drain_test"] | {"static_before": bar("72"), "residual": bar("64")}
    )
    (one,) = questions(body, EARLIER)
    kept = [{"field": one.field, "code": one.code, "shown": ", ".join(one.shown.values())}]
    again = decode_body("main_drain_test", msgspec.to_builtins(body) | {"kept": kept})
    assert [(answer.field, answer.code) for answer in again.kept] == [("residual", "unit_slip")]  # type: ignore[attr-defined]
