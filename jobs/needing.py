"""What needs a person now, job by job. Each part of the house adds a question here."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Callable, Iterable, Sequence
from typing import NamedTuple

from jobs.models import User
from stakes.models import Record


class Needing(NamedTuple):
    """One line on the start page: words with a number in them, and where to go."""

    record: int
    words: str
    url: str


Question = Callable[[User, Sequence[Record]], Iterable[Needing]]

QUESTIONS: list[Question] = []
"""Asked in this order. A question reads all jobs at once: its number of queries must
not grow with them."""


def asks(question: Question) -> Question:
    """Put a question on the start page."""
    QUESTIONS.append(question)
    return question


def needing(person: User, records: Sequence[Record]) -> dict[int, list[Needing]]:
    """The lines of each job, by the record's primary key."""
    found: dict[int, list[Needing]] = defaultdict(list)
    for question in QUESTIONS:
        for line in question(person, records):
            found[line.record].append(line)
    return found
