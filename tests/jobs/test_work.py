"""Work asked for in a transaction is done once, however often workers die."""

from __future__ import annotations

from collections.abc import Iterator
from datetime import timedelta

import pytest
from django.db import transaction
from django.utils import timezone

from jobs.models import Work
from jobs.work import WORKERS, ask, does, sweep
from jobs.work.doing import LEASE, MOST_ATTEMPTS, claim, do

pytestmark = pytest.mark.django_db


@pytest.fixture
def done(settings) -> Iterator[list[str]]:
    """A kind of work that writes down what it did, with no eager worker about."""
    settings.EAGER_WORK = False
    did: list[str] = []
    does("note")(lambda what: did.append(what))
    yield did
    del WORKERS["note"]


def test_work_rolls_back_with_what_it_belongs_to(done) -> None:
    with pytest.raises(ZeroDivisionError), transaction.atomic():
        ask("note", what="never")
        1 / 0  # noqa: B018
    assert Work.objects.count() == 0


def test_asking_again_while_it_waits_is_one_piece_of_work(done) -> None:
    ask("note", "mail 7", what="a")
    ask("note", "mail 7", what="a")
    assert sweep() == 1
    assert done == ["a"]


def test_asking_again_after_it_was_taken_is_a_new_piece(done) -> None:
    ask("note", "mail 7", what="a")
    claim()
    ask("note", "mail 7", what="b")
    assert Work.objects.count() == 2


def test_two_workers_never_hold_one_piece(done) -> None:
    ask("note", what="a")
    assert claim() is not None
    assert claim() is None


def test_a_worker_that_died_loses_nothing(done) -> None:
    ask("note", what="a")
    claim()
    assert claim(timezone.now() + LEASE + timedelta(seconds=1)) is not None


def test_who_lost_the_lease_does_not_mark_it_done(done) -> None:
    ask("note", what="a")
    slow = claim()
    claim(timezone.now() + LEASE + timedelta(seconds=1))
    assert not do(slow)
    assert Work.objects.get().done_at is None


def test_a_failure_is_kept_with_its_words_and_tried_again_later(settings) -> None:
    settings.EAGER_WORK = False

    def stumble() -> None:
        raise OSError("the mail server is away")

    does("stumble")(stumble)
    try:
        ask("stumble")
        assert sweep() == 0
        work = Work.objects.get()
        assert work.trouble == "OSError: the mail server is away"
        assert work.not_before > timezone.now()
        Work.objects.update(attempts=MOST_ATTEMPTS - 1, not_before=timezone.now())
        sweep()
        assert Work.objects.get().given_up_at is not None
    finally:
        del WORKERS["stumble"]
