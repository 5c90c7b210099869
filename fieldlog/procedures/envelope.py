"""The outer shape of every entry's text; the body is decoded by its kind's own type (procedures/catalogue)."""

from __future__ import annotations

import json
from datetime import datetime
from typing import Annotated, Any, Literal, get_args

import msgspec

from fieldlog.canonical import canonical_text
from fieldlog.errors import InputError
from fieldlog.procedures.shape_words import shape_refusal

# A bare $ would let a line break through at the end; (?!\n)$ means the end in Python and in JavaScript.
Uid = Annotated[
    str, msgspec.Meta(pattern=r"^[0-9a-f]{8}-[0-9a-f]{4}-[1-8][0-9a-f]{3}-[89ab][0-9a-f]{3}-[0-9a-f]{12}(?!\n)$")
]
Timestamp = Annotated[str, msgspec.Meta(pattern=r"^[0-9]{4}-[0-9]{2}-[0-9]{2}T[0-9]{2}:[0-9]{2}:[0-9]{2}Z(?!\n)$")]
Sha256 = Annotated[str, msgspec.Meta(pattern=r"^[0-9a-f]{64}(?!\n)$")]
# One line; several lines. Both show something, and neither holds what would steer a terminal or break a document.
LINE = r"^(?=.*\S)[^\x00-\x1f\x7f-\x9f\u2028\u2029]+(?!\n)$"
WORDS = r"^(?=[\s\S]*\S)[^\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x9f]*$"
Words = Annotated[str, msgspec.Meta(min_length=1, max_length=4000, pattern=WORDS)]

Kind = Literal[
    "organisation", "person", "site", "supply", "system", "gauge", "design_record", "rule_profile", "visit",
    "main_drain_test", "gauge_reading", "inspectors_test", "flow_test", "forward_flow_test", "valve_status_test",
    "gauge_comparison", "deficiency", "remedy", "note", "sign_off", "event",
]  # fmt: skip

LONGEST_TEXT = 256 * 1024  # bytes; the limit of one batch, so no entry alone can exceed it


class Envelope(msgspec.Struct, frozen=True, forbid_unknown_fields=True, omit_defaults=True, kw_only=True):
    """Everything of an entry that does not depend on its kind; absent is absent, never null."""

    uid: Uid
    format: Literal[1]
    kind: Kind
    subject: Uid
    author: Uid
    made_at: Timestamp
    body: dict[str, Any]
    site: Uid | None = None
    system: Uid | None = None
    visit: Uid | None = None
    based_on: Uid | None = None
    reason: Annotated[str, msgspec.Meta(min_length=1, max_length=2000, pattern=WORDS)] | None = None
    withdrawn: Literal[True] | None = None
    device: Uid | None = None
    device_number: Annotated[int, msgspec.Meta(ge=1)] | None = None


def parse_envelope(text: str) -> Envelope:
    """Return the envelope of an entry's text.

    Raises
    ------
    InputError
        If the text is not canonical JSON of this shape; names the field and the mend.
    """
    if len(text.encode(errors="surrogatepass")) > LONGEST_TEXT:
        raise InputError(f"the entry is longer than {LONGEST_TEXT} bytes; shorten its texts", field="text")
    plain = _plain(text)
    _require_canonical(plain, text)
    try:
        envelope = msgspec.convert(plain, Envelope)
    except msgspec.ValidationError as error:
        raise shape_refusal(error, choices_at=_choices) from error
    _require_time(envelope)
    _require_version_fields(envelope)
    return envelope


def _plain(text: str) -> dict[str, Any]:
    try:
        plain = json.loads(text, parse_constant=_no_constant)
    except (ValueError, RecursionError) as error:
        raise InputError(f"the text is not JSON ({error}); send one JSON object", field="text") from error
    if not isinstance(plain, dict):
        raise InputError(f"the text is a {type(plain).__name__}; send one JSON object", field="text")
    return plain


def _no_constant(name: str) -> float:
    raise ValueError(f"{name} is not JSON")


def _require_canonical(plain: dict[str, Any], text: str) -> None:
    try:
        canonical = canonical_text(plain)
    except RecursionError as error:
        raise InputError("the text is nested too deeply; flatten it", field="text") from error
    if canonical != text:
        raise InputError(
            "the text is not in canonical form (sorted keys, no spaces, NFC, decimals as strings, nothing twice); "
            "compose it again",
            field="text",
        )


def _choices(field: str) -> tuple[str, ...]:
    return get_args(Kind) if field == "kind" else ()


def _require_time(envelope: Envelope) -> None:
    try:
        datetime.fromisoformat(envelope.made_at)
    except ValueError as error:
        raise InputError(
            f"made_at: {envelope.made_at} is no time of the calendar; write it as 2026-10-03T09:30:00Z", field="made_at"
        ) from error


def _require_version_fields(envelope: Envelope) -> None:
    is_first = envelope.uid == envelope.subject
    if is_first and envelope.based_on is not None:
        raise InputError("based_on: a first entry replaces nothing; leave it out", field="based_on")
    if not is_first and envelope.based_on is None:
        raise InputError("based_on: name the version this one replaces", field="based_on")
    if not is_first and envelope.reason is None:
        raise InputError("reason: say why this version replaces the one before", field="reason")
    if is_first and envelope.withdrawn:
        raise InputError("withdrawn: only a later version can take a subject out of force", field="withdrawn")
    if (envelope.device is None) != (envelope.device_number is None):
        raise InputError("device_number: device and its number come together", field="device_number")
