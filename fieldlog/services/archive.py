"""Keeping the log: proof that nothing was changed, what is derived from it made anew, copies and their return."""

from __future__ import annotations

import shutil
from collections.abc import Callable
from dataclasses import dataclass
from datetime import date
from pathlib import Path

from fieldlog.errors import BrokenLogError, ConflictError, NotFoundError
from fieldlog.services import judging
from fieldlog.services.instance import Instance
from fieldlog.settings import Settings
from fieldlog.storage import backup, chain, current, files, statements
from fieldlog.storage.connection import transaction


@dataclass(frozen=True, slots=True)
class Rebuilt:
    """What `rebuild` made anew."""

    subjects: int
    supplies: int


@dataclass(frozen=True, slots=True)
class BackedUp:
    """A checked copy of the database, and how many photos and reports went with it."""

    database: backup.Backup
    files: int


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


def back_up(instance: Instance, folder: Path, *, with_keys: bool = False) -> BackedUp:
    """Copy the database, photos and reports into a new folder while the instance goes on, and check the copy.

    The sealing key is left out unless asked for: whoever holds it can seal in the organisation's name.

    Raises
    ------
    ConflictError
        If the folder holds something already.
    """
    target = Settings(folder.absolute())
    if target.instance.exists() and any(target.instance.iterdir()):
        raise ConflictError(f"{target.instance} is not empty; name a new folder for each backup")
    target.instance.mkdir(mode=0o700, parents=True, exist_ok=True)
    copied = backup.back_up(instance.settings.database, target.database)
    count = _copy_files(instance.settings, target)
    if with_keys and instance.settings.keys.exists():
        shutil.copytree(instance.settings.keys, target.keys)
    return BackedUp(copied, count)


def restore(folder: Path, settings: Settings) -> chain.CheckResult:
    """Put a backup in place of an instance that is gone, after checking it; never over one that is there.

    Raises
    ------
    NotFoundError
        If the folder is no backup.
    ConflictError
        If the instance holds a database already.
    BrokenLogError
        If the copy's chain does not hold.
    """
    source = Settings(folder.absolute())
    if not source.database.exists():
        raise NotFoundError(f"{source.instance} is no backup: it holds no {source.database.name}")
    checked = backup.check_backup(source.database)
    if checked.fault is not None:
        raise BrokenLogError(f"the backup does not hold: {checked.fault.message}; use another one")
    settings.instance.mkdir(mode=0o700, parents=True, exist_ok=True)
    backup.restore(source.database, settings.database)
    _copy_files(source, settings)
    if source.keys.exists() and not settings.keys.exists():
        shutil.copytree(source.keys, settings.keys)
    return checked


def _copy_files(source: Settings, target: Settings) -> int:
    """Copy photos and reports, each read back against the hash it is named by, and return how many."""
    target.files.mkdir(mode=0o700, exist_ok=True)
    if not source.files.exists():
        return 0
    names = list(files.names(source.files))
    for name in names:
        files.put(target.files, files.read(source.files, name))
    return len(names)
