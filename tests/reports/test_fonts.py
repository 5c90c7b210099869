"""The typefaces: what they can print, and what becomes of the rest."""

from __future__ import annotations

from importlib.resources import files

import pytest
from hypothesis import given
from hypothesis import strategies as st
from reportlab.pdfbase.pdfmetrics import stringWidth

from fieldlog.reports import fonts


@pytest.mark.parametrize("text", ["66 psi", "Größe, ½ in., 4,5 bar", "Ω Σ μ", "Проверка", "→ ≤ ≥ − × ·", "█ ▲ □ ☐ ✓"])
def test_the_trades_signs_and_most_names_print_as_typed(text: str) -> None:
    assert fonts.printable(text) == text


@pytest.mark.parametrize(("typed", "printed"), [
    ("a\x00b", "a□b"),
    ("bell\x07", "bell□"),
    ("火災", "□□"),
    ("gauge 🔥 7", "gauge □ 7"),
    ("right\u202eleft", "rightleft"),
    ("tab\there\r", "tab here "),
    ("e\u0301tage", "étage"),
    ("half \ud800 pair", "half □ pair"),
])  # fmt: skip
def test_a_character_without_a_glyph_is_seen_as_a_box(typed: str, printed: str) -> None:
    assert fonts.printable(typed) == printed


@given(st.text(st.characters()))
def test_whatever_was_typed_can_be_printed_after(text: str) -> None:
    printed = fonts.printable(text)
    assert fonts.printable(printed) == printed
    assert stringWidth(printed.replace("\n", ""), fonts.REGULAR, 9) >= 0


def test_figures_are_tabular_in_both_typefaces() -> None:
    for name in (fonts.REGULAR, fonts.BOLD):
        assert len({stringWidth(digit, name, 20) for digit in "0123456789"}) == 1


def test_the_licence_stands_beside_the_typefaces() -> None:
    text = (files("fieldlog.reports") / "fonts" / "LICENCE.txt").read_text()
    assert "Permission is hereby granted, free of charge" in text
