"""The catch point: where the side slope meets the ground.

Both are piecewise straight, so every crossing is exact; nothing is iterated and
nothing is missed. (The field's own way, a trial and a move, stands in trial: it
fails where ground is as steep as the slope.) From route-surveying texts (Hickerson;
Meyer & Gibson; from memory).
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from geometry import checked
from geometry.checked import Array
from geometry.errors import OutOfRange
from geometry.section.ground import Ground
from geometry.verdicts import Verdict

_SAME_M = 1e-9


@dataclass(frozen=True, slots=True)
class SideSlopes:
    """Run per rise of the cut and the fill slope (2.0 for 2:1), and the cut's ditch.

    The ditch is rows of (width in metres, slope, up positive) going out from the
    hinge before the cut slope begins.
    """

    cut_run: float
    fill_run: float
    ditch: tuple[tuple[float, float], ...] = ()


@dataclass(frozen=True, slots=True)
class CatchPoint:
    """A crossing of slope and ground; metres.

    `offset_m` is from the line with its side's sign, `from_hinge_m` level and
    outward, `above_hinge_m` up positive, `slope_m` along the side slope itself.
    """

    offset_m: float
    elevation_m: float
    from_hinge_m: float
    above_hinge_m: float
    slope_m: float


@dataclass(frozen=True, slots=True)
class Catch:
    """The crossings going outward, and what to think of them.

    `verdict` is pass for one crossing, ambiguous for several (the first stands
    first), fail for none. `kind` is cut, fill or grade. `reason` is a sentence.
    """

    verdict: Verdict
    kind: str
    points: tuple[CatchPoint, ...]
    reason: str


def catch_point(
    hinge_offset_m: float,
    hinge_elevation_m: float,
    ground: Ground,
    slopes: SideSlopes,
    *,
    right: bool,
) -> Catch:
    """Where the slope from the hinge meets the ground on one side of the line.

    Offsets are right positive. Cut or fill is decided by the ground at the hinge.

    >>> from geometry.section import section_ground
    >>> ground = section_ground([0.0, 30.0], [102.0, 105.0])
    >>> c = catch_point(6.0, 100.0, ground, SideSlopes(2.0, 2.0), right=True)
    >>> c.kind, round(c.points[0].offset_m, 3)
    ('cut', 12.5)

    Raises OutOfRange for slopes of no run, or ground that does not reach the hinge.
    """
    side = 1.0 if right else -1.0
    hinge = side * checked.number("The hinge's offset", hinge_offset_m)
    height = checked.number("The hinge's elevation", hinge_elevation_m)
    _refuse(slopes)
    out, z = ground.outward(right=right)
    if not out[0] - _SAME_M <= hinge <= out[-1] + _SAME_M:
        raise OutOfRange(
            "The ground was not measured at the hinge.",
            where=f"Hinge {hinge:g} m out, ground {out[0]:g} to {out[-1]:g} m.",
            do="Shoot the ground from inside the hinge outward.",
        )
    over = float(np.interp(hinge, out, z)) - height
    if abs(over) <= _SAME_M:
        at = CatchPoint(side * hinge, height, 0.0, 0.0, 0.0)
        return Catch(Verdict.PASS, "grade", (at,), "The hinge lies on the ground.")
    kind = "cut" if over > 0 else "fill"
    line = _slope_line(hinge, height, float(out[-1]), slopes, kind)
    found = tuple(
        _point(x, zx, hinge, height, line, side) for x, zx in _crossings(line, out, z)
    )
    verdict, reason = _judged(found, kind, out, z, slopes)
    return Catch(verdict, kind, found, reason)


@dataclass(frozen=True, slots=True, eq=False)
class _Line:
    out: Array
    elevation: Array
    toe_m: float


def _slope_line(
    hinge: float, height: float, reach: float, slopes: SideSlopes, kind: str
) -> _Line:
    """The hinge, the ditch in a cut, and the slope to the end of the ground."""
    xs, zs = [hinge], [height]
    for width, slope in slopes.ditch if kind == "cut" else ():
        xs.append(xs[-1] + width)
        zs.append(zs[-1] + width * slope)
    toe = xs[-1]
    rise = 1 / slopes.cut_run if kind == "cut" else -1 / slopes.fill_run
    if reach > toe:
        xs.append(reach)
        zs.append(zs[-1] + (reach - toe) * rise)
    return _Line(np.array(xs), np.array(zs), toe)


def _crossings(line: _Line, out: Array, z: Array) -> list[tuple[float, float]]:
    """Every place beyond the hinge where line and ground are at one height."""
    reach = min(float(out[-1]), float(line.out[-1]))
    x = np.unique(np.concatenate([line.out, out]))
    x = x[(x >= line.out[0]) & (x <= reach)]
    gap = np.interp(x, line.out, line.elevation) - np.interp(x, out, z)
    found = [float(at) for at in x[np.abs(gap) <= _SAME_M]]
    for i in np.flatnonzero(gap[:-1] * gap[1:] < 0):
        if min(abs(gap[i]), abs(gap[i + 1])) > _SAME_M:
            found.append(
                float(x[i] + (x[i + 1] - x[i]) * gap[i] / (gap[i] - gap[i + 1]))
            )
    return [(at, float(np.interp(at, out, z))) for at in sorted(found)]


def _point(
    x: float, z: float, hinge: float, height: float, line: _Line, side: float
) -> CatchPoint:
    toe_z = float(np.interp(line.toe_m, line.out, line.elevation))
    return CatchPoint(
        offset_m=side * x,
        elevation_m=z,
        from_hinge_m=x - hinge,
        above_hinge_m=z - height,
        slope_m=math.hypot(x - line.toe_m, z - toe_z) if x > line.toe_m else 0.0,
    )


def _judged(
    found: Sequence[CatchPoint], kind: str, out: Array, z: Array, slopes: SideSlopes
) -> tuple[Verdict, str]:
    if len(found) == 1:
        return Verdict.PASS, f"The {kind} slope meets the ground once."
    if found:
        return Verdict.AMBIGUOUS, (
            f"The {kind} slope meets the ground {len(found)} times; "
            "the first is the edge of the work unless the ground beyond is worked too."
        )
    run = slopes.cut_run if kind == "cut" else slopes.fill_run
    last = float((z[-1] - z[-2]) / (out[-1] - out[-2]))
    rise = last if kind == "cut" else -last
    if rise * run >= 1:
        return Verdict.FAIL, (
            f"There is no catch point: the ground runs at {rise:.3f} and the {kind} "
            f"slope at {1 / run:.3f}, so they never meet."
        )
    return Verdict.FAIL, (
        f"The {kind} slope does not meet the ground that was measured, which ends "
        f"{out[-1]:.2f} m out: shoot the ground farther out."
    )


def _refuse(slopes: SideSlopes) -> None:
    checked.positive("The cut slope's run", slopes.cut_run)
    checked.positive("The fill slope's run", slopes.fill_run)
    for width, slope in slopes.ditch:
        checked.positive("A ditch's width", width)
        checked.number("A ditch's slope", slope)
