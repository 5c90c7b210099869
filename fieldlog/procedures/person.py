"""A person as known to the log: log-ins and grants are tables beside it."""

from __future__ import annotations

from typing import Annotated

from msgspec import Meta

from fieldlog.procedures.fields import Day, Line
from fieldlog.procedures.procedure import Body, Procedure


class Person(Body, frozen=True, kw_only=True):
    """Name, licence and its expiry, employer."""

    name: Annotated[Line, Meta(title="Name")]
    licence: Annotated[Line, Meta(title="Licence")] | None = None
    licence_expires: Annotated[Day, Meta(title="Licence expires")] | None = None
    employer: Annotated[Line, Meta(title="Employer")] | None = None


PROCEDURE = Procedure("person", "Person", Person, frozenset({"office"}))
