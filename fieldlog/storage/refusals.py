"""Texts that were not taken, each kept whole with its reason, so that no number of a device is unexplained."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from fieldlog.canonical import sha256_hex
from fieldlog.procedures.envelope import Envelope
from fieldlog.records.entries import Refusal
from fieldlog.storage.columns import site_of
from fieldlog.storage.connection import Connection, at_the_edge


@dataclass(frozen=True, slots=True)
class RefusedText:
    """A refusal with the text it is about, and what could be read of it."""

    refusal: Refusal
    text: str
    received_at: str
    via: str
    author: str | None = None
    site: str | None = None
    device: str | None = None
    device_number: int | None = None
    id: int | None = None  # None: not yet kept


def refused_text(
    refusal: Refusal, text: str, received_at: str, via: str, envelope: Envelope | None = None
) -> RefusedText:
    """Return what is to be kept of a refused text; `envelope` where it could be read."""
    if envelope is None:
        return RefusedText(refusal, text, received_at, via)
    return RefusedText(
        refusal,
        text,
        received_at,
        via,
        envelope.author,
        site_of(envelope.kind, envelope.subject, envelope.site),
        envelope.device,
        envelope.device_number,
    )


@at_the_edge
def keep(connection: Connection, refused: Sequence[RefusedText]) -> None:
    """Keep refused texts; the same text refused for the same reason again adds nothing."""
    connection.executemany(
        "insert into refusals (uid, code, field, message, text, sha256, received_at, via, author, site, device, "
        "device_number) values (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?) on conflict (sha256, code, field) do nothing",
        [_row(each) for each in refused],
    )


_KEPT = (
    "select id, uid, code, field, message, text, received_at, via, author, site, device, device_number from refusals "
)


@at_the_edge
def kept(connection: Connection, after: int = 0, limit: int = 1000) -> list[RefusedText]:
    """Return refused texts by id, those after the one of this id."""
    found = connection.execute(_KEPT + "where id > ? order by id limit ?", (after, limit))
    return [_refused(*row) for row in found]


@at_the_edge
def kept_of(connection: Connection, uid: str) -> list[RefusedText]:
    """Return the refused texts that bear this uid."""
    return [_refused(*row) for row in connection.execute(_KEPT + "where uid = ? order by id", (uid,))]


@at_the_edge
def count(connection: Connection) -> int:
    """Return the number of refused texts."""
    found: int = connection.execute("select count(*) from refusals").fetchone()[0]
    return found


def _row(refused: RefusedText) -> tuple[str | int | bytes | None, ...]:
    refusal = refused.refusal
    text = refused.text.encode(errors="surrogatepass")
    return (
        refusal.uid, refusal.code, refusal.field, refusal.message, text, sha256_hex(text), refused.received_at,
        refused.via, refused.author, refused.site, refused.device, refused.device_number,
    )  # fmt: skip


def _refused(  # noqa: PLR0913, PLR0917  the columns of _KEPT, in order
    id_: int, uid: str, code: str, field: str, message: str, text: bytes, received_at: str, via: str,
    author: str | None, site: str | None, device: str | None, device_number: int | None,
) -> RefusedText:  # fmt: skip
    return RefusedText(
        Refusal(uid, code, field, message), text.decode(errors="surrogatepass"), received_at, via, author, site,
        device, device_number, id_,
    )  # fmt: skip
