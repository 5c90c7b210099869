"""Run into a disk that is full, simulated by the largest size a file may have, and go on after room was made.

Prints one JSON object. A limit of the process needs no rights; Python ignores the signal that goes with it.
"""

from __future__ import annotations

import json
import resource
import sys
from pathlib import Path

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from fieldlog.errors import StorageError
from fieldlog.storage import backup, chain, entries, files, log
from fieldlog.storage.connection import Connection
from fieldlog.storage.schema import open_database
from tests.storage.made import drain_test, register, take

ROOM = 1_500_000  # bytes


def limit_files_to(size: int) -> None:
    _, hard = resource.getrlimit(resource.RLIMIT_FSIZE)
    resource.setrlimit(resource.RLIMIT_FSIZE, (size, hard))


def write_until_refused(connection: Connection) -> tuple[int, StorageError]:
    """Return the number of the last entry acknowledged, and the refusal."""
    acknowledged = 0
    for start in range(1000, 100_000, 50):
        try:
            result = take(connection, *(drain_test(number) for number in range(start, start + 50))).result
        except StorageError as error:
            return acknowledged, error
        acknowledged = result.receipts[-1].number
    raise AssertionError("the limit was never met")


def refusal_of_a_photo(folder: Path) -> str:
    try:
        files.put(folder, b"photo" * ROOM)
    except StorageError as error:
        return type(error).__name__
    return "none"


def refusal_of_a_backup(source: Path, target: Path) -> str:
    try:
        backup.back_up(source, target)
    except StorageError as error:
        return type(error).__name__
    return "none"


def main(folder: Path) -> None:
    path = folder / "fieldlog.sqlite"
    connection = open_database(path, create=True)
    take(connection, *register())
    limit_files_to(ROOM)
    acknowledged, error = write_until_refused(connection)
    said = {
        "acknowledged": acknowledged,
        "error": type(error).__name__,
        "message": error.message,
        "in_transaction": connection.in_transaction,
        "stored": log.head(connection).number,
        "readable": len(entries.after(connection, 0, 10_000)),
        "photo": refusal_of_a_photo(folder / "files"),
        "again": type(write_until_refused(connection)[1]).__name__,
    }
    limit_files_to(ROOM // 4)
    said["backup"] = refusal_of_a_backup(path, folder / "copy.sqlite")
    said["left"] = sorted(each.name for each in folder.rglob("*") if ".part" in each.name or "copy" in each.name)
    limit_files_to(resource.RLIM_INFINITY)
    take(connection, *(drain_test(number) for number in range(200_000, 200_070)))
    result = chain.check(connection)
    said["after"] = result.checked
    said["fault"] = result.fault and result.fault.message
    said["integrity"] = connection.execute("pragma integrity_check").fetchone()[0]
    print(json.dumps(said))


if __name__ == "__main__":
    main(Path(sys.argv[1]))
