"""What happened besides the visits: notes changed twice, a gauge compared, a valve shut, repairs, an impairment."""

from __future__ import annotations

from datetime import date, timedelta
from typing import Any

import msgspec

from fieldlog.demo import rounds
from fieldlog.demo.pen import Pen, Written, uid_of
from fieldlog.demo.plan import SitePlan, SystemPlan
from fieldlog.demo.registry import TEST_GAUGE
from fieldlog.demo.scenario import ENGINEER, ago
from fieldlog.demo.visits import attendances
from fieldlog.procedures.deficiency import Deficiency, Notified
from fieldlog.procedures.gauge_comparison import ComparisonPoint, GaugeComparison
from fieldlog.procedures.note import Note
from fieldlog.procedures.remedy import Remedy
from fieldlog.procedures.valve_status_test import ValveStatusTest
from fieldlog.units import Pressure

_OWNER = Notified(who="Owner's representative A", how="in person")
_MONITORING = Notified(who="Monitoring desk", how="call")


def write_events(pen: Pen, site: SitePlan, as_of: date) -> None:
    """Write what happened at a site up to its last visit."""
    systems = {system.key: system for system in site.systems}
    if site.key == "mill":
        _write_notes(pen, site, as_of)
        _write_comparison(pen, site, systems["mill-1"], as_of)
    if site.key == "harbour":
        _write_shut_valve(pen, site, systems["harbour-2"], as_of)
    if site.key == "north":
        _write_forward_flow(pen, site, systems["north-2"], as_of)
    if site.key == "hill":
        _write_repair(pen, site, systems["hill-1"])


def write_open_ends(pen: Pen, site: SitePlan, as_of: date) -> None:
    """Write what the last visit began and nobody ended yet."""
    if site.key == "ferry":
        _write_open_impairment(pen, site, "ferry-2", as_of)


def _write_notes(pen: Pen, site: SitePlan, as_of: date) -> None:
    """Write a note that is corrected, one that two people changed at once, and one entered twice."""
    on = attendances(site, as_of)[-2].on
    place: dict[str, Any] = {"site": uid_of(site.key)}

    def first(key: str, text: str) -> Written:
        return pen.write("note", key, Note(text=text), on, author="technician-a", **place)

    def later(key: str, text: str, who: str, **rest: Any) -> None:  # noqa: ANN401  parts of the envelope
        pen.write("note", key, Note(text=text), on, author=who, **place, **rest)

    slip = first("mill/note/slip", "Valve room key with gate 21")
    later("mill/note/slip/2", "Valve room key with gate 12", "technician-a",
          subject=slip.uid, based_on=slip.uid, reason="typing slip")  # fmt: skip
    twice = first("mill/note/fork", "Drain outlet needs a grate")
    for name, who, text in (("a", "technician-a", "Grate is 200 mm"), ("b", "technician-b", "Grate is 250 mm")):
        later(f"mill/note/fork/{name}", text, who, subject=twice.uid, based_on=twice.uid, reason="measured")
    later("mill/note/fork/settled", "Grate is 250 mm, measured again", "office-a",
          subject=twice.uid, based_on=uid_of("mill/note/fork/a"), reason="changed twice; measured again")  # fmt: skip
    extra = first("mill/note/double", "Valve room key with gate 12")
    later("mill/note/double/out", "Valve room key with gate 12", "office-a",
          subject=extra.uid, based_on=extra.uid, reason="entered twice", withdrawn=True)  # fmt: skip


def _write_comparison(pen: Pen, site: SitePlan, system: SystemPlan, as_of: date) -> None:
    visit = attendances(site, as_of)[-4]
    body = GaugeComparison(
        performed_on=visit.on,
        gauge=uid_of(system.gauge_key(system.gauge)),
        reference=uid_of(TEST_GAUGE),
        reference_accuracy="0.5",
        certificate="DEMO-C1",
        certificate_on=visit.on - timedelta(days=100),
        points=tuple(
            ComparisonPoint(reference=_psi(reference), shown=_psi(shown), direction="rising")
            for reference, shown in ((40, 41), (80, 81), (120, 121))
        ),
        tapped=True,
        outcome="kept",
    )
    pen.write(
        "gauge_comparison", f"{system.key}/comparison", body, visit.on, author=visit.author, site=uid_of(site.key)
    )


def _write_forward_flow(pen: Pen, site: SitePlan, system: SystemPlan, as_of: date) -> None:
    """Write a forward-flow test a year, at the system's demand."""
    here = {"site": uid_of(site.key), "system": uid_of(system.key)}
    demand_gpm = 0 if system.demand is None else system.demand.flow_gpm
    for visit in attendances(site, as_of):
        if visit.is_due(1):
            day = rounds.round_of(site, system, visit.on, visit.key, visit.back)
            body = rounds.forward_flow_test(day, demand_gpm)
            pen.write("forward_flow_test", f"{visit.key}/forward", body, visit.on, author=visit.author, **here)


