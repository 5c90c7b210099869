"""The content of a visit's report: what is so, then the pictures, then every number, in words of the reader."""

from __future__ import annotations

from collections.abc import Iterator
from datetime import datetime
from typing import Any

from fieldlog.assessment.codes import ReasonCode
from fieldlog.assessment.due import profiles_in_force
from fieldlog.canonical import canonical_text
from fieldlog.procedures.catalogue import PROCEDURES
from fieldlog.procedures.histories import Typed
from fieldlog.procedures.rows import rows
from fieldlog.records.history import Gauge, SupplyHistory, System
from fieldlog.records.rules import RuleProfile
from fieldlog.records.statement import Statement, SystemStatement
from fieldlog.reports.content import (
    Block,
    Facts,
    Finding,
    Items,
    Party,
    Reading,
    Revision,
    Row,
    Section,
    Signature,
    StatedSystem,
    TestRecord,
    VisitReport,
)
from fieldlog.services.report_pictures import pictures
from fieldlog.services.report_scope import Scope
from fieldlog.services.report_tables import comparison_table, due_table, every_test_table
from fieldlog.wording import notices
from fieldlog.wording.quantities import Reader, day
from fieldlog.wording.reasons import reason_with_entries
from fieldlog.wording.statements import (
    blind_loss_sentence,
    deciding_margin,
    demand_sentence,
    digits_of,
    statement_sentence,
    ten_percent_sentence,
)
from fieldlog.wording.steps import cannot_show_sentence, next_sentence, what_to_check

# Reasons whose numbers the sentences above or the sections below already give.
_SAID_ELSEWHERE = {ReasonCode.TEN_PERCENT, ReasonCode.MARGIN_MEASURED, ReasonCode.HOLDING}

# Fields that stand elsewhere on the page, or are of use to programs only.
_NOT_PRINTED = {
    "Performed on",
    "Done",
    "Standing",
    "Cautions ticked",
    "Item",
    "Start",
    "End",
    "Edition and clause it answers",
}


def visit_report(scope: Scope, made_at: datetime, revision: Revision | None, missing_photos: int = 0) -> VisitReport:
    """Return the worded content of the report."""
    site_name = str(scope.site.body["name"])
    when = day(scope.on)
    label = "" if revision is None else f" · {revision.label}"
    return VisitReport(
        name=f"{site_name} · visit of {when}{label}",
        heading=f"Visit of {when}",
        organisation=_party(scope.organisation.body),
        site=_party(scope.site.body),
        made_at=made_at,
        head=scope.head,
        records_json=records_json(scope),
        summary=tuple(_summary(scope, missing_photos)),
        statements=tuple(_stated(scope, said) for said in _printed(scope)),
        sections=tuple(_sections(scope)),
        cautions=tuple(_cautions(scope)),
        standards=tuple(_standards(scope)),
        cannot_show=tuple(_cannot_show(scope)),
        limits=notices.EVERY_REPORT,
        signatures=tuple(_signatures(scope)),
        signed_text=scope.sign_off.body.summary,
        log=(Row("Newest entry of the log", str(scope.newest)), Row("Entries covered", str(len(scope.covered)))),
        revision=revision,
    )


def records_json(scope: Scope) -> bytes:
    """Return the covered entries and the sign-off as they stand in the log, for `records.json` in the file."""
    kept = sorted([*scope.covered, scope.sign_off], key=lambda one: one.entry.number)
    entries = [
        {
            "link": one.entry.link,
            "number": one.entry.number,
            "received_at": one.entry.received_at,
            "sha256": one.entry.sha256,
            "text": one.entry.text,
        }
        for one in kept
    ]
    return canonical_text({"entries": entries, "format": "fieldlog-records-1", "head": scope.head}).encode()


