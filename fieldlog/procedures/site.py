"""One property under one owner's name."""

from __future__ import annotations

from typing import Annotated
from zoneinfo import ZoneInfo, ZoneInfoNotFoundError

from msgspec import Meta

from fieldlog.procedures.envelope import Words
from fieldlog.procedures.fields import Line
from fieldlog.procedures.procedure import Body, Problem, Procedure
from fieldlog.units import SiteUnits


class Site(Body, frozen=True, kw_only=True):
    """Name, address, zone, units and the one height mark all elevations are measured from."""

    name: Annotated[Line, Meta(title="Name")]
    address: Annotated[Words, Meta(title="Address")] | None = None
    owner: Annotated[Line, Meta(title="Owner")] | None = None
    zone: Annotated[Line, Meta(title="Time zone", description="as Area/City")] = "UTC"
    units: Annotated[SiteUnits, Meta(title="Units")] = SiteUnits()
    height_mark: (
        Annotated[Line, Meta(title="Height mark", description="what all elevations are heights above")] | None
    ) = None


def _problems(body: Site) -> list[Problem]:
    try:
        ZoneInfo(body.zone)
    except (ZoneInfoNotFoundError, ValueError, OSError):
        return [Problem("zone", f"{body.zone!r} is no time zone; give one as Area/City, for example Etc/UTC")]
    return []


PROCEDURE = Procedure("site", "Site", Site, frozenset({"technician", "office"}), check=_problems)
