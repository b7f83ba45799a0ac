"""The database refuses to rewrite the record, on both engines.

Triggers stop our own mistakes; on PostgreSQL a web role that owns nothing stops the
program; only the hash tree and copies held outside show what an administrator did.

A later change of a table makes Django rebuild it on SQLite and drops its triggers
without a word, so they are put back after every migrate and counted at every check.
"""

from __future__ import annotations

from typing import Any

from django.core.checks import CheckMessage, Error
from django.db import connections

GUARDED = ("stakes_entry", "stakes_entrymark", "stakes_entrymatter", "stakes_treenode")

_POSTGRES_FUNCTION = """
CREATE OR REPLACE FUNCTION lathbook_only_grows() RETURNS trigger AS $$
BEGIN
  RAISE EXCEPTION 'The record only grows: % on % is refused.', TG_OP, TG_TABLE_NAME
    USING ERRCODE = 'restrict_violation';
END $$ LANGUAGE plpgsql;
"""


def names(table: str, vendor: str) -> list[str]:
    """The triggers a guarded table must carry."""
    acts = ["update", "delete"] + (["truncate"] if vendor == "postgresql" else [])
    return [f"{table}_refuses_{act}" for act in acts]


def statements(table: str, vendor: str) -> list[str]:
    """The SQL that puts a table's triggers in place; harmless when repeated."""
    if vendor == "postgresql":
        return [
            f"CREATE OR REPLACE TRIGGER {table}_refuses_{act} BEFORE {act.upper()} "
            f"ON {table} FOR EACH {'STATEMENT' if act == 'truncate' else 'ROW'} "
            "EXECUTE FUNCTION lathbook_only_grows()"
            for act in ("update", "delete", "truncate")
        ]
    return [
        f"CREATE TRIGGER IF NOT EXISTS {table}_refuses_{act} BEFORE {act.upper()} "
        f"ON {table} BEGIN SELECT RAISE(ABORT, 'The record only grows: {act} on "
        f"{table} is refused.'); END"
        for act in ("update", "delete")
    ]


def install(alias: str = "default") -> None:
    """Put every trigger in place; tables that do not exist yet are left out."""
    connection = connections[alias]
    tables = set(connection.introspection.table_names())
    with connection.cursor() as cursor:
        if connection.vendor == "postgresql":
            cursor.execute(_POSTGRES_FUNCTION, None)
        for table in GUARDED:
            if table in tables:
                for statement in statements(table, connection.vendor):
                    cursor.execute(statement, None)


def remove(alias: str = "default") -> None:
    """Take the triggers off, so that a test that committed can empty its tables."""
    connection = connections[alias]
    with connection.cursor() as cursor:
        for table in GUARDED:
            for name in names(table, connection.vendor):
                on = f" ON {table}" if connection.vendor == "postgresql" else ""
                cursor.execute(f"DROP TRIGGER IF EXISTS {name}{on}", None)


def missing(alias: str = "default") -> list[str]:
    """The triggers that should be there and are not."""
    connection = connections[alias]
    source = (
        "SELECT tgname FROM pg_trigger WHERE NOT tgisinternal AND tgenabled <> 'D'"
        if connection.vendor == "postgresql"
        else "SELECT name FROM sqlite_master WHERE type = 'trigger'"
    )
    with connection.cursor() as cursor:
        tables = set(connection.introspection.table_names(cursor))
        cursor.execute(source)
        found = {row[0] for row in cursor.fetchall()}
    wanted = [n for t in GUARDED if t in tables for n in names(t, connection.vendor)]
    return [name for name in wanted if name not in found]


def install_after_migrate(*, using: str = "default", **_: Any) -> None:
    install(using)


def missing_triggers_check(
    *, databases: list[str] | None = None, **_: Any
) -> list[CheckMessage]:
    return [
        Error(
            f"The trigger {name} is missing: the record could be rewritten.",
            hint="Run `python manage.py migrate`, which puts it back.",
            id="stakes.E001",
        )
        for alias in databases or ()
        for name in missing(alias)
    ]
