"""One visit of the scenario: opened, its tests entered, signed off and closed."""

from __future__ import annotations

from datetime import date, timedelta

import numpy as np

from fieldlog.demo import rounds
from fieldlog.demo.pen import Pen, Written, author_of, uid_of
from fieldlog.demo.plan import SitePlan, SystemPlan
from fieldlog.demo.scenario import ago
from fieldlog.demo.strokes import squiggle
from fieldlog.procedures.sign_off import Covered, Signer, SignOff
from fieldlog.procedures.visit import Visit

_DAYS_OF_YEAR = 365.25
_INSPECTORS = {"wet", "dry", "preaction"}


def visit_days(site: SitePlan, as_of: date) -> list[date]:
    """Return the days on which the site was visited, oldest first."""
    most = max(system.tests_a_year for system in site.systems)
    quarters = max(most, 2)
    last = as_of - timedelta(weeks=site.weeks_ago)
    count = 10 * quarters + 1
    days = [last - timedelta(days=round(_DAYS_OF_YEAR * n / quarters)) for n in range(count)]
    return sorted(days)


def last_visit(site: SitePlan, as_of: date) -> str:
    """Return the key of the newest visit."""
    return _key(site, visit_days(site, as_of)[-1])


def write_visit(pen: Pen, site: SitePlan, on: date, as_of: date) -> None:
    """Write a visit with the tests that were due that day."""
    noise = np.random.default_rng(abs(hash_of(site.key)) + on.toordinal())
    key, author = _key(site, on), author_of(site, on)
    place = {"site": uid_of(site.key)}
    is_last = on == visit_days(site, as_of)[-1]
    opened = _open(pen, site, on, planned=is_last)
    tests = _write_tests(pen, site, on, as_of, noise)
    body = _signed(site, on, author, tests)
    here = place | {"visit": uid_of(key)}
    pen.write("sign_off", f"{key}/sign-off", body, on, author=author, **here)
    closed = Visit(
        state="closed", on=on, start="09:00", end="12:30", weather="dry", monitoring="Monitoring desk, 09:05"
    )
    pen.write(
        "visit", f"{key}/closed", closed, on, author=author, **place, subject=uid_of(key), based_on=opened.uid,
        reason="closed by its sign-off",
    )  # fmt: skip


def _open(pen: Pen, site: SitePlan, on: date, *, planned: bool) -> Written:
    key, author = _key(site, on), author_of(site, on)
    place = {"site": uid_of(site.key)}
    opened = Visit(state="open", on=on, start="09:00", weather="dry", monitoring="Monitoring desk, 09:05")
    if not planned:
        return pen.write("visit", key, opened, on, author=author, **place)
    plan = Visit(state="planned", planned_for=on, assigned=uid_of(author))
    first = pen.write("visit", key, plan, on - timedelta(days=20), author="office-a", **place)
    return pen.write(
        "visit", f"{key}/open", opened, on, author=author, **place, subject=first.uid, based_on=first.uid,
        reason="opened on site",
    )  # fmt: skip


def _write_tests(pen: Pen, site: SitePlan, on: date, as_of: date, noise: np.random.Generator) -> list[Written]:
    statics = {supply.key: supply.truth.static_on(on, noise) for supply in site.supplies}
    key, author = _key(site, on), author_of(site, on)
    visit = {"site": uid_of(site.key), "visit": uid_of(key)}
    days = [_round(site, system, on, as_of, noise) for system in site.systems]
    found = [
        pen.write("gauge_reading", f"{key}/gauges", rounds.gauge_readings(days, statics), on, author=author, **visit)
    ]
    years = (on - visit_days(site, as_of)[0]).days / _DAYS_OF_YEAR
    for day in days:
        here = visit | {"system": uid_of(day.system.key)}
        static_psi = statics[day.supply.key]
        if _is_due(site, day.system, on, as_of):
            test = rounds.main_drain_test(day, static_psi)
            found.append(pen.write("main_drain_test", f"{key}/{day.system.key}/drain", test, on, author=author, **here))
        if day.system.type in _INSPECTORS:
            alarm = rounds.inspectors_test(day, static_psi, years)
            found.append(
                pen.write("inspectors_test", f"{key}/{day.system.key}/alarm", alarm, on, author=author, **here)
            )
    return [*found, *_flow_tests(pen, site, on, as_of, noise)]


def _flow_tests(pen: Pen, site: SitePlan, on: date, as_of: date, noise: np.random.Generator) -> list[Written]:
    key, author = _key(site, on), author_of(site, on)
    visit = {"site": uid_of(site.key), "visit": uid_of(key)}
    days = visit_days(site, as_of)
    return [
        pen.write(
            "flow_test",
            f"{key}/{supply.key}/flow",
            rounds.flow_test(supply, on, noise),
            on,
            author=author,
            **visit,
        )
        for supply in site.supplies
        for years in supply.flow_tests_years_ago
        if on == min(days, key=lambda day: abs((day - ago(days[-1], years)).days))
    ]


def _round(site: SitePlan, system: SystemPlan, on: date, as_of: date, noise: np.random.Generator) -> rounds.Round:
    supply = next(supply for supply in site.supplies if supply.key == system.supply)
    days = visit_days(site, as_of)
    return rounds.Round(site, system, supply, on, on == days[0], on == days[-1], noise)


def _is_due(site: SitePlan, system: SystemPlan, on: date, as_of: date) -> bool:
    """Return whether the main drain of the system was due on that visit, counted back from the last."""
    days = visit_days(site, as_of)
    a_year = (len(days) - 1) // 10
    return (len(days) - 1 - days.index(on)) % (a_year // min(system.tests_a_year, a_year)) == 0


def _signed(site: SitePlan, on: date, author: str, tests: list[Written]) -> SignOff:
    name = {"technician-a": "Technician A", "technician-b": "Technician B"}[author]
    licence = {"technician-a": "DEMO-1", "technician-b": "DEMO-2"}[author]
    owner = Signer(role="owner's representative", name="Owner's representative A", strokes=squiggle(on.toordinal() + 7))
    technician = Signer(
        role="technician", name=name, person=uid_of(author), licence=licence, strokes=squiggle(on.toordinal())
    )
    return SignOff(
        covers=tuple(Covered(uid=test.uid, sha256=test.sha256) for test in tests),
        signers=(technician, owner),
        summary=(
            f"Visit of {on.isoformat()} at {site.name}: {len(tests)} tests and readings as listed. "
            "Only the listed items were inspected or tested."
        ),
        signed_on=on,
        signed_at=f"{on.isoformat()}T12:20Z",
    )


def _key(site: SitePlan, on: date) -> str:
    return f"{site.key}/visit/{on.isoformat()}"


def hash_of(text: str) -> int:
    """Return a number of a text that is the same on every machine."""
    return sum((place + 1) * ord(char) for place, char in enumerate(text)) * 7919
