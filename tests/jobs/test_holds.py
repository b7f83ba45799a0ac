"""Holds: proposed by doubt, sent to whoever holds the stakes, heard, lifted by marks."""

from __future__ import annotations

import uuid

import pytest

from jobs.actions import holds
from jobs.models import Hold
from jobs.queries.proposals import proposal, with_doubts
from jobs.queries.seats import by_of
from stakes.actions.condition import note_built_from
from stakes.models import Mark
from stakes.record import Refused
from tests.builders import SURVEYOR, after
from tests.days import Site, check, make_site

pytestmark = pytest.mark.django_db


@pytest.fixture
def site() -> Site:
    return make_site()


def send(site: Site, **more: object) -> uuid.UUID:
    said = {"listed": site.marks, "reason": "CP3 moved", "by": SURVEYOR, **more}
    return holds.send_hold(record=site.record, **said)  # type: ignore[arg-type]


def test_a_hold_goes_to_whoever_holds_the_stakes_and_to_nobody_else(
    site: Site,
) -> None:
    site.gives()
    send(site)
    assert Hold.objects.get().companies == [str(site.cast.contractor.company.pk)]
    assert Mark.objects.filter(held=True).count() == 2


def test_a_hold_is_lifted_mark_by_mark(site: Site) -> None:
    hold = send(site)
    lift = {"record": site.record, "hold": hold, "reason": "re-checked", "by": SURVEYOR}
    holds.lift_hold(**lift, listed=site.marks[:1])
    assert Hold.objects.get().lifted_at is None
    holds.lift_hold(**lift, listed=site.marks)
    assert Hold.objects.get().lifted_at is not None
    assert not Mark.objects.filter(held=True).exists()
    with pytest.raises(Refused, match="under this hold"):
        holds.lift_hold(**lift, listed=site.marks)


def test_one_hold_lifted_leaves_another_on_the_same_mark(site: Site) -> None:
    first = send(site)
    send(site)
    holds.lift_hold(
        record=site.record, hold=first, listed=site.marks, reason="x", by=SURVEYOR
    )
    assert Mark.objects.filter(held=True).count() == 2


@pytest.mark.parametrize(
    "said, words",
    [
        ({"listed": []}, "no marks"),
        ({"listed": [uuid.uuid4()]}, "not on this job"),
        ({"reason": " "}, "reason is missing"),
        ({"words": "x" * 1001}, "1001 characters"),
    ],
)
def test_a_hold_that_names_nothing_is_refused(
    site: Site, said: dict, words: str
) -> None:
    before = site.entries
    with pytest.raises(Refused, match=words):
        send(site, **said)
    assert site.entries == before


def test_a_hold_sent_twice_is_one(site: Site) -> None:
    key = uuid.uuid4()
    assert send(site, key=key) == send(site, key=key)
    assert Hold.objects.count() == 1


def test_a_company_acknowledges_once_and_is_told_as_often_as_it_is_rung(
    site: Site,
) -> None:
    site.gives()
    hold = send(site)
    company = site.cast.contractor.company
    said = {
        "record": site.record,
        "hold": hold,
        "company": str(company.pk),
        "company_name": company.name,
        "by": by_of(site.cast.contractor),
    }
    for how in ("acknowledged", "acknowledged", "told", "told", "read", "read"):
        holds.hear_hold(**said, how=how)
    heard = [h["how"] for h in Hold.objects.get().heard]
    assert heard == ["acknowledged", "told", "told", "read"]


def test_doubt_proposes_a_hold_and_a_hold_ends_the_proposal(site: Site) -> None:
    assert with_doubts([site.record]) == []
    assert proposal(site.record) is None
    check(site.record, site.marks, "fail", after(5))
    assert with_doubts([site.record]) == [site.record]
    assert [v.label for v in proposal(site.record).all] == ["101", "102"]
    send(site)
    assert proposal(site.record) is None


def test_what_is_built_upon_stands_first_and_each_mark_once(site: Site) -> None:
    site.gives()
    check(site.record, [*site.marks, site.loose], "fail", after(5))
    note_built_from(
        record=site.record, marks=site.marks[1:], what="a footing", by=SURVEYOR
    )
    proposed = proposal(site.record)
    assert [v.label for v in proposed.built] == ["102"]
    assert [v.label for v in proposed.given] == ["101"]
    assert [v.label for v in proposed.rest] == ["103"]
    assert [h.name for h in proposed.holders] == ["Harbour Builders"]


def test_a_request_that_tells_of_work_built_puts_its_stakes_first(site: Site) -> None:
    check(site.record, site.marks, "fail", after(5))
    site.asks(listed=site.marks[:1], built_from="the east footing")
    proposed = proposal(site.record)
    assert [v.label for v in proposed.built] == ["101"]
