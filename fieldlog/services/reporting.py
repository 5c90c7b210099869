"""Making and checking reports: a visit's content settled, put on pages, sealed, filed and told to the log."""

from __future__ import annotations

import json
from collections.abc import Iterable, Iterator
from dataclasses import dataclass
from datetime import date, datetime
from pathlib import Path

from fieldlog.canonical import canonical_text, sha256_hex
from fieldlog.clock import new_uid, timestamp
from fieldlog.errors import ConflictError
from fieldlog.procedures.compose import compose
from fieldlog.procedures.event import Event
from fieldlog.records.entries import Arrival, Entry
from fieldlog.reports import pages, seal
from fieldlog.reports.content import Revision, VisitReport
from fieldlog.reports.identity import load_trust_roots
from fieldlog.reports.verdict import SealVerdict, verify
from fieldlog.services import intake
from fieldlog.services.instance import Instance, ensure_sealing_key, organisation_of
from fieldlog.services.report_content import visit_report
from fieldlog.services.report_scope import Scope, is_changed_since, scope_of
from fieldlog.storage import entries, files, reports
from fieldlog.storage.connection import transaction
from fieldlog.storage.reports import StoredReport


@dataclass(frozen=True, slots=True)
class MadeReport:
    """A sealed report on file."""

    path: Path
    name: str
    sha256: str
    revision: int
    head: str


@dataclass(frozen=True, slots=True)
class VisitRow:
    """One visit for a list."""

    uid: str
    on: date
    site: str
    state: str


@dataclass(frozen=True, slots=True)
class Checked:
    """What was found of a report: its seal, its records against the log, its head."""

    seal: SealVerdict
    records: tuple[str, ...]  # what differs; empty where all are equal to the log
    head_number: int | None  # number of the entry whose link is the head; None where the log has none
    is_on_file: bool

    @property
    def is_good(self) -> bool:
        """Whether seal, records and head all hold."""
        return self.seal.is_good and not self.records and self.head_number is not None

    def lines(self) -> Iterator[str]:
        """Return what was found, a line each."""
        if self.seal.is_good:
            yield f"seal: good, by {self.seal.signer_name}; it covers the whole file"
        else:
            yield from (f"seal: {reason}" for reason in self.seal.reasons)
        yield from (f"records: {difference}" for difference in self.records)
        if not self.records:
            yield "records: equal to the log"
        if self.head_number is None:
            yield "head: not in this log"
        else:
            yield f"head: that of entry {self.head_number}"
        yield "file: made by this instance" if self.is_on_file else "file: not among the reports made here"


def make_report(instance: Instance, visit: str, at: datetime, *, accept_missing_photos: bool = False) -> MadeReport:
    """Make the next revision of a visit's report, seal and file it, and return it.

    The same sign-off twice gives the report that is on file.

    Raises
    ------
    NotFoundError
        If there is no such visit.
    ConflictError
        If it is not signed off, an entry was changed since, or a photo has not arrived.
    SigningError
        If the sealing key is missing or unreadable; nothing is filed unsealed.
    """
    connection = instance.connection
    scope = scope_of(connection, visit, at.date())
    earlier = reports.of_visit(connection, visit)
    if earlier and earlier[-1].sign_off == scope.sign_off.entry.uid:
        return _on_file(instance, earlier[-1], scope, _printed_head(instance, earlier[-1]))
    if is_changed_since(connection, scope):
        raise ConflictError("entries of the visit were changed since it was signed; have it signed again")
    missing = _missing_photos(instance, scope)
    if missing and not accept_missing_photos:
        raise ConflictError(f"{len(missing)} photos have not arrived; wait for them, or use --without-photos")
    content = visit_report(scope, at, _revision(earlier, scope), len(missing))
    return _seal_and_file(instance, scope, content, len(earlier) + 1, at)


def _seal_and_file(instance: Instance, scope: Scope, content: VisitReport, revision: int, at: datetime) -> MadeReport:
    ensure_sealing_key(instance, at)
    unsigned = pages.report_pdf(content)
    sealed = seal.seal(unsigned, seal.load_signer(instance.settings.keys), at, reason=content.heading)
    sha256 = files.put(instance.settings.files, sealed)
    stored = StoredReport(
        sha256=sha256,
        visit=scope.visit.entry.subject,
        sign_off=scope.sign_off.entry.uid,
        revision=revision,
        made_at=timestamp(at),
        unsigned_sha256=sha256_hex(unsigned),
        size=len(sealed),
    )
    with transaction(instance.connection):
        reports.add(instance.connection, stored)
    _tell_the_log(instance, scope, stored, at)
    return _on_file(instance, stored, scope, scope.head)


