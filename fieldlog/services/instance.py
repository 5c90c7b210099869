"""An instance: one contractor's folder with its database, keys and files; opening and founding it."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import datetime

from fieldlog.clock import timestamp
from fieldlog.errors import ConfigError, ConflictError, NotFoundError
from fieldlog.procedures.compose import compose
from fieldlog.procedures.organisation import Organisation
from fieldlog.records.entries import Arrival, Entry
from fieldlog.reports import identity
from fieldlog.services import intake
from fieldlog.settings import Settings
from fieldlog.storage import entries
from fieldlog.storage.connection import Connection
from fieldlog.storage.schema import open_database


@dataclass(frozen=True, slots=True)
class Instance:
    """An open instance: its settings and its connection."""

    settings: Settings
    connection: Connection


def open_instance(settings: Settings) -> Instance:
    """Return the instance in the settings' folder.

    Raises
    ------
    ConfigError
        If there is none.
    """
    if not settings.database.exists():
        raise ConfigError(
            f"no fieldlog instance in {settings.instance}; make one with `fieldlog init`, "
            "or name its folder in FIELDLOG_INSTANCE"
        )
    return Instance(settings, open_database(settings.database))


def create_instance(settings: Settings) -> Instance:
    """Make the folder, readable by its owner only, and the empty database, and return the instance.

    Raises
    ------
    ConflictError
        If the folder holds an instance already.
    """
    if settings.database.exists():
        raise ConflictError(f"{settings.instance} holds a fieldlog instance already; nothing was changed")
    settings.instance.mkdir(mode=0o700, parents=True, exist_ok=True)
    settings.files.mkdir(mode=0o700, exist_ok=True)
    return Instance(settings, open_database(settings.database, create=True))


def found_organisation(instance: Instance, body: Organisation, *, uid: str, at: datetime) -> Entry:
    """Enter the organisation as the log's first entry, make its sealing key, and return the entry."""
    text = compose("organisation", body, uid=uid, author=uid, made_at=timestamp(at))
    result = intake.take_in(instance.connection, [Arrival(text)], "server", timestamp(at))
    if result.refused:
        raise ConflictError(result.refused[0].message)
    entry = organisation_of(instance)
    ensure_sealing_key(instance, at)
    return entry


def organisation_of(instance: Instance) -> Entry:
    """Return the organisation's entry in force.

    Raises
    ------
    NotFoundError
        If the instance has no organisation yet.
    """
    found = entries.in_force_of_kind(instance.connection, "organisation")
    if not found:
        raise NotFoundError(
            "this instance has no organisation yet; name it with `fieldlog init --organisation NAME`, "
            "or import a file of entries that begins with it"
        )
    return found[0]


def ensure_sealing_key(instance: Instance, at: datetime) -> None:
    """Make the organisation's sealing key and certificate if it has none yet."""
    if not identity.has_identity(instance.settings.keys):
        name = str(organisation_of(instance).body["name"])
        identity.write_identity(instance.settings.keys, identity.make_sealing_identity(name, at))
