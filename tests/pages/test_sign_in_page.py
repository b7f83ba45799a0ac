"""Signing in and out over HTTP; links to set a password; the account and tokens."""

from __future__ import annotations

import re
from collections.abc import Callable

import pytest
from django.test import Client

from jobs.actions.people import deactivate_person
from jobs.actions.sign_in import LIMITS, make_token, revoke_token, set_password
from jobs.models import Job, SignInAttempt, User
from tests.jobs.cast import Cast

PASSWORD = "a long sentence about lath"
SignedIn = Callable[[User], Client]


@pytest.fixture
def crew(cast: Cast) -> User:
    set_password(person=cast.crew, password=PASSWORD)
    return cast.crew


def sign_in(client: Client, person: User, password: str = PASSWORD, **more: str):
    said = {"email": person.email, "password": password, **more}
    return client.post("/sign-in/", said)


def test_signing_in_leads_to_where_one_wanted_to_go(
    client: Client, crew: User, job: Job
) -> None:
    sent_away = client.get("/jobs/2614/terms/")
    assert sent_away.url == "/sign-in/?next=%2Fjobs%2F2614%2Fterms%2F"

    answer = sign_in(client, crew, next="/jobs/2614/terms/")

    assert (answer.status_code, answer.url) == (303, "/jobs/2614/terms/")


@pytest.mark.parametrize(
    "elsewhere", ["https://evil.example/", "//evil.example/", "javascript:alert(1)"]
)
def test_signing_in_never_leads_off_this_site(
    client: Client, crew: User, elsewhere: str
) -> None:
    assert sign_in(client, crew, next=elsewhere).url == "/"


def test_a_wrong_password_is_answered_on_the_page(client: Client, crew: User) -> None:
    answer = sign_in(client, crew, "something else")

    assert answer.status_code == 422
    assert "do not belong together" in answer.content.decode()
    assert "_auth_user_id" not in client.session
    assert SignInAttempt.objects.get().address == "127.0.0.1"


def test_too_many_wrong_passwords_are_told_when_to_come_back(
    client: Client, crew: User
) -> None:
    for _ in range(LIMITS[0].count):
        sign_in(client, crew, "something else")

    assert "Try again in 15 minutes" in sign_in(client, crew).content.decode()


def test_an_address_given_by_the_visitor_is_not_believed(
    client: Client, crew: User
) -> None:
    client.post(
        "/sign-in/",
        {"email": crew.email, "password": "wrong"},
        headers={"X-Forwarded-For": "203.0.113.5"},
    )

    assert SignInAttempt.objects.get().address == "127.0.0.1"


def test_behind_our_proxy_the_last_address_it_added_counts(
    client: Client, crew: User, settings
) -> None:
    settings.HTTPS = True
    client.post(
        "/sign-in/",
        {"email": crew.email, "password": "wrong"},
        headers={"X-Forwarded-For": "203.0.113.5, 198.51.100.7"},
    )

    assert SignInAttempt.objects.get().address == "198.51.100.7"


def test_signing_out_is_a_post_and_ends_the_session(
    crew: User, signed_in: SignedIn
) -> None:
    client = signed_in(crew)
    assert client.get("/sign-out/").status_code == 405
    assert client.get("/").status_code == 200

    client.post("/sign-out/")

    assert client.get("/").status_code == 302


def test_a_session_ends_when_the_account_is_closed(
    cast: Cast, signed_in: SignedIn
) -> None:
    client = signed_in(cast.surveyor)
    assert client.get("/").status_code == 200

    deactivate_person(person=cast.surveyor)

    assert client.get("/").status_code == 302


def test_the_link_a_manager_hands_over_sets_a_password_once(
    cast: Cast, signed_in: SignedIn
) -> None:
    page = signed_in(cast.manager).post(f"/people/{cast.crew.pk}/link/")
    link = re.search(r"http://testserver(/set-password/[^<\s]+)", page.content.decode())
    stranger = Client()
    said = {"password": PASSWORD, "again": PASSWORD}

    assert stranger.get(link[1]).status_code == 200
    assert stranger.post(link[1], said).url == "/sign-in/"
    assert stranger.post(link[1], said).status_code == 410
    assert sign_in(stranger, cast.crew).status_code == 303


def test_a_password_typed_differently_or_too_weak_is_not_set(
    cast: Cast, signed_in: SignedIn
) -> None:
    page = signed_in(cast.manager).post(f"/people/{cast.crew.pk}/link/")
    link = re.search(r"/set-password/[^<\s]+", page.content.decode())[0]
    for said in (
        {"password": PASSWORD, "again": "another sentence"},
        {"password": "lath", "again": "lath"},
        {},
    ):
        assert Client().post(link, said).status_code == 422

    cast.crew.refresh_from_db()
    assert not cast.crew.has_usable_password()


def test_changing_the_password_asks_for_the_old_one(
    crew: User, signed_in: SignedIn
) -> None:
    client = signed_in(crew)
    said = {"password": "quite another sentence", "again": "quite another sentence"}

    assert (
        client.post("/account/password/", {"current": "no", **said}).status_code == 422
    )
    assert (
        client.post("/account/password/", {"current": PASSWORD, **said}).status_code
        == 303
    )
    assert client.get("/").status_code == 200


def test_a_token_opens_what_its_person_may_open(cast: Cast, job: Job) -> None:
    _, secret = make_token(person=cast.crew, name="tablet")
    bearer = {"Authorization": f"Bearer {secret}"}

    assert Client().get("/jobs/2614/", headers=bearer).status_code == 200
    assert Client().get("/people/", headers=bearer).status_code == 403


def test_a_token_that_opens_nothing_does_not_fall_back_to_the_session(
    cast: Cast, job: Job, signed_in: SignedIn
) -> None:
    token, secret = make_token(person=cast.manager, name="tablet")
    revoke_token(token=token)
    client = signed_in(cast.manager)

    for header in (f"Bearer {secret}", "Bearer ", "Bearer nonsense"):
        answer = client.get("/jobs/2614/", headers={"Authorization": header})
        assert answer.status_code == 401


def test_a_token_is_shown_once_and_revoked_by_its_owner_only(
    cast: Cast, signed_in: SignedIn
) -> None:
    client = signed_in(cast.crew)
    page = client.post("/account/tokens/", {"name": "tablet"}).content.decode()
    secret = re.search(r"data-secret>([\w-]{40,})<", page)[1]
    token = cast.crew.tokens.get()

    assert secret not in client.get("/account/").content.decode()
    revoke = f"/account/tokens/{token.pk}/revoke/"
    assert signed_in(cast.manager).post(revoke).status_code == 404
    assert client.post(revoke).status_code == 303
    bearer = {"Authorization": f"Bearer {secret}"}
    assert Client().get("/", headers=bearer).status_code == 401


def test_a_fragment_is_not_filled_with_the_sign_in_page(
    client: Client, job: Job
) -> None:
    answer = client.get("/jobs/2614/", headers={"HX-Request": "true"})

    assert answer.headers["HX-Redirect"] == "/sign-in/"


def test_a_form_that_cannot_prove_its_page_is_told_what_to_do(crew: User) -> None:
    client = Client(enforce_csrf_checks=True)
    answer = sign_in(client, crew)

    assert answer.status_code == 403
    assert "load the page again" in answer.content.decode()
    assert not SignInAttempt.objects.exists()
