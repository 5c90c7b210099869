"""Refusals go out as a table that no spreadsheet runs."""

from __future__ import annotations

import csv
import io

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.exchange.entries_jsonl import LineRefusal
from fieldlog.exchange.refusal_csv import plain_cell, write_refusals


@pytest.mark.parametrize("cell", ["=1+1", "+44", "-2", "@SUM(A1)", "\t=1", "\r=1", " =cmd|'/c calc'!A0", "＝1"])
def test_what_a_spreadsheet_would_run_gets_an_apostrophe(cell: str) -> None:
    assert plain_cell(cell).startswith("'")


@pytest.mark.parametrize("cell", ["residual (psi)", "65,5 psi - read twice", "", "'=1"])
def test_plain_text_stays_as_it_is(cell: str) -> None:
    assert plain_cell(cell) == cell


@given(st.lists(st.builds(LineRefusal, st.integers(2, 99), st.text(max_size=9), st.text(max_size=30)), max_size=5))
def test_every_refusal_is_one_row_whatever_its_text(refusals: list[LineRefusal]) -> None:
    out = io.StringIO(newline="")
    assert write_refusals(refusals, out) == len(refusals)
    rows = list(csv.reader(io.StringIO(out.getvalue(), newline="")))
    assert rows[0] == ["line", "field", "message"]
    assert [row[0] for row in rows[1:]] == [str(refusal.line) for refusal in refusals]
    assert [row[2] for row in rows[1:]] == [plain_cell(refusal.message) for refusal in refusals]
