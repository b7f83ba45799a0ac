"""Offset stakes of a building: where they go, which may be one, what proves them."""

from __future__ import annotations

import itertools
import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from shapely.geometry import Point, Polygon

from geometry.errors import BadOutline, GeometryError
from geometry.layout import (
    Soil,
    Status,
    board_nails,
    close_dimensions,
    conflicts,
    diagonal_difference,
    enclosing_rectangle,
    frame_set,
    minimal_set,
    plan_offsets,
    principal_direction,
    rank_checks,
    robust_set,
    setback_clearance,
)
from geometry.units import Length, Unit
from geometry.verdicts import Verdict

L_SHAPE = [
    (0.0, 0.0),
    (24.0, 0.0),
    (24.0, 10.0),
    (12.0, 10.0),
    (12.0, 18.0),
    (0.0, 18.0),
]


def turned(points, degrees: float, shift=(0.0, 0.0)) -> list[tuple[float, float]]:
    a = math.radians(degrees)
    c, s = math.cos(a), math.sin(a)
    return [(c * e + s * n + shift[0], -s * e + c * n + shift[1]) for e, n in points]


def edges(points) -> np.ndarray:
    p = np.asarray(points)
    return np.stack([p, np.roll(p, -1, axis=0)], axis=1)


def test_every_wall_line_of_an_l_shape_gets_a_stake_at_both_ends() -> None:
    plan = plan_offsets(L_SHAPE, offset_m=2.0, step_m=1.0, depth_m=1.5, soil=Soil.B)
    assert len(plan.lines) == 6
    assert len(plan.ends) == 12
    assert not plan.no_room


def test_one_stake_of_an_l_shape_can_serve_two_lines() -> None:
    """12 line ends, one shared: 11 stakes (matching identity of Gallai, from memory)."""
    plan = plan_offsets(L_SHAPE, offset_m=1.0, step_m=1.0)
    assert len(plan.stakes) == 12
    fewest = minimal_set(plan)
    assert len(fewest.stakes) == 11
    [shared] = [s for s in fewest.stakes if s.also]
    assert (round(shared.e_m, 6), round(shared.n_m, 6)) == (24.0, 18.0)


@given(st.floats(-180, 180), st.floats(-1e6, 1e6), st.floats(-1e6, 1e6))
def test_turning_and_shifting_a_building_turns_and_shifts_its_stakes(
    degrees: float, e: float, n: float
) -> None:
    rules = {"offset_m": 2.0, "step_m": 1.0, "depth_m": 1.5, "soil": Soil.B}
    still = plan_offsets(L_SHAPE, **rules)
    moved = plan_offsets(turned(L_SHAPE, degrees, (e, n)), **rules)
    wanted = turned([(s.e_m, s.n_m) for s in still.stakes], degrees, (e, n))
    found = [(s.e_m, s.n_m) for s in moved.stakes]
    assert len(found) == len(wanted)
    for place in wanted:
        assert min(math.dist(place, other) for other in found) < 1e-5


@given(st.floats(0.0, 4.0), st.sampled_from(list(Soil)), st.floats(0.5, 4.0))
def test_no_stake_stands_inside_the_limit_or_nearer_than_its_clearance(
    depth: float, soil: Soil, offset: float
) -> None:
    plan = plan_offsets(L_SHAPE, offset_m=offset, step_m=0.5, depth_m=depth, soil=soil)
    dig = plan.excavation.polygon
    for stake in plan.stakes:
        assert dig.distance(Point(stake.e_m, stake.n_m)) >= 0.6 - 1e-6


def test_without_room_the_plan_says_so_and_offers_something_else() -> None:
    lot = [(-20, -20), (25, -20), (25, 40), (-20, 40)]
    plan = plan_offsets(
        L_SHAPE, offset_m=1.0, step_m=1.0, depth_m=3.0, soil=Soil.C, property_line=lot
    )
    assert plan.no_room
    for end in plan.no_room:
        assert "No room" in end.reason
        assert end.fallbacks
        assert end.status is Status.NO_ROOM


def test_offsets_are_whole_steps_and_the_odd_ones_are_flagged() -> None:
    plan = plan_offsets(L_SHAPE, offset_m=1.3, step_m=1.0, depth_m=2.0, soil=Soil.A)
    for stake in plan.stakes:
        assert abs(stake.offset_m - round(stake.offset_m)) < 1e-9
        assert stake.differs == (abs(stake.offset_m - plan.offset_m) > 1e-6)


