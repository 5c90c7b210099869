"""The walk of the chain names the first entry that does not fit."""

from __future__ import annotations

import random
from collections.abc import Callable
from pathlib import Path

import pytest

from fieldlog.canonical import sha256_hex
from fieldlog.storage import chain, log
from fieldlog.storage.chain import FIRST_LINK, Fault, link
from fieldlog.storage.connection import Connection, connect
from tests.storage import made
from tests.storage.made import AT, SITE, drain_test, register, take, uid, version

LAST = 40


@pytest.fixture
def filled(connection: Connection) -> Connection:
    tests = [drain_test(number) for number in range(31, 31 + LAST - 7 - 3)]
    take(connection, *tests)
    first = tests[0]
    take(connection, version(first, 91, first[0].uid), version(first, 92, first[0].uid))
    take(connection, version(tests[4], 93, tests[4][0].uid, "duplicate", withdrawn=True))
    return connection


def unguard(connection: Connection) -> None:
    for (name,) in connection.execute("select name from sqlite_master where type = 'trigger'").fetchall():
        connection.execute(f"drop trigger {name}")


def guard(connection: Connection, statements: list[str]) -> None:
    for statement in statements:
        connection.execute(statement)


def triggers(connection: Connection) -> list[str]:
    return [sql for (sql,) in connection.execute("select sql from sqlite_master where type = 'trigger'")]


def test_a_sound_log_has_no_fault(filled: Connection) -> None:
    head = log.head(filled)
    assert chain.check(filled) == chain.CheckResult(LAST, head.link, None)
    assert head.number == LAST


def test_an_empty_log_has_no_fault(empty: Connection) -> None:
    assert chain.check(empty, expected_head=FIRST_LINK) == chain.CheckResult(0, FIRST_LINK, None)


def test_any_earlier_head_is_known(filled: Connection) -> None:
    for (known,) in filled.execute("select link from entries").fetchall():
        assert chain.check(filled, expected_head=known).fault is None


def test_entries_cut_off_the_end_show_against_a_known_head(filled: Connection) -> None:
    head = log.head(filled)
    statements = triggers(filled)
    unguard(filled)
    filled.execute("delete from entries where number > 37")
    filled.execute("delete from current where number > 37 or first = 35")
    guard(filled, statements)
    made_anew = chain.check(filled)
    assert made_anew.fault is None or made_anew.fault.what == "current"
    fault = chain.check(filled, expected_head=head.link).fault
    assert fault is not None
    assert (fault.number, fault.what) == (38, "head")
    assert "cut off" in fault.message


def test_a_chain_computed_anew_shows_against_a_known_head(filled: Connection) -> None:
    head = log.head(filled).link
    statements = triggers(filled)
    unguard(filled)
    text = filled.execute("select text from entries where number = 12").fetchone()[0].replace("2023", "2022")
    filled.execute(
        "update entries set text = ?, performed_on = '2022' || substr(performed_on, 5) where number = 12", (text,)
    )
    filled.execute("update current set performed_on = '2022' || substr(performed_on, 5) where number = 12")
    previous = FIRST_LINK
    for number, received_at, changed in filled.execute("select number, received_at, text from entries").fetchall():
        digest = sha256_hex(changed)
        previous = link(number, received_at, previous, digest)
        filled.execute("update entries set sha256 = ?, link = ? where number = ?", (digest, previous, number))
    guard(filled, statements)
    assert chain.check(filled).fault is None
    fault = chain.check(filled, expected_head=head).fault
    assert fault is not None
    assert fault.what == "head"


def test_a_trigger_that_was_dropped_is_named(filled: Connection) -> None:
    filled.execute("drop trigger entries_not_changed")
    fault = chain.check(filled).fault
    assert fault is not None
    assert (fault.what, "entries_not_changed" in fault.message) == ("guard", True)


