"""What was done about a deficiency; confirmed by a later version of the office or a technician."""

from __future__ import annotations

from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.envelope import Uid, Words
from fieldlog.procedures.fields import Day, Line, Photo
from fieldlog.procedures.procedure import Body, Problem, Procedure


class Remedy(Body, frozen=True, kw_only=True):
    """A repair or another remedy, and what it restores."""

    deficiency: Annotated[Uid, Meta(title="Deficiency")]
    done_on: Annotated[Day, Meta(title="Done on")]
    by: Annotated[Line, Meta(title="Done by")]
    text: Annotated[Words, Meta(title="What was done")] | None = None
    evidence: Annotated[Words, Meta(title="Evidence")] | None = None
    restores: Annotated[Literal["restriction", "drain", "gauge"], Meta(title="Restores")] | None = None
    confirmed_by: Annotated[Line, Meta(title="Confirmed by")] | None = None
    photos: Annotated[tuple[Photo, ...], Meta(title="Photos", max_length=12)] = ()


def _problems(body: Remedy) -> list[Problem]:
    if body.evidence is None and not body.photos:
        return [Problem("evidence", "say what shows that it is done, or add a photo")]
    return []


PROCEDURE = Procedure(
    "remedy",
    "Remedy",
    Remedy,
    frozenset({"technician", "office", "owner"}),
    frozenset({"site"}),
    check=_problems,
    withheld={"owner": frozenset({"confirmed_by"})},
)
