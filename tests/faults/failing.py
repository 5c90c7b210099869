"""A connection whose n-th statement fails as a full disk would make it."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from fieldlog.storage.connection import Connection, connect, sqlite3


class FailingConnection(Connection):
    """Counts statements and fails at the one of number `fails_at`; 0: never."""

    fails_at = 0
    statements = 0

    def execute(self, *arguments: Any) -> Any:
        self._count()
        return super().execute(*arguments)

    def executemany(self, *arguments: Any) -> Any:
        self._count()
        return super().executemany(*arguments)

    def _count(self) -> None:
        self.statements += 1
        if self.statements == self.fails_at:
            error = sqlite3.OperationalError("database or disk is full")
            error.sqlite_errorname = "SQLITE_FULL"
            raise error


def failing(path: Path) -> FailingConnection:
    """Open an existing database with a connection that can be made to fail."""
    usual = connect(path)
    connection: FailingConnection = sqlite3.connect(path, isolation_level=None, factory=FailingConnection)
    connection.path, connection.busy_seconds = usual.path, usual.busy_seconds
    usual.close()
    return connection
