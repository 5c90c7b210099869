"""Taking files in: entries as JSON Lines from other programs, readings of past years as CSV."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass, field
from datetime import datetime
from itertools import islice
from typing import Any, BinaryIO

from fieldlog.clock import timestamp
from fieldlog.exchange.entries_jsonl import LineRefusal, read_entries
from fieldlog.exchange.history_cells import Options
from fieldlog.exchange.history_csv import HistoryFile, RowRefusal, RowResult, open_history
from fieldlog.exchange.lookup import Named, Names
from fieldlog.records.entries import Arrival, Entry, Refusal
from fieldlog.services import intake, judging
from fieldlog.services.instance import Instance, organisation_of
from fieldlog.storage import entries

_BATCH = 500


@dataclass(slots=True)
class Imported:
    """What became of a file; every line is counted in one of the four."""

    added: int = 0
    on_file: int = 0
    waiting: int = 0
    refused: list[RowRefusal] = field(default_factory=list)

    @property
    def lines(self) -> int:
        """Number of lines read."""
        return self.added + self.on_file + self.waiting + len({refusal.line for refusal in self.refused})


def import_entries(
    instance: Instance, stream: BinaryIO, at: datetime, progress: Callable[[int], None] = lambda _: None
) -> Imported:
    """Take in a file of entries, one JSON object a line, and judge what they touch."""
    outcome = Imported()
    for batch in _batches(read_entries(stream)):
        good = [(line, found) for line, found in batch if isinstance(found, Arrival)]
        outcome.refused += [_row(found) for _, found in batch if isinstance(found, LineRefusal)]
        _take(instance, good, at, outcome)
        progress(len(batch))
    judging.judge_due(instance.connection, at.date())
    return outcome


def read_history(stream: BinaryIO, options: Options) -> HistoryFile:
    """Return the file with its columns found.

    Raises
    ------
    InputError
        If it has no header that can be understood.
    """
    return open_history(stream, options)


def import_history(
    instance: Instance, file: HistoryFile, at: datetime, progress: Callable[[int], None] = lambda _: None
) -> Imported:
    """Take in a file of past readings and judge what they touch."""
    outcome = Imported()
    for batch in _batches(rows_of(instance, file)):
        good = []
        for row in batch:
            outcome.refused += row.refusals
            outcome.on_file += row.is_on_file
            if row.text and not row.is_on_file and not row.refusals:
                good.append((row.line, row.arrival))
        _take(instance, good, at, outcome)
        progress(len(batch))
    judging.judge_due(instance.connection, at.date())
    return outcome


def rows_of(instance: Instance, file: HistoryFile) -> Iterator[RowResult]:
    """Return what each row of the file becomes; nothing is kept by this."""
    connection = instance.connection

    def is_on_file(uid: str) -> bool:
        return entries.entry_by_uid(connection, uid) is not None

    return file.rows(_names(instance), organisation_of(instance).subject, is_on_file)


def _names(instance: Instance) -> Names:
    """Return by which names sites, systems, gauges and supplies are known."""

    def of(kind: str) -> dict[str, Named]:
        found = entries.in_force_of_kind(instance.connection, kind)
        return {entry.subject: _named(entry) for entry in found}

    return Names(sites=of("site"), systems=of("system"), supplies=of("supply"), gauges=of("gauge"))


def _named(entry: Entry) -> Named:
    name = entry.body.get("name")
    names = (str(name),) if name else (entry.subject,)
    return Named(names=names, site=entry.site, supply=entry.body.get("supply"))


def _take(instance: Instance, good: Sequence[tuple[int, Arrival]], at: datetime, outcome: Imported) -> None:
    arrivals = [arrival for _, arrival in good]
    result = intake.take_in(instance.connection, arrivals, "import", timestamp(at))
    outcome.on_file += len(result.repeated)
    outcome.added += len(result.receipts) - len(result.repeated)
    outcome.waiting += len(result.waiting)
    for (line, _), became in zip(good, intake.outcomes(arrivals, result), strict=True):
        if isinstance(became, Refusal):
            outcome.refused.append(RowRefusal(line, became.field, became.message))


def _row(refusal: LineRefusal) -> RowRefusal:
    return RowRefusal(refusal.line, refusal.field, refusal.message)


def _batches(items: Iterator[Any]) -> Iterator[list[Any]]:
    while batch := list(islice(items, _BATCH)):
        yield batch