def _tell_the_log(instance: Instance, scope: Scope, stored: StoredReport, at: datetime) -> None:
    organisation = organisation_of(instance).subject
    body = Event(
        what="report made",
        about=stored.visit,
        sha256=stored.sha256,
        unsigned_sha256=stored.unsigned_sha256,
        revision=stored.revision,
        head=scope.head,
    )
    text = compose(
        "event", body, uid=new_uid(), author=organisation, made_at=timestamp(at), site=scope.site.subject,
        visit=stored.visit,
    )  # fmt: skip
    result = intake.take_in(instance.connection, [Arrival(text)], "server", timestamp(at))
    for refusal in result.refused:
        raise ConflictError(f"the report is on file, but the log did not take its event: {refusal.message}")


def _printed_head(instance: Instance, stored: StoredReport) -> str:
    """Return the head that a report on file carries, as its event tells it."""
    told = entries.in_force_at_visit(instance.connection, stored.visit, ("event",))
    return next((str(event.body["head"]) for event in told if event.body.get("sha256") == stored.sha256), "")


def _on_file(instance: Instance, stored: StoredReport, scope: Scope, head: str) -> MadeReport:
    path = files.path_of(instance.settings.files, stored.sha256)
    site = "".join(char if char.isalnum() else "-" for char in str(scope.site.body["name"])).strip("-")
    name = f"{site}-{scope.on.isoformat()}-revision-{stored.revision}.pdf"
    return MadeReport(path, name, stored.sha256, stored.revision, head)


def write_copy(made: MadeReport, folder: Path) -> Path:
    """Write a copy of a report under a name for people, and return its path."""
    folder.mkdir(parents=True, exist_ok=True)
    target = folder / made.name
    target.write_bytes(made.path.read_bytes())
    return target


def verify_report(instance: Instance, pdf: bytes) -> Checked:
    """Return what can be said of a file that claims to be a report of this instance; nothing is kept."""
    found = verify(pdf, load_trust_roots(instance.settings.keys))
    differences, head_number = _records_against_log(instance, found.records_json)
    is_on_file = reports.by_sha256(instance.connection, sha256_hex(pdf)) is not None
    return Checked(found, differences, head_number, is_on_file)


def visit_rows(instance: Instance) -> list[VisitRow]:
    """Return all visits, the newest first."""
    sites = {entry.subject: str(entry.body["name"]) for entry in _in_force(instance, "site")}
    rows = [_visit_row(instance, entry, sites) for entry in _in_force(instance, "visit")]
    return sorted(rows, key=lambda row: row.on, reverse=True)


def _visit_row(instance: Instance, entry: Entry, sites: dict[str, str]) -> VisitRow:
    body = entry.body
    on = date.fromisoformat(str(body.get("on") or body.get("planned_for") or entry.made_at[:10]))
    made = reports.of_visit(instance.connection, entry.subject)
    state = f"report revision {made[-1].revision}" if made else str(body["state"])
    return VisitRow(entry.subject, on, sites.get(str(entry.site), str(entry.site)), state)


def _in_force(instance: Instance, kind: str) -> list[Entry]:
    return entries.in_force_of_kind(instance.connection, kind)


def _revision(earlier: list[StoredReport], scope: Scope) -> Revision | None:
    if not earlier:
        return None
    reason = scope.sign_off.entry.reason or "signed again"
    return Revision(f"revision {len(earlier) + 1}", f"revision {earlier[-1].revision} ({earlier[-1].sha256})", reason)


def _missing_photos(instance: Instance, scope: Scope) -> list[str]:
    named = (photo.sha256 for one in scope.covered for photo in getattr(one.body, "photos", ()))
    return [sha256 for sha256 in named if not files.has(instance.settings.files, sha256)]


def _records_against_log(instance: Instance, records: bytes | None) -> tuple[tuple[str, ...], int | None]:
    if records is None:
        return ("the file holds no records",), None
    try:
        plain = json.loads(records)
        kept, head = plain["entries"], plain["head"]
        differences = tuple(_differences(instance, kept))
    except (ValueError, TypeError, KeyError, RecursionError):
        return ("the records in the file can't be read",), None
    found = entries.entry_by_link(instance.connection, head) if isinstance(head, str) else None
    return differences, None if found is None else found.number


def _differences(instance: Instance, kept: Iterable[dict[str, object]]) -> Iterator[str]:
    for record in kept:
        number = record["number"]
        entry = entries.entry_by_number(instance.connection, int(str(number)))
        if entry is None:
            yield f"entry {number} is not in this log"
        elif canonical_text(record) != canonical_text(_record(entry)):
            yield f"entry {number} is not the one in this log"


def _record(entry: Entry) -> dict[str, object]:
    return {
        "link": entry.link,
        "number": entry.number,
        "received_at": entry.received_at,
        "sha256": entry.sha256,
        "text": entry.text,
    }
