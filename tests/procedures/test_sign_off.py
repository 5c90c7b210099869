"""A drawn signature is a path of whole segments, read in one go, and what is taken can be printed."""

from __future__ import annotations

import time
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.errors import InputError
from fieldlog.procedures.bodies import decode_body
from fieldlog.procedures.sign_off import LONGEST_STROKES
from fieldlog.reports.strokes import segments

SHA = "b2" * 32
ENTRY = "77777777-7777-4777-8777-777777777777"


def signed(strokes: str) -> dict[str, Any]:
    return {
        "covers": [{"uid": ENTRY, "sha256": SHA}], "summary": "Only the listed items were done.",
        "signers": [{"role": "technician", "name": "Technician A", "strokes": strokes}], "signed_on": "2026-10-03",
    }  # fmt: skip


def refused_field(strokes: str) -> str | None:
    try:
        decode_body("sign_off", signed(strokes))
    except InputError as refused:
        return refused.field
    return None


@pytest.mark.parametrize(
    "strokes",
    [
        "M 10 20 L 30 40",
        "M10,20L30-40",
        "M1.5 2 3 4 5 6",
        "M 9 9 C 1 2 3 4 5 6 7 8 9 10 11 12 L 5 6 ",
        "M 0 0M7 8\nL 2 3",
    ],
)
def test_paths_of_m_l_and_c_are_taken(strokes: str) -> None:
    assert refused_field(strokes) is None


@pytest.mark.parametrize(
    "strokes",
    [
        "L 10 20", "10 20", "M 10", "M 10 20 L", "M 10 20 C 1 2 3 4", "M 10 20 L 3", "M", "M 1 2 Z", "m 1 2",
        "M 1 2 H 3",
        "M 123456 2", "M 1.23456 2", "M 1e3 2", "M 1 2 L \u0661 3", "M 1 2 <script>", "M +1 2", "M .5 2", "M 1. 2",
        " , ", "M 10 20 L 3 4" + " 5 6" * LONGEST_STROKES,
    ],
)  # fmt: skip
def test_anything_else_is_refused_by_field(strokes: str) -> None:
    assert refused_field(strokes) == "body.signers[0].strokes"


def test_a_long_path_that_breaks_off_is_refused_at_once() -> None:
    began = time.perf_counter()
    for filling in ("1  ", " ", "1 , ", "1", "-"):
        assert refused_field("M " + filling * ((LONGEST_STROKES - 4) // len(filling)) + "x") is not None
    assert time.perf_counter() - began < 2


@given(
    st.lists(
        st.tuples(st.sampled_from("MLC"), st.lists(st.integers(-99999, 99999), min_size=1, max_size=12)),
        min_size=1,
        max_size=5,
    ),
    st.sampled_from([" ", ",", " , "]),
)
def test_what_is_taken_can_be_printed(parts: list[tuple[str, list[int]]], between: str) -> None:
    strokes = "".join(letter + between.join(map(str, numbers)) for letter, numbers in parts)
    if refused_field(strokes) is None:
        assert segments(strokes)


def test_an_entry_is_covered_once() -> None:
    body = signed("M 1 2") | {"covers": [{"uid": ENTRY, "sha256": SHA}] * 2}
    with pytest.raises(InputError, match="named twice"):
        decode_body("sign_off", body)
