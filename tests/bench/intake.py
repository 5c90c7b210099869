"""How fast entries are taken in, against raw SQLite writing the same rows with the same durability.

    python tests/bench/intake.py [--quick] [--json]

Compared, in turns within each round so that a busy machine slows both alike; the best round of each counts:
  raw         executemany of finished rows of `entries` and `current`, no triggers, one commit a batch
  raw entries the same without the rows of `current`
  append      fieldlog.storage.log.append: look-ups, hashes, chain, columns, version in force, guards
Each on its own file with the same tables, indexes, journal and synchronous level. Parsing and checking of the text
are timed as lines of their own, since raw SQLite does neither. The bar is half of raw.
"""

from __future__ import annotations

import argparse
import json
import os
import random
import sys
import tempfile
import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from datetime import UTC, datetime
from itertools import count
from pathlib import Path
from typing import Any
from uuid import UUID

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

from fieldlog.demo import story
from fieldlog.demo.pen import uid_of
from fieldlog.procedures.envelope import parse_envelope
from fieldlog.procedures.read import parse
from fieldlog.services import judging
from fieldlog.services.instance import create_instance
from fieldlog.settings import Settings
from fieldlog.storage import chain, log
from fieldlog.storage.connection import LIBRARY_VERSION, Connection, journal_for, sqlite3, transaction
from fieldlog.storage.schema import open_database
from tests.storage.made import AT, SITE, SYSTEM, VISIT, Made, entry, register, uid

BAR = 0.5
BATCHES = (40, 200)
_NUMBERS = count(3)
Rows = list[tuple[Any, ...]]


@dataclass(frozen=True)
class Load:
    """What is written: entries as made, and the rows they become."""

    made: list[Made]
    entries: Rows
    current: Rows


def readings(entries: int) -> list[Made]:
    """Make main drain tests of ordinary size, with valves, gauge and times."""
    body = {
        "performed_on": "2023-10-17",
        "standing": "routine",
        "static_before": {"value": "72.5", "unit": "psi", "gauge": uid(61)},
        "residual": {"value": "54", "unit": "psi", "gauge": uid(61)},
        "static_after": {"value": "72", "unit": "psi", "gauge": uid(61)},
        "return_seconds": {"seconds": 12, "how": "stop clock"},
        "fully_open": True,
        "took_full_flow": True,
        "pump_state": "none",
        "valves": [{"id": f"v{number}", "found": "open", "left": "open"} for number in (3, 4, 5)],
    }
    rng = random.Random(20240506)
    made = []
    for number in range(entries):
        own = str(UUID(int=rng.getrandbits(128), version=4))
        fields = {"site": SITE, "system": SYSTEM, "visit": VISIT, "device": uid(90), "device_number": number + 3}
        made.append(entry("main_drain_test", own, body, **fields))
    return made


def new_database(folder: Path) -> Connection:
    return open_database(folder / f"{next(_NUMBERS)}.sqlite", create=True)


def with_register(folder: Path) -> Connection:
    connection = new_database(folder)
    with transaction(connection):
        log.append(connection, register(), "import", AT)
    return connection


def load_of(folder: Path, entries: int) -> Load:
    connection = with_register(folder)
    made = readings(entries)
    append(connection, made, 500)
    skip = len(register())
    load = Load(
        made,
        connection.execute("select * from entries where number > ? order by number", (skip,)).fetchall(),
        connection.execute("select * from current where first > ? order by first", (skip,)).fetchall(),
    )
    assert chain.check(connection).fault is None
    connection.close()
    return load


def append(connection: Connection, made: Sequence[Made], batch: int) -> None:
    for start in range(0, len(made), batch):
        with transaction(connection):
            log.append(connection, made[start : start + batch], "tablet", AT)


def raw(connection: Connection, tables: dict[str, Rows], batch: int) -> None:
    statements = {
        name: f"insert into {name} values ({', '.join('?' * len(rows[0]))})"  # noqa: S608
        for name, rows in tables.items()
    }
    for start in range(0, len(tables["entries"]), batch):
        connection.execute("begin immediate")
        for name, rows in tables.items():
            connection.executemany(statements[name], rows[start : start + batch])
        connection.execute("commit")


def unguarded(connection: Connection) -> Connection:
    for (name,) in connection.execute("select name from sqlite_master where type = 'trigger'").fetchall():
        connection.execute(f"drop trigger {name}")
    return connection


def timed(write: Callable[[Connection], None], connection: Connection) -> float:
    began = time.perf_counter()
    write(connection)
    seconds = time.perf_counter() - began
    connection.close()
    return seconds


