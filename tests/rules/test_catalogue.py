"""The shipped catalogue: every file loads strictly, and every edition says what its column says, with its mark."""

from __future__ import annotations

import tomllib
from importlib import resources

import msgspec
import pytest

from fieldlog.canonical import canonical_text
from fieldlog.records.rules import Rule, is_required
from fieldlog.rules.loader import catalogues, load, local_examples

EVERY = {
    "day": (1, "day"), "W": (1, "week"), "M": (1, "month"), "Q": (3, "month"), "S": (6, "month"), "A": (1, "year"),
    "3Y": (3, "year"), "5Y": (5, "year"),
}  # fmt: skip
EDITIONS = ("1998", "2011", "2014", "2017", "2020", "2023")

# Inspection, testing and maintenance table of NFPA 25 by edition. R: that cell was read (NFPA 25:1998 2-2.4,
# 2-3.2, 9-2.6, 9-2.7 and Table 9-1; Errata 25-17-1 to the 2017 edition, Table 5.1.1.2; 13.2.5 of 2020 and others
# as quoted in secondary sources). Without R it is from memory. The table of 2023 was not read at all.
TABLE = """
gauge_reading.wet                | M R  | M    | Q R  | Q R
gauge_reading.air_not_supervised | W R  | W    | M R  | M R
gauge_reading.air_supervised     | W    | M    | Q R  | Q R
gauge_reading.deluge             | W R  | W    | Q R  | Q R
gauge_reading.standpipe          | W    | W    | Q    | Q
gauge_comparison.five_years      | 5Y R | 5Y R | 5Y   | 5Y R
main_drain.each                  | Q R  | A R  | A R  | A
main_drain.sole_feed             | -    | Q R  | Q    | Q
main_drain.standpipe             | A R  | A R  | A R  | A
valve.sealed                     | W R  | W    | W    | W
valve.locked                     | M R  | M    | M    | M
valve.supervised                 | M R  | M    | M    | Q
valve.full_travel                | A    | A    | A    | A
valve.supervisory_switch         | Q    | S    | S    | S
waterflow.mechanical             | Q R  | Q    | Q    | Q R
waterflow.vane_or_pressure       | Q R  | S    | S    | S R
waterflow.looked_at              | Q    | Q    | Q    | Q
alarm_valve.exterior             | M    | M    | M    | Q
alarm_valve.interior             | 5Y   | 5Y   | 5Y   | 5Y
dry.priming_and_low_air          | Q    | Q    | Q    | Q
dry.quick_opening                | Q    | Q    | Q    | Q
dry.partial_trip                 | A    | A    | A R  | A
dry.full_trip                    | 3Y   | 3Y R | 3Y R | 3Y
air.leakage                      | -    | 3Y R | 3Y   | 3Y R
dry.interior                     | A    | A    | A    | A
preaction_deluge.trip            | A    | A    | A    | A
heat.valve_room                  | W    | W    | W    | W
design_sign                      | Q    | Q    | A R  | A R
information_sign                 | -    | A    | A R  | A
sprinklers_and_piping            | A    | A    | A R  | A R
internal_piping                  | 5Y   | 5Y R | 5Y   | 5Y
check_valve.interior             | 5Y   | 5Y R | 5Y   | 5Y
prv.inspect                      | Q    | Q    | Q    | Q
prv.partial_flow                 | A    | A    | A    | A
prv.full_flow                    | 5Y   | 5Y   | 5Y   | 5Y
backflow.forward_flow            | A    | A    | A    | A R
fire_department_connection       | Q    | Q    | Q    | Q
standpipe.components             | M    | A    | A    | A R
standpipe.flow_test              | 5Y   | 5Y   | 5Y   | 5Y R
standpipe.hydrostatic            | 5Y   | 5Y   | 5Y   | 5Y R
private_main.flow_test           | 5Y   | 5Y R | 5Y   | 5Y
private_hydrant.flow             | A    | A R  | A    | A
"""


def table_cells() -> list[tuple[str, str, str]]:
    cells = []
    for line in TABLE.strip().splitlines():
        row, *columns = (part.strip() for part in line.split("|"))
        old, eleven, seventeen, twenty = columns
        by_edition = (old, eleven, eleven, seventeen, twenty, twenty.removesuffix(" R"))
        cells += [(row, edition, cell) for edition, cell in zip(EDITIONS, by_edition, strict=True)]
    return cells


def row_of(edition: str, row_id: str) -> Rule | None:
    rows = {rule.id: rule for rule in load(f"us_inspection_{edition}").rules}
    return rows.get(row_id)


