"""The cast with everybody seated, and clients signed in as one of them."""

from __future__ import annotations

from collections.abc import Callable

import pytest
from django.test import Client
from django.utils import timezone

from jobs.models import Job, User
from tests.fieldwork import field_job, locate, station
from tests.jobs.cast import Cast, make_cast, make_job, seat_everybody
from tests.pages.crew import Field


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


@pytest.fixture
def field(job, cast: Cast, signed_in: Callable[..., Client]) -> Field:
    hour_ago = timezone.now() - timezone.timedelta(hours=1)
    record, marks = field_job(job.record, at=hour_ago)
    return Field(record, marks, signed_in(cast.party_chief))


@pytest.fixture
def ready(field: Field) -> Field:
    """With a valid ticket and a setup just opened."""
    now = timezone.now()
    locate(
        field.record,
        at=now - timezone.timedelta(minutes=30),
        valid_to=now + timezone.timedelta(days=5),
    )
    station(field.record, field.marks, at=now - timezone.timedelta(minutes=10))
    return field
