"""Entries read: one text into its typed parts."""

from __future__ import annotations

from dataclasses import dataclass

import msgspec

from fieldlog.errors import InputError
from fieldlog.procedures.bodies import decode_body
from fieldlog.procedures.catalogue import PROCEDURES
from fieldlog.procedures.envelope import Envelope, parse_envelope


@dataclass(frozen=True, slots=True)
class Parsed:
    """An entry's text in its typed parts."""

    envelope: Envelope
    body: msgspec.Struct


def parse(text: str) -> Parsed:
    """Return the typed parts of an entry's text.

    Raises
    ------
    InputError
        If the text can't be an entry; names the field and the mend.
    """
    envelope = parse_envelope(text)
    _require_places(envelope)
    body = decode_body(envelope.kind, envelope.body)
    for problem in PROCEDURES[envelope.kind].check_place(envelope, body):
        raise InputError(f"{problem.field}: {problem.message}", field=problem.field)
    return Parsed(envelope, body)


def _require_places(envelope: Envelope) -> None:
    for name in sorted(PROCEDURES[envelope.kind].needs):
        if getattr(envelope, name) is None:
            raise InputError(f"{name}: a {envelope.kind} entry names its {name}; add it", field=name)
