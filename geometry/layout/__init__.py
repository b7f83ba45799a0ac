"""Laying out a building: where its offset stakes go, and what proves them.

Where do the stakes go?
    plan_offsets           footprint and depth to stakes at line ends -> OffsetPlan
    Stake, Status, Role    one stake: where, how its place came about, what it is for
    LineEnd                one end of a line, its stake or why it has none
    plain_set              the plan's own stakes -> StakeSet
    minimal_set            the fewest: one stake where two lines cross
    robust_set             one spare on every line
    near_and_far           a second stake beyond the first, on one line
    frame_set              the enclosing rectangle as four stakes
    Fallback, FallbackKind what can be done where there is no room
    board_nails            where lines cross a batter board -> Board of Nail
What is the building?
    principal_direction    the direction of its walls -> PrincipalDirection
    enclosing_rectangle    the rectangle in that direction -> EnclosingRectangle
    WallLine, LineKind     a line that stakes hold
    column_grid            named gridlines and their crossings -> Gridline, GridPoint
    arc, Arc, chord_for    curved walls, and chords within a tolerance
Where may nobody stand or dig?
    excavation             the limit for placing stakes -> Excavation
    Soil, Ground           classification, and conditions that ask for an engineer
    KeepOut                a polygon where no stake may stand
What must be known before issuing?
    Issue, Matter          sentences about the plan
    setback_clearance      distance to the property line, and what uses it up -> Setback
    close_dimensions       a string of dimensions against its overall -> Closed
    conflicts              the strings that do not close
What proves the stakes?
    rank_checks            sides and diagonals in the order they help -> RankedCheck
    diagonal_difference    what being out of square does to the diagonals
"""

from __future__ import annotations

from geometry.layout.arcs import Arc, arc, chord_for
from geometry.layout.boards import Board, Nail, board_nails
from geometry.layout.dimensions import Closed, close_dimensions, conflicts
from geometry.layout.direction import (
    EnclosingRectangle,
    PrincipalDirection,
    enclosing_rectangle,
    principal_direction,
)
from geometry.layout.excavation import Excavation, Ground, Soil, excavation
from geometry.layout.fallbacks import Fallback, FallbackKind
from geometry.layout.gridlines import Gridline, GridPoint, column_grid
from geometry.layout.issues import Issue, Matter
from geometry.layout.keepouts import KeepOut
from geometry.layout.lines import LineKind, WallLine
from geometry.layout.plan import LineEnd, OffsetPlan, plan_offsets
from geometry.layout.ranking import RankedCheck, diagonal_difference, rank_checks
from geometry.layout.setback import Setback, setback_clearance
from geometry.layout.sharing import (
    frame_set,
    minimal_set,
    near_and_far,
    plain_set,
    robust_set,
)
from geometry.layout.stakes import Role, Stake, StakeSet, Status

__all__ = [
    "Arc",
    "Board",
    "Closed",
    "EnclosingRectangle",
    "Excavation",
    "Fallback",
    "FallbackKind",
    "GridPoint",
    "Gridline",
    "Ground",
    "Issue",
    "KeepOut",
    "LineEnd",
    "LineKind",
    "Matter",
    "Nail",
    "OffsetPlan",
    "PrincipalDirection",
    "RankedCheck",
    "Role",
    "Setback",
    "Soil",
    "Stake",
    "StakeSet",
    "Status",
    "WallLine",
    "arc",
    "board_nails",
    "chord_for",
    "close_dimensions",
    "column_grid",
    "conflicts",
    "diagonal_difference",
    "enclosing_rectangle",
    "excavation",
    "frame_set",
    "minimal_set",
    "near_and_far",
    "plain_set",
    "plan_offsets",
    "principal_direction",
    "rank_checks",
    "robust_set",
    "setback_clearance",
]
