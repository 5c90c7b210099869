"""Commands that keep the log: check-log, rebuild, backup, restore."""

from __future__ import annotations

from pathlib import Path

import click

from fieldlog import clock, settings
from fieldlog.cli.command import SOMETHING_DOES_NOT_HOLD, end_with, progress
from fieldlog.services import archive
from fieldlog.services.instance import open_instance
from fieldlog.storage import entries


@click.command("check-log")
@click.option("--head", metavar="HASH", help="A head printed on a report or receipt that the chain must contain.")
def check_log(head: str | None) -> None:
    """Walk the whole chain of entries and name the first bad one."""
    opened = open_instance(settings.from_environment())
    with progress("entries", entries.count(opened.connection)) as done:
        walked = 0

        def step(checked: int, _total: int) -> None:
            nonlocal walked
            done(checked - walked)
            walked = checked

        result = archive.check_log(opened, step, head)
    if result.fault is not None:
        click.echo(f"entry {result.fault.number} ({result.fault.uid}): {result.fault.message}")
        end_with(SOMETHING_DOES_NOT_HOLD)
    else:
        click.echo(f"{result.checked} entries, unchanged; head {result.head}")


@click.command()
def rebuild() -> None:
    """Derive the versions in force and every statement anew from the log."""
    opened = open_instance(settings.from_environment())
    supplies = len(entries.in_force_of_kind(opened.connection, "supply"))
    with progress("supplies", supplies) as done:
        made = archive.rebuild(opened, clock.now().date(), done)
    click.echo(f"{made.subjects} subjects, {made.supplies} supplies")


@click.command()
@click.argument("folder", type=click.Path(path_type=Path, file_okay=False))
@click.option("--with-keys", is_flag=True, help="The sealing key too: keep that copy as safe as the key.")
def backup(folder: Path, with_keys: bool) -> None:  # noqa: FBT001
    """Copy database, photos and reports into a new FOLDER while the instance goes on, and check the copy."""
    copy = archive.back_up(open_instance(settings.from_environment()), folder, with_keys=with_keys)
    click.echo(f"{folder}: {copy.database.entries} entries, head {copy.database.head}, {copy.files} files")
    if not with_keys:
        click.echo("the sealing key is not in it; copy the keys folder apart, or use --with-keys")


@click.command()
@click.argument("folder", type=click.Path(path_type=Path, exists=True, file_okay=False))
def restore(folder: Path) -> None:
    """Check the backup in FOLDER and put it in place of an instance that is gone. Never replaces one that is there."""
    result = archive.restore(folder, settings.from_environment())
    click.echo(f"restored {result.checked} entries, head {result.head}")


COMMANDS = (check_log, rebuild, backup, restore)
