"""Requests: made, decided, answered back and forth, withdrawn, closed with the stakes."""

from __future__ import annotations

from collections.abc import Iterable
from datetime import datetime
from typing import Annotated, Literal
from uuid import UUID

import msgspec

from stakes.kinds.photos import photo_links
from stakes.record import Fact, MarkLink, MatterLink, kind
from stakes.standing import effects

Moment = Annotated[datetime, msgspec.Meta(tz=True)]
Sha256 = Annotated[str, msgspec.Meta(pattern="^[0-9a-f]{64}$")]
AskSort = Literal["lay out", "re-stake", "check", "explain"]


class _OfRequest(Fact, frozen=True, kw_only=True):
    ask: UUID

    def matters(self) -> Iterable[MatterLink]:
        return (MatterLink("request", self.ask),)


@kind("request made")
class RequestMade(_OfRequest, frozen=True, kw_only=True):
    """Somebody asked for stakes: which, needed by when, what they saw, what is built.

    `earliest` is worked out from the notice rule in force when it was received; only
    the manager's acceptance promises a date. `built_from` is empty when nothing was
    built; otherwise it says what. Telephone and remarks are private parts.
    """

    sort: AskSort
    company: str
    company_name: str
    listed: tuple[UUID, ...] = ()
    words: str = ""
    needed_by: Moment | None = None
    earliest: Moment | None = None
    notice_rule: str = ""
    last_seen: str = ""
    cause: str = ""
    cause_by: str = ""
    built_from: str = ""
    sheet: UUID | None = None
    sheet_words: str = ""
    site_ready: str = ""
    photos: tuple[Sha256, ...] = ()

    def marks(self) -> Iterable[MarkLink]:
        effect = effects.BUILT_FROM if self.built_from else ""
        return [MarkLink(mark, "asked for", effect) for mark in self.listed]

    def matters(self) -> Iterable[MatterLink]:
        yield MatterLink("request", self.ask)
        yield from photo_links(dict.fromkeys(self.photos))

    def sentence(self) -> str:
        built = f" Built from them: {self.built_from}." if self.built_from else ""
        return f"{self.company_name} asked to {self.sort}.{built}"


@kind("request accepted")
class RequestAccepted(_OfRequest, frozen=True, kw_only=True):
    """The manager accepted a request and promised a time. Who bears the cost is said
    here with the terms it follows from, before the work."""

    promised_for: Moment | None = None
    payer: str = ""
    payer_reason: str = ""
    words: str = ""

    def sentence(self) -> str:
        return "Request accepted."


@kind("request declined")
class RequestDeclined(_OfRequest, frozen=True, kw_only=True):
    """The manager declined a request, with the reason."""

    reason: str

    def sentence(self) -> str:
        return f"Request declined: {self.reason}"


@kind("request talked over")
class RequestTalkedOver(_OfRequest, frozen=True, kw_only=True):
    """A question or an answer about a request, between the firm and who asked."""

    words: str

    def sentence(self) -> str:
        return self.words


@kind("cost answered")
class CostAnswered(_OfRequest, frozen=True, kw_only=True):
    """Who is to bear the cost of a request accepted it, or disputes it."""

    accepted: bool
    words: str = ""

    def sentence(self) -> str:
        return "Cost accepted." if self.accepted else f"Cost disputed: {self.words}"


@kind("request withdrawn")
class RequestWithdrawn(_OfRequest, frozen=True, kw_only=True):
    """Who asked took the request back."""

    reason: str = ""

    def sentence(self) -> str:
        return f"Request taken back.{' ' + self.reason if self.reason else ''}"


@kind("request closed")
class RequestClosed(_OfRequest, frozen=True, kw_only=True):
    """A request came to its end: which stakes it brought, or why it brought none."""

    listed: tuple[UUID, ...] = ()
    handover: UUID | None = None
    words: str = ""

    def marks(self) -> Iterable[MarkLink]:
        return [MarkLink(mark, "request closed") for mark in self.listed]

    def sentence(self) -> str:
        return f"Request closed.{' ' + self.words if self.words else ''}"
