"""What the columns of `entries` hold of an entry's text: the one place that reads it out."""

from __future__ import annotations

from typing import Any, NamedTuple

import msgspec


class Columns(NamedTuple):
    """The extracted columns of an entry, by their names in the table."""

    performed_on: str | None
    uid: str
    kind: str
    subject: str
    author: str
    made_at: str
    site: str | None
    system: str | None
    visit: str | None
    based_on: str | None
    device: str | None
    device_number: int | None
    withdrawn: int


class _Dated(msgspec.Struct, gc=False):
    performed_on: Any = None


class _Fields(msgspec.Struct, gc=False):
    """As Columns, field by field; the form was checked when the text came, so nothing is checked here."""

    body: _Dated
    uid: str
    kind: str
    subject: str
    author: str
    made_at: str
    site: str | None = None
    system: str | None = None
    visit: str | None = None
    based_on: str | None = None
    device: str | None = None
    device_number: int | None = None
    withdrawn: bool | int = 0


_fields_of = msgspec.json.Decoder(_Fields).decode


def columns_of(text: str) -> Columns:
    """Return the extracted columns of an entry's text.

    Raises
    ------
    msgspec.MsgspecError
        If it is not the text of an entry.
    """
    fields = _fields_of(text)
    fields.site = site_of(fields.kind, fields.subject, fields.site)
    performed_on = fields.body.performed_on
    if not isinstance(performed_on, str):
        performed_on = None
    return Columns._make((performed_on, *msgspec.structs.astuple(fields)[1:]))


def site_of(kind: str, subject: str, site: str | None) -> str | None:
    """Return the site an entry belongs to: for a site's own entries, the site itself."""
    return subject if site is None and kind == "site" else site
