"""Commands that make an instance and the people in it: init, person, demo."""

from __future__ import annotations

from datetime import datetime
from pathlib import Path
from typing import Any

import click

from fieldlog import clock, settings
from fieldlog.cli.command import progress
from fieldlog.demo import story
from fieldlog.procedures.organisation import Organisation
from fieldlog.services import instance, people


@click.command()
@click.option("--organisation", metavar="NAME", help="The contractor this instance serves.")
def init(organisation: str | None) -> None:
    """Make a new instance: its folder, the empty log, and the organisation's sealing key.

    Without --organisation the log stays empty until a file of entries that begins with the organisation's own
    entry is imported.
    """
    made = instance.create_instance(settings.from_environment())
    if organisation is not None:
        body = Organisation(name=organisation)
        instance.found_organisation(made, body, uid=clock.new_uid(), at=clock.now())
    click.echo(f"made {made.settings.instance}")


@click.command()
@click.argument("name")
@click.option("--role", type=click.Choice(["technician", "office", "owner"]), required=True)
@click.option("--login", metavar="NAME", required=True, help="The name the person will log in by.")
@click.option("--licence", metavar="TEXT", help="Licence or certificate, as it is printed on reports.")
@click.option("--licence-expires", metavar="YYYY-MM-DD", type=click.DateTime(["%Y-%m-%d"]))
@click.option("--employer", metavar="TEXT")
@click.option("--site", "sites", multiple=True, metavar="SITE", help="A site the person may see (name or uid).")
def person(name: str, licence_expires: datetime | None, sites: tuple[str, ...], **said: Any) -> None:  # noqa: ANN401
    """Enter a person with a role, a log-in name and the sites the person may see."""
    opened = instance.open_instance(settings.from_environment())
    expires = None if licence_expires is None else licence_expires.date()
    particulars = people.Particulars(name=name, licence_expires=expires, sites=sites, **said)
    subject = people.add_person(opened, particulars, uid=clock.new_uid(), at=clock.now())
    click.echo(f"{name}: {particulars.role}, log-in {particulars.login}, {subject}")


@click.command()
@click.option("--once", is_flag=True, help="Make the instance and one sealed report, then stop.")
@click.option("--folder", type=click.Path(path_type=Path, file_okay=False), help="Where (default: FIELDLOG_INSTANCE).")
def demo(once: bool, folder: Path | None) -> None:  # noqa: FBT001  click passes flags by position of the name
    """Make an instance of invented sites with ten years of history, through to a sealed report.

    Every site, person and reading in it is invented. Refuses a folder that holds a log.
    """
    place = settings.from_environment() if folder is None else settings.Settings(folder.absolute())
    at = clock.now()
    made = instance.create_instance(place)
    with progress("ten years of tests", story.steps(at.date())) as done:
        outcome = story.build(made, at, done)
    for line in outcome.lines():
        click.echo(line)
    if not once:
        click.echo("Pages for a browser are not part of this version; the commands above show everything.")


COMMANDS = (init, person, demo)
