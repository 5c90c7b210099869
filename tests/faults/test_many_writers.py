"""Several processes at once: no error, no gap, nothing twice; and a backup taken meanwhile is whole."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path
from typing import IO

import pytest

from fieldlog.storage import backup, chain, log
from fieldlog.storage.connection import connect
from fieldlog.storage.schema import open_database
from tests.storage.made import register, take

SCRIPT = Path(__file__).with_name("writer.py")
BATCHES = 60


@pytest.fixture
def path(tmp_path: Path) -> Path:
    path = tmp_path / "fieldlog.sqlite"
    connection = open_database(path, create=True)
    take(connection, *register())
    connection.close()
    return path


def started(path: Path, base: int, batches: str) -> tuple[subprocess.Popen[str], IO[str]]:
    pipe = subprocess.PIPE
    command = [sys.executable, str(SCRIPT), str(path), str(base), batches]
    child = subprocess.Popen(command, stdin=pipe, stdout=pipe, stderr=pipe, text=True)
    assert child.stdout is not None
    assert child.stdin is not None
    assert child.stdout.readline() == "ready\n"
    return child, child.stdin


@pytest.mark.slow
def test_four_processes_append_at_once(path: Path) -> None:
    children = [started(path, base, str(BATCHES)) for base in (100_000, 200_000, 300_000, 400_000)]
    for _, stdin in children:
        stdin.write("go\n")
        stdin.flush()
    said = [json.loads(child.communicate(timeout=90)[0]) for child, _ in children]
    assert [each["errors"] for each in said] == [[]] * 4
    own, shared = 4 * BATCHES * 8, 12
    assert sum(each["added"] for each in said) == own + shared
    sent_again = 4 * 9 * 12 - 12  # each of the four sends the shared batch nine times; one of these added it
    assert sum(each["repeated"] for each in said) == sent_again
    connection = connect(path)
    assert log.head(connection).number == len(register()) + own + shared
    assert chain.check(connection).fault is None
    connection.close()


@pytest.mark.slow
def test_a_backup_while_another_process_writes(path: Path, tmp_path: Path) -> None:
    child, stdin = started(path, 100_000, "until-told")
    stdin.write("go\n")
    stdin.flush()
    connection = connect(path)
    backups = []
    for number in range(5):
        written = log.head(connection).number
        copy = backup.back_up(path, tmp_path / f"copy{number}.sqlite")
        assert copy.entries >= written
        backups.append(copy)
    said = json.loads(child.communicate(timeout=60)[0])
    assert said["errors"] == []
    assert backups[-1].entries > backups[0].entries
    for copy in backups:
        assert chain.check(connection, expected_head=copy.head).fault is None
    connection.close()
