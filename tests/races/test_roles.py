"""On PostgreSQL the web role may add to the record and do nothing else to it."""

from __future__ import annotations

import os

import psycopg
import pytest

from stakes.record.triggers import GUARDED
from tests.arena import arena

pytestmark = [
    pytest.mark.commits,
    pytest.mark.skipif(
        not os.environ.get("DATABASE_URL"), reason="roles are PostgreSQL's"
    ),
]


def test_the_web_role_cannot_rewrite_the_record_nor_take_the_guards_off() -> None:
    role = "lathbook_web_of_tests"
    with arena(os.environ["DATABASE_URL"]) as ring:
        ring.run("tests.races.new_record", "roles")
        with psycopg.connect(ring.env["DATABASE_URL"], autocommit=True) as owner:
            owner.execute(f"DROP ROLE IF EXISTS {role}")
            owner.execute(f"CREATE ROLE {role} LOGIN PASSWORD 'web'")
            try:
                ring.manage("grant_web", role)
                owner.execute(f"SET ROLE {role}")
                tries = [
                    *(f"UPDATE {table} SET id = id" for table in GUARDED),
                    *(f"DELETE FROM {table}" for table in GUARDED),
                    *(f"TRUNCATE {table} CASCADE" for table in GUARDED),
                    "ALTER TABLE stakes_entry DISABLE TRIGGER ALL",
                    "DROP TRIGGER stakes_entry_refuses_update ON stakes_entry",
                    "SET session_replication_role = replica",
                ]
                for attempt in tries:
                    with pytest.raises(psycopg.errors.InsufficientPrivilege):
                        owner.execute(attempt)
                owner.execute("SELECT count(*) FROM stakes_entry")
                owner.execute("UPDATE stakes_record SET head = head")
            finally:
                owner.execute("RESET ROLE")
                owner.execute(f"DROP OWNED BY {role}")
                owner.execute(f"DROP ROLE {role}")
