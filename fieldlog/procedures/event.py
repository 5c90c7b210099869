"""What the instance itself did: a report made, an export, a grant or device changed."""

from __future__ import annotations

from typing import Annotated, Literal

from msgspec import Meta

from fieldlog.procedures.envelope import Sha256, Uid, Words
from fieldlog.procedures.fields import Line
from fieldlog.procedures.procedure import Body, Procedure


class Event(Body, frozen=True, kw_only=True):
    """One event with what it is about."""

    what: Annotated[Literal["report made", "export", "grant changed", "device changed", "restored"], Meta(title="What")]
    about: Annotated[Uid, Meta(title="About")] | None = None
    sha256: Annotated[Sha256, Meta(title="SHA-256 of the file")] | None = None
    unsigned_sha256: Annotated[Sha256, Meta(title="SHA-256 before sealing")] | None = None
    revision: Annotated[int, Meta(title="Revision", ge=1)] | None = None
    head: Annotated[Sha256, Meta(title="Head printed")] | None = None
    by: Annotated[Line, Meta(title="By")] | None = None
    text: Annotated[Words, Meta(title="Particulars")] | None = None


PROCEDURE = Procedure("event", "Event", Event, frozenset({"instance"}))
