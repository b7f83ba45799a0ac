"""Predicted precision of every way back, against the construction itself simulated."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from geometry.precision import (
    RightAngle,
    StringLine,
    Tape,
    TotalStation,
)
from geometry.ways import (
    Kind,
    Limits,
    Sort,
    Survivor,
    Target,
    Tools,
    ways_back,
)
from geometry.ways import pairs as sift

COUNT = 60_000
OWN = 1e-6 * np.array([[9.0, 2.0], [2.0, 4.0]])
TAPE, STRING, SQUARE = Tape(0.002, 50), StringLine(0.0015), RightAngle(7e-4)
TAPING = Tools(None, TAPE, STRING, SQUARE, None)
MANY = Limits(per_kind=99)


def stakes(**places):
    return [Survivor(name, place, OWN) for name, place in places.items()]


def only(kind, target, marks, used=None, tools=TAPING):
    ways = ways_back(target, marks, tools=tools, limits=MANY)
    found = [w for w in ways if w.kind is kind and w.offered]
    if used is not None:
        found = [w for w in found if set(w.marks) == set(used)]
    assert found, [(w.kind.value, w.marks, w.reason) for w in ways]
    return found[0]


def thrown(seed, *places):
    """True places of marks whose recorded places are off by their covariance."""
    rng = np.random.default_rng(seed)
    return rng, [
        np.array(p) + rng.multivariate_normal((0, 0), OWN, COUNT) for p in places
    ]


def agree(points, target, way):
    expected = way.covariance_m2
    got = np.cov((points - np.array(target)).T)
    assert got == pytest.approx(expected, abs=0.03 * float(np.trace(expected)))


def number(way, name):
    return next(n.value for n in way.numbers if n.name == name)


def test_taped_ties_come_out_as_predicted():
    a, b, p = (0.0, 0.0), (24.0, 3.0), (10.0, 12.0)
    way = only(Kind.TIES, Target("P", p, 0.03), stakes(A=a, B=b, C=(5, 25)), "AB")
    rng, (ta, tb) = thrown(1, a, b)
    r1, r2 = (n.value for n in way.numbers)
    if way.marks == ("B", "A"):
        r1, r2 = r2, r1
    r1 = r1 + rng.normal(0, math.sqrt(TAPE.variance(r1)), COUNT)
    r2 = r2 + rng.normal(0, math.sqrt(TAPE.variance(r2)), COUNT)
    base = tb - ta
    d = np.hypot(*base.T)
    x = (r1**2 - r2**2 + d**2) / (2 * d)
    y = np.sqrt(r1**2 - x**2)
    u = base / d[:, None]
    left = np.column_stack([-u[:, 1], u[:, 0]])
    assert "left of the line A to B" in way.numbers[0].note
    agree(ta + x[:, None] * u + y[:, None] * left, p, way)


def test_a_point_in_line_comes_out_as_predicted():
    a, b = np.array((2.0, 1.0)), np.array((14.0, 10.0))
    p = b + 0.4 * (b - a)
    way = only(
        Kind.IN_LINE, Target("P", tuple(p), 0.03), stakes(A=a, B=b, C=(5, 30)), "AB"
    )
    assert way.marks == ("A", "B") and "beyond B" in way.numbers[1].note
    rng, (ta, tb) = thrown(2, a, b)
    u = (tb - ta) / np.hypot(*(tb - ta).T)[:, None]
    n = np.column_stack([u[:, 1], -u[:, 0]])
    d = number(way, "distance")
    taped = d + rng.normal(0, math.sqrt(TAPE.variance(d)), COUNT)
    side = rng.normal(0, STRING.sd_m, COUNT)
    agree(tb + taped[:, None] * u + side[:, None] * n, p, way)


def test_a_right_angle_offset_comes_out_as_predicted():
    a, b = np.array((2.0, 1.0)), np.array((22.0, 13.0))
    u = (b - a) / math.dist(a, b)
    p = a + 7 * u + 6 * np.array([u[1], -u[0]])
    way = only(
        Kind.RIGHT_ANGLE,
        Target("P", tuple(p), 0.03),
        stakes(A=a, B=b, C=(40, 40)),
        "AB",
    )
    rng, (ta, tb) = thrown(3, a, b)
    start, end = (ta, tb) if way.marks[0] == "A" else (tb, ta)
    base = end - start
    v = base / np.hypot(*base.T)[:, None]
    turn = rng.normal(0, SQUARE.sd_rad, COUNT) + math.pi / 2
    right = "right" in way.numbers[1].note
    turn = turn if right else -turn
    c, s = np.cos(turn), np.sin(turn)
    w = np.column_stack([c * v[:, 0] + s * v[:, 1], c * v[:, 1] - s * v[:, 0]])
    foot, off = number(way, "foot"), number(way, "offset")
    f = foot + rng.normal(0, math.sqrt(TAPE.variance(foot)), COUNT)
    o = off + rng.normal(0, math.sqrt(TAPE.variance(off)), COUNT)
    agree(start + f[:, None] * v + o[:, None] * w, p, way)


def test_crossing_strings_come_out_as_predicted():
    a, b, c, d = (0.0, 0.0), (30.0, 3.0), (12.0, -8.0), (10.0, 20.0)
    m = np.column_stack([np.subtract(b, a), -np.subtract(d, c)])
    share = np.linalg.solve(m, np.subtract(c, a))
    p = np.array(a) + share[0] * np.subtract(b, a)
    marks = stakes(A=a, B=b, C=c, D=d, E=(25, 18))
    way = only(Kind.STRINGS, Target("P", tuple(p), 0.03), marks, "ABCD")
    rng, (ta, tb, tc, td) = thrown(4, a, b, c, d)

    def line(start, end):
        v = end - start
        n = np.column_stack([v[:, 1], -v[:, 0]]) / np.hypot(*v.T)[:, None]
        return n, np.sum(n * start, axis=1) + rng.normal(0, STRING.sd_m, COUNT)

    (n1, c1), (n2, c2) = line(ta, tb), line(tc, td)
    det = n1[:, 0] * n2[:, 1] - n1[:, 1] * n2[:, 0]
    x = (c1 * n2[:, 1] - n1[:, 1] * c2) / det
    y = (n1[:, 0] * c2 - c1 * n2[:, 0]) / det
    agree(np.column_stack([x, y]), p, way)


def flat(sigma):
    return sigma**2 * np.eye(2)


def perfect(*places, sigma=0.01):
    return [Survivor(f"M{i}", place, flat(sigma)) for i, place in enumerate(places)]


EXACT = Tools(None, Tape(1e-9, 0), StringLine(1e-9), RightAngle(1e-9), None)


@pytest.mark.parametrize(("ahead", "growth"), [(5.0, 2.24), (10.0, 3.6)])
def test_running_on_from_a_double_offset_grows_as_the_trade_knows(ahead, growth):
    # Common practice: sqrt((1 + d/b)^2 + (d/b)^2) times sigma, b = 5.
    marks = perfect((0, 0), (0, 5), (20, 12))
    target = Target("P", (0, 5 + ahead), 0.1)
    way = only(Kind.IN_LINE, target, marks, ("M0", "M1"), EXACT)
    assert math.sqrt(way.covariance_m2[0, 0]) / 0.01 == pytest.approx(growth, abs=0.01)


@pytest.mark.parametrize(
    ("degrees", "growth"), [(90, 1.41), (60, 1.63), (30, 2.83), (20, 4.13)]
)
def test_two_ties_grow_with_the_sine_of_their_angle(degrees, growth):
    # Common practice: position rms = 1.41 sigma / sin(angle); printed 4.1 at 20.
    half = math.radians(degrees) / 2
    marks = perfect(
        (10 * math.sin(half), -10 * math.cos(half)),
        (-10 * math.sin(half), -10 * math.cos(half)),
        (30, 30),
    )
    tools = Tools(None, Tape(1e-9, 0, 60), None, None, None)
    way = only(Kind.TIES, Target("P", (0, 0), 0.1), marks, ("M0", "M1"), tools)
    rms = math.sqrt(float(np.trace(way.covariance_m2))) / 0.01
    assert rms == pytest.approx(growth, abs=0.01)


def test_strings_between_their_marks_are_as_good_as_the_marks():
    # Common practice: at most about one sigma if interpolated.
    marks = perfect((-10, 0), (10, 0), (0, -10), (0, 10), (20, 20))
    target = Target("P", (0, 0), 0.1)
    way = only(Kind.STRINGS, target, marks, ("M0", "M1", "M2", "M3"), EXACT)
    assert np.sqrt(np.diag(way.covariance_m2)) / 0.01 == pytest.approx(
        [math.sqrt(0.5)] * 2, abs=1e-3
    )


def test_a_short_backsight_multiplies_its_error():
    # Common practice: 70 ft backsight, 1,000 ft foresight: 0.01 ft becomes 0.14 ft.
    quiet = TotalStation(1e-9, 1e-9, 1e-9, 0, 0, 0, 0, distance_m=1000)
    tools = Tools(quiet, None, None, None, None)
    ft = 0.3048
    marks = [
        Survivor("S", (0, 0), flat(1e-9), Sort.CONTROL),
        Survivor("B", (0, 70 * ft), flat(0.01 * ft), Sort.CONTROL, occupiable=False),
        Survivor("C", (50, 50), flat(1e-9), Sort.CONTROL, occupiable=False),
    ]
    target = Target("P", (0, -1000 * ft), 0.1)
    way = only(Kind.POLAR, target, marks, ("S", "B"), tools)
    assert math.sqrt(way.covariance_m2[0, 0]) / ft == pytest.approx(0.143, abs=0.001)


def test_sifting_agrees_with_the_full_prediction():
    """The many-at-once formulas choose by the same figure the way is shown with."""
    marks = stakes(A=(0, 0), B=(22, 4), C=(9, 20), D=(-6, 14), E=(3, 8.6))
    target = Target("P", (8.0, 9.0), 0.05)
    where = {m.id: np.array(m.position) for m in marks}
    own = np.array([OWN[0, 0], OWN[0, 1], OWN[1, 1]])
    p = np.array(target.position)
    seen = 0
    for way in ways_back(target, marks, tools=TAPING, limits=MANY):
        if not way.offered or len(way.marks) != 2:
            continue
        a, b = (where[m] for m in way.marks)
        if way.kind is Kind.TIES:
            square = sift.ties(p, a, b, own, own, TAPE)[0]
        elif way.kind is Kind.IN_LINE:
            square = sift.in_line(p, a, b, own, own, TAPE, STRING)[0]
        else:
            square = sift.right_angle(p, a, b, own, own, TAPE, SQUARE)[0]
        largest = np.linalg.eigvalsh(way.covariance_m2)[1]
        assert float(square) == pytest.approx(largest, rel=1e-9)
        seen += 1
    assert seen >= 8


spot = st.tuples(st.floats(-40, 40), st.floats(-40, 40))


@given(
    st.lists(spot, min_size=3, max_size=6, unique=True),
    st.floats(0, 6.28),
    st.tuples(st.floats(-6e5, 6e5), st.floats(-4e6, 4e6)),
)
def test_ways_do_not_depend_on_origin_or_north(places, turn, shift):
    assume(min(math.dist(p, q) for p in places for q in places if p != q) > 0.5)
    c, s = math.cos(turn), math.sin(turn)
    r = np.array([[c, s], [-s, c]])
    one = [Survivor(f"M{i}", p, flat(0.003)) for i, p in enumerate(places[1:])]
    two = [
        Survivor(m.id, tuple(r @ m.position + np.array(shift)), flat(0.003))
        for m in one
    ]
    here = Target("P", places[0], 0.02)
    there = Target("P", tuple(r @ here.position + np.array(shift)), 0.02)
    tools = Tools(None, TAPE, STRING, SQUARE, None)
    a = {
        (w.kind, w.marks): w
        for w in ways_back(here, one, tools=tools, limits=MANY)
        if w.offered and w.ratio < 50
    }
    b = {
        (w.kind, w.marks): w
        for w in ways_back(there, two, tools=tools, limits=MANY)
        if w.offered and w.ratio < 50
    }
    for key in a.keys() & b.keys():
        assert b[key].semi_major_m == pytest.approx(a[key].semi_major_m, rel=1e-5)
        assert r @ a[key].covariance_m2 @ r.T == pytest.approx(
            b[key].covariance_m2, rel=1e-4, abs=1e-9
        )
