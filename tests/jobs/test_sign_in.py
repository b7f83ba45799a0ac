"""Signing in: slowed down, written down; passwords and tokens."""

from __future__ import annotations

from datetime import UTC, datetime, timedelta

import pytest

from jobs.actions.people import deactivate_person
from jobs.actions.sign_in import (
    LIMITS,
    WINDOW,
    check_sign_in,
    make_token,
    revoke_token,
    set_password,
)
from jobs.models import Outcome, SignInAttempt, Token, User
from stakes.record import Refused
from tests.jobs.cast import Cast

NOON = datetime(2026, 3, 2, 12, 0, tzinfo=UTC)
PASSWORD = "a long sentence about lath"
FROM_ONE_PLACE = LIMITS[0].count


@pytest.fixture
def crew(cast: Cast) -> User:
    set_password(person=cast.crew, password=PASSWORD)
    return cast.crew


def attempt(
    person: User | str,
    password: str = "wrong",
    *,
    minutes: float = 0,
    address: str = "192.0.2.1",
) -> User:
    email = person if isinstance(person, str) else person.email
    at = NOON + timedelta(minutes=minutes)
    return check_sign_in(email=email, password=password, address=address, at=at)


def wrong(person: User | str, **more: object) -> str:
    with pytest.raises(Refused) as refused:
        attempt(person, **more)
    return refused.value.code


def test_the_right_password_lets_in_and_is_written_down(crew: User) -> None:
    assert attempt(crew.email.upper(), PASSWORD) == crew

    written = SignInAttempt.objects.get()
    assert (written.email, written.outcome) == (crew.email, Outcome.SIGNED_IN)
    assert (written.address, written.at) == ("192.0.2.1", NOON)


def test_a_wrong_password_and_an_unknown_address_get_the_same_answer(
    crew: User,
) -> None:
    answers = set()
    for email in (crew.email, "nobody@example.com"):
        with pytest.raises(Refused) as refused:
            attempt(email)
        answers.add(str(refused.value))

    assert len(answers) == 1
    assert SignInAttempt.objects.filter(outcome=Outcome.WRONG).count() == 2


def test_guessing_is_stopped_and_says_when_to_try_again(crew: User) -> None:
    for n in range(FROM_ONE_PLACE):
        assert wrong(crew, minutes=n) == "wrong"

    with pytest.raises(Refused) as refused:
        attempt(crew, PASSWORD, minutes=10)

    assert refused.value.code == "too many"
    assert "Try again in 5 minutes (at 12:15 UTC)" in str(refused.value)
    assert SignInAttempt.objects.filter(outcome=Outcome.TOO_MANY).count() == 1


def test_waiting_as_told_is_enough(crew: User) -> None:
    for n in range(FROM_ONE_PLACE):
        wrong(crew, minutes=n)
    assert wrong(crew, minutes=14) == "too many"

    assert attempt(crew, PASSWORD, minutes=WINDOW.total_seconds() / 60) == crew


def test_being_told_to_wait_does_not_make_the_wait_longer(crew: User) -> None:
    for n in range(FROM_ONE_PLACE):
        wrong(crew, minutes=n)
    for n in range(20):
        assert wrong(crew, minutes=6 + n / 10) == "too many"
    noted = SignInAttempt.objects.filter(outcome=Outcome.TOO_MANY)
    assert noted.count() == 2, "once a minute is enough"

    assert attempt(crew, PASSWORD, minutes=15) == crew


def test_one_place_trying_many_accounts_is_stopped(crew: User) -> None:
    many = LIMITS[2].count
    for n in range(many):
        assert wrong(f"person{n}@example.com", minutes=n / 100) == "wrong"

    assert wrong(crew, password=PASSWORD, minutes=1) == "too many"
    assert attempt(crew, PASSWORD, minutes=1, address="198.51.100.7") == crew


def test_one_account_tried_from_many_places_is_stopped(crew: User) -> None:
    many = LIMITS[1].count
    for n in range(many):
        wrong(crew, minutes=n / 100, address=f"198.51.100.{n}")

    assert wrong(crew, password=PASSWORD, minutes=1, address="203.0.113.9") == (
        "too many"
    )


def test_a_closed_account_does_not_get_in(crew: User) -> None:
    deactivate_person(person=crew)

    assert wrong(crew, password=PASSWORD) == "wrong"


@pytest.mark.parametrize("password", ["short", "password123", "rod.person@example"])
def test_a_weak_password_is_refused(cast: Cast, password: str) -> None:
    with pytest.raises(Refused) as refused:
        set_password(person=cast.crew, password=password)

    assert refused.value.field == "password"
    assert not cast.crew.has_usable_password()


def test_of_a_token_only_the_hash_is_kept(cast: Cast) -> None:
    token, secret = make_token(person=cast.crew, name="tablet")

    assert len(secret) >= 40
    assert secret not in "".join(str(v) for v in Token.objects.values().get().values())
    revoke_token(token=token)
    assert Token.objects.get().revoked_at is not None


def test_tokens_are_counted_and_named(cast: Cast) -> None:
    for n in range(20):
        make_token(person=cast.crew, name=f"program {n}")
    with pytest.raises(Refused):
        make_token(person=cast.crew, name="one more")
    with pytest.raises(Refused):
        make_token(person=cast.surveyor, name=" ")
