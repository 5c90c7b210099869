"""A fresh database for each test, closed at its end."""

from __future__ import annotations

from collections.abc import Iterator
from pathlib import Path

import pytest

from fieldlog.storage.connection import Connection
from fieldlog.storage.schema import open_database
from tests.storage import made


@pytest.fixture
def path(tmp_path: Path) -> Path:
    return tmp_path / "fieldlog.sqlite"


@pytest.fixture
def empty(path: Path) -> Iterator[Connection]:
    connection = open_database(path, create=True)
    yield connection
    connection.close()


@pytest.fixture
def connection(empty: Connection) -> Connection:
    """Give a log that holds the register."""
    made.take(empty, *made.register())
    return empty
