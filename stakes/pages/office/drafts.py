"""Typing marks into a draft, checking it, issuing it; retiring a stage."""

from __future__ import annotations

import uuid
from typing import Any

from django.contrib import messages
from django.core.paginator import Paginator
from django.http import Http404, HttpRequest, HttpResponse, HttpResponseRedirect
from django.shortcuts import render
from django.urls import reverse

from stakes.actions.issuing import (
    RowsRefused,
    check_plan,
    issue_plan,
    leave_draft,
    plan_marks,
)
from stakes.actions.retiring import retire_marks
from stakes.can import Asked, Can, needs
from stakes.exchange.rows import from_data
from stakes.forms.office.drafts import CheckForm, IssueForm, RetireForm
from stakes.forms.office.marks import COLUMNS, MarkTable, SharedForm
from stakes.models import Draft
from stakes.pages.answer import act, refuse_on
from stakes.queries.plan import (
    changes,
    complaints,
    known_marks,
    open_drafts,
    stages,
    superseded_standing,
)
from stakes.record import Refused

ROWS_SHOWN = 200


@needs(Can.READ_RECORD)
def drafts(request: HttpRequest, job: str) -> HttpResponse:
    record = request.asked.record
    done = Draft.objects.filter(record=record, state=Draft.ISSUED)
    context = {
        "open": open_drafts(record),
        "issued": done.defer("rows", "about", "complaints").order_by("-issued_at")[:50],
        "stages": stages(record),
        "left_standing": superseded_standing(record),
        "form": RetireForm(),
    }
    return render(request, "stakes/office/drafts.html", context)


@needs(Can.PLAN)
def marks_add(request: HttpRequest, job: str) -> HttpResponse:
    asked: Asked = request.asked
    sent = request.POST if request.method == "POST" else None
    form = SharedForm(sent, record=asked.record)
    sound = form.is_bound and form.is_valid()
    table = MarkTable(sent, form.cleaned_data if sound else {})
    more = 8 if sent is not None and "more" in sent else 0
    if sound and not more:
        try:
            draft = _keep(asked, form, table)
        except RowsRefused as refused:
            table.complain(refused.complaints)
            form.add_error(None, str(refused))
        except Refused as refused:
            refuse_on(form, refused)
        else:
            messages.success(request, "Drafted. Another person checks it next.")
            return HttpResponseRedirect(_draft_url(asked, draft.key))
    status = 422 if sent is not None and not more else 200
    if more:
        form.errors.clear()
    context = {
        "form": form,
        "rows": table.shown(more),
        "columns": COLUMNS,
        "unit": asked.record.length_unit,
    }
    return render(request, "stakes/office/marks_add.html", context, status=status)


def _keep(asked: Asked, form: SharedForm, table: MarkTable) -> Draft:
    return plan_marks(
        record=asked.record,
        rows=table.filled,
        title=form.cleaned_data["title"],
        basis=form.basis_keys,
        by=asked.by,
        key=form.cleaned_data["key"],
    )


@needs(Can.READ_RECORD)
def draft(request: HttpRequest, job: str, draft: uuid.UUID) -> HttpResponse:
    return _show(request, _found(request.asked, draft))


@needs(Can.PLAN)
def draft_check(request: HttpRequest, job: str, draft: uuid.UUID) -> HttpResponse:
    asked: Asked = request.asked
    found = _found(asked, draft)
    form = CheckForm(request.POST if request.method == "POST" else None)

    def do() -> str:
        check_plan(record=asked.record, draft=draft, by=asked.by, **form.cleaned_data)
        return _draft_url(asked, draft)

    return act(
        request,
        form,
        "stakes/office/form.html",
        do,
        done="Checked. The surveyor can issue it.",
        title=f"Check {found.title}",
        lead=f"Computed by {found.computed_by}. Compare it with another source: an "
        "older sheet, dimensions added up, distances between marks.",
        verb="It is checked",
        back=_draft_url(asked, draft),
    )


