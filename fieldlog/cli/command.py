"""What all commands share: errors as one line with an exit code, progress bars, colour on a terminal only."""

from __future__ import annotations

import sys
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from typing import IO, Any

import click

from fieldlog.errors import (
    ConfigError,
    FieldlogError,
    SigningError,
    StorageError,
)

SOMETHING_DOES_NOT_HOLD = 1
NOT_AS_NEEDED = 3
CAN_NOT_BE_DONE = 4


class Refused(click.ClickException):
    """An error of the family, shown as one line."""

    def __init__(self, error: FieldlogError) -> None:
        super().__init__(error.message)
        self.code = error.code
        self.is_of_machine = isinstance(error, (ConfigError, SigningError, StorageError))

    def show(self, file: IO[Any] | None = None) -> None:
        """Print the message to standard error."""
        click.echo(f"{click.style('fieldlog:', bold=True)} {self.message} [{self.code}]", file=file, err=True)


class FieldlogGroup(click.Group):
    """A group of commands in which an error made on purpose ends with its message, never with a traceback."""

    def invoke(self, ctx: click.Context) -> Any:  # noqa: ANN401  click's own signature
        """Run the command."""
        try:
            return super().invoke(ctx)
        except FieldlogError as error:
            refused = Refused(error)
            refused.show()
            ctx.exit(NOT_AS_NEEDED if refused.is_of_machine else CAN_NOT_BE_DONE)


@contextmanager
def progress(label: str, length: int) -> Iterator[Callable[[int], None]]:
    """Give a function to call with the number of steps done; a bar on a terminal, its label elsewhere."""
    bar: Any
    with click.progressbar(length=length, label=label, file=sys.stderr, show_pos=True) as bar:
        yield bar.update


def end_with(exit_code: int) -> None:
    """End the command with `exit_code` after everything was printed."""
    if exit_code:
        click.get_current_context().exit(exit_code)
