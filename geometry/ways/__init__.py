"""Ways back: if a mark is lost, how is it put back, and what proves it?

What is there, what is lost, with what?
  Target, Survivor, Sort   the lost mark; what still stands, and what sort it is
  Tools, Limits       what the crew has; where a way begins to be weak
How is it put back?
  ways_back           every way, judged and ranked, refused ones with the reason
  Way, Kind, Number, Check, Caution, Refusal   a way and its parts
Did it come out right?
  judged, Outcome     measured check values against the expected ones
  differences, Differences, Shift   old stake, design and built work against each other
What errors do marks share?
  Lineage, Origin     where the errors of marks come from, joint covariance, generation
  control_origin, occupied_setup, free_setup, shot, put_back   origins of each kind
Where else could it stand?
  relocated, Place    whole offsets on the same line, outside the zones
"""

from __future__ import annotations

from geometry.ways.back import ways_back
from geometry.ways.differences import Differences, Shift, differences
from geometry.ways.judging import Outcome, judged
from geometry.ways.lineage import Lineage, Origin
from geometry.ways.origins import (
    control_origin,
    free_setup,
    occupied_setup,
    put_back,
    shot,
)
from geometry.ways.relocation import Place, relocated
from geometry.ways.survivors import Limits, Sort, Survivor, Target, Tools
from geometry.ways.way import Caution, Check, Kind, Number, Refusal, Way

__all__ = [
    "Caution",
    "Check",
    "Differences",
    "Kind",
    "Limits",
    "Lineage",
    "Number",
    "Origin",
    "Outcome",
    "Place",
    "Refusal",
    "Shift",
    "Sort",
    "Survivor",
    "Target",
    "Tools",
    "Way",
    "control_origin",
    "differences",
    "free_setup",
    "judged",
    "occupied_setup",
    "put_back",
    "relocated",
    "shot",
    "ways_back",
]
