"""Which losses would leave a mark nobody could put back, and what would help."""

from __future__ import annotations

import math
from itertools import combinations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from geometry.errors import GeometryError, OutOfRange, WrongShape
from geometry.precision import TotalStation, obstacle
from geometry.survive import (
    best_extra,
    group_losses,
    kill_sets,
    protect,
    routes,
    stand,
    survivability,
)
from geometry.ways import Caution, Limits, Survivor, Target, Tools, ways_back

SURE = 4e-6 * np.eye(2)
TAPES = Tools(total_station=None)


def scattered(seed, count, size=45.0, **more):
    rng = np.random.default_rng(seed)
    more.setdefault("control", rng.random(count) < 0.2)
    more.setdefault("usable", rng.random(count) < 0.9)
    more.setdefault("occupiable", rng.random(count) < 0.4)
    return stand(rng.uniform(0, size, (count, 2)), SURE, 0.02, **more)


def alive(found, row, lost):
    """By the definition: a way untouched, and a mark beside it left to check."""
    near = found.near[row]
    left = {int(m) for m in near[found.checks[row]]} - lost
    for works, i, j in zip(found.works[row], found.first, found.second, strict=True):
        way = {int(near[i]), int(near[j])}
        if works and not way & lost and left - way:
            return True
    return False


names = st.sampled_from("ABCDEFG")


@given(
    st.lists(st.frozensets(names, min_size=1, max_size=4), max_size=7),
    st.integers(0, 3),
)
def test_kill_sets_are_those_of_brute_force(ways, size):
    marks = sorted(set().union(*ways)) if ways else []
    hitting = [
        frozenset(group)
        for k in range(size + 1)
        for group in combinations(marks, k)
        if all(way & set(group) for way in ways)
    ]
    smallest = {s for s in hitting if not any(o < s for o in hitting)}
    assert set(kill_sets(ways, size)) == smallest


def test_two_hundred_random_jobs_agree_with_brute_force():
    rng = np.random.default_rng(1)
    for _ in range(200):
        ways = [
            frozenset(rng.choice(8, rng.integers(2, 4), replace=False).tolist())
            for _ in range(rng.integers(1, 9))
        ]
        brute = {
            frozenset(g)
            for k in (1, 2)
            for g in combinations(range(8), k)
            if all(w & set(g) for w in ways)
        }
        brute = {s for s in brute if not any(o < s for o in brute)}
        assert set(kill_sets(ways, 2)) == brute


def test_without_ways_nothing_more_need_be_lost():
    assert kill_sets([]) == (frozenset(),)
    assert kill_sets([set()], 2) == ()
    with pytest.raises(OutOfRange):
        kill_sets([{"A"}], 4)


@pytest.mark.parametrize("seed", range(8))
def test_single_and_double_losses_are_those_of_the_definition(seed):
    found = routes(scattered(seed, 9), nearest=6, control=2)
    answer = survivability(found)
    for row in range(len(found.targets)):
        near = sorted({int(m) for m in found.near[row] if m >= 0})
        now = alive(found, row, set())
        one = {m for m in near if now and not alive(found, row, {m})}
        two = {
            frozenset(p)
            for p in combinations(near, 2)
            if now and not set(p) & one and not alive(found, row, set(p))
        }
        assert set(answer.with_one[row]) == one
        assert {frozenset(p) for p in answer.with_two[row]} == two
        margin = 0 if not now else 1 if one else 2 if two else 3
        assert answer.margin[row] == margin


@pytest.mark.parametrize("seed", range(4))
def test_the_loss_of_a_group_is_that_of_the_definition(seed):
    found = routes(scattered(seed, 12), nearest=6, control=2)
    members = {0, 3, 4, 7}
    (loss,) = group_losses(found, {"haul road": members})
    dead = {
        int(t) for row, t in enumerate(found.targets) if not alive(found, row, members)
    }
    assert set(loss.stranded) == dead & members
    assert set(loss.exposed) == dead - members


def test_a_mark_with_three_neighbours_falls_with_any_of_them():
    """A way of two needs a third to check it: of three, none may go."""
    marks = stand([(0, 0), (10, 0), (10, 10), (0, 10)], SURE, 0.05, tools=TAPES)
    answer = survivability(routes(marks))
    assert answer.margin.tolist() == [1, 1, 1, 1]
    assert answer.with_one[0] == (1, 3, 2) or set(answer.with_one[0]) == {1, 2, 3}


def test_a_lonely_mark_cannot_be_put_back_even_now():
    marks = stand([(0, 0), (5000, 0), (5010, 0), (5005, 9)], SURE, 0.05, tools=TAPES)
    answer = survivability(routes(marks))
    assert answer.margin[0] == 0 and answer.ways[0] == 0


def test_every_way_counted_is_one_that_would_be_offered():
    """The sifting for a whole job and the ways shown for one mark are the same."""
    rng = np.random.default_rng(3)
    xy = rng.uniform(0, 40, (10, 2))
    able = rng.random(10) < 0.5
    marks = stand(xy, SURE, 0.02, occupiable=able)
    found = routes(marks, control=0)
    agreed = 0
    for row, target in enumerate(found.targets.tolist()):
        others = [
            Survivor(str(i), tuple(xy[i]), SURE, occupiable=bool(able[i]))
            for i in range(10)
            if i != target
        ]
        limits = Limits(per_kind=99)
        ways = ways_back(Target("P", tuple(xy[target]), 0.02), others, limits=limits)
        weak = {Caution.WEAK_ANGLE, Caution.SHORT_BACKSIGHT, Caution.LONG_TAPE}
        weak |= {Caution.EXTENSION, Caution.LONG_OFFSET, Caution.OVER_TOLERANCE}
        offered = {
            frozenset(w.marks)
            for w in ways
            if w.offered and len(w.marks) == 2 and not weak & set(w.cautions)
        }
        counted = {
            frozenset((str(found.near[row, i]), str(found.near[row, j])))
            for works, i, j in zip(
                found.works[row], found.first, found.second, strict=True
            )
            if works
        }
        assert offered <= counted
        agreed += len(offered)
    assert agreed > 60


