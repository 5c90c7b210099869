"""Statements as judged last, and what has to be judged again."""

from __future__ import annotations

from datetime import date

import pytest

from fieldlog.records.statement import BlindLoss, Margin, Reason, Statement, SystemStatement, TenPercent
from fieldlog.storage import statements
from fieldlog.storage.connection import Connection, transaction
from tests.storage.made import LATER, OTHER_SITE, SITE, SUPPLY, SYSTEM, entry, register, take, uid, version

OTHER_SUPPLY, OTHER_SYSTEM, PROFILE = uid(71), uid(72), uid(73)
TODAY = date(2024, 5, 8)


def said(system: str, says: Statement, *, until: date | None = None, profile: str | None = PROFILE) -> SystemStatement:
    return SystemStatement(
        system=system,
        profile=profile,
        statement=says,
        reasons=(Reason("ten_percent", {"reduction": 0.125, "against": "acceptance", "flagged": True}, (31, 8), "3"),),
        next=("open_the_valve", "ask_the_waterworks"),
        ten_percent=(TenPercent("previous", 0.0625, None, 31, sigma=0.015625),),
        through_number=9,
        as_of=date(2024, 5, 7),
        valid_until=until,
        version="0.1.0",
        earlier=Statement.CHANGED,
        margin_on_day=Margin(7.25, 2.25, 12.25, 5.0, 450.5, 52.5, "flow test", (8,)),
        blind_loss=BlindLoss(None, 3.5, 450.5, 6),
    )


@pytest.fixture
def two(connection: Connection) -> Connection:
    """Give a log with a supply on each of two sites."""
    take(connection, entry("supply", OTHER_SUPPLY, site=OTHER_SITE))
    return connection


def put(connection: Connection, supply: str, site: str, through: int, *given: SystemStatement) -> None:
    with transaction(connection):
        statements.put(connection, supply, site, through, given)


def test_a_statement_comes_back_as_it_was_put(two: Connection) -> None:
    whole = said(SYSTEM, Statement.CHANGED, until=date(2024, 8, 9))
    put(two, SUPPLY, SITE, 9, whole)
    assert statements.of_system(two, SYSTEM) == [whole]


def test_the_most_worrying_comes_first(two: Connection) -> None:
    holding, impaired = said(SYSTEM, Statement.HOLDING), said(OTHER_SYSTEM, Statement.SUSPECTED_IMPAIRMENT)
    put(two, SUPPLY, SITE, 9, holding)
    put(two, OTHER_SUPPLY, OTHER_SITE, 9, impaired)
    assert statements.every(two) == [impaired, holding]
    assert statements.of_site(two, SITE) == statements.of_supply(two, SUPPLY) == [holding]


def test_what_is_put_takes_the_place_of_all_that_was(two: Connection) -> None:
    put(two, SUPPLY, SITE, 9, said(SYSTEM, Statement.HOLDING), said(OTHER_SYSTEM, Statement.UNPROVEN, profile=None))
    again = said(SYSTEM, Statement.CHANGED)
    put(two, SUPPLY, SITE, 12, again)
    assert statements.every(two) == [again]


def test_a_system_that_moved_to_another_supply_leaves_nothing_behind(two: Connection) -> None:
    put(two, SUPPLY, SITE, 9, said(SYSTEM, Statement.HOLDING))
    moved = said(SYSTEM, Statement.UNPROVEN)
    put(two, OTHER_SUPPLY, SITE, 12, moved)
    assert statements.of_system(two, SYSTEM) == [moved]
    assert statements.of_supply(two, SUPPLY) == []


def test_supplies_never_judged_are_due(two: Connection) -> None:
    assert statements.due(two, TODAY) == [SUPPLY, OTHER_SUPPLY]
    put(two, SUPPLY, SITE, 8)
    assert statements.due(two, TODAY) == [OTHER_SUPPLY]


def test_a_marked_supply_is_due_until_judged_through_its_newest_entry(two: Connection) -> None:
    for supply, site in ((SUPPLY, SITE), (OTHER_SUPPLY, OTHER_SITE)):
        put(two, supply, site, 8)
    with transaction(two):
        statements.mark_dirty(two, [SUPPLY])
    take(two, entry("note", uid(81), site=SITE))
    with transaction(two):
        statements.mark_dirty(two, [SUPPLY])
    put(two, SUPPLY, SITE, 8)  # judged before the note came
    assert statements.dirty(two) == statements.due(two, TODAY) == [SUPPLY]
    put(two, SUPPLY, SITE, 9)
    assert statements.dirty(two) == statements.due(two, TODAY) == []


def test_the_supplies_of_a_site_and_all_of_them(two: Connection) -> None:
    with transaction(two):
        statements.mark_sites_dirty(two, [OTHER_SITE, uid(88)])
    assert statements.dirty(two) == [OTHER_SUPPLY]
    with transaction(two):
        statements.mark_all_dirty(two)
    assert statements.dirty(two) == [SUPPLY, OTHER_SUPPLY]


@pytest.mark.parametrize(("until", "is_due"), [(date(2024, 5, 7), True), (TODAY, True), (date(2024, 5, 9), False)])
def test_time_alone_makes_a_supply_due_from_the_earliest_day_on(two: Connection, until: date, *, is_due: bool) -> None:
    put(two, OTHER_SUPPLY, OTHER_SITE, 8, said(OTHER_SYSTEM, Statement.HOLDING))
    put(
        two,
        SUPPLY,
        SITE,
        8,
        said(SYSTEM, Statement.HOLDING, until=date(2031, 2, 3)),
        said(SYSTEM, Statement.CHANGED, until=until, profile=uid(74)),
    )
    assert statements.due(two, TODAY) == ([SUPPLY] if is_due else [])


def test_a_withdrawn_supply_is_due_only_where_it_is_marked(two: Connection) -> None:
    put(two, OTHER_SUPPLY, OTHER_SITE, 8)
    take(two, version(register()[4], 82, SUPPLY, "entered twice", withdrawn=True), at=LATER)
    assert statements.due(two, TODAY) == []
    with transaction(two):
        statements.mark_dirty(two, [SUPPLY])
    assert statements.due(two, TODAY) == [SUPPLY]


def test_forgetting_makes_all_due_again(two: Connection) -> None:
    put(two, SUPPLY, SITE, 8, said(SYSTEM, Statement.HOLDING))
    put(two, OTHER_SUPPLY, OTHER_SITE, 8)
    with transaction(two):
        statements.forget(two)
    assert statements.every(two) == []
    assert statements.due(two, TODAY) == [SUPPLY, OTHER_SUPPLY]


def test_marking_belongs_to_the_transaction_of_the_entries(two: Connection) -> None:
    for write in (
        lambda: statements.mark_dirty(two, [SUPPLY]),
        lambda: statements.put(two, SUPPLY, SITE, 8, []),
        lambda: statements.forget(two),
    ):
        with pytest.raises(RuntimeError, match="transaction"):
            write()
