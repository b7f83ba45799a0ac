"""Corrections: whoever may say a kind of entry may correct it, and nobody else."""

from __future__ import annotations

import pytest
from django.urls import reverse

from jobs.actions import handovers, requests
from jobs.queries.seats import asked, by_of
from stakes.actions.correcting import (
    LEFT_TO_THEIR_OWN_PAGES,
    correct,
    may_correct,
    needed,
    withdraw,
)
from stakes.can import Can
from stakes.models import Entry
from stakes.record import KINDS, Refused
from tests.days import Site, make_site

pytestmark = pytest.mark.django_db


@pytest.fixture
def site() -> Site:
    return make_site()


@pytest.mark.parametrize(
    "kind, right",
    [
        ("notice rule set", Can.TERMS),
        ("re-stake terms set", Can.TERMS),
        ("tolerance classes set", Can.PLAN),
        ("request accepted", Can.DECIDE),
        ("request declined", Can.DECIDE),
        ("visit planned", Can.SCHEDULE),
        ("visit cancelled", Can.SCHEDULE),
        ("hold sent", Can.SEND_HOLD),
        ("hold lifted", Can.SEND_HOLD),
        ("handed over", Can.HAND_OVER),
        ("planned", Can.ISSUE),
        ("layout issued", Can.ISSUE),
        ("value adopted", Can.ADOPT),
        ("trust answered", Can.ADOPT),
        ("gate accepted", Can.PASS_GATE),
        ("sheet received", Can.PLAN),
        ("question asked", Can.PLAN),
        ("direction given", Can.PLAN),
        ("set", Can.RECORD),
        ("crew arrived", Can.RECORD),
    ],
)
def test_correcting_takes_the_right_of_the_kind(kind: str, right: Can) -> None:
    assert kind in KINDS
    assert needed(kind) is right


def test_seats_are_undone_on_their_own_page_alone() -> None:
    assert {"seat given", "seat ended"} <= set(LEFT_TO_THEIR_OWN_PAGES)


def one_of(site: Site, kind: str) -> Entry:
    found = Entry.objects.filter(record=site.record, kind=kind)
    return found.order_by("-number")[0]


def rights(site: Site, who: str) -> frozenset[Can]:
    reader = asked(site.record, site.cast.everybody[who], job_name="")
    assert reader is not None
    return reader.rights


def take_back(site: Site, kind: str, who: str) -> None:
    entry, by = one_of(site, kind), by_of(site.cast.everybody[who])
    withdraw(site.record, entry.number, why="x", by=by, rights=rights(site, who))


@pytest.mark.parametrize(
    "kind, may, may_not",
    [
        ("planned", "surveyor", "manager"),
        ("handed over", "party_chief", "crew"),
        ("request made", "manager", "party_chief"),
        ("notice rule set", "manager", "surveyor"),
        ("set", "crew", "auditor"),
    ],
)
def test_the_table_holds_in_the_action_and_on_the_page(
    site: Site, kind: str, may: str, may_not: str
) -> None:
    site.gives(ask=site.asks())
    number, before = one_of(site, kind).number, site.entries
    address = reverse("stakes:entry", args=[site.record.number, number])
    for who, offered in ((may, True), (may_not, False)):
        page = site.as_(who).get(address).content.decode()
        assert ("Take it back" in page) is offered, who
    with pytest.raises(Refused, match="takes the right"):
        take_back(site, kind, may_not)
    assert site.entries == before
    take_back(site, kind, may)
    assert site.entries == before + 1


def test_a_page_refuses_what_it_did_not_offer(site: Site) -> None:
    number = one_of(site, "planned").number
    before = site.entries
    address = reverse("stakes:entry-withdraw", args=[site.record.number, number])
    answer = site.as_("crew").post(address, {"why": "x"})
    assert answer.status_code == 422
    assert site.entries == before


def test_nobody_says_differently_for_the_other_side_what_it_answered(
    site: Site,
) -> None:
    contractor = by_of(site.cast.contractor)
    ask = site.asks()
    requests.accept_request(
        record=site.record, ask=ask, payer="contractor", by=site.cast.by
    )
    requests.answer_cost(
        record=site.record, ask=ask, accepted=False, words="not ours", by=contractor
    )
    handovers.answer_handover(
        record=site.record, handover=site.gives(), acknowledged=True, by=contractor
    )
    before = site.entries
    for kind in ("cost answered", "handover answered"):
        entry = one_of(site, kind)
        assert not may_correct(entry, site.cast.by, frozenset(Can))
        with pytest.raises(Refused, match="corrected by nobody else"):
            take_back(site, kind, "manager")
    with pytest.raises(Refused, match="corrected by nobody else"):
        correct(
            site.record,
            one_of(site, "cost answered").number,
            changes={"accepted": True},
            why="x",
            by=site.cast.by,
            rights=frozenset(Can),
        )
    assert site.entries == before
