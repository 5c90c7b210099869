"""Keeping the log: proof that nothing was changed, what is derived from it made anew, copies and their return."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from datetime import date
from pathlib import Path

from fieldlog.services import judging
from fieldlog.services.instance import Instance
from fieldlog.settings import Settings
from fieldlog.storage import backup, chain, current, statements
from fieldlog.storage.connection import transaction


@dataclass(frozen=True, slots=True)
class Rebuilt:
    """What `rebuild` made anew."""

    subjects: int
    supplies: int


def check_log(
    instance: Instance, progress: Callable[[int, int], None] | None = None, expected_head: str | None = None
) -> chain.CheckResult:
    """Walk the chain and return what was found; `expected_head` is one printed on a report or a receipt."""
    return chain.check(instance.connection, progress, expected_head)


def rebuild(instance: Instance, today: date, progress: Callable[[int], None] = lambda _: None) -> Rebuilt:
    """Derive the versions in force and every statement anew from the log."""
    with transaction(instance.connection):
        subjects = current.rebuild_current(instance.connection)
        statements.mark_all_dirty(instance.connection)
    return Rebuilt(subjects, judging.judge_due(instance.connection, today, progress))


def back_up(instance: Instance, target: Path) -> backup.Backup:
    """Copy the database to `target` while the instance goes on, check the copy, and return what it holds."""
    return backup.back_up(instance.settings.database, target)


def restore(source: Path, settings: Settings) -> chain.CheckResult:
    """Check a copy and put it in place of a missing database."""
    checked = backup.check_backup(source)
    settings.instance.mkdir(mode=0o700, parents=True, exist_ok=True)
    backup.restore(source, settings.database)
    return checked
