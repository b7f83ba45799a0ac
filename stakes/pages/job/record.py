"""The record of a job with filters, one entry whole, and correcting it."""

from __future__ import annotations

import json

from django.contrib import messages
from django.core.paginator import Paginator
from django.http import Http404, HttpRequest, HttpResponse, HttpResponseRedirect
from django.shortcuts import render
from django.urls import reverse

from stakes.actions.correcting import (
    correct,
    may_correct,
    withdraw,
)
from stakes.can import Can, needs
from stakes.forms.correcting import CorrectForm, WithdrawForm
from stakes.models import Entry, EntryMark, EntryMatter
from stakes.pages.answer import act
from stakes.pages.job.marks import _moment
from stakes.queries import history
from stakes.record import KINDS
from stakes.record.reading import corrections, decoded

PAGE = 100


@needs(Can.READ_RECORD)
def record(request: HttpRequest, job: str) -> HttpResponse:
    asked = request.asked
    moment, trouble = _moment(request)
    wanted = {
        k: request.GET.get(k, "").strip() for k in ("kind", "person", "mark", "q")
    }
    rows = Entry.objects.filter(record=asked.record)
    if moment.at is not None:
        rows = rows.filter(happened_at__lte=moment.at)
    if moment.known is not None:
        rows = rows.filter(number__lte=moment.known)
    if wanted["kind"] in KINDS:
        rows = rows.filter(kind=wanted["kind"])
    if wanted["person"]:
        rows = rows.filter(name__icontains=wanted["person"])
    labels = history.labels(asked.record)
    if wanted["mark"]:
        keys = [key for key, label in labels.items() if label == wanted["mark"]]
        links = EntryMark.objects.filter(record=asked.record, mark__in=keys)
        rows = rows.filter(number__in=links.values("number"))
    page = Paginator(rows.order_by("-number"), PAGE).get_page(request.GET.get("page"))
    context = {
        "page": page,
        "lines": _lines(asked.record, list(page), labels, moment.known),
        "kinds": sorted(KINDS),
        "wanted": wanted,
        "moment": moment.words,
        "shown_at": moment,
        "trouble": trouble,
        "again": _again(request),
    }
    return render(request, "stakes/job/record.html", context)


def _again(request: HttpRequest) -> str:
    """The filters of this page, to be said again beside another page number."""
    query = request.GET.copy()
    query.pop("page", None)
    return query.urlencode()


def _lines(record, entries, labels, known):
    overruled = corrections(record, known)
    named: dict[int, list[str]] = {}
    links = EntryMark.objects.filter(
        record=record, number__in=[e.number for e in entries]
    )
    for number, key in links.order_by("id").values_list("number", "mark"):
        names = named.setdefault(number, [])
        if labels.get(key) and labels[key] not in names:
            names.append(labels[key])
    return [
        (history.line(decoded(entry, overruled)), named.get(entry.number, []))
        for entry in entries
    ]


@needs(Can.READ_RECORD)
def entry(request: HttpRequest, job: str, number: int) -> HttpResponse:
    record = request.asked.record
    one = _entry(record, number)
    said = decoded(one, corrections(record))
    labels = history.labels(record)
    links = EntryMark.objects.filter(record=record, number=number).order_by("id")
    context = {
        "line": history.line(said),
        "entry": one,
        "body": json.dumps(said.body, indent=2, ensure_ascii=False, sort_keys=True),
        "links": [(link, labels.get(link.mark, "?")) for link in links],
        "matters": EntryMatter.objects.filter(record=record, number=number),
        "may_correct": may_correct(one, request.asked.by, request.asked.rights),
        "corrected_by": Entry.objects.filter(record=record, corrects=number),
    }
    return render(request, "stakes/job/entry.html", context)


def _entry(record, number: int) -> Entry:
    one = Entry.objects.filter(record=record, number=number).first()
    if one is None:
        raise Http404
    return one


@needs(Can.RECORD, Can.READ_RECORD)
def entry_withdraw(request: HttpRequest, job: str, number: int) -> HttpResponse:
    asked = request.asked
    one = _entry(asked.record, number)
    form = WithdrawForm(request.POST if request.method == "POST" else None)

    def do() -> str:
        withdraw(
            asked.record,
            number,
            by=asked.by,
            rights=asked.rights,
            **form.cleaned_data,
        )
        return reverse("stakes:entry", kwargs={"job": job, "number": number})

    return act(
        request,
        form,
        "stakes/job/correct.html",
        do,
        done=f"Entry {number} is taken back. It stays readable.",
        entry=one,
        line=history.line(decoded(one, {})),
        verb="Take it back",
    )


@needs(Can.RECORD, Can.READ_RECORD)
def entry_correct(request: HttpRequest, job: str, number: int) -> HttpResponse:
    asked = request.asked
    one = _entry(asked.record, number)
    said = decoded(one, {})
    if one.withdraws:
        messages.error(request, "A withdrawal has no facts; take it back instead.")
        return HttpResponseRedirect(reverse("stakes:entry", args=[job, number]))
    sent = request.POST if request.method == "POST" else None
    form = CorrectForm(sent, said=said, record=asked.record)

    def do() -> str:
        made = correct(
            asked.record,
            number,
            changes=form.changes,
            at=form.cleaned_data["at"],
            why=form.cleaned_data["why"],
            by=asked.by,
            rights=asked.rights,
        )
        return reverse("stakes:entry", kwargs={"job": job, "number": made.number})

    return act(
        request,
        form,
        "stakes/job/correct.html",
        do,
        done=f"Entry {number} is corrected. Both stay readable.",
        entry=one,
        line=history.line(said),
        verb="Say it again like this",
    )
