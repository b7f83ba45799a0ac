"""Joint covariance of marks: shared setups, generations, chains put back."""

from __future__ import annotations

import math

import numpy as np
import pytest

from geometry.errors import OutOfRange, WrongShape
from geometry.precision import TotalStation, free_station, sighted
from geometry.ways import (
    Kind,
    Lineage,
    Origin,
    Sort,
    Survivor,
    Target,
    control_origin,
    free_setup,
    occupied_setup,
    put_back,
    shot,
    ways_back,
)
from tests.geometry.test_ways_precision import MANY, OWN, TAPE, TAPING, only, stakes


def test_a_common_error_of_all_marks_moves_the_point_and_no_more():
    """Joint covariance: what all survivors share is carried once, not averaged away."""
    common = 1e-4 * np.eye(2)
    names = {"A": (0, 0), "B": (24, 3), "C": (5, 25), "D": (20, 20)}
    datum = control_origin("datum", common)
    origins = [datum]
    for name in names:
        origins.append(Origin(name, (("datum", np.eye(2)),), OWN, control=True))
    lineage = Lineage(origins)
    marks = stakes(**names)
    target = Target("P", (10.0, 12.0), 0.05)
    plain = ways_back(target, marks, tools=TAPING, limits=MANY)
    joint = ways_back(target, marks, tools=TAPING, limits=MANY, lineage=lineage)
    by = {(w.kind, w.marks): w for w in plain if w.offered}
    checked = 0
    for way in joint:
        if way.offered and (way.kind, way.marks) in by:
            alone = by[way.kind, way.marks]
            assert way.covariance_m2 == pytest.approx(alone.covariance_m2 + common)
            # A distance between marks that share the error does not feel it.
            assert way.checks[0].sd == pytest.approx(alone.checks[0].sd, rel=0.2)
            checked += 1
    assert checked >= 5


def test_stakes_of_one_setup_share_its_errors_as_simulated():
    rng, n = np.random.default_rng(7), 100_000
    tool = TotalStation()
    s, b = np.array((0.0, 0.0)), np.array((60.0, 10.0))
    p, q = np.array((20.0, 35.0)), np.array((25.0, 37.0))
    lineage = Lineage(
        [
            control_origin("S", OWN),
            control_origin("B", OWN),
            occupied_setup("setup", "S", "B", s, b, tool),
            shot("P", "setup", s, p, tool),
            shot("Q", "setup", s, q, tool),
        ]
    )
    es = rng.multivariate_normal((0, 0), OWN, n) + rng.normal(
        0, tool.station_centring_m, (n, 2)
    )
    eb = rng.multivariate_normal((0, 0), OWN, n) + rng.normal(
        0, tool.backsight_centring_m, (n, 2)
    )
    back = b + eb - es
    turn = np.arctan2(back[:, 0], back[:, 1]) - math.atan2(*b)
    turn += rng.normal(0, tool.direction_sd_rad, n)
    errors = []
    for target in (p, q):
        az = math.atan2(*target) + turn + rng.normal(0, tool.direction_sd_rad, n)
        d = math.hypot(*target) + rng.normal(0, tool.distance_sd_m, n)
        point = es + np.column_stack([d * np.sin(az), d * np.cos(az)])
        errors.append(point - target + rng.normal(0, tool.target_centring_m, (n, 2)))
    got = np.cov(np.hstack(errors).T)
    expected = lineage.covariance(["P", "Q"])
    assert got == pytest.approx(expected, abs=0.02 * expected.max())
    assert expected[0, 2] > 0.5 * OWN[0, 0]


