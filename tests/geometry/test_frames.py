"""Grid and ground are told apart, crossed over once, and never mixed."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.errors import GeometryError, MixedFrames, OutOfRange, WrongShape
from geometry.frames import (
    GridFrame,
    GroundFrame,
    combined_factor,
    elevation_factor,
    grid_azimuth,
    second_term,
)

GRID = GridFrame("Invented zone")
SITE = GroundFrame("Site", GRID, 0.9999029, (500_000.0, 4_200_000.0), (1e4, 2e4))
FT = 0.3048


def test_the_combined_factor_of_the_state_plane_manual() -> None:
    # NOAA Manual NOS NGS 5 section 4.4: k 1.0000450, H 865 ft, N -100 ft
    height, radius = 865.0 - 100.0, 20_906_000.0
    assert elevation_factor(height, radius) == pytest.approx(0.9999634, abs=5e-8)
    factor = combined_factor(1.0000450, height, radius)
    assert factor == pytest.approx(1.0000084, abs=5e-8)
    assert elevation_factor(1000.0, radius) == pytest.approx(0.999952169, abs=5e-10)


@pytest.mark.parametrize(
    ("ground", "grid"),
    [
        (4805.468, 4805.508),
        (3963.694, 3963.727),
        (4966.083, 4966.125),
        (3501.223, 3501.252),
        (4466.935, 4466.973),
    ],
)
def test_ground_distances_go_to_the_grid_as_the_manual_has_them(
    ground: float, grid: float
) -> None:
    # NOAA Manual NOS NGS 5 section 4.4
    factor = combined_factor(1.0000450, 765.0, 20_906_000.0)
    site = GroundFrame("Manual", GRID, factor, (0.0, 0.0), (1e5, 1e5))
    there = site.distance_to_grid(site.distance(ground))
    assert there.metres == pytest.approx(grid, abs=6e-4)


def test_300_m_of_height_and_a_scale_of_0_99995_are_97_ppm() -> None:
    # R 6,372,000 m, NOAA Manual NOS NGS 5; recomputed
    factor = combined_factor(0.99995, 300.0)
    assert (factor - 1) * 1e6 == pytest.approx(-97.08, abs=0.005)


def test_the_second_term_turns_a_geodetic_azimuth_into_a_grid_one() -> None:
    # TxDOT manual, second term calculation
    second = second_term(-391_000 * FT, 19_000 * FT)
    assert math.degrees(second) * 3600 == pytest.approx(-1.753, abs=0.003)
    geodetic = math.radians(110 + 27 / 60 + 32.5 / 3600)
    convergence = math.radians(3 + 1 / 60 + 39.5 / 3600)
    grid = math.degrees(grid_azimuth(geodetic, convergence, second))
    assert grid == pytest.approx(107 + 25 / 60 + 51.2 / 3600, abs=0.06 / 3600)


def test_a_factor_in_parts_per_million_is_refused() -> None:
    for bad in (-97.08, 0.0, 1.5, math.nan, math.inf):
        with pytest.raises(GeometryError):
            combined_factor(bad, 0.0)
        with pytest.raises(GeometryError):
            GroundFrame("Site", GRID, bad, (0.0, 0.0), (0.0, 0.0))
    with pytest.raises(OutOfRange, match="height"):
        combined_factor(1.0, 1e6)


def test_grid_and_ground_cannot_be_put_together() -> None:
    grid, ground = GRID.points([(5e5, 4.2e6)]), SITE.points([(1e4, 2e4)])
    other = GridFrame("Another zone").points([(5e5, 4.2e6)])
    with pytest.raises(MixedFrames, match="Invented zone"):
        SITE.from_grid(ground)  # type: ignore[arg-type]
    with pytest.raises(MixedFrames, match="Site"):
        SITE.to_grid(grid)  # type: ignore[arg-type]
    with pytest.raises(MixedFrames, match="Another zone"):
        SITE.from_grid(other)
    with pytest.raises(MixedFrames):
        grid.distances_to(ground)  # type: ignore[arg-type]
    with pytest.raises(MixedFrames):
        SITE.distance(1.0).plus(GRID.distance(1.0))  # type: ignore[arg-type]
    with pytest.raises(MixedFrames):
        SITE.distance_to_grid(GRID.distance(1.0))  # type: ignore[arg-type]


def test_points_of_a_frame_are_not_taken_for_bare_numbers() -> None:
    with pytest.raises(MixedFrames, match="bare numbers"):
        np.asarray(SITE.points([(1.0, 2.0)]), dtype=float)


def test_ground_coordinates_that_look_like_grid_are_told() -> None:
    scaled_in_place = GroundFrame("Twin", GRID, 0.9999, (0.0, 0.0), (0.0, 0.0))
    assert scaled_in_place.easily_confused
    assert not SITE.easily_confused


def test_a_hundred_metres_on_the_ground_are_9_7_mm_shorter_on_the_grid() -> None:
    a, b = SITE.points([(1e4, 2e4)]), SITE.points([(1e4 + 100.0, 2e4)])
    assert a.distances_to(b)[0] == pytest.approx(100.0)
    on_grid = SITE.to_grid(a).distances_to(SITE.to_grid(b))[0]
    assert 100.0 - on_grid == pytest.approx(0.00971, abs=1e-6)
    with pytest.raises(WrongShape):
        a.distances_to(SITE.points([(1, 2), (3, 4)]))


coordinates = st.floats(-1e6, 1e6)


@given(coordinates, coordinates, st.floats(0.999, 1.001))
def test_ground_and_back_is_where_it_was(e: float, n: float, factor: float) -> None:
    site = GroundFrame("Site", GRID, factor, (5e5, 4.2e6), (1e4, 2e4))
    point = GRID.points([(5e5 + e, 4.2e6 + n)])
    back = site.to_grid(site.from_grid(point))
    assert back.distances_to(point)[0] < 1e-8


@given(st.floats(1e-3, 1e6), st.floats(1e-3, 1e6))
def test_distances_add_the_same_on_either_surface(a: float, b: float) -> None:
    first, second = SITE.distance(a), SITE.distance(b)
    together = SITE.distance_to_grid(first.plus(second)).metres
    apart = SITE.distance_to_grid(first).plus(SITE.distance_to_grid(second)).metres
    assert together == pytest.approx(apart, rel=1e-14)
    there = SITE.distance_from_grid(SITE.distance_to_grid(first))
    assert there.metres == pytest.approx(a, rel=1e-14)
