"""The version in force: kept as entries come, and the same when made anew."""

from __future__ import annotations

import tempfile
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from fieldlog.storage import chain, current, entries, log, waiting
from fieldlog.storage.connection import Connection, connect, transaction
from fieldlog.storage.schema import open_database
from tests.storage import made
from tests.storage.made import Made, drain_test, register, take, uid, version


def rebuilt(connection: Connection) -> int:
    with transaction(connection):
        return current.rebuild_current(connection)


def test_made_anew_it_is_the_same_to_the_byte(connection: Connection) -> None:
    first, second, third = (drain_test(number) for number in (31, 32, 33))
    take(connection, first, second, third, version(second, 41, uid(32)), version(second, 42, uid(32)))
    take(connection, version(third, 43, uid(33), withdrawn=True), version(register()[2], 44, made.SITE))
    before = made.dump(connection, "current")
    assert rebuilt(connection) == len(before["current"]) == 10
    assert made.dump(connection, "current") == before


def test_a_damaged_table_is_made_good(connection: Connection) -> None:
    take(connection, drain_test(31), version(drain_test(31), 41, uid(31)))
    before = made.dump(connection, "current")
    connection.execute("delete from current where first = 3")
    connection.execute("update current set number = 31, forked = 1 where first = 8")
    assert chain.check(connection).fault is not None
    rebuilt(connection)
    assert made.dump(connection, "current") == before
    assert chain.check(connection).fault is None


def test_outside_a_transaction_nothing_is_deleted(connection: Connection) -> None:
    with pytest.raises(RuntimeError):
        current.rebuild_current(connection)
    assert entries.counts_by_kind(connection)["site"] == 2


# A step makes a version of one of three subjects, based on any version there is of it, perhaps withdrawing it,
# perhaps on a tablet.
steps = st.lists(st.tuples(st.integers(0, 2), st.integers(0, 9), st.booleans(), st.booleans()), min_size=2, max_size=14)
Step = tuple[int, int, bool, bool]


def made_by(sequence: list[Step]) -> list[Made]:
    firsts = [drain_test(31 + index) for index in range(3)]
    uids = [[first[0].uid] for first in firsts]
    versions = list(firsts)
    for count, (subject, based_on, withdrawn, on_tablet) in enumerate(sequence):
        fields = {
            "withdrawn": True if withdrawn else None,
            "device": uid(95) if on_tablet else None,
            "device_number": 50 + count if on_tablet else None,
        }
        named = uids[subject][based_on % len(uids[subject])]
        versions.append(version(firsts[subject], 200 + count, named, f"step {count}", **fields))
        uids[subject].append(uid(200 + count))
    return versions


def in_force_by_the_rule_in_words(versions: list[Made]) -> dict[str, tuple[str, bool, bool]]:
    """Say again, in the plainest way, what is in force: uid, forked, withdrawn by subject."""
    state: dict[str, tuple[str, bool, bool]] = {}
    for envelope, _ in versions:
        if envelope.based_on is None:
            state[envelope.subject] = (envelope.uid, False, False)
            continue
        in_force, forked, withdrawn = state[envelope.subject]
        if envelope.based_on == in_force:
            stays_forked = forked and envelope.device is not None
            state[envelope.subject] = (envelope.uid, stays_forked, bool(envelope.withdrawn))
        else:
            state[envelope.subject] = (in_force, True, withdrawn)
    return state


@given(steps, st.data())
def test_any_sequence_of_versions_keeps_what_must_hold(sequence: list[Step], data: st.DataObject) -> None:
    versions = made_by(sequence)
    with tempfile.TemporaryDirectory() as folder:
        connection = open_database(Path(folder) / "fieldlog.sqlite", create=True)
        take(connection, *register())
        at = 0
        while at < len(versions):
            size = data.draw(st.integers(2, 6))
            take(connection, *versions[at : at + size])
            at += size
        for subject, (own, forked, withdrawn) in in_force_by_the_rule_in_words(versions).items():
            found = entries.current_of(connection, subject)
            assert found is not None
            assert (found.uid, found.forked, found.withdrawn) == (own, forked, withdrawn)
        assert entries.count(connection) == 7 + len(versions)
        assert chain.check(connection).fault is None
        before = made.dump(connection, "current")
        rebuilt(connection)
        assert made.dump(connection, "current") == before
        connection.close()


@given(steps, st.randoms(use_true_random=False))
def test_in_whatever_order_they_come_all_are_taken_in_once(sequence: list[Step], rng: object) -> None:
    versions = made_by(sequence)
    mixed = [*register(), *versions]
    rng.shuffle(mixed)  # type: ignore[attr-defined]
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "fieldlog.sqlite"
        open_database(path, create=True).close()
        for at in range(0, len(mixed), 5):
            connection = connect(path)
            take(connection, *mixed[at : at + 5])
            connection.close()
        connection = connect(path)
        assert log.head(connection).number == len(mixed)
        assert waiting.count(connection) == 0
        assert {each.text for each in entries.after(connection, 0)} == {arrival.text for _, arrival in mixed}
        assert chain.check(connection).fault is None
        connection.close()
