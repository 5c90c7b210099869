"""The command that takes files in: entries as JSON Lines, readings of past years as CSV."""

from __future__ import annotations

from functools import partial
from pathlib import Path
from typing import Any, BinaryIO

import click

from fieldlog import clock, settings
from fieldlog.cli.command import SOMETHING_DOES_NOT_HOLD, end_with, progress
from fieldlog.exchange.history_cells import Options
from fieldlog.exchange.history_csv import HistoryFile
from fieldlog.exchange.refusal_csv import write_refusals
from fieldlog.services import importing
from fieldlog.services.instance import Instance, open_instance

_SHOWN = 20


@click.command("import")
@click.argument("file", type=click.Path(path_type=Path, exists=True, dir_okay=False))
@click.option("--dry-run", is_flag=True, help="Show what each row of a CSV file becomes; keep nothing.")
@click.option("--dates", type=click.Choice(["iso", "dmy", "mdy"]), default="iso", show_default=True)
@click.option("--pressure-unit", type=click.Choice(["psi", "bar", "kPa"]), help="Where the file names none.")
@click.option("--flow-unit", type=click.Choice(["gpm", "L/min"]), help="Where the file names none.")
@click.option("--kind", metavar="KIND", help="Kind of test, where the file has no column for it.")
@click.option("--refused", type=click.Path(path_type=Path, dir_okay=False), help="Write all refusals to this file.")
def import_file(file: Path, dry_run: bool, refused: Path | None, **said: Any) -> None:  # noqa: ANN401, FBT001
    """Take in FILE: entries (.jsonl) or readings of past years (.csv, .tsv, .txt).

    A row that can't be taken is named with its line, field and mend; the others go on. Importing a file again adds
    nothing.
    """
    opened = open_instance(settings.from_environment())
    lines = _count_lines(file)
    with file.open("rb") as stream:
        if file.suffix.lower() == ".jsonl":
            outcome = _entries(opened, stream, lines)
        else:
            history = _history(stream, Options(newest=clock.now().date(), **said))
            outcome = _dry_run(opened, history) if dry_run else _take_in(opened, history, lines)
    _say(outcome, refused, dry_run=dry_run)


def _entries(opened: Instance, stream: BinaryIO, lines: int) -> importing.Imported:
    with progress("entries", lines) as done:
        return importing.import_entries(opened, stream, clock.now(), done)


def _history(stream: BinaryIO, options: Options) -> HistoryFile:
    file = importing.read_history(stream, options)
    layout = file.layout
    click.echo(f"read as {layout.encoding}, columns from line {layout.header_line}", err=True)
    for header in layout.unknown:
        click.echo(f"column not read: {header}", err=True)
    return file


def _take_in(opened: Instance, file: HistoryFile, lines: int) -> importing.Imported:
    with progress("rows", lines) as done:
        return importing.import_history(opened, file, clock.now(), done)


def _dry_run(opened: Instance, file: HistoryFile) -> importing.Imported:
    outcome = importing.Imported()
    for row in importing.rows_of(opened, file):
        outcome.refused += row.refusals
        outcome.on_file += row.is_on_file
        if not row.refusals:
            outcome.added += not row.is_on_file
            click.echo(f"line {row.line}: {row.says}")
        for note in row.notes:
            click.echo(f"line {row.line}: {note}")
    return outcome


def _say(outcome: importing.Imported, refused: Path | None, *, dry_run: bool) -> None:
    if refused is not None:
        with refused.open("w", encoding="utf-8", newline="") as out:
            write_refusals(outcome.refused, out)
        click.echo(f"refusals written to {refused}", err=True)
    else:
        _list_refusals(outcome)
    verb = "would be added" if dry_run else "added"
    click.echo(
        f"{outcome.added} {verb}, {outcome.on_file} already there, {outcome.waiting} waiting for another entry, "
        f"{len({refusal.line for refusal in outcome.refused})} refused"
    )
    end_with(SOMETHING_DOES_NOT_HOLD if outcome.refused else 0)


def _list_refusals(outcome: importing.Imported) -> None:
    for refusal in outcome.refused[:_SHOWN]:
        field = "" if refusal.message.startswith(refusal.field) else f"{refusal.field}: "
        click.echo(f"line {refusal.line}: {field}{refusal.message}", err=True)
    if len(outcome.refused) > _SHOWN:
        click.echo(f"and {len(outcome.refused) - _SHOWN} more; --refused FILE writes them all", err=True)


def _count_lines(file: Path) -> int:
    with file.open("rb") as stream:
        return sum(block.count(b"\n") for block in iter(partial(stream.read, 1 << 20), b""))


COMMANDS = (import_file,)
