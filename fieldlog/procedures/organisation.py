"""The contractor whose instance this is."""

from __future__ import annotations

from typing import Annotated

from msgspec import Meta

from fieldlog.procedures.envelope import Words
from fieldlog.procedures.fields import Day, Line
from fieldlog.procedures.procedure import Body, Procedure


class Organisation(Body, frozen=True, kw_only=True):
    """The organisation as printed on reports."""

    name: Annotated[Line, Meta(title="Name")]
    address: Annotated[Words, Meta(title="Address")] | None = None
    licence: Annotated[Line, Meta(title="Licence")] | None = None
    licence_expires: Annotated[Day, Meta(title="Licence expires")] | None = None


PROCEDURE = Procedure("organisation", "Organisation", Organisation, frozenset({"office", "instance"}))
