"""The text of an entry, composed and checked by the same path as one that arrives."""

from __future__ import annotations

import uuid
from datetime import date
from typing import Any

import msgspec

from fieldlog.canonical import canonical_text
from fieldlog.procedures.bodies import plain_body
from fieldlog.procedures.procedure import Body
from fieldlog.procedures.read import parse

# Namespace of entries made from files of past readings: their uid follows from what they hold.
_IMPORTS = uuid.uuid5(uuid.NAMESPACE_URL, "urn:fieldlog:import:1")


def compose(
    kind: str,
    body: Body | msgspec.Struct,
    *,
    uid: str,
    author: str,
    made_at: str,
    subject: str | None = None,
    **rest: Any,  # noqa: ANN401  the optional fields of the envelope
) -> str:
    """Return the canonical text of an entry; `subject` is left out for a first one.

    The optional fields are those of the envelope: site, system, visit, based_on, reason, withdrawn, device,
    device_number.

    Raises
    ------
    InputError
        If the entry could not be taken in.
    """
    plain = {name: value for name, value in rest.items() if value not in {None, False}}
    plain |= {
        "uid": uid,
        "format": 1,
        "kind": kind,
        "subject": subject or uid,
        "author": author,
        "made_at": made_at,
    }
    text = canonical_text(plain | {"body": plain_body(body)})
    parse(text)
    return text


def import_uid(system: str, kind: str, performed_on: date, body: Body | msgspec.Struct, n: int) -> str:
    """Return the uid of an imported reading: the same row of a file has the same uid each time.

    Parameters
    ----------
    system : str
        Uid of the system, or of the supply where the reading is about that.
    kind : str
        Kind of the entry.
    performed_on : date
        Day of the reading.
    body : Body
        What was read.
    n : int
        1, 2, … for equal rows of one file.
    """
    name = canonical_text([system, kind, performed_on.isoformat(), plain_body(body), n])
    return str(uuid.uuid5(_IMPORTS, name))
