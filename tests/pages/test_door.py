"""The door: every address, every role, outsiders, anonymous, ids of another job."""

from __future__ import annotations

import re
from collections.abc import Iterator
from contextlib import contextmanager
from typing import Any
from urllib.parse import quote

import pytest
from django.contrib.auth.models import AnonymousUser
from django.db import transaction
from django.http import Http404, HttpRequest, HttpResponse
from django.test import Client, RequestFactory

from jobs.declared import Undeclared, Who, declared, open_to
from jobs.door import Door, DoorAuthentication
from jobs.models import User
from jobs.rights import RIGHTS, Role
from stakes.can import Can, needs
from tests.jobs.cast import CANARIES, SEATS
from tests.pages.walk import Address, World, addresses, make_world

PEOPLE = [
    "anonymous",
    "manager",
    "surveyor",
    "party_chief",
    "crew",
    "contractor",
    "mason",
    "inspector",
    "auditor",
    "subcontractor",
    "outsider",
]
ROLES = {"manager": Role.MANAGER, "surveyor": Role.SURVEYOR, **SEATS}


@pytest.fixture
def world(db: None) -> World:
    return make_world()


def person(world: World, who: str) -> User | None:
    return world.cast.everybody.get(who)


def client_of(somebody: User | None, **options: Any) -> Client:
    client = Client(**options)
    if somebody is not None:
        client.force_login(somebody)
    return client


@contextmanager
def undone() -> Iterator[None]:
    """What a request writes is taken back, so that each meets the same world."""
    with transaction.atomic():
        yield
        transaction.set_rollback(True)


def at_the_door(
    address: Address, world: World, somebody: User | None, method: str
) -> HttpResponse | None:
    """Only the door's decision, without running the view."""
    path = address.path(world)
    request = getattr(RequestFactory(), method.lower())(path)
    request.user = somebody or AnonymousUser()
    request.asked = request.token = None
    kwargs = {"job": world.here.number} if address.under_a_job else {}
    return Door(lambda _: HttpResponse()).process_view(
        request, address.view, (), kwargs
    )


def expected(address: Address, who: str, method: str) -> int:
    """What the table of rights says, read without the door's help: 200 is 'let in'."""
    need = declared(address.view, method, under_job=address.under_a_job)
    if isinstance(need, Who):
        if need is Who.ANYONE:
            return 200
        if who == "anonymous":
            return 302
        office = {"manager": {Who.OFFICE, Who.MANAGER}, "surveyor": {Who.OFFICE}}
        allowed = {Who.SIGNED_IN} | office.get(who, set())
        return 200 if need in allowed else 403
    if who == "anonymous":
        return 302
    if who == "outsider":
        return 404
    return 200 if need <= RIGHTS[ROLES[who]] else 403


def test_every_address_declares_who_may_open_it() -> None:
    silent = []
    for address in addresses():
        for method in address.methods():
            try:
                declared(address.view, method, under_job=address.under_a_job)
            except Undeclared:
                silent.append(f"{method} {address.name}")

    assert silent == []


@pytest.mark.parametrize("who", PEOPLE)
def test_declared_rights_decide_at_every_address(world: World, who: str) -> None:
    wrong = []
    for address in addresses():
        for method in address.methods():
            try:
                answer = at_the_door(address, world, person(world, who), method)
                status = answer.status_code if answer is not None else 200
            except Http404:
                status = 404
            # A page sends people to the sign-in page, a program is told 401.
            status = 302 if status == 401 else status
            if status != expected(address, who, method):
                wrong.append((address.name, method, status))

    assert wrong == []


def test_every_address_answers_somebody_who_may(world: World) -> None:
    """Sent nothing, a page shows itself or says what is missing; it never breaks."""
    broken = []
    for address in addresses():
        for method in address.methods():
            who = _somebody(address, method)
            with undone():
                client = client_of(person(world, who))
                answer = client.generic(method, address.path(world))
                if answer.status_code >= 500 or _by_door(answer):
                    broken.append((address.name, method, who, answer.status_code))

    assert broken == []


@pytest.mark.parametrize("who", ["anonymous", "outsider", "subcontractor", "auditor"])
def test_who_may_not_is_refused_by_the_running_program(world: World, who: str) -> None:
    wrong = []
    client = client_of(person(world, who))
    for address in addresses():
        for method in address.methods():
            wanted = expected(address, who, method)
            if wanted == 200:
                continue
            with undone():
                status = client.generic(method, address.path(world)).status_code
            status = 302 if status == 401 else status
            if status != wanted:
                wrong.append((address.name, method, status, wanted))

    assert wrong == []


