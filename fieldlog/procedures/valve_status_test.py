"""Valve status test: flow seen at an outlet after a valve was reopened; not evidence of capacity."""

from __future__ import annotations

from typing import Annotated

from msgspec import Meta

from fieldlog.procedures.any_test import (
    AFTER_WATER_FLOWED,
    BEFORE_WATER_FLOWS,
    WHILE_IMPAIRED,
    AnyTest,
    common_problems,
    missing,
)
from fieldlog.procedures.fields import Line, PressureReading, ZonedTime
from fieldlog.procedures.limits import is_before
from fieldlog.procedures.procedure import Problem, Procedure


class ValveStatusTest(AnyTest, frozen=True, kw_only=True):
    """One valve, closed and reopened."""

    valve: Annotated[Line, Meta(title="Valve")] | None = None
    closed_at: Annotated[ZonedTime, Meta(title="Closed at")] | None = None
    closed_by: Annotated[Line, Meta(title="Closed by")] | None = None
    closed_why: Annotated[Line, Meta(title="Why")] | None = None
    reopened_at: Annotated[ZonedTime, Meta(title="Reopened at")] | None = None
    flow_seen: Annotated[bool, Meta(title="Flow seen")] | None = None
    outlet: Annotated[Line, Meta(title="From which outlet")] | None = None
    pressure: Annotated[PressureReading, Meta(title="Pressure")] | None = None
    supervised_normal: Annotated[bool, Meta(title="Supervised position normal")] | None = None


def _problems(body: ValveStatusTest) -> list[Problem]:
    found = common_problems(body) + missing(body, "valve", "flow_seen")
    closed, reopened = body.closed_at, body.reopened_at
    if closed is not None and reopened is not None and is_before(reopened, closed):
        found.append(Problem("reopened_at", f"reopened at {reopened}, before it was closed at {closed}; mend one"))
    return found


PROCEDURE = Procedure(
    "valve_status_test", "Valve status test", ValveStatusTest, frozenset({"technician", "office"}),
    frozenset({"site", "system"}), is_test=True,
    steps=(
        "Open the valve fully, secure it",
        "Open an outlet until flow is seen; read the pressure",
        "Shut the outlet",
    ),
    cautions=WHILE_IMPAIRED + BEFORE_WATER_FLOWS + AFTER_WATER_FLOWED, check=_problems,
)  # fmt: skip
