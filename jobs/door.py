"""The one door: every address is refused until it is settled who asks and what for.

A session or a token says who asks, before the door. A view says what it needs: `needs`
(rights on the job in its address) or `open_to` (addresses outside any job). One that
says neither is refused. An outsider cannot tell a job from one that does not exist.
"""

from __future__ import annotations

import logging
from collections.abc import Callable
from typing import Any
from urllib.parse import urlencode

from django.http import Http404, HttpRequest, HttpResponse, JsonResponse
from django.shortcuts import redirect, render
from django.urls import reverse
from django_htmx.http import HttpResponseClientRedirect
from rest_framework.authentication import BaseAuthentication, CSRFCheck
from rest_framework.exceptions import PermissionDenied

from jobs.declared import Undeclared, Who, declared
from jobs.models import User
from jobs.queries.jobs import job_called
from jobs.queries.seats import asked
from jobs.queries.tokens import UnknownToken, bearer

log = logging.getLogger("lathbook.door")

Answer = HttpResponse | None


class Door:
    """Middleware: settles who asks, then decides before any view runs."""

    def __init__(self, get_response: Callable[[HttpRequest], HttpResponse]) -> None:
        self.get_response = get_response

    def __call__(self, request: HttpRequest) -> HttpResponse:
        request.asked = None
        request.token = None
        try:
            request.token = bearer(request)
        except UnknownToken:
            return _json(401, "unknown token", "This token is unknown or was revoked.")
        if request.token is not None:
            request.user = request.token.person
        return self.get_response(request)

    def process_view(
        self, request: HttpRequest, view: Callable[..., Any], args: Any, kwargs: Any
    ) -> Answer:
        if _holds_nul(request):
            return _not_here(view)
        try:
            need = declared(view, request.method or "GET", under_job="job" in kwargs)
        except Undeclared as error:
            log.error("%s: %s", request.path, error)
            return refused(request, view, "This address declares no rights.")
        if isinstance(need, Who):
            return _outside_jobs(request, view, need)
        return _under_a_job(request, view, need, kwargs["job"])


class DoorAuthentication(BaseAuthentication):
    """For the API: what the door settled, and CSRF for those who came by session."""

    def authenticate(self, request: Any) -> tuple[User, Any] | None:
        asking = request._request
        if not asking.user.is_authenticated:
            return None
        if asking.token is None:
            _enforce_csrf(asking)
        return asking.user, asking.token

    def authenticate_header(self, request: Any) -> str:
        return 'Bearer realm="Lathbook"'


def _holds_nul(request: HttpRequest) -> bool:
    """PostgreSQL keeps no NUL in text: nothing can be called what holds one."""
    return "\0" in request.path or "%00" in request.META.get("QUERY_STRING", "")


def _outside_jobs(request: HttpRequest, view: Any, who: Who) -> Answer:
    user = request.user
    if who is Who.ANYONE:
        return None
    if not user.is_authenticated:
        return _sign_in_first(request, view)
    allowed = {
        Who.SIGNED_IN: True,
        Who.OFFICE: user.is_authenticated and user.is_office,
        Who.MANAGER: user.is_authenticated and user.is_manager,
    }
    if not allowed[who]:
        return refused(request, view, f"This page is for {who.value}.")
    return None


def _under_a_job(
    request: HttpRequest, view: Any, rights: frozenset[Any], number: str
) -> Answer:
    if not request.user.is_authenticated:
        return _sign_in_first(request, view)
    job = job_called(number)
    device = f"token {request.token.name}" if request.token else ""
    settled = job and asked(job.record, request.user, job_name=job.name, device=device)
    if not settled:
        return _not_here(view)
    request.asked = settled
    lacking = rights - settled.rights
    if lacking:
        wanted = " and ".join(sorted(right.value for right in lacking))
        return refused(
            request, view, f"Your seat on this job does not let you {wanted}."
        )
    return None


def refused(request: HttpRequest, view: Any, why: str) -> HttpResponse:
    """The answer to somebody who may be here but not do this."""
    if is_api(view):
        answer: HttpResponse = _json(403, "no right", why)
    else:
        answer = render(request, "jobs/refused.html", {"why": why}, status=403)
    answer.refused_by_door = True
    return answer


def is_api(view: Any) -> bool:
    """Whether a view answers programs, who want JSON and status codes, not pages.

    By what such a view has: its class comes from a module that itself imports this one.
    """
    return hasattr(getattr(view, "cls", None), "authentication_classes")


def _sign_in_first(request: HttpRequest, view: Any) -> HttpResponse:
    if is_api(view):
        answer: HttpResponse = _json(401, "sign in", "Sign in, or send a token.")
        answer.headers["WWW-Authenticate"] = 'Bearer realm="Lathbook"'
    else:
        # What was posted is lost by signing in, so the way back is the page before.
        back = request.get_full_path() if request.method == "GET" else ""
        address = reverse("sign-in") + (f"?{urlencode({'next': back})}" if back else "")
        # A fragment's place on a page must not be filled by the sign-in page.
        answer = (
            HttpResponseClientRedirect(reverse("sign-in"))
            if request.headers.get("HX-Request")
            else redirect(address)
        )
    answer.refused_by_door = True
    return answer


def _not_here(view: Any) -> HttpResponse:
    if is_api(view):
        answer = _json(404, "not found", "There is no such job, or it is not yours.")
        answer.refused_by_door = True
        return answer
    raise Http404("There is no such job, or it is not yours.")


def _json(status: int, code: str, detail: str) -> JsonResponse:
    return JsonResponse({"code": code, "detail": detail}, status=status)


def _enforce_csrf(request: HttpRequest) -> None:
    check = CSRFCheck(lambda _: None)
    check.process_request(request)
    reason = check.process_view(request, None, (), {})
    if reason:
        raise PermissionDenied(f"The form's protection failed: {reason}")