def test_ids_of_another_job_are_not_found_in_this_one(world: World) -> None:
    leaking = []
    for address in addresses():
        if not (address.under_a_job and address.ids):
            continue
        for method in address.methods():
            somebody = person(world, _somebody(address, method))
            with undone():
                answer = client_of(somebody).generic(
                    method, address.path(world, world.elsewhere.record)
                )
            if answer.status_code not in (404, 405):
                leaking.append((address.name, method, answer.status_code))

    assert leaking == []


@pytest.mark.parametrize("who", ["contractor", "inspector", "subcontractor"])
def test_nothing_of_another_company_is_on_any_page(world: World, who: str) -> None:
    leaking = []
    client = client_of(person(world, who))
    for address in addresses():
        if "GET" not in address.methods() or expected(address, who, "GET") != 200:
            continue
        with undone():
            said = _content(client.get(address.path(world)))
        leaking += [(address.name, c) for c in CANARIES if c in said]

    assert leaking == []


def test_the_canaries_are_on_the_pages_of_those_who_may_see_them(world: World) -> None:
    manager = client_of(world.cast.manager)
    said = "".join(
        manager.get(f"/jobs/{world.here.number}/{page}/").content.decode()
        for page in ("people", "terms")
    )

    assert [c for c in CANARIES if c not in said] == []


def test_an_unknown_job_and_somebody_elses_look_alike(world: World) -> None:
    client = client_of(world.cast.outsider)
    there = client.get(f"/jobs/{world.here.number}/")
    nowhere = client.get("/jobs/9999/")

    assert there.status_code == nowhere.status_code == 404
    assert _without_csrf(there) == _without_csrf(nowhere)


def test_a_view_that_declares_nothing_is_refused_even_to_the_manager(
    world: World, caplog: pytest.LogCaptureFixture
) -> None:
    def careless(request: HttpRequest, job: str) -> HttpResponse:
        return HttpResponse("open to all")

    address = Address("careless", careless, (("job", None),))
    request = RequestFactory().get("/jobs/2614/careless/")
    request.user, request.asked, request.token = world.cast.manager, None, None
    answer = Door(lambda _: HttpResponse()).process_view(
        request, careless, (), {"job": "2614"}
    )

    assert answer is not None and answer.status_code == 403
    with pytest.raises(Undeclared):
        expected(address, "manager", "GET")


def test_a_laxer_rule_does_not_come_along_to_the_other_kind_of_address() -> None:
    @open_to(Who.ANYONE)
    def outside(request: HttpRequest) -> HttpResponse:
        return HttpResponse()

    @needs(Can.READ)
    def under(request: HttpRequest, job: str) -> HttpResponse:
        return HttpResponse()

    with pytest.raises(Undeclared):
        declared(outside, "GET", under_job=True)
    with pytest.raises(Undeclared):
        declared(under, "GET", under_job=False)


def test_the_api_asks_the_door_and_nobody_else() -> None:
    others = [
        address.name
        for address in addresses()
        if address.is_api
        and declared(address.view, "GET", under_job=address.under_a_job)
        is not Who.ANYONE
        and address.view.cls.authentication_classes != [DoorAuthentication]
    ]

    assert others == []


def _somebody(address: Address, method: str) -> str:
    """Somebody whom the table lets in here; the office first, as it sees most."""
    for who in ["manager", "surveyor", *PEOPLE]:
        if expected(address, who, method) == 200:
            return who
    raise AssertionError(f"Nobody may {method} {address.name}.")


def _by_door(answer: HttpResponse) -> bool:
    return bool(getattr(answer, "refused_by_door", False))


def _without_csrf(answer: HttpResponse) -> str:
    return re.sub(r"[A-Za-z0-9]{64}", "", answer.content.decode())


def _content(answer: Any) -> str:
    if answer.streaming:
        return b"".join(answer.streaming_content).decode("utf-8", "replace")
    return answer.content.decode("utf-8", "replace")


@pytest.mark.parametrize("tail", ["\x00/", "2614/?at=%00", "2614/marks/?standing=a%00"])
def test_an_address_with_a_nul_in_it_leads_nowhere(world: World, tail: str) -> None:
    path, _, query = tail.partition("?")
    client = client_of(world.cast.surveyor)
    answer = client.get(f"/jobs/{quote(path)}", QUERY_STRING=query)
    assert answer.status_code == 404
