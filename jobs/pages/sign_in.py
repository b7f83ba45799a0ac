"""Sign in and out; set a password by link; the own account with its tokens."""

from __future__ import annotations

from uuid import UUID

from django.conf import settings
from django.contrib.auth import login, logout, update_session_auth_hash
from django.contrib.auth.tokens import default_token_generator
from django.http import HttpRequest, HttpResponse
from django.shortcuts import get_object_or_404, render
from django.urls import reverse
from django.utils.http import url_has_allowed_host_and_scheme
from django.views.decorators.cache import never_cache
from django.views.decorators.debug import sensitive_post_parameters
from django.views.decorators.http import require_POST

from jobs.actions.sign_in import (
    check_sign_in,
    make_token,
    revoke_token,
    set_password,
)
from jobs.declared import Who, open_to
from jobs.forms.sign_in import (
    ChangePasswordForm,
    NewPasswordForm,
    SignInForm,
    TokenForm,
)
from jobs.models import Token, User
from jobs.pages.answer import SeeOther, answer, do, sent
from stakes.record import Refused


@open_to(Who.ANYONE)
@never_cache
@sensitive_post_parameters("password")
def sign_in(request: HttpRequest) -> HttpResponse:
    form = SignInForm(sent(request), initial={"next": request.GET.get("next", "")})

    def act() -> None:
        said = form.cleaned_data
        person = check_sign_in(
            email=said["email"],
            password=said["password"],
            address=address_of(request),
        )
        login(request, person)

    return answer(
        request,
        form,
        act,
        to=lambda: _after(request, form.cleaned_data["next"]),
        template="jobs/sign_in.html",
    )


@open_to(Who.ANYONE)
@require_POST
def sign_out(request: HttpRequest) -> HttpResponse:
    logout(request)
    return SeeOther(reverse("sign-in"))


@open_to(Who.ANYONE)
@never_cache
@sensitive_post_parameters("password", "again")
def set_own_password(request: HttpRequest, person: UUID, proof: str) -> HttpResponse:
    """The page behind the link a manager hands over; it works once, for three days."""
    somebody = User.objects.filter(pk=person, is_active=True).first()
    if somebody is None or not default_token_generator.check_token(somebody, proof):
        return render(request, "jobs/link_over.html", status=410)
    form = NewPasswordForm(sent(request))
    return answer(
        request,
        form,
        lambda: set_password(person=somebody, password=form.cleaned_data["password"]),
        to=reverse("sign-in"),
        said="Your password is set. Sign in with it.",
        template="jobs/set_password.html",
        person=somebody,
    )


@open_to(Who.SIGNED_IN)
def account(request: HttpRequest) -> HttpResponse:
    return _account(request, TokenForm())


@open_to(Who.SIGNED_IN)
@sensitive_post_parameters("current", "password", "again")
def change_password(request: HttpRequest) -> HttpResponse:
    form = ChangePasswordForm(sent(request))

    def act() -> None:
        said = form.cleaned_data
        if not request.user.check_password(said["current"]):
            raise Refused("This is not your password.", field="current")
        set_password(person=request.user, password=said["password"])
        update_session_auth_hash(request, request.user)

    return answer(
        request,
        form,
        act,
        to=reverse("jobs:account"),
        said="Your password is changed; other devices have to sign in again.",
        title="Change your password",
        verb="Change it",
    )


@open_to(Who.SIGNED_IN)
@require_POST
def token_make(request: HttpRequest) -> HttpResponse:
    """The secret is in this answer and nowhere else, so no redirect follows."""
    form = TokenForm(request.POST)
    if not form.is_valid():
        return _account(request, form, status=422)
    try:
        _, secret = make_token(person=request.user, name=form.cleaned_data["name"])
    except Refused as refused:
        form.add_error(refused.field or None, str(refused))
        return _account(request, form, status=422)
    return _account(request, TokenForm(), secret=secret)


@open_to(Who.SIGNED_IN)
@require_POST
def token_revoke(request: HttpRequest, token: UUID) -> HttpResponse:
    own = get_object_or_404(Token, pk=token, person=request.user)
    return do(
        request,
        lambda: revoke_token(token=own),
        to=reverse("jobs:account"),
        said=f"The token for {own.name} opens nothing any more.",
    )


def address_of(request: HttpRequest) -> str:
    """The network address of a visitor.

    Behind our own proxy it is the last one the proxy added; what stands before it was
    written by the visitor and proves nothing.
    """
    passed_on = request.headers.get("X-Forwarded-For", "")
    if settings.HTTPS and passed_on:
        return passed_on.rpartition(",")[2].strip()[:45]
    return str(request.META.get("REMOTE_ADDR", ""))[:45]


def _account(
    request: HttpRequest, form: TokenForm, *, secret: str = "", status: int = 200
) -> HttpResponse:
    tokens = Token.objects.filter(person=request.user)
    context = {"form": form, "tokens": tokens, "secret": secret}
    return render(request, "jobs/account.html", context, status=status)


def _after(request: HttpRequest, wanted: str) -> str:
    """Where somebody wanted to go, if that is on this site; the start otherwise."""
    if url_has_allowed_host_and_scheme(
        wanted, allowed_hosts={request.get_host()}, require_https=request.is_secure()
    ):
        return wanted
    return reverse("start")
