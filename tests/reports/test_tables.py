"""Tables: widths that sum up, rows that can break, nothing lost of a long text."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.reports import content
from fieldlog.reports.facts import fact_grid
from fieldlog.reports.styles import CELL, paragraph
from fieldlog.reports.tables import pieces, table


@given(st.text(st.sampled_from("ab \n"), max_size=4000), st.floats(20, 400))
def test_pieces_of_a_text_lose_nothing_but_spaces(text: str, room: float) -> None:
    found = pieces(text, room)
    assert "".join(found).replace(" ", "") == text.replace(" ", "")


@pytest.mark.parametrize(
    "text", ["word " * 4000, "x" * 20000, "line\n" * 900, "word " * 900 + "y" * 9000 + "\nline" * 200]
)
@pytest.mark.parametrize("room", [30.0, 160.0, 480.0])
def test_no_piece_is_taller_than_a_page(text: str, room: float) -> None:
    for piece in pieces(text, room):
        assert paragraph(piece, CELL).wrap(room, 1e6)[1] <= 660.0


COLUMNS = st.lists(
    st.builds(content.Column, st.text(max_size=30), st.text(max_size=8), st.booleans()), min_size=1, max_size=9
)


@given(COLUMNS, st.lists(st.lists(st.text(max_size=120), max_size=10).map(tuple), max_size=6))
def test_columns_fill_the_width_exactly(columns: list[content.Column], rows: list[tuple[str, ...]]) -> None:
    made = table(content.Table("T", tuple(columns), tuple(rows)), 493.0)
    assert sum(made._colWidths) == pytest.approx(493.0)
    assert min(made._colWidths) > 8


def test_short_facts_stand_two_abreast_and_long_ones_alone() -> None:
    rows = [
        content.Row("a", "short"),
        content.Row("b", "short", "psi"),
        content.Row("c", "word " * 60),
        content.Row("d", "last"),
    ]
    (grid, _) = fact_grid(rows, 493.0)
    first, second, third = grid._cellvalues
    assert [first[0], first[2]] == ["a", "b"]
    assert second[2:] == ["", ""]
    assert third == ["d", "last", "", ""]