@pytest.mark.parametrize("depth, soil", [(0.0, Soil.B), (1.5, Soil.B), (3.0, Soil.C)])
def test_the_excavation_of_the_l_shape_has_the_area_of_its_slopes(
    depth: float, soil: Soil
) -> None:
    """Slopes 1:1 and 1 1/2:1 of 29 CFR 1926 Subpart P, table B-1; areas by hand."""
    dig = plan_offsets(
        L_SHAPE, offset_m=1.0, step_m=1.0, depth_m=depth, soil=soil, workspace_m=0.6
    ).excavation
    reach = 0.6 + depth * {Soil.B: 1.0, Soil.C: 1.5}[soil]
    box = (24 + 2 * reach) * (18 + 2 * reach) - 12 * 8
    assert dig.polygon.area == pytest.approx(box, abs=1e-6)


@pytest.mark.parametrize(
    "soil, reach_ft", [(Soil.A, 7.5), (Soil.B, 10.0), (Soil.C, 15.0)]
)
def test_ten_feet_deep_reaches_out_by_the_published_ratio(
    soil: Soil, reach_ft: float
) -> None:
    """29 CFR 1926 Subpart P App. B, table B-1: 3/4, 1 and 1 1/2 to 1."""
    foot = 0.3048
    plan = plan_offsets(
        L_SHAPE,
        offset_m=1.0,
        step_m=1.0,
        depth_m=10 * foot,
        soil=soil,
        workspace_m=0.0,
    )
    assert plan.excavation.reach_m == pytest.approx(reach_ft * foot, abs=1e-9)


def test_soil_nobody_classified_is_assumed_at_the_flattest_slope() -> None:
    plan = plan_offsets(L_SHAPE, offset_m=1.0, step_m=1.0, depth_m=2.0)
    assert any("assumed" in issue.sentence.lower() for issue in plan.issues)


def test_the_enclosing_rectangle_follows_the_walls() -> None:
    outline = turned(L_SHAPE, 23.4)
    direction = principal_direction(edges(outline))
    assert direction.coherence == pytest.approx(1.0, abs=1e-9)
    box = enclosing_rectangle(outline, direction.azimuth_rad)
    sides = sorted(
        math.dist(a, b)
        for a, b in zip(box.corners, box.corners[1:] + box.corners[:1], strict=True)
    )
    assert sides == pytest.approx([18, 18, 24, 24], abs=1e-9)


def test_the_frame_has_four_corners_an_offset_outside() -> None:
    frame = frame_set(plan_offsets(L_SHAPE, offset_m=2.0, step_m=1.0))
    places = {(round(s.e_m, 6), round(s.n_m, 6)) for s in frame.stakes}
    assert places == {(-2, -2), (26, -2), (26, 20), (-2, 20)}


def test_a_spare_stands_on_every_line_with_room() -> None:
    plan = plan_offsets(L_SHAPE, offset_m=2.0, step_m=1.0)
    spares = robust_set(plan)
    assert len(spares.stakes) == len(plan.stakes) + len(plan.lines)


@pytest.mark.parametrize(
    "outline",
    [
        [(0, 0), (10, 10), (10, 0), (0, 10)],
        [(0, 0), (10, 0)],
        [(0, 0), (10, 0), (20, 0)],
        [(0, 0), (10, 0), (10, float("nan")), (0, 10)],
        [],
    ],
)
def test_a_bad_footprint_is_named(outline) -> None:
    with pytest.raises(GeometryError):
        plan_offsets(outline, offset_m=1.0, step_m=1.0)


def test_a_doubled_closing_corner_is_taken_as_closing() -> None:
    plan = plan_offsets([*L_SHAPE, L_SHAPE[0]], offset_m=1.0, step_m=1.0)
    assert len(plan.lines) == 6


def test_enough_checks_see_every_stake_and_more_see_more() -> None:
    plan = plan_offsets(L_SHAPE, offset_m=2.0, step_m=1.0)
    places = [(s.e_m, s.n_m) for s in plan.stakes]
    ranked = rank_checks(places, count=30)
    worst = [check.worst_mdb_m for check in ranked]
    assert math.isinf(worst[5])
    assert worst[29] < 0.03
    assert all(b <= a + 1e-12 for a, b in itertools.pairwise(worst))
    for check in ranked:
        length = math.dist(places[check.first], places[check.second])
        assert check.length_m == pytest.approx(length)


def test_the_local_redundancy_is_that_of_the_distance_alone() -> None:
    """q / (q + s²) with q = 2 · 4² and s = 1.5 (mm); definition of Baarda, from memory."""
    [check] = rank_checks([(0, 0), (30, 40)], count=1)
    assert check.redundancy == pytest.approx(32 / (32 + 2.25))
    assert check.predicted_sd_m == pytest.approx(math.sqrt(32) / 1000)


