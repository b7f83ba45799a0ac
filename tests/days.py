"""A site on an ordinary day, for tests of requests, visits, handovers and holds."""

from __future__ import annotations

import uuid
from dataclasses import dataclass
from typing import Any

from django.test import Client
from django.urls import reverse

from jobs.actions import handovers, requests
from jobs.models import Company, User
from jobs.queries.seats import by_of
from stakes.kinds.checking import Judgement, StakeChecked
from stakes.models import Entry, Record
from stakes.record import append
from tests.builders import CHIEF, after, plan, row, set_stake
from tests.jobs.cast import Cast, make_cast, make_job, seat_everybody


@dataclass
class Site:
    """101 and 102 stand and were checked by somebody independent; 103 was only set."""

    cast: Cast
    record: Record
    marks: list[uuid.UUID]
    loose: uuid.UUID

    @property
    def entries(self) -> int:
        return Entry.objects.filter(record=self.record).count()

    def asks(self, who: User | None = None, **more: Any) -> uuid.UUID:
        person = who or self.cast.contractor
        said = {"sort": "re-stake", "listed": self.marks, "words": "hit by a dozer"}
        said |= {"company": person.company, "by": by_of(person), **more}
        return requests.make_request(record=self.record, **said)

    def gives(self, company: Company | None = None, **more: Any) -> uuid.UUID:
        said = {
            "company": company or self.cast.contractor.company,
            "listed": self.marks,
            "signature": "absent",
            "by": by_of(self.cast.party_chief),
        }
        return handovers.hand_over(record=self.record, **{**said, **more})

    def url(self, name: str, *ids: object) -> str:
        return reverse(f"jobs:{name}", args=[self.record.number, *ids])

    def as_(self, who: str) -> Client:
        client = Client()
        client.force_login(self.cast.everybody[who])
        return client

    def page(self, who: str, name: str, *ids: object) -> str:
        answer = self.as_(who).get(self.url(name, *ids))
        assert answer.status_code == 200, answer.status_code
        return answer.content.decode()

    def send(self, who: str, name: str, *ids: object, **said: Any) -> Any:
        return self.as_(who).post(self.url(name, *ids), said)


def make_site() -> Site:
    cast, job = make_cast(), make_job()
    seat_everybody(job, cast)
    record = job.record
    marks = plan(record, row("101", "1", "2"), row("102", "5", "6"))
    [loose] = plan(record, row("103", "9", "9"))
    for mark in (*marks, loose):
        set_stake(record, mark, None, after(1))
    check(record, marks, "pass", after(2))
    return Site(cast, record, marks, loose)


def check(record: Record, marks: list[uuid.UUID], verdict: str, at: Any) -> None:
    append(
        record,
        StakeChecked(
            check=uuid.uuid4(),
            sort="position",
            listed=tuple(marks),
            components="pe",
            grade=2,
            reaches=("place",),
            judgement=Judgement(verdict=verdict),  # type: ignore[arg-type]
        ),
        by=CHIEF,
        at=at,
    )
