"""One of several writers: waits for a line, adds its own batches and one that all of them send; prints a count.

With the argument `until-told` it writes until its input ends.
"""

from __future__ import annotations

import json
import select
import sys
from itertools import count
from pathlib import Path

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from fieldlog.errors import StorageError
from fieldlog.storage.connection import connect
from tests.storage.made import drain_test, take

SHARED = [drain_test(number) for number in range(500, 512)]


def is_told_to_stop() -> bool:
    return bool(select.select([sys.stdin], [], [], 0)[0])


def main(path: Path, base: int, batches: int | None) -> None:
    connection = connect(path)
    print("ready", flush=True)
    sys.stdin.readline()
    added = repeated = 0
    errors: list[str] = []
    for number in count():
        if number == batches or (batches is None and is_told_to_stop()):
            break
        own = [drain_test(base + number * 10 + offset) for offset in range(8)]
        try:
            appended = take(connection, *own, *(SHARED if number % 7 == 3 else ()))
        except StorageError as error:
            errors.append(error.message)
        else:
            added += len(appended.added)
            repeated += len(appended.result.repeated)
    print(json.dumps({"added": added, "repeated": repeated, "errors": errors}), flush=True)


if __name__ == "__main__":
    main(Path(sys.argv[1]), int(sys.argv[2]), None if sys.argv[3] == "until-told" else int(sys.argv[3]))
