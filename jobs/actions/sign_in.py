"""Sign in, slowed down against guessing and written down; passwords and tokens."""

from __future__ import annotations

import math
import secrets
from collections.abc import Callable
from dataclasses import dataclass
from datetime import datetime, timedelta

from django.contrib.auth import authenticate
from django.contrib.auth.password_validation import validate_password
from django.core.exceptions import ValidationError
from django.db.models import Q
from django.utils import timezone

from jobs.models import Outcome, SignInAttempt, Token, User
from jobs.queries.tokens import token_hash
from stakes.record import Refused

WINDOW = timedelta(minutes=15)
TOKENS_AT_MOST = 20


@dataclass(frozen=True, slots=True)
class _Limit:
    """So many wrong attempts of one sort within the window, and no more."""

    count: int
    same: Callable[[str, str], Q]


LIMITS = (
    # One account from one place: somebody's own mistyping stops here first.
    _Limit(6, lambda email, address: Q(email=email, address=address)),
    # One account from many places, without letting a stranger lock it in a minute.
    _Limit(30, lambda email, _: Q(email=email)),
    # Many accounts from one place: a whole site office may share its address.
    _Limit(60, lambda _, address: Q(address=address)),
)


def check_sign_in(
    *, email: str, password: str, address: str, at: datetime | None = None
) -> User:
    """The person with this e-mail and password; Refused, with a sentence, otherwise.

    The attempt is written down as wrong before the password is looked at, so that many
    attempts at one time cannot slip past the count together.
    """
    now = at or timezone.now()
    email = email.strip().lower()[:254]
    attempt = SignInAttempt.objects.create(
        email=email, address=address, at=now, outcome=Outcome.WRONG
    )
    if wait := _must_wait(attempt):
        _note_once_a_minute(attempt)
        raise _too_many(now + wait, wait)
    person = authenticate(None, username=email, password=password)
    if not isinstance(person, User):
        raise Refused(
            "E-mail and password do not belong together.",
            do="Try again, or ask your manager for a link to set a new password.",
            code="wrong",
        )
    _settle(attempt, Outcome.SIGNED_IN)
    return person


def set_password(*, person: User, password: str) -> None:
    """Set a password that is long enough and not one of the common ones."""
    try:
        validate_password(password, person)
    except ValidationError as error:
        raise Refused(
            " ".join(error.messages),
            do="Choose a longer sentence of your own.",
            field="password",
        ) from error
    person.set_password(password)
    person.save(update_fields=["password"])


def make_token(*, person: User, name: str) -> tuple[Token, str]:
    """Make a token for a program. Its secret is shown once and kept nowhere."""
    if not name.strip():
        raise Refused(
            "A token needs a name.",
            do="Name the program or device that will use it.",
            field="name",
        )
    if person.tokens.filter(revoked_at=None).count() >= TOKENS_AT_MOST:
        raise Refused(
            f"You have {TOKENS_AT_MOST} tokens.", do="Revoke one first.", field="name"
        )
    secret = secrets.token_urlsafe(32)
    token = Token.objects.create(
        person=person, name=name.strip(), sha256=token_hash(secret)
    )
    return token, secret


def revoke_token(*, token: Token) -> None:
    """Shut out whoever uses this token, at once."""
    if token.revoked_at is None:
        token.revoked_at = timezone.now()
        token.save(update_fields=["revoked_at"])


def _must_wait(attempt: SignInAttempt) -> timedelta:
    """How long until the fullest of the counts has room again."""
    waits = [_wait(limit, attempt) for limit in LIMITS]
    return max(waits)


def _wait(limit: _Limit, attempt: SignInAttempt) -> timedelta:
    wrong = SignInAttempt.objects.filter(
        limit.same(attempt.email, attempt.address),
        at__gt=attempt.at - WINDOW,
        outcome=Outcome.WRONG,
    ).exclude(pk=attempt.pk)
    latest = list(wrong.order_by("-at").values_list("at", flat=True)[: limit.count])
    if len(latest) < limit.count:
        return timedelta()
    return max(latest[-1] + WINDOW - attempt.at, timedelta())


def _settle(attempt: SignInAttempt, outcome: Outcome) -> None:
    attempt.outcome = outcome
    attempt.save(update_fields=["outcome"])


def _note_once_a_minute(attempt: SignInAttempt) -> None:
    """A program that hammers on must not fill the table."""
    noted = SignInAttempt.objects.filter(
        email=attempt.email,
        address=attempt.address,
        outcome=Outcome.TOO_MANY,
        at__gt=attempt.at - timedelta(minutes=1),
    )
    if noted.exists():
        attempt.delete()
    else:
        _settle(attempt, Outcome.TOO_MANY)


def _too_many(again_at: datetime, wait: timedelta) -> Refused:
    minutes = math.ceil(wait.total_seconds() / 60)
    return Refused(
        "Too many wrong attempts.",
        do=f"Try again in {minutes} minute{'s' if minutes != 1 else ''} "
        f"(at {again_at:%H:%M} UTC).",
        code="too many",
    )
