"""The one canonical form of JSON that is signed, hashed, sent and kept (DEVELOPERS.md "Canonical text").

ASCII keys in sorted order, no spaces, strings in NFC, integers only: a decimal is a string, an absent value is
absent and never null. The same object has one text in Python and in JavaScript (tests/vectors/canonical.json).
"""

from __future__ import annotations

import hashlib
import json
import unicodedata
from collections.abc import Mapping, Sequence

from fieldlog.errors import InputError

# JavaScript holds integers exactly up to this.
_LARGEST_INTEGER = 2**53 - 1
_ENCODER = json.JSONEncoder(sort_keys=True, separators=(",", ":"), ensure_ascii=False)


def canonical_text(value: object) -> str:
    """Return the canonical JSON text of `value`.

    Raises
    ------
    InputError
        If `value` holds a float, a null, a key that is not ASCII, a lone surrogate, or an integer that
        JavaScript can't hold.
    """
    return _ENCODER.encode(_normal(value, ""))


def sha256_hex(text: str | bytes) -> str:
    """Return the SHA-256 of `text` (UTF-8) in hexadecimal."""
    return hashlib.sha256(text.encode() if isinstance(text, str) else text).hexdigest()


def _normal(value: object, path: str) -> object:
    if isinstance(value, str):
        # Most texts are ASCII, which is in NFC already; an import composes a hundred thousand of them.
        return value if value.isascii() else _normal_string(value, path)
    if isinstance(value, bool):
        return value
    if isinstance(value, int):
        return _normal_integer(value, path)
    if isinstance(value, Mapping):
        return {_key(key, path): _normal(item, f"{path}.{key}" if path else str(key)) for key, item in value.items()}
    if isinstance(value, Sequence) and not isinstance(value, (bytes, bytearray)):
        return [_normal(item, f"{path}[{index}]") for index, item in enumerate(value)]
    raise InputError(
        f"{path or 'the value'}: {type(value).__name__} has no canonical form; give a string, an integer, "
        "true or false, a list or an object (a decimal is a string, an absent value is left out)",
        field=path,
    )


def _key(key: object, path: str) -> str:
    if isinstance(key, str) and key.isascii():
        return key
    raise InputError(f"{path or 'the object'}: the key {key!r} is not ASCII text; rename it", field=path)


def _normal_string(value: str, path: str) -> str:
    normal = unicodedata.normalize("NFC", value)
    try:
        normal.encode()
    except UnicodeEncodeError as error:
        raise InputError(
            f"{path}: half a character (a lone surrogate) in the text; type it again", field=path
        ) from error
    return normal


def _normal_integer(value: int, path: str) -> int:
    if abs(value) > _LARGEST_INTEGER:
        raise InputError(f"{path}: {value} is too large for an integer; give it as a string", field=path)
    return value
