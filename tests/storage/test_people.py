"""Log-in names, roles and grants."""

from __future__ import annotations

import pytest

from fieldlog.errors import ConflictError, NotFoundError, StorageError
from fieldlog.storage import people
from fieldlog.storage.connection import Connection
from fieldlog.storage.people import Login
from tests.storage.made import AT, LATER, OTHER_SITE, PERSON, SITE, SYSTEM, register, take, uid, version

ZOE = Login("zoe", PERSON, "technician", AT)


def test_a_login_is_found_in_whatever_case(connection: Connection) -> None:
    people.add_login(connection, ZOE)
    assert people.login_of(connection, "ZOE") == ZOE
    assert people.login_of(connection, "zo") is None


def test_a_name_is_given_once(connection: Connection) -> None:
    people.add_login(connection, ZOE)
    with pytest.raises(ConflictError, match="Zoe is taken"):
        people.add_login(connection, Login("Zoe", PERSON, "office", AT))
    assert people.logins(connection) == [ZOE]


@pytest.mark.parametrize("person", [uid(88), SITE, uid(41)])
def test_a_login_is_of_a_person_in_the_log(connection: Connection, person: str) -> None:
    take(connection, version(register()[1], 41, PERSON))
    with pytest.raises(NotFoundError, match="no person"):
        people.add_login(connection, Login("zoe", person, "office", AT))


def test_a_role_that_does_not_exist(connection: Connection) -> None:
    with pytest.raises(StorageError):
        people.add_login(connection, Login("zoe", PERSON, "boss", AT))  # type: ignore[arg-type]


def test_role_and_removal(connection: Connection) -> None:
    people.add_login(connection, ZOE)
    people.add_login(connection, Login("anna", PERSON, "owner", LATER))
    people.change_role(connection, "Zoe", "office")
    assert [(login.name, login.role) for login in people.logins(connection)] == [
        ("anna", "owner"),
        ("zoe", "office"),
    ]
    people.remove_login(connection, "zoe")
    assert [login.name for login in people.logins(connection)] == ["anna"]
    for missing in (
        lambda: people.remove_login(connection, "zoe"),
        lambda: people.change_role(connection, "zoe", "owner"),
    ):
        with pytest.raises(NotFoundError, match="zoe"):
            missing()


def test_grants(connection: Connection) -> None:
    people.grant(connection, PERSON, SITE, AT)
    people.grant(connection, PERSON, OTHER_SITE, AT)
    people.grant(connection, PERSON, SITE, LATER)
    assert people.sites_granted(connection, PERSON) == {SITE, OTHER_SITE}
    people.revoke(connection, PERSON, OTHER_SITE)
    people.revoke(connection, PERSON, OTHER_SITE)
    assert people.sites_granted(connection, PERSON) == {SITE}
    assert people.people_granted(connection, SITE) == {PERSON}
    assert people.people_granted(connection, OTHER_SITE) == set()


@pytest.mark.parametrize(("person", "site"), [(PERSON, SYSTEM), (SITE, SITE), (PERSON, uid(88))])
def test_a_grant_is_of_a_site_to_a_person(connection: Connection, person: str, site: str) -> None:
    with pytest.raises(NotFoundError):
        people.grant(connection, person, site, AT)