def test_a_wall_takes_ways_away():
    marks = stand([(0, 0), (10, 0), (10, 10), (0, 10)], SURE, 0.05, tools=TAPES)
    wall = obstacle([(4, -5), (6, -5), (6, 5), (4, 5)])
    open_ = routes(marks).works.sum()
    assert routes(marks, obstacles=(wall,)).works.sum() < open_


def smallest(found):
    """Fewest protected marks by trying every set."""
    marks = sorted(
        {int(m) for m in found.near[found.near >= 0]} | set(found.targets.tolist())
    )
    everything = set(marks)
    hopeless = {
        row for row in range(len(found.targets)) if not alive(found, row, set())
    }
    for k in range(len(marks) + 1):
        for group in combinations(marks, k):
            lost = everything - set(group)
            if all(
                row in hopeless or int(t) in group or alive(found, row, lost)
                for row, t in enumerate(found.targets)
            ):
                return k
    raise AssertionError


@pytest.mark.parametrize("seed", range(6))
def test_the_protected_set_is_the_smallest_there_is(seed):
    found = routes(scattered(seed, 8, size=30), nearest=5, control=1)
    exact, greedy = protect(found), protect(found, exact=False)
    assert exact.optimal and not greedy.optimal
    assert len(exact.marks) == smallest(found)
    assert len(greedy.marks) >= len(exact.marks)


@pytest.mark.parametrize("exact", [True, False])
def test_with_only_the_protected_marks_left_everything_can_be_put_back(exact):
    found = routes(scattered(5, 40, size=90))
    answer = protect(found, exact=exact)
    lost = set(range(40)) - set(answer.marks)
    for row, target in enumerate(found.targets.tolist()):
        if target not in answer.marks and target not in answer.hopeless:
            assert alive(found, row, lost)


def test_one_extra_mark_cures_what_it_says():
    marks = stand([(0, 0), (10, 0), (10, 10), (0, 10)], SURE, 0.05, tools=TAPES)
    found = routes(marks)
    now = survivability(found)
    options = best_extra(marks, found, now, [(18, 5), (5, -12), (900, 0)], SURE)
    assert options and all(o.position != (900.0, 0.0) for o in options)
    best = options[0]
    assert len(best.cured) == 4
    more = stand([*marks.xy, best.position], SURE, 0.05, tools=TAPES)
    again = survivability(routes(more))
    for mark in best.cured:
        assert again.margin[mark] >= 2


def test_control_is_looked_for_beyond_the_nearest_stakes():
    rng = np.random.default_rng(4)
    xy = np.vstack([rng.uniform(0, 8, (20, 2)), [(150, 0), (0, 150), (150, 150)]])
    control = np.arange(23) >= 20
    found = routes(stand(xy, SURE, 0.02, control=control), nearest=6)
    assert set(found.targets.tolist()) == set(range(20))
    assert {20, 21, 22} <= set(found.near[0].tolist())


def test_a_mark_that_may_not_be_used_serves_nobody():
    usable = np.array([True, True, True, False])
    marks = stand(
        [(0, 0), (10, 0), (10, 10), (0, 10)], SURE, 0.05, tools=TAPES, usable=usable
    )
    found = routes(marks)
    assert 3 not in found.near
    assert len(found.targets) == 4


@settings(max_examples=30)
@given(st.integers(0, 10_000), st.floats(-5e5, 5e5), st.floats(0, 6.28))
def test_margins_do_not_depend_on_origin_or_north(seed, shift, turn):
    rng = np.random.default_rng(seed)
    xy = rng.uniform(0, 40, (8, 2))
    c, s = math.cos(turn), math.sin(turn)
    other = xy @ np.array([[c, -s], [s, c]]) + shift
    one, two = (
        routes(stand(p, SURE, 0.02, tools=Tools(TotalStation()))) for p in (xy, other)
    )
    # A figure on the very edge of a limit may fall to either side.
    assert (one.works != two.works).sum() <= 1
    if (one.works == two.works).all():
        assert survivability(one).margin.tolist() == survivability(two).margin.tolist()


def test_empty_and_wrong_input_is_answered_or_named():
    empty = routes(stand([], SURE, 0.02))
    assert len(survivability(empty).margin) == 0
    assert protect(empty).marks == ()
    with pytest.raises(WrongShape):
        stand([(0, 0)], np.zeros((3, 2, 2)), 0.02)
    with pytest.raises(OutOfRange):
        stand([(0, 0)], SURE, 0.0)
    with pytest.raises(OutOfRange, match="row 2"):
        stand([(0, 0), (1, 1)], [SURE, -SURE], 0.02)
    with pytest.raises(WrongShape):
        stand([(0, 0)], SURE, 0.02, usable=[True, False])


wild = st.floats() | st.sampled_from([0.0, 1.0, 1e7])


@given(st.lists(st.tuples(wild, wild), max_size=6))
def test_any_marks_give_margins_or_a_named_error(places):
    try:
        found = routes(stand(places, SURE, 0.02))
    except GeometryError as error:
        assert str(error)
    else:
        margin = survivability(found).margin
        assert ((margin >= 0) & (margin <= 3)).all()
