"""What every test carries, whatever it is about."""

from __future__ import annotations

from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.envelope import Words
from fieldlog.procedures.fields import ClockTime, Day, Instrument, Kept, Line, Photo, PumpState, Restoration, ValveFound
from fieldlog.procedures.limits import is_before
from fieldlog.procedures.procedure import Body, Caution, Problem
from fieldlog.units import Length, Temperature


class AnyTest(Body, frozen=True, kw_only=True):
    """Common fields of a test; a reason stands where it was not or only partly done."""

    performed_on: Annotated[Day, Meta(title="Performed on")]
    item: Annotated[Line, Meta(title="Item", description="the valve, alarm, assembly or outlet")] | None = None
    answers: Annotated[Line, Meta(title="Edition and clause it answers")] | None = None
    start: Annotated[ClockTime, Meta(title="Start")] | None = None
    end: Annotated[ClockTime, Meta(title="End")] | None = None
    witness: Annotated[Line, Meta(title="Witness")] | None = None
    instruments: Annotated[tuple[Instrument, ...], Meta(title="Instruments")] = ()
    weather: Annotated[Line, Meta(title="Weather")] | None = None
    outdoor_temperature: Annotated[Temperature, Meta(title="Outdoor temperature")] | None = None
    valves: Annotated[tuple[ValveFound, ...], Meta(title="Valves on the way of the water")] = ()
    pump_state: Annotated[PumpState, Meta(title="Fire pump")] | None = None
    tank_level: Annotated[Length, Meta(title="Tank level")] | None = None
    as_found: Annotated[Words, Meta(title="As found")] | None = None
    as_left: Annotated[Words, Meta(title="As left")] | None = None
    restored: Annotated[Restoration, Meta(title="Normal condition restored")] | None = None
    done: Annotated[Literal["done", "partly", "not"], Meta(title="Done")] = "done"
    not_done_reason: Annotated[Words, Meta(title="Reason if not or partly done")] | None = None
    standing: Annotated[Literal["routine", "acceptance", "after repair"], Meta(title="Standing")] = "routine"
    cautions: Annotated[tuple[Line, ...], Meta(title="Cautions ticked")] = ()
    kept: Annotated[tuple[Kept, ...], Meta(title="Questions answered")] = ()
    photos: Annotated[tuple[Photo, ...], Meta(title="Photos", max_length=12)] = ()
    note: Annotated[Words, Meta(title="Note")] | None = None


def common_problems(body: AnyTest) -> list[Problem]:
    """Return what can't be an honest record in the common part."""
    found = []
    if body.done != "done" and body.not_done_reason is None:
        found.append(Problem("not_done_reason", "say why it was not or only partly done"))
    for index, valve in enumerate(body.valves):
        shut, opened = valve.shut_at, valve.opened_at
        if valve.left == "open" and shut is not None and opened is not None and is_before(opened, shut):
            message = f"opened at {opened}, before it was shut at {shut}, and left open; mend one of them"
            found.append(Problem(f"valves[{index}].opened_at", message))
    return found


def missing(body: AnyTest, *names: str) -> list[Problem]:
    """Return a problem for each named field that is absent from a test that was done."""
    if body.done != "done":
        return []
    return [Problem(name, "is needed; or say that the test was not or only partly done, and why")
            for name in names if getattr(body, name) in (None, ())]  # fmt: skip


# Common practice; the adopted standard, local rules and the maker's instructions decide.
BEFORE_WATER_FLOWS = (
    Caution("monitoring_told", "Monitoring service and owner told, panel on test (who, when)"),
    Caution("interlocks_held", "Interlocks held: elevators, ventilation, releasing, process shut-down"),
    Caution(
        "outlet_takes_full_flow",
        "Outlet can take full flow: nobody in its way; no vehicles, glass, electrical rooms, slopes, neighbours' "
        "ground or ice. One that can't gives a residual that is not to be compared: say so",
    ),
    Caution("not_frozen", "Drain and outlet not frozen"),
    Caution("not_to_drain", "No glycol, foam, dye or chlorinated water to soil or storm drain"),
    Caution("no_antifreeze_or_foam", "Not an antifreeze or foam system: those are not run to a drain"),
    Caution("no_trip", "Dry or preaction valve secured, so that a drain test does not trip it"),
    Caution("valves_open", "Control valves open: checked by hand or indicator, sealed or locked"),
    Caution("pump_attended", "A pump that may start is attended"),
    Caution("protection_worn", "Eye and hearing protection; hose secured; pits and vaults as confined spaces"),
    Caution("open_slowly", "Open and close slowly; never leave a flowing drain"),
)
AFTER_WATER_FLOWED = (
    Caution("drain_shut", "Drain shut and not weeping", "after"),
    Caution("valves_secured", "Every valve open, sealed or locked, supervised position shown", "after"),
    Caution("pressures_back", "Water and air pressures back to normal", "after"),
    Caution(
        "alarms_restored",
        "Alarm, supervisory and trouble points restored, confirmed by the monitoring party",
        "after",
    ),
    Caution("owner_told", "Owner's person told; impairment closed if one was opened", "after"),
)
WHILE_IMPAIRED = (
    Caution("impairment_told", "Owner, fire authority, insurer and monitoring told that the system is impaired"),
    Caution(
        "fire_watch",
        "Fire watch or another measure while people sleep or work below a shut valve; hot work stopped",
    ),
)
