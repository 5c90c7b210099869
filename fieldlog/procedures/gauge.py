"""A pressure gauge: of a system, of a supply (header, lead-in), or a test gauge of the organisation."""

from __future__ import annotations

from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.envelope import Envelope, Uid
from fieldlog.procedures.fields import ABOVE_ZERO, Day, Line
from fieldlog.procedures.procedure import Body, Problem, Procedure
from fieldlog.units import Length, Pressure


class Gauge(Body, frozen=True, kw_only=True):
    """One gauge; a replaced gauge is one new entry, and the old one ends then."""

    name: Annotated[Line, Meta(title="Gauge", description="its number on site")]
    of: Annotated[Literal["system", "supply", "organisation"], Meta(title="Gauge of")]
    supply: Annotated[Uid, Meta(title="Water supply")] | None = None
    side: Annotated[Literal["supply", "system", "air"], Meta(title="Side")] | None = None
    taps: Annotated[Literal["riser", "drain connection", "header", "unknown"], Meta(title="Taps")] = "unknown"
    behind: Annotated[
        tuple[Literal["check", "alarm", "backflow", "prv"], ...], Meta(title="Valves between source and gauge")
    ] = ()
    range: Annotated[Pressure, Meta(title="Range, full scale", extra=ABOVE_ZERO)] | None = None
    division: Annotated[Pressure, Meta(title="Smallest division", extra=ABOVE_ZERO)] | None = None
    grade: Annotated[Literal["4A", "3A", "2A", "1A", "A", "B", "C", "D"], Meta(title="Accuracy grade")] | None = None
    elevation: Annotated[Length, Meta(title="Elevation")] | None = None
    installed_on: Annotated[Day, Meta(title="Installed on")] | None = None
    replaces: Annotated[Uid, Meta(title="Replaces")] | None = None
    ended_on: Annotated[Day, Meta(title="Taken out on")] | None = None
    normal_low: Annotated[Pressure, Meta(title="Normal range, low")] | None = None
    normal_high: Annotated[Pressure, Meta(title="Normal range, high")] | None = None
    certificate: Annotated[Line, Meta(title="Certificate")] | None = None
    certificate_on: Annotated[Day, Meta(title="Certificate of")] | None = None


def _problems(body: Gauge) -> list[Problem]:
    found = []
    if body.of == "supply" and body.supply is None:
        found.append(Problem("supply", "say which water supply the gauge belongs to"))
    if body.range is not None and body.division is not None and body.division.exact() >= body.range.exact():
        found.append(Problem("division", "the smallest division is not below the range; mend one of them"))
    if body.replaces is not None and body.installed_on is None:
        found.append(Problem("installed_on", "say since when it stands in place of the other, which ends then"))
    if body.installed_on is not None and body.ended_on is not None and body.ended_on < body.installed_on:
        found.append(Problem("ended_on", f"taken out on {body.ended_on}, before it was installed; mend one of them"))
    if body.normal_low and body.normal_high and body.normal_low.exact() >= body.normal_high.exact():
        found.append(Problem("normal_high", "the normal range ends at or below its start; mend one of them"))
    return found


def _place_problems(envelope: Envelope, body: Gauge) -> list[Problem]:
    needed = {"system": ("site", "system"), "supply": ("site",), "organisation": ()}[body.of]
    found = [
        Problem(name, f"a gauge of a {body.of} names its {name}; add it")
        for name in needed
        if getattr(envelope, name) is None
    ]
    if body.of == "organisation" and envelope.site is not None:
        found.append(Problem("site", "a test gauge of the organisation belongs to no site; leave it out"))
    if body.replaces == envelope.subject:
        found.append(Problem("body.replaces", "a gauge can't replace itself; name the one before it"))
    return found


PROCEDURE = Procedure(
    "gauge", "Gauge", Gauge, frozenset({"technician", "office"}), check=_problems, check_place=_place_problems
)
