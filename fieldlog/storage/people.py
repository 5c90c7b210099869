"""Log-in names with their roles, and the sites granted to a person; who a person is stands in the log."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

from fieldlog.errors import ConflictError, NotFoundError
from fieldlog.storage.connection import Connection, at_the_edge

Role = Literal["technician", "office", "owner"]


@dataclass(frozen=True, slots=True)
class Login:
    """A name to log in by; `person` is the subject of a person entry."""

    name: str
    person: str
    role: Role
    added_at: str


@at_the_edge
def add_login(connection: Connection, login: Login) -> None:
    """Add a log-in name.

    Raises
    ------
    NotFoundError
        If the person is not in the log.
    ConflictError
        If the name is taken, in whatever case of letters.
    """
    _require_subject(connection, login.person, "person")
    if login_of(connection, login.name) is not None:
        raise ConflictError(f"the log-in name {login.name} is taken; choose another", name=login.name)
    connection.execute(
        "insert into people_logins (name, person, role, added_at) values (?, ?, ?, ?)",
        (login.name, login.person, login.role, login.added_at),
    )


@at_the_edge
def login_of(connection: Connection, name: str) -> Login | None:
    """Return the log-in of this name, in whatever case of letters."""
    found = connection.execute(
        "select name, person, role, added_at from people_logins where name = ?", (name,)
    ).fetchone()
    return Login(*found) if found else None


@at_the_edge
def logins(connection: Connection) -> list[Login]:
    """Return all log-ins by name."""
    found = connection.execute("select name, person, role, added_at from people_logins order by name")
    return [Login(*row) for row in found]


@at_the_edge
def change_role(connection: Connection, name: str, role: Role) -> None:
    """Give a log-in another role.

    Raises
    ------
    NotFoundError
        If there is no such name.
    """
    changed = connection.execute("update people_logins set role = ? where name = ?", (role, name))
    _require_one(changed.rowcount, name)


@at_the_edge
def remove_login(connection: Connection, name: str) -> None:
    """Take a log-in name away; the person and all they made stay in the log.

    Raises
    ------
    NotFoundError
        If there is no such name.
    """
    changed = connection.execute("delete from people_logins where name = ?", (name,))
    _require_one(changed.rowcount, name)


@at_the_edge
def grant(connection: Connection, person: str, site: str, granted_at: str) -> None:
    """Grant a site to a person; granting it again changes nothing.

    Raises
    ------
    NotFoundError
        If the person or the site is not in the log.
    """
    _require_subject(connection, person, "person")
    _require_subject(connection, site, "site")
    connection.execute(
        "insert into grants (person, site, granted_at) values (?, ?, ?) on conflict (person, site) do nothing",
        (person, site, granted_at),
    )


@at_the_edge
def revoke(connection: Connection, person: str, site: str) -> None:
    """Take a grant away; where there is none, nothing changes."""
    connection.execute("delete from grants where person = ? and site = ?", (person, site))


@at_the_edge
def sites_granted(connection: Connection, person: str) -> set[str]:
    """Return the sites granted to a person."""
    return {site for (site,) in connection.execute("select site from grants where person = ?", (person,))}


@at_the_edge
def people_granted(connection: Connection, site: str) -> set[str]:
    """Return the people to whom a site is granted."""
    return {person for (person,) in connection.execute("select person from grants where site = ?", (site,))}


def _require_subject(connection: Connection, subject: str, kind: str) -> None:
    found = connection.execute(
        "select 1 from entries where uid = ? and subject = uid and kind = ?", (subject, kind)
    ).fetchone()
    if found is None:
        raise NotFoundError(f"there is no {kind} {subject} in the log; add the {kind} first", subject=subject)


def _require_one(changed: int, name: str) -> None:
    if changed != 1:
        raise NotFoundError(f"there is no log-in name {name}; see `fieldlog person`", name=name)
