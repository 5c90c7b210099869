"""Judging after intake: what touches a supply, what time alone changes, several profiles, and rebuilding."""

from __future__ import annotations

from datetime import date, timedelta
from typing import Any

import msgspec

from fieldlog.procedures.main_drain_test import MainDrainTest
from fieldlog.procedures.rule_profile import RuleProfileBody
from fieldlog.records.statement import Statement
from fieldlog.rules import loader
from fieldlog.services import archive, judging
from fieldlog.storage import entries, statements

TODAY = date(2026, 5, 6)


def profile(catalogue_id: str, until: date | None = None) -> RuleProfileBody:
    catalogue = loader.load(catalogue_id)
    adoption = loader.Adoption(
        approved_by="Licensed engineer A", approved_on=date(2020, 2, 3), in_force_from=date(2020, 2, 4),
        in_force_until=until, judged_on="on_the_day", approved_rows=tuple(catalogue.row_ids()),
    )  # fmt: skip
    return msgspec.convert(msgspec.to_builtins(loader.resolve(catalogue, adoption)), RuleProfileBody)


def said(office: Any) -> list[Any]:
    judging.judge_due(office.instance.connection, TODAY)
    return statements.every(office.instance.connection)


def test_without_a_profile_nothing_is_called_holding(office: Any, history: Any) -> None:
    history()
    (statement,) = said(office)
    assert statement.profile is None
    assert statement.statement is Statement.UNPROVEN
    assert "no_profile" in {reason.code for reason in statement.reasons}


def test_each_profile_of_a_site_is_judged_by_itself(office: Any, history: Any) -> None:
    history()
    profiles = {office.enter("rule_profile", profile(name)) for name in ("us_inspection_2017", "us_inspection_2020")}
    found = said(office)
    assert {statement.profile for statement in found} == profiles
    assert {statement.statement for statement in found} == {Statement.HOLDING}


def test_a_new_test_changes_the_statement_and_its_withdrawal_changes_it_back(office: Any, history: Any) -> None:
    history()
    office.enter("rule_profile", profile("us_inspection_2017"))
    before = said(office)[0]
    test = MainDrainTest(
        performed_on=date(2026, 5, 5), static_before=reading("81"), residual=reading("55"), static_after=reading("81"),
        steady=True, fully_open=True, took_full_flow=True, drain_unchanged=True, pump_state="none",
    )  # fmt: skip
    system = entries.in_force_of_kind(office.instance.connection, "system")[0].subject
    uid = office.enter("main_drain_test", test, system=system)
    assert said(office)[0].statement is Statement.CHANGED
    office.enter(
        "main_drain_test", test, system=system, subject=uid, based_on=uid, reason="wrong system", withdrawn=True
    )
    again = said(office)[0]
    assert (again.statement, again.reasons) == (before.statement, before.reasons)


def reading(value: str) -> Any:
    from fieldlog.procedures.fields import PressureReading

    return PressureReading(value=value, unit="psi", gauge="00005eed-0000-4000-8000-000000000010")


def test_time_alone_makes_a_statement_due_again(office: Any, history: Any) -> None:
    history()
    office.enter("rule_profile", profile("us_inspection_2017"))
    (statement,) = said(office)
    connection = office.instance.connection
    assert statement.valid_until is not None
    assert statements.due(connection, statement.valid_until - timedelta(days=1)) == []
    later = statement.valid_until + timedelta(days=1)
    assert statements.due(connection, later) != []
    judging.judge_due(connection, later)
    assert statements.every(connection)[0].as_of == later


def test_rebuilding_gives_the_same(office: Any, history: Any) -> None:
    history()
    office.enter("rule_profile", profile("us_inspection_2017"))
    before = said(office)
    rows = office.instance.connection.execute("select * from current order by 1").fetchall()
    made = archive.rebuild(office.instance, TODAY)
    assert made.supplies == 1
    assert office.instance.connection.execute("select * from current order by 1").fetchall() == rows
    assert statements.every(office.instance.connection) == before
