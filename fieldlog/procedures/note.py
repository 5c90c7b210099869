"""A note about a site or a system."""

from __future__ import annotations

from typing import Annotated

from msgspec import Meta

from fieldlog.procedures.envelope import Words
from fieldlog.procedures.fields import Photo
from fieldlog.procedures.procedure import Body, Procedure


class Note(Body, frozen=True, kw_only=True):
    """Words and photos."""

    text: Annotated[Words, Meta(title="Note")]
    photos: Annotated[tuple[Photo, ...], Meta(title="Photos", max_length=12)] = ()


PROCEDURE = Procedure("note", "Note", Note, frozenset({"technician", "office"}), frozenset({"site"}))
