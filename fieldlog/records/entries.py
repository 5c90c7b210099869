"""The log's own records: an entry as it stands in the chain, and what intake answers."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any, Literal

Via = Literal["tablet", "form", "import", "server"]


@dataclass(frozen=True, slots=True)
class Entry:
    """One immutable version of a subject; everything but the first block is read out of `text`."""

    number: int
    received_at: str
    sha256: str
    link: str
    via: str
    text: str

    uid: str
    kind: str
    subject: str
    author: str
    made_at: str
    body: Mapping[str, Any]
    site: str | None = None
    system: str | None = None
    visit: str | None = None
    based_on: str | None = None
    reason: str | None = None
    withdrawn: bool = False
    device: str | None = None
    device_number: int | None = None
    signature: str | None = None


@dataclass(frozen=True, slots=True)
class Arrival:
    """An entry's text as it came, before it has a number."""

    text: str
    signature: str | None = None


@dataclass(frozen=True, slots=True)
class Receipt:
    """What the maker of an entry gets once it is committed; `head` is the entry's own link."""

    uid: str
    number: int
    sha256: str
    head: str


@dataclass(frozen=True, slots=True)
class Refusal:
    """Why a text was not taken, and which field to mend."""

    uid: str
    code: str
    field: str
    message: str


@dataclass(frozen=True, slots=True)
class Current:
    """The version of a subject that is in force."""

    subject: str
    kind: str
    number: int
    uid: str
    forked: bool
    withdrawn: bool


@dataclass(frozen=True, slots=True)
class IntakeResult:
    """The answer to one batch: each text is in exactly one of the three."""

    receipts: tuple[Receipt, ...]
    refused: tuple[Refusal, ...]
    waiting: tuple[str, ...]
    # Uids whose receipt repeats an earlier one: nothing was added for them.
    repeated: tuple[str, ...] = ()
