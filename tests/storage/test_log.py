"""What the log does with what comes: each rule of subject, version, correction, repeat, refusal and waiting."""

from __future__ import annotations

import pytest

from fieldlog.canonical import sha256_hex
from fieldlog.storage import entries, log, refusals, waiting
from fieldlog.storage.chain import FIRST_LINK, link
from fieldlog.storage.connection import Connection, transaction
from tests.storage.made import (
    AT,
    LATER,
    ORGANISATION,
    OTHER_SITE,
    PERSON,
    SITE,
    SUPPLY,
    SYSTEM,
    VISIT,
    Made,
    drain_test,
    entry,
    register,
    take,
    uid,
    version,
)


def in_force(connection: Connection, subject: str) -> str:
    current = entries.current_of(connection, subject)
    assert current is not None
    return current.uid


def is_forked(connection: Connection, subject: str) -> bool:
    return subject in {each.subject for each in entries.forked(connection)}


def test_an_empty_log_has_a_head_to_start_from(empty: Connection) -> None:
    assert log.head(empty) == log.Head(0, FIRST_LINK, "")


def test_a_receipt_names_number_hash_and_the_entrys_own_link(empty: Connection) -> None:
    organisation, person = register()[:2]
    first, second = take(empty, organisation, person).result.receipts
    assert (first.uid, first.number, first.sha256) == (ORGANISATION, 1, sha256_hex(organisation[1].text))
    assert first.head == link(1, AT, FIRST_LINK, first.sha256)
    assert (second.uid, second.number) == (PERSON, 2)
    assert second.head == link(2, AT, first.head, second.sha256)
    assert log.head(empty) == log.Head(2, second.head, AT)


def test_an_entry_comes_back_as_it_was_sent(connection: Connection) -> None:
    made = drain_test(31, device=uid(90), device_number=7)
    take(connection, made, via="tablet", at=LATER)
    found = entries.entry_by_uid(connection, uid(31))
    assert found is not None
    assert (found.text, found.received_at, found.via, found.number) == (made[1].text, LATER, "tablet", 8)
    assert (found.kind, found.subject, found.author, found.site) == (
        "main_drain_test",
        uid(31),
        ORGANISATION,
        SITE,
    )
    assert (found.system, found.visit, found.device, found.device_number) == (SYSTEM, VISIT, uid(90), 7)
    assert found.body == {"performed_on": "2023-11-17", "residual": {"value": "74", "unit": "psi"}}
    assert (found.based_on, found.reason, found.withdrawn, found.signature) == (None, None, False, None)


def test_a_signature_is_kept(connection: Connection) -> None:
    envelope, arrival = drain_test(31)
    take(connection, (envelope, type(arrival)(arrival.text, "c2lnbmVk")))
    found = entries.entry_by_uid(connection, uid(31))
    assert found is not None
    assert found.signature == "c2lnbmVk"


def test_the_same_text_again_gets_the_same_receipt(connection: Connection) -> None:
    made = drain_test(31)
    first = take(connection, made).result
    again = take(connection, made, drain_test(32), at=LATER)
    assert again.result.receipts[0] == first.receipts[0]
    assert again.result.repeated == (uid(31),)
    assert [each.receipt.number for each in again.added] == [9]
    assert refusals.count(connection) == 0


def test_the_same_text_twice_in_one_batch_is_one_entry(connection: Connection) -> None:
    made = drain_test(31)
    result = take(connection, made, drain_test(32), made).result
    assert [receipt.number for receipt in result.receipts] == [8, 9, 8]
    assert result.repeated == (uid(31),)
    assert entries.count(connection) == 9


@pytest.mark.parametrize("apart", [False, True])
def test_another_text_under_the_same_uid_is_refused_and_kept(connection: Connection, *, apart: bool) -> None:
    first, other = drain_test(31), drain_test(31, reason="another")
    result = [take(connection, first), take(connection, other)] if apart else [take(connection, first, other)]
    (refused,) = result[-1].result.refused
    assert (refused.uid, refused.code, refused.field) == (uid(31), "conflict", "uid")
    assert "correct it instead" in refused.message
    found = entries.entry_by_uid(connection, uid(31))
    assert found is not None
    assert found.text == first[1].text
    (kept,) = refusals.kept_of(connection, uid(31))
    assert (kept.text, kept.refusal) == (other[1].text, refused)


