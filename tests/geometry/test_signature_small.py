"""Small systematic causes: read from their fields, or told as a set, never guessed."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from geometry.errors import CoincidentPoints, NotFinite, OutOfRange, WrongShape
from geometry.signature import (
    FEET,
    Kind,
    grid_for_ground,
    setup,
    signature,
)
from geometry.verdicts import Verdict

AT = np.array([610_000.0, 1_240_000.0])
SECOND = math.radians(1 / 3600)


def stakes(count, near=10.0, far=90.0, half=180.0, seed=1):
    rng = np.random.default_rng(seed)
    length = rng.uniform(near, far, count)
    azimuth = math.radians(40) + np.radians(rng.uniform(-half, half, count))
    return AT + length[:, None] * np.column_stack([np.sin(azimuth), np.cos(azimuth)])


def noisy(points, seed=2, sigma=0.004):
    return points + np.random.default_rng(seed).normal(0, sigma, points.shape)


def read(design, shots, **options):
    options.setdefault("setups", [setup(AT, AT + np.array([60.0, 80.0]))])
    return signature(design, shots, rng=np.random.default_rng(3), **options)


def radial(points):
    d = points - AT
    return d / np.hypot(*d.T)[:, None]


def across(points):
    d = points - AT
    return np.column_stack([d[:, 1], -d[:, 0]])


def test_honest_shots_show_nothing_and_say_what_would_have_been_seen():
    design = stakes(40)
    found = read(design, noisy(design))
    assert (found.verdict, found.causes) == (Verdict.PASS, ())
    assert "Nothing systematic in 40 stakes" in found.reason
    assert 0.004 < found.would_see_m < 0.03


def test_honest_setups_are_accused_no_more_often_than_odds_of_thirty_to_one():
    rng, accused = np.random.default_rng(21), 0
    for seed in range(150):
        design = stakes(25, seed=seed)
        turned = rng.normal(0, 10 * SECOND) * across(design)
        shots = design + rng.normal(0, 0.003, 2) + turned
        shots += rng.normal(0, 0.004, design.shape)
        accused += read(design, shots, tolerance_m=1e-6).verdict is not Verdict.PASS
    assert accused <= 3


def test_a_prism_constant_is_read_with_its_size_and_covariance():
    design = stakes(25)
    found = read(design, noisy(design + 0.034 * radial(design)))
    cause = found.causes[0]
    assert (found.verdict, cause.kind) == (Verdict.FAIL, Kind.PRISM)
    sigma = math.sqrt(cause.covariance[0, 0])
    assert abs(cause.parameters[0] - 0.034) < 4 * sigma < 0.01
    assert "too far from the setup at any distance: prism constant." in found.reason


def test_an_orientation_error_is_read_in_seconds_and_with_its_hand():
    design = stakes(25)
    found = read(design, noisy(design - 200 * SECOND * across(design)))
    assert found.kind is Kind.ROTATION
    assert found.causes[0].parameters[0] / SECOND == pytest.approx(-200, abs=30)
    assert "counterclockwise about the setup" in found.reason


def test_a_shift_is_read_with_its_direction():
    design = stakes(25)
    found = read(design, noisy(design + np.array([0.03, 0.03])))
    assert found.kind is Kind.SHIFT
    assert "to the northeast" in found.reason


def test_a_scale_is_read_in_parts_per_million():
    design = stakes(25)
    found = read(design, noisy(design + 400e-6 * (design - AT)))
    assert found.kind is Kind.SCALE
    assert found.causes[0].parameters[0] * 1e6 == pytest.approx(400, abs=60)


def test_the_foot_is_told_from_a_shift_because_it_has_nothing_to_fit():
    # 2 ppm of a coordinate: 500000/499999, 85 FR 62698
    design = stakes(40)
    found = read(design, noisy(design * 1.000002), from_grid_origin=True)
    assert found.kind is Kind.US_FOOT
    assert "2 millionths" in found.reason
    without = read(design, noisy(design * 1.000002))
    assert without.kind is Kind.SHIFT


def test_two_blunders_at_once_are_two():
    design = stakes(60)
    moved = design + 0.03 * radial(design) + 200 * SECOND * across(design)
    found = read(design, noisy(moved))
    assert found.kind is Kind.PRISM_AND_ROTATION
    assert found.causes[0].parameters.tolist() == pytest.approx(
        [0.03, 200 * SECOND], rel=0.2
    )


def test_a_known_field_wins_over_a_free_one():
    design = stakes(40)
    left_out = grid_for_ground(0.9996, AT - 3000.0)
    found = read(design, noisy(design + left_out.fixed_at(design)), known=[left_out])
    assert found.kind is Kind.KNOWN
    assert "a combined factor left out" in found.reason


def test_a_far_cluster_is_answered_by_a_set_and_the_shot_that_tells():
    design = stakes(8, 78.0, 82.0, 2.0)
    shots = noisy(design + 0.03 * radial(design), sigma=0.003)
    found = read(design, shots)
    assert found.verdict is Verdict.AMBIGUOUS
    kinds = {cause.kind for cause in found.causes}
    assert Kind.PRISM in kinds and len(kinds) > 1
    assert found.reason.startswith("One of ")
    tell = found.next_shot
    assert tell.decides and tell.times > 3
    more = np.vstack([design, tell.point, tell.point + 0.5])
    seen = np.vstack(
        [shots, noisy(more[-2:] + 0.03 * radial(more[-2:]), seed=9, sigma=0.003)]
    )
    again = read(more, seen)
    assert (again.verdict, again.kind) == (Verdict.FAIL, Kind.PRISM)


def test_the_next_shot_is_chosen_among_the_places_offered():
    design = stakes(8, 78.0, 82.0, 2.0)
    offered = np.array([design[0] + 1.0, AT - [30.0, 30.0], AT + np.array([0.0, 12.0])])
    found = read(
        design, noisy(design + 0.03 * radial(design), sigma=0.003), candidates=offered
    )
    assert found.next_shot.candidate in (1, 2)


def test_a_cause_too_small_to_matter_is_told_and_passed():
    design = stakes(200)
    found = read(design, noisy(design + 0.012 * radial(design)), tolerance_m=0.05)
    assert found.verdict is Verdict.PASS
    assert "does not matter" in found.reason
    assert found.weighed[0].kind is Kind.PRISM


def test_wild_shots_neither_hide_a_cause_nor_are_part_of_it():
    design = stakes(30)
    shots = noisy(design + 0.034 * radial(design))
    shots[[4, 17]] += [0.4, -0.3]
    found = read(design, shots)
    assert found.kind is Kind.PRISM
    assert found.wild.tolist() == [4, 17]
    assert found.redundancy == 2 * 28 - 1
    assert "2 stakes off on their own" in found.reason


def test_satellite_shots_have_no_setup_and_still_show_a_shift():
    design = stakes(20)
    found = read(design, noisy(design + np.array([0.04, 0.0]), sigma=0.006), setups=[])
    assert found.kind is Kind.SHIFT


def test_sentences_speak_the_jobs_unit():
    design = stakes(25)
    found = read(design, noisy(design + 0.0305 * radial(design)), words=FEET)
    assert "0.10 ft too far" in found.reason


@settings(deadline=None, max_examples=25)
@given(st.floats(-math.pi, math.pi), st.floats(-1e6, 1e6), st.randoms())
def test_turning_moving_and_shuffling_the_job_changes_no_answer(turn, move, chance):
    design = stakes(20)
    shots = noisy(design + 0.03 * radial(design))
    here = read(design, shots)
    c, s = math.cos(turn), math.sin(turn)
    matrix = np.array([[c, -s], [s, c]])
    order = list(range(20))
    chance.shuffle(order)
    there = signature(
        ((design - AT) @ matrix + AT + move)[order],
        ((shots - AT) @ matrix + AT + move)[order],
        [setup(AT + move)],
        rng=np.random.default_rng(3),
    )
    assert there.kind is here.kind is Kind.PRISM
    assert there.causes[0].parameters == pytest.approx(
        here.causes[0].parameters, abs=1e-6
    )


@settings(deadline=None, max_examples=60)
@given(
    st.lists(
        st.tuples(*[st.floats(-1e3, 1e3, allow_subnormal=False)] * 4), max_size=14
    ),
    st.sampled_from([0.0, 1e7]),
    st.booleans(),
)
def test_no_shots_however_odd_give_an_error_or_a_missing_number(rows, far, alone):
    table = np.array(rows).reshape(-1, 4) + far
    setups = [] if alone else [setup((far, far), (far + 50.0, far))]
    found = signature(
        table[:, :2],
        table[:, 2:],
        setups,
        marks=[(far + 10.0, far), (far, far - 70.0)],
        from_grid_origin=True,
        rng=np.random.default_rng(1),
    )
    assert found.reason
    for cause in found.weighed:
        assert np.isfinite(cause.parameters).all()
        assert math.isfinite(cause.loss) and math.isfinite(cause.effect_m)
    assert sum(c.probability for c in found.weighed) == pytest.approx(
        1.0 if found.weighed else 0.0
    )


def test_too_few_shots_are_not_tested():
    design = stakes(3)
    found = read(design, design + 0.1)
    assert found.verdict is Verdict.NOT_TESTED
    assert "too few" in found.reason


def test_shots_that_cannot_determine_a_cause_leave_it_out():
    design = np.tile(AT + np.array([30.0, 40.0]), (6, 1))
    found = read(design, noisy(design))
    assert Kind.SEVERAL not in {c.kind for c in found.weighed}


def test_bad_input_is_named():
    with pytest.raises(WrongShape, match="design point"):
        read(stakes(5), stakes(6))
    with pytest.raises(NotFinite, match="shots"):
        read([(0, 0)], [(math.nan, 0)])
    with pytest.raises(OutOfRange, match="tolerance"):
        read(stakes(5), stakes(5), tolerance_m=0.0)
    with pytest.raises(CoincidentPoints, match="backsight"):
        setup((0, 0), (0, 0))
    with pytest.raises(OutOfRange, match="precision"):
        setup((0, 0), control_m=-1.0)
