"""Each row of the table of what to look at (common practice), as readings."""

from __future__ import annotations

import tomllib
from importlib.resources import files

import pytest

from fieldlog.assessment.codes import CheckCode
from fieldlog.assessment.interpretation import Difference, checks_for
from tests.assessment.made import acceptance, drained, said

ROWS = tomllib.loads(files("fieldlog.assessment").joinpath("interpretation.toml").read_text("utf-8"))["row"]


def checks(*readings: str, return_s: float = 6.0) -> tuple[str, ...]:
    """What to look at after 80/65 at acceptance and these readings now: before, residual, after."""
    return said(acceptance("2020-04-12", "80", "65"), drained("2024-05-02", *readings, return_s=return_s)).checks  # type: ignore[arg-type]


@pytest.mark.parametrize(
    ("readings", "return_s", "first", "count"),
    [
        (("80", "65"), 6.0, None, 0),
        (("81", "58"), 6.0, "control_valves", 6),
        (("81", "58"), 90.0, "control_valves", 4),
        (("70", "56"), 6.0, "public_static", 7),
        (("70", "44"), 6.0, "public_static", 4),
        (("72", "66"), 6.0, "public_static", 3),
        (("90", "57"), 6.0, "trapped_pressure", 3),
        (("90", "65"), 6.0, "trapped_pressure", 3),
        (("90", "75"), 6.0, "supply_improved", 4),
        (("80", "76"), 6.0, "drain_not_open", 3),
        (("80", "4"), 6.0, "valve_closed", 5),
        (("80", "62", "66"), 6.0, "trapped_pressure", 2),
    ],
)  # fmt: skip
def test_each_row_names_where_to_look(
    readings: tuple[str, ...], return_s: float, first: str | None, count: int
) -> None:
    found = checks(*readings, return_s=return_s)
    assert (found[0] if found else None) == first
    assert len(found) >= count if first in {"valve_closed", "trapped_pressure"} else len(found) == count


def test_a_restriction_with_a_slow_return_is_looked_for_upstream() -> None:
    assert "dropped_gate" in checks("81", "58", return_s=90.0)
    assert "tuberculation" in checks("81", "58", return_s=6.0)


def test_no_return_at_all_is_a_closed_valve() -> None:
    stuck = drained("2024-05-02", "80", "40", None, did_not_recover=True)
    assert said(acceptance("2020-04-12", "80", "65"), stuck).checks[0] == "valve_closed"


def test_the_table_has_only_codes_that_wording_knows_and_uses_all_of_them() -> None:
    used = {code for row in ROWS for code in row["checks"]}
    assert used == {str(code) for code in CheckCode}


def test_every_row_is_reached_by_its_own_words() -> None:
    for row in ROWS:
        static = "same" if row["static"] == "any" else row["static"]
        words = Difference(static, row["residual"], row.get("by", "same"), row.get("return", "quick"))
        assert checks_for(words) == tuple(row["checks"]), row