def test_a_bad_one_holds_up_nothing_else(connection: Connection) -> None:
    result = take(
        connection,
        drain_test(31),
        drain_test(32, site=OTHER_SITE),
        drain_test(33, site=uid(99), system=None, visit=None),
        drain_test(34),
    ).result
    assert [receipt.uid for receipt in result.receipts] == [uid(31), uid(34)]
    assert [(refusal.uid, refusal.field) for refusal in result.refused] == [(uid(32), "system")]
    assert result.waiting == (uid(33),)


def test_a_correction_comes_into_force_and_the_corrected_one_stays(connection: Connection) -> None:
    made = drain_test(31)
    take(connection, made, version(made, 41, uid(31)))
    assert in_force(connection, uid(31)) == uid(41)
    assert not is_forked(connection, uid(31))
    assert [each.uid for each in entries.versions(connection, uid(31))] == [uid(31), uid(41)]
    assert [each.uid for each in entries.in_force_of_system(connection, SYSTEM)] == [uid(41)]


def test_a_correction_of_a_correction(connection: Connection) -> None:
    made = drain_test(31)
    take(connection, made, version(made, 41, uid(31)), version(made, 42, uid(41)))
    assert in_force(connection, uid(31)) == uid(42)
    assert not is_forked(connection, uid(31))


def test_a_fork_is_kept_and_the_one_in_force_stays(connection: Connection) -> None:
    made = drain_test(31)
    take(connection, made, version(made, 41, uid(31)), version(made, 42, uid(31), "read by another"))
    assert in_force(connection, uid(31)) == uid(41)
    assert is_forked(connection, uid(31))
    assert [each.uid for each in entries.versions(connection, uid(31))] == [uid(31), uid(41), uid(42)]


def test_a_third_version_settles_a_fork(connection: Connection) -> None:
    made = drain_test(31)
    take(connection, made, version(made, 41, uid(31)), version(made, 42, uid(31)))
    take(connection, version(made, 43, uid(41), "the second gauge was right"))
    assert in_force(connection, uid(31)) == uid(43)
    assert not is_forked(connection, uid(31))


def test_a_version_from_a_tablet_does_not_settle_a_fork_it_may_not_know_of(connection: Connection) -> None:
    made = drain_test(31)
    take(connection, made, version(made, 41, uid(31)), version(made, 42, uid(31)))
    take(connection, version(made, 43, uid(41), device=uid(90), device_number=5))
    assert in_force(connection, uid(31)) == uid(43)
    assert is_forked(connection, uid(31))
    take(connection, version(made, 44, uid(43), "as the office decided"))
    assert not is_forked(connection, uid(31))


def test_a_version_based_on_the_fork_settles_nothing(connection: Connection) -> None:
    made = drain_test(31)
    take(connection, made, version(made, 41, uid(31)), version(made, 42, uid(31)), version(made, 43, uid(42)))
    assert in_force(connection, uid(31)) == uid(41)
    assert is_forked(connection, uid(31))


def test_a_withdrawal_takes_a_subject_out_of_force_and_a_later_version_brings_it_back(
    connection: Connection,
) -> None:
    made = drain_test(31)
    take(connection, made, version(made, 41, uid(31), "wrong system", withdrawn=True))
    assert entries.in_force_of(connection, uid(31)) is None
    assert entries.in_force_of_system(connection, SYSTEM) == []
    current = entries.current_of(connection, uid(31))
    assert current is not None
    assert (current.uid, current.withdrawn) == (uid(41), True)
    take(connection, version(made, 42, uid(41), "right after all"))
    found = entries.in_force_of(connection, uid(31))
    assert found is not None
    assert found.uid == uid(42)


def test_a_withdrawal_of_a_version_that_was_replaced_is_a_fork(connection: Connection) -> None:
    made = drain_test(31)
    take(connection, made, version(made, 41, uid(31)), version(made, 42, uid(31), withdrawn=True))
    assert in_force(connection, uid(31)) == uid(41)
    assert is_forked(connection, uid(31))