@pytest.mark.parametrize(("row_id", "edition", "cell"), table_cells())
def test_every_cell_of_the_frequency_table_is_in_its_edition_with_its_mark(
    row_id: str, edition: str, cell: str
) -> None:
    rule = row_of(edition, row_id)
    if cell == "-":
        assert rule is None
        return
    word, _, read = cell.partition(" ")
    assert rule is not None
    assert rule.frequency is not None
    assert (rule.frequency.every, rule.frequency.unit) == EVERY[word]
    assert rule.mark == ("read" if read else "from memory")


def test_every_catalogue_file_loads_and_every_row_names_its_source() -> None:
    assert len(catalogues()) == 11
    for name in catalogues():
        rules = load(name).rules
        assert rules, name
        assert all(rule.source.strip() for rule in rules), name


def test_no_file_of_the_catalogue_is_left_unread() -> None:
    folder = resources.files("fieldlog.rules") / "catalogue"
    there = {path.name.removesuffix(".toml") for path in folder.iterdir()}
    assert there == {*catalogues(), "us_inspection_rows", "local_examples"}


@pytest.mark.parametrize("name", catalogues())
def test_no_shipped_row_is_required_of_anybody(name: str) -> None:
    assert not any(is_required(rule) for rule in load(name).rules)


@pytest.mark.parametrize("name", catalogues())
def test_a_catalogue_survives_canonical_text_and_its_sum_is_steady(name: str) -> None:
    catalogue = load(name)
    text = canonical_text(msgspec.to_builtins(catalogue.rules))
    assert msgspec.json.decode(text, type=tuple[Rule, ...]) == catalogue.rules
    assert load(name).sha256 == catalogue.sha256


def test_each_edition_has_its_own_sum() -> None:
    assert len({load(name).sha256 for name in catalogues()}) == len(catalogues())


def test_a_clause_names_its_standard_and_edition() -> None:
    for name in catalogues():
        for rule in load(name).rules:
            assert rule.clause is None or rule.clause.startswith(("NFPA ", "IFC (", "CEA 4001 (", "29 CFR ")), rule.id


@pytest.mark.parametrize("edition", EDITIONS)
def test_a_clause_of_the_inspection_standard_is_of_the_file_s_own_edition(edition: str) -> None:
    clauses = [rule.clause for rule in load(f"us_inspection_{edition}").rules if rule.clause is not None]
    own = [clause for clause in clauses if clause.startswith("NFPA 25 ")]
    assert all(clause.startswith(f"NFPA 25 ({edition})") for clause in own)


def test_the_2023_edition_is_from_memory_in_every_cell_taken_over() -> None:
    newest, before = load("us_inspection_2023"), load("us_inspection_2020")
    for rule in newest.rules:
        if rule != before.rule(rule.id):
            assert rule.mark == "from memory"
            assert rule.from_memory == ()
    assert newest.rule("gauge_reading.wet").frequency == before.rule("gauge_reading.wet").frequency


def test_a_read_row_names_which_of_its_values_were_not_read() -> None:
    # The quarter's gap of two to four months is from memory, the quarter itself was read in Errata 25-17-1.
    rule = load("us_inspection_2017").rule("gauge_reading.wet")
    assert rule.mark == "read"
    assert {"frequency.least", "frequency.most"} <= set(rule.from_memory)


def test_annual_means_nine_to_fifteen_months_from_the_2011_edition_on_and_has_no_gaps_in_1998() -> None:
    # NFPA 25 (2011), as quoted in a secondary source: not less than 9 and not more than 15 months apart.
    newer = load("us_inspection_2011").rule("main_drain.each").frequency
    older = load("us_inspection_1998").rule("dry.partial_trip").frequency
    assert newer is not None
    assert older is not None
    assert (newer.least, newer.most, newer.gap_unit) == (9, 15, "month")
    assert (older.least, older.most, older.gap_unit) == (None, None, None)


def test_a_local_example_names_rows_and_fields_that_exist_and_no_place() -> None:
    rows = {rule.id for name in catalogues() for rule in load(name).rules}
    for example in local_examples().values():
        assert {override.rule for override in example.overrides} <= rows
        assert all(override.reason for override in example.overrides)


def test_files_hold_no_decimal_numbers_that_binary_floats_would_bend() -> None:
    folder = resources.files("fieldlog.rules") / "catalogue"
    for path in folder.iterdir():
        assert_no_float(tomllib.loads(path.read_text(encoding="utf-8")))


def assert_no_float(value: object) -> None:
    assert not isinstance(value, float)
    if isinstance(value, dict):
        for item in value.values():
            assert_no_float(item)
    if isinstance(value, list):
        for item in value:
            assert_no_float(item)
