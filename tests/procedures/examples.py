"""A minimal and a full plain body of every kind. Invented."""

# ruff: noqa: E501  one kind a paragraph reads best

from __future__ import annotations

from typing import Any

GAUGE = "11111111-1111-4111-8111-111111111111"
OTHER = "22222222-2222-4222-8222-222222222222"
SUPPLY = "33333333-3333-4333-8333-333333333333"
SYSTEM = "44444444-4444-4444-8444-444444444444"
DEFICIENCY = "55555555-5555-4555-8555-555555555555"
PERSON = "66666666-6666-4666-8666-666666666666"
SHA = "a1" * 32


def psi(value: str, **more: str) -> dict[str, str]:
    return {"value": value, "unit": "psi", **more}


TEST = {
    "performed_on": "2026-10-03",
    "item": "riser in the valve room",
    "answers": "adopted edition, clause as recorded",
    "start": "09:30",
    "end": "10:10",
    "witness": "Owner's representative A",
    "instruments": [{"id": "T-7", "certificate": "C-12", "certificate_on": "2026-02-03"}],
    "weather": "dry, 12 C",
    "outdoor_temperature": {"value": "12.5", "unit": "C"},
    "valves": [{"id": "V1", "found": "open", "left": "open"}],
    "pump_state": "off",
    "tank_level": {"value": "3.2", "unit": "m"},
    "as_found": "drain stiff",
    "as_left": "drain greased",
    "restored": {
        "valves": True, "pressures": True, "drain_shut": True,
        "alarms": {"who": "Monitoring desk", "at": "2026-10-03T10:12+02:00"},
    },
    "standing": "routine",
    "cautions": ["monitoring_told", "open_slowly"],
    "kept": [{"field": "residual", "code": "unit_slip", "shown": "54 against 64"}],
    "photos": [{"sha256": SHA, "size": 34567, "caption": "riser"}],
    "note": "grate missing",
}  # fmt: skip

MINIMAL: dict[str, dict[str, Any]] = {
    "organisation": {"name": "Contractor"},
    "person": {"name": "Technician A"},
    "site": {"name": "Harbour Cold Store"},
    "supply": {"name": "Quay main", "kind": "public_main"},
    "system": {"name": "Wet system 2", "type": "wet", "supply": SUPPLY},
    "gauge": {"name": "G-14", "of": "system"},
    "design_record": {},
    "rule_profile": {},  # filled from the shipped catalogue by the test
    "visit": {"state": "open", "on": "2026-10-03"},
    "main_drain_test": {
        "performed_on": "2026-10-03", "static_before": psi("72"), "residual": psi("54"), "fully_open": True,
        "took_full_flow": True,
    },
    "gauge_reading": {"performed_on": "2026-10-03", "readings": [{"pressure": psi("71", gauge=GAUGE)}]},
    "inspectors_test": {"performed_on": "2026-10-03", "to_device": {"seconds": 34}},
    "flow_test": {
        "performed_on": "2026-10-03", "supply": SUPPLY, "at": "street", "static": psi("84"),
        "points": [{"residual": psi("62"), "flow": {"value": "1100", "unit": "gpm"}}],
    },
    "forward_flow_test": {"performed_on": "2026-10-03", "item": "assembly", "flow": {"value": "600", "unit": "gpm"}},
    "valve_status_test": {"performed_on": "2026-10-03", "valve": "V2", "flow_seen": True},
    "gauge_comparison": {
        "performed_on": "2026-10-03", "gauge": GAUGE, "outcome": "kept",
        "points": [{"reference": psi("60"), "shown": psi("62")}],
    },
    "deficiency": {"text": "Grate missing", "found_on": "2026-10-03", "class": "noncritical", "proposed_by": "fieldlog"},
    "remedy": {
        "deficiency": DEFICIENCY, "done_on": "2026-10-09", "by": "Technician A", "evidence": "no leak in flow",
    },
    "note": {"text": "Key with gate 12"},
    "sign_off": {
        "covers": [{"uid": GAUGE, "sha256": SHA}], "summary": "Only the listed items were done.",
        "signers": [{"role": "technician", "name": "Technician A", "strokes": "M 10 20 C 11 21 12 22 13.5 -4"}],
        "signed_on": "2026-10-03",
    },
    "event": {"what": "report made"},
}  # fmt: skip