def _party(body: Any) -> Party:  # noqa: ANN401  a plain body
    said = [body.get("address"), body.get("owner"), f"licence {body['licence']}" if body.get("licence") else None]
    return Party(str(body["name"]), tuple(line for text in said if text for line in str(text).splitlines()))


def _summary(scope: Scope, missing_photos: int) -> Iterator[Row]:
    visit, signers = scope.visit.body, scope.sign_off.body.signers
    yield Row("Date", day(scope.on))
    for signer in signers:
        yield Row(signer.role.capitalize(), signer.name, note=f"licence {signer.licence}" if signer.licence else "")
    for label, value in (
        ("Weather", visit.weather), ("Fire pump", visit.pump_state), ("Monitoring told", visit.monitoring),
        ("Where water went", visit.discharge),
    ):  # fmt: skip
        if value:
            yield Row(label, value)
    done = [PROCEDURES[one.entry.kind].label for one in scope.covered if PROCEDURES[one.entry.kind].is_test]
    counts = {label: done.count(label) for label in dict.fromkeys(done)}
    yield Row("Tests", ", ".join(f"{label} × {count}" if count > 1 else label for label, count in counts.items()))
    for left in visit.not_done:
        agreed = f"agreed for {day(left.agreed_for)}" if left.agreed_for else ""
        yield Row("Due, not done", f"{left.item}: {left.reason}", note=agreed)
    if missing_photos:
        yield Row("Photos", f"{missing_photos} not received", note="closed by the office without them")


def _printed(scope: Scope) -> list[SystemStatement]:
    """Return the statements on the systems that were tested, or on all of the site where none was."""
    tested = [said for said in scope.said if said.system in scope.tested_systems]
    return tested or list(scope.said)


def _stated(scope: Scope, said: SystemStatement) -> StatedSystem:
    names = {uid: scope.name_of(uid) for uid in (said.system,)}
    profile = _profile(scope, said)
    by = f" · by {profile.standard}, {profile.edition}" if profile is not None and _several(scope) else ""
    return StatedSystem(
        system=scope.name_of(said.system) + by,
        statement=said.worst.value,
        sentence=statement_sentence(said, scope.units, names),
        reasons=tuple(reason_sentences(scope, said)),
        cannot_show=tuple(_blind(scope, said)),
    )


def reason_sentences(scope: Scope, said: SystemStatement) -> Iterator[str]:
    """Return the sentences under a statement: the criterion, the reasons with their entries, what comes next."""
    names = {uid: scope.name_of(uid) for uid in (said.system,)}
    if said.ten_percent and said.statement is not Statement.CHANGED:
        yield ten_percent_sentence(said.ten_percent)
    for reason in (*said.reasons, *said.findings):
        if reason.code not in _SAID_ELSEWHERE:
            yield reason_with_entries(reason, scope.units, names)
    if len(said.next) > 1:
        yield "After that: " + "; ".join(next_sentence(code) for code in said.next[1:]) + "."


def _blind(scope: Scope, said: SystemStatement) -> Iterator[str]:
    if said.blind_loss is not None:
        yield blind_loss_sentence(said.blind_loss, scope.units, finer=digits_of(said, scope.units))


def _several(scope: Scope) -> bool:
    return len({said.profile for said in scope.said}) > 1


def _profile(scope: Scope, said: SystemStatement) -> RuleProfile | None:
    profiles = (profile for history in scope.histories for profile in history.profiles)
    return next((profile for profile in profiles if profile.uid == said.profile), None)


def _sections(scope: Scope) -> Iterator[Section]:
    findings = [_finding(scope, one) for one in scope.covered if one.entry.kind in {"deficiency", "remedy"}]
    if findings:
        yield Section("Findings", tuple(findings))
    said = {one.system: one for one in reversed(_printed(scope))}
    rounds = [_test(scope, one) for one in scope.covered if _about(one) is None]
    if rounds:
        yield Section("Of the whole site", tuple(rounds))
    for history in scope.histories:
        blocks = [_test(scope, one) for one in scope.covered if _about(one) == history.supply.uid]
        if blocks:
            yield Section(f"Water supply: {history.supply.name}", tuple(blocks))
        for system in history.systems:
            if system.uid in said:
                yield _system_section(scope, history, system, said[system.uid])


