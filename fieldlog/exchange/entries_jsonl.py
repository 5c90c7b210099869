"""Entries as JSON Lines: one object a line, `{"text": …, "signature"?: …}`, in UTF-8.

`text` is the entry's canonical text as one JSON string, exactly as it is hashed, signed and kept.
"""

from __future__ import annotations

import json
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from typing import BinaryIO

from fieldlog.errors import InputError
from fieldlog.procedures.envelope import LONGEST_TEXT
from fieldlog.records.entries import Arrival

# Another program may write every character of the text as \uXXXX: six bytes for one.
LONGEST_LINE = 6 * LONGEST_TEXT + 4096
_LONGEST_SIGNATURE = 4096


@dataclass(frozen=True, slots=True)
class LineRefusal:
    """A line that is not an entry: where, which field, and what to do."""

    line: int
    field: str
    message: str


def read_entries(stream: BinaryIO) -> Iterator[tuple[int, Arrival | LineRefusal]]:
    """Yield each line's number, from 1, with its entry or why it is none; blank lines are passed over."""
    number = 0
    while data := stream.readline(LONGEST_LINE + 1):
        number += 1
        if len(data) > LONGEST_LINE:
            _skip_rest(stream, data)
            yield number, LineRefusal(number, "", f"line longer than {LONGEST_LINE} bytes; send shorter entries")
        elif stripped := data.removeprefix(b"\xef\xbb\xbf").strip():
            yield number, _entry(number, stripped)


def write_entries(arrivals: Iterable[Arrival], out: BinaryIO) -> int:
    """Write one line an entry and return their number; `read_entries` gives the same back."""
    count = 0
    for arrival in arrivals:
        line = {"text": arrival.text} | ({"signature": arrival.signature} if arrival.signature is not None else {})
        out.write(json.dumps(line, ensure_ascii=False, separators=(",", ":")).encode() + b"\n")
        count += 1
    return count


def _skip_rest(stream: BinaryIO, data: bytes) -> None:
    while data and not data.endswith(b"\n"):
        data = stream.readline(LONGEST_LINE)


def _entry(number: int, data: bytes) -> Arrival | LineRefusal:
    try:
        return _arrival(_plain(data))
    except InputError as error:
        return LineRefusal(number, error.field, error.message)


def _plain(data: bytes) -> object:
    try:
        return json.loads(data.decode("utf-8"), object_pairs_hook=_no_key_twice)
    except UnicodeDecodeError as error:
        raise InputError(f"byte {error.start + 1} of the line is not UTF-8; write the file in UTF-8") from error
    except RecursionError as error:
        raise InputError("the line is nested too deeply; it holds text and, if signed, signature") from error
    except ValueError as error:
        if isinstance(error, InputError):
            raise
        raise InputError(
            f'the line is not JSON ({error}); write one object a line: {{"text": "…", "signature": "…"}}'
        ) from error


def _no_key_twice(pairs: list[tuple[str, object]]) -> dict[str, object]:
    plain = dict(pairs)
    if len(plain) != len(pairs):
        raise InputError("the line names a field twice; name each once")
    return plain


def _arrival(plain: object) -> Arrival:
    if not isinstance(plain, dict):
        raise InputError(f'the line is no object; write {{"text": "…"}}, found {type(plain).__name__}')
    if unknown := sorted(set(plain) - {"text", "signature"}):
        raise InputError(
            f"{unknown[0]}: not a field of a line; only text and signature are (the entry itself goes into text)",
            field=unknown[0],
        )
    text = _string(plain, "text")
    if len(text.encode()) > LONGEST_TEXT:
        raise InputError(f"text: longer than {LONGEST_TEXT} bytes; shorten the entry's texts", field="text")
    if "signature" not in plain:
        return Arrival(text)
    signature = _string(plain, "signature")
    if len(signature) > _LONGEST_SIGNATURE:
        raise InputError("signature: too long to be one of a tablet; leave it out", field="signature")
    return Arrival(text, signature)


def _string(plain: dict[str, object], name: str) -> str:
    value = plain.get(name)
    if not isinstance(value, str) or not value:
        raise InputError(
            f"{name}: expected a JSON string that is not empty"
            + (" (the entry's canonical text, quoted)" if name == "text" else " or no such field"),
            field=name,
        )
    try:
        value.encode()
    except UnicodeEncodeError as error:
        raise InputError(f"{name}: half a character (a lone surrogate); write it again", field=name) from error
    return value
