"""People of the firm and of other companies."""

from __future__ import annotations

from uuid import UUID

from django.contrib.auth.tokens import default_token_generator
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, render
from django.urls import reverse
from django.views.decorators.http import require_POST

from jobs.actions.people import (
    add_person,
    change_person,
    deactivate_person,
    reactivate_person,
)
from jobs.declared import Who, open_to
from jobs.forms.people import NewPersonForm, PersonForm
from jobs.models import Seat, SignInAttempt, User
from jobs.pages.answer import answer, do, sent

SHOWN = ("name", "email", "firm_role", "initials", "licence_number", "phone")


@open_to(Who.OFFICE)
def people(request: HttpRequest) -> HttpResponse:
    everybody = User.objects.select_related("company").order_by(
        "-is_active", "company__name", "name"
    )
    return render(request, "jobs/people.html", {"people": everybody})


@open_to(Who.MANAGER)
def person_add(request: HttpRequest) -> HttpResponse:
    form = NewPersonForm(sent(request))
    added: list[User] = []
    return answer(
        request,
        form,
        lambda: added.append(add_person(**form.cleaned_data)),
        to=lambda: reverse("jobs:person", kwargs={"person": added[0].pk}),
        said="Added. Make a link next, so that they can set a password.",
        title="Add a person",
        verb="Add",
        back=reverse("jobs:people"),
    )


@open_to(Who.OFFICE)
def person(request: HttpRequest, person: UUID) -> HttpResponse:
    somebody = get_object_or_404(User.objects.select_related("company"), pk=person)
    return _person(request, somebody)


@open_to(Who.MANAGER)
def person_change(request: HttpRequest, person: UUID) -> HttpResponse:
    somebody = get_object_or_404(User, pk=person)
    form = PersonForm(sent(request), initial={f: getattr(somebody, f) for f in SHOWN})
    return answer(
        request,
        form,
        lambda: change_person(person=somebody, **form.cleaned_data),
        to=reverse("jobs:person", kwargs={"person": person}),
        said="Written anew.",
        title=f"Change {somebody.name}",
        verb="Keep",
    )


@open_to(Who.MANAGER)
@require_POST
def person_link(request: HttpRequest, person: UUID) -> HttpResponse:
    """The link stands in this answer only: whoever holds it can set the password."""
    somebody = get_object_or_404(User, pk=person, is_active=True)
    proof = default_token_generator.make_token(somebody)
    path = reverse("set-password", kwargs={"person": somebody.pk, "proof": proof})
    return _person(request, somebody, link=request.build_absolute_uri(path))


@open_to(Who.MANAGER)
@require_POST
def person_close(request: HttpRequest, person: UUID) -> HttpResponse:
    somebody = get_object_or_404(User, pk=person)
    return do(
        request,
        lambda: deactivate_person(person=somebody),
        to=reverse("jobs:person", kwargs={"person": person}),
        said=f"{somebody.name} cannot sign in any more. Nothing was deleted.",
    )


@open_to(Who.MANAGER)
@require_POST
def person_reopen(request: HttpRequest, person: UUID) -> HttpResponse:
    somebody = get_object_or_404(User, pk=person)
    return do(
        request,
        lambda: reactivate_person(person=somebody),
        to=reverse("jobs:person", kwargs={"person": person}),
        said=f"{somebody.name} can sign in again.",
    )


def _person(request: HttpRequest, somebody: User, *, link: str = "") -> HttpResponse:
    seats = Seat.objects.filter(person=somebody).select_related("record__job")
    context = {
        "person": somebody,
        "seats": seats.order_by("-since"),
        "spells": somebody.spells.order_by("-since"),
        "link": link,
        "attempts": SignInAttempt.objects.filter(email=somebody.email)[:10],
    }
    return render(request, "jobs/person.html", context)
