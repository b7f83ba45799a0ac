"""Inverse, forward, crossings, offsets and areas answer, or say why they cannot."""

from __future__ import annotations

import math

import numpy as np
import pytest
import shapely
from hypothesis import assume, given
from hypothesis import strategies as st

from geometry.cogo import (
    angle_at,
    area,
    crossing_angle,
    direction_and_distance,
    directions_cross,
    distances_cross,
    forward,
    forwards,
    inverse,
    inverses,
    line_and_circle,
    lines_cross,
    offsets_from_line,
    points_off_line,
    segment_area,
)
from geometry.errors import (
    BadOutline,
    CoincidentPoints,
    GeometryError,
    NoIntersection,
    NotFinite,
    OutOfRange,
    WrongShape,
)
from geometry.units import Angle

ONE, TWO = (2000.0, 1000.0), (1811.082, 480.951)

coordinate = st.floats(-1000.0, 1000.0)
place = st.tuples(coordinate, coordinate)
azimuths = st.floats(0.0, 2 * math.pi)


def az(text: str) -> float:
    return Angle.parse_direction(text).radians


def apart(a: tuple[float, float], b: tuple[float, float]) -> float:
    return math.hypot(a[0] - b[0], a[1] - b[1])


def test_forward_reaches_the_printed_point() -> None:
    # Open Access Surveying Library, COGO chapter
    assert forward(ONE, az("200-00-00"), 552.360) == pytest.approx(TWO, abs=5e-4)


@pytest.mark.parametrize(
    ("first", "second", "distance", "point"),
    [
        ("253-26-15", "314-33-26", 573.754, (1450.051, 836.445)),
        ("140-54-25", "91-34-08", 690.811, (2435.613, 463.846)),
    ],
)
def test_two_directions_cross_at_the_printed_point(
    first: str, second: str, distance: float, point: tuple[float, float]
) -> None:
    # Open Access Surveying Library, COGO chapter
    at = directions_cross(ONE, az(first), TWO, az(second))
    assert at.point_m == pytest.approx(point, abs=1e-3)
    assert at.first_m == pytest.approx(distance, abs=1e-3)


def test_the_inverse_between_the_two_crossings_is_as_printed() -> None:
    # Open Access Surveying Library, COGO chapter
    line = inverse((1450.051, 836.445), (2435.613, 463.846))
    assert line.distance_m == pytest.approx(1053.642, abs=1e-3)


def test_a_line_of_sight_from_two_marks() -> None:
    # inputs: Open Access Surveying Library, COGO chapter; answer recomputed
    at = directions_cross(
        (2255.90, 614.80), az("117-22-40"), (2517.03, 791.53), az("198-10-30")
    )
    assert at.point_m == pytest.approx((2429.496, 524.902), abs=6e-4)
    assert at.first_m == pytest.approx(195.492, abs=6e-4)
    assert at.second_m == pytest.approx(280.629, abs=6e-4)


def test_two_circles_cross_on_either_side() -> None:
    # by x = (300² - 250² + 400²) / 800
    left, right = distances_cross((1000.0, 1000.0), 300.0, (1400.0, 1000.0), 250.0)
    assert left.point_m == pytest.approx((1234.375, 1187.265), abs=5e-4)
    assert right.point_m == pytest.approx((1234.375, 812.735), abs=5e-4)


def test_latitude_and_departure_of_a_bearing() -> None:
    # NAVEDTRA 14070 course N 15°30' E 725 ft; recomputed 698.63
    north = forward((0.0, 0.0), az("N 15°30' E"), 725.0)[1]
    assert north == pytest.approx(698.63, abs=5e-3)


def test_parallel_lines_do_not_meet() -> None:
    with pytest.raises(NoIntersection, match="parallel"):
        directions_cross((0, 0), 0.3, (10, 0), 0.3 + math.pi)
    with pytest.raises(NoIntersection, match="parallel"):
        lines_cross((0, 0), (1, 1), (5, 0), (6, 1))


def test_a_miss_is_told_in_metres() -> None:
    with pytest.raises(NoIntersection, match=r"2\.0000 m"):
        distances_cross((0, 0), 3.0, (10, 0), 5.0)
    with pytest.raises(NoIntersection, match=r"4\.0000 m too long"):
        distances_cross((0, 0), 10.0, (1, 0), 5.0)
    with pytest.raises(NoIntersection, match=r"1\.0000 m"):
        direction_and_distance((0, 0), 0.0, (5, 5), 4.0)


def test_touching_circles_and_lines_have_one_point() -> None:
    (only,) = distances_cross((0, 0), 4.0, (10, 0), 6.0)
    assert only.point_m == pytest.approx((4.0, 0.0))
    assert only.angle_rad == 0.0
    (only,) = line_and_circle((0, 0), (10, 0), (3, 2), 2.0)
    assert only.point_m == pytest.approx((3.0, 0.0))


