"""A deficiency or impairment: its class is proposed, and decided by a qualified person."""

from __future__ import annotations

from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.any_test import WHILE_IMPAIRED
from fieldlog.procedures.envelope import Uid, Words
from fieldlog.procedures.fields import Day, Line, Photo, ZonedTime
from fieldlog.procedures.limits import is_before
from fieldlog.procedures.procedure import Body, Problem, Procedure


class Notified(Body, frozen=True, kw_only=True):
    """Who was told, how and when."""

    who: Annotated[Line, Meta(title="Who")]
    how: Annotated[Line, Meta(title="How")] | None = None
    at: Annotated[ZonedTime, Meta(title="When")] | None = None


class Deficiency(Body, frozen=True, kw_only=True, rename={"class_": "class"}):
    """What was found, its class, who was told, what is done meanwhile."""

    text: Annotated[Words, Meta(title="What was found")]
    found_on: Annotated[Day, Meta(title="Found on")]
    item: Annotated[Line, Meta(title="Item")] | None = None
    class_: Annotated[Literal["noncritical", "critical", "impairment"], Meta(title="Class")]
    proposed_by: Annotated[Line, Meta(title="Class proposed by")]
    decided_by: Annotated[Line, Meta(title="Class decided by")] | None = None
    began_at: Annotated[ZonedTime, Meta(title="Impairment began")] | None = None
    ended_at: Annotated[ZonedTime, Meta(title="Impairment ended")] | None = None
    notified: Annotated[tuple[Notified, ...], Meta(title="Told")] = ()
    interim: Annotated[Words, Meta(title="Interim measure")] | None = None
    due: Annotated[Day, Meta(title="Due")] | None = None
    retest: Annotated[Uid, Meta(title="Retest")] | None = None
    photos: Annotated[tuple[Photo, ...], Meta(title="Photos", max_length=12)] = ()


def _problems(body: Deficiency) -> list[Problem]:
    if body.class_ == "impairment" and body.began_at is None:
        return [Problem("began_at", "say when the impairment began: its clock runs from there")]
    if body.began_at is not None and body.ended_at is not None and is_before(body.ended_at, body.began_at):
        return [Problem("ended_at", f"ends at {body.ended_at}, before it began at {body.began_at}; mend one of them")]
    return []


PROCEDURE = Procedure(
    "deficiency", "Deficiency", Deficiency, frozenset({"technician", "office"}), frozenset({"site"}),
    cautions=WHILE_IMPAIRED, check=_problems,
)  # fmt: skip
