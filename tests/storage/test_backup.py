"""A backup is checked before it bears its name, and comes back as it was."""

from __future__ import annotations

import stat
from pathlib import Path

import pytest

from fieldlog.errors import BrokenLogError, ConflictError, ForeignFileError, NotFoundError, StorageError
from fieldlog.storage import backup, chain, log
from fieldlog.storage.backup import Backup
from fieldlog.storage.connection import Connection, connect
from tests.storage import made
from tests.storage.made import drain_test, take


@pytest.fixture
def target(tmp_path: Path) -> Path:
    (tmp_path / "safe").mkdir()
    return tmp_path / "safe" / "copy.sqlite"


@pytest.fixture
def filled(connection: Connection) -> Connection:
    take(connection, *(drain_test(number) for number in range(31, 90)))
    return connection


def test_a_backup_holds_all_and_is_one_file(filled: Connection, path: Path, target: Path) -> None:
    head = log.head(filled)
    assert backup.back_up(path, target) == Backup(target, head.number, head.link, target.stat().st_size)
    assert [each.name for each in target.parent.iterdir()] == ["copy.sqlite"]
    assert stat.S_IMODE(target.stat().st_mode) == 0o600
    assert backup.check_backup(target) == chain.CheckResult(head.number, head.link, None)
    assert [each.name for each in target.parent.iterdir()] == ["copy.sqlite"]


def test_a_backup_can_be_read_where_nothing_can_be_written(filled: Connection, path: Path, target: Path) -> None:
    backup.back_up(path, target)
    target.chmod(0o400)
    target.parent.chmod(0o500)
    try:
        assert backup.check_backup(target).fault is None
    finally:
        target.parent.chmod(0o700)


def test_restored_it_is_the_same_log_and_goes_on(filled: Connection, path: Path, target: Path, tmp_path: Path) -> None:
    before = made.dump(filled)
    backup.back_up(path, target)
    restored = tmp_path / "restored.sqlite"
    result = backup.restore(target, restored)
    assert (result.entries, result.head) == (log.head(filled).number, log.head(filled).link)
    connection = connect(restored)
    assert made.dump(connection) == before
    take(connection, drain_test(95))
    assert chain.check(connection, expected_head=result.head).fault is None
    connection.close()


def test_nothing_is_written_over(filled: Connection, path: Path, target: Path) -> None:
    backup.back_up(path, target)
    with pytest.raises(ConflictError, match="there already"):
        backup.back_up(path, target)
    with pytest.raises(ConflictError, match="there already"):
        backup.restore(target, path)


def test_a_folder_that_is_not_there(filled: Connection, path: Path, tmp_path: Path) -> None:
    with pytest.raises(NotFoundError, match="folder"):
        backup.back_up(path, tmp_path / "no" / "copy.sqlite")
    with pytest.raises(NotFoundError, match="no database"):
        backup.back_up(tmp_path / "no.sqlite", tmp_path / "copy.sqlite")
    assert not (tmp_path / "copy.sqlite.part").exists()


def test_a_broken_log_is_copied_under_another_name(filled: Connection, path: Path, target: Path) -> None:
    filled.execute("drop trigger entries_not_changed")
    filled.execute("update entries set text = replace(text, 'psi', 'bar') where number = 12")
    with pytest.raises(BrokenLogError, match="entry 12"):
        backup.back_up(path, target)
    assert [each.name for each in target.parent.iterdir()] == ["copy.sqlite.unsound"]
    with pytest.raises(BrokenLogError, match="can't be restored: entry 12"):
        backup.restore(target.with_name("copy.sqlite.unsound"), target)
    assert not target.exists()


def test_a_damaged_backup_is_refused(filled: Connection, path: Path, target: Path) -> None:
    backup.back_up(path, target)
    content = bytearray(target.read_bytes())
    content[4 * 4096 :] = bytes(len(content) - 4 * 4096)
    target.write_bytes(content)
    with pytest.raises(StorageError, match="damaged"):
        backup.check_backup(target)


def test_what_is_no_backup(target: Path) -> None:
    target.write_text("see the binder\n" * 99)
    with pytest.raises(ForeignFileError):
        backup.check_backup(target)


def test_progress_is_told(filled: Connection, path: Path, target: Path) -> None:
    told: list[tuple[int, int]] = []
    backup.back_up(path, target, lambda checked, entries: told.append((checked, entries)))
    assert told[-1] == (66, 66)
