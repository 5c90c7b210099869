"""The only place that reads the clock or makes an identifier; everything else takes them as arguments."""

from __future__ import annotations

from datetime import UTC, datetime
from uuid import uuid4  # noqa: TID251  the one maker of identifiers


def now() -> datetime:
    """Return the present time in UTC, to the second."""
    return datetime.now(UTC).replace(microsecond=0)  # noqa: TID251  the one reader of the clock


def new_uid() -> str:
    """Return a new random UUID as text."""
    return str(uuid4())


def timestamp(at: datetime) -> str:
    """Return `at` as the log writes it: UTC, to the second, ending in Z."""
    return at.astimezone(UTC).strftime("%Y-%m-%dT%H:%M:%SZ")
