"""Delimited text is read whole, whatever its encoding, and one bad line spoils itself only."""

from __future__ import annotations

import io

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.exchange import delimited
from fieldlog.exchange.delimited import Row, RowReader, read_lines


def rows(data: bytes, delimiter: str = ",", width: int | None = None) -> list[Row]:
    _, lines = read_lines(io.BytesIO(data))
    return list(RowReader(lines, delimiter, width))


def cells(data: bytes, delimiter: str = ",") -> list[tuple[str, ...]]:
    return [tuple(cell.strip() for cell in row.cells) for row in rows(data, delimiter)]


TEXT = "site;Größe\nKühlhaus;3,5\n"
READ = [("site", "Größe"), ("Kühlhaus", "3,5")]


@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "utf-16-le", "utf-16-be", "cp1252"])
@pytest.mark.parametrize("line_end", ["\n", "\r\n", "\r"])
def test_the_encoding_and_the_line_ends_are_found(encoding: str, line_end: str) -> None:
    assert cells(TEXT.replace("\n", line_end).encode(encoding), ";") == READ


def test_windows_1252_is_said_aloud_for_the_lines_it_was_assumed_for() -> None:
    found = rows("a;b\nKühlhaus;3\n".encode("cp1252") + "Kühlhaus;4\n".encode(), ";")
    assert ["Windows-1252" in row.note for row in found] == [False, True, False]
    assert [row.cells[0] for row in found[1:]] == ["Kühlhaus", "Kühlhaus"]


def test_a_stream_that_cannot_be_wound_back_is_read_and_left_open() -> None:
    class Pipe(io.BytesIO):
        def seekable(self) -> bool:
            return False

        def seek(self, *args: int) -> int:
            raise OSError("not seekable")

    pipe = Pipe(b"a,b\n" * 30_000)
    _, lines = read_lines(pipe)
    assert sum(1 for _ in RowReader(lines, ",")) == 30_000
    del lines
    assert not pipe.closed


def test_a_quoted_cell_may_hold_delimiters_quotes_and_line_breaks() -> None:
    found = rows(b'a,"say ""open"", then\nwait",c\nd,e,f\n', width=3)
    assert [(row.line, row.cells) for row in found] == [
        (1, ("a", 'say "open", then\nwait', "c")),
        (3, ("d", "e", "f")),
    ]


@pytest.mark.parametrize(
    "data",
    [
        b'a,"b,c\nd,e,f\ng,h,i\n',
        b'a,b,"c\nd,e,2"\ng,h,i\n',
        b'a,"b"x,c\nd,e,f\ng,h,i\n',
        b'a,"b,c\nd,"e",f\ng,h,i\n',
    ],
)
def test_a_slip_with_a_quotation_mark_spoils_its_own_line_only(data: bytes) -> None:
    found = rows(data, width=3)
    assert [row.line for row in found] == [1, 2, 3]
    assert "quotation mark" in found[0].problem
    assert [row.problem for row in found[1:]] == ["", ""]


def test_inch_marks_inside_a_cell_are_text() -> None:
    assert cells(b'main drain 2",65,8"\n') == [('main drain 2"', "65", '8"')]


def test_lines_that_cannot_be_read_come_out_with_their_problem() -> None:
    found = rows(b"a,b\n\x81\x8d,c\nd\0,e\nf,g\n")
    assert [bool(row.problem) for row in found] == [False, True, True, False]
    assert "neither UTF-8 nor Windows-1252" in found[1].problem
    assert "NUL" in found[2].problem


def test_a_line_too_long_is_named_and_the_next_is_read(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(delimited, "LONGEST_LINE", 20)
    found = rows(b"a,b\n" + b"x" * 90 + b"\nc,d\n")
    assert [(row.line, bool(row.problem)) for row in found] == [(1, False), (2, True), (3, False)]


def test_blank_lines_are_passed_over_and_counted() -> None:
    assert [row.line for row in rows(b"a\n\n  \nb\n")] == [1, 4]


@given(st.binary(max_size=400), st.sampled_from(delimited.DELIMITERS), st.none() | st.integers(1, 6))
def test_no_bytes_give_a_traceback_and_lines_only_rise(data: bytes, delimiter: str, width: int | None) -> None:
    numbers = [row.line for row in rows(data, delimiter, width)]
    assert numbers == sorted(set(numbers))


@given(st.lists(st.sampled_from(['a,"b', 'c"', "d,e,f", '"', '"g,h"', ""]), max_size=30))
def test_every_line_belongs_to_a_row_whatever_the_quotation_marks(lines: list[str]) -> None:
    data = "".join(f"{line}\n" for line in lines).encode()
    found = rows(data, width=3)
    kept = sum(1 if row.problem else 1 + row_breaks(row) for row in found)
    assert kept + lines.count("") >= len(lines)


def row_breaks(row: Row) -> int:
    return sum(cell.count("\n") for cell in row.cells)
