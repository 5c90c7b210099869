"""Judging supplies: after entries arrived, when time alone changed a statement, and all of them by `rebuild`."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from datetime import date

from fieldlog.assessment.due import profiles_in_force
from fieldlog.assessment.judge import judge
from fieldlog.procedures.catalogue import PROCEDURES
from fieldlog.procedures.histories import histories
from fieldlog.records.history import SupplyHistory
from fieldlog.records.rules import RuleProfile
from fieldlog.records.statement import SystemStatement
from fieldlog.settings import program_version
from fieldlog.storage import entries, statements
from fieldlog.storage.connection import Connection, transaction

# Kinds that a history is read from.
_KINDS = tuple(
    kind for kind in PROCEDURES if kind not in {"organisation", "person", "visit", "note", "sign_off", "event"}
)


def judge_due(connection: Connection, today: date, progress: Callable[[int], None] = lambda _: None) -> int:
    """Judge the supplies that are marked, new, or whose statement time has overtaken, and return how many."""
    due = set(statements.due(connection, today))
    count = 0
    for site in _sites_of(connection, due):
        for history in site_histories(connection, site):
            if history.supply.uid in due:
                _judge_and_keep(connection, history, today)
                count += 1
                progress(1)
    return count


def judge_all(connection: Connection, today: date, progress: Callable[[int], None] = lambda _: None) -> int:
    """Judge every supply anew and return how many."""
    with transaction(connection):
        statements.mark_all_dirty(connection)
    return judge_due(connection, today, progress)


def site_histories(connection: Connection, site: str) -> tuple[SupplyHistory, ...]:
    """Return what is on record about the supplies of one site."""
    in_force = [
        *entries.in_force_of_organisation(connection, _KINDS),
        *entries.in_force_at_site(connection, site, _KINDS),
    ]
    return histories(in_force, entries.entries_of_site(connection, site))


def statements_on(history: SupplyHistory, as_of: date) -> tuple[SystemStatement, ...]:
    """Return a statement a system and profile; without a profile, one that says so."""
    profiles: tuple[RuleProfile | None, ...] = profiles_in_force(history.profiles, as_of) or (None,)
    version = program_version()
    return tuple(said for profile in profiles for said in judge(history, as_of, profile, version))


def _judge_and_keep(connection: Connection, history: SupplyHistory, today: date) -> None:
    said = statements_on(history, today)
    with transaction(connection):
        statements.put(connection, history.supply.uid, history.site, history.through_number, said)


def _sites_of(connection: Connection, supplies: Iterable[str]) -> list[str]:
    found = {supply: entries.in_force_of(connection, supply) for supply in supplies}
    return sorted({entry.site for entry in found.values() if entry is not None and entry.site is not None})
