"""What people type, understood: numbers with their units, durations, yes and no; never a silent guess."""

from __future__ import annotations

import re
import unicodedata
from typing import TypeVar

from fieldlog.errors import InputError
from fieldlog.units import Quantity

_Typed = TypeVar("_Typed", bound=Quantity)

# Spellings people use for the units of units.py.
_ALIASES = {
    "psi": "psi", "psig": "psi", "lb/in2": "psi", "lbf/in2": "psi", "lbs": "psi",
    "bar": "bar", "barg": "bar", "bars": "bar", "kpa": "kPa", "kpag": "kPa",
    "gpm": "gpm", "usgpm": "gpm", "gal/min": "gpm",
    "l/min": "L/min", "lpm": "L/min", "l/m": "L/min", "lit/min": "L/min",
    "ft": "ft", "feet": "ft", "foot": "ft", "'": "ft", "′": "ft", "m": "m", "metre": "m", "metres": "m",
    "meter": "m", "meters": "m", "in": "in", "in.": "in", "inch": "in", "inches": "in", '"': "in", "″": "in",
    "mm": "mm",
    "ft2": "ft2", "sqft": "ft2", "m2": "m2", "sqm": "m2",
    "gpm/ft2": "gpm/ft2", "mm/min": "mm/min",
    "gpm/psi^0.5": "gpm/psi^0.5", "l/min/bar^0.5": "L/min/bar^0.5",
    "f": "F", "°f": "F", "c": "C", "°c": "C",
}  # fmt: skip
_QUANTITY = re.compile(r"^(?P<number>[+-]?[0-9][0-9 .,]*|[+-]?[.,][0-9]+)\s*(?P<unit>[^0-9\s].*)?$")
_MINUS = str.maketrans({"\u2212": "-", "\u2012": "-", "\u2013": "-", "\u00ad": ""})
_YES = {"yes", "y", "true", "1", "x", "✓"}
_NO = {"no", "n", "false", "0"}
_CLOCK = re.compile(
    r"^(?:(?P<minutes>[0-9]{1,4})\s*(?::|min\.?|m|')\s*)?(?:(?P<seconds>[0-9]{1,5})\s*(?:s|sec\.?|\")?)?$"
)


def typed_quantity(text: str, quantity: type[_Typed], default_unit: str | None, field: str) -> _Typed:
    """Return the quantity a person typed, such as "72", "4,5 bar" or "72.0 psi"; a typed unit wins.

    Raises
    ------
    InputError
        If it is no number, could be two numbers ("1,200"), or has no unit or one of another quantity.
    """
    plain = _plain(text)
    match = _QUANTITY.match(plain)
    if match is None:
        raise InputError(f"{field}: {text.strip()!r} is not a number; write it as 72.5 or with its unit", field=field)
    unit = _unit(match["unit"], quantity, default_unit, field)
    return quantity(value=typed_decimal(match["number"], field), unit=unit)


def typed_decimal(text: str, field: str) -> str:
    """Return the plain decimal text of a typed number; a comma is a decimal comma.

    Raises
    ------
    InputError
        If it is no number, or a comma before three digits could be of thousands.
    """
    number = _grouped(_plain(text), field).removeprefix("+")
    if number.count(",") + number.count(".") > 1:
        raise InputError(f"{field}: {text.strip()!r} has two decimal marks; write it as 1200.5", field=field)
    if re.fullmatch(r"-?[1-9][0-9]{0,2},[0-9]{3}", number):
        raise InputError(
            f"{field}: {text.strip()!r} could be {number.replace(',', '')} or {number.replace(',', '.')}; "
            "write it without the comma or with a point",
            field=field,
        )
    return _tidy(number.replace(",", "."), text, field)


def typed_yes_no(text: str, field: str) -> bool:
    """Return whether yes or no was typed.

    Raises
    ------
    InputError
        If it was neither.
    """
    said = _plain(text).casefold()
    if said in _YES | _NO:
        return said in _YES
    raise InputError(f"{field}: {text.strip()!r} is neither yes nor no; write yes or no", field=field)


def typed_seconds(text: str, field: str) -> int:
    """Return the seconds of a typed duration such as "6", "6 s", "1:10" or "1 min 10 s".

    Raises
    ------
    InputError
        If it is no duration of whole seconds.
    """
    match = _CLOCK.match(_plain(text).casefold())
    if match is None or not (match["minutes"] or match["seconds"]):
        raise InputError(f"{field}: {text.strip()!r} is no duration; write seconds, or 1:10", field=field)
    if match["minutes"] and int(match["seconds"] or 0) > 59:
        raise InputError(f"{field}: {text.strip()!r} has more than 59 seconds beside minutes; write 1:10", field=field)
    return 60 * int(match["minutes"] or 0) + int(match["seconds"] or 0)


def _plain(text: str) -> str:
    """Return the text with other scripts' digits, spaces and minus signs as the plain ones."""
    folded = "".join(
        str(unicodedata.decimal(char)) if char.isdecimal() else " " if char.isspace() else char for char in text
    )
    return folded.translate(_MINUS).strip()


def _grouped(number: str, field: str) -> str:
    """Return the number without the spaces that group its thousands."""
    number = number.strip()
    if " " not in number:
        return number
    if re.fullmatch(r"[+-]?[0-9]{1,3}( [0-9]{3})+([.,][0-9]+)?", number):
        return number.replace(" ", "")
    raise InputError(f"{field}: {number!r} has a space inside; write one number", field=field)


def _tidy(number: str, text: str, field: str) -> str:
    match = re.fullmatch(r"(-?)(?:0*(?=[0-9]))?([0-9]{1,9})?(?:\.([0-9]{0,9}))?", number)
    if match is None or (match[2] is None and not match[3]):
        raise InputError(f"{field}: {text.strip()!r} is not a number of usual size; write it as 72.5", field=field)
    whole = match[2] or "0"
    return f"{match[1]}{whole}.{match[3]}" if match[3] else f"{match[1]}{whole}"


def _unit(typed: str | None, quantity: type[Quantity], default: str | None, field: str) -> str:
    known = quantity.units()
    if typed is None:
        if default is None:
            raise InputError(f"{field}: no unit; add one of {', '.join(known)}", field=field)
        return default
    squeezed = typed.replace(" ", "").replace("²", "2").casefold()
    unit = _ALIASES.get(squeezed)
    if unit not in known:
        raise InputError(
            f"{field}: {typed.strip()!r} is no unit of {quantity.noun}; use one of {', '.join(known)}", field=field
        )
    return unit
