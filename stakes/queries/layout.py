"""The offset plan of a footprint: what is asked, what geometry answers, and its soil."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from datetime import datetime
from uuid import UUID

import numpy as np

from geometry.errors import GeometryError
from geometry.layout import (
    Gridline,
    Ground,
    KeepOut,
    Matter,
    OffsetPlan,
    RankedCheck,
    Setback,
    Soil,
    Stake,
    StakeSet,
    frame_set,
    minimal_set,
    near_and_far,
    plain_set,
    plan_offsets,
    rank_checks,
    robust_set,
    setback_clearance,
)
from geometry.layout.stakes import numbered
from geometry.units import Length, Unit
from stakes.kinds.importing import SoilClassified
from stakes.models import Record, Zone
from stakes.record import Refused, reading
from stakes.record.lengths import Measured


def pairs_set(plan: OffsetPlan) -> StakeSet:
    """A near and a far stake at each end of every line, a step apart, where free."""
    step = plan.scene.rules.step_m
    far = [s for line in plan.lines for s in near_and_far(plan, line.id, step)]
    e, n = plan.footprint.mean(axis=0)
    stakes = numbered([*plan.stakes, *far], (float(e), float(n)))
    lacking = len(plan.stakes) - len(far)
    words = (f"{lacking} ends have no room for a far stake.",) if lacking > 0 else ()
    return StakeSet("near and far", stakes, plain_set(plan).unserved, words)


SETS: dict[str, Callable[[OffsetPlan], StakeSet]] = {
    "plain": plain_set,
    "minimal": minimal_set,
    "robust": robust_set,
    "pairs": pairs_set,
    "frame": frame_set,
}
SET_WORDS = {
    "plain": "plain: a stake at both ends of every wall line",
    "minimal": "minimal: one stake where two lines meet",
    "robust": "robust: a spare on every line",
    "pairs": "near and far: two stakes at each end of a line",
    "frame": "frame: the smallest enclosing rectangle",
}
USUAL = {
    True: {"offset": "5", "step": "5", "work_space": "2", "clearance": "2"},
    False: {"offset": "1", "step": "1", "work_space": "0.6", "clearance": "0.6"},
}
"""In feet (True) and in metres: offset and step, work space, clearance of the edge."""

LAYOUT_SD_M = 0.004
CHECKS_SHOWN = 24


@dataclass(frozen=True, slots=True)
class Asked:
    """What a layout is planned with. Soil and conditions come from the record."""

    footprint: UUID
    offset: Measured
    step: Measured
    depth: Measured
    work_space: Measured
    clearance: Measured
    stake_set: str = "plain"
    one_value: bool = True
    first_number: int = 1


@dataclass(frozen=True, slots=True)
class Classified:
    """The competent person's classification, and where it stands in the record."""

    soil: Soil
    conditions: tuple[Ground, ...]
    by_whom: str
    on: str
    recorded_at: datetime
    number: int


@dataclass(frozen=True, slots=True)
class Check:
    """A distance that proves the stakes, by their numbers."""

    first: str
    second: str
    reads: Length
    sd: Length


@dataclass(frozen=True, slots=True)
class Laid:
    """A layout as it was worked out, with all a page shows of it."""

    asked: Asked
    zone: Zone
    plan: OffsetPlan
    chosen: StakeSet
    soil: Classified | None
    checks: Sequence[Check]
    setback: Setback | None

    def label(self, stake: Stake) -> str:
        """The number of a stake on this job: the first number and those after it."""
        return str(self.asked.first_number + stake.number - 1)

    @property
    def sentences(self) -> list[str]:
        """What must be known before issuing, with the numbers of this job; cautions
        and ends without room are shown by themselves."""
        odd = [s for s in self.chosen.stakes if s.differs]
        own = [
            issue.sentence
            for issue in self.plan.issues
            if issue.matter not in (Matter.EXCAVATION, Matter.NO_ROOM)
            and not issue.sentence.startswith(("Stake ", "Stakes "))
        ]
        if odd:
            listed = ", ".join(self.label(s) for s in odd)
            own.append(
                f"{listed}: not the building's offset. Flag it on plan, label and sheet."
            )
        return [*own, *self.chosen.sentences]


def soil_of(record: Record, footprint: UUID) -> Classified | None:
    """The last classification of the soil under a footprint; None: assumed."""
    said = reading.entries(
        record, thing="zone", key=footprint, kinds=[SoilClassified.KIND]
    )
    if not said:
        return None
    fact = said[-1].fact
    assert isinstance(fact, SoilClassified)
    return Classified(
        soil=Soil(fact.soil),
        conditions=tuple(Ground(c) for c in fact.conditions),
        by_whom=fact.by_whom,
        on=fact.on,
        recorded_at=said[-1].recorded_at,
        number=said[-1].number,
    )