@pytest.mark.parametrize(
    ("changed", "field"),
    [
        ({"site": OTHER_SITE, "system": None}, "site"),
        ({"site": None, "system": None}, "site"),
        ({"system": None}, "system"),
        ({"kind": "note"}, "kind"),
    ],
)
def test_site_system_and_kind_of_a_subject_never_change(
    connection: Connection, changed: dict[str, str | None], field: str
) -> None:
    made = drain_test(31)
    take(connection, made)
    (refused,) = take(connection, version(made, 41, uid(31), **changed)).result.refused
    assert (refused.field, refused.code) == (field, "input")
    assert "never changes" in refused.message
    assert in_force(connection, uid(31)) == uid(31)


@pytest.mark.parametrize(
    ("made", "field"),
    [
        (drain_test(31, site=SYSTEM), "site"),
        (drain_test(31, site=uid(31), system=None, visit=None), "site"),
        (drain_test(31, system=SUPPLY), "system"),
        (drain_test(31, visit=SYSTEM), "visit"),
        (drain_test(31, site=None), "site"),
        (drain_test(31, site=OTHER_SITE, system=None), "visit"),
        (drain_test(31, site=OTHER_SITE, visit=None), "system"),
        (entry("site", uid(31), site=SITE), "site"),
        (version(drain_test(31), 41, uid(41), subject=SYSTEM), "based_on"),
        (version(register()[5], 41, SUPPLY), "based_on"),
    ],
)
def test_what_does_not_fit_is_refused_by_field(connection: Connection, made: Made, field: str) -> None:
    result = take(connection, made).result
    assert [refusal.field for refusal in result.refused] == [field]
    assert result.refused[0].message.startswith(f"{field}: ")
    assert refusals.count(connection) == 1
    assert entries.count(connection) == 7


def test_a_later_version_is_not_a_subject(connection: Connection) -> None:
    site = register()[2]
    take(connection, version(site, 41, SITE))
    (refused,) = take(connection, drain_test(31, site=uid(41), system=None, visit=None)).result.refused
    assert refused.field == "site"
    assert SITE in refused.message


def test_a_sites_own_entries_belong_to_it(connection: Connection) -> None:
    take(connection, version(register()[2], 41, SITE))
    assert entries.entries_of_site(connection, SITE)[0].uid == SITE
    found = entries.entry_by_uid(connection, uid(41))
    assert found is not None
    assert found.site == SITE


@pytest.mark.parametrize("first_missing", [2, 5, 6])
def test_what_names_something_that_has_not_arrived_waits_for_it(empty: Connection, first_missing: int) -> None:
    """Site, system and visit; the batch that brings it takes it in."""
    all_of_it = register()
    late = all_of_it.pop(first_missing)
    take(empty, *all_of_it)
    assert take(empty, drain_test(31)).result.waiting == (uid(31),)
    assert uid(31) in {each.uid for each in waiting.every(empty)}
    appended = take(empty, late, at=LATER)
    assert appended.result.receipts[0].uid == late[0].uid
    assert uid(31) in {each.receipt.uid for each in appended.added}
    assert waiting.count(empty) == 0
    found = entries.entry_by_uid(empty, uid(31))
    assert found is not None
    assert found.received_at == LATER


def test_a_version_waits_for_its_subject_and_for_what_it_is_based_on(connection: Connection) -> None:
    made = drain_test(31)
    second, third = version(made, 41, uid(31)), version(made, 42, uid(41))
    assert take(connection, third).result.waiting == (uid(42),)
    assert [each.waits_for for each in waiting.every(connection)] == [uid(31)]
    assert take(connection, made).result.waiting == ()
    assert [(each.waits_for, each.field) for each in waiting.every(connection)] == [(uid(41), "based_on")]
    appended = take(connection, second)
    assert [each.receipt.uid for each in appended.added] == [uid(41), uid(42)]
    assert in_force(connection, uid(31)) == uid(42)


def test_a_batch_in_the_wrong_order_is_taken_in_whole(empty: Connection) -> None:
    made = drain_test(31)
    result = take(empty, version(made, 42, uid(41)), version(made, 41, uid(31)), made, *reversed(register())).result
    assert len(result.receipts) == 10
    assert (result.refused, result.waiting, result.repeated) == ((), (), ())
    assert in_force(empty, uid(31)) == uid(42)


