"""Height signatures: rod, benchmark, vertical angle, curvature, tilt, sign, surface."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from geometry.errors import NotFinite, WrongShape
from geometry.signature import (
    FEET,
    Kind,
    Role,
    explain_height,
    height_signature,
    setup,
)
from geometry.signature.one_stake import Slip
from geometry.verdicts import Verdict

AT = np.array([5e5, 4.2e6])
SECOND = math.radians(1 / 3600)


def where(count=30, reach=120.0, seed=1):
    return AT + np.random.default_rng(seed).uniform(-reach, reach, (count, 2))


def noise(count=30, sigma=0.003, seed=2):
    return np.random.default_rng(seed).normal(0, sigma, count)


def read(points, dz, **options):
    options.setdefault("setups", [setup(AT)])
    return height_signature(points, dz, **options)


def distance(points):
    return np.hypot(*(points - AT).T)


def test_honest_heights_show_nothing():
    found = read(where(), noise())
    assert found.verdict is Verdict.PASS
    assert found.would_see_m is not None


def test_a_constant_names_the_round_step_it_agrees_with():
    found = read(where(), 0.1 + noise())
    assert (found.verdict, found.kind) == (Verdict.FAIL, Kind.HEIGHT_CONSTANT)
    assert "close to 100 mm" in found.reason
    in_feet = read(where(), 0.1524 + noise(), words=FEET)
    assert "0.50 ft high, close to 0.50 ft," in in_feet.reason


def test_a_constant_that_is_no_round_step_is_given_no_such_name():
    assert "close to" not in read(where(), 0.073 + noise()).reason


def test_only_the_shots_with_one_rod_setting_are_off():
    rods = ["1.50", "2.00"] * 15
    dz = np.where(np.array(rods) == "2.00", -0.05, 0.0) + noise()
    found = read(where(), dz, rods=rods)
    assert found.kind is Kind.ROD
    assert "rod setting 2.00 are off: 51 mm low" in found.reason


def test_from_some_shot_on_everything_is_low():
    dz = np.where(np.arange(30) >= 18, -0.04, 0.0) + noise()
    found = read(where(), dz)
    assert found.kind is Kind.HEIGHT_FROM
    assert found.causes[0].about == "19"
    assert "From shot 19 on" in found.reason


def test_a_vertical_angle_grows_with_distance():
    points = where()
    found = read(points, 60 * SECOND * distance(points) + noise())
    assert found.kind is Kind.HEIGHT_ANGLE
    assert found.causes[0].parameters[0] / SECOND == pytest.approx(60, abs=10)


def test_curvature_left_out_shows_at_long_distances():
    # 0.0675 m at 1 km (k 0.14), as printed in engineering texts
    points = where(40, 900.0)
    fell = -0.0675e-6 * distance(points) ** 2
    found = read(points, fell + noise(40), setups=[setup(AT, direction_rad=SECOND)])
    assert found.kind is Kind.CURVATURE
    staked = setup(AT, role=Role.STAKED, direction_rad=SECOND)
    assert read(points, noise(40) - fell, setups=[staked]).kind is Kind.CURVATURE


def test_a_localisation_tilt_is_a_plane():
    points = where(40, 400.0)
    dz = (points - AT) @ [80e-6, 0.0] + noise(40)
    found = read(points, dz, setups=[])
    assert found.kind is Kind.TILT
    assert "78 ppm up to the east" in found.reason


def test_cut_taken_for_fill_is_off_by_twice_the_cut():
    cuts = np.random.default_rng(4).uniform(-1.2, 1.2, 30)
    found = read(where(), 2 * cuts + noise(), cuts_m=cuts)
    assert found.kind is Kind.SIGN


def test_another_reference_surface_wins_over_a_free_constant():
    found = read(where(), -0.15 + noise(), references={"the flow line": -0.15})
    assert found.kind is Kind.REFERENCE
    assert "fit the flow line instead" in found.reason
    assert "each rod setting" in found.next_shot.sentence
    varying = np.linspace(0.1, 0.3, 30)
    under = read(where(), varying + noise(), references={"the slab": varying})
    assert under.kind is Kind.REFERENCE


def test_at_one_distance_angle_and_constant_are_told_as_a_set_with_the_next_shot():
    azimuth = np.linspace(0, 6, 12)
    points = AT + 80 * np.column_stack([np.sin(azimuth), np.cos(azimuth)])
    found = read(points, 0.03 + noise(12), setups=[setup(AT)])
    kinds = {cause.kind for cause in found.causes}
    assert found.verdict is Verdict.AMBIGUOUS
    assert {Kind.HEIGHT_CONSTANT, Kind.HEIGHT_ANGLE} <= kinds
    assert "10 m" in found.next_shot.sentence or found.next_shot.decides


def test_a_rod_that_was_used_for_the_second_half_cannot_be_told_from_a_change():
    rods = ["1.50"] * 15 + ["2.00"] * 15
    dz = np.where(np.arange(30) >= 15, -0.05, 0.0) + noise()
    found = read(where(), dz, rods=rods)
    assert found.causes[0].kind is Kind.ROD
    if found.verdict is Verdict.AMBIGUOUS:
        assert "each rod setting" in found.next_shot.sentence


def test_without_height_effects_many_shots_prove_what_only_is_the_benchmarks_doubt():
    points = where(200)
    dz = 0.002 + noise(200)
    bare = read(points, dz, height_m=0.0, index_rad=0.0, tolerance_m=1e-4)
    assert bare.verdict is not Verdict.PASS
    assert read(points, dz, tolerance_m=1e-4).verdict is Verdict.PASS


@settings(deadline=None, max_examples=60)
@given(
    st.lists(
        st.tuples(*[st.floats(-1e3, 1e3, allow_subnormal=False)] * 3), max_size=14
    ),
    st.sampled_from([0.0, 1e7]),
)
def test_no_heights_however_odd_give_an_error_or_a_missing_number(rows, far):
    table = np.array(rows).reshape(-1, 3)
    found = height_signature(
        table[:, :2] + far,
        table[:, 2],
        [setup((far, far))],
        rods=["a", "b"] * (len(rows) // 2) + ["a"] * (len(rows) % 2),
    )
    assert found.reason
    for cause in found.weighed:
        assert np.isfinite(cause.parameters).all() and math.isfinite(cause.effect_m)


def test_bad_heights_are_named():
    with pytest.raises(WrongShape, match="difference"):
        read(where(5), noise(6))
    with pytest.raises(WrongShape, match="rod setting"):
        read(where(5), noise(5), rods=["a"])
    with pytest.raises(NotFinite, match="differences"):
        read(where(1), [math.nan])
    assert read(where(2), noise(2)).verdict is Verdict.NOT_TESTED


def test_one_height_is_explained_by_what_chance_would_seldom_offer():
    found = explain_height(
        0.27, typed="103.47", references={"top of curb": 0.15}, cut_m=0.9
    )
    assert found.hints[0].slip is Slip.EXCHANGED
    assert found.verdict in (Verdict.FAIL, Verdict.AMBIGUOUS)
    curb = explain_height(0.151, references={"top of curb": 0.15})
    assert (curb.verdict, curb.hints[0].slip) == (Verdict.FAIL, Slip.REFERENCE)
    sign = explain_height(-1.84, cut_m=-0.921, step_m=0.3048)
    assert sign.hints[0].slip is Slip.SIGN
    assert explain_height(0.073).verdict is Verdict.UNDECIDED
    assert explain_height(0.004).verdict is Verdict.PASS
