"""Gross blunders: named with the mark that was mistaken, from predicted places."""

from __future__ import annotations

import math

import numpy as np
import pytest

from geometry.signature import GROSS, Kind, Role, setup, signature
from geometry.verdicts import Verdict

ORIGIN = np.array([610_000.0, 1_240_000.0])
MARKS = ORIGIN + np.array(
    [(0, 0), (80, 60), (-70, 90), (-110, -20), (40, -95), (105, -15)], float
)
NAMES = ["C1", "C2", "C3", "C4", "C5", "C6"]


def design(count=25):
    return ORIGIN + np.random.default_rng(5).uniform(-80, 80, (count, 2))


def noisy(points):
    return points + np.random.default_rng(6).normal(0, 0.005, points.shape)


def azimuth(a, b):
    return math.atan2(b[0] - a[0], b[1] - a[1])


def polar(at, azimuths, lengths):
    return at + lengths[:, None] * np.column_stack([np.sin(azimuths), np.cos(azimuths)])


def rays(at, points):
    d = points - at
    return np.arctan2(d[:, 0], d[:, 1]), np.hypot(*d.T)


def read(shots, role=Role.STAKED, plan=None, **options):
    at = setup(MARKS[0], MARKS[1], role=role, name="Setup 4")
    return signature(
        design() if plan is None else plan,
        shots,
        [at],
        marks=MARKS,
        mark_names=NAMES,
        rng=np.random.default_rng(7),
        **options,
    )


def oriented_on_c4(points):
    """Where stakes go when C4 is sighted for C2."""
    z, length = rays(MARKS[0], points)
    turn = azimuth(MARKS[0], MARKS[3]) - azimuth(MARKS[0], MARKS[1])
    return polar(MARKS[0], z + turn, length)


def test_a_wrong_backsight_names_the_mark_that_was_sighted():
    found = read(noisy(oriented_on_c4(design())))
    assert (found.verdict, found.kind) == (Verdict.FAIL, Kind.WRONG_BACKSIGHT)
    assert found.causes[0].mark == 3
    assert found.reason.startswith(
        "Setup 4 was oriented on C4 instead of its backsight"
    )


def test_a_wrong_backsight_of_the_shooting_setup_is_the_inverse():
    z, length = rays(MARKS[0], design())
    turn = azimuth(MARKS[0], MARKS[3]) - azimuth(MARKS[0], MARKS[1])
    found = read(noisy(polar(MARKS[0], z - turn, length)), role=Role.SHOT)
    assert (found.kind, found.causes[0].mark) == (Kind.WRONG_BACKSIGHT, 3)


def test_a_wrong_station_names_the_mark_that_was_occupied():
    z, length = rays(MARKS[0], design())
    turn = azimuth(MARKS[4], MARKS[1]) - azimuth(MARKS[0], MARKS[1])
    found = read(noisy(polar(MARKS[4], z + turn, length)))
    assert (found.kind, found.causes[0].mark) == (Kind.WRONG_STATION, 4)
    assert "The instrument stood on C5" in found.reason


def test_another_marks_coordinates_are_named():
    z, length = rays(MARKS[2], design())
    turn = azimuth(MARKS[0], MARKS[1]) - azimuth(MARKS[2], MARKS[1])
    found = read(noisy(polar(MARKS[0], z + turn, length)))
    assert (found.kind, found.causes[0].mark) == (Kind.WRONG_VALUE, 2)
    assert "used the coordinates of C3" in found.reason


def test_station_and_backsight_exchanged():
    z, length = rays(MARKS[0], design())
    found = read(noisy(polar(MARKS[1], z + math.pi, length)))
    assert found.kind is Kind.EXCHANGED


def test_a_backsight_turned_by_half_a_circle():
    z, length = rays(MARKS[0], design())
    found = read(noisy(polar(MARKS[0], z + math.pi, length)))
    assert found.kind is Kind.REVERSED


def test_angles_turned_the_wrong_way():
    z, length = rays(MARKS[0], design())
    back = azimuth(MARKS[0], MARKS[1])
    found = read(noisy(polar(MARKS[0], 2 * back - z, length)))
    assert found.kind is Kind.ANGLE_SENSE


@pytest.mark.parametrize(
    ("kind", "image"),
    [
        (Kind.SWAPPED, lambda p: p[:, ::-1]),
        (Kind.FEET_AS_METRES, lambda p: p / 0.3048),
        (Kind.METRES_AS_FEET, lambda p: p * 0.3048),
        (Kind.NUMBERING, lambda p: np.roll(p, -1, axis=0)),
        (Kind.FEET_AS_METRES, lambda p: MARKS[0] + (p - MARKS[0]) / 0.3048),
    ],
)
def test_blunders_of_the_whole_list_are_named(kind, image):
    assert read(noisy(image(design()))).kind is kind


def test_a_backsight_azimuth_wrong_by_any_amount_is_a_rotation_with_its_size():
    z, length = rays(MARKS[0], design())
    found = read(noisy(polar(MARKS[0], z + math.radians(10), length)))
    assert found.kind is Kind.ROTATION
    assert found.causes[0].parameters[0] == pytest.approx(math.radians(10), abs=2e-4)
    assert "10°00' clockwise" in found.reason


def test_what_no_mark_explains_is_told_as_moved_as_a_whole():
    z, length = rays(ORIGIN + 33.0, design())
    found = read(noisy(polar(ORIGIN + np.array([71.0, -18.0]), z + 0.4, length)))
    assert found.kind is Kind.MOVED
    assert "no known mark explains it" in found.reason


def test_a_mirror_image_about_an_unknown_line_is_told():
    flipped = design() * [-1.0, 1.0] + [2 * ORIGIN[0] + 31.0, 0.0]
    assert read(noisy(flipped)).kind is Kind.MIRRORED


def test_a_quarter_of_the_shots_may_be_good_all_the_same():
    shots = oriented_on_c4(design())
    shots[:6] = design()[:6]
    found = read(noisy(shots))
    assert (found.kind, found.causes[0].mark) == (Kind.WRONG_BACKSIGHT, 3)
    assert found.wild.tolist() == [0, 1, 2, 3, 4, 5]


def test_a_backsight_that_differs_by_nothing_cannot_be_told_and_is_not_claimed():
    beyond = MARKS[0] + 1.7 * (MARKS[1] - MARKS[0])
    plan = design()
    found = signature(
        plan,
        noisy(plan),
        [setup(MARKS[0], MARKS[1], role=Role.STAKED)],
        marks=[beyond],
        rng=np.random.default_rng(7),
    )
    assert found.verdict is Verdict.PASS


def test_a_setup_that_staked_and_one_that_shot_may_both_be_to_blame():
    z, length = rays(MARKS[0], design())
    shots = noisy(polar(MARKS[0], z + math.pi, length))
    both = [
        setup(MARKS[0], MARKS[1], role=Role.STAKED, name="Setup 4"),
        setup(MARKS[0], MARKS[1], role=Role.SHOT, name="Setup 9"),
    ]
    found = signature(design(), shots, both, rng=np.random.default_rng(7))
    assert found.verdict is Verdict.AMBIGUOUS
    assert {(c.kind, c.setup) for c in found.causes} == {
        (Kind.REVERSED, 0),
        (Kind.REVERSED, 1),
    }
    assert "Setup 4" in found.reason and "Setup 9" in found.reason


def test_gross_kinds_are_told_from_small_ones():
    assert Kind.WRONG_BACKSIGHT in GROSS
    assert Kind.PRISM not in GROSS
