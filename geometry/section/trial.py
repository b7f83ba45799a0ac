"""Slope staking by trial: shoot the ground, compute where the catch should be, move.

x <- hinge + run x height is a contraction only while the ground is flatter than the
slope; `settles` says whether moving on will ever end. Common practice.
"""

from __future__ import annotations

from dataclasses import dataclass

from geometry import checked


@dataclass(frozen=True, slots=True)
class Trial:
    """One trial shot judged; metres.

    `should_be_m` is where the catch would be if the ground were level from here,
    `move_m` how far to go: out positive, in negative. `here` is true when the shot
    is the catch point within the wanted distance. `kind` is cut, fill or grade.
    """

    kind: str
    should_be_m: float
    move_m: float
    here: bool


def trial_shot(
    toe_out_m: float,
    toe_elevation_m: float,
    run: float,
    tried_out_m: float,
    tried_elevation_m: float,
    *,
    within_m: float = 0.03,
) -> Trial:
    """Judge a ground shot against the slope that leaves the toe; distances out.

    The toe is the hinge, or in a cut with a ditch the ditch's far side. `run` is the
    slope's run per rise.

    >>> shot = trial_shot(6.0, 100.0, 2.0, 10.0, 102.5)
    >>> shot.kind, shot.should_be_m, shot.move_m
    ('cut', 11.0, 1.0)
    """
    toe = checked.number("The toe's distance out", toe_out_m)
    base = checked.number("The toe's elevation", toe_elevation_m)
    slope = checked.positive("The slope's run", run)
    tried = checked.number("The shot's distance out", tried_out_m)
    rise = checked.number("The shot's elevation", tried_elevation_m) - base
    should = toe + slope * abs(rise)
    kind = "grade" if rise == 0 else "cut" if rise > 0 else "fill"
    move = should - tried
    return Trial(kind, should, move, abs(move) <= within_m)


def settles(run: float, ground_slope: float) -> bool:
    """Whether trial and move ends: the ground must be flatter than the slope.

    >>> settles(2.0, 0.3), settles(1.5, 0.8)
    (True, False)
    """
    slope = checked.positive("The slope's run", run)
    return abs(slope * checked.number("The ground's slope", ground_slope)) < 1.0
