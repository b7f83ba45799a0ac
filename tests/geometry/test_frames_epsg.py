"""EPSG systems are crossed with the exactness that could be achieved."""

from __future__ import annotations

import builtins
import math
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from geometry.errors import EmptyInput, GeometryError, NotFinite, OutOfRange
from geometry.frames import (
    EpsgUnavailable,
    grid_azimuth,
    grid_scale,
    line_scale,
    second_term,
    transformed,
)

pyproj = pytest.importorskip("pyproj")
CONNECTICUT_M, TEXAS_SOUTH_CENTRAL_FTUS, NAD27, NAD83 = 26956, 32040, 4267, 4269


def test_the_lambert_example_of_the_register_is_met() -> None:
    # IOGP Guidance Note 373-7-2, Lambert 2SP (from memory)
    there = transformed([(-96.0, 28.5)], NAD27, TEXAS_SOUTH_CENTRAL_FTUS)
    assert there.points[0] == pytest.approx((2963503.91, 254759.80), abs=0.005)
    assert there.accuracy_m == 0.0
    assert there.better_missing == ""
    assert there.round_trip_m < 1e-6


@pytest.mark.parametrize(
    ("epsg", "latitude", "scale"),
    [
        (26956, 41.5336239347, 0.999983140478),
        (32119, 35.2517586002, 0.999872591882),
        (32140, 29.3348388416, 0.999863243591),
        (26986, 42.2006252872, 0.999964550086),
        (32154, 43.4012400263, 0.999932547079),
        (26943, 37.7510694363, 0.999929178853),
    ],
)
def test_state_plane_scale_on_the_central_parallel(
    epsg: int, latitude: float, scale: float
) -> None:
    # NOAA Manual NOS NGS 5 App. C (from memory)
    degree = pyproj.CRS(epsg).coordinate_operation.params
    meridian = next(p.value for p in degree if "ongitude" in p.name)
    places = [(meridian, latitude), (meridian, latitude - 0.05)]
    at = grid_scale(transformed(places, NAD83, epsg).points, epsg)
    assert at.scale[0] == pytest.approx(scale, abs=2e-10)
    assert at.scale[1] > at.scale[0]
    assert at.convergence_rad == pytest.approx((0.0, 0.0), abs=1e-10)


def test_grid_azimuth_and_distance_agree_with_the_geodesic() -> None:
    # reference: the geodesic of pyproj on GRS 80
    a, b = (-72.10, 41.90), (-72.00, 41.93)
    forward, _, geodesic = pyproj.Geod(ellps="GRS80").inv(*a, *b)
    points = transformed([a, b], NAD83, CONNECTICUT_M).points
    middle = points.mean(axis=0)
    at = grid_scale([points[0], middle, points[1]], CONNECTICUT_M)
    parallel = transformed([(-72.75, 41.5336239347)], NAD83, CONNECTICUT_M).points[0]
    east, north = points[1] - points[0]
    second = second_term(float(middle[1] - parallel[1]), float(east))
    azimuth = grid_azimuth(math.radians(forward), float(at.convergence_rad[0]), second)
    assert azimuth == pytest.approx(
        math.atan2(east, north), abs=math.radians(0.05 / 3600)
    )
    scale = line_scale(*map(float, at.scale))
    assert math.hypot(east, north) == pytest.approx(geodesic * scale, abs=2e-4)


def test_a_datum_shift_says_how_good_it_is_and_what_was_missing() -> None:
    there = transformed([(-96.0, 28.5)], NAD27, NAD83)
    assert there.accuracy_m is None or there.accuracy_m > 0
    assert there.operation
    if there.accuracy_m is None or there.accuracy_m > 1.0:
        assert there.better_missing


def test_an_unknown_code_is_refused() -> None:
    with pytest.raises(EpsgUnavailable, match="999999"):
        transformed([(0.0, 0.0)], 999999, NAD83)
    with pytest.raises(OutOfRange, match="not a projected"):
        grid_scale([(0.0, 0.0)], NAD83)


def test_a_map_that_is_not_conformal_has_no_grid_scale() -> None:
    with pytest.raises(OutOfRange, match="not conformal"):
        grid_scale([(0.0, 1.0e6)], 5070)


def test_missing_and_impossible_points_are_refused() -> None:
    with pytest.raises(EmptyInput):
        transformed([], NAD83, CONNECTICUT_M)
    with pytest.raises(EmptyInput):
        grid_scale([], CONNECTICUT_M)
    with pytest.raises(NotFinite):
        transformed([(math.nan, 41.0)], NAD83, CONNECTICUT_M)
    with pytest.raises(OutOfRange, match="row 2"):
        transformed([(-72.0, 41.0), (-72.0, 95.0)], NAD83, CONNECTICUT_M)


def test_without_the_extra_the_answer_says_what_to_install(
    monkeypatch: pytest.MonkeyPatch,
) -> None:
    real = builtins.__import__

    def without(name: str, *args: Any, **kinds: Any) -> Any:
        if name.startswith("pyproj"):
            raise ImportError(name)
        return real(name, *args, **kinds)

    monkeypatch.setattr(builtins, "__import__", without)
    with pytest.raises(EpsgUnavailable, match="epsg extra"):
        transformed([(0.0, 0.0)], NAD83, CONNECTICUT_M)


@given(st.floats(-180, 180), st.floats(-90, 90))
def test_every_place_is_transformed_back_or_refused(lon: float, lat: float) -> None:
    try:
        there = transformed([(lon, lat)], NAD83, CONNECTICUT_M)
    except GeometryError as refusal:
        assert refusal.what
    else:
        assert np.isfinite(there.points).all()
        assert math.isfinite(there.round_trip_m)
