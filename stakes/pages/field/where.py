"""Where a crew is: on which job and visit; every address of the field keeps the visit."""

from __future__ import annotations

import uuid
from typing import Any

from django.http import HttpRequest, HttpResponse, QueryDict
from django.shortcuts import render
from django.urls import reverse
from django.utils.datastructures import MultiValueDict

from stakes.forms.field.asking import knows_visit
from stakes.models import Record
from stakes.queries.state import JobState, job_state


def state_of(request: HttpRequest) -> JobState:
    """The job as it stands; once a request."""
    if not hasattr(request, "job_state"):
        request.job_state = job_state(request.asked.record)  # type: ignore[attr-defined]
    return request.job_state  # type: ignore[attr-defined,no-any-return]


def visit_of(request: HttpRequest) -> uuid.UUID | None:
    """The visit this belongs to, when the address names one of this job."""
    text = request.POST.get("visit") or request.GET.get("visit") or ""
    try:
        visit = uuid.UUID(text)
    except ValueError:
        return None
    record = request.asked.record  # type: ignore[attr-defined]
    return visit if knows_visit(record, visit) else None


def sent(request: HttpRequest) -> QueryDict | None:
    """What a form was sent with; none when the page is only looked at. An empty form
    that was sent is sent."""
    return request.POST if request.method == "POST" else None


def files(request: HttpRequest) -> MultiValueDict | None:
    """The files that came with a form."""
    return request.FILES if request.method == "POST" else None


def to(request: HttpRequest, name: str, **kwargs: Any) -> str:
    """An address of the field on this job, with its visit."""
    record: Record = request.asked.record  # type: ignore[attr-defined]
    url = reverse(f"field:{name}", kwargs={"job": record.number, **kwargs})
    visit = visit_of(request)
    return f"{url}?visit={visit}" if visit else url


def page(
    request: HttpRequest, template: str, status: int = 200, **context: Any
) -> HttpResponse:
    """A page of the field; `q` is what its links carry on, `fresh` a key for a button
    that says something by itself."""
    visit = visit_of(request)
    unit = request.asked.record.length_unit  # type: ignore[attr-defined]
    context |= {
        "visit": visit,
        "q": f"?visit={visit}" if visit else "",
        "unit": unit,
        "fresh": uuid.uuid4(),
    }
    return render(request, f"stakes/field/{template}", context, status=status)
