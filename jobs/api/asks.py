"""Requests by JSON: those the reader may see, and asking for stakes."""

from __future__ import annotations

from datetime import UTC, datetime
from typing import Annotated, Any
from uuid import UUID

import msgspec
from drf_spectacular.utils import extend_schema
from rest_framework.request import Request
from rest_framework.response import Response
from rest_framework.views import APIView

from jobs.actions.requests import MOST_MARKS, make_request
from jobs.api import shapes
from jobs.api.asking import asked, limit, refusal, refusals
from jobs.api.parsing import BoundedJSON, Unreadable, body_of
from jobs.api.plain import bounded, unreadable
from jobs.kinds.requests import AskSort
from jobs.models import Company
from jobs.models import Request as Ask
from jobs.queries.companies import sees_all_companies
from jobs.queries.requests import requests_seen
from jobs.queries.seats import companies_of
from jobs.rights import SEATED, Role
from stakes.can import Asked, Can, needs
from stakes.record import Refused

NOT_TOLD = {"record_id", "asked_by_id"}
OF_PRICES = {"payer", "cost"}


class Asking(msgspec.Struct, forbid_unknown_fields=True, kw_only=True):
    """A request as a client sends it; `key` makes a second sending harmless.

    `company` is for the office, which asks for somebody else; others ask for their own.
    """

    key: UUID
    sort: AskSort
    company: UUID | None = None
    listed: Annotated[list[UUID], msgspec.Meta(max_length=MOST_MARKS)] = []
    words: str = ""
    needed_by: datetime | None = None
    last_seen: str = ""
    cause: str = ""
    cause_by: str = ""
    built_from: str = ""
    sheet_words: str = ""
    site_ready: str = ""
    phone: str = ""
    remark: str = ""


class RequestsView(APIView):
    """Reading requests and making one take different rights."""

    parser_classes = [BoundedJSON]

    @needs(Can.READ)
    @extend_schema(parameters=[shapes.LIMIT], responses=shapes.Requests)
    @refusals
    def get(self, request: Request, job: str) -> Response:
        """Requests the reader may see, the latest first."""
        who = asked(request)
        found = requests_seen(who)[: limit(request)]
        return Response({"requests": [told(who, one) for one in found.values()]})

    @needs(Can.REQUEST)
    @extend_schema(
        request=shapes.Asking,
        responses={200: shapes.RequestNow, 201: shapes.RequestNow},
    )
    def post(self, request: Request, job: str) -> Response:
        """Ask for stakes; 201 when it is received, 200 when it was before."""
        return _received(request, asked(request), body_of(request))


@refusals
def _received(request: Request, who: Asked, sent: Any) -> Response:
    asking = _asking(sent)
    before = Ask.objects.filter(record=who.record, key=asking.key).exists()
    said = msgspec.structs.asdict(asking)
    said["company"] = _company(who, said.pop("company"))
    said["needed_by"] = _in_utc(asking.needed_by)
    ask = make_request(record=who.record, by=who.by, **said)
    [made] = Ask.objects.filter(record=who.record, key=ask).values()
    return Response({"request": told(who, made)}, status=200 if before else 201)


def _asking(sent: Any) -> Asking:
    try:
        bounded(sent)
        return msgspec.convert(sent, Asking)
    except Refused as refused:
        raise Unreadable(refusal(refused)) from refused
    except msgspec.ValidationError as error:
        raise Unreadable(refusal(unreadable(f"{error}."))) from error


def _in_utc(needed_by: datetime | None) -> datetime | None:
    """One without a zone is meant in UTC, as everywhere in the API."""
    if needed_by is None or needed_by.tzinfo is None:
        return needed_by and needed_by.replace(tzinfo=UTC)
    try:
        return needed_by.astimezone(UTC)
    except OverflowError as error:
        raise Refused(
            "They are needed by a time no calendar has.",
            do="Check the date.",
            field="needed_by",
        ) from error


def told(who: Asked, row: dict[str, Any]) -> dict[str, Any]:
    """A request as this reader may see it: who pays is for those who see prices."""
    hidden = NOT_TOLD if who.can(Can.SEE_PRICES) else NOT_TOLD | OF_PRICES
    return {name: value for name, value in row.items() if name not in hidden}


def _company(who: Asked, wanted: UUID | None) -> Company:
    if not sees_all_companies(who):
        if wanted is not None and str(wanted) != who.company:
            raise Refused(
                "A request is made for the own company.",
                do="Leave company out.",
                field="company",
                code="not yours",
            )
        return Company.objects.get(pk=who.company)
    kinds = [kind for kind, roles in SEATED.items() if Role.CONTRACTOR in roles]
    found = companies_of(who.record).filter(pk=wanted, kind__in=kinds).first()
    if found is None:
        raise Refused(
            "The office says for which company of the job it asks.",
            do="Send the id of a company that has somebody seated on the job.",
            field="company",
            code="no company",
        )
    return found
