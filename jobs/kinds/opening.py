"""The job itself: opened, described anew, closed, opened again."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Annotated
from uuid import UUID

import msgspec

from geometry.units import Unit
from stakes.record import Fact, MatterLink, kind

Name = Annotated[str, msgspec.Meta(min_length=1, max_length=120)]
Place = Annotated[str, msgspec.Meta(max_length=200)]


class _OfJob(Fact, frozen=True, kw_only=True):
    job: UUID

    def matters(self) -> Iterable[MatterLink]:
        return (MatterLink("job", self.job),)


@kind("job opened")
class JobOpened(_OfJob, frozen=True, kw_only=True):
    """The firm took the job on. Unit and time zone hold for every later entry."""

    number: str
    name: Name
    unit: Unit
    zone: str
    place: Place = ""

    def sentence(self) -> str:
        return f"Job {self.number}, {self.name}, was opened."


@kind("job described")
class JobDescribed(_OfJob, frozen=True, kw_only=True):
    """Name or place of the job were written anew."""

    name: Name
    place: Place = ""

    def sentence(self) -> str:
        where = f", {self.place}" if self.place else ""
        return f"The job is called {self.name}{where}."


@kind("job closed")
class JobClosed(_OfJob, frozen=True, kw_only=True):
    """Work for this job ended. Its record stays and can still be corrected."""

    why: str = ""

    def sentence(self) -> str:
        return f"The job was closed{f': {self.why}' if self.why else ''}."


@kind("job reopened")
class JobReopened(_OfJob, frozen=True, kw_only=True):
    """Work for a closed job began again."""

    why: str = ""

    def sentence(self) -> str:
        return f"The job was opened again{f': {self.why}' if self.why else ''}."
