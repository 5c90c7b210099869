"""Kill a process with SIGKILL again and again while it writes, and look each time for what it had acknowledged.

As a tablet would, the parent then sends everything of that round again and compares the receipts.
`python tests/faults/killed_writer.py --kills 200` prints one JSON object and ends with 1 if anything was lost.
"""

from __future__ import annotations

import argparse
import json
import os
import random
import signal
import sys
import tempfile
import time
from pathlib import Path
from typing import NoReturn

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from fieldlog.storage import chain, entries, log, waiting
from fieldlog.storage.connection import connect
from fieldlog.storage.schema import open_database
from tests.storage.made import Made, drain_test, register, take, uid, version

PER_BATCH = 5
BATCHES = 400  # more than any child lives to write
CHECK_EVERY = 20


def batch_of(kill: int, number: int) -> list[Made]:
    """Make three tests, a correction and a fork."""
    base = 10_000 + kill * 10_000 + number * 10
    tests = [drain_test(base + offset) for offset in range(3)]
    first = tests[0]
    return [*tests, version(first, base + 5, uid(base)), version(first, base + 6, uid(base))]


def write_until_killed(path: Path, kill: int, acknowledge: int) -> NoReturn:
    connection = connect(path)
    for number in range(BATCHES):
        result = take(connection, *batch_of(kill, number)).result
        os.write(acknowledge, f"{result.receipts[-1].number} {result.receipts[-1].head}\n".encode())
    os._exit(3)


def killed_once(path: Path, kill: int, rng: random.Random) -> list[str]:
    """Return what the child acknowledged before it was killed."""
    reading, writing = os.pipe()
    child = os.fork()
    if child == 0:
        os.close(reading)
        write_until_killed(path, kill, writing)
    os.close(writing)
    wait_for, spin_seconds = rng.randint(1, 8), rng.uniform(0, 0.004)
    with os.fdopen(reading, "rb") as pipe:
        acknowledged = [pipe.readline() for _ in range(wait_for)]
        until = time.perf_counter() + spin_seconds
        while time.perf_counter() < until:
            pass
        os.kill(child, signal.SIGKILL)
        os.waitpid(child, 0)
        acknowledged += pipe.readlines()
    return [line.decode() for line in acknowledged if line.endswith(b"\n")]


def look_after(path: Path, kill: int, acknowledged: list[str], counts: dict[str, int]) -> None:
    connection = connect(path)
    at_kill = log.head(connection).number
    before = counts["entries"]
    counts["stored_but_not_acknowledged"] += at_kill - before - PER_BATCH * len(acknowledged)
    counts["torn_batches"] += (at_kill - before) % PER_BATCH != 0
    for number, line in enumerate(acknowledged):
        newest, head = line.split()
        made = batch_of(kill, number)
        found = {entry.uid: entry.text for entry in entries.entries_by_uid(connection, [e.uid for e, _ in made])}
        counts["lost"] += sum(found.get(envelope.uid) != arrival.text for envelope, arrival in made)
        again = take(connection, *made).result
        is_same = (again.receipts[-1].number, again.receipts[-1].head) == (int(newest), head)
        counts["doubled"] += not is_same or len(again.repeated) != PER_BATCH
    counts["doubled"] += log.head(connection).number != at_kill
    take(connection, *batch_of(kill, len(acknowledged)))  # perhaps stored, never acknowledged: sent again
    after = log.head(connection).number
    counts["doubled"] += (after - before) != PER_BATCH * (len(acknowledged) + 1)
    counts["acknowledged"] += len(acknowledged) * PER_BATCH
    counts["entries"] = after
    if kill % CHECK_EVERY == 0:
        counts["breaks"] += chain.check(connection).fault is not None
        counts["breaks"] += connection.execute("pragma integrity_check").fetchone()[0] != "ok"
    connection.close()


def kill_again_and_again(kills: int, seed: int) -> dict[str, int]:
    rng = random.Random(seed)
    names = ("kills", "acknowledged", "lost", "doubled", "torn_batches", "breaks", "stored_but_not_acknowledged")
    counts = dict.fromkeys(names, 0) | {"kills": kills}
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "fieldlog.sqlite"
        connection = open_database(path, create=True)
        take(connection, *register())
        connection.close()  # nothing open is carried across a fork
        counts["entries"] = len(register())
        for kill in range(1, kills + 1):
            look_after(path, kill, killed_once(path, kill, rng), counts)
        connection = connect(path)
        counts["breaks"] += chain.check(connection).fault is not None
        counts["waiting"] = waiting.count(connection)
        connection.close()
    return counts


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__)
    parser.add_argument("--kills", type=int, default=int(os.environ.get("FIELDLOG_KILLS", "200")))
    parser.add_argument("--seed", type=int, default=20240506)
    given = parser.parse_args()
    began = time.perf_counter()
    counts = kill_again_and_again(given.kills, given.seed)
    print(json.dumps(counts | {"seconds": round(time.perf_counter() - began, 1)}))
    sys.exit(any(counts[name] for name in ("lost", "doubled", "torn_batches", "breaks", "waiting")))


if __name__ == "__main__":
    main()