@needs(Can.ISSUE)
def draft_issue(request: HttpRequest, job: str, draft: uuid.UUID) -> HttpResponse:
    asked: Asked = request.asked
    found = _found(asked, draft)
    with_control = asked.can(Can.ADOPT) and any(
        r.get("purpose") in ("control", "benchmark") for r in found.rows
    )
    sent = request.POST if request.method == "POST" else None
    form = IssueForm(sent, with_control=with_control)

    def do() -> str:
        issue_plan(record=asked.record, draft=draft, by=asked.by, adopt=form.adoption())
        return reverse("stakes:marks", kwargs={"job": asked.record.number})

    return act(
        request,
        form,
        "stakes/office/form.html",
        do,
        done=f"{found.title} is issued for staking.",
        title=f"Issue {found.title}",
        lead=_issue_lead(found),
        verb="Issue it for staking",
        back=_draft_url(asked, draft),
    )


def _issue_lead(found: Draft) -> str:
    count = len(found.rows)
    checked = f"checked by {found.checked_by}" if found.checked_by else "not checked"
    return (
        f"{count} {'mark' if count == 1 else 'marks'}, computed by {found.computed_by}, "
        f"{checked}. From then on crews set stakes by it."
    )


@needs(Can.PLAN)
def draft_leave(request: HttpRequest, job: str, draft: uuid.UUID) -> HttpResponse:
    asked: Asked = request.asked
    _found(asked, draft)
    if request.method == "POST":
        try:
            leave_draft(record=asked.record, draft=draft, by=asked.by)
        except Refused as refused:
            messages.error(request, str(refused))
        else:
            messages.success(request, "The draft is put aside.")
    return HttpResponseRedirect(reverse("stakes:drafts", args=[asked.record.number]))


@needs(Can.PLAN)
def stage_retire(request: HttpRequest, job: str) -> HttpResponse:
    asked: Asked = request.asked
    sent = request.POST if request.method == "POST" else None
    form = RetireForm(sent, initial={"stage": request.GET.get("stage", "")[:40]})

    def do() -> str:
        retire_marks(record=asked.record, by=asked.by, **form.cleaned_data)
        return reverse("stakes:drafts", kwargs={"job": asked.record.number})

    return act(
        request,
        form,
        "stakes/office/form.html",
        do,
        done="Retired. What was doubtful about them stays so.",
        title="Retire a stage",
        lead="Its marks have served, or their removal was authorised.",
        verb="Retire its marks",
        back=reverse("stakes:drafts", kwargs={"job": asked.record.number}),
    )


def _found(asked: Asked, key: uuid.UUID) -> Draft:
    found = Draft.objects.filter(record=asked.record, key=key).first()
    if found is None:
        raise Http404
    return found


def _draft_url(asked: Asked, key: uuid.UUID) -> str:
    return reverse("stakes:draft", kwargs={"job": asked.record.number, "draft": key})


def _show(request: HttpRequest, found: Draft) -> HttpResponse:
    """A draft with what it would change now, which may be more than when it was made."""
    record = request.asked.record
    rows = from_data(found.rows)
    known = known_marks(record)
    told = changes(rows, known, record.length_unit) if found.is_open else []
    context: dict[str, Any] = {
        "draft": found,
        "page": Paginator(told or rows, ROWS_SHOWN).get_page(request.GET.get("page")),
        "is_open": found.is_open,
        "moved": [c for c in told if c.is_moved],
        "counts": _counts(told),
        "wrong": complaints(rows, known) if found.is_open else [],
        "noted": [(line, what) for line, _, what, grave in found.complaints],
        "steps": ("computed", "checked", "issued"),
    }
    return render(request, "stakes/office/draft.html", context)


def _counts(told: list) -> list[tuple[str, int]]:
    words = {
        "new": "new",
        "moved": "moved",
        "words": "changed in words only",
        "same": "already there, left out",
    }
    numbers = [(words[k], sum(c.what == k for c in told)) for k in words]
    return [(word, number) for word, number in numbers if number]
