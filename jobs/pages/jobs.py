"""Jobs: the list, opening one, its home page, describing and closing it."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse

from geometry.units import Unit
from jobs.actions.open_job import close_job, describe_job, open_job, reopen_job
from jobs.cards import cards_for
from jobs.declared import Who, open_to
from jobs.forms.jobs import DescribeJobForm, OpenJobForm, WhyForm
from jobs.kinds.terms import NoticeRule
from jobs.models import Job
from jobs.pages.answer import answer, sent
from jobs.queries.jobs import jobs_of
from jobs.queries.seats import by_of
from stakes.can import Can, needs
from stakes.models import Record


@open_to(Who.SIGNED_IN)
def jobs(request: HttpRequest) -> HttpResponse:
    return render(request, "jobs/jobs.html", {"jobs": jobs_of(request.user)})


@open_to(Who.MANAGER)
def job_open(request: HttpRequest) -> HttpResponse:
    last = Record.objects.order_by("-pk").first()
    form = OpenJobForm(
        sent(request),
        initial={
            "zone": last.zone if last else "",
            "unit": last.unit if last else "",
            "count": 2,
        },
    )
    opened: list[Job] = []

    def act() -> None:
        said = dict(form.cleaned_data)
        count, of = said.pop("count"), said.pop("of")
        notice = NoticeRule(count=count, of=of) if count is not None else None
        said["unit"] = Unit(said["unit"])
        opened.append(open_job(**said, notice=notice, by=by_of(request.user)))

    return answer(
        request,
        form,
        act,
        to=lambda: reverse("jobs:home", kwargs={"job": opened[0].number}),
        said="The job is open. Its terms start from the usual defaults: look at them.",
        title="Open a job",
        verb="Open it",
        back=reverse("start"),
    )


@needs(Can.READ)
def home(request: HttpRequest, job: str) -> HttpResponse:
    site = Job.objects.get(record=request.asked.record)
    return render(
        request, "jobs/home.html", {"site": site, "cards": cards_for(request.asked)}
    )


@needs(Can.TERMS)
def describe(request: HttpRequest, job: str) -> HttpResponse:
    record = request.asked.record
    form = DescribeJobForm(
        sent(request),
        initial={"name": record.job.name, "place": record.job.place},
    )
    return answer(
        request,
        form,
        lambda: describe_job(record=record, by=request.asked.by, **form.cleaned_data),
        to=_home(job),
        said="Written anew.",
        title="Name and place",
        verb="Keep",
    )


@needs(Can.TERMS)
def close(request: HttpRequest, job: str) -> HttpResponse:
    form = WhyForm(sent(request))
    return answer(
        request,
        form,
        lambda: close_job(
            record=request.asked.record, by=request.asked.by, **form.cleaned_data
        ),
        to=_home(job),
        said="The job is closed. Its record stays open to late facts.",
        title="Close the job",
        lead="It leaves the start page. Nothing is deleted, and it can be opened again.",
        verb="Close it",
    )


@needs(Can.TERMS)
def reopen(request: HttpRequest, job: str) -> HttpResponse:
    form = WhyForm(sent(request))
    return answer(
        request,
        form,
        lambda: reopen_job(
            record=request.asked.record, by=request.asked.by, **form.cleaned_data
        ),
        to=_home(job),
        said="The job is open again.",
        title="Open the job again",
        verb="Open it again",
    )


def _home(job: str) -> str:
    return reverse("jobs:home", kwargs={"job": job})
