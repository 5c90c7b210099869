"""The main job from the command line, from an empty folder to a report that is verified."""

from __future__ import annotations

import json
import shutil
from pathlib import Path

import pytest
from click.testing import CliRunner, Result

from fieldlog.cli.main import main
from fieldlog.storage.connection import sqlite3

README = Path(__file__).resolve().parents[1] / "README.md"


def run(instance: Path, *words: str) -> Result:
    result = CliRunner().invoke(main, list(words), env={"FIELDLOG_INSTANCE": str(instance)})
    assert result.exception is None or isinstance(result.exception, SystemExit), result.exception
    assert "Traceback" not in result.output
    assert "\x1b[" not in result.output
    return result


@pytest.fixture(scope="module")
def made(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("main") / "demo"
    assert run(folder, "demo", "--once").exit_code == 0
    return folder


@pytest.fixture
def demo(made: Path, tmp_path: Path) -> Path:
    return Path(shutil.copytree(made, tmp_path / "demo"))


def report_of(demo: Path) -> Path:
    return next(path for path in (demo / "files").rglob("*") if path.is_file())


def test_a_report_is_made_and_verified_and_a_changed_one_is_not(demo: Path, tmp_path: Path) -> None:
    good = run(demo, "verify", str(report_of(demo)))
    assert good.exit_code == 0
    assert "seal: good" in good.output
    assert "records: equal to the log" in good.output
    pdf = bytearray(report_of(demo).read_bytes())
    pdf[len(pdf) // 3] ^= 4
    changed = tmp_path / "changed.pdf"
    changed.write_bytes(pdf)
    assert run(demo, "verify", str(changed)).exit_code == 1


def test_a_report_is_made_of_any_signed_visit_and_the_visits_are_listed(demo: Path, tmp_path: Path) -> None:
    listed = run(demo, "report").output.splitlines()
    assert any("report revision 1" in line for line in listed)
    visit = next(line for line in listed if "North Quay" in line).split()[0]
    made = run(demo, "report", visit, "--out", str(tmp_path / "out"))
    assert made.exit_code == 0, made.output
    (copy,) = (tmp_path / "out").iterdir()
    assert copy.name.startswith("North-Quay-Warehouse-")
    assert run(demo, "verify", str(copy)).exit_code == 0
    assert "report revision 1" in next(line for line in run(demo, "report").output.splitlines() if visit in line)
    assert run(demo, "report", "no-such-visit").exit_code == 4


def test_an_edited_entry_is_named_and_its_report_no_longer_agrees(demo: Path) -> None:
    assert run(demo, "check-log").exit_code == 0
    report = report_of(demo)
    connection = sqlite3.connect(demo / "fieldlog.sqlite")
    (sign_off,) = connection.execute("select sign_off from reports").fetchone()
    (text,) = connection.execute("select text from entries where uid = ?", (sign_off,)).fetchone()
    first = json.loads(text)["body"]["covers"][0]["uid"]
    (number,) = connection.execute("select number from entries where uid = ?", (first,)).fetchone()
    for (trigger,) in connection.execute("select name from sqlite_master where type = 'trigger'").fetchall():
        connection.execute(f"drop trigger {trigger}")
    connection.execute("update entries set text = replace(text, '\"psi\"', '\"bar\"') where number = ?", (number,))
    connection.commit()
    connection.close()
    checked = run(demo, "check-log")
    assert checked.exit_code == 1
    assert f"entry {number} " in checked.output
    assert run(demo, "verify", str(report)).exit_code == 1


def test_rebuild_gives_the_same_statements(demo: Path) -> None:
    before = json.loads(run(demo, "statement", "--json").output)
    assert run(demo, "rebuild").exit_code == 0
    assert json.loads(run(demo, "statement", "--json").output) == before
    assert len(before["statements"]) > 10


def test_a_backup_comes_back(demo: Path, tmp_path: Path) -> None:
    copy, again = tmp_path / "copy", tmp_path / "again"
    assert run(demo, "backup", str(copy), "--with-keys").exit_code == 0
    assert run(demo, "restore", str(copy)).exit_code == 4  # never over one that is there
    assert run(again, "restore", str(copy)).exit_code == 0
    assert run(again, "check-log").output == run(demo, "check-log").output
    assert run(again, "verify", str(report_of(again))).exit_code == 0


def test_the_readmes_files_go_in_and_adding_them_again_adds_nothing(tmp_path: Path) -> None:
    blocks = {name: README.read_text().split(f"```{name}\n")[1].split("```")[0] for name in ("jsonl", "csv")}
    for name, text in blocks.items():
        (tmp_path / f"past.{name}").write_text(text)
    assert run(tmp_path / "new", "init").exit_code == 0
    assert "5 added" in run(tmp_path / "new", "import", str(tmp_path / "past.jsonl")).output
    shown = run(tmp_path / "new", "import", "--dry-run", str(tmp_path / "past.csv"))
    assert "2 would be added" in shown.output
    assert "2 added" in run(tmp_path / "new", "import", str(tmp_path / "past.csv")).output
    for name in blocks:
        again = run(tmp_path / "new", "import", str(tmp_path / f"past.{name}"))
        assert again.exit_code == 0
        assert "0 added" in again.output
    assert "Harbour Cold Store" in run(tmp_path / "new", "statement", "--reasons").output


def test_bad_rows_are_named_and_the_others_kept(demo: Path, tmp_path: Path) -> None:
    rows = (
        "site,system,kind,performed_on,static_before (psi),residual (psi)\n"
        "Harbour Cold Store,Wet system 1,main_drain_test,2015-03-04,82,74\n"
        "Harbour Cold Store,Wet system 9,main_drain_test,2015-03-05,82,74\n"
        "Harbour Cold Store,Wet system 1,main_drain_test,2015-03-06,82,mud\n"
    )
    (tmp_path / "rows.csv").write_text(rows)
    taken = run(demo, "import", str(tmp_path / "rows.csv"), "--refused", str(tmp_path / "refused.csv"))
    assert taken.exit_code == 1
    assert "1 added" in taken.output
    listed = (tmp_path / "refused.csv").read_text().splitlines()
    assert [line.split(",")[:2] for line in listed[1:]] == [["3", "system"], ["4", "residual (psi)"]]


def test_people_come_in_once(demo: Path) -> None:
    words = ("person", "Technician C", "--role", "technician", "--login", "tc", "--site", "Harbour Cold Store")
    assert run(demo, *words).exit_code == 0
    assert run(demo, *words).exit_code == 4
    assert run(demo, *words[:-1], "Nowhere").exit_code == 4


@pytest.mark.parametrize("words", [("statement",), ("check-log",), ("report",), ("rebuild",), ("backup", "copy")])
def test_a_folder_without_an_instance_says_what_to_do(tmp_path: Path, words: tuple[str, ...]) -> None:
    result = run(tmp_path / "nothing", *words)
    assert result.exit_code == 3
    assert "fieldlog init" in result.output


def test_the_demo_refuses_a_folder_that_holds_a_log(demo: Path) -> None:
    before = run(demo, "check-log").output
    assert run(demo, "demo", "--once").exit_code == 4
    assert run(demo, "init", "--organisation", "Other").exit_code == 4
    assert run(demo, "check-log").output == before
