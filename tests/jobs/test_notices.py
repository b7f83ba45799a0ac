"""Letters: one for each matter and reader, never twice, in the words of the job."""

from __future__ import annotations

import uuid

import pytest
from django.core import mail

from jobs.actions import handovers, holds, requests
from jobs.models import Notice, Position, Work
from jobs.notices import consume
from jobs.work import sweep
from stakes.models import Record
from tests.builders import after, plan, row, set_stake
from tests.jobs.cast import Cast, make_cast, make_job, seat_everybody

pytestmark = pytest.mark.django_db


@pytest.fixture
def site(settings) -> tuple[Cast, Record, list[uuid.UUID]]:
    settings.EAGER_WORK = False
    cast, job = make_cast(), make_job()
    seat_everybody(job, cast)
    marks = plan(job.record, row("101", "1", "2"), row("102", "5", "6"))
    set_stake(job.record, marks[0], None, after(1))
    return cast, job.record, marks


def ask(site) -> uuid.UUID:
    cast, record, marks = site
    return requests.make_request(
        record=record,
        company=cast.contractor.company,
        sort="re-stake",
        listed=marks,
        words="hit by a dozer",
        by=cast.by,
    )


def work_it_all() -> None:
    while sweep():
        pass


def test_the_office_hears_of_a_request_and_nobody_else_does(site) -> None:
    ask(site)
    work_it_all()
    readers = {address for letter in mail.outbox for address in letter.to}
    cast = site[0]
    assert readers == {cast.manager.email, cast.surveyor.email}
    assert "hit by a dozer" in mail.outbox[0].body
    assert "CST" not in mail.outbox[0].body


def test_a_matter_is_never_told_twice(site) -> None:
    _cast, record, _ = site
    ask(site)
    work_it_all()
    told = len(mail.outbox)
    Position.objects.update(number=0)
    consume(record.pk)
    work_it_all()
    assert len(mail.outbox) == told


def test_a_worker_killed_between_writing_and_sending_sends_what_is_left(site) -> None:
    _cast, record, _ = site
    ask(site)
    consume(record.pk)
    assert Notice.objects.filter(sent_at=None).count() == 2
    assert mail.outbox == []
    work_it_all()
    assert len(mail.outbox) == 2
    assert not Notice.objects.filter(sent_at=None).exists()


def test_the_letters_roll_back_with_what_they_tell_of(site) -> None:
    from django.db import transaction

    with pytest.raises(ZeroDivisionError), transaction.atomic():
        ask(site)
        1 / 0  # noqa: B018
    assert not Work.objects.filter(kind="notices").exists()


def test_a_hold_reaches_those_who_were_given_the_stakes(site) -> None:
    cast, record, marks = site
    handovers.hand_over(
        record=record,
        company=cast.mason.company,
        listed=marks[:1],
        signature="absent",
        in_spite=True,
        by=cast.by,
    )
    work_it_all()
    mail.outbox.clear()
    hold = holds.send_hold(
        record=record, listed=marks[:1], reason="CP3 moved", by=cast.by
    )
    holds.lift_hold(
        record=record, hold=hold, listed=marks[:1], reason="re-checked", by=cast.by
    )
    work_it_all()
    assert [letter.to for letter in mail.outbox] == [[cast.mason.email]] * 2
    assert "Hold pending re-check" in mail.outbox[0].subject
    assert "CP3 moved" not in mail.outbox[0].body


def test_who_asked_hears_the_decision(site) -> None:
    cast, record, marks = site
    key = requests.make_request(
        record=record,
        company=cast.contractor.company,
        sort="check",
        listed=marks[:1],
        by=cast.by.__class__(str(cast.contractor.pk), cast.contractor.name),
    )
    work_it_all()
    mail.outbox.clear()
    requests.decline_request(record=record, ask=key, reason="no access", by=cast.by)
    work_it_all()
    assert [letter.to for letter in mail.outbox] == [[cast.contractor.email]]
    assert "no access" in mail.outbox[0].body
