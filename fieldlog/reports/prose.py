"""Paragraphs of plain text: broken into lines, split over pages, never read as markup.

reportlab's own paragraphs parse what they are given as a kind of XML, and measure it anew each time they are asked.
A report is typed by many hands and holds a hundred paragraphs, so it has its own: what is typed is what is drawn,
and it costs a third.
"""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from functools import lru_cache

from fieldlog.reports import fonts  # first: it sets reportlab's defaults  # isort: skip
from reportlab.lib.colors import Color
from reportlab.pdfbase.pdfmetrics import stringWidth
from reportlab.pdfgen.canvas import Canvas
from reportlab.platypus.flowables import Flowable

# A number stays on one line with its unit, a day with its month.
_BELONGS_TO_NUMBER = re.compile(
    r"(?<=\d) (?=(?:psi|bar|kPa|gpm|L/min|ft|m|in\.|mm|s|min|h|%|°[FC]|years?"
    r"|Jan|Feb|Mar|Apr|May|Jun|Jul|Aug|Sep|Oct|Nov|Dec)\w*)"
)
_TOGETHER = "\u00a0"


@dataclass(frozen=True, slots=True)
class Style:
    """How a paragraph looks; sizes and spaces in points."""

    size: float
    paint: Color
    font: str = fonts.REGULAR
    before: float = 0.0
    after: float = 0.0
    left: float = 0.0
    right: float = 0.0
    is_right: bool = False
    keeps_with_next: bool = False

    @property
    def leading(self) -> float:
        """From one baseline to the next."""
        return self.size * 1.36


@dataclass(frozen=True, slots=True)
class Span:
    """A run of text in one typeface and ink."""

    text: str
    font: str
    paint: Color


# One line: what is drawn, span by span, and how wide all of it is.
Line = tuple[tuple[Span, ...], float]


class Prose(Flowable):
    """A paragraph of spans; `bullet` hangs left of its first line."""

    def __init__(self, spans: Sequence[Span], style: Style, bullet: str = "") -> None:
        super().__init__()
        self.spans, self.style, self.bullet = tuple(spans), style, bullet
        self.spaceBefore, self.spaceAfter = style.before, style.after
        self.keepWithNext = int(style.keeps_with_next)
        self._lines: tuple[Line, ...] = ()
        self._broken_for = -1.0

    def wrap(self, aW: float, aH: float) -> tuple[float, float]:  # noqa: ARG002, N803  reportlab's names
        """Return the width offered and the height it takes."""
        if self._broken_for != aW:
            room = max(aW - self.style.left - self.style.right, 1.0)
            self._lines = tuple(_broken(self.spans, room, self.style.size))
            self._broken_for = aW
        self.width, self.height = aW, len(self._lines) * self.style.leading
        return aW, self.height

    def split(self, aW: float, aH: float) -> list[Flowable]:  # noqa: N803  reportlab's names
        """Return the lines that fit and the rest, never a line alone."""
        self.wrap(aW, aH)
        count = int(aH // self.style.leading)
        if count >= len(self._lines):
            return [self]
        count = min(count, len(self._lines) - 2)
        return [self._part(0, count), self._part(count, len(self._lines))] if count >= 2 else []

    def _part(self, start: int, end: int) -> Prose:
        part = Prose(self.spans, self.style, "" if start else self.bullet)
        part._lines, part._broken_for = self._lines[start:end], self._broken_for
        if start:
            part.spaceBefore = 0.0
        else:
            part.spaceAfter = 0.0
        return part

    def draw(self) -> None:
        """Put the lines on the canvas."""
        canvas: Canvas = self.canv
        style, y = self.style, self.height - self.style.size
        if self.bullet:
            canvas.setFont(style.font, style.size)
            canvas.setFillColor(style.paint)
            canvas.drawString(1.0, y, self.bullet)
        text = canvas.beginText()
        for spans, width in self._lines:
            text.setTextOrigin(self.width - style.right - width if style.is_right else style.left, y)
            for span in spans:
                text.setFont(span.font, style.size)
                text.setFillColor(span.paint)
                text.textOut(span.text)
            y -= style.leading
        canvas.drawText(text)


class Figure(Flowable):
    """A value drawn large with its unit beside it, on one line."""

    def __init__(self, value: Span, unit: Span, size: float, unit_size: float) -> None:
        super().__init__()
        self.value, self.unit, self.size, self.unit_size = value, unit, size, unit_size

    def wrap(self, aW: float, aH: float) -> tuple[float, float]:  # noqa: ARG002, N803  reportlab's names
        """Return the width offered and the height of the line."""
        self.width, self.height = aW, self.size * 1.36
        return self.width, self.height

    def draw(self) -> None:
        """Put value and unit on the canvas."""
        canvas: Canvas = self.canv
        y = self.height - self.size
        canvas.setFont(self.value.font, self.size)
        canvas.setFillColor(self.value.paint)
        canvas.drawString(0, y, self.value.text)
        canvas.setFont(self.unit.font, self.unit_size)
        canvas.setFillColor(self.unit.paint)
        canvas.drawString(width(self.value.text, self.value.font) * self.size + 4.0, y, self.unit.text)


@lru_cache(maxsize=8192)
def width(text: str, font: str) -> float:
    """Return how wide a printable text is at size 1."""
    return float(stringWidth(text, font, 1000.0)) / 1000.0


def kept_together(text: str) -> str:
    """Return a text whose numbers can't be parted from their units."""
    return _BELONGS_TO_NUMBER.sub(_TOGETHER, text)


def _broken(spans: Sequence[Span], room: float, size: float) -> Iterator[Line]:
    """Yield lines not wider than `room`; an empty text is one empty line."""
    line: list[Span] = []
    used = 0.0
    for word, is_break in _words(spans, room / size):
        wide = width(word.text, word.font) * size
        if is_break or (line and used + width(word.text.rstrip(" "), word.font) * size > room):
            yield _line(line, size)
            line, used = [], 0.0
        if word.text:
            line.append(word)
            used += wide
    yield _line(line, size)


def _words(spans: Sequence[Span], room: float) -> Iterator[tuple[Span, bool]]:
    """Yield words, each with the spaces after it, and whether a new line begins there by a typed break."""
    for span in spans:
        for place, typed in enumerate(kept_together(span.text).split("\n")):
            is_break = place > 0
            for word in re.findall(r" *[^ ]+ *|^ *$", typed):
                for piece in _pieces(word, span.font, room):
                    yield Span(piece, span.font, span.paint), is_break
                    is_break = False


def _pieces(word: str, font: str, room: float) -> Iterator[str]:
    """Yield a word, or the parts that a word too wide for a line has to be cut into."""
    if width(word.rstrip(" "), font) <= room:
        yield word
        return
    part, used = "", 0.0
    for character in word:
        wide = width(character, font)
        if part and used + wide > room:
            yield part
            part, used = "", 0.0
        part, used = part + character, used + wide
    yield part


def _line(words: Sequence[Span], size: float) -> Line:
    """Return words as a line, neighbours of one kind joined, no space at its end."""
    joined: list[Span] = []
    for word in words:
        if joined and (joined[-1].font, joined[-1].paint) == (word.font, word.paint):
            joined[-1] = Span(joined[-1].text + word.text, word.font, word.paint)
        else:
            joined.append(word)
    if joined:
        joined[-1] = Span(joined[-1].text.rstrip(" "), joined[-1].font, joined[-1].paint)
    return tuple(joined), sum(width(span.text, span.font) for span in joined) * size
