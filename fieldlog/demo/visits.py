"""One visit of the scenario: opened, its tests entered, signed off and closed."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from datetime import date, timedelta
from typing import Any

import msgspec

from fieldlog.demo import rounds, simulator
from fieldlog.demo.pen import Pen, Written, uid_of
from fieldlog.demo.plan import YEARS, SitePlan
from fieldlog.demo.rounds import Round
from fieldlog.demo.strokes import squiggle
from fieldlog.procedures.sign_off import Covered, Signer, SignOff
from fieldlog.procedures.visit import NotDone, Visit

_DAYS_OF_YEAR = 365.25
_ROUNDS_A_YEAR = 4  # of all gauges of a site
_WITH_ALARM_TEST = {"wet", "dry", "preaction"}
_WEATHER = ("dry", "overcast", "light rain", "windy")
_TECHNICIANS = {"technician-a": ("Technician A", "DEMO-1"), "technician-b": ("Technician B", "DEMO-2")}


@dataclass(frozen=True, slots=True)
class Attendance:
    """One day at a site; `back` counts the visits after it."""

    site: SitePlan
    on: date
    back: int

    @property
    def key(self) -> str:
        """By which key the visit goes in the scenario; it names the noise of the day too."""
        return f"{self.site.key}/visit/{self.back}"

    @property
    def author(self) -> str:
        """Which technician went: two take turns."""
        return "technician-a" if self.back // self.site.visits_a_year % 2 == 0 else "technician-b"

    @property
    def place(self) -> dict[str, Any]:
        """The part of an entry's envelope that says where."""
        return {"site": uid_of(self.site.key)}

    @property
    def rounds(self) -> list[Round]:
        """The day at each system."""
        return [rounds.round_of(self.site, system, self.on, self.key, self.back) for system in self.site.systems]

    @property
    def is_first(self) -> bool:
        """Whether the systems were accepted that day."""
        return self.back == YEARS * self.site.visits_a_year

    def is_due(self, times_a_year: int) -> bool:
        """Return whether what is done so often a year is done at this visit, counted back from the last."""
        return self.back % (self.site.visits_a_year // times_a_year) == 0


def attendances(site: SitePlan, as_of: date) -> list[Attendance]:
    """Return the visits to a site, oldest first."""
    last = as_of - timedelta(weeks=site.weeks_ago)
    return [
        Attendance(site, last - timedelta(days=round(_DAYS_OF_YEAR * back / site.visits_a_year)), back)
        for back in range(YEARS * site.visits_a_year, -1, -1)
    ]


def write_visit(pen: Pen, visit: Attendance) -> None:
    """Write a visit with the tests that were due that day."""
    opened = _write_opening(pen, visit)
    tests = list(_write_tests(pen, visit))
    here = visit.place | {"visit": uid_of(visit.key)}
    pen.write("sign_off", f"{visit.key}/sign-off", _sign_off(visit, tests), visit.on, author=visit.author, **here)
    closed = msgspec.structs.replace(_open(visit), state="closed", end="12:30", not_done=tuple(_left_undone(visit)))
    pen.write(
        "visit", f"{visit.key}/closed", closed, visit.on, author=visit.author, **visit.place,
        subject=uid_of(visit.key), based_on=opened.uid, reason="closed by its sign-off",
    )  # fmt: skip


def write_rounds_after(pen: Pen, visit: Attendance) -> None:
    """Write the readings between a visit and the next, so that every gauge is read each quarter."""
    for quarter in range(1, _ROUNDS_A_YEAR // visit.site.visits_a_year):
        on = visit.on + timedelta(days=round(_DAYS_OF_YEAR * quarter / _ROUNDS_A_YEAR))
        occasion = f"{visit.key}/{quarter}"
        days = [rounds.round_of(visit.site, system, on, occasion) for system in visit.site.systems]
        body = rounds.gauge_readings(days)
        pen.write("gauge_reading", f"{occasion}/gauges", body, on, author=visit.author, **visit.place)


def _open(visit: Attendance) -> Visit:
    weather = str(simulator.dice(visit.key, "weather").choice(_WEATHER))
    return Visit(state="open", on=visit.on, start="09:00", weather=weather, monitoring="Monitoring desk, 09:05")


def _left_undone(visit: Attendance) -> Iterator[NotDone]:
    for item, reason in visit.site.left_undone if visit.back == 0 else ():
        yield NotDone(item=item, reason=reason, agreed_for=visit.on + timedelta(weeks=8))


def _write_opening(pen: Pen, visit: Attendance) -> Written:
    """Write the visit as opened on site; the last one was planned by the office before."""
    if visit.back > 0:
        return pen.write("visit", visit.key, _open(visit), visit.on, author=visit.author, **visit.place)
    plan = Visit(state="planned", planned_for=visit.on, assigned=uid_of(visit.author))
    first = pen.write("visit", visit.key, plan, visit.on - timedelta(days=20), author="office-a", **visit.place)
    return pen.write(
        "visit", f"{visit.key}/open", _open(visit), visit.on, author=visit.author, **visit.place,
        subject=first.uid, based_on=first.uid, reason="opened on site",
    )  # fmt: skip


def _write_tests(pen: Pen, visit: Attendance) -> Iterator[Written]:
    here = visit.place | {"visit": uid_of(visit.key)}
    days = visit.rounds
    gauges = rounds.gauge_readings(days)
    yield pen.write("gauge_reading", f"{visit.key}/gauges", gauges, visit.on, author=visit.author, **here)
    standing: rounds.Standing = "acceptance" if visit.is_first else "routine"
    for day in days:
        at = here | {"system": uid_of(day.system.key)}
        if visit.is_due(day.system.tests_a_year):
            yield _write_drain_test(pen, visit, day, standing)
        if day.system.type in _WITH_ALARM_TEST:
            alarm = rounds.inspectors_test(day, standing)
            key = f"{visit.key}/{day.system.key}/alarm"
            yield pen.write("inspectors_test", key, alarm, visit.on, author=visit.author, **at)
    for supply in visit.site.supplies:
        if visit.back in {years * visit.site.visits_a_year for years in supply.flow_tests_years_ago}:
            test = rounds.flow_test(supply, visit.site.units, visit.on, visit.key)
            key = f"{visit.key}/{supply.key}/flow"
            yield pen.write("flow_test", key, test, visit.on, author=visit.author, **here)


def _write_drain_test(pen: Pen, visit: Attendance, day: Round, standing: rounds.Standing) -> Written:
    """Write a main drain test; one that was mistyped is corrected by the office a day later."""
    key, test = f"{visit.key}/{day.system.key}/drain", rounds.main_drain_test(day, standing)
    here = visit.place | {"visit": uid_of(visit.key), "system": uid_of(day.system.key)}
    if not day.is_odd("typing slip"):
        return pen.write("main_drain_test", key, test, visit.on, author=visit.author, **here)
    first = pen.write("main_drain_test", key, rounds.with_typing_slip(test), visit.on, author=visit.author, **here)
    pen.write(
        "main_drain_test", f"{key}/corrected", test, visit.on + timedelta(days=1), author="office-a", **here,
        subject=first.uid, based_on=first.uid, reason="typing slip in the residual, by the technician's paper notes",
    )  # fmt: skip
    return first


def _sign_off(visit: Attendance, tests: list[Written]) -> SignOff:
    name, licence = _TECHNICIANS[visit.author]
    technician = Signer(
        role="technician", name=name, person=uid_of(visit.author), licence=licence,
        strokes=squiggle(visit.author, visit.key),
    )  # fmt: skip
    owner = Signer(
        role="owner's representative", name="Owner's representative A",
        strokes=squiggle("owner-a", visit.key),
    )  # fmt: skip
    return SignOff(
        covers=tuple(Covered(uid=test.uid, sha256=test.sha256) for test in tests),
        signers=(technician, owner),
        summary=(
            f"Visit of {visit.on.isoformat()} at {visit.site.name}: {len(tests)} tests and readings as listed. "
            "Only the listed items were inspected or tested."
        ),
        signed_on=visit.on,
        signed_at=f"{visit.on.isoformat()}T12:20Z",
    )
