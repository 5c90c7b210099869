"""The command that takes files in: entries as JSON Lines, readings of past years as CSV."""

from __future__ import annotations

import os
from collections.abc import Callable
from pathlib import Path
from typing import BinaryIO

import click

from fieldlog import clock, settings
from fieldlog.cli.command import SOMETHING_DOES_NOT_HOLD, end_with, progress
from fieldlog.exchange.history_cells import Options
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
@click.option(
    "--refused", type=click.Path(path_type=Path, dir_okay=False), help="Write all refusals to this CSV file."
)
def import_file(
    file: Path,
    dry_run: bool,  # noqa: FBT001
    dates: str,
    pressure_unit: str | None,
    flow_unit: str | None,
    refused: Path | None,
) -> None:
    """Take in FILE: entries (.jsonl) or readings of past years (.csv, .tsv, .txt).

    A row that can't be taken is named with its line, field and mend; the others go on. Importing a file again adds
    nothing.
    """
    opened = open_instance(settings.from_environment())
    with file.open("rb") as stream:
        if file.suffix.lower() == ".jsonl":
            outcome = _entries(opened, stream, file)
        else:
            options = Options(
                dates=dates, pressure_unit=pressure_unit, flow_unit=flow_unit, newest=clock.now().date()
            )
            outcome = _history(opened, stream, options, show_only=dry_run)
    _say(outcome, refused, dry_run=dry_run)


def _entries(opened: Instance, stream: BinaryIO, file: Path) -> importing.Imported:
    lines = _count_lines(file)
    with progress("entries", lines) as done:
        return importing.import_entries(opened, stream, clock.now(), done)


def _history(opened: Instance, stream: BinaryIO, options: Options, *, show_only: bool) -> importing.Imported:
    lines = _count_lines(Path(os.fsdecode(stream.name)))
    file = importing.read_history(stream, options)
    for header in file.layout.unknown:
        click.echo(f"column not read: {header}", err=True)
    if show_only:
        return _dry_run(opened, file)
    with progress("rows", lines) as done:
        return importing.import_history(opened, file, clock.now(), done)


def _dry_run(opened: Instance, file: importing.HistoryFile) -> importing.Imported:
    outcome = importing.Imported()
    for row in importing.rows_of(opened, file):
        outcome.refused += row.refusals
        outcome.on_file += row.is_on_file
        if not row.refusals and not row.is_on_file:
            outcome.added += 1
        if not row.refusals:
            click.echo(f"line {row.line}: {row.says}")
        for note in row.notes:
            click.echo(f"line {row.line}: {note}")
    return outcome


def _say(outcome: importing.Imported, refused: Path | None, *, dry_run: bool) -> None:
    for refusal in outcome.refused[: None if refused is None else 0] if refused else outcome.refused[:_SHOWN]:
        click.echo(f"line {refusal.line}: {refusal.message}", err=True)
    hidden = len(outcome.refused) - _SHOWN
    if refused is not None:
        with refused.open("w", encoding="utf-8", newline="") as out:
            write_refusals(outcome.refused, out)
        click.echo(f"refusals written to {refused}", err=True)
    elif hidden > 0:
        click.echo(f"and {hidden} more; --refused FILE writes them all", err=True)
    verb = "would be added" if dry_run else "added"
    click.echo(
        f"{outcome.added} {verb}, {outcome.on_file} already there, {outcome.waiting} waiting for another entry, "
        f"{len({refusal.line for refusal in outcome.refused})} refused"
    )
    end_with(SOMETHING_DOES_NOT_HOLD if outcome.refused else 0)


def _count_lines(file: Path) -> int:
    with file.open("rb") as stream:
        blocks: Callable[[], bytes] = lambda: stream.read(1 << 20)  # noqa: E731
        return sum(block.count(b"\n") for block in iter(blocks, b""))


COMMANDS = (import_file,)
