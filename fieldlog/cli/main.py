"""The command `fieldlog` and the commands under it."""

from __future__ import annotations

import click

from fieldlog.cli import entries, instance, keeping, reports
from fieldlog.cli.command import FieldlogGroup
from fieldlog.settings import program_version


@click.group(cls=FieldlogGroup, context_settings={"help_option_names": ["-h", "--help"], "max_content_width": 110})
@click.version_option(program_version(), prog_name="fieldlog")
def main() -> None:
    """Field inspection and test log for water-based fire protection systems.

    The folder of the instance is named by FIELDLOG_INSTANCE (default: instance/ in the working folder).

    Exit codes: 0 done; 1 done, but something was refused or does not hold; 2 wrong use of the command;
    3 the instance or the machine is not as needed; 4 what was asked can't be done.
    """


for module in (instance, entries, reports, keeping):
    for command in module.COMMANDS:
        main.add_command(command)
