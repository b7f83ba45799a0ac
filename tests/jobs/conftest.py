"""The cast and one job, for tests of people, seats and terms."""

from __future__ import annotations

import pytest

from jobs.models import Job
from tests.jobs.cast import Cast, make_cast, make_job


@pytest.fixture
def cast(db: None) -> Cast:
    return make_cast()


@pytest.fixture
def job(cast: Cast) -> Job:
    return make_job(by=cast.by)
