"""Taking entries in: check, keep, give receipts. A bad text never holds up the others.

Judging comes after: callers run `judging.judge_due` once the receipts are out, so that no fault of a judgement can
spoil a receipt; the supplies to judge are marked in the transaction of the entries.
"""

from __future__ import annotations

import json
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

from fieldlog.canonical import sha256_hex
from fieldlog.errors import ConflictError, FieldlogError, InputError, NotAllowedError
from fieldlog.procedures.catalogue import may_make, withheld_from
from fieldlog.procedures.envelope import Envelope
from fieldlog.procedures.read import parse
from fieldlog.records.entries import Arrival, IntakeResult, Receipt, Refusal, Via
from fieldlog.storage import entries, log, refusals, statements
from fieldlog.storage.connection import Connection, transaction
from fieldlog.storage.refusals import RefusedText, refused_text

# Entries of these kinds change no statement.
_WITHOUT_BEARING = {"person", "visit", "note", "sign_off", "event"}


@dataclass(frozen=True, slots=True)
class Authority:
    """On whose authority texts are taken in: a role, and the sites it reaches (None: all)."""

    role: str
    sites: frozenset[str] | None = None


# Whoever may write the instance's folder acts for the office: the command line and the program itself.
OFFICE = Authority("office")


def take_in(
    connection: Connection,
    arrivals: Sequence[Arrival],
    via: Via,
    received_at: str,
    authority: Authority = OFFICE,
) -> IntakeResult:
    """Take a batch in, in one transaction, and return a receipt, a refusal or "waiting" for each text.

    Raises
    ------
    StorageError
        If nothing of the batch could be kept (full disk, busy database); send it again.
    """
    with transaction(connection):
        known = _Known(connection)
        sorted_out = [_sorted_out(arrival, known, authority) for arrival in arrivals]
        good = [(one.envelope, one.arrival) for one in sorted_out if one.refusal is None and one.envelope is not None]
        bad = [one for one in sorted_out if one.refusal is not None]
        refusals.keep(connection, [_to_keep(one, via, received_at) for one in bad])
        appended = log.append(connection, good, via, received_at)
        _mark(connection, [added.envelope for added in appended.added])
    result = appended.result
    before = tuple(one.refusal for one in bad if one.refusal is not None)
    return IntakeResult(result.receipts, before + result.refused, result.waiting, result.repeated)


def outcomes(arrivals: Sequence[Arrival], result: IntakeResult) -> list[Receipt | Refusal | None]:
    """Return what became of each text of a batch, in its order; None: it waits."""
    receipts = {receipt.sha256: receipt for receipt in result.receipts}
    refused = list(result.refused)
    found: list[Receipt | Refusal | None] = []
    for arrival in arrivals:
        receipt = receipts.get(sha256_hex(arrival.text))
        uid = uid_in(arrival.text)
        place = next((i for i, refusal in enumerate(refused) if refusal.uid == uid), None)
        if receipt is not None or uid in result.waiting or place is None:
            found.append(receipt)
        else:
            found.append(refused.pop(place))
    return found


def uid_in(text: str) -> str:
    """Return the uid an entry's maker gave, as far as it can be read out of a text that may be anything."""
    try:
        plain = json.loads(text)
    except (ValueError, RecursionError):
        return ""
    uid = plain.get("uid") if isinstance(plain, dict) else None
    return uid[:64] if isinstance(uid, str) else ""


@dataclass(frozen=True, slots=True)
class _SortedOut:
    """A text with what could be read of it, and why it can't be taken."""

    arrival: Arrival
    envelope: Envelope | None
    refusal: Refusal | None


