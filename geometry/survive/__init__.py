"""Survivability: before anything is lost, which loss would leave a mark nobody could
put back?

What stands, and what could put what back?
  stand, Stand        all marks of a job as arrays
  routes, Routes      which pairs of near marks could put each mark back
What would a loss mean?
  survivability, Survivability   single and double losses for every mark
  group_losses, GroupLoss   marks that die together: a haul road, a dig
  kill_sets           smallest losses that leave no way, for any list of ways
What to do about it?
  protect, Protection fewest marks to protect so that every mark keeps a way back
  best_extra, Extra   where one more mark would cure most
"""

from __future__ import annotations

from geometry.survive.extra import Extra, best_extra
from geometry.survive.kill_sets import kill_sets
from geometry.survive.losses import (
    GroupLoss,
    Survivability,
    group_losses,
    survivability,
)
from geometry.survive.protect import Protection, protect
from geometry.survive.routes import Routes, routes
from geometry.survive.stand import Stand, stand

__all__ = [
    "Extra",
    "GroupLoss",
    "Protection",
    "Routes",
    "Stand",
    "Survivability",
    "best_extra",
    "group_losses",
    "kill_sets",
    "protect",
    "routes",
    "stand",
    "survivability",
]