def test_points_that_must_differ_are_told_apart() -> None:
    for call in (
        lambda: inverse((1, 1), (1, 1)),
        lambda: inverses([(0, 0), (1, 1)], [(1, 0), (1, 1)]),
        lambda: directions_cross((1, 1), 0.0, (1, 1), 1.0),
        lambda: lines_cross((1, 1), (1, 1), (2, 2), (3, 2)),
        lambda: distances_cross((1, 1), 2.0, (1, 1), 2.0),
        lambda: offsets_from_line([(0, 0)], (1, 1), (1, 1)),
        lambda: area([(0, 0), (0, 0), (1, 0), (1, 1)]),
    ):
        with pytest.raises(CoincidentPoints):
            call()


@pytest.mark.parametrize("bad", [math.nan, math.inf, -math.inf])
def test_what_is_not_finite_is_refused(bad: float) -> None:
    for call in (
        lambda: inverse((bad, 0), (1, 1)),
        lambda: forward((0, 0), bad, 1.0),
        lambda: forwards((0, 0), [bad], [1.0]),
        lambda: directions_cross((0, 0), bad, (1, 1), 1.0),
        lambda: direction_and_distance((0, 0), 0.0, (1, 1), bad),
        lambda: distances_cross((0, 0), bad, (1, 1), 1.0),
        lambda: offsets_from_line([(bad, 0)], (0, 0), (1, 1)),
        lambda: points_off_line((0, 0), (1, 1), [bad], [0]),
        lambda: area([(0, 0), (bad, 0), (1, 1)]),
    ):
        with pytest.raises(NotFinite):
            call()


def test_lists_of_different_length_are_refused() -> None:
    for call in (
        lambda: inverses([(0, 0)], [(1, 1), (2, 2)]),
        lambda: forwards((0, 0), [0.0], [1.0, 2.0]),
        lambda: points_off_line((0, 0), (1, 1), [1.0], [1.0, 2.0]),
        lambda: area([(0, 0), (1, 0), (1, 1)], [0.0]),
    ):
        with pytest.raises(WrongShape):
            call()


def test_the_angle_at_a_mark_is_turned_clockwise() -> None:
    assert angle_at((0, 0), (5, 0), (0, 5)) == pytest.approx(1.5 * math.pi)
    assert crossing_angle((0, 0), (10, 0), (5, 5)) == pytest.approx(math.pi / 2)


@given(place, place)
def test_forward_undoes_inverse(a: tuple[float, float], b: tuple[float, float]) -> None:
    assume(apart(a, b) > 1e-6)
    line = inverse(a, b)
    assert forward(a, line.azimuth_rad, line.distance_m) == pytest.approx(b, abs=1e-9)
    many = inverses([a, b], [b, a])
    assert many.azimuth_rad[0] == pytest.approx(line.azimuth_rad, abs=1e-14)
    assert forwards(a, many.azimuth_rad[:1], many.distance_m[:1])[0] == pytest.approx(
        b, abs=1e-9
    )


@given(place, azimuths, place, azimuths)
def test_a_crossing_lies_on_both_lines(
    a: tuple[float, float], first: float, b: tuple[float, float], second: float
) -> None:
    assume(apart(a, b) > 1e-3)
    assume(abs(math.sin(first - second)) > 1e-3)
    at = directions_cross(a, first, b, second)
    for start, azimuth, distance in ((a, first, at.first_m), (b, second, at.second_m)):
        assert forward(start, azimuth, distance) == pytest.approx(at.point_m, abs=1e-5)
    swapped = directions_cross(b, second, a, first)
    assert swapped.point_m == pytest.approx(at.point_m, abs=1e-5)


@given(place, place, place, st.floats(0, 2 * math.pi), place)
def test_swung_distances_find_their_point_again_wherever_it_lies(
    a: tuple[float, float],
    b: tuple[float, float],
    p: tuple[float, float],
    turn: float,
    shift: tuple[float, float],
) -> None:
    assume(min(apart(a, b), apart(p, a), apart(p, b)) > 1.0)
    assume(crossing_angle(a, b, p) > 0.05)
    c, s = math.cos(turn), math.sin(turn)
    moved = np.array([a, b, p]) @ np.array([[c, -s], [s, c]]) + np.array(shift) * 1e3
    found = distances_cross(moved[0], apart(a, p), moved[1], apart(b, p))
    assert min(math.hypot(*(f.point_m - moved[2])) for f in found) < 1e-6
    middle = found[0].point_m
    assert offsets_from_line([middle], moved[0], moved[1]).right_m[0] < 0


@given(place, azimuths, place, st.floats(1.0, 2000.0))
def test_a_line_meets_a_circle_at_its_radius(
    a: tuple[float, float], azimuth: float, c: tuple[float, float], radius: float
) -> None:
    try:
        found = direction_and_distance(a, azimuth, c, radius)
    except NoIntersection:
        end = forward(a, azimuth, 1.0)
        right = offsets_from_line([c], a, end).right_m[0]
        assert abs(right) > radius * (1 - 1e-9)
        return
    for at in found:
        assert math.hypot(*(at.point_m - c)) == pytest.approx(radius, rel=1e-6)
    assert [f.first_m for f in found] == sorted(f.first_m for f in found)


