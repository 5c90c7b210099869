"""How wide a text is drawn, measured without a font at hand: a table of advance widths of DejaVu Sans Condensed.

On a page the reader's own typeface may be a little narrower or wider; labels keep a distance for that.
"""

from __future__ import annotations

import json
from functools import cache
from importlib.resources import files

# Of a character the table does not hold; no letter of the scripts in it is wider than its capital W.
_OTHER_EM = 1.0
# More than any label of a chart shows.
_MOST_CHARACTERS = 300


@cache
def _widths_em(face: str) -> dict[str, float]:
    table = json.loads((files("fieldlog.charts") / "glyph_widths.json").read_text())
    return {
        chr(start + place): width / table["units_per_em"]
        for start, widths in table[face]
        for place, width in enumerate(widths)
        if width
    }


def text_width(text: str, size: float, *, is_bold: bool = False) -> float:
    """Return the width of `text` at `size`, in the unit of `size`."""
    widths = _widths_em("bold" if is_bold else "regular")
    return size * sum(widths.get(character, _OTHER_EM) for character in text)


def wrapped(text: str, size: float, width: float, *, most_lines: int = 2, is_bold: bool = False) -> tuple[str, ...]:
    """Return `text` in lines not wider than `width`; what is too long ends in an ellipsis."""
    lines: list[str] = []
    for word in text[:_MOST_CHARACTERS].split():
        longer = f"{lines[-1]} {word}" if lines else word
        if lines and text_width(longer, size, is_bold=is_bold) <= width:
            lines[-1] = longer
        else:
            lines.append(word)
    if len(lines) > most_lines:
        lines = [*lines[: most_lines - 1], " ".join(lines[most_lines - 1 :])]
    return tuple(_cut(line, size, width, is_bold=is_bold) for line in lines)


def _cut(line: str, size: float, width: float, *, is_bold: bool) -> str:
    if text_width(line, size, is_bold=is_bold) <= width:
        return line
    while line and text_width(line + "…", size, is_bold=is_bold) > width:
        line = line[:-1]
    return line.rstrip() + "…"
