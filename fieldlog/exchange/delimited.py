"""A delimited text file of unknown encoding and habits, read line by line into rows of cells.

Nothing is dropped: a line that can't be read comes out as a row with its problem, and an opening quotation mark
that is never closed spoils its own line only, not the good rows below it.
"""

from __future__ import annotations

import csv
import io
from collections import deque
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING, BinaryIO

if TYPE_CHECKING:
    from _typeshed import WriteableBuffer

LONGEST_LINE = 65_536  # characters; a row of readings has a few hundred
MOST_LINES_IN_A_ROW = 20  # a quoted cell may hold line breaks, but not a whole file
DELIMITERS = (",", ";", "\t", "|")
_HEAD_BYTES = 65_536
_NOT_UTF_8 = "read as Windows-1252, because it is not UTF-8: look at its accented letters"


@dataclass(frozen=True, slots=True)
class Line:
    """One physical line, from 1; `problem` says why it can't be read, `note` what was assumed."""

    number: int
    text: str
    problem: str = ""
    note: str = ""


@dataclass(frozen=True, slots=True)
class Row:
    """The cells of one row and the number of its first physical line."""

    line: int
    cells: tuple[str, ...]
    problem: str = ""
    note: str = ""


class _Rejoined(io.RawIOBase):
    """The bytes already looked at, then the rest of the stream, which is never closed from here."""

    def __init__(self, head: bytes, rest: BinaryIO) -> None:
        super().__init__()
        self._head = io.BytesIO(head)
        self._rest = rest

    def readable(self) -> bool:
        return True

    def readinto(self, buffer: WriteableBuffer) -> int:
        view = memoryview(buffer).cast("B")
        data = self._head.read(len(view)) or self._rest.read(len(view))
        view[: len(data)] = data
        return len(data)


def read_lines(stream: BinaryIO) -> tuple[str, Iterator[Line]]:
    """Return the name of the encoding found and the lines of `stream`, which stays open."""
    head = stream.read(_HEAD_BYTES)
    encoding = _encoding_of(head)
    raw = io.BufferedReader(_Rejoined(head, stream))
    if encoding == "utf-8":
        # Latin-1 keeps every byte; each line is then decoded by itself, so one bad byte spoils one line.
        return "UTF-8", _lines(io.TextIOWrapper(raw, encoding="latin-1", newline=None), _from_bytes)
    wide = io.TextIOWrapper(raw, encoding=encoding, errors="replace", newline=None)
    return encoding.upper(), _lines(wide, _from_wide)


def _encoding_of(head: bytes) -> str:
    if head.startswith((b"\xff\xfe", b"\xfe\xff")):
        return "utf-16"
    even, odd = head[0::2], head[1::2]
    if odd and 3 * odd.count(0) > len(odd):
        return "utf-16-le"
    if even and 3 * even.count(0) > len(even):
        return "utf-16-be"
    return "utf-8"


def _lines(text: io.TextIOWrapper, decoded: Callable[[int, str], Line]) -> Iterator[Line]:
    number = 0
    while piece := text.readline(LONGEST_LINE):
        number += 1
        if len(piece) < LONGEST_LINE or piece.endswith("\n"):
            yield decoded(number, piece)
            continue
        while piece and not piece.endswith("\n"):
            piece = text.readline(LONGEST_LINE)
        yield Line(number, "", problem=f"the line is longer than {LONGEST_LINE} characters; shorten it")


def _from_bytes(number: int, piece: str) -> Line:
    data = piece.encode("latin-1")
    try:
        return _checked(Line(number, data.decode("utf-8")))
    except UnicodeDecodeError:
        pass
    try:
        return _checked(Line(number, data.decode("cp1252"), note=_NOT_UTF_8))
    except UnicodeDecodeError as error:
        return Line(
            number,
            "",
            problem=f"byte {error.start + 1} of the line is text in neither UTF-8 nor Windows-1252; "
            "save the file as UTF-8",
        )


def _from_wide(number: int, piece: str) -> Line:
    if "\ufffd" in piece:
        return Line(number, "", problem="the line is not whole UTF-16 text; save the file as UTF-8")
    return _checked(Line(number, piece))


def _checked(line: Line) -> Line:
    text = line.text.removeprefix("\ufeff") if line.number == 1 else line.text
    if "\0" in text:
        return Line(line.number, "", problem="the line holds a NUL character; save the file as UTF-8 text")
    return line if text is line.text else Line(line.number, text, note=line.note)


class RowReader:
    """Rows of cells out of lines, `delimiter` between cells and quotation marks as in RFC 4180.

    A row goes on over a line break inside a quoted cell. Where the next line would itself be a row of
    `width` cells, the quotation mark is taken as a slip and the first line alone is given with its problem.
    """

    def __init__(self, lines: Iterator[Line], delimiter: str, width: int | None = None) -> None:
        self.width = width
        self._lines = lines
        self._delimiter = delimiter
        self._again: deque[Line] = deque()

    def __iter__(self) -> Iterator[Row]:
        while (line := self._next_line()) is not None:
            if line.problem:
                yield Row(line.number, (), problem=line.problem)
            elif line.text.strip():
                yield self._row(line)

    def _next_line(self) -> Line | None:
        return self._again.popleft() if self._again else next(self._lines, None)

    def _row(self, first: Line) -> Row:
        pulled: list[Line] = []
        try:
            cells = next(csv.reader(self._feed(first, pulled), delimiter=self._delimiter, strict=True))
        except (csv.Error, StopIteration):
            return self._slip(first, pulled)
        if pulled and self._has_swallowed_rows(cells, pulled):
            return self._slip(first, pulled)
        return Row(first.number, tuple(cells), note=first.note or next((p.note for p in pulled if p.note), ""))

    def _feed(self, first: Line, pulled: list[Line]) -> Iterator[str]:
        yield first.text
        while len(pulled) < MOST_LINES_IN_A_ROW:
            line = self._next_line()
            if line is None:
                return
            if line.problem:
                self._again.appendleft(line)
                return
            pulled.append(line)
            yield line.text

    def _slip(self, first: Line, pulled: list[Line]) -> Row:
        self._again.extendleft(reversed(pulled))
        return Row(
            first.number,
            (),
            problem='a quotation mark (") is opened and not closed, or stands in the middle of a quoted cell; '
            "close it, or write it twice where it is meant",
        )

    def _has_swallowed_rows(self, cells: list[str], pulled: list[Line]) -> bool:
        if self.width is None or self.width < 2:
            return False
        full = [line.text.count(self._delimiter) + 1 >= self.width for line in pulled]
        # The last line of a row whose first cell is the broken one is as wide as a row of its own.
        is_first_cell = "\n" in cells[0]
        return any(full[:-1]) or (full[-1] and not is_first_cell)
