"""Intake: what comes in, what is refused and kept, what waits; nothing holds up the rest."""

from __future__ import annotations

from datetime import date
from typing import Any

import pytest

from fieldlog.canonical import sha256_hex
from fieldlog.procedures.deficiency import Deficiency
from fieldlog.procedures.event import Event
from fieldlog.procedures.fields import Restoration
from fieldlog.procedures.gauge_reading import GaugeReadings
from fieldlog.procedures.note import Note
from fieldlog.procedures.organisation import Organisation
from fieldlog.procedures.remedy import Remedy
from fieldlog.procedures.sign_off import Covered, Signer, SignOff
from fieldlog.procedures.site import Site
from fieldlog.procedures.visit import Visit
from fieldlog.records.entries import Arrival, Receipt, Refusal
from fieldlog.services import intake
from fieldlog.storage import entries, refusals, statements


def test_a_bad_text_holds_up_nothing_and_is_kept(office: Any) -> None:
    good = office.text("note", Note(text="Key with gate 12"))
    result = office.take('{"uid":', good, "not json at all")
    assert [receipt.uid for receipt in result.receipts] == [entries.entry_by_number(
        office.instance.connection, result.receipts[0].number).uid]  # fmt: skip
    assert [refusal.code for refusal in result.refused] == ["input", "input"]
    kept = refusals.kept(office.instance.connection)
    assert {one.text for one in kept} == {'{"uid":', "not json at all"}


def test_outcomes_stand_in_the_order_of_the_texts(office: Any) -> None:
    good, late = office.text("note", Note(text="first")), office.text("note", Note(text="waits"), site=office_uid(77))
    texts = ["[]", good, late, "{}"]
    result = office.take(*texts)
    found = intake.outcomes([Arrival(text) for text in texts], result)
    assert [type(one) for one in found] == [Refusal, Receipt, type(None), Refusal]


def office_uid(number: int) -> str:
    return f"00005eed-0000-4000-8000-{number:012x}"


def test_an_author_nobody_knows_is_refused_by_field(office: Any) -> None:
    result = office.take(office.text("note", Note(text="who?"), author=office_uid(99)))
    assert [(refusal.field, refusal.code) for refusal in result.refused] == [("author", "input")]


def test_one_instance_serves_one_organisation(office: Any) -> None:
    other = office_uid(98)
    result = office.take(office.text("organisation", Organisation(name="Other"), uid=other, author=other, site=None))
    assert [refusal.code for refusal in result.refused] == ["conflict"]


def test_an_entry_waits_for_its_site_and_comes_in_with_it(office: Any) -> None:
    site = office_uid(55)
    note = office.text("note", Note(text="early"), site=site)
    assert len(office.take(note).waiting) == 1
    result = office.take(office.text("site", Site(name="Late site"), uid=site, site=None))
    assert len(result.receipts) == 1
    assert {entry.kind for entry in entries.entries_of_site(office.instance.connection, site)} == {"site", "note"}


def test_the_same_text_again_gets_the_same_receipt_and_another_text_is_refused(office: Any) -> None:
    one = office.text("note", Note(text="one"), uid=office_uid(33))
    other = office.text("note", Note(text="other"), uid=office_uid(33))
    first, again = office.take(one), office.take(one)
    assert again.receipts == first.receipts
    assert again.repeated == (office_uid(33),)
    assert [refusal.code for refusal in office.take(other).refused] == ["conflict"]
    assert entries.entry_by_uid(office.instance.connection, office_uid(33)).body["text"] == "one"


@pytest.mark.parametrize(
    ("role", "kind", "is_taken"),
    [
        ("technician", "note", True),
        ("technician", "organisation", False),
        ("owner", "note", False),
        ("owner", "remedy", True),
        ("office", "event", True),  # by the organisation itself, for the instance
        ("technician", "event", False),
    ],
)
def test_who_may_make_which(office: Any, role: str, kind: str, is_taken: bool) -> None:
    bodies = {
        "note": Note(text="x"),
        "organisation": Organisation(name="Contractor"),
        "remedy": Remedy(
            deficiency=office_uid(1), done_on=date(2026, 3, 4), by="Owner", evidence="photo at the office"
        ),
        "event": Event(what="export"),
    }
    organisation = entries.in_force_of_kind(office.instance.connection, "organisation")[0]
    more: dict[str, Any] = {}
    if kind == "organisation":
        more = {"subject": organisation.subject, "based_on": organisation.uid, "reason": "moved", "site": None}
    result = office.take(office.text(kind, bodies[kind], **more), authority=intake.Authority(role))
    assert ("not_allowed" not in {refusal.code for refusal in result.refused}) == is_taken


@pytest.mark.parametrize(("role", "is_taken"), [("owner", False), ("technician", True), ("office", True)])
def test_an_owner_confirms_no_own_remedy(office: Any, role: str, is_taken: bool) -> None:
    found = Deficiency(text="Grate missing", found_on=date(2026, 3, 4), class_="noncritical", proposed_by="fieldlog")
    remedy = Remedy(
        deficiency=office.enter("deficiency", found), done_on=date(2026, 3, 6), by="Owner", evidence="photo",
        confirmed_by="Owner A",
    )  # fmt: skip
    result = office.take(office.text("remedy", remedy), authority=intake.Authority(role))
    assert bool(result.receipts) == is_taken
    assert [(one.field, one.code) for one in result.refused] == (
        [] if is_taken else [("body.confirmed_by", "not_allowed")]
    )


def test_a_site_that_is_not_granted_is_as_one_that_is_not_there(office: Any) -> None:
    authority = intake.Authority("technician", frozenset({office_uid(3)}))
    result = office.take(office.text("note", Note(text="x")), authority=authority)
    assert [refusal.code for refusal in result.refused] == ["not_allowed"]


@pytest.mark.parametrize("is_batch", [True, False])
@pytest.mark.parametrize("is_shut", [True, False])
def test_what_is_not_back_to_normal_is_not_signed_as_finished(office: Any, is_batch: bool, is_shut: bool) -> None:
    visit = office.enter("visit", Visit(state="open", on=date(2026, 5, 6)))
    body = GaugeReadings(
        performed_on=date(2026, 5, 6), done="partly", not_done_reason="rain",
        restored=Restoration(valves=True, drain_shut=is_shut),
    )  # fmt: skip
    reading = office.text("gauge_reading", body, visit=visit, uid=office_uid(41))
    covers = (Covered(uid=office_uid(41), sha256=sha256_hex(reading)),)
    signer = Signer(role="technician", name="Technician A", strokes="M 3 4 L 15 26")
    signed = SignOff(covers=covers, signers=(signer,), summary="Only the listed items.", signed_on=date(2026, 5, 6))
    sign_off = office.text("sign_off", signed, visit=visit)
    results = [office.take(reading, sign_off)] if is_batch else [office.take(reading), office.take(sign_off)]
    refused = [refusal.field for result in results for refusal in result.refused]
    assert refused == ([] if is_shut else ["body.covers"])


def test_only_what_bears_on_statements_marks_supplies(office: Any, history: Any) -> None:
    history()
    connection = office.instance.connection
    for supply in statements.due(connection, date(2026, 5, 6)):
        assert supply
    from fieldlog.services import judging

    judging.judge_due(connection, date(2026, 5, 6))
    assert statements.due(connection, date(2026, 5, 6)) == []
    office.enter("note", Note(text="no bearing"))
    assert statements.due(connection, date(2026, 5, 6)) == []
