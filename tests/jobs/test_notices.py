"""Letters: one for each matter and reader, never twice, in the words of the job."""

from __future__ import annotations

import uuid
from datetime import UTC, datetime, timedelta

import pytest
from django.core import mail
from django.core.mail.backends.locmem import EmailBackend
from django.db import transaction
from django.utils import timezone

from jobs.actions import holds, requests, visits
from jobs.actions.seats import end_seat
from jobs.kinds.requests import RequestTalkedOver
from jobs.kinds.visits import Member, PlannedTask, VisitPlanned
from jobs.models import Hold, Notice, Position, Seat, Work
from jobs.notices import consume
from jobs.work import sweep
from jobs.work.doing import LEASE, claim
from stakes.record import By, append
from tests.builders import SURVEYOR, after
from tests.days import Site, make_site

pytestmark = pytest.mark.django_db


@pytest.fixture
def site(settings) -> Site:
    settings.EAGER_WORK = False
    site = make_site()
    work_it_all()
    mail.outbox.clear()
    return site


def work_it_all() -> None:
    while sweep():
        pass


def readers() -> list[str]:
    return [letter.to[0] for letter in mail.outbox]


def test_the_office_hears_of_a_request_and_nobody_else_does(site: Site) -> None:
    monday = timezone.now() + timedelta(days=9)
    site.asks(needed_by=monday)
    work_it_all()
    assert set(readers()) == {site.cast.manager.email, site.cast.surveyor.email}
    body = mail.outbox[0].body
    for words in ("Harbour Builders asks", "hit by a dozer", "Marks: 101, 102."):
        assert words in body
    local = monday.astimezone(site.record.time_zone)
    assert f"{local:%H:%M}" in body
    assert "Earliest under the notice rule" in body


def test_work_built_upon_is_said_in_the_subject(site: Site) -> None:
    site.asks(built_from="the east footing")
    work_it_all()
    assert "Work built" in mail.outbox[0].subject
    assert "the east footing" in mail.outbox[0].body


def test_a_matter_is_never_told_twice(site: Site) -> None:
    site.asks()
    work_it_all()
    told = len(mail.outbox)
    Position.objects.update(number=0)
    consume(site.record.pk)
    work_it_all()
    assert len(mail.outbox) == told


def test_a_worker_killed_between_writing_and_sending_sends_what_is_left(
    site: Site,
) -> None:
    site.asks()
    consume(site.record.pk)
    assert Notice.objects.filter(sent_at=None).count() == 2
    assert mail.outbox == []
    work_it_all()
    assert len(mail.outbox) == 2
    assert not Notice.objects.filter(sent_at=None).exists()


def test_a_worker_killed_with_a_letter_in_its_hands_leaves_it_to_the_next(
    site: Site,
) -> None:
    site.asks()
    consume(site.record.pk)
    Work.objects.filter(kind="notices").update(done_at=timezone.now())
    now = timezone.now()
    held = claim(now)
    assert held is not None and held.kind == "letter"
    work_it_all()
    assert len(mail.outbox) == 1
    again = claim(now + LEASE + timedelta(seconds=1))
    assert again is not None and again.pk == held.pk


def test_a_letter_the_post_refuses_is_sent_later_under_the_same_name(
    site: Site, monkeypatch: pytest.MonkeyPatch
) -> None:
    with monkeypatch.context() as broken:

        def refuse(self: EmailBackend, messages: object) -> int:
            raise ConnectionRefusedError

        broken.setattr(EmailBackend, "send_messages", refuse)
        site.asks()
        work_it_all()
    assert mail.outbox == []
    Work.objects.filter(kind="letter").update(not_before=timezone.now())
    work_it_all()
    names = {letter.extra_headers["Message-ID"] for letter in mail.outbox}
    assert len(mail.outbox) == len(names) == 2


def test_the_letters_roll_back_with_what_they_tell_of(site: Site) -> None:
    before = Work.objects.count()
    with pytest.raises(ZeroDivisionError), transaction.atomic():
        site.asks()
        1 / 0  # noqa: B018
    assert Work.objects.count() == before


def test_a_withdrawn_request_is_not_written_about(site: Site) -> None:
    from stakes.actions.correcting import withdraw
    from stakes.can import Can

    site.asks()
    by = site.cast.by
    withdraw(site.record, site.entries, why="twice", by=by, rights=Can)
    work_it_all()
    assert mail.outbox == []