def _sorted_out(arrival: Arrival, known: _Known, authority: Authority) -> _SortedOut:
    envelope = None
    try:
        envelope = parse(arrival.text).envelope
        known.admit(envelope, authority)
    except FieldlogError as error:
        named, colon, _ = error.message.partition(":")
        field = error.field if isinstance(error, InputError) else named if colon and " " not in named else "kind"
        uid = envelope.uid if envelope is not None else uid_in(arrival.text)
        return _SortedOut(arrival, envelope, Refusal(uid, error.code, field, error.message))
    return _SortedOut(arrival, envelope, None)


def _to_keep(one: _SortedOut, via: Via, received_at: str) -> RefusedText:
    if one.refusal is None:
        raise ValueError("only what was refused is kept as refused")
    return refused_text(one.refusal, one.arrival.text, received_at, via, one.envelope)


class _Known:
    """Who is on file, as far as this batch goes."""

    def __init__(self, connection: Connection) -> None:
        on_file = entries.in_force_of_kind(connection, "person", "organisation")
        self.people = {entry.subject for entry in on_file}
        self.organisation = next((e.subject for e in on_file if e.kind == "organisation"), None)
        self.connection = connection
        self.restored: dict[str, Mapping[str, object]] = {}  # of entries in this batch, by uid

    def admit(self, envelope: Envelope, authority: Authority) -> None:
        """Let the entry in, or raise why not."""
        self._admit_organisation(envelope)
        if envelope.author not in self.people:
            raise InputError(
                f"author: {envelope.author} is not on file; send the author's own entry first", field="author"
            )
        by_itself = envelope.author == self.organisation and authority == OFFICE
        if not may_make(authority.role, envelope.kind) and not (by_itself and envelope.kind == "event"):
            raise NotAllowedError(
                f"kind: the role {authority.role} may not make a {envelope.kind} entry; ask the office",
            )
        withheld = sorted(withheld_from(authority.role, envelope.kind) & envelope.body.keys())
        if withheld:
            raise NotAllowedError(f"body.{withheld[0]}: the role {authority.role} may not state it; ask the office")
        if authority.sites is not None and envelope.site is not None and envelope.site not in authority.sites:
            raise NotAllowedError(f"site: {envelope.site} is not on file, or not for you; ask the office")
        if envelope.kind == "sign_off":
            self._require_restored(envelope)
        if envelope.kind == "person":
            self.people.add(envelope.subject)
        if envelope.body.get("restored"):
            self.restored[envelope.uid] = envelope.body["restored"]

    def _require_restored(self, sign_off: Envelope) -> None:
        """Refuse to sign as finished what says itself that something is not back to normal."""
        for covered in sign_off.body["covers"]:
            restored = self.restored.get(covered["uid"]) or self._restored_on_file(covered["uid"])
            still_open = sorted(name for name, state in restored.items() if state is False)
            if still_open:
                raise InputError(
                    f"body.covers: entry {covered['uid']} says that {', '.join(still_open)} is not back to normal; "
                    "restore it and correct the entry, or leave the visit open",
                    field="body.covers",
                )

    def _restored_on_file(self, uid: str) -> Mapping[str, object]:
        entry = entries.entry_by_uid(self.connection, uid)
        return {} if entry is None else entry.body.get("restored", {})

    def _admit_organisation(self, envelope: Envelope) -> None:
        if envelope.kind != "organisation":
            return
        if self.organisation not in {None, envelope.subject}:
            raise ConflictError(
                f"this instance serves the organisation {self.organisation} already; one instance serves one"
            )
        if self.organisation is None and envelope.author != envelope.subject:
            raise InputError("author: an organisation's first entry is its own", field="author")
        self.organisation = envelope.subject
        self.people.add(envelope.subject)


def _mark(connection: Connection, added: Iterable[Envelope]) -> None:
    sites: set[str] = set()
    for envelope in added:
        if envelope.kind in _WITHOUT_BEARING:
            continue
        site = envelope.subject if envelope.kind == "site" else envelope.site
        if site is None:
            statements.mark_all_dirty(connection)
        else:
            sites.add(site)
    statements.mark_sites_dirty(connection, sites)