def chain(count):
    """Control, then a line of stakes each put back from the two before it."""
    marks = {"C0": (0.0, 0.0), "C1": (0.0, 8.0)}
    origins = [control_origin(name, OWN) for name in marks]
    survivors = [
        Survivor(name, place, OWN, Sort.CONTROL) for name, place in marks.items()
    ]
    far = Survivor("X", (12.0, 30.0), OWN, Sort.CONTROL)
    for i in range(count):
        lineage = Lineage([*origins, control_origin("X", OWN)])
        name, place = f"S{i}", (7.0 * (i + 1), 4.0 + (-1) ** i * 4.0)
        way = only(
            Kind.TIES,
            Target(name, place, 1.0),
            [*survivors[-2:], far],
            (survivors[-2].id, survivors[-1].id),
        )
        again = ways_back(
            Target(name, place, 1.0),
            [*survivors[-2:], far],
            lineage=lineage,
            tools=TAPING,
            limits=MANY,
        )
        way = next(w for w in again if w.kind is Kind.TIES and w.marks == way.marks)
        origins.append(put_back(way))
        survivors.append(Survivor(name, place, way.covariance_m2))
    return Lineage(origins), survivors, way


def test_each_putting_back_is_a_generation_more_and_less_sure():
    lineage, survivors, last = chain(4)
    ages = [lineage.generation(s.id) for s in survivors]
    assert ages == [0, 0, 1, 2, 3, 4]
    sizes = [float(np.trace(lineage.covariance([s.id]))) for s in survivors]
    assert sizes[2] < sizes[3] < sizes[4] < sizes[5]
    assert lineage.covariance([last.target]) == pytest.approx(last.covariance_m2)


def test_a_chain_with_its_joint_covariance_agrees_with_simulation():
    lineage, survivors, _ = chain(3)
    rng, n = np.random.default_rng(8), 40_000
    true = {
        s.id: np.array(s.position) + rng.multivariate_normal((0, 0), OWN, n)
        for s in survivors[:2]
    }
    for i, stake in enumerate(survivors[2:]):
        one, two = survivors[i], survivors[i + 1]
        p = np.array(stake.position)
        u = np.array([(p - x.position) / math.dist(p, x.position) for x in (one, two)])
        pulled = np.array([math.dist(p, x.position) for x in (one, two)])
        pulled = pulled + rng.normal(
            0, [math.sqrt(TAPE.variance(d)) for d in pulled], (n, 2)
        )
        at = np.tile(p, (n, 1))
        for _ in range(4):
            gaps = np.column_stack(
                [
                    pulled[:, j] - np.hypot(*(at - true[x.id]).T)
                    for j, x in enumerate((one, two))
                ]
            )
            at = at + gaps @ np.linalg.inv(u).T
        true[stake.id] = at
    names = [s.id for s in survivors]
    errors = np.hstack([true[s.id] - s.position for s in survivors])
    expected = lineage.covariance(names)
    assert np.cov(errors.T) == pytest.approx(expected, abs=0.04 * expected.max())


def test_a_free_setup_carries_its_marks():
    marks = {"A": (0.0, 50.0), "B": (45.0, 0.0), "C": (-30.0, -30.0)}
    tool = TotalStation()
    free = free_station((3, 4), list(marks.values()), tool, np.tile(OWN, (3, 1, 1)))
    lineage = Lineage(
        [
            *(control_origin(m, OWN) for m in marks),
            free_setup("setup", list(marks), free),
            shot("P", "setup", (3, 4), (20, 20), tool),
        ]
    )
    expected = sighted(free, (20, 20), tool).covariance_m2
    assert lineage.covariance(["P"]) == pytest.approx(expected)
    assert lineage.generation("P") == 1


def test_a_lineage_that_runs_in_a_circle_is_named():
    eye = np.eye(2)
    with pytest.raises(OutOfRange, match="circle"):
        Lineage([Origin("A", (("B", eye),), eye), Origin("B", (("A", eye),), eye)])
    with pytest.raises(OutOfRange, match="origin"):
        Lineage([Origin("A", (("X", eye),), eye)])
    with pytest.raises(WrongShape):
        Lineage([control_origin("A", eye), Origin("B", (("A", np.eye(3)),), eye)])
