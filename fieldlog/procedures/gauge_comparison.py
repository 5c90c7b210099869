"""Comparison of a gauge with a certified one."""

from __future__ import annotations

from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.any_test import AnyTest, common_problems, missing
from fieldlog.procedures.envelope import Uid
from fieldlog.procedures.fields import Day, Line
from fieldlog.procedures.procedure import Body, Problem, Procedure
from fieldlog.units import Pressure, Temperature


class ComparisonPoint(Body, frozen=True, kw_only=True):
    """What the reference and the gauge showed."""

    reference: Annotated[Pressure, Meta(title="Reference")]
    shown: Annotated[Pressure, Meta(title="Shown")]
    direction: Annotated[Literal["rising", "falling"], Meta(title="Direction")] | None = None


class GaugeComparison(AnyTest, frozen=True, kw_only=True):
    """Points over the range, and what was done."""

    gauge: Annotated[Uid, Meta(title="Gauge")]
    reference: Annotated[Uid, Meta(title="Reference gauge")] | None = None
    reference_accuracy: (
        Annotated[str, Meta(title="Reference accuracy, percent of range", pattern=r"^[0-9](\.[0-9]{1,3})?(?!\n)$")]
        | None
    ) = None
    certificate: Annotated[Line, Meta(title="Reference certificate")] | None = None
    certificate_on: Annotated[Day, Meta(title="Certificate of")] | None = None
    points: Annotated[tuple[ComparisonPoint, ...], Meta(title="Points")] = ()
    tapped: Annotated[bool, Meta(title="Tapped")] | None = None
    temperature: Annotated[Temperature, Meta(title="Temperature")] | None = None
    outcome: Annotated[Literal["kept", "adjusted", "replaced"], Meta(title="Outcome")] | None = None


def _problems(body: GaugeComparison) -> list[Problem]:
    found = common_problems(body) + missing(body, "points", "outcome")
    if body.reference == body.gauge:
        found.append(Problem("reference", "a gauge can't be compared with itself; name the certified one"))
    return found


PROCEDURE = Procedure(
    "gauge_comparison", "Gauge comparison", GaugeComparison, frozenset({"technician", "office"}), is_test=True,
    steps=(
        "Take three points at least over the range, rising and falling; tap lightly",
        "Keep, adjust or replace",
    ),
    check=_problems,
)  # fmt: skip
