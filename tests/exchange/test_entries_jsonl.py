"""Entries as JSON Lines: what is written comes back, and a bad line never holds up a good one."""

from __future__ import annotations

import io
import json

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.exchange import entries_jsonl
from fieldlog.exchange.entries_jsonl import LineRefusal, read_entries, write_entries
from fieldlog.records.entries import Arrival


def read(data: bytes) -> list[tuple[int, Arrival | LineRefusal]]:
    return list(read_entries(io.BytesIO(data)))


def only(data: bytes) -> Arrival | LineRefusal:
    ((_, found),) = read(data)
    return found


arrivals = st.builds(
    Arrival,
    st.text(st.characters(exclude_categories=["Cs"]), min_size=2, max_size=40),
    st.none() | st.text(st.characters(exclude_categories=["Cs"]), min_size=2, max_size=20),
)


@given(st.lists(arrivals, max_size=7))
def test_what_is_written_comes_back_line_by_line(written: list[Arrival]) -> None:
    out = io.BytesIO()
    assert write_entries(written, out) == len(written)
    assert read(out.getvalue()) == list(enumerate(written, start=1))


@given(st.binary(max_size=300))
def test_no_bytes_give_a_traceback(data: bytes) -> None:
    for line, found in read(data):
        assert line >= 1
        if isinstance(found, LineRefusal):
            assert found.line == line
            assert found.message


@given(st.recursive(st.none() | st.booleans() | st.integers() | st.floats() | st.text(), st.lists, max_leaves=6))
def test_no_json_value_but_an_object_with_a_text_is_an_entry(value: object) -> None:
    assert isinstance(only(json.dumps(value).encode()), LineRefusal)
    assert isinstance(only(json.dumps({"signature": value}).encode()), LineRefusal)


def test_a_bad_line_is_named_and_the_good_ones_around_it_are_kept() -> None:
    found = read(b'{"text":"first"}\n\n{"text":\n{"text":"fourth","signature":"MEQ"}\n')
    assert [line for line, _ in found] == [1, 3, 4]
    assert found[0][1] == Arrival("first")
    assert isinstance(found[1][1], LineRefusal)
    assert found[2][1] == Arrival("fourth", "MEQ")


@pytest.mark.parametrize(
    ("line", "field", "says"),
    [
        (b'{"text":"\xff"}', "", "not UTF-8"),
        (b'["text"]', "", "no object"),
        (b'{"text":{"uid":"x"}}', "text", "JSON string"),
        (b'{"text":""}', "text", "not empty"),
        (b'{"uid":"x"}', "uid", "goes into text"),
        (b'{"text":"a","text":"b"}', "", "twice"),
        (b'{"text":"\\ud800"}', "text", "surrogate"),
        (b'{"text":"a","signature":null}', "signature", "no such field"),
        (b"[" * 100_000, "", "nested"),
        (b'{"text":' + b"9" * 5000 + b"}", "", "not JSON"),
    ],
)
def test_each_refusal_names_field_and_mend(line: bytes, field: str, says: str) -> None:
    found = only(line)
    assert isinstance(found, LineRefusal)
    assert found.field == field
    assert says in found.message


def test_a_line_too_long_is_refused_and_the_next_is_read(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    monkeypatch.setattr(entries_jsonl, "LONGEST_LINE", 30)
    found = read(b'{"text":"' + b"x" * 200 + b'"}\n{"text":"next"}\n')
    assert isinstance(found[0][1], LineRefusal)
    assert "longer than 30" in found[0][1].message
    assert found[1] == (2, Arrival("next"))


def test_a_byte_order_mark_and_windows_line_ends_are_no_hindrance() -> None:
    assert read(b'\xef\xbb\xbf{"text":"first"}\r\n{"text":"second"}\r\n') == [
        (1, Arrival("first")),
        (2, Arrival("second")),
    ]
