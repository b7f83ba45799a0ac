"""The places of the house a person may go to, for the header of every page.

A place is shown when its address exists and the view behind it would let them in: the
same declarations that the door reads.
"""

from __future__ import annotations

from collections.abc import Iterable
from functools import lru_cache
from typing import NamedTuple

from django.http import HttpRequest
from django.urls import NoReverseMatch, Resolver404, resolve, reverse

from jobs.declared import Undeclared, Who, declared
from stakes.can import Asked, Can


class Place(NamedTuple):
    label: str
    url: str
    is_current: bool


OUTSIDE = (
    ("Jobs", "start"),
    ("People", "jobs:people"),
    ("Companies", "jobs:companies"),
    ("Crews", "jobs:crews"),
    ("Tray", "jobs:tray"),
    ("My account", "jobs:account"),
)
IN_A_JOB = (
    ("Job", "jobs:home"),
    ("Plan", "stakes:plan"),
    ("Marks", "stakes:marks"),
    ("Control", "stakes:control"),
    ("Sheets", "stakes:sheets"),
    ("Layout", "stakes:layout"),
    ("Field", "field:home"),
    ("Requests", "jobs:requests"),
    ("Visits", "jobs:visits"),
    ("Handovers", "jobs:handovers"),
    ("Holds", "jobs:holds"),
    ("Record", "stakes:record"),
    ("People", "jobs:seats"),
    ("Terms", "jobs:terms"),
)


def places(request: HttpRequest) -> list[Place]:
    """Where this person can go from here."""
    asked: Asked | None = request.asked
    if asked is not None:
        rights = asked.rights
        found = _reached(IN_A_JOB, asked.record.number)
        open_here = [p for p in found if _need(p[1]) <= rights]
    elif request.user.is_authenticated:
        open_here = [p for p in _reached(OUTSIDE) if _is_open(request, p[1])]
    else:
        return []
    here = _current(request.path, [url for _, url in open_here])
    return [Place(label, url, url == here) for label, url in open_here]


def _reached(listed: Iterable[tuple[str, str]], job: str = "") -> list[tuple[str, str]]:
    found = []
    for label, name in listed:
        try:
            url = reverse(name, kwargs={"job": job} if job else None)
        except NoReverseMatch:
            continue
        found.append((label, url))
    return found


def _need(url: str) -> frozenset[Can]:
    need = _declared_at(url)
    return need if isinstance(need, frozenset) else frozenset(Can)


def _is_open(request: HttpRequest, url: str) -> bool:
    user = request.user
    match _declared_at(url):
        case Who.ANYONE | Who.SIGNED_IN:
            return True
        case Who.OFFICE:
            return bool(user.is_office)
        case Who.MANAGER:
            return bool(user.is_manager)
    return False


@lru_cache(maxsize=4096)
def _declared_at(url: str) -> Who | frozenset[Can] | None:
    try:
        found = resolve(url)
        return declared(found.func, "GET", under_job="job" in found.kwargs)
    except (Resolver404, Undeclared):
        return None


def _current(path: str, urls: Iterable[str]) -> str:
    """The deepest of the places that the page lies in."""
    return max((url for url in urls if path.startswith(url)), key=len, default="")
