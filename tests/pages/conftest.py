"""The cast with everybody seated, and clients signed in as one of them."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from django.test import Client

from jobs.models import Job, User
from tests.jobs.cast import Cast, make_cast, make_job, seat_everybody


@pytest.fixture
def cast(db: None) -> Cast:
    return make_cast()


@pytest.fixture
def job(cast: Cast) -> Job:
    job = make_job(by=cast.by)
    seat_everybody(job, cast)
    return job


@pytest.fixture
def signed_in() -> Callable[[User], Client]:
    def client(person: User) -> Client:
        client = Client()
        client.force_login(person)
        return client

    return client