@given(place, place, st.lists(st.tuples(coordinate, coordinate), min_size=1))
def test_offsets_lead_back_to_the_points(
    a: tuple[float, float], b: tuple[float, float], points: list[tuple[float, float]]
) -> None:
    assume(apart(a, b) > 1e-2)
    at = offsets_from_line(points, a, b)
    back = points_off_line(a, b, at.along_m, at.right_m)
    assert back == pytest.approx(np.array(points), abs=1e-8)
    assert np.hypot(*(at.feet_m - back).T) == pytest.approx(
        np.abs(at.right_m), abs=1e-8
    )


def test_the_shoelace_example() -> None:
    # Wikipedia, shoelace formula
    figure = area([(1, 6), (3, 1), (7, 2), (4, 4), (8, 5)])
    assert figure.area_m2 == pytest.approx(16.5)
    assert not figure.clockwise


def test_the_area_of_balanced_courses() -> None:
    # inputs: Handbook of Civil Engineering Calculations; area recomputed
    latitudes = [-132.3, 9.6, 97.9, 161.9, -35.3, -101.8]
    departures = [-135.6, -77.5, -198.5, 143.6, 246.7, 21.3]
    corners = np.cumsum(np.column_stack([departures, latitudes]), axis=0)
    assert area(corners).area_m2 == pytest.approx(72106.19, abs=0.01)


@pytest.mark.parametrize(
    "outline",
    [
        [],
        [(0, 0), (1, 1)],
        [(0, 0), (1, 1), (2, 2)],
        [(0, 0), (2, 2), (2, 0), (0, 2)],
        [(0, 0), (1, 0), (0, 0)],
    ],
)
def test_what_encloses_nothing_or_crosses_itself_has_no_area(
    outline: list[tuple[float, float]],
) -> None:
    with pytest.raises(BadOutline):
        area(outline)


def test_arcs_add_and_take_away_their_segments() -> None:
    square = [(0, 0), (0, 2), (2, 2), (2, 0)]
    bulging = area(square, [1.0, 0, 0, 0])
    assert bulging.area_m2 == pytest.approx(4 + math.pi / 2)
    assert bulging.perimeter_m == pytest.approx(6 + math.pi)
    assert area(square, [-1.0, 0, 0, 0]).area_m2 == pytest.approx(4 - math.pi / 2)
    with pytest.raises(OutOfRange, match="half its chord"):
        segment_area(3.0, 1.0)


@given(
    st.lists(
        st.tuples(st.floats(5, 100), st.floats(0.1, 1.0)), min_size=3, max_size=12
    ),
    st.floats(-1e7, 1e7),
)
def test_area_and_centroid_agree_with_shapely_far_from_the_origin(
    spokes: list[tuple[float, float]], shift: float
) -> None:
    turns = np.cumsum([turn for _, turn in spokes])
    turns = turns / turns[-1] * 2 * math.pi
    assume(float(np.diff(np.concatenate([[0.0], turns])).max()) < math.pi)
    radii = np.array([radius for radius, _ in spokes])
    star = np.column_stack([np.sin(turns), np.cos(turns)]) * radii[:, None]
    figure = area(star + shift)
    reference = shapely.Polygon(star)
    assert figure.area_m2 == pytest.approx(reference.area, rel=1e-6)
    assert figure.clockwise
    assert figure.centroid_m - shift == pytest.approx(
        reference.centroid.coords[0], abs=1e-5
    )
    assert area(star[::-1]).area_m2 == pytest.approx(reference.area)


anything = st.floats(allow_nan=True, allow_infinity=True)


@given(st.tuples(anything, anything), anything, st.tuples(anything, anything), anything)
def test_any_numbers_give_finite_answers_or_a_named_refusal(
    a: tuple[float, float], x: float, b: tuple[float, float], y: float
) -> None:
    for call in (
        lambda: directions_cross(a, x, b, y).point_m,
        lambda: [c.point_m for c in distances_cross(a, x, b, y)],
        lambda: [c.point_m for c in direction_and_distance(a, x, b, y)],
        lambda: [c.point_m for c in line_and_circle(a, (x, y), b, x)],
        lambda: forward(a, x, y),
        lambda: offsets_from_line([(x, y)], a, b).feet_m,
        lambda: area([a, b, (x, y)]).area_m2,
    ):
        try:
            answer = call()
        except GeometryError as refusal:
            assert refusal.what
        else:
            assert np.isfinite(np.asarray(answer)).all()


def test_a_course_has_the_latitude_its_bearing_gives() -> None:
    # The course N 15°30' E, 725.32 ft of a public surveying manual, whose traverse
    # table comes to 698.59 for the first 725 ft; the cosine gives 698.63 for them.
    end = forward((0.0, 0.0), math.radians(15.5), 725.32)
    assert end[1] == pytest.approx(698.94, abs=0.01)
    assert end[0] == pytest.approx(725.32 * math.sin(math.radians(15.5)))
