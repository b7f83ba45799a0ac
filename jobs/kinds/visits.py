"""Visits: planned, begun, waited through, ended; each task with its outcome; the ticket."""

from __future__ import annotations

from collections.abc import Iterable
from datetime import datetime
from typing import Annotated, Literal
from uuid import UUID

import msgspec

from stakes.record import Fact, MarkLink, MatterLink, kind

Moment = Annotated[datetime, msgspec.Meta(tz=True)]
TaskSort = Literal["set", "put back", "check", "control", "pull", "other"]
Outcome = Literal[
    "done",
    "part",
    "site not ready",
    "unsafe",
    "control failed",
    "weather",
    "sent away",
]
Signature = Literal["signed", "declined", "absent"]


class PlannedTask(msgspec.Struct, frozen=True, kw_only=True):
    """One thing to do on a visit, for which marks, asked for by which request."""

    task: UUID
    sort: TaskSort
    words: str = ""
    listed: tuple[UUID, ...] = ()
    ask: UUID | None = None


class Member(msgspec.Struct, frozen=True, kw_only=True):
    """A person of the crew and their duty on the visit."""

    person: str
    name: str
    duty: str = ""


class OfVisit(Fact, frozen=True, kw_only=True):
    """What is said of one visit."""

    visit: UUID

    def matters(self) -> Iterable[MatterLink]:
        return (MatterLink("visit", self.visit),)


@kind("visit planned")
class VisitPlanned(OfVisit, frozen=True, kw_only=True):
    """A crew is to be on the site for a time. Planned again under the same key, the
    later plan counts; `taken_off` names requests the earlier plan would have answered."""

    crew: str = ""
    members: tuple[Member, ...] = ()
    starts_at: Moment
    ends_at: Moment | None = None
    tasks: tuple[PlannedTask, ...] = ()
    words: str = ""
    taken_off: tuple[UUID, ...] = ()

    def marks(self) -> Iterable[MarkLink]:
        listed = dict.fromkeys(mark for task in self.tasks for mark in task.listed)
        return [MarkLink(mark, "on a visit") for mark in listed]

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("visit", self.visit)
        for ask in dict.fromkeys(task.ask for task in self.tasks if task.ask):
            yield MatterLink("request", ask, "placed")
        for ask in self.taken_off:
            yield MatterLink("request", ask, "taken off")

    def sentence(self) -> str:
        count = len(self.tasks)
        return f"Visit planned with {count} task{'' if count == 1 else 's'}."


@kind("visit cancelled")
class VisitCancelled(OfVisit, frozen=True, kw_only=True):
    """A planned visit will not take place; `asks` are the requests it leaves waiting."""

    reason: str
    asks: tuple[UUID, ...] = ()

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("visit", self.visit)
        for ask in self.asks:
            yield MatterLink("request", ask, "taken off")

    def sentence(self) -> str:
        return f"Visit cancelled: {self.reason}"


@kind("crew arrived")
class CrewArrived(OfVisit, frozen=True, kw_only=True):
    """The crew came onto the site: who with which duty, the weather, and what the
    instruments showed in the day's checks."""

    members: tuple[Member, ...] = ()
    weather: str = ""
    instruments: tuple[str, ...] = ()
    told_operators: str = ""

    def sentence(self) -> str:
        return f"Crew arrived.{f' Weather: {self.weather}.' if self.weather else ''}"


@kind("crew stood by")
class CrewStoodBy(OfVisit, frozen=True, kw_only=True):
    """The crew waited on the site and could not work."""

    since: Moment
    until: Moment
    reason: str

    def sentence(self) -> str:
        minutes = int((self.until - self.since).total_seconds() // 60)
        return f"Crew stood by {minutes} minutes: {self.reason}"


@kind("crew left")
class CrewLeft(OfVisit, frozen=True, kw_only=True):
    """The crew left the site."""

    remark: str = ""

    def sentence(self) -> str:
        return "Crew left."


@kind("task ended")
class TaskEnded(OfVisit, frozen=True, kw_only=True):
    """A task of a visit came to its outcome. A wasted trip is an outcome too."""

    task: UUID
    outcome: Outcome
    sent_away_by: str = ""
    remark: str = ""
    ask: UUID | None = None

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("visit", self.visit)
        if self.ask:
            yield MatterLink("request", self.ask, f"task;{self.outcome}")

    def sentence(self) -> str:
        by = f" by {self.sent_away_by}" if self.sent_away_by else ""
        return (
            f"Task ended: {self.outcome}{by}.{' ' + self.remark if self.remark else ''}"
        )


@kind("day ticket closed")
class DayTicketClosed(OfVisit, frozen=True, kw_only=True):
    """The superintendent signed the day's ticket, declined, or was absent."""

    signature: Signature
    signed_by: str = ""
    company: str = ""
    words: str = ""

    def sentence(self) -> str:
        who = f" by {self.signed_by}" if self.signed_by else ""
        return f"Day ticket {self.signature}{who}."


@kind("caution acknowledged")
class CautionAcknowledged(OfVisit, frozen=True, kw_only=True):
    """A caution was shown and acknowledged before the work it is about."""

    caution: str
    words: str = ""

    def sentence(self) -> str:
        return f"Caution acknowledged: {self.caution}."