def test_a_milliradian_of_skew_opens_the_diagonals_by_its_formula() -> None:
    """2ab e / D for 24 x 18 m is 28.8 mm; exact diagonals of a sheared rectangle agree."""
    shear = 0.001
    long = math.hypot(24 + 18 * math.sin(shear), 18 * math.cos(shear))
    short = math.hypot(24 - 18 * math.sin(shear), 18 * math.cos(shear))
    assert diagonal_difference(24, 18, shear) == pytest.approx(0.0288, abs=1e-7)
    assert long - short == pytest.approx(0.0288, abs=1e-6)


def test_dimensions_that_do_not_close_are_named_with_the_difference() -> None:
    def feet(*texts: str) -> list[Length]:
        return [Length.parse(text, Unit.FOOT) for text in texts]

    parts, [overall] = feet("12'-7 5/16\"", "10'-4 11/16\""), feet("23'")
    assert close_dimensions("A", parts, overall).closes
    [bad] = conflicts({"A": (parts, overall), "B": (parts, feet("23.5")[0])})
    assert bad.sentence.startswith("B: the parts add up to 23 ft, 0.5 ft less")


def test_a_setback_is_judged_with_the_layouts_uncertainty() -> None:
    lot = [(0, 0), (40, 0), (40, 30), (0, 30)]
    house = [(5.01, 6), (30, 6), (30, 24), (5.01, 24)]
    assert setback_clearance(house, lot, 5.0, layout_sd_m=0.002).verdict is Verdict.PASS
    assert (
        setback_clearance(house, lot, 5.0, layout_sd_m=0.01).verdict
        is Verdict.UNDECIDED
    )
    assert setback_clearance(house, lot, 5.1, layout_sd_m=0.01).verdict is Verdict.FAIL


def test_the_rotation_that_uses_up_a_setback_brings_a_corner_to_it() -> None:
    lot = [(0, 0), (40, 0), (40, 30), (0, 30)]
    house = [(6, 6), (30, 6), (30, 24), (6, 24)]
    found = setback_clearance(house, lot, 5.5)
    assert found.uses_up_rad is not None
    middle = Polygon(house).centroid
    at = [
        turned(
            [(e - middle.x, n - middle.y) for e, n in house],
            sign * math.degrees(found.uses_up_rad),
            (middle.x, middle.y),
        )
        for sign in (1, -1)
    ]
    nearest = min(Polygon(h).distance(Polygon(lot).exterior) for h in at)
    assert nearest == pytest.approx(5.5, abs=1e-6)


def test_a_building_over_the_line_is_told_apart_from_one_too_near() -> None:
    lot = [(0, 0), (40, 0), (40, 30), (0, 30)]
    over = setback_clearance([(-1, 6), (30, 6), (30, 24), (-1, 24)], lot, 5.0)
    assert over.clearance_m == pytest.approx(-1.0)
    assert over.verdict is Verdict.FAIL
    assert "over the property line" in over.reason


def test_nails_stand_where_the_strings_cross_the_board() -> None:
    plan = plan_offsets(L_SHAPE, offset_m=2.0, step_m=1.0)
    board = board_nails("south", [(-3, -3), (27, -3)], plan.lines)
    assert [round(nail.along_m, 6) for nail in board.nails] == [3.0, 15.0, 27.0]
    short = board_nails("west part", [(-3, -3), (5, -3)], plan.lines)
    assert len(short.nails) == 1
    assert len(short.missed) == 2


def test_a_board_without_length_is_refused() -> None:
    plan = plan_offsets(L_SHAPE, offset_m=2.0, step_m=1.0)
    with pytest.raises(GeometryError):
        board_nails("point", [(0, 0), (0, 0)], plan.lines)


def test_a_property_line_that_crosses_itself_is_named() -> None:
    with pytest.raises(BadOutline):
        setback_clearance(L_SHAPE, [(0, 0), (9, 9), (9, 0), (0, 9)], 1.0)


def test_a_day_old_cut_in_the_best_soil_may_be_steeper_to_twelve_feet() -> None:
    """29 CFR 1926 Subpart P App. B, table B-1 note: 1/2 to 1, at most 12 ft."""
    foot = 0.3048
    words = {"offset_m": 1.0, "step_m": 1.0, "workspace_m": 0.0}
    shallow = plan_offsets(L_SHAPE, depth_m=12 * foot, soil=Soil.A_SHORT_TERM, **words)
    assert shallow.excavation.reach_m == pytest.approx(6 * foot, abs=1e-9)
    deeper = plan_offsets(L_SHAPE, depth_m=13 * foot, soil=Soil.A_SHORT_TERM, **words)
    assert any("12 ft" in issue.sentence for issue in deeper.issues)