def compared(folder: Path, load: Load, batch: int, rounds: int) -> dict[str, float]:
    """Return entries a second of each way of writing."""
    ways: dict[str, Callable[[], float]] = {
        "raw": lambda: timed(
            lambda c: raw(c, {"entries": load.entries, "current": load.current}, batch),
            unguarded(with_register(folder)),
        ),
        "raw entries": lambda: timed(
            lambda c: raw(c, {"entries": load.entries}, batch), unguarded(with_register(folder))
        ),
        "append": lambda: timed(lambda c: append(c, load.made, batch), with_register(folder)),
    }
    best = dict.fromkeys(ways, float("inf"))
    for _ in range(rounds):
        for name, way in ways.items():
            best[name] = min(best[name], way())
    return {name: len(load.made) / seconds for name, seconds in best.items()}


# What is done to each text beside storing it. A line is a name and a function of the texts.
LINES: dict[str, Callable[[Sequence[str]], object]] = {
    "parse and check the envelope": lambda texts: [parse_envelope(text) for text in texts],
    "parse and check all of it": lambda texts: [parse(text) for text in texts],
}


def lines(load: Load, rounds: int) -> dict[str, float]:
    texts = [arrival.text for _, arrival in load.made]
    found = {}
    for name, line in LINES.items():
        seconds = []
        for _ in range(rounds):
            began = time.perf_counter()
            line(texts)
            seconds.append(time.perf_counter() - began)
        found[name] = len(texts) / min(seconds)
    return found


def judging_ms(folder: Path, rounds: int) -> dict[str, float]:
    """Return what judging costs after intake: a supply with three systems and ten years of tests, in ms."""
    made = create_instance(Settings(folder / "demo"))
    at = datetime(2026, 12, 1, 12, tzinfo=UTC)
    story.enter_history(made, at, lambda _: None)
    site = uid_of("harbour")
    (history,) = judging.site_histories(made.connection, site)
    ways: dict[str, Callable[[], object]] = {
        "read the entries of one supply": lambda: judging.site_histories(made.connection, site),
        "judge its three systems": lambda: judging.statements_on(history, at.date()),
    }
    return {name: 1000 * min(timed_call(way) for _ in range(3 * rounds)) for name, way in ways.items()}


def timed_call(call: Callable[[], object]) -> float:
    began = time.perf_counter()
    call()
    return time.perf_counter() - began


def measured(entries: int, rounds: int) -> dict[str, Any]:
    mode, synchronous = journal_for(LIBRARY_VERSION).value
    with tempfile.TemporaryDirectory(dir=os.environ.get("FIELDLOG_BENCH_FOLDER")) as name:
        folder = Path(name)
        load = load_of(folder, entries)
        by_batch = {batch: compared(folder, load, batch, rounds) for batch in BATCHES}
        return {
            "library": f"{sqlite3.__name__} {sqlite3.sqlite_version}",
            "journal": f"{mode}, synchronous {synchronous}",
            "processors": os.cpu_count(),
            "entries": entries,
            "bytes_per_text": sum(len(arrival.text.encode()) for _, arrival in load.made) // entries,
            "rounds": rounds,
            "entries_per_second": {str(batch): rates for batch, rates in by_batch.items()},
            "ratio_to_raw": {str(batch): rates["append"] / rates["raw"] for batch, rates in by_batch.items()},
            "ratio_to_raw_entries": {
                str(batch): rates["append"] / rates["raw entries"] for batch, rates in by_batch.items()
            },
            "bar": BAR,
            "lines_per_second": lines(load, rounds),
            "judging_ms": judging_ms(folder, rounds),
        }


def told(result: dict[str, Any]) -> str:
    said = [
        f"intake: {result['entries']} main drain tests of {result['bytes_per_text']} bytes, {result['library']}, "
        f"{result['journal']}, {result['processors']} processors, best of {result['rounds']} rounds",
        f"{'entries a second':<32}{'raw':>9}{'raw entries':>13}{'append':>9}{'of raw':>9}{'of raw entries':>16}",
    ]
    for batch, rates in result["entries_per_second"].items():
        said.append(
            f"  {'one commit for each ' + batch:<30}{rates['raw']:>9,.0f}{rates['raw entries']:>13,.0f}"
            f"{rates['append']:>9,.0f}{result['ratio_to_raw'][batch]:>9.2f}"
            f"{result['ratio_to_raw_entries'][batch]:>16.2f}"
        )
    said += [f"  {name:<30}{rate:>9,.0f}" for name, rate in result["lines_per_second"].items()]
    said += [f"  {name:<30}{spent:>9.1f} ms" for name, spent in result["judging_ms"].items()]
    worst = min(result["ratio_to_raw"].values())
    said.append(f"the bar is {BAR} of raw; reached {worst:.2f}")
    return "\n".join(said)


def main() -> None:
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("--quick", action="store_true", help="fewer rows and rounds, under 50 s")
    parser.add_argument("--json", action="store_true", help="print one JSON object")
    given = parser.parse_args()
    result = measured(4_000, 3) if given.quick else measured(20_000, 7)
    print(json.dumps(result) if given.json else told(result))


if __name__ == "__main__":
    main()
