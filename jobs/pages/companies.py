"""Companies and crews."""

from __future__ import annotations

from uuid import UUID

from django.db.models import Count, Q
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, render
from django.urls import reverse
from django.views.decorators.http import require_POST

from jobs.actions.people import add_company, change_company, disband_crew, keep_crew
from jobs.declared import Who, open_to
from jobs.forms.people import CompanyForm, CrewForm, NewCompanyForm
from jobs.models import Company, Crew
from jobs.pages.answer import answer, do, sent


@open_to(Who.OFFICE)
def companies(request: HttpRequest) -> HttpResponse:
    listed = Company.objects.annotate(
        active=Count("people", filter=Q(people__is_active=True))
    )
    return render(request, "jobs/companies.html", {"companies": listed})


@open_to(Who.MANAGER)
def company_add(request: HttpRequest) -> HttpResponse:
    form = NewCompanyForm(sent(request))
    return answer(
        request,
        form,
        lambda: add_company(**form.cleaned_data),
        to=reverse("jobs:companies"),
        said="Added.",
        title="Add a company",
        verb="Add",
    )


@open_to(Who.MANAGER)
def company_change(request: HttpRequest, company: UUID) -> HttpResponse:
    one = get_object_or_404(Company, pk=company)
    form = CompanyForm(sent(request), initial={"name": one.name, "phone": one.phone})
    return answer(
        request,
        form,
        lambda: change_company(company=one, **form.cleaned_data),
        to=reverse("jobs:companies"),
        said="Written anew.",
        title=f"Change {one.name}",
        verb="Keep",
    )


@open_to(Who.OFFICE)
def crews(request: HttpRequest) -> HttpResponse:
    listed = Crew.objects.select_related("company", "party_chief").prefetch_related(
        "members"
    )
    return render(request, "jobs/crews.html", {"crews": listed.order_by("name")})


@open_to(Who.MANAGER)
def crew_add(request: HttpRequest) -> HttpResponse:
    return _crew(request, CrewForm(sent(request)), None, "Put a crew together")


@open_to(Who.MANAGER)
def crew_change(request: HttpRequest, crew: UUID) -> HttpResponse:
    one = get_object_or_404(Crew, pk=crew)
    started = {
        "name": one.name,
        "party_chief": one.party_chief_id,
        "members": [member.pk for member in one.members.all()],
        "skills": ", ".join(one.skills),
    }
    form = CrewForm(sent(request), initial=started, crew=one)
    return _crew(request, form, one, f"Change {one.name}")


@open_to(Who.MANAGER)
@require_POST
def crew_disband(request: HttpRequest, crew: UUID) -> HttpResponse:
    one = get_object_or_404(Crew, pk=crew)
    return do(
        request,
        lambda: disband_crew(crew=one),
        to=reverse("jobs:crews"),
        said=f"{one.name} is disbanded; its past visits stay.",
    )


def _crew(
    request: HttpRequest, form: CrewForm, crew: Crew | None, title: str
) -> HttpResponse:
    def act() -> None:
        said = form.cleaned_data
        keep_crew(
            name=said["name"],
            company=said["party_chief"].company,
            party_chief=said["party_chief"],
            members=said["members"],
            skills=said["skills"],
            crew=crew,
        )

    return answer(
        request,
        form,
        act,
        to=reverse("jobs:crews"),
        said="Kept.",
        title=title,
        verb="Keep",
    )
