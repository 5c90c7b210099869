"""People of an instance: entering them, their role, their log-in name and the sites they may see."""

from __future__ import annotations

from dataclasses import dataclass
from datetime import date, datetime
from typing import Literal

from fieldlog.clock import timestamp
from fieldlog.errors import ConflictError, InputError
from fieldlog.procedures.compose import compose
from fieldlog.procedures.person import Person
from fieldlog.records.entries import Arrival
from fieldlog.services import intake, sites
from fieldlog.services.instance import Instance, organisation_of
from fieldlog.storage import people
from fieldlog.storage.connection import transaction

Role = Literal["technician", "office", "owner"]


@dataclass(frozen=True, slots=True)
class Particulars:
    """What the office knows of a person."""

    name: str
    role: Role
    login: str
    licence: str | None = None
    licence_expires: date | None = None
    employer: str | None = None
    sites: tuple[str, ...] = ()  # names or uids


def add_person(instance: Instance, particulars: Particulars, *, uid: str, at: datetime) -> str:
    """Enter a person, the log-in and the grants, and return the person's subject uid.

    Raises
    ------
    ConflictError
        If the log-in name is taken.
    NotFoundError
        If a site is not on file.
    """
    granted = [sites.site_named(instance, name).subject for name in particulars.sites]
    if people.login_of(instance.connection, particulars.login) is not None:
        raise ConflictError(f"login: {particulars.login} is taken; choose another name")
    _enter(instance, particulars, uid, at)
    let_in(instance, uid, particulars.login, particulars.role, granted, at=at)
    return uid


def let_in(instance: Instance, person: str, login: str, role: Role, sites_granted: list[str], *, at: datetime) -> None:
    """Give a person on file a log-in name, a role and sites."""
    with transaction(instance.connection):
        people.add_login(instance.connection, people.Login(login, person, role, timestamp(at)))
        for site in sites_granted:
            people.grant(instance.connection, person, site, timestamp(at))


def _enter(instance: Instance, particulars: Particulars, uid: str, at: datetime) -> None:
    body = Person(
        name=particulars.name,
        licence=particulars.licence,
        licence_expires=particulars.licence_expires,
        employer=particulars.employer,
    )
    author = organisation_of(instance).subject
    text = compose("person", body, uid=uid, author=author, made_at=timestamp(at))
    result = intake.take_in(instance.connection, [Arrival(text)], "server", timestamp(at))
    for refusal in result.refused:
        raise InputError(refusal.message, field=refusal.field)
