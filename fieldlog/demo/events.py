"""What happened besides the visits: a correction, a fork settled, a duplicate withdrawn, a valve shut, a repair."""

from __future__ import annotations

from datetime import date, timedelta

import msgspec

from fieldlog.demo import registry
from fieldlog.demo.pen import Pen, author_of, uid_of
from fieldlog.demo.plan import SitePlan
from fieldlog.demo.scenario import ago
from fieldlog.demo.visits import visit_days
from fieldlog.procedures.deficiency import Deficiency, Notified
from fieldlog.procedures.forward_flow_test import ForwardFlowTest
from fieldlog.procedures.gauge_comparison import ComparisonPoint, GaugeComparison
from fieldlog.procedures.note import Note
from fieldlog.procedures.remedy import Remedy
from fieldlog.procedures.valve_status_test import ValveStatusTest
from fieldlog.units import Flow, Pressure


def write_events(pen: Pen, site: SitePlan, as_of: date) -> None:
    """Write what happened at a site besides its visits."""
    for system in site.systems:
        if system.drain_changed_years_ago is not None:
            _drain_rebuilt(pen, site, system.key, as_of)
    if site.key == "mill":
        _notes(pen, site, as_of)
        _comparison(pen, site, as_of)
        _forward_flow(pen, site, as_of)
    if site.key == "harbour":
        _impairment(pen, site, as_of)


def _drain_rebuilt(pen: Pen, site: SitePlan, key: str, as_of: date) -> None:
    system = next(system for system in site.systems if system.key == key)
    on = ago(as_of, 2.1)
    pen.write(
        "system", f"{key}/new-drain", registry.altered_drain(system, site, on), on, author="office-a",
        site=uid_of(site.key), subject=uid_of(key), based_on=uid_of(key), reason="main drain rebuilt to a new sump",
    )  # fmt: skip


def _notes(pen: Pen, site: SitePlan, as_of: date) -> None:
    """Write a note that is corrected, one that two people changed at once, and one entered twice."""
    on, place = visit_days(site, as_of)[-2], {"site": uid_of(site.key)}
    author = author_of(site, on)
    slip = pen.write("note", "mill/note/slip", Note(text="Valve room key with gate 21"), on, author=author, **place)
    pen.write(
        "note", "mill/note/slip/2", Note(text="Valve room key with gate 12"), on, author=author, **place,
        subject=slip.uid, based_on=slip.uid, reason="typing slip",
    )  # fmt: skip
    twice = pen.write("note", "mill/note/fork", Note(text="Drain outlet needs a grate"), on, author=author, **place)
    versions = (("a", "technician-a", "Grate is 200 mm"), ("b", "technician-b", "Grate is 250 mm"))
    for name, who, text in versions:
        pen.write(
            "note", f"mill/note/fork/{name}", Note(text=text), on, author=who, **place, subject=twice.uid,
            based_on=twice.uid, reason="measured",
        )  # fmt: skip
    pen.write(
        "note", "mill/note/fork/settled", Note(text="Grate is 250 mm, measured again"), on, author="office-a", **place,
        subject=twice.uid, based_on=uid_of("mill/note/fork/a"), reason="changed twice; measured again",
    )  # fmt: skip
    extra = pen.write("note", "mill/note/double", Note(text="Valve room key with gate 12"), on, author=author, **place)
    pen.write(
        "note", "mill/note/double/out", Note(text="Valve room key with gate 12"), on, author="office-a", **place,
        subject=extra.uid, based_on=extra.uid, reason="entered twice", withdrawn=True,
    )  # fmt: skip


def _comparison(pen: Pen, site: SitePlan, as_of: date) -> None:
    on = visit_days(site, as_of)[-4]
    body = GaugeComparison(
        performed_on=on,
        gauge=uid_of("mill-1/gauge"),
        reference_accuracy="0.5",
        certificate="DEMO-C1",
        certificate_on=on - timedelta(days=100),
        points=tuple(
            ComparisonPoint(reference=_psi(reference), shown=_psi(shown), direction="rising")
            for reference, shown in ((40, 41), (80, 81), (120, 121))
        ),
        outcome="kept",
    )
    pen.write("gauge_comparison", "mill-1/comparison", body, on, author=author_of(site, on), site=uid_of(site.key))


def _forward_flow(pen: Pen, site: SitePlan, as_of: date) -> None:
    on = visit_days(site, as_of)[-5]
    body = ForwardFlowTest(
        performed_on=on, item="check assembly", flow=Flow(value="300", unit="gpm"), measured_by="flow meter",
        upstream=None, downstream=None,
    )  # fmt: skip
    here = {"site": uid_of(site.key), "system": uid_of("mill-4")}
    pen.write("forward_flow_test", "mill-4/forward", body, on, author=author_of(site, on), **here)


def _impairment(pen: Pen, site: SitePlan, as_of: date) -> None:
    """Write an impairment three years ago: a valve shut for a repair, reopened, water seen, the remedy confirmed."""
    on = ago(as_of, 3.2)
    day, place = on.isoformat(), {"site": uid_of(site.key), "system": uid_of("harbour-2")}
    open_ = Deficiency(
        text="Riser control valve shut to repair a leaking flange", found_on=on, item="V2", class_="impairment",
        proposed_by="fieldlog", decided_by="Technician A", began_at=f"{day}T08:10Z",
        notified=(Notified(who="Owner's representative A"), Notified(who="Monitoring desk", how="call")),
        interim="fire watch by the owner",
    )  # fmt: skip
    first = pen.write("deficiency", "harbour-2/flange", open_, on, author="technician-a", **place)
    status = ValveStatusTest(
        performed_on=on, valve="V2", closed_at=f"{day}T08:10Z", closed_by="Technician A", closed_why="flange repair",
        reopened_at=f"{day}T11:40Z", flow_seen=True, outlet="main drain", supervised_normal=True,
    )  # fmt: skip
    pen.write("valve_status_test", "harbour-2/flange/status", status, on, author="technician-a", **place)
    ended = msgspec.structs.replace(open_, ended_at=f"{day}T11:45Z")
    pen.write(
        "deficiency", "harbour-2/flange/ended", ended, on, author="technician-a", **place, subject=first.uid,
        based_on=first.uid, reason="valve reopened, water seen",
    )  # fmt: skip
    remedy = Remedy(
        deficiency=first.uid,
        done_on=on,
        by="Technician A",
        text="Flange gasket replaced",
        evidence="no leak in flow",
    )
    made = pen.write("remedy", "harbour-2/flange/remedy", remedy, on, author="technician-a", **place)
    confirmed = msgspec.structs.replace(remedy, confirmed_by="Office A")
    pen.write(
        "remedy", "harbour-2/flange/confirmed", confirmed, on + timedelta(days=2), author="office-a", **place,
        subject=made.uid, based_on=made.uid, reason="confirmed by the office",
    )  # fmt: skip


def _psi(value: int) -> Pressure:
    return Pressure(value=str(value), unit="psi")
