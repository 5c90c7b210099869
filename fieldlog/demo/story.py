"""The whole story: particulars, ten years of visits, the last one signed off and reported."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from datetime import date, datetime

from fieldlog.clock import timestamp
from fieldlog.demo import registry, scenario
from fieldlog.demo.events import write_events, write_open_ends
from fieldlog.demo.pen import ORGANISATION, Pen, uid_of
from fieldlog.demo.plan import YEARS, SitePlan
from fieldlog.demo.visits import attendances, write_rounds_after, write_visit
from fieldlog.errors import ConflictError
from fieldlog.procedures.organisation import Organisation
from fieldlog.records.entries import Arrival, Via
from fieldlog.records.statement import Statement
from fieldlog.services import instance, intake, judging, people, reporting
from fieldlog.services.instance import Instance
from fieldlog.storage import entries, log

_REPORTED = "harbour"


@dataclass(frozen=True, slots=True)
class Expectation:
    """What should be said of a system, by how the scenario was made."""

    site: str
    system: str
    statement: Statement


@dataclass(frozen=True, slots=True)
class DemoOutcome:
    """What was made, and where it is."""

    folder: str
    entries: int
    systems: int
    visit: str
    report: str
    head: str
    expected: tuple[Expectation, ...]

    def lines(self) -> list[str]:
        """Return what to tell the one who asked for it."""
        return [
            f"instance: {self.folder}",
            f"log: {self.entries} entries, head {self.head}",
            f"sealed report: {self.report}",
            f"statements on {self.systems} systems: FIELDLOG_INSTANCE={self.folder} fieldlog statement",
            f"check the report: FIELDLOG_INSTANCE={self.folder} fieldlog verify {self.report}",
            "By how the scenario was made, these should be said:",
            *(f"  {one.site} · {one.system} · {one.statement}" for one in self.expected),
            "Every site, person and reading in it is invented.",
        ]


def steps(as_of: date) -> int:
    """Return how many steps `build` takes, for a progress bar."""
    return sum(3 + YEARS * site.visits_a_year for site in scenario.sites(as_of)) + 2


def build(made: Instance, at: datetime, progress: Callable[[int], None]) -> DemoOutcome:
    """Fill a new instance with the scenario and return what was made."""
    as_of = at.date()
    enter_history(made, at, progress)
    judging.judge_due(made.connection, as_of)
    progress(1)
    site = next(site for site in scenario.sites(as_of) if site.key == _REPORTED)
    visit = uid_of(attendances(site, as_of)[-1].key)
    report = reporting.make_report(made, visit, at)
    progress(1)
    head = log.head(made.connection)
    return DemoOutcome(
        folder=str(made.settings.instance),
        entries=head.number,
        systems=len(entries.in_force_of_kind(made.connection, "system")),
        visit=visit,
        report=str(report.path),
        head=head.link,
        expected=tuple(expectations(as_of)),
    )


def expectations(as_of: date) -> Iterator[Expectation]:
    """Return what should be said of each system."""
    for site in scenario.sites(as_of):
        for system in site.systems:
            yield Expectation(site.name, system.name, system.expected)


def batches(as_of: date) -> Iterator[tuple[Via, list[Arrival]]]:
    """Return the scenario's entries after the organisation's own, in the order and by the way they come."""
    pen = Pen()
    registry.write_people(pen, scenario.ago(as_of, 11.0))
    for site in scenario.sites(as_of):
        registry.write_site(pen, site, as_of)
        yield "import", pen.taken()
        for visit in attendances(site, as_of):
            if visit.back == 0:
                write_events(pen, site, as_of)
                yield "import", pen.taken()
            write_visit(pen, visit)
            if visit.back == 0:
                write_open_ends(pen, site, as_of)
            else:
                write_rounds_after(pen, visit)
            yield "form" if visit.back == 0 else "import", pen.taken()


def enter_history(made: Instance, at: datetime, progress: Callable[[int], None]) -> None:
    """Enter the organisation, its people, its sites and ten years of visits."""
    as_of = at.date()
    body = Organisation(name=scenario.ORGANISATION, address="7 Example Yard", licence="DEMO-0")
    instance.found_organisation(made, body, uid=ORGANISATION, at=at)
    for via, arrivals in batches(as_of):
        _hand_over(made, arrivals, at, via)
        progress(1)
    _let_in(made, at)


def _hand_over(made: Instance, arrivals: list[Arrival], at: datetime, via: Via) -> None:
    result = intake.take_in(made.connection, arrivals, via, timestamp(at))
    for refusal in result.refused:
        raise ConflictError(f"the scenario's entry {refusal.uid} was refused: {refusal.message}")
    if result.waiting:
        raise ConflictError(f"the scenario's entries {', '.join(result.waiting)} wait for others")


def _let_in(made: Instance, at: datetime) -> None:
    """Give the scenario's people their log-in names and sites."""
    sites: list[SitePlan] = list(scenario.sites(at.date()))
    for key, _, role, _ in scenario.PEOPLE:
        granted = sites[:1] if role == "owner" else [] if role == "office" else sites
        people.let_in(made, uid_of(key), key, role, [uid_of(site.key) for site in granted], at=at)