FULL: dict[str, dict[str, Any]] = {
    "organisation": {
        "name": "Contractor", "address": "7 Example Yard", "licence": "firm 12", "licence_expires": "2027-05-31",
    },
    "person": {"name": "Technician A", "licence": "L 9", "licence_expires": "2027-05-31", "employer": "Contractor"},
    "site": {
        "name": "Harbour Cold Store", "address": "1 Example Quay", "owner": "Owner A", "zone": "Etc/UTC",
        "units": {"pressure": "bar", "flow": "L/min", "length": "m"}, "height_mark": "floor of the valve room",
    },
    "supply": {
        "name": "Pump house", "kind": "fire_pump", "backflow_preventer": "one of several feeds",
        "pressure_reducing_valve": "sole feed", "prv_static": psi("75"), "prv_residual": psi("68"),
        "tank_level_reference": {"value": "3.0", "unit": "m"}, "note": "diesel",
        "points": [{"pump_state": "running", "flow": {"value": "750", "unit": "gpm"}, "pressure": psi("118")}],
    },
    "system": {
        "name": "Dry system 3", "type": "dry", "supply": SUPPLY, "on_supply_since": "2019-04-05", "riser": "valve room",
        "base_elevation": {"value": "1.5", "unit": "ft"}, "drain_changed_on": "2021-06-07", "hose_point": "street",
        "drain": {
            "id": "main drain", "size": {"value": "2", "unit": "in"}, "outlet": "sump",
            "outlet_elevation": {"value": "0.5", "unit": "ft"}, "length": {"value": "18", "unit": "ft"},
            "k": {"value": "41.5", "unit": "gpm/psi^0.5"},
        },
        "feed": [
            {"length": {"value": "90", "unit": "ft"}, "inside_diameter": {"value": "154.05", "unit": "mm"},
             "c": 120, "nominal": "6", "fittings": {"gate valve": 2}},
            {"of": "check assembly", "stated_loss": [{"flow": {"value": "600", "unit": "gpm"}, "loss": psi("5")}]},
        ],
        "feed_changed_on": "2022-03-04", "alarm": "pressure switch", "installed_on": "2016-02-03",
        "valves": [{"id": "V2", "name": "Riser valve", "place": "riser", "normal": "open"}],
        "occupancy": "cold store", "heated": False, "air_supervised": True, "header": "north header",
    },
    "gauge": {
        "name": "G-14", "of": "supply", "supply": SUPPLY, "side": "supply", "taps": "header", "behind": ["check", "alarm"],
        "range": psi("300"), "division": psi("5"), "grade": "B", "elevation": {"value": "4", "unit": "ft"},
        "installed_on": "2016-02-03", "replaces": OTHER, "ended_on": "2026-05-06", "normal_low": psi("60"),
        "normal_high": psi("95"), "certificate": "C-1", "certificate_on": "2026-01-05",
    },
    "design_record": {
        "demand": {"flow": {"value": "620", "unit": "gpm"}, "pressure": psi("46.5")}, "includes_inside_hose": "no",
        "hose_inside": {"value": "100", "unit": "gpm"}, "hose_outside": {"value": "250", "unit": "gpm"},
        "hose_point": "street", "density": {"value": "0.15", "unit": "gpm/ft2"},
        "supply": {"static": psi("78"), "residual": psi("60"), "flow": {"value": "1200", "unit": "gpm"},
                   "elevation": {"value": "2", "unit": "ft"}},
        "area": {"value": "1500", "unit": "ft2"}, "c": 120, "elevation": {"value": "1", "unit": "ft"},
        "occupancy": "ordinary", "by": "Designer A", "made_on": "2016-01-02", "read_from": "calculation", "note": "sheet 3",
    },
    "visit": {
        "state": "closed", "planned_for": "2026-10-01", "assigned": PERSON, "on": "2026-10-03", "start": "09:00",
        "end": "12:30", "weather": "dry", "pump_state": "off", "monitoring": "desk, 09:05", "discharge": "yard drain",
        "restored": {"valves": True}, "note": "key returned",
        "not_done": [{"item": "trip test", "reason": "frost", "agreed_for": "2027-04-02"}],
    },
    "main_drain_test": TEST | {
        "drain": "main drain", "at": "riser", "serves": [SYSTEM], "source": "witnessed",
        "static_before": psi("72", gauge=GAUGE, pump_state="off"), "residual": psi("54", low="52", high="56"),
        "return_seconds": {"seconds": 6, "how": "stop clock"}, "did_not_recover": False, "static_after": psi("71.5"),
        "steady": True, "system_side_before": psi("95"), "upstream_before": psi("80"), "fully_open": True, "turns": 9,
        "took_full_flow": True, "running_clear": True, "clear_after": {"seconds": 20}, "drain_unchanged": True,
        "confirmed": "second look", "drain_pitot": psi("18"), "conditions": "hydrant in use nearby",
    },
    "gauge_reading": TEST | {
        "readings": [{"pressure": psi("71", gauge=GAUGE), "cock_open": True, "returns_to_zero": True,
                      "relief_setting": psi("175"), "good_condition": True, "note": "glass clean"}],
        "room_temperature": {"value": "8", "unit": "C"},
    },
    "inspectors_test": TEST | {
        "kind": "trip", "by": "bypass", "bypass_reason": "frost", "orifice_k": {"value": "5.6", "unit": "gpm/psi^0.5"},
        "outlet_elevation": {"value": "30", "unit": "ft"}, "to_device": {"seconds": 15}, "to_bell": {"seconds": 18},
        "to_panel": {"seconds": 21}, "to_monitoring": {"seconds": 40}, "did_not_sound": False, "reset": True,
        "retard_setting": {"seconds": 30}, "static": psi("72"), "flowing": psi("70"), "connection_flowing": psi("50"),
        "air_at_start": psi("38"), "water_at_start": psi("73"), "air_at_trip": psi("18"), "trip": {"seconds": 12},
        "delivery": {"seconds": 41}, "quick_opening": {"seconds": 5}, "full_flow": True, "refill_minutes": 25,
        "low_points_drained": True, "low_air_alarm": True,
    },
    "flow_test": TEST | {
        "supply": SUPPLY, "at": "test_header", "static": psi("130"), "elevation": {"value": "2", "unit": "ft"},
        "points": [{"residual": psi("95"), "discharge_pressure": psi("118"), "outlets": [
            {"size": {"value": "2.5", "unit": "in"}, "coefficient": "0.90", "factor": "0.97", "pitot": psi("28"),
             "name": "outlet A"}]}],
        "main_size": {"value": "8", "unit": "in"}, "residual_hydrant": "H1", "flow_hydrants": "H2, H3",
        "permission": "water company desk", "dechlorinated": True,
    },
    "forward_flow_test": TEST | {
        "flow": {"value": "600", "unit": "gpm"}, "measured_by": "flow meter", "upstream": psi("80"),
        "downstream": psi("71"), "at_riser": psi("66"), "target": {"value": "620", "unit": "gpm"},
    },
    "valve_status_test": TEST | {
        "valve": "V2", "closed_at": "2026-10-03T08:10Z", "closed_by": "Technician A", "closed_why": "flange repair",
        "reopened_at": "2026-10-03T11:40Z", "flow_seen": True, "outlet": "main drain", "pressure": psi("66"),
        "supervised_normal": True,
    },
    "gauge_comparison": TEST | {
        "gauge": GAUGE, "reference": OTHER, "reference_accuracy": "0.5", "certificate": "C-3",
        "certificate_on": "2026-02-01", "tapped": True, "temperature": {"value": "21", "unit": "C"}, "outcome": "adjusted",
        "points": [{"reference": psi("60"), "shown": psi("62"), "direction": "rising"}],
    },
    "deficiency": {
        "text": "Valve shut for repair", "found_on": "2026-10-03", "item": "V2", "class": "impairment",
        "proposed_by": "fieldlog", "decided_by": "Technician A", "began_at": "2026-10-03T08:10Z",
        "ended_at": "2026-10-03T11:45Z", "notified": [{"who": "Owner", "how": "call", "at": "2026-10-03T08:15Z"}],
        "interim": "fire watch", "due": "2026-11-03", "retest": GAUGE, "photos": TEST["photos"],
    },
    "remedy": {
        "deficiency": DEFICIENCY, "done_on": "2026-10-09", "by": "Technician A", "text": "gasket", "evidence": "no leak",
        "restores": "restriction", "confirmed_by": "Office A", "photos": TEST["photos"],
    },
    "note": {"text": "Key with gate 12", "photos": TEST["photos"]},
    "sign_off": {
        "covers": [{"uid": GAUGE, "sha256": SHA}], "summary": "Only the listed items were done.",
        "signed_on": "2026-10-03", "signed_at": "2026-10-03T12:20Z",
        "signers": [{"role": "owner's representative", "name": "Owner's representative A", "person": PERSON,
                     "licence": "none", "typed": "Owner's representative A", "typed_reason": "hand in plaster"}],
    },
    "event": {
        "what": "export", "about": GAUGE, "sha256": SHA, "unsigned_sha256": SHA, "revision": 2, "head": SHA,
        "by": "Office A", "text": "yearly archive",
    },
}  # fmt: skip
