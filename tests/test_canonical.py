"""Only what has one text in every language gets one."""

from __future__ import annotations

import json

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.canonical import canonical_text, sha256_hex
from fieldlog.errors import InputError

plain = st.recursive(
    st.booleans() | st.integers(-(2**53) + 1, 2**53 - 1) | st.text(st.characters(exclude_categories=["Cs"])),
    lambda inner: (
        st.lists(inner, max_size=4)
        | st.dictionaries(st.text(st.characters(max_codepoint=126, min_codepoint=32), max_size=6), inner, max_size=4)
    ),
    max_leaves=20,
)


@given(plain)
def test_reading_the_text_and_writing_it_again_changes_nothing(value: object) -> None:
    text = canonical_text(value)
    assert canonical_text(json.loads(text)) == text


@given(st.dictionaries(st.sampled_from("abcdefgh"), st.integers(-99, 99)))
def test_order_of_keys_changes_nothing(value: dict[str, int]) -> None:
    assert canonical_text(dict(reversed(value.items()))) == canonical_text(value)


def test_composed_and_decomposed_letters_have_one_text() -> None:
    assert canonical_text("Ku\u0308hlhaus") == canonical_text("K\u00fchlhaus") == '"K\u00fchlhaus"'


@pytest.mark.parametrize(
    ("value", "field"),
    [
        ({"body": {"residual": 54.5}}, "body.residual"),
        ({"reason": None}, "reason"),
        ({"points": [3, {"x": float("nan")}]}, "points[1].x"),
        ({"note": "half \ud800"}, "note"),
        ({"count": 2**53}, "count"),
        ({"m\u00fcll": 3}, ""),
    ],
)
def test_what_has_no_one_text_is_refused_by_name(value: object, field: str) -> None:
    with pytest.raises(InputError) as refused:
        canonical_text(value)
    assert refused.value.field == field


def test_digest_of_a_published_vector() -> None:
    # FIPS 180-4 example: SHA-256 of "abc".
    assert sha256_hex("abc") == "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"
