"""What the decoder says of a shape that does not fit, put into people's words: field, what was found, the mend."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Mapping, Sequence

import msgspec

from fieldlog.errors import InputError

_PLACE = re.compile(r"^(?P<said>.*?) - at (?P<key>`key` in )?`\$(?P<path>.*)`$", re.DOTALL)
_NOUNS = {
    "str": "text", "int": "a whole number", "float": "a decimal number (decimals are sent as text)",
    "bool": "true or false", "date": "a day such as 2026-10-03", "array": "a list",
    "object": "an object with named fields", "null": "nothing",
}  # fmt: skip
# What the patterns of the types ask for, known by a part of each.
_FORMS = (
    (r"[0-9a-f]{8}-", "a UUID in lower case is expected"),
    (r"[0-9]{2}:[0-9]{2}:[0-9]{2}Z", "a time in UTC is expected, such as 2026-10-03T09:30:00Z"),
    (r"T[0-9]{2}:[0-9]{2}(", "a time with its zone is expected, such as 2026-10-03T09:30+02:00"),
    (r"^[0-9a-f]{64}", "64 hexadecimal digits are expected"),
    (r"[01][0-9]|2[0-3]", "a time of day is expected, such as 09:30"),
    (r"(0\.(?!", "a share above 0 and up to 1 is expected, such as 0.90"),
    (r"^[0-9](", "a percentage below 10 is expected, such as 0.5"),
    (r"(\.[0-9]", "a decimal number as text is expected, such as 72.5"),
    (r"\u2028", "one line of text is expected, without control characters"),
    (r"[^\x00-\x08", "text without control characters is expected"),
)


def shape_refusal(
    error: msgspec.ValidationError,
    before: str = "",
    choices_at: Callable[[str], Sequence[str]] = lambda _: (),
) -> InputError:
    """Return the refusal that says which field does not fit and how to mend it.

    `before` stands before the field's path; `choices_at` tells what may be chosen at a path.
    """
    match = _PLACE.match(str(error))
    said, path = (match["said"], match["path"].lstrip(".")) if match else (str(error), "")
    if name := re.search(r"field `([^`]*)`$", said):
        path = f"{path}.{name[1]}" if path else name[1]
    field = ".".join(part for part in (before, path) if part)
    words = "; ".join(_words(said, choices_at(path)))
    return InputError(f"{field or 'the entry'}: {words}", field=field)


def _words(said: str, choices: Sequence[str]) -> Iterator[str]:
    if said.startswith("Object contains unknown"):
        yield "there is no field of this name; leave it out or mend its name"
    elif said.startswith("Object missing required"):
        yield "is needed; add it"
    elif said.startswith("Invalid enum value"):
        yield f"{said.removeprefix('Invalid enum value ')} can't be chosen here"
        yield f"use one of {', '.join(choices)}" if choices else "use one of those the documentation names"
    elif "RFC3339" in said:
        yield "this is no day of the calendar"
        yield "write it as 2026-10-03"
    else:
        yield _expected(said)
        yield "mend it and send it again"


def _expected(said: str) -> str:
    if "matching regex" in said:
        pattern = said.split("matching regex", 1)[1].replace("\\\\", "\\")
        return next((words for part, words in _FORMS if part in pattern), "it is not in the expected form")
    if said.endswith("of length >= 1"):
        return "it can't be empty"
    if size := re.fullmatch(r"Expected `(\w+)` of length (>=|<=) (\d+)", said):
        return f"{_BOUNDS[size[2]]} {size[3]} {'characters' if size[1] == 'str' else 'items'} are expected"
    if bound := re.fullmatch(r"Expected `\w+` (>=|<=) (-?\d+)", said):
        return f"{_BOUNDS[bound[1]]} {bound[2]} is expected"
    if both := re.fullmatch(r"Expected `([^`]*)`, got `([^`]*)`", said):
        return f"{_noun(both[1])} is expected, {_noun(both[2])} was found"
    return said


_BOUNDS: Mapping[str, str] = {">=": "at least", "<=": "at most"}


def _noun(types: str) -> str:
    """Return the JSON types in words; that a field may be absent goes without saying."""
    named = [one.strip() for one in types.split("|")]
    return " or ".join(_NOUNS.get(one, one) for one in named if one != "null" or len(named) == 1)
