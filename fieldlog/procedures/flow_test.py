"""Supply flow test: static, residual and measured flow at hydrants, lead-in, base of riser or test header."""

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
from fieldlog.procedures.fields import NOT_NEGATIVE, Line, PressureReading
from fieldlog.procedures.procedure import Body, Problem, Procedure
from fieldlog.units import Diameter, Flow, Length, Pressure

Share = Annotated[str, Meta(pattern=r"^(0\.(?!0+$)[0-9]{1,4}|1(\.0{1,4})?)(?!\n)$")]


class Outlet(Body, frozen=True, kw_only=True):
    """One open outlet with its pitot reading; the coefficient is chosen, never supposed."""

    size: Annotated[Diameter, Meta(title="Outlet diameter")]
    coefficient: Annotated[Share, Meta(title="Coefficient")]
    factor: Annotated[Share, Meta(title="Factor of a pumper outlet")] | None = None
    pitot: Annotated[Pressure, Meta(title="Pitot", extra=NOT_NEGATIVE)]
    name: Annotated[Line, Meta(title="Outlet")] | None = None


class FlowPoint(Body, frozen=True, kw_only=True):
    """Residual while the outlets flow, or while a stated flow does."""

    residual: Annotated[PressureReading, Meta(title="Residual")]
    outlets: Annotated[tuple[Outlet, ...], Meta(title="Outlets")] = ()
    flow: Annotated[Flow, Meta(title="Flow")] | None = None
    discharge_pressure: Annotated[PressureReading, Meta(title="Pump discharge pressure")] | None = None


class FlowTest(AnyTest, frozen=True, kw_only=True):
    """One flow test of a water supply."""

    supply: Annotated[Uid, Meta(title="Water supply")]
    at: Annotated[Literal["street", "lead_in", "base_of_riser", "test_header"], Meta(title="Gauge stood at")]
    static: Annotated[PressureReading, Meta(title="Static")] | None = None
    points: Annotated[tuple[FlowPoint, ...], Meta(title="Points")] = ()
    elevation: Annotated[Length, Meta(title="Elevation of the gauge")] | None = None
    main_size: Annotated[Diameter, Meta(title="Size of the main")] | None = None
    residual_hydrant: Annotated[Line, Meta(title="Residual hydrant")] | None = None
    flow_hydrants: Annotated[Line, Meta(title="Flow hydrants")] | None = None
    permission: Annotated[Line, Meta(title="Permission by")] | None = None
    dechlorinated: Annotated[bool, Meta(title="Dechlorinated")] | None = None


def _problems(body: FlowTest) -> list[Problem]:
    found = common_problems(body) + missing(body, "static", "points")
    for index, point in enumerate(body.points):
        if not point.outlets and point.flow is None:
            found.append(Problem(f"points[{index}].flow", "give the outlets with their pitot readings, or the flow"))
        if point.outlets and point.flow is not None:
            found.append(Problem(f"points[{index}].flow", "give either outlets or a flow, not both"))
    return found


PROCEDURE = Procedure(
    "flow_test", "Flow test", FlowTest, frozenset({"technician", "office"}), frozenset({"site"}), is_test=True,
    steps=(
        "Get the water company's permission; see where the water goes",
        "Read the static at the residual hydrant or gauge",
        "Open the outlets slowly; read residual and every pitot at the same time",
        "Open more until the residual has fallen by what the adopted edition asks, or the demand flows",
        "Close slowly; read the static again",
    ),
    cautions=BEFORE_WATER_FLOWS + AFTER_WATER_FLOWED, check=_problems,
)  # fmt: skip
