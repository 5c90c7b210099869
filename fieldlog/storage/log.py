"""Adding to the log: numbers, links, the version in force, what waits and what is refused, in one transaction."""

from __future__ import annotations

import json
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from typing import NamedTuple

from fieldlog.canonical import sha256_hex
from fieldlog.procedures.envelope import Envelope, parse_envelope
from fieldlog.records.entries import Arrival, IntakeResult, Receipt, Refusal, Via
from fieldlog.storage import refusals, waiting
from fieldlog.storage.chain import FIRST_LINK, link
from fieldlog.storage.columns import Columns, columns_of, site_of
from fieldlog.storage.connection import Connection, at_the_edge, require_transaction
from fieldlog.storage.current import CurrentRow, in_force_after, rows_of, write_rows
from fieldlog.storage.refusals import RefusedText, refused_text
from fieldlog.storage.waiting import WaitingText


@dataclass(frozen=True, slots=True)
class Head:
    """The newest entry's place in the chain; number 0 while there is none."""

    number: int
    link: str
    received_at: str


class Added(NamedTuple):
    """An entry that got its number."""

    envelope: Envelope
    receipt: Receipt


@dataclass(frozen=True, slots=True)
class Appended:
    """The answer to a batch, and all that was added: also what had waited for something in it."""

    result: IntakeResult
    added: tuple[Added, ...]


@at_the_edge
def head(connection: Connection) -> Head:
    """Return the newest entry's place in the chain."""
    found = connection.execute("select number, link, received_at from entries order by number desc limit 1").fetchone()
    return Head(*found) if found else Head(0, FIRST_LINK, "")


@at_the_edge
def append(
    connection: Connection, arrivals: Sequence[tuple[Envelope, Arrival]], via: Via, received_at: str
) -> Appended:
    """Add a batch to the log; the receipts hold once the caller's transaction is committed.

    The same text again gets the same receipt. What names something that has not arrived waits, and is taken in
    by the batch that brings it. What is refused is kept with its reason and holds up nothing else.
    """
    require_transaction(connection)
    batch = [
        _Text(envelope, arrival.text, sha256_hex(arrival.text), arrival.signature, via, received_at)
        for envelope, arrival in arrivals
    ]
    step = _Step(connection, received_at)
    pending = batch
    while pending:
        arrived = step.take(pending)
        pending = step.released(arrived)
    return Appended(step.answer(batch), tuple(step.added))


class _Text(NamedTuple):
    envelope: Envelope
    text: str
    sha256: str
    signature: str | None
    via: str
    arrived_at: str  # before received_at where it had to wait


class _Waits(NamedTuple):
    waits_for: str
    field: str


def _as_text(waited: WaitingText) -> _Text:
    return _Text(
        parse_envelope(waited.text), waited.text, waited.sha256, waited.signature, waited.via, waited.received_at
    )


_INSERT = (
    f"insert into entries (number, received_at, sha256, link, via, signature, text, {', '.join(Columns._fields)}) "  # noqa: S608
    f"values (?, ?, ?, ?, ?, ?, ?{', ?' * len(Columns._fields)})"
)


