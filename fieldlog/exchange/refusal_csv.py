"""Refused rows as CSV, for the person who mends them in a spreadsheet."""

from __future__ import annotations

import csv
from collections.abc import Iterable
from typing import Protocol, TextIO

# A spreadsheet takes a cell that begins so for a formula (OWASP ASVS 5.0 1.2.10, CWE-1236).
_FORMULA_STARTS = ("=", "+", "-", "@", "\t", "\r", "\n", "\0", "＝", "＋", "－", "＠")


class RefusedLine(Protocol):
    """What is needed of a refusal: rows of CSV and lines of JSON have it."""

    @property
    def line(self) -> int:
        """Line of the file, from 1."""
        ...

    @property
    def field(self) -> str:
        """Column or field; empty when the whole line is meant."""
        ...

    @property
    def message(self) -> str:
        """What was found and the mend."""
        ...


def write_refusals(refusals: Iterable[RefusedLine], out: TextIO) -> int:
    """Write a table of line, field and message, and return the number of rows."""
    table = csv.writer(out, lineterminator="\r\n", quoting=csv.QUOTE_MINIMAL)
    table.writerow(("line", "field", "message"))
    count = 0
    for refusal in refusals:
        table.writerow((refusal.line, plain_cell(refusal.field), plain_cell(refusal.message)))
        count += 1
    return count


def plain_cell(text: str) -> str:
    """Return `text` as a spreadsheet keeps it: an apostrophe goes before what it would run as a formula."""
    printable = text.replace("\0", "\ufffd")
    return f"'{printable}" if text.lstrip(" \u00a0\ufeff").startswith(_FORMULA_STARTS) else printable
