"""One attendance at a site: planned, open, closed by its sign-off."""

from __future__ import annotations

from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.envelope import Uid, Words
from fieldlog.procedures.fields import ClockTime, Day, Line, PumpState, Restoration
from fieldlog.procedures.procedure import Body, Problem, Procedure


class NotDone(Body, frozen=True, kw_only=True):
    """An item that was due and is left, with the reason and the agreed date."""

    item: Annotated[Line, Meta(title="Item")]
    reason: Annotated[Words, Meta(title="Reason")]
    agreed_for: Annotated[Day, Meta(title="Agreed for")] | None = None


class Visit(Body, frozen=True, kw_only=True):
    """A visit of one person."""

    state: Annotated[Literal["planned", "open", "closed"], Meta(title="State")]
    planned_for: Annotated[Day, Meta(title="Planned for")] | None = None
    assigned: Annotated[Uid, Meta(title="Assigned to")] | None = None
    on: Annotated[Day, Meta(title="Date")] | None = None
    start: Annotated[ClockTime, Meta(title="Start")] | None = None
    end: Annotated[ClockTime, Meta(title="End")] | None = None
    weather: Annotated[Line, Meta(title="Weather")] | None = None
    pump_state: Annotated[PumpState, Meta(title="Fire pump")] | None = None
    monitoring: Annotated[Line, Meta(title="Monitoring told")] | None = None
    discharge: Annotated[Line, Meta(title="Where water goes")] | None = None
    restored: Annotated[Restoration, Meta(title="Normal condition restored")] | None = None
    not_done: Annotated[tuple[NotDone, ...], Meta(title="Due but not done")] = ()
    note: Annotated[Words, Meta(title="Note")] | None = None


def _problems(body: Visit) -> list[Problem]:
    if body.state == "planned" and body.planned_for is None:
        return [Problem("planned_for", "say for which day the visit is planned")]
    if body.state != "planned" and body.on is None:
        return [Problem("on", "say on which day the visit was")]
    return []


PROCEDURE = Procedure(
    "visit", "Visit", Visit, frozenset({"technician", "office"}), frozenset({"site"}), check=_problems
)