def test_progress_is_told(filled: Connection, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(chain, "_PROGRESS_STEP", 15)
    told: list[tuple[int, int]] = []
    chain.check(filled, lambda checked, entries: told.append((checked, entries)))
    assert told == [(15, LAST), (30, LAST), (LAST, LAST)]


def test_a_check_leaves_the_connection_as_it_was(filled: Connection, path: Path) -> None:
    chain.check(filled)
    assert not filled.in_transaction
    assert filled.text_factory is str
    before = made.dump(filled)
    reader = connect(path)
    chain.check(reader)
    take(filled, drain_test(88))
    assert chain.check(reader).checked == LAST + 1
    reader.close()
    assert before["current"] == made.dump(filled)["current"][:-1]


# What somebody who owns the file may do to it. Each returns where it has to show.
Edit = Callable[[Connection, random.Random, int], tuple[int, str]]


def a_text(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    text = connection.execute("select text from entries where number = ?", (number,)).fetchone()[0]
    at = rng.randrange(len(text))
    changed = text[:at] + "~" + text[at + 1 :]
    connection.execute("update entries set text = ? where number = ?", (changed, number))
    return number, "text"


def a_text_that_is_no_text(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    connection.execute("update entries set text = cast(x'7bff41' as text) where number = ?", (number,))
    return number, "text"


def a_text_and_its_hash(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    (text,) = connection.execute("select text || ' ' from entries where number = ?", (number,)).fetchone()
    connection.execute("update entries set text = ?, sha256 = ? where number = ?", (text, sha256_hex(text), number))
    return number, "link"


def a_text_its_hash_and_its_link(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    """Follow the link with all that the entry holds: the next one no longer fits."""
    number = min(number, LAST - 1)
    previous = FIRST_LINK
    if number > 1:
        previous = connection.execute("select link from entries where number = ?", (number - 1,)).fetchone()[0]
    text = connection.execute("select text from entries where number = ?", (number,)).fetchone()[0]
    text = text.replace("2024-05-06", "2024-05-05")
    digest = sha256_hex(text)
    connection.execute(
        "update entries set text = ?, sha256 = ?, link = ?, made_at = replace(made_at, '05-06', '05-05') "
        "where number = ?",
        (text, digest, link(number, AT, previous, digest), number),
    )
    return number + 1, "link"


def a_hash(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    connection.execute("update entries set sha256 = ? where number = ?", (sha256_hex(str(number)), number))
    return number, "sha256"


def a_link(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    connection.execute("update entries set link = ? where number = ?", (sha256_hex(str(number)), number))
    return number, "link"


def a_time(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    connection.execute("update entries set received_at = '2021-03-04T05:06:07Z' where number = ?", (number,))
    return number, "link"


def a_number(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    connection.execute("update entries set number = number + 500 where number = ?", (number,))
    return number, "missing"


def two_texts(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    other = number - 1 if number > 1 else number + 1
    rows = connection.execute("select number, text from entries where number in (?, ?)", (number, other)).fetchall()
    (first, one), (second, two) = sorted(rows)
    connection.execute("update entries set text = ? where number = ?", (two, first))
    connection.execute("update entries set text = ? where number = ?", (one, second))
    return first, "text"


def a_row_taken_out(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    number = min(number, LAST - 1)
    connection.execute("delete from entries where number = ?", (number,))
    return number, "missing"


def a_row_put_in(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    text = drain_test(700)[1].text
    connection.execute(
        "insert into entries (number, uid, received_at, sha256, link, via, text, kind, subject, author, made_at, "
        "withdrawn) select ?, ?, received_at, ?, link, via, ?, kind, ?, author, made_at, 0 from entries "
        "where number = ?",
        (LAST + 1, uid(700), sha256_hex(text), text, uid(700), LAST),
    )
    return LAST + 1, "link"


def a_column(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    column, value = rng.choice(
        [
            ("kind", "event"),
            ("subject", uid(77)),
            ("author", uid(77)),
            ("made_at", "2020-02-03T04:05:06Z"),
            ("site", uid(77)),
            ("system", uid(77)),
            ("visit", uid(77)),
            ("based_on", uid(77)),
            ("device", uid(77)),
            ("device_number", 77),
            ("performed_on", "2020-02-03"),
            ("uid", uid(77)),
        ]
    )
    connection.execute(f"update entries set {column} = ? where number = ?", (value, number))  # noqa: S608
    return number, column


def whether_withdrawn(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    connection.execute("update entries set withdrawn = 1 - withdrawn where number = ?", (number,))
    return number, "withdrawn"


def the_version_in_force(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    (first,) = rng.choice(connection.execute("select first from current order by first").fetchall())
    change = rng.choice(
        [
            "forked = 1 - forked",
            "withdrawn = 1 - withdrawn",
            "number = number + 1",
            "uid = subject || 'x'",
            "kind = 'x'",
        ]
    )
    connection.execute(f"update current set {change} where first = ?", (first,))  # noqa: S608
    return first, "current"


def a_subject_taken_out(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    (first,) = rng.choice(connection.execute("select first from current order by first").fetchall())
    connection.execute("delete from current where first = ?", (first,))
    return first, "current"


def a_subject_put_in(connection: Connection, rng: random.Random, number: int) -> tuple[int, str]:
    connection.execute(
        "insert into current select ?, ?, kind, site, system, performed_on, number, uid, 0, 0 from current "
        "where first = 3",
        (LAST + 60, uid(77)),
    )
    return LAST + 60, "current"


EDITS: list[Edit] = [
    a_text,
    a_text_that_is_no_text,
    a_text_and_its_hash,
    a_text_its_hash_and_its_link,
    a_hash,
    a_link,
    a_time,
    a_number,
    two_texts,
    a_row_taken_out,
    a_row_put_in,
    a_column,
    whether_withdrawn,
    the_version_in_force,
    a_subject_taken_out,
    a_subject_put_in,
]


def found_after(edit: Edit, connection: Connection, seed: int) -> tuple[tuple[int, str], Fault | None]:
    """Make one edit, look for it, and undo it."""
    rng = random.Random(seed)
    connection.execute("begin")
    statements = triggers(connection)
    unguard(connection)
    expected = edit(connection, rng, rng.randint(1, LAST))
    guard(connection, statements)
    fault = chain.check(connection).fault
    connection.execute("rollback")
    return expected, fault


@pytest.mark.parametrize("edit", EDITS)
def test_every_kind_of_edit_by_an_insider_is_found_where_it_was_made(filled: Connection, edit: Edit) -> None:
    for seed in range(12):
        expected, fault = found_after(edit, filled, seed)
        assert fault is not None, (edit, seed, expected)
        assert (fault.number, fault.what) == expected, (edit, seed, fault)
    assert chain.check(filled).fault is None


def test_a_hundred_random_edits_are_all_found(filled: Connection) -> None:
    rng = random.Random(20240506)
    for seed in range(1000, 1100):
        edit = rng.choice(EDITS)
        expected, fault = found_after(edit, filled, seed)
        assert fault is not None, (edit, seed, expected)
        assert (fault.number, fault.what) == expected, (edit, seed, fault)


def test_a_fault_is_told_with_number_and_uid(filled: Connection) -> None:
    unguard(filled)
    filled.execute("update entries set text = replace(text, 'Kühlhaus', 'Kuhlhaus') where uid = ?", (SITE,))
    assert chain.check(filled).fault == Fault(
        3, SITE, "text", f"entry 3 ({SITE}): its text is not the one that was hashed"
    )


def test_the_register_is_what_the_edits_assume(connection: Connection) -> None:
    assert log.head(connection).number == len(register()) == 7
