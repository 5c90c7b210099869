"""The tables, as migrations; no rows are read or written here.

A migration that was released is never edited: what changes later is a further one, and SCHEMA_VERSION counts them.
"""

from __future__ import annotations

from pathlib import Path

from sqlite_utils import Database
from sqlite_utils.migrations import Migrations

from fieldlog.storage.connection import (
    APPLICATION_ID,
    SCHEMA_VERSION,
    Connection,
    at_the_edge,
    connect_unmigrated,
    schema_version,
    transaction,
)

migrations = Migrations("fieldlog")


@at_the_edge
def open_database(path: Path, *, create: bool = False, busy_seconds: float | None = None) -> Connection:
    """Return a connection to the database, brought up to the present schema; with `create`, made if not there.

    Raises
    ------
    NotFoundError
        If there is no file and none is to be made.
    ForeignFileError
        If the file is of another program or of a newer fieldlog.
    StorageError
        If the file can't be read or written.
    """
    connection = connect_unmigrated(path, create=create, busy_seconds=busy_seconds)
    try:
        if schema_version(connection) < SCHEMA_VERSION:
            _migrate(connection)
    except BaseException:
        connection.close()
        raise
    return connection


def _migrate(connection: Connection) -> None:
    # All steps and the version in one write transaction: a second process finds either the old schema, and waits,
    # or the new one. sqlite-utils' own transaction is deferred, and two of them run into each other.
    with transaction(connection):
        migrations.apply(Database(connection))
        connection.execute(f"pragma application_id = {APPLICATION_ID}")
        connection.execute(f"pragma user_version = {SCHEMA_VERSION}")


@migrations(name="1")
def _first(database: Database) -> None:
    for statement in (*_LOG, *_BESIDE_THE_LOG, *_DERIVED, *_PEOPLE, *_REPORTS):
        database.execute(statement)


_LOG = (
    """
    create table entries (
        number integer primary key check (number > 0),       -- the server's order; without gaps
        uid text not null unique check (length(uid) = 36),
        received_at text not null check (received_at glob '????-??-??T??:??:??Z'),
        sha256 text not null check (length(sha256) = 64),    -- of the text
        link text not null check (length(link) = 64),        -- of this entry to the one before
        via text not null check (via in ('tablet', 'form', 'import', 'server')),
        signature text,                                      -- null: not made on an enrolled tablet
        text text not null,                                  -- what was signed and hashed; all below is out of it
        kind text not null,
        subject text not null,
        author text not null,
        made_at text not null,
        site text,                                           -- null: of the organisation, not of one site
        system text,                                         -- null: not about one system
        visit text,                                          -- null: not made on a visit
        based_on text,                                       -- null: the first version of its subject
        device text,                                         -- null: made on a form, by import or by the server
        device_number integer,                               -- null: as device
        performed_on text,                                   -- null: the body of this kind has no such date
        withdrawn integer not null check (withdrawn in (0, 1))
    ) strict
    """,
    # All versions of a site, in order, for its history; the row number is the index's last column by itself.
    "create index entries_site on entries (site)",
    # Later versions of a subject. The first is found by its uid, so the many that have no other are left out.
    "create index entries_later_version on entries (subject) where subject <> uid",
    # What was done on a visit, for its sign-off and report.
    "create index entries_visit on entries (visit) where visit is not null",
    """
    create trigger entries_not_changed before update on entries
    begin select raise(abort, 'an entry is never changed; add a version of its subject'); end
    """,
    """
    create trigger entries_not_deleted before delete on entries
    begin select raise(abort, 'an entry is never deleted; add a version that withdraws its subject'); end
    """,
    # REPLACE deletes without the trigger above where recursive_triggers is off, as it is in a plain SQLite shell.
    """
    create trigger entries_follow before insert on entries
    when new.number is not (select coalesce(max(number), 0) + 1 from entries)
        or exists (select 1 from entries where uid = new.uid)
    begin select raise(abort, 'an entry follows the newest one and has a uid of its own'); end
    """,
)