def _write_shut_valve(pen: Pen, site: SitePlan, system: SystemPlan, as_of: date) -> None:
    """Write an impairment years ago: a valve shut for a repair, reopened, water seen, the remedy confirmed."""
    on, key = ago(as_of, 3.2), f"{system.key}/flange"
    shut_at, open_at = f"{on.isoformat()}T08:10Z", f"{on.isoformat()}T11:40Z"
    here: dict[str, Any] = {"site": uid_of(site.key), "system": uid_of(system.key)}
    begun = Deficiency(
        text="Riser control valve shut to repair a leaking flange", found_on=on, item="V2", class_="impairment",
        proposed_by="Technician A", decided_by=ENGINEER, began_at=shut_at, notified=(_OWNER, _MONITORING),
        interim="fire watch by the owner",
    )  # fmt: skip
    first = pen.write("deficiency", key, begun, on, author="technician-a", **here)
    status = ValveStatusTest(
        performed_on=on, valve="V2", closed_at=shut_at, closed_by="Technician A", closed_why="flange repair",
        reopened_at=open_at, flow_seen=True, outlet="main drain", supervised_normal=True,
    )  # fmt: skip
    pen.write("valve_status_test", f"{key}/status", status, on, author="technician-a", **here)
    ended = msgspec.structs.replace(begun, ended_at=open_at)
    pen.write("deficiency", f"{key}/ended", ended, on, author="technician-a", **here,
              subject=first.uid, based_on=first.uid, reason="valve reopened, water seen")  # fmt: skip
    remedy = Remedy(
        deficiency=first.uid, done_on=on, by="Technician A", text="Flange gasket replaced", evidence="no leak in flow"
    )
    _write_remedy(pen, f"{key}/remedy", remedy, here)


def _write_repair(pen: Pen, site: SitePlan, system: SystemPlan) -> None:
    """Write what was found before a restriction of the feed was removed, the remedy, and the test after it."""
    restriction = system.truth.restrictions[0]
    if restriction.until is None:
        raise ValueError(f"nobody removed the restriction of {system.key}")
    on, key = restriction.until, f"{system.key}/strainer"
    here: dict[str, Any] = {"site": uid_of(site.key), "system": uid_of(system.key)}
    found_on = on - timedelta(days=25)
    body = Deficiency(
        text="More is lost in flow than before: strainer in the feed found half blocked", found_on=found_on,
        item="strainer", class_="critical", proposed_by="fieldlog", decided_by=ENGINEER, notified=(_OWNER,), due=on,
    )  # fmt: skip
    first = pen.write("deficiency", key, body, found_on, author="technician-b", **here)
    remedy = Remedy(
        deficiency=first.uid, done_on=on, by="Technician B", text="Strainer opened, cleaned, basket replaced",
        evidence="drain tested after", restores="restriction",
    )  # fmt: skip
    _write_remedy(pen, f"{key}/remedy", remedy, here)
    test = rounds.main_drain_test(rounds.round_of(site, system, on, key), "after repair")
    pen.write("main_drain_test", f"{key}/retest", test, on, author="technician-b", **here)


def _write_remedy(pen: Pen, key: str, remedy: Remedy, here: dict[str, Any]) -> None:
    """Write a remedy, and that the office confirmed it two days later."""
    made = pen.write("remedy", key, remedy, remedy.done_on, author="technician-b", **here)
    confirmed = msgspec.structs.replace(remedy, confirmed_by="Office A")
    pen.write(
        "remedy", f"{key}/confirmed", confirmed, remedy.done_on + timedelta(days=2), author="office-a", **here,
        subject=made.uid, based_on=made.uid, reason="confirmed by the office",
    )  # fmt: skip


def _write_open_impairment(pen: Pen, site: SitePlan, system: str, as_of: date) -> None:
    visit = attendances(site, as_of)[-1]
    day = visit.on.isoformat()
    body = Deficiency(
        text="Next to no pressure left in full flow; a shut or nearly shut valve is suspected upstream of the riser",
        found_on=visit.on, item="feed", class_="impairment", proposed_by="fieldlog", began_at=f"{day}T10:00Z",
        notified=(_OWNER, _MONITORING), interim="fire watch by the owner", due=visit.on + timedelta(days=1),
    )  # fmt: skip
    here = {"site": uid_of(site.key), "system": uid_of(system), "visit": uid_of(visit.key)}
    pen.write("deficiency", f"{system}/impairment", body, visit.on, author=visit.author, **here)


def _psi(value: int) -> Pressure:
    return Pressure(value=str(value), unit="psi")
