"""Elevation by level from one benchmark, proved by a second."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from geometry import checked
from geometry.decide import noncentrality
from geometry.precision import Level, one_setup_variance
from geometry.precision.heights import level_run_variance
from geometry.ways.survivors import Sort, Survivor, Target
from geometry.ways.way import Caution, Check, Kind, Number, Refusal, Way

COST_MIN = 10.0
FACTOR_95 = 1.959963984540054


def levels(
    target: Target, candidates: Sequence[Survivor], level: Level, per_kind: int
) -> list[Way]:
    """Ways for the elevation of `target`, best first; refused ones with the reason."""
    if target.elevation_m is None:
        return []
    checked.metres(f"elevation of {target.id}", target.elevation_m)
    place = checked.point(f"position of {target.id}", target.position)
    marks = [
        c
        for c in candidates
        if c.elevation_m is not None
        and c.sort in (Sort.CONTROL, Sort.BENCHMARK)
        and c.id != target.id
    ]
    for mark in marks:
        checked.metres(f"elevation of {mark.id}", mark.elevation_m or 0.0)
        sd = checked.not_negative(f"elevation sigma of {mark.id}", mark.elevation_sd_m)
        checked.metres(f"elevation sigma of {mark.id}", sd)
    marks.sort(key=lambda m: math.dist(place, m.position))
    good = [m for m in marks if m.usable and m.elevation_usable]
    bad = [m for m in marks if not (m.usable and m.elevation_usable)]
    refused = [
        _refused(target, [m], Refusal.BASIS_NOT_USABLE, _why(m)) for m in bad[:1]
    ]
    if len(good) < 2:
        why = "No benchmark survives." if not good else "Only one benchmark survives."
        return [_refused(target, good, Refusal.SINGLE_SURVIVOR, why), *refused]
    ways = [
        _way(target, one, other, level, place.tolist())
        for one in good[:4]
        for other in good[:4]
        if one is not other
    ]
    ways.sort(key=lambda w: (bool(w.untrusted), w.ratio > 1, w.ratio))
    kept: list[Way] = []
    for way in ways:
        if len(kept) < per_kind and way.marks not in [k.marks for k in kept]:
            kept.append(way)
    return [*kept, *refused]


def _way(
    target: Target, one: Survivor, other: Survivor, level: Level, place: list[float]
) -> Way:
    assert target.elevation_m is not None
    assert one.elevation_m is not None and other.elevation_m is not None
    d = math.dist(place, one.position)
    measured = _carried(d, level)
    variance = one.elevation_sd_m**2 + measured
    across = _carried(math.dist(one.position, other.position), level)
    sd = math.sqrt(one.elevation_sd_m**2 + other.elevation_sd_m**2 + across)
    half = FACTOR_95 * math.sqrt(variance)
    tolerance = checked.positive("elevation tolerance", target.elevation_tolerance_m)
    check = Check(
        name="rise to the second benchmark",
        at=one.id,
        to=other.id,
        expected=other.elevation_m - one.elevation_m,
        unit="m",
        sd=sd,
        tolerance=tolerance,
        gradient=(0.0, 0.0),
        smallest_move_m=math.sqrt(noncentrality(1)) * sd,
        with_="level",
        trusted=other.elevation_trusted,
    )
    trusted = one.trusted and one.elevation_trusted
    cautions = []
    if d > 2 * level.sight_m:
        cautions.append(Caution.FAR)
    if not trusted:
        cautions.append(Caution.NOT_CHECKED)
    if not check.trusted:
        cautions.append(Caution.CHECK_NOT_TRUSTED)
    if half > tolerance:
        cautions.append(Caution.OVER_TOLERANCE)
    return Way(
        kind=Kind.LEVELS,
        component="elevation",
        target=target.id,
        marks=(one.id,),
        untrusted=() if trusted else (one.id,),
        numbers=(
            Number("elevation", one.elevation_m, "m", one.id, ""),
            Number(
                "rise", target.elevation_m - one.elevation_m, "m", one.id, target.id
            ),
        ),
        covariance_m2=np.array([[variance]]),
        ellipse_95=None,
        semi_major_m=half,
        tolerance_m=tolerance,
        ratio=half / tolerance,
        checks=(check,),
        smallest_move_m=check.smallest_move_m,
        cautions=tuple(cautions),
        refusal=None,
        reason="",
        provisional=False,
        cost_min=COST_MIN,
        to_marks=((one.id, np.array([[1.0]])),),
        noise_m2=np.array([[measured]]),
    )


def _carried(distance_m: float, level: Level) -> float:
    """Variance of carrying a height this far: one set-up, or a run of several."""
    if distance_m <= 2 * level.sight_m:
        return one_setup_variance(distance_m / 2, distance_m / 2, level)
    return max(
        one_setup_variance(level.sight_m, level.sight_m, level),
        level_run_variance(distance_m, level),
    )


def _refused(
    target: Target, marks: Sequence[Survivor], refusal: Refusal, why: str
) -> Way:
    return Way(
        kind=Kind.LEVELS,
        component="elevation",
        target=target.id,
        marks=tuple(m.id for m in marks),
        untrusted=(),
        numbers=(),
        covariance_m2=np.array([[math.inf]]),
        ellipse_95=None,
        semi_major_m=math.inf,
        tolerance_m=target.elevation_tolerance_m,
        ratio=math.inf,
        checks=(),
        smallest_move_m=math.inf,
        cautions=(),
        refusal=refusal,
        reason=why,
        provisional=False,
        cost_min=0.0,
        to_marks=(),
        noise_m2=np.array([[math.inf]]),
    )


def _why(mark: Survivor) -> str:
    return f"{mark.id} may not be used" + (f": {mark.why_not}" if mark.why_not else ".")