_BESIDE_THE_LOG = (
    """
    create table refusals (
        id integer primary key,
        uid text not null,                 -- empty: the text could not be read that far
        code text not null,
        field text not null,
        message text not null,
        text blob not null,                -- UTF-8 of what came; it may hold half a character, a text may not
        sha256 text not null,
        received_at text not null,
        via text not null,
        author text,                       -- null, as the three below: could not be read
        site text,
        device text,
        device_number integer,
        -- A tablet sends a refused text again until it is mended: once is enough to explain its number.
        unique (sha256, code, field)
    ) strict
    """,
    "create index refusals_uid on refusals (uid)",
    """
    create trigger refusals_not_changed before update on refusals
    begin select raise(abort, 'a refusal is kept as it is'); end
    """,
    """
    create trigger refusals_not_deleted before delete on refusals
    begin select raise(abort, 'a refusal is kept'); end
    """,
    """
    create table waiting (
        id integer primary key,            -- order of arrival
        uid text not null unique,
        text text not null,
        sha256 text not null,
        signature text,                    -- null: not made on an enrolled tablet
        via text not null,
        received_at text not null,
        waits_for text not null,           -- the uid that has not arrived
        field text not null                -- which field of the text names it
    ) strict
    """,
    "create index waiting_for on waiting (waits_for)",
)

_DERIVED = (
    # One row a subject: the version in force. Kept by append, made anew from entries by rebuild.
    """
    create table current (
        -- Number of the subject's first entry. Rows come in this order, so writing them touches few pages; by
        -- subject, a random uid, every batch touched nearly all. entries.uid leads from a subject to it.
        first integer primary key,
        subject text not null,
        kind text not null,
        site text,                                            -- null, as the two below: see entries
        system text,
        performed_on text,
        number integer not null,
        uid text not null,
        forked integer not null check (forked in (0, 1)),     -- changed twice from the same version, not settled
        withdrawn integer not null check (withdrawn in (0, 1))
    ) strict
    """,
    # What is in force on a site, all of it for judging or the tests of one kind.
    "create index current_site on current (site, kind)",
    # Registers: all systems, all people.
    "create index current_kind on current (kind)",
    # A system's tests by the date they were done.
    "create index current_system on current (system, performed_on) where system is not null",
    # What the office has to settle: few, so the index is small.
    "create index current_forked on current (number) where forked = 1",
    """
    create table statements (
        system text not null,
        profile text not null,             -- uid of the rule_profile version; empty: adopted standard not recorded
        supply text not null,
        site text not null,
        rank integer not null,             -- 0 for the most worrying
        version text not null,             -- of the program that judged
        through_number integer not null,   -- newest entry it could know of
        valid_until text,                  -- null: time alone does not change it
        statement blob not null,           -- JSON
        primary key (system, profile)
    ) strict, without rowid
    """,
    "create index statements_supply on statements (supply)",
    "create index statements_site on statements (site)",
    # The overview, the most worrying first.
    "create index statements_rank on statements (rank, system)",
    """
    create table dirty_supplies (
        supply text primary key,
        since_number integer not null      -- of the newest entry that made it so
    ) strict, without rowid
    """,
    """
    create table judged_supplies (
        supply text primary key,
        through_number integer not null,
        valid_until text                   -- null: time alone changes none of its statements
    ) strict, without rowid
    """,
)

_PEOPLE = (
    """
    create table people_logins (
        name text primary key collate nocase,
        person text not null references entries (uid),       -- a subject is its first entry's uid
        role text not null check (role in ('technician', 'office', 'owner')),
        added_at text not null
    ) strict
    """,
    "create index people_logins_person on people_logins (person)",
    """
    create table grants (
        person text not null references entries (uid),
        site text not null references entries (uid),
        granted_at text not null,
        primary key (person, site)
    ) strict, without rowid
    """,
    "create index grants_site on grants (site)",
)

_REPORTS = (
    """
    create table reports (
        sha256 text primary key check (length(sha256) = 64),           -- its name among the files
        visit text not null references entries (uid),
        sign_off text not null references entries (uid),
        revision integer not null check (revision > 0),
        made_at text not null,
        unsigned_sha256 text not null check (length(unsigned_sha256) = 64),
        size integer not null check (size > 0),                        -- bytes
        unique (visit, revision)
    ) strict
    """,
    """
    create trigger reports_not_changed before update on reports
    begin select raise(abort, 'a report is never changed; make the next revision'); end
    """,
    """
    create trigger reports_not_deleted before delete on reports
    begin select raise(abort, 'a report is never deleted'); end
    """,
)
