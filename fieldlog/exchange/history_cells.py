"""The cells of one row by the columns that say which entry it is, and what was found wrong with them."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from datetime import date
from typing import Any, Literal, TypeVar

from fieldlog.errors import InputError
from fieldlog.exchange.columns import Found

_Value = TypeVar("_Value")

# What offices write where there is nothing.
_MISSING = {"", "-", "--", "–", "—", "n/a", "#n/a", "na", "n.a.", "nil", "?"}
_LONGEST_MESSAGE = 450
_MOST_REMEMBERED = 10_000


@dataclass(frozen=True, slots=True)
class Options:
    """What the person importing says about the file; a unit here holds where the file names none."""

    dates: Literal["iso", "dmy", "mdy"] = "iso"
    pressure_unit: Literal["psi", "bar", "kPa"] | None = None
    flow_unit: Literal["gpm", "L/min"] | None = None
    kind: str | None = None
    delimiter: str | None = None
    newest: date | None = None


@dataclass(frozen=True, slots=True)
class RowCells:
    """One row of cells; problems are (column, what was found and the mend)."""

    cells: Sequence[str]
    row_columns: Mapping[str, Found]
    problems: list[tuple[str, str]] = field(default_factory=list)

    def at(self, index: int) -> str:
        """Return the cell without stray spaces; empty where the row ends before it or says there is nothing."""
        text = self.cells[index].strip() if index < len(self.cells) else ""
        return "" if text.casefold() in _MISSING else text

    def typed(self, row_column: str) -> str:
        """Return what stands in a column that says which entry the row is."""
        column = self.row_columns.get(row_column)
        return self.at(column.index) if column is not None else ""

    def header(self, row_column: str) -> str:
        """Return the header of that column as written, or the name it should have."""
        column = self.row_columns.get(row_column)
        return column.header if column is not None else row_column

    def attempt(self, column: str, read: Callable[[], _Value]) -> _Value | None:
        """Return what `read` gives, or None with the problem noted under `column`."""
        try:
            return read()
        except InputError as error:
            self.refuse(column, error.message)
            return None

    def refuse(self, column: str, message: str) -> None:
        """Note what is wrong with a column; a long cell is shown by its beginning, the mend stays whole."""
        if len(message) > _LONGEST_MESSAGE:
            message = f"{message[:200]} … {message[-200:]}"
        self.problems.append((column, message))

    def has_problem(self, *columns: str) -> bool:
        """Return whether one of the columns was found wrong."""
        return any(column in columns for column, _ in self.problems)


class Remembered:
    """Values already read from the same text: a file names the same few sites and days over and over."""

    def __init__(self) -> None:
        self._values: dict[tuple[str, ...], Any] = {}

    def once(self, key: tuple[str, ...], read: Callable[[], _Value]) -> _Value:
        """Return what `read` gives for this key, without asking twice; an error is raised each time."""
        if key not in self._values:
            value = read()
            if len(self._values) >= _MOST_REMEMBERED:
                self._values.clear()
            self._values[key] = value
        found: _Value = self._values[key]
        return found
