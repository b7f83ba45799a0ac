"""`manage.py first_manager` makes the one who lets everybody else in."""

from __future__ import annotations

import io

import pytest
from django.core.management import CommandError, call_command

from jobs.models import Company, User

PASSWORD = "a long sentence about lath"


@pytest.fixture
def typed(monkeypatch: pytest.MonkeyPatch):
    def line(text: str) -> None:
        monkeypatch.setattr("sys.stdin", io.StringIO(text))

    return line


def first_manager(**more: object) -> str:
    said = io.StringIO()
    call_command(
        "first_manager", email="Boss@example.com", name="Boss", stdout=said, **more
    )
    return said.getvalue()


def test_the_first_manager_can_sign_in(db: None, typed, settings) -> None:
    settings.FIRM = "Northgate Survey"
    typed(PASSWORD + "\n")

    assert "Boss can sign in as boss@example.com." in first_manager()

    boss = User.objects.get()
    assert boss.is_manager and boss.check_password(PASSWORD)
    assert Company.objects.get().name == "Northgate Survey"


def test_one_person_may_be_manager_and_surveyor(db: None, typed) -> None:
    typed(PASSWORD)
    first_manager(surveyor=True)

    assert User.objects.get().firm_role == "manager and surveyor"


def test_a_weak_password_makes_nobody(db: None, typed) -> None:
    typed("lath\n")

    with pytest.raises(CommandError, match="too short"):
        first_manager()
    assert not User.objects.exists() and not Company.objects.exists()


def test_a_second_first_manager_is_refused(db: None, typed) -> None:
    typed(PASSWORD)
    first_manager()

    typed(PASSWORD)
    with pytest.raises(CommandError, match="has a manager"):
        first_manager()
