"""Every page of a day, in a real browser at both sizes: axe finds nothing, nothing is
wider than its screen, and on a phone every verb is a target for gloves."""

from __future__ import annotations

import pytest
from django.utils import timezone

from jobs.actions import holds, requests, visits
from jobs.models import Handover, Hold, Request, User, Visit
from tests.browser.conftest import Visitors, looks_right
from tests.builders import SURVEYOR, after
from tests.days import Site, check, make_site

pytestmark = [pytest.mark.django_db(transaction=True)]
PASSWORD = "a-long-password-of-tests"
GLOVES = 56
"""Height in CSS pixels of what is pressed in the field."""


@pytest.fixture
def site(transactional_db: None) -> Site:
    site = make_site()
    for person in User.objects.all():
        person.set_password(PASSWORD)
        person.save()
    ask = site.asks(built_from="the east footing", phone="555-0105")
    requests.accept_request(
        record=site.record, ask=ask, payer="contractor", by=site.cast.by
    )
    visits.plan_visit(
        record=site.record,
        starts_at=timezone.now(),
        tasks=[visits.task_for(Request.objects.get())],
        by=site.cast.by,
    )
    site.gives()
    check(site.record, [site.loose], "fail", after(5))
    holds.send_hold(record=site.record, listed=site.marks, reason="x", by=SURVEYOR)
    return site


def ids(site: Site) -> dict[str, str]:
    ask, visit = Request.objects.get().key, Visit.objects.get()
    task = visit.tasks[0]["task"]
    return {
        "request": site.url("request", ask),
        "accept": site.url("request-accept", ask),
        "cost": site.url("request-cost", ask),
        "visit": site.url("visit", visit.key),
        "move": site.url("visit-move", visit.key),
        "arrive": site.url("visit-arrive", visit.key),
        "wait": site.url("visit-wait", visit.key),
        "outcome": site.url("task-end", visit.key, task),
        "ticket": site.url("ticket-close", visit.key),
        "give": site.url("handover-make") + f"?visit={visit.key}",
        "handover": site.url("handover", Handover.objects.get().key),
        "answer": site.url("handover-answer", Handover.objects.get().key),
        "hold": site.url("hold", Hold.objects.get().key),
        "tell": site.url("hold-tell", Hold.objects.get().key),
        "lift": site.url("hold-lift", Hold.objects.get().key),
        "ask": site.url("request-make"),
        "plan": site.url("visit-plan"),
        "send": site.url("hold-send"),
        "requests": site.url("requests"),
        "visits": site.url("visits"),
        "handovers": site.url("handovers"),
        "holds": site.url("holds"),
        "home": site.url("home"),
        "start": "/",
    }


SEEN = {
    "manager": "start home requests request accept ask visits visit move plan",
    "surveyor": "start holds hold tell lift send handovers handover",
    "party_chief": "visit arrive wait outcome ticket give",
    "contractor": "start home requests request cost ask visit handover answer hold",
}


@pytest.mark.parametrize("phone", [False, True])
@pytest.mark.parametrize("who", list(SEEN))
def test_every_page_of_a_day_looks_right(
    site: Site, visitor: Visitors, who: str, phone: bool
) -> None:
    page = visitor.page(site.cast.everybody[who].email, PASSWORD, phone=phone)
    addresses = ids(site)
    for name in SEEN[who].split():
        page.goto(addresses[name])
        looks_right(page)
        if phone and who == "party_chief":
            assert small_targets(page) == [], name


def small_targets(page) -> list[str]:
    """Buttons and fields of the page itself that a glove would miss."""
    found = page.locator("main :is(button, .button, select, .choices label)").all()
    assert found
    boxes = [(one.inner_text()[:30], one.bounding_box()) for one in found]
    return [words for words, box in boxes if box and box["height"] < GLOVES - 1]