def test_a_waiting_text_sent_again_still_waits_and_another_text_is_refused(connection: Connection) -> None:
    made = drain_test(31, site=uid(99), system=None, visit=None)
    take(connection, made)
    assert take(connection, made).result.waiting == (uid(31),)
    assert waiting.count(connection) == 1
    other = drain_test(31, site=uid(99), system=None, visit=None, reason="another")
    (refused,) = take(connection, other).result.refused
    assert refused.code == "conflict"


@pytest.mark.parametrize("site_first", [False, True])
def test_what_it_waits_for_and_a_repeat_of_it_in_one_batch(connection: Connection, *, site_first: bool) -> None:
    made, site = drain_test(31, site=uid(99), system=None, visit=None), entry("site", uid(99))
    take(connection, made)
    result = take(connection, *([site, made] if site_first else [made, site])).result
    assert {receipt.uid for receipt in result.receipts} == {uid(31), uid(99)}
    assert (result.waiting, result.repeated) == ((), ())
    assert waiting.count(connection) == 0


def test_a_site_is_not_part_of_another_one_whatever_came_before_it(connection: Connection) -> None:
    result = take(connection, entry("note", uid(31), site=SITE), entry("site", uid(32), site=SITE)).result
    assert [(refusal.uid, refusal.field) for refusal in result.refused] == [(uid(32), "site")]


def test_a_waiting_text_that_turns_out_not_to_fit_is_refused_and_kept(connection: Connection) -> None:
    made = drain_test(31, site=uid(99), system=None, visit=None)
    take(connection, made, via="tablet")
    take(connection, entry("note", uid(99)), at=LATER)
    (kept,) = refusals.kept_of(connection, uid(31))
    assert (kept.refusal.field, kept.via, kept.received_at, kept.text) == ("site", "tablet", AT, made[1].text)
    assert waiting.count(connection) == 0


def append_and_fail(connection: Connection) -> None:
    log.append(connection, [drain_test(31)], "form", LATER)
    raise KeyError


def test_nothing_of_a_transaction_that_failed_stays(connection: Connection) -> None:
    before = log.head(connection)
    with pytest.raises(KeyError), transaction(connection):
        append_and_fail(connection)
    assert log.head(connection) == before
    assert entries.current_of(connection, uid(31)) is None


def test_append_outside_a_transaction_is_a_mistake_of_the_caller(connection: Connection) -> None:
    with pytest.raises(RuntimeError, match="transaction"):
        log.append(connection, [drain_test(31)], "form", LATER)


def test_an_empty_batch_changes_nothing(connection: Connection) -> None:
    assert take(connection).added == ()


COPIED = "received_at, sha256, link, via, text, kind, subject, author, made_at, withdrawn"
AFTER_A_GAP = (
    f"insert into entries (number, uid, {COPIED}) select 99, 'f' || substr(uid, 2), {COPIED} "  # noqa: S608
    "from entries where number = 3"
)
REPLACING_BY_UID = (
    f"insert or replace into entries (number, uid, {COPIED}) select 8, uid, {COPIED} "  # noqa: S608
    "from entries where number = 3"
)


@pytest.mark.parametrize(
    "statement",
    [
        "update entries set made_at = '2001-02-03T04:05:06Z' where number = 3",
        "update or replace entries set uid = uid where number = 3",
        "delete from entries where number = 3",
        "delete from entries",
        "insert or replace into entries select * from entries where number = 3",
        "replace into entries select * from entries where number = 3",
        "insert or ignore into entries select * from entries where number = 3",
        "insert into entries select * from entries where number = 3 on conflict (number) do update set via = via",
        "insert into entries select * from entries where number = 3 on conflict (uid) do update set via = via",
        AFTER_A_GAP,
        REPLACING_BY_UID,
        "delete from refusals",
        "update refusals set text = x'41'",
    ],
)
@pytest.mark.parametrize("recursive", ["on", "off"])
def test_no_statement_changes_replaces_or_deletes_an_entry(
    connection: Connection, statement: str, recursive: str
) -> None:
    take(connection, drain_test(31, system=SUPPLY))
    before = connection.execute("select * from entries").fetchall()
    connection.execute(f"pragma recursive_triggers = {recursive}")
    with pytest.raises(Exception, match=r"never|follows|kept") as refused:
        connection.execute(statement)
    assert refused.type.__name__ == "IntegrityError"
    assert connection.execute("select * from entries").fetchall() == before
    assert refusals.count(connection) == 1
