"""Readings of past years from a spreadsheet's CSV: one test a row, each row kept or refused aloud.

The format is written down in the README ("Readings of past years"). Nothing is guessed: a date that reads in two
ways, a number without a unit, a name not on file are refused with what to do, and the other rows go on.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from itertools import chain, islice
from typing import BinaryIO

from fieldlog.errors import InputError
from fieldlog.exchange.columns import KINDS, Found, kind_named, read_header
from fieldlog.exchange.delimited import DELIMITERS, Line, Row, RowReader, read_lines
from fieldlog.exchange.history_cells import Options
from fieldlog.exchange.history_rows import Refused, RowBuilder
from fieldlog.exchange.lookup import Lookup, Names
from fieldlog.records.entries import Arrival

_HEADER_WITHIN = 30  # lines; above it a spreadsheet may have titles


@dataclass(frozen=True, slots=True)
class RowRefusal:
    """Why a row was not taken: where, which column, and what to do."""

    line: int
    field: str
    message: str


@dataclass(frozen=True, slots=True)
class RowResult:
    """What one row becomes: an entry, one that is on file already, or refusals."""

    line: int
    uid: str = ""
    text: str = ""
    says: str = ""
    is_on_file: bool = False
    refusals: tuple[RowRefusal, ...] = ()
    notes: tuple[str, ...] = ()

    @property
    def arrival(self) -> Arrival:
        """The entry for intake; only where the row was not refused."""
        return Arrival(self.text)


@dataclass(frozen=True, slots=True)
class Layout:
    """How the file was read, to be shown before anything is kept."""

    encoding: str
    delimiter: str
    header_line: int
    columns: tuple[Found, ...]
    unknown: tuple[str, ...]
    width: int
    passed_over: tuple[str, ...] = ()  # lines above the header


class HistoryFile:
    """An opened file: its layout, and its rows once."""

    def __init__(self, layout: Layout, rows: Iterator[Row], options: Options) -> None:
        self.layout = layout
        self._rows = rows
        self._options = options

    def rows(self, names: Names, author: str, is_on_file: Callable[[str], bool] | None = None) -> Iterator[RowResult]:
        """Yield what each row becomes, in the order of the file; `is_on_file` is asked with each entry's uid."""
        options = self._options
        builder = RowBuilder(self.layout.columns, Lookup(names), author, options)
        for row in self._rows:
            result = self._result(row, builder)
            if result is not None:
                known = is_on_file is not None and bool(result.uid) and is_on_file(result.uid)
                yield _known(result) if known else result

    def _result(self, row: Row, builder: RowBuilder) -> RowResult | None:
        notes = (row.note,) if row.note else ()
        if row.problem:
            return RowResult(row.line, refusals=(RowRefusal(row.line, "", row.problem),), notes=notes)
        cells = row.cells
        if not any(cell.strip() for cell in cells):
            return None
        if any(cell.strip() for cell in cells[self.layout.width :]):
            return RowResult(row.line, refusals=(_too_wide(row, self.layout),), notes=notes)
        built = builder.build(cells)
        if isinstance(built, Refused):
            found = tuple(RowRefusal(row.line, field, message) for field, message in built.problems)
            return RowResult(row.line, refusals=found, notes=notes)
        return RowResult(row.line, built.uid, built.text, built.says, notes=notes + built.notes)


def open_history(stream: BinaryIO, options: Options | None = None) -> HistoryFile:
    """Return the file with its layout; `stream` stays open and is read on as the rows are.

    Raises
    ------
    InputError
        If no line names the columns, or two columns mean the same.
    """
    options = options or Options()
    encoding, lines = read_lines(stream)
    head = list(islice(lines, _HEADER_WITHIN))
    delimiter, header = _header(head, options)
    columns, unknown = read_header(header.cells)
    _require_enough(columns, options)
    above = tuple(line.text.strip() for line in head if line.number < header.line and line.text.strip())
    layout = Layout(encoding, delimiter, header.line, columns, unknown, len(header.cells), above)
    rows = RowReader(chain(head, lines), delimiter, len(header.cells))
    return HistoryFile(layout, (row for row in rows if row.line > header.line), options)


def read_rows(
    stream: BinaryIO,
    names: Names,
    author: str,
    options: Options | None = None,
    is_on_file: Callable[[str], bool] | None = None,
) -> Iterator[RowResult]:
    """Yield what each row of `stream` becomes.

    Raises
    ------
    InputError
        If no line names the columns.
    """
    return open_history(stream, options).rows(names, author, is_on_file)


def _known(result: RowResult) -> RowResult:
    return RowResult(result.line, result.uid, result.text, result.says, is_on_file=True, notes=result.notes)


def _too_wide(row: Row, layout: Layout) -> RowRefusal:
    hint = "; put a decimal comma in quotation marks, or write a point" if layout.delimiter == "," else ""
    return RowRefusal(
        row.line,
        "",
        f"the row has {len(row.cells)} cells and the header {layout.width}; put it right{hint}",
    )


def _header(head: Sequence[Line], options: Options) -> tuple[str, Row]:
    """Return the delimiter and the row that name the most columns."""
    best: tuple[int, str, Row] | None = None
    for delimiter in _delimiters(head, options):
        for row in RowReader(iter(head), delimiter):
            known = _known_columns(row)
            if known > 1 and (best is None or known > best[0]):
                best = (known, delimiter, row)
    if best is None:
        raise InputError(
            f"no line of the first {_HEADER_WITHIN} names the columns; give a header line such as "
            "site,system,kind,performed_on,static_before (psi),residual (psi)",
            field="header",
        )
    return best[1], best[2]


def _delimiters(head: Sequence[Line], options: Options) -> tuple[str, ...]:
    first = head[0].text.strip() if head else ""
    if options.delimiter:
        return (options.delimiter,)
    # Some spreadsheets write their delimiter into a first line of its own.
    return (first[4],) if len(first) == 5 and first.lower().startswith("sep=") else DELIMITERS


def _known_columns(row: Row) -> int:
    try:
        return len(read_header(row.cells)[0])
    except InputError:
        return sum(1 for cell in row.cells if read_header([cell])[0])


def _require_enough(columns: Sequence[Found], options: Options) -> None:
    known = {one.row_column for one in columns}
    if "performed_on" not in known:
        raise InputError("no column of the day of the test; name one performed_on or date", field="performed_on")
    if not known & {"system", "supply", "gauge"}:
        raise InputError("no column says which system; name one system, supply or gauge", field="system")
    if options.kind is not None:
        kind_named(options.kind)
    elif "kind" not in known:
        raise InputError(
            f"no column of the kind of test; name one kind, with {', '.join(KINDS)}, or say --kind for all rows",
            field="kind",
        )
