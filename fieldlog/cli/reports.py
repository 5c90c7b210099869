"""Commands that say what is so: statement, report, verify."""

from __future__ import annotations

from pathlib import Path

import click
import msgspec

from fieldlog import clock, settings
from fieldlog.cli.command import SOMETHING_DOES_NOT_HOLD, end_with
from fieldlog.cli.paragraphs import paragraphs
from fieldlog.services import reporting, sites
from fieldlog.services.instance import open_instance


@click.command()
@click.argument("names", metavar="[SITE|SYSTEM]...", nargs=-1)
@click.option("--json", "as_json", is_flag=True, help="The statements as data, one JSON object.")
@click.option("--reasons", is_flag=True, help="With reasons, what to do next and what the tests can't show.")
def statement(names: tuple[str, ...], as_json: bool, reasons: bool) -> None:  # noqa: FBT001
    """Print what is said of all systems, or of those at the sites or by the names given; most worrying first."""
    opened = open_instance(settings.from_environment())
    rows = sites.system_rows(opened, clock.now().date(), *names)
    if as_json:
        click.echo(msgspec.json.encode({"statements": [row.said for row in rows]}).decode())
        return
    for row in rows:
        place = f"{row.site.body['name']} · {row.system.body['name']}"
        click.echo(click.style(place, bold=True))
        for line in paragraphs(row, with_reasons=reasons):
            click.echo(f"  {line}")


@click.command()
@click.argument("visit", required=False)
@click.option("--out", type=click.Path(path_type=Path, file_okay=False), help="Also write the PDF into this folder.")
@click.option("--without-photos", is_flag=True, help="Close without photos not received; the report says so.")
def report(visit: str | None, out: Path | None, without_photos: bool) -> None:  # noqa: FBT001
    """Make the sealed report of a signed-off VISIT (its uid); without one, list the visits."""
    opened = open_instance(settings.from_environment())
    if visit is None:
        for row in reporting.visit_rows(opened):
            click.echo(f"{row.uid}  {row.on:%Y-%m-%d}  {row.site}  {row.state}")
        return
    made = reporting.make_report(opened, visit, clock.now(), accept_missing_photos=without_photos)
    path = made.path
    if out is not None:
        path = reporting.write_copy(made, out)
    click.echo(f"{path}\nrevision {made.revision}, sha256 {made.sha256}, head {made.head}")


@click.command()
@click.argument("file", type=click.Path(path_type=Path, exists=True, dir_okay=False))
def verify(file: Path) -> None:
    """Check a report: its seal, that the seal covers the whole file, its records against the log, its head."""
    opened = open_instance(settings.from_environment())
    checked = reporting.verify_report(opened, file.read_bytes())
    for line in checked.lines():
        click.echo(line)
    end_with(0 if checked.is_good else SOMETHING_DOES_NOT_HOLD)


COMMANDS = (statement, report, verify)
