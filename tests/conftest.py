"""Settings for tests, the cast, and the two promises every test keeps.

After each test that used the database the read models must equal a replay of the
record. A test that commits empties the tables afterwards, which the triggers would
refuse, so they are taken off around that one command.
"""

from __future__ import annotations

import os
import tempfile
from collections.abc import Iterator

import pytest

os.environ.setdefault("LATHBOOK_DATA_DIR", tempfile.mkdtemp(prefix="lathbook-tests-"))
os.environ["LATHBOOK_EAGER_WORK"] = "true"


def pytest_configure() -> None:
    from django.conf import settings

    settings.PASSWORD_HASHERS = ["django.contrib.auth.hashers.MD5PasswordHasher"]
    settings.EMAIL_BACKEND = "django.core.mail.backends.locmem.EmailBackend"


@pytest.fixture(scope="session", autouse=True)
def _flush_past_the_triggers() -> Iterator[None]:
    from django.core.management.commands import flush

    from stakes.record import triggers

    handle = flush.Command.handle

    def without_triggers(self: flush.Command, **options: object) -> None:
        alias = str(options["database"])
        triggers.remove(alias)
        try:
            handle(self, **options)
        finally:
            triggers.install(alias)

    flush.Command.handle = without_triggers  # type: ignore[method-assign]
    yield
    flush.Command.handle = handle  # type: ignore[method-assign]


@pytest.fixture(autouse=True)
def _replay_equals_read_models(request: pytest.FixtureRequest) -> Iterator[None]:
    uses_database = "db" in request.fixturenames or "transactional_db" in (
        request.fixturenames
    )
    if uses_database:
        request.getfixturevalue(
            "transactional_db" if "transactional_db" in request.fixturenames else "db"
        )
    yield
    if uses_database and "no_replay" not in request.keywords:
        from stakes.models import Record
        from stakes.record.folds import replay

        different = {r.number: replay(r) for r in Record.objects.all()}
        assert not any(different.values()), different
