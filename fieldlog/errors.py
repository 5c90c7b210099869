"""Every error raised on purpose, one family with stable codes.

A message says what was asked, what was found and what to do. Findings about a system (a weak supply, a changed
residual) are values, never exceptions.
"""

from __future__ import annotations

from typing import ClassVar


class FieldlogError(Exception):
    """Base of the family; `details` holds the numbers and names of the message."""

    code: ClassVar[str] = "error"

    def __init__(self, message: str, **details: object) -> None:
        super().__init__(message)
        self.message = message
        self.details = details


class ConfigError(FieldlogError):
    """The instance or the machine is not set up as needed."""

    code = "config"


class InputError(FieldlogError, ValueError):
    """Something typed, posted or imported can't be taken; names the field and the mend."""

    code = "input"

    def __init__(self, message: str, *, field: str = "", **details: object) -> None:
        super().__init__(message, **details)
        self.field = field


class OutOfRangeError(FieldlogError, ValueError):
    """A formula was asked outside the range in which it means anything."""

    code = "out_of_range"


class NotFoundError(FieldlogError):
    """Nothing of that name or uid is on file, or not for the one who asked."""

    code = "not_found"


class NotAllowedError(FieldlogError):
    """The author may not make this kind of entry here."""

    code = "not_allowed"


class ConflictError(FieldlogError):
    """The same uid with another text, or a state that excludes what was asked."""

    code = "conflict"


class WaitingError(FieldlogError):
    """An entry names a subject or a site that has not arrived yet."""

    code = "waiting"


class StorageError(FieldlogError):
    """The database can't be read or written."""

    code = "storage"


class StorageFullError(StorageError):
    """No room on the disk; nothing of the transaction was kept."""

    code = "storage_full"


class StorageBusyError(StorageError):
    """Another writer held the database for too long; try again."""

    code = "storage_busy"


class ForeignFileError(StorageError):
    """The file is not a fieldlog database, or one of a newer fieldlog."""

    code = "foreign_file"


class BrokenLogError(StorageError):
    """The chain of entries does not hold; names the first bad entry."""

    code = "broken_log"


class SigningError(FieldlogError):
    """A report can't be sealed: key or certificate missing, expired or unreadable."""

    code = "signing"
