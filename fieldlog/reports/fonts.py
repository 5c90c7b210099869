"""The two typefaces of reports, set up before anything of reportlab reads its defaults; what they can print."""

from __future__ import annotations

import unicodedata
from importlib.resources import files
from io import BytesIO

from reportlab import rl_config
from reportlab.pdfbase.pdfmetrics import registerFont, registerFontFamily
from reportlab.pdfbase.ttfonts import TTFont

REGULAR = "FieldlogSans"
BOLD = "FieldlogSans-Bold"

# Printed where the typeface has no glyph, so that a lost character is seen.
MISSING = "□"


def _register(name: str, file: str) -> TTFont:
    font = TTFont(name, BytesIO((files("fieldlog.reports") / "fonts" / file).read_bytes()))
    registerFont(font)
    return font


def _set_up() -> TTFont:
    regular = _register(REGULAR, "DejaVuSansCondensed.ttf")
    _register(BOLD, "DejaVuSansCondensed-Bold.ttf")
    registerFontFamily(REGULAR, normal=REGULAR, bold=BOLD, italic=REGULAR, boldItalic=BOLD)
    # Read by reportlab when its style modules are first imported: a later setting would leave a Helvetica that
    # is not embedded in every file. Equal input has to give equal bytes, so that a report can be made again.
    rl_config.canvas_basefontname = REGULAR
    rl_config.defaultGraphicsFontName = REGULAR
    rl_config.invariant = 1
    rl_config.useA85 = 0
    return regular


_GLYPHS = frozenset(_set_up().face.charToGlyph)


def printable(text: str) -> str:
    """Return `text` with every character the typefaces can't draw replaced by a box; line breaks stay."""
    normal = unicodedata.normalize("NFC", text)
    if normal.isascii() and normal.isprintable():
        return normal
    return "".join(map(_printable_character, normal))


def _printable_character(character: str) -> str:
    if character == "\n" or (ord(character) in _GLYPHS and unicodedata.category(character) not in {"Cc", "Cf"}):
        return character
    if character in "\t\r":
        return " "
    # Joiners and direction marks have no ink of their own.
    return "" if unicodedata.category(character) == "Cf" else MISSING
