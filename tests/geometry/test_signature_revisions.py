"""The nearest revision: told by the marks that moved, and only by them."""

from __future__ import annotations

import numpy as np
import pytest

from geometry.errors import OutOfRange, WrongShape
from geometry.signature import Kind, nearest_revision
from geometry.verdicts import Verdict

PLAN = np.column_stack([np.arange(12) * 8.0, np.zeros(12)]) + np.array([5e5, 4.2e6])
HALF_FOOT = 0.1524


def noisy(points, seed=1):
    return points + np.random.default_rng(seed).normal(0, 0.003, points.shape)


def moved(rows, move):
    there = PLAN[list(rows)] + move
    return (list(rows), there)


def built(revision):
    points = PLAN.copy()
    points[revision[0]] = revision[1]
    return points


def test_stakes_of_an_older_gridline_fit_the_older_revision():
    older = {"B": moved((3, 4, 5), [0.0, HALF_FOOT]), "A": moved((8,), [0.4, 0.0])}
    found = nearest_revision(PLAN, noisy(built(older["B"])), older)
    assert (found.signature.verdict, found.signature.kind) == (
        Verdict.FAIL,
        Kind.REVISION,
    )
    assert found.signature.causes[0].about == "B"
    assert found.signature.reason == (
        "The stakes fit revision B better: 3 of the 3 that it had elsewhere."
    )
    assert found.telling["B"].tolist() == [3, 4, 5]


def test_stakes_of_the_current_plan_pass():
    older = {"B": moved((3, 4, 5), [0.0, HALF_FOOT])}
    assert nearest_revision(PLAN, noisy(PLAN), older).signature.verdict is Verdict.PASS


def test_two_revisions_alike_in_what_was_shot_are_told_as_a_set():
    older = {
        "B": moved((3, 4), [0.0, HALF_FOOT]),
        "A": moved((3, 4), [0.0, HALF_FOOT]),
    }
    found = nearest_revision(PLAN, noisy(built(older["B"])), older).signature
    assert found.verdict is Verdict.AMBIGUOUS
    assert {cause.about for cause in found.causes} == {"A", "B"}
    assert "shoot a mark that moved between them" in found.next_shot.sentence


def test_a_revision_that_moved_nothing_that_was_shot_cannot_be_told():
    found = nearest_revision(PLAN, noisy(PLAN), {"A": moved((2,), [0.001, 0.0])})
    assert found.telling["A"].size == 0
    assert {c.kind for c in found.signature.weighed} == {Kind.NOTHING}


def test_one_stake_knocked_to_no_old_place_is_no_revision():
    older = {"B": moved((3, 4, 5), [0.0, HALF_FOOT])}
    shots = noisy(PLAN)
    shots[3] += [0.05, 0.11]
    assert nearest_revision(PLAN, shots, older).signature.verdict is Verdict.PASS


def test_bad_revisions_are_named():
    with pytest.raises(OutOfRange, match="Revision B"):
        nearest_revision(PLAN, PLAN, {"B": ([40], [(0, 0)])})
    with pytest.raises(WrongShape, match="Revision B"):
        nearest_revision(PLAN, PLAN, {"B": ([1, 2], [(0, 0)])})
    with pytest.raises(WrongShape):
        nearest_revision(PLAN, PLAN[:5], {})
    short = nearest_revision(PLAN[:2], PLAN[:2], {})
    assert short.signature.verdict is Verdict.NOT_TESTED
