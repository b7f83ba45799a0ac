"""Adjusting redundant measurements: where the points are, and what the residuals prove.

Adjust
- `adjust_network`: plane positions from distances, directions, angles, azimuths
- `adjust_levels`: heights from levelled rises

What was measured
- `Distance`, `Direction`, `Angle`, `Azimuth`, `HeightDifference`: one measurement
- `Coordinates`, `Heights`: known values with their joint covariance
- `coordinates`, `heights`: the same from one sigma or a full covariance
- `allow_for_centring`: sigmas widened by what centring adds

What comes back
- `NetworkAdjustment`, `LevelAdjustment`: everything about the adjusted network
- `PointReport`, `HeightReport`: one point
- `MeasurementReport`, `Measurements`: one measurement, all of them
- `KnownReport`: known values against the adjustment
- `GroupPrecision`: observed over given precision of one kind of measurement
- `GlobalTest`: the test of the whole

In words
- `say_adjustment`, `say_measurement`: sentences built from a result

When it cannot answer
- `Undetermined`: which points nothing holds and what would (`Loose`, `Missing`)
- `DoesNotSettle`: start coordinates too far from the measurements

Limits of tests
- `critical_w`: how large a standardised residual may be
- `noncentrality`, `detectable`: how large an error must be to be found
- `global_test`, `matching_alpha`: the whole, at a level that matches single tests
- `ellipse_factor`: confidence ellipses when sigma0 was estimated
"""

from __future__ import annotations

from geometry.adjust.centring import allow_for_centring
from geometry.adjust.iterate import DoesNotSettle
from geometry.adjust.levels import adjust_levels
from geometry.adjust.measurements import MeasurementReport, Measurements
from geometry.adjust.network import adjust_network
from geometry.adjust.observations import (
    Angle,
    Azimuth,
    Coordinates,
    Direction,
    Distance,
    HeightDifference,
    Heights,
    coordinates,
    heights,
)
from geometry.adjust.reliability import (
    GlobalTest,
    critical_w,
    detectable,
    ellipse_factor,
    global_test,
    matching_alpha,
    noncentrality,
)
from geometry.adjust.report import (
    GroupPrecision,
    HeightReport,
    KnownReport,
    LevelAdjustment,
    NetworkAdjustment,
    PointReport,
)
from geometry.adjust.undetermined import Loose, Missing, Undetermined
from geometry.adjust.words import say_adjustment, say_measurement

__all__ = [
    "Angle",
    "Azimuth",
    "Coordinates",
    "Direction",
    "Distance",
    "DoesNotSettle",
    "GlobalTest",
    "GroupPrecision",
    "HeightDifference",
    "HeightReport",
    "Heights",
    "KnownReport",
    "LevelAdjustment",
    "Loose",
    "MeasurementReport",
    "Measurements",
    "Missing",
    "NetworkAdjustment",
    "PointReport",
    "Undetermined",
    "adjust_levels",
    "adjust_network",
    "allow_for_centring",
    "coordinates",
    "critical_w",
    "detectable",
    "ellipse_factor",
    "global_test",
    "heights",
    "matching_alpha",
    "noncentrality",
    "say_adjustment",
    "say_measurement",
]
