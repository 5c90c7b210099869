"""Forward-flow test of a backflow preventer at or near the system's demand."""

from __future__ import annotations

from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.any_test import AFTER_WATER_FLOWED, BEFORE_WATER_FLOWS, AnyTest, common_problems, missing
from fieldlog.procedures.fields import PressureReading
from fieldlog.procedures.procedure import Problem, Procedure
from fieldlog.units import Flow


class ForwardFlowTest(AnyTest, frozen=True, kw_only=True):
    """Flow and the pressures up- and downstream of the device and at the riser."""

    flow: Annotated[Flow, Meta(title="Flow")] | None = None
    measured_by: Annotated[Literal["pitot", "flow meter", "other"], Meta(title="Flow measured by")] = "pitot"
    upstream: Annotated[PressureReading, Meta(title="Upstream of the device")] | None = None
    downstream: Annotated[PressureReading, Meta(title="Downstream of the device")] | None = None
    at_riser: Annotated[PressureReading, Meta(title="At the riser")] | None = None
    target: Annotated[Flow, Meta(title="Target flow")] | None = None


def _problems(body: ForwardFlowTest) -> list[Problem]:
    return common_problems(body) + missing(body, "flow", "item")


PROCEDURE = Procedure(
    "forward_flow_test", "Forward-flow test", ForwardFlowTest, frozenset({"technician", "office"}),
    frozenset({"site", "system"}), is_test=True,
    steps=("Open the test outlets until the demand flows",
           "Read up- and downstream and at the riser; measure the flow"),
    cautions=BEFORE_WATER_FLOWS + AFTER_WATER_FLOWED, check=_problems,
)  # fmt: skip
