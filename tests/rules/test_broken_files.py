"""A rules file that is not as it must be is refused with its name and the row."""

from __future__ import annotations

from pathlib import Path

import pytest

from fieldlog.errors import ConfigError, NotFoundError
from fieldlog.rules.loader import catalogues, load

SHARED = """
[catalogue]
id = "shared"
title = "Shared rows"
standard = "Invented 7"

[[row]]
id = "valve.look"
item = "Valve looked at"
activity = "inspection"

[[row]]
id = "sign.look"
item = "Sign looked at"
activity = "inspection"
mark = "read"
source = "invented"
clause = "Invented 7 (2031) 4.2"
"""
EDITION = """
[catalogue]
id = "seven"
title = "Invented standard"
standard = "Invented 7"
edition = "2031"
based_on = "shared"

[intervals]
quarter = {every = 3, unit = "month", anchor = "baseline", least = 2, most = 4, gap_unit = "month", mark = "read" }

[cell]
"valve.look" = { every = "quarter", mark = "read", source = "invented", clause = "Invented 7 (2031) 5.6" }
"""


def folder_with(tmp_path: Path, edition: str, shared: str = SHARED) -> Path:
    (tmp_path / "shared.toml").write_text(shared)
    (tmp_path / "seven.toml").write_text(edition)
    return tmp_path


def refusal(tmp_path: Path, edition: str, shared: str = SHARED) -> str:
    with pytest.raises(ConfigError) as caught:
        load("seven", folder_with(tmp_path, edition, shared))
    return caught.value.message


def test_the_invented_edition_loads_as_written(tmp_path: Path) -> None:
    folder = folder_with(tmp_path, EDITION)
    assert catalogues(folder) == ["seven"]
    assert load("seven", folder).row_ids() == ("valve.look", "sign.look")


def test_an_unknown_key_in_a_cell_is_refused_with_file_and_row(tmp_path: Path) -> None:
    said = refusal(tmp_path, EDITION.replace('clause = "Inv', 'colour = "Inv'))
    assert "seven.toml" in said
    assert "valve.look" in said
    assert "colour" in said


def test_an_unknown_key_in_a_shared_row_is_refused_with_the_row(tmp_path: Path) -> None:
    said = refusal(tmp_path, EDITION, SHARED.replace('item = "Sign', 'colour = "x"\nitem = "Sign'))
    assert "sign.look" in said
    assert "colour" in said


def test_an_unknown_table_is_refused_with_the_file(tmp_path: Path) -> None:
    assert "seven.toml" in refusal(tmp_path, EDITION + "\n[extra]\nx = 7\n")


def test_an_interval_nobody_defined_is_refused(tmp_path: Path) -> None:
    said = refusal(tmp_path, EDITION.replace('every = "quarter"', 'every = "fortnight"'))
    assert "valve.look" in said
    assert "fortnight" in said


def test_a_shared_row_without_a_cell_is_refused_and_an_absent_one_is_not(tmp_path: Path) -> None:
    head, _, _ = EDITION.partition('"valve.look"')
    assert "valve.look" in refusal(tmp_path, head)
    without = load("seven", folder_with(tmp_path, head + '"valve.look" = { absent = "not in this edition" }\n'))
    assert without.row_ids() == ("sign.look",)


def test_a_cell_without_a_row_is_refused(tmp_path: Path) -> None:
    assert "pump.look" in refusal(tmp_path, EDITION + '"pump.look" = { mark = "from memory" }\n')


def test_a_shipped_row_that_calls_itself_approved_is_refused(tmp_path: Path) -> None:
    said = refusal(tmp_path, EDITION.replace('mark = "read", source', 'mark = "approved", source'))
    assert "valve.look" in said


def test_a_percent_given_as_a_binary_number_is_refused(tmp_path: Path) -> None:
    criteria = 'criteria = [{ kind = "compare_accuracy", percent_of_full_scale = 1.5 }], clause = "Inv'
    assert "valve.look" in refusal(tmp_path, EDITION.replace('clause = "Inv', criteria))


def test_an_interval_outside_its_own_gaps_is_refused(tmp_path: Path) -> None:
    assert "within its gaps" in refusal(tmp_path, EDITION.replace("least = 2", "least = 4"))


def test_a_value_said_to_be_unread_must_exist(tmp_path: Path) -> None:
    said = refusal(tmp_path, EDITION.replace('clause = "Inv', 'from_memory = ["criteria.0"], clause = "Inv'))
    assert "criteria.0" in said


def test_a_file_based_on_itself_is_refused(tmp_path: Path) -> None:
    assert "itself" in refusal(tmp_path, EDITION.replace('based_on = "shared"', 'based_on = "seven"'))


def test_a_file_that_calls_itself_otherwise_is_refused(tmp_path: Path) -> None:
    assert "sixteen" in refusal(tmp_path, EDITION.replace('id = "seven"', 'id = "sixteen"'))


def test_a_row_defined_again_is_refused(tmp_path: Path) -> None:
    again = EDITION + '\n[[row]]\nid = "sign.look"\nitem = "Sign"\nactivity = "inspection"\n'
    assert "sign.look" in refusal(tmp_path, again)


def test_rows_for_other_files_are_no_catalogue(tmp_path: Path) -> None:
    with pytest.raises(ConfigError, match="shared"):
        load("shared", folder_with(tmp_path, EDITION))


def test_an_unknown_catalogue_is_named_with_those_there_are() -> None:
    with pytest.raises(NotFoundError, match="us_inspection_2017"):
        load("us_inspection_1066")


def test_what_an_edition_takes_over_loses_the_clause_of_the_other(tmp_path: Path) -> None:
    folder = folder_with(tmp_path, EDITION)
    newer = EDITION.partition("[intervals]")[0].replace("2031", "2035").replace('"shared"', '"seven"')
    (folder / "eight.toml").write_text(newer.replace('id = "seven"', 'id = "eight"'))
    assert load("eight", folder).rule("valve.look").clause is None
    assert load("seven", folder).rule("valve.look").clause == "Invented 7 (2031) 5.6"
