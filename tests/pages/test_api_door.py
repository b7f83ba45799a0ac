"""What the door tells programs: JSON, status codes, and CSRF for sessions only."""

from __future__ import annotations

from collections.abc import Iterator

import pytest
from django.http import HttpRequest
from django.test import Client
from django.urls import include, path
from rest_framework.decorators import api_view
from rest_framework.response import Response
from rest_framework.views import APIView

from jobs.actions.sign_in import make_token
from jobs.config.urls import urlpatterns as house
from jobs.models import Job
from stakes.can import Can, needs
from tests.jobs.cast import Cast


class Shots(APIView):
    """One class whose methods need different rights."""

    @needs(Can.READ)
    def get(self, request: HttpRequest, job: str) -> Response:
        return Response(
            {"by": request.asked.by.name, "device": request.asked.by.device}
        )

    @needs(Can.RECORD)
    def post(self, request: HttpRequest, job: str) -> Response:
        return Response({"kept": True})


@api_view(["GET"])
def careless(request: HttpRequest, job: str) -> Response:
    return Response({})


urlpatterns = [
    path("api/jobs/<str:job>/shots/", Shots.as_view(), name="shots"),
    path("api/jobs/<str:job>/careless/", careless, name="careless"),
    path("", include(house)),
]
SHOTS = "/api/jobs/2614/shots/"


@pytest.fixture(autouse=True)
def _addresses(settings) -> Iterator[None]:
    settings.ROOT_URLCONF = __name__
    yield


def test_programs_are_told_by_status_and_code(
    cast: Cast, job: Job, client: Client, signed_in
) -> None:
    anonymous = client.get(SHOTS)
    outsider = signed_in(cast.outsider).get(SHOTS)
    unknown = signed_in(cast.outsider).get(SHOTS.replace("2614", "9999"))
    auditor = signed_in(cast.auditor).post(SHOTS)

    assert anonymous.status_code == 401
    assert anonymous.headers["WWW-Authenticate"].startswith("Bearer")
    assert outsider.status_code == unknown.status_code == 404
    assert outsider.json() == unknown.json()
    assert (auditor.status_code, auditor.json()["code"]) == (403, "no right")


def test_each_method_of_a_class_needs_its_own_right(
    cast: Cast, job: Job, signed_in
) -> None:
    auditor, crew = signed_in(cast.auditor), signed_in(cast.crew)

    assert auditor.get(SHOTS).status_code == 200
    assert auditor.head(SHOTS).status_code == 200
    assert auditor.post(SHOTS).status_code == 403
    assert crew.post(SHOTS).json() == {"kept": True}


def test_a_method_that_declares_nothing_is_refused(
    cast: Cast, job: Job, signed_in
) -> None:
    careless = SHOTS.replace("shots", "careless")

    assert signed_in(cast.manager).get(careless).status_code == 403
    assert signed_in(cast.manager).delete(SHOTS).status_code == 403


def test_a_session_must_prove_that_the_request_is_its_own(cast: Cast, job: Job) -> None:
    client = Client(enforce_csrf_checks=True)
    client.force_login(cast.crew)
    client.get("/account/")
    proof = client.cookies["csrftoken"].value

    assert client.post(SHOTS).status_code == 403
    assert client.post(SHOTS, headers={"X-CSRFToken": proof}).status_code == 200


def test_a_token_needs_no_such_proof_and_names_the_device(cast: Cast, job: Job) -> None:
    _, secret = make_token(person=cast.crew, name="tablet 2")
    client = Client(enforce_csrf_checks=True)
    bearer = {"Authorization": f"Bearer {secret}"}

    assert client.post(SHOTS, headers=bearer).status_code == 200
    assert client.get(SHOTS, headers=bearer).json() == {
        "by": "Rod Person",
        "device": "token tablet 2",
    }