def test_a_hold_reaches_each_holder_with_its_own_marks_in_neutral_words(
    site: Site,
) -> None:
    cast = site.cast
    site.gives(cast.mason.company, listed=site.marks[:1])
    site.gives(listed=site.marks[1:])
    work_it_all()
    assert set(readers()) == {cast.mason.email, cast.contractor.email}
    mail.outbox.clear()
    hold = holds.send_hold(
        record=site.record, listed=site.marks, reason="CP3 moved", by=SURVEYOR
    )
    work_it_all()
    said = {letter.to[0]: letter.body for letter in mail.outbox}
    assert "Marks: 101." in said[cast.mason.email]
    assert "Marks: 102." in said[cast.contractor.email]
    assert "CP3 moved" not in "".join(said.values())
    mail.outbox.clear()
    holds.lift_hold(
        record=site.record,
        hold=hold,
        listed=site.marks[:1],
        reason="re-checked",
        by=SURVEYOR,
    )
    work_it_all()
    assert readers() == [cast.mason.email]
    assert "Marks: 101." in mail.outbox[0].body


def test_the_first_notice_of_a_hold_is_recorded_once_for_each_company(
    site: Site,
) -> None:
    site.gives()
    holds.send_hold(record=site.record, listed=site.marks, reason="x", by=SURVEYOR)
    work_it_all()
    [heard] = Hold.objects.get().heard
    assert (heard["how"], heard["words"]) == ("told", "first notice, by mail")
    assert heard["company"] == str(site.cast.contractor.company.pk)
    # Killed after sending and before the mark: the letter goes again, the fact does not.
    Notice.objects.update(sent_at=None)
    for notice in Notice.objects.all():
        Work.objects.create(
            kind="letter",
            about=f"again {notice.pk}",
            args={"notice": notice.pk},
            wanted_at=timezone.now(),
            not_before=timezone.now(),
        )
    work_it_all()
    assert len(Hold.objects.get().heard) == 1


def test_who_asked_hears_the_decision_with_the_promise_in_the_sites_time(
    site: Site,
) -> None:
    ask = site.asks()
    work_it_all()
    mail.outbox.clear()
    requests.accept_request(
        record=site.record,
        ask=ask,
        promised_for=datetime(2031, 7, 1, 13, 0, tzinfo=UTC),
        payer="contractor",
        by=site.cast.by,
    )
    work_it_all()
    assert readers() == [site.cast.contractor.email]
    assert "Tue 1 Jul 2031, 08:00" in mail.outbox[0].body
    mail.outbox.clear()
    requests.decline_request(
        record=site.record, ask=ask, reason="no access", by=site.cast.by
    )
    work_it_all()
    assert "no access" in mail.outbox[0].body


def test_whoever_lost_their_seat_is_written_to_no_more(site: Site) -> None:
    ask = site.asks()
    work_it_all()
    mail.outbox.clear()
    seat = Seat.objects.get(person=site.cast.contractor)
    end_seat(record=site.record, seat=seat.key, by=site.cast.by)
    requests.decline_request(
        record=site.record, ask=ask, reason="no access", by=site.cast.by
    )
    work_it_all()
    assert mail.outbox == []


def test_a_crew_hears_of_its_visit_and_of_its_end(site: Site) -> None:
    chief = site.cast.party_chief
    visit = visits.plan_visit(
        record=site.record,
        starts_at=after(0),
        members=[Member(person=str(chief.pk), name=chief.name)],
        tasks=[PlannedTask(task=uuid.uuid4(), sort="check", listed=tuple(site.marks))],
        by=site.cast.by,
    )
    work_it_all()
    assert readers() == [chief.email]
    # 14:00 UTC is 08:00 in Chicago in March before summer time.
    assert "Mon 2 Mar 2026, 08:00" in mail.outbox[0].body
    assert "Check Marks: 101, 102." in mail.outbox[0].body
    visits.cancel_visit(record=site.record, visit=visit, reason="rain", by=site.cast.by)
    work_it_all()
    assert "rain" in mail.outbox[-1].body


def test_people_who_have_no_account_hold_up_no_letter(site: Site) -> None:
    """A program or a paper names people as it likes."""
    append(
        site.record,
        VisitPlanned(
            visit=uuid.uuid4(),
            starts_at=after(0),
            members=(Member(person="rod-1", name="Rod"),),
        ),
        by=SURVEYOR,
    )
    ask = site.asks(by=By(person="paper", name="Foreman"))
    append(site.record, RequestTalkedOver(ask=ask, words="which?"), by=SURVEYOR)
    work_it_all()
    assert not Work.objects.exclude(trouble="").exists()
    assert site.cast.manager.email in readers()
    assert Position.objects.get(record=site.record).number == site.entries
