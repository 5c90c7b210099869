"""Main drain test: static before, residual at full flow, seconds to return, static after."""

from __future__ import annotations

from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.any_test import (
    AFTER_WATER_FLOWED,
    BEFORE_WATER_FLOWS,
    AnyTest,
    common_problems,
    missing,
)
from fieldlog.procedures.envelope import Uid
from fieldlog.procedures.fields import NOT_NEGATIVE, Duration, Line, PressureReading
from fieldlog.procedures.procedure import Problem, Procedure
from fieldlog.units import Pressure


class MainDrainTest(AnyTest, frozen=True, kw_only=True):
    """One main drain test of a lead-in or riser."""

    drain: Annotated[Line, Meta(title="Drain")] | None = None
    at: Annotated[Literal["lead-in", "riser"], Meta(title="Tested at")] | None = None
    serves: Annotated[tuple[Uid, ...], Meta(title="Systems this test serves")] = ()
    source: Annotated[Literal["witnessed", "information sign", "old record"], Meta(title="Source of the readings")] = (
        "witnessed"
    )
    static_before: (
        Annotated[PressureReading, Meta(title="Static before", description="supply gauge, settled")] | None
    ) = None
    residual: (
        Annotated[PressureReading, Meta(title="Residual, full flow", description="drain fully open, running clear")]
        | None
    ) = None
    return_seconds: Annotated[Duration, Meta(title="Time to return")] | None = None
    did_not_recover: Annotated[bool, Meta(title="Did not recover")] = False
    static_after: (
        Annotated[PressureReading, Meta(title="Static after", description="steady: two looks, 30 s apart")] | None
    ) = None
    steady: Annotated[bool, Meta(title="Static after was steady")] | None = None
    system_side_before: Annotated[PressureReading, Meta(title="System-side gauge before")] | None = None
    upstream_before: (
        Annotated[PressureReading, Meta(title="Upstream of backflow preventer or reducing valve")] | None
    ) = None
    fully_open: Annotated[bool, Meta(title="Drain fully open")] | None = None
    turns: Annotated[int, Meta(title="Turns to fully open", ge=1, le=200)] | None = None
    took_full_flow: Annotated[bool, Meta(title="Outlet took full flow")] | None = None
    running_clear: Annotated[bool, Meta(title="Ran clear")] | None = None
    clear_after: Annotated[Duration, Meta(title="Ran clear after")] | None = None
    drain_unchanged: Annotated[bool, Meta(title="Drain unchanged since last test")] | None = None
    confirmed: Annotated[Literal["no", "second look", "second gauge"], Meta(title="Reading confirmed by")] = "no"
    drain_pitot: Annotated[Pressure, Meta(title="Pitot reading at the drain outlet", extra=NOT_NEGATIVE)] | None = None
    conditions: Annotated[Line, Meta(title="Conditions", description="other large use of water seen")] | None = None


def _problems(body: MainDrainTest) -> list[Problem]:
    found = common_problems(body) + missing(body, "static_before", "residual")
    if body.source == "witnessed":
        found += missing(body, "fully_open", "took_full_flow")
    return found


PROCEDURE = Procedure(
    "main_drain_test",
    "Main drain test",
    MainDrainTest,
    frozenset({"technician", "office"}),
    frozenset({"site", "system"}),
    is_test=True,
    steps=(
        "Tell owner, monitoring and fire authority as required; put the point on test",
        "See that control valves are open and that the outlet can take full flow and does no harm",
        "Read the supply-side gauge when settled: static before; the system-side gauge apart",
        "Open the drain slowly and fully; when steady and clear, read the residual",
        "Shut the drain slowly; take the seconds until the gauge is back",
        "Read static after when steady: two looks, 30 seconds apart",
        "Bring everything back to normal and have the monitoring party confirm it",
    ),
    cautions=BEFORE_WATER_FLOWS + AFTER_WATER_FLOWED,
    check=_problems,
)