class _Step:
    """One call of append: what is known, what was decided, and the rows to write."""

    def __init__(self, connection: Connection, received_at: str) -> None:
        self.added: list[Added] = []
        self._connection = connection
        self._received_at = received_at
        newest = head(connection)
        self._number, self._link = newest.number, newest.link
        self._on_file: dict[str, tuple[str, Receipt]] = {}  # by uid: subject, receipt
        self._some_wait = not waiting.is_empty(connection)
        self._digest_waiting: dict[str, str] = {}  # by uid
        self._rows: dict[str, CurrentRow] = {}  # by subject
        self._outcomes: dict[tuple[str, str], Receipt | Refusal | _Waits] = {}  # by uid and digest
        self._repeated: list[str] = []
        # Site, system and visit found to fit together: most entries of a batch name the same ones.
        self._sound_places: set[tuple[str | None, str | None, str | None]] = set()

    def take(self, texts: Sequence[_Text]) -> list[str]:
        """Decide on each text, write what follows, and return the uids that were added."""
        self._look_up(texts)
        entries: list[tuple[object, ...]] = []
        changed: dict[str, CurrentRow] = {}
        refused: list[RefusedText] = []
        waits: list[WaitingText] = []
        arrived: list[str] = []
        for text in texts:
            envelope = text.envelope
            outcome = self._known(text) or self._missing(envelope) or self._fault(envelope)
            if outcome is None:
                outcome = self._number_it(text, entries)
                changed[envelope.subject] = self._rows[envelope.subject]
                arrived.append(envelope.uid)
            elif isinstance(outcome, Refusal):
                refused.append(refused_text(outcome, text.text, text.arrived_at, text.via, envelope))
            elif isinstance(outcome, _Waits) and envelope.uid not in self._digest_waiting:
                waits.append(_waiting(text, outcome))
                self._digest_waiting[envelope.uid] = text.sha256
            self._outcomes[envelope.uid, text.sha256] = outcome
        self._write(entries, changed.values(), refused, waits)
        return arrived

    def released(self, arrived: Sequence[str]) -> list[_Text]:
        """Return the texts that waited for what has arrived, to be decided on next."""
        if not (arrived and self._some_wait):
            return []
        return [_as_text(each) for each in waiting.release(self._connection, arrived)]

    def answer(self, batch: Sequence[_Text]) -> IntakeResult:
        """Return what became of each text of the batch, in its order."""
        outcomes = [(text.envelope.uid, self._outcomes[text.envelope.uid, text.sha256]) for text in batch]
        return IntakeResult(
            receipts=tuple(outcome for _, outcome in outcomes if isinstance(outcome, Receipt)),
            refused=tuple(outcome for _, outcome in outcomes if isinstance(outcome, Refusal)),
            waiting=tuple(uid for uid, outcome in outcomes if isinstance(outcome, _Waits)),
            repeated=tuple(self._repeated),
        )

    def _look_up(self, texts: Sequence[_Text]) -> None:
        envelopes = [text.envelope for text in texts]
        uids = {envelope.uid for envelope in envelopes}
        versions = uids.union(envelope.based_on for envelope in envelopes if envelope.based_on is not None)
        found = self._connection.execute(
            "select uid, number, sha256, link, subject from entries where uid in (select value from json_each(?))",
            (json.dumps(list(versions)),),
        )
        for uid, number, sha256, entry_link, subject in found:
            self._on_file[uid] = (subject, Receipt(uid, number, sha256, entry_link))
        if self._some_wait:
            self._digest_waiting = waiting.digests_of(self._connection, uids)
        named = {
            uid
            for envelope in envelopes
            for uid in (
                envelope.subject if envelope.based_on is not None else None,
                envelope.site,
                envelope.system,
                envelope.visit,
            )
            if uid is not None
        }
        self._rows.update(rows_of(self._connection, named))

    def _known(self, text: _Text) -> Receipt | Refusal | _Waits | None:
        """Return what is answered where the uid is taken already."""
        uid = text.envelope.uid
        known = self._on_file.get(uid)
        if known is not None and known[1].sha256 == text.sha256:
            self._repeated.append(uid)
            return known[1]
        digest_waiting = self._digest_waiting.get(uid)
        if known is None and digest_waiting is None:
            return None
        if digest_waiting == text.sha256:
            return _Waits("", "")  # on file as such; when what it waits for is in this batch, the release is near
        return Refusal(
            uid,
            "conflict",
            "uid",
            "uid: already saved with another text, and the first stands; correct it instead",
        )

    def _missing(self, envelope: Envelope) -> Refusal | _Waits | None:
        """Return what the envelope names that has not arrived."""
        subject, based_on = envelope.subject, envelope.based_on
        if _place(envelope) not in self._sound_places:
            for field, named in (("site", envelope.site), ("system", envelope.system), ("visit", envelope.visit)):
                if named is not None and named not in self._rows and named != envelope.uid:
                    return self._no_subject(envelope, field, named)
        if based_on is None or based_on == envelope.uid:
            return None
        if subject not in self._rows:
            return self._no_subject(envelope, "subject", subject)
        return None if based_on in self._on_file else _Waits(based_on, "based_on")

    def _no_subject(self, envelope: Envelope, field: str, named: str) -> Refusal | _Waits:
        on_file = self._on_file.get(named)
        found = on_file or self._connection.execute("select subject from entries where uid = ?", (named,)).fetchone()
        if found is None:
            return _Waits(named, field)
        return _refusal(envelope, field, f"{named} is a later version of {found[0]}; name that subject")

    def _fault(self, envelope: Envelope) -> Refusal | None:
        """Return why the envelope does not fit what is on file."""
        return self._fault_of_version(envelope) or self._fault_of_place(envelope)

    def _fault_of_version(self, envelope: Envelope) -> Refusal | None:
        if envelope.based_on is None:
            return None
        based_on = self._on_file.get(envelope.based_on)
        if based_on is None or based_on[0] != envelope.subject:
            return _refusal(envelope, "based_on", "is no earlier version of this subject; name the one it replaces")
        before = self._rows[envelope.subject]
        for field, was, now in (
            ("kind", before.kind, envelope.kind),
            ("site", before.site, site_of(envelope.kind, envelope.subject, envelope.site)),
            ("system", before.system, envelope.system),
        ):
            if now != was:
                return _refusal(
                    envelope,
                    field,
                    f"was {was or 'left out'} in the first version and never changes, found {now or 'left out'}; "
                    "withdraw the subject and make a new one",
                )
        return None

    def _fault_of_place(self, envelope: Envelope) -> Refusal | None:
        place = _place(envelope)
        if place in self._sound_places and envelope.kind != "site":
            return None
        site = site_of(envelope.kind, envelope.subject, envelope.site)
        if envelope.kind == "site" and site != envelope.subject:
            return _refusal(envelope, "site", "a site is not part of another one; leave it out")
        if envelope.system is not None and site is None:
            return _refusal(envelope, "site", "name the site of the system")
        for field, named in (("site", site), ("system", envelope.system), ("visit", envelope.visit)):
            if named is not None and (fault := self._fault_of_reference(envelope, field, named, site)):
                return fault
        self._sound_places.add(place)
        return None

    def _fault_of_reference(self, envelope: Envelope, field: str, named: str, site: str | None) -> Refusal | None:
        row = self._rows.get(named)
        kind, its_site = (row.kind, row.site) if row else (envelope.kind, site)  # no row: the entry names itself
        if kind != field:
            return _refusal(envelope, field, f"{named} is no {field}; name one")
        if site is not None and its_site is not None and its_site != site:
            return _refusal(envelope, field, f"belongs to site {its_site}, the entry to {site}; mend one of them")
        return None

    def _number_it(self, text: _Text, entries: list[tuple[object, ...]]) -> Receipt:
        envelope = text.envelope
        self._number += 1
        self._link = link(self._number, self._received_at, self._link, text.sha256)
        columns = columns_of(text.text)
        entries.append(
            (
                self._number,
                self._received_at,
                text.sha256,
                self._link,
                text.via,
                text.signature,
                text.text,
                *columns,
            )
        )
        subject = envelope.subject
        self._rows[subject] = in_force_after(self._rows.get(subject), self._number, columns)
        receipt = Receipt(envelope.uid, self._number, text.sha256, self._link)
        self._on_file[envelope.uid] = (subject, receipt)
        self.added.append(Added(envelope, receipt))
        return receipt

    def _write(
        self,
        entries: Sequence[tuple[object, ...]],
        changed: Iterable[CurrentRow],
        refused: Sequence[RefusedText],
        waits: Sequence[WaitingText],
    ) -> None:
        self._connection.executemany(_INSERT, entries)
        write_rows(self._connection, changed)
        if refused:
            refusals.keep(self._connection, refused)
        if waits:
            waiting.keep(self._connection, waits)
            self._some_wait = True


def _place(envelope: Envelope) -> tuple[str | None, str | None, str | None]:
    return envelope.site, envelope.system, envelope.visit


def _waiting(text: _Text, waits: _Waits) -> WaitingText:
    return WaitingText(text.envelope.uid, text.text, text.sha256, text.signature, text.via, text.arrived_at, *waits)


def _refusal(envelope: Envelope, field: str, mend: str) -> Refusal:
    return Refusal(envelope.uid, "input", field, f"{field}: {mend}")