def _about(one: Typed) -> str | None:
    """Return the system or supply a test is about; None for a round of the whole site, "" for what is no test."""
    if not PROCEDURES[one.entry.kind].is_test:
        return ""
    about: str | None = one.entry.system or getattr(one.body, "supply", None)
    return about


def _system_section(scope: Scope, history: SupplyHistory, system: System, said: SystemStatement) -> Section:
    tests = [
        _test(scope, one)
        for one in scope.covered
        if PROCEDURES[one.entry.kind].is_test
        and (one.entry.system == system.uid or system.uid in getattr(one.body, "serves", ()))
    ]
    margin = deciding_margin(said)
    checks = what_to_check(said.checks)
    blocks: list[Block] = [
        *pictures(history, system, said, scope.units),
        *([Items((demand_sentence(margin, scope.units),))] if margin is not None else []),
        *comparison_table(system, said, scope.units),
        *([Items(checks, "Likely places to look; a qualified person decides")] if checks else []),
        *tests,
        _particulars(scope, history, system),
        *every_test_table(system, said, scope.units),
        *due_table(history, system, said.as_of, scope.name_of),
    ]
    return Section(system.name, tuple(blocks), f"{system.type} system on {history.supply.name}")


def _particulars(scope: Scope, history: SupplyHistory, system: System) -> Facts:
    reader = Reader(scope.units)
    kind = history.supply.kind.replace("_", " ")
    found = [Row("Type", system.type), Row("Water supply", history.supply.name, note=kind)]
    if system.drain is not None and system.drain.size_in is not None:
        found.append(Row("Main drain", f"{system.drain.size_in:g}", "in.", system.drain.outlet))
    design = system.design
    if design is not None and design.demand_flow_gpm is not None and design.demand_pressure_psi is not None:
        demand = f"{reader.flow(design.demand_flow_gpm)} at {reader.pressure(design.demand_pressure_psi)}"
        found.append(Row("Recorded demand at base of riser", demand))
    found += [Row("Gauge", gauge_line(gauge, scope)) for gauge in system.gauges if gauge.ended_on is None]
    return Facts(tuple(found), "Particulars")


def gauge_line(gauge: Gauge, scope: Scope) -> str:
    """Return a gauge with its range, division, grade and last comparison."""
    reader = Reader(scope.units)
    parts = [gauge.name]
    if gauge.full_scale_psi is not None:
        parts.append(f"0 to {reader.pressure(gauge.full_scale_psi)}")
    if gauge.division_psi is not None:
        parts.append(f"divisions of {reader.pressure(gauge.division_psi)}")
    if gauge.grade:
        parts.append(f"grade {gauge.grade}")
    parts.append(
        f"compared {day(gauge.comparisons[-1].performed_on)}" if gauge.comparisons else "no comparison on file"
    )
    return ", ".join(parts)


def _test(scope: Scope, one: Typed) -> TestRecord:
    procedure = PROCEDURES[one.entry.kind]
    printed = rows(one.body, scope.name_of)
    readings = [row for row in printed if row.is_reading]
    facts = [row for row in printed if not row.is_reading and row.label not in _NOT_PRINTED and row.value != "no"]
    gauges = {gauge.uid: gauge for history in scope.histories for gauge in _gauges(history)}
    return TestRecord(
        title=procedure.label,
        subtitle=_subtitle(scope, one),
        readings=tuple(
            Reading(
                row.label,
                row.value,
                row.unit,
                gauge_line(gauges[row.gauge], scope) if row.gauge in gauges else "",
                row.note,
            )
            for row in readings
        ),
        facts=tuple(Row(row.label, row.value, row.unit, row.note) for row in facts),
        remarks=tuple(_remarks(one)),
        entry=_entry_line(one),
    )


