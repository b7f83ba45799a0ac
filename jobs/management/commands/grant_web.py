"""`manage.py grant_web ROLE`: on PostgreSQL, what the web role needs and no more."""

from __future__ import annotations

from typing import Any

import psycopg
from django.conf import settings
from django.core.management.base import BaseCommand, CommandError, CommandParser
from psycopg import sql

from stakes.record.triggers import GUARDED


class Command(BaseCommand):
    help = (
        "Give a PostgreSQL role read and write on the tables, but on those of the "
        "record only read and add. Run it as the owner, after migrate."
    )

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument("role", help="the web role, as in DATABASE_URL")

    def handle(self, *_: Any, role: str, **__: Any) -> None:
        owner = settings.OWNER_DATABASE_URL or settings.DATABASE_URL
        if not owner:
            raise CommandError("The embedded database has no roles; nothing to grant.")
        with psycopg.connect(owner) as connection:
            for statement in grants(role):
                connection.execute(statement)
        self.stdout.write(f"{role} may read and write; on the record, read and add.")


def grants(role: str) -> list[sql.Composed]:
    """The statements, in order: everything, then less on what only grows."""
    name = sql.Identifier(role)
    everything = (
        "GRANT USAGE ON SCHEMA public TO {role}",
        "GRANT SELECT, INSERT, UPDATE, DELETE ON ALL TABLES IN SCHEMA public TO {role}",
        "GRANT USAGE, SELECT ON ALL SEQUENCES IN SCHEMA public TO {role}",
    )
    less = "REVOKE UPDATE, DELETE, TRUNCATE ON {table} FROM {role}"
    return [
        *(sql.SQL(text).format(role=name) for text in everything),
        *(
            sql.SQL(less).format(table=sql.Identifier(table), role=name)
            for table in GUARDED
        ),
    ]
