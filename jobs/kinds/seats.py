"""Seats: who may act on the job, for which company, from when to when."""

from __future__ import annotations

from collections.abc import Iterable
from datetime import datetime
from typing import Annotated
from uuid import UUID

import msgspec

from jobs.rights import Role
from stakes.can import Can
from stakes.record import Fact, MatterLink, kind

Name = Annotated[str, msgspec.Meta(min_length=1, max_length=120)]
Work = Annotated[str, msgspec.Meta(max_length=200)]
Moment = Annotated[datetime, msgspec.Meta(tz=True)]


@kind("seat given")
class SeatGiven(Fact, frozen=True, kw_only=True):
    """A person got one or more roles on the job. Without `since` the seat stands from
    the moment the entry says it happened; `work` says what a grant is limited to."""

    seat: UUID
    person: UUID
    name: Name
    company: UUID
    company_name: Name
    roles: tuple[Role, ...]
    grants: tuple[Can, ...] = ()
    work: Work = ""
    since: Moment | None = None
    until: Moment | None = None

    def matters(self) -> Iterable[MatterLink]:
        return (MatterLink("seat", self.seat), MatterLink("person", self.person))

    def sentence(self) -> str:
        roles = " and ".join(self.roles)
        granted = f", and may {' and '.join(self.grants)}" if self.grants else ""
        work = f" ({self.work})" if self.work else ""
        return f"{self.name} of {self.company_name} is {roles}{granted}{work}."


@kind("seat ended")
class SeatEnded(Fact, frozen=True, kw_only=True):
    """A seat ended at `until`, or when the entry says it happened."""

    seat: UUID
    person: UUID
    name: Name
    until: Moment | None = None
    why: str = ""

    def matters(self) -> Iterable[MatterLink]:
        return (MatterLink("seat", self.seat), MatterLink("person", self.person))

    def sentence(self) -> str:
        return f"The seat of {self.name} ended{f': {self.why}' if self.why else ''}."