def _gauges(history: SupplyHistory) -> Iterator[Gauge]:
    yield from history.supply_gauges
    yield from history.organisation_gauges
    for system in history.systems:
        yield from system.gauges


def _subtitle(scope: Scope, one: Typed) -> str:
    body = one.body
    parts = [day(body.performed_on)]
    if body.start:
        parts.append(f"from {body.start}" + (f" to {body.end}" if body.end else ""))
    if body.item:
        parts.append(body.item)
    parts.append(f"by {scope.name_of(one.entry.author)}")
    if body.standing != "routine":
        parts.append(body.standing)
    if body.answers:
        parts.append(body.answers)
    return " · ".join(parts)


def _remarks(one: Typed) -> Iterator[str]:
    said = (
        notices.origin_notice(one.entry.via, getattr(one.body, "source", "")),
        notices.limit_of_kind(one.entry.kind),
        f"Reason: {one.body.not_done_reason}" if one.body.not_done_reason else "",
    )
    yield from (sentence for sentence in said if sentence)


def _entry_line(one: Typed) -> str:
    line = f"entry {one.entry.number}"
    if one.entry.based_on is not None:
        line += f", a correction: {one.entry.reason}"
    return line


def _finding(scope: Scope, one: Typed) -> Finding:
    body = one.body
    if one.entry.kind == "remedy":
        text = body.text or body.evidence or ""
        return Finding(f"Remedy, done {day(body.done_on)} by {body.by}", text, ())
    decided = f"decided by {body.decided_by}" if body.decided_by else f"proposed by {body.proposed_by}, not decided yet"
    told = [Row("Told", notified.who, note=notified.how or "") for notified in body.notified]
    where = scope.name_of(one.entry.system) if one.entry.system else scope.name_of(str(one.entry.site))
    return Finding(f"{body.class_.capitalize()} ({decided}) · {where}", body.text, tuple(told))


def _cautions(scope: Scope) -> Iterator[str]:
    ticked = {code for one in scope.covered for code in getattr(one.body, "cautions", ())}
    seen = set()
    for one in scope.covered:
        for caution in PROCEDURES[one.entry.kind].cautions:
            if caution.code not in seen:
                seen.add(caution.code)
                state = "ticked" if caution.code in ticked else "to heed, not ticked"
                yield f"{caution.text} ({state})"


def _standards(scope: Scope) -> Iterator[str]:
    profiles = {
        profile.uid: profile for history in scope.histories for profile in profiles_in_force(history.profiles, scope.on)
    }
    if not profiles:
        yield notices.STANDARD_NOT_RECORDED
    for profile in profiles.values():
        amended = f", amended: {profile.amendment}" if profile.amendment else ""
        where = f", {profile.jurisdiction}" if profile.jurisdiction else ""
        yield (
            f"{profile.standard}, edition {profile.edition}{amended}{where}; values approved by "
            f"{profile.approved_by} on {day(profile.approved_on)}."
        )
        memory = sum(rule.mark != "approved" for rule in profile.rules)
        if memory:
            yield f"{memory} of its rows were approved by nobody; they are no requirements of a clause."


def _cannot_show(scope: Scope) -> Iterator[str]:
    codes = dict.fromkeys(code for said in _printed(scope) for code in said.cannot_show)
    yield from (cannot_show_sentence(code) for code in codes)


def _signatures(scope: Scope) -> Iterator[Signature]:
    body = scope.sign_off.body
    for signer in body.signers:
        lines = [f"licence {signer.licence}" if signer.licence else "", f"signed {day(body.signed_on)}"]
        yield Signature(
            role=signer.role,
            name=signer.name,
            lines=tuple(line for line in lines if line),
            strokes=signer.strokes or "",
            typed_reason=signer.typed_reason or "",
        )