def footprints(record: Record) -> list[Zone]:
    rows = Zone.objects.filter(record=record, sort="footprint", closed=True)
    return list(rows.order_by("name"))


def lay_out(record: Record, asked: Asked) -> Laid:
    """Plan the offset stakes of a footprint among the zones of its job.

    Raises Refused with geometry's own sentence when it cannot answer.
    """
    zones = list(Zone.objects.filter(record=record))
    zone = next((z for z in zones if z.key == asked.footprint), None)
    if zone is None or zone.sort != "footprint":
        raise Refused("There is no such footprint on this job.", field="footprint")
    if asked.stake_set not in SETS:
        raise Refused("There is no such set of stakes.", field="stake_set")
    soil = soil_of(record, zone.key)
    try:
        plan = _plan(record, asked, zone, zones, soil)
        chosen = SETS[asked.stake_set](plan)
        setback = _setback(zone, zones)
    except GeometryError as error:
        raise Refused(str(error), field="offset", code="layout") from error
    laid = Laid(asked, zone, plan, chosen, soil, (), setback)
    return Laid(asked, zone, plan, chosen, soil, _checks(record, laid), setback)


def say_in(unit: Unit) -> Callable[[float], str]:
    """Writes metres in the job's unit, without idle zeros."""

    def say(metres: float) -> str:
        text = Length.from_metres(metres, unit, 2 if unit.is_foot else 3).text
        plain = text.rstrip("0").rstrip(".") if "." in text else text
        return f"{'0' if plain == '-0' else plain} {unit}"

    return say


def _plan(
    record: Record,
    asked: Asked,
    zone: Zone,
    zones: Sequence[Zone],
    soil: Classified | None,
) -> OffsetPlan:
    yards = [z for z in zones if z.sort == "property" and z.closed]
    return plan_offsets(
        np.array(zone.corners_m),
        offset_m=asked.offset.metres,
        step_m=asked.step.metres,
        depth_m=asked.depth.metres,
        workspace_m=asked.work_space.metres,
        clearance_m=asked.clearance.metres,
        soil=soil.soil if soil else None,
        conditions=soil.conditions if soil else (),
        property_line=np.array(yards[0].corners_m) if yards else None,
        keep_outs=[_keep_out(z) for z in zones if _is_in_the_way(z, zone)],
        gridlines=[_gridline(z) for z in zones if _is_gridline(z)],
        one_value=asked.one_value,
        stake_sd_m=LAYOUT_SD_M,
        say=say_in(record.length_unit),
    )


def _is_in_the_way(zone: Zone, footprint: Zone) -> bool:
    if zone.key == footprint.key:
        return False
    return zone.sort in ("keep-out", "haul road", "obstacle", "footprint")


def _keep_out(zone: Zone) -> KeepOut:
    return KeepOut(
        name=zone.name if zone.sort in zone.name else f"the {zone.sort} {zone.name}",
        points=np.array(zone.corners_m),
        is_area=zone.closed,
        is_structure=zone.sort in ("obstacle", "footprint"),
    )


def _is_gridline(zone: Zone) -> bool:
    return zone.sort == "line" and len(zone.corners_m) == 2


def _gridline(zone: Zone) -> Gridline:
    (e1, n1), (e2, n2) = zone.corners_m
    return Gridline(zone.name, (e1, n1), (e2, n2))


def _setback(zone: Zone, zones: Sequence[Zone]) -> Setback | None:
    """How far the footprint stays inside the setback line; without one, inside the
    property line."""
    closed = [z for z in zones if z.closed]
    lines = [z for z in closed if z.sort == "setback"]
    lines = lines or [z for z in closed if z.sort == "property"]
    if not lines:
        return None
    return setback_clearance(
        np.array(zone.corners_m),
        np.array(lines[0].corners_m),
        0.0,
        layout_sd_m=LAYOUT_SD_M,
    )


def _checks(record: Record, laid: Laid) -> list[Check]:
    stakes = laid.chosen.stakes
    if len(stakes) < 2:
        return []
    try:
        ranked = rank_checks([(s.e_m, s.n_m) for s in stakes], stake_sd_m=LAYOUT_SD_M)
    except GeometryError:
        return []
    return [_check(record, laid, stakes, c) for c in ranked[:CHECKS_SHOWN]]


def _check(
    record: Record, laid: Laid, stakes: Sequence[Stake], check: RankedCheck
) -> Check:
    unit = record.length_unit
    return Check(
        first=laid.label(stakes[check.first]),
        second=laid.label(stakes[check.second]),
        reads=Length.from_metres(check.length_m, unit, 2 if unit.is_foot else 3),
        sd=Length.from_metres(check.predicted_sd_m, unit, 3),
    )
