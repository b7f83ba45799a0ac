"""Any order in which the same facts arrive gives the same state, corrections included."""

from __future__ import annotations

import uuid
from dataclasses import dataclass
from datetime import datetime

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from stakes.kinds.checking import Judgement, StakeChecked
from stakes.kinds.condition import MarksGone, MarksSeen
from stakes.kinds.control import ValueAdopted
from stakes.kinds.planning import MarksPlanned, MarksRetired
from stakes.kinds.setting import StakeSet
from stakes.kinds.setups import (
    SetupCheck,
    SetupClosed,
    SetupOpened,
    SetupRechecked,
    UsedMark,
)
from stakes.models import Record
from stakes.queries.state import job_state
from stakes.record import Fact, Said, append
from stakes.record.folds import replay
from tests.builders import CHIEF, after, make_record, row

LABELS = ("CP1", "CP2", "101", "102", "103")
SETUPS = ("s1", "s2")
verdicts = st.sampled_from(["pass", "fail", "undecided"])
labels = st.sampled_from(LABELS)
setups = st.sampled_from(SETUPS)


@dataclass(frozen=True)
class Happening:
    """One thing that happens, before it has marks of a record's own."""

    what: str
    label: str
    setup: str
    verdict: str
    grade: int
    minutes: int


@st.composite
def stories(draw: st.DrawFn) -> list[Happening]:
    whats = ["open", "recheck", "close", "set", "seen", "leaning", "gone", "check"]
    whats += ["adopt", "retire"]
    count = draw(st.integers(2, 14))
    moments = draw(
        st.lists(st.integers(1, 10_000), min_size=count, max_size=count, unique=True)
    )
    return [
        Happening(
            what=draw(st.sampled_from(whats)),
            label=draw(labels),
            setup=draw(setups),
            verdict=draw(verdicts),
            grade=draw(st.integers(0, 3)),
            minutes=minutes,
        )
        for minutes in moments
    ]


def fact_of(happening: Happening, key) -> Fact:
    mark, setup = key(happening.label), key(happening.setup)
    check = SetupCheck(mark=key("CP2"), quantity="position", verdict=happening.verdict)  # type: ignore[arg-type]
    match happening.what:
        case "open":
            used = (UsedMark(mark=key("CP1"), role="oriented on"),)
            return SetupOpened(
                setup=setup, sort="free station", used=used, checks=(check,)
            )
        case "recheck":
            return SetupRechecked(setup=setup, checks=(check,))
        case "close":
            return SetupClosed(setup=setup, checks=(check,))
        case "set":
            return StakeSet(mark=mark, setup=setup)
        case "seen":
            return MarksSeen(listed=(mark,), condition="undisturbed")
        case "leaning":
            return MarksSeen(listed=(mark,), condition="leaning")
        case "gone":
            return MarksGone(listed=(mark,))
        case "retire":
            return MarksRetired(listed=(mark,))
        case "adopt":
            value = key(f"value {happening.minutes}")
            return ValueAdopted(value=value, mark=mark, carries="both", source="x")
    return StakeChecked(
        check=key(f"check {happening.minutes}"),
        sort="position",
        listed=(mark,),
        setup=setup,
        components="pe",
        grade=happening.grade,
        judgement=Judgement(verdict=happening.verdict),  # type: ignore[arg-type]
    )


def told(number: str, story: list[Happening]) -> dict[str, object]:
    """The state of a new record that hears a story in this order, without numbers."""
    record = make_record(number)

    def key(name: str) -> uuid.UUID:
        return uuid.uuid5(record.key, name)

    rows = tuple(row(label, "1", "2", mark=key(label)) for label in LABELS)
    append(record, MarksPlanned(plan=key("plan"), rows=rows), by=CHIEF, at=after(0))
    for happening in story:
        moment = after(happening.minutes)
        append(record, Said(fact=fact_of(happening, key), at=moment), by=CHIEF)
    assert replay(record) == []
    return seen(record)


def seen(record: Record, at: datetime | None = None) -> dict[str, object]:
    state = job_state(record, at=at)
    return {
        view.label: (
            str(view.standing),
            str(view.position.trust),
            view.position.reason,
            str(view.elevation.trust),
            [
                (s.standing, s.set_at, s.last_seen, s.first_missing)
                for s in view.state.stakes
            ],
        )
        for view in state.marks.values()
    }


@pytest.mark.django_db
@settings(
    max_examples=25,
    deadline=None,
    suppress_health_check=[HealthCheck.function_scoped_fixture],
)
@given(story=stories(), data=st.data())
def test_arrival_order_does_not_matter(story, data) -> None:
    shuffled = data.draw(st.permutations(story))
    in_time = sorted(story, key=lambda happening: happening.minutes)
    name = uuid.uuid4().hex[:12]
    assert told(f"{name}-a", in_time) == told(f"{name}-b", shuffled)


@pytest.mark.django_db
@settings(
    max_examples=25,
    deadline=None,
    suppress_health_check=[HealthCheck.function_scoped_fixture],
)
@given(story=stories(), data=st.data())
def test_the_past_is_the_same_fold_over_fewer_facts(story, data) -> None:
    """State as of T equals the state of a record that heard only what came before T."""
    until = data.draw(st.integers(0, 10_000))
    name = uuid.uuid4().hex[:12]
    early = [h for h in story if h.minutes <= until]
    whole = told(f"{name}-a", story)
    assert whole is not None
    record = Record.objects.get(number=f"{name}-a")
    assert seen(record, at=after(until)) == told(f"{name}-b", early)
