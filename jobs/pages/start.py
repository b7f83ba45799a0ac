"""The first page: the jobs a person may open, and what needs them there."""

from __future__ import annotations

from django.http import HttpRequest, HttpResponse
from django.shortcuts import render

from jobs.declared import Who, open_to
from jobs.needing import needing
from jobs.queries.jobs import jobs_of


@open_to(Who.SIGNED_IN)
def start(request: HttpRequest) -> HttpResponse:
    jobs = list(jobs_of(request.user).filter(closed_at=None))
    found = needing(request.user, [job.record for job in jobs])
    rows = [(job, found.get(job.record.pk, [])) for job in jobs]
    # What needs somebody comes first; within that the job last spoken of.
    rows.sort(key=lambda row: not row[1])
    return render(request, "jobs/start.html", {"rows": rows})
