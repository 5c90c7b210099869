"""Writing the scenario's entries: each has a uid of its own name, so that two runs give the same texts."""

from __future__ import annotations

import uuid
from dataclasses import dataclass, field
from datetime import date
from typing import Any

import msgspec

from fieldlog.canonical import sha256_hex
from fieldlog.procedures.compose import compose
from fieldlog.records.entries import Arrival

_SCENARIO = uuid.uuid5(uuid.NAMESPACE_URL, "urn:fieldlog:demo:1")


def uid_of(key: str) -> str:
    """Return the uid of the thing that goes by this key in the scenario."""
    return str(uuid.uuid5(_SCENARIO, key))


ORGANISATION = uid_of("organisation")


@dataclass(frozen=True, slots=True)
class Written:
    """An entry as written: for corrections and sign-offs."""

    uid: str
    sha256: str


@dataclass(slots=True)
class Pen:
    """Collects entries in the order they are written."""

    arrivals: list[Arrival] = field(default_factory=list)

    def write(self, kind: str, key: str, body: msgspec.Struct, on: date, *, author: str = "", **rest: Any) -> Written:  # noqa: ANN401
        """Compose an entry of the day `on` and keep it for the next batch."""
        uid = uid_of(key)
        text = compose(
            kind, body, uid=uid, author=uid_of(author) if author else ORGANISATION,
            made_at=f"{on.isoformat()}T10:00:00Z", **rest,
        )  # fmt: skip
        self.arrivals.append(Arrival(text))
        return Written(uid, sha256_hex(text))

    def taken(self) -> list[Arrival]:
        """Return what was written since the last time."""
        arrivals, self.arrivals = self.arrivals, []
        return arrivals
