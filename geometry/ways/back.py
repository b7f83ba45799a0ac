"""Every way back to a lost mark, judged and ranked."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import replace

import numpy as np

from geometry.ellipse import ellipse
from geometry.precision import Obstacle
from geometry.ways.checking import Checks, checks_for
from geometry.ways.draft import Draft, carried
from geometry.ways.free import best_fits, free_stations
from geometry.ways.levels import levels
from geometry.ways.lineage import Lineage
from geometry.ways.scene import Scene, look
from geometry.ways.stations import from_occupied
from geometry.ways.strings import string_crossings
from geometry.ways.survivors import Limits, Sort, Survivor, Target, Tools
from geometry.ways.taping import in_line, right_angle, taped_ties
from geometry.ways.way import Caution, Kind, Refusal, Way

MAKERS: dict[Kind, Callable[[Scene], list[Draft]]] = {
    Kind.POLAR: from_occupied,
    Kind.FREE_STATION: free_stations,
    Kind.STRINGS: string_crossings,
    Kind.TIES: taped_ties,
    Kind.IN_LINE: in_line,
    Kind.RIGHT_ANGLE: right_angle,
    Kind.BEST_FIT: best_fits,
}

TOO_FEW = {
    Kind.POLAR: "It needs a mark to occupy and another to sight.",
    Kind.FREE_STATION: "It needs two control marks in reach, three for a check.",
    Kind.STRINGS: "Two strings need four marks near it.",
    Kind.TIES: "Ties need two marks within the tape.",
    Kind.IN_LINE: "A line needs two marks within the tape.",
    Kind.RIGHT_ANGLE: "A base line needs two marks within the tape.",
    Kind.BEST_FIT: "A best fit needs three stakes in reach.",
}


def ways_back(
    target: Target,
    candidates: Sequence[Survivor],
    *,
    lineage: Lineage | None = None,
    obstacles: Sequence[Obstacle] = (),
    tools: Tools | None = None,
    limits: Limits | None = None,
) -> tuple[Way, ...]:
    """Every way to put `target` back from `candidates`, best first, refused ones last.

    A stake returns to its current design place. Ways are ranked by: offered; all marks
    trusted; predicted 95 % within tolerance; sights clear; resting on control rather
    than on stakes; then by 95 % half-axis over tolerance and by effort. Only four
    reasons refuse: single survivor, basis not usable, no check possible, singular
    geometry; everything else is a caution. Control, benchmarks and legal monuments are
    never set back to old values: they answer with *basis not usable*. `lineage` gives
    the joint covariance of marks it knows. Raises NotFinite, WrongShape, OutOfRange
    that name the mark.

    >>> marks = [Survivor("A", (0, 0), 1e-6 * np.eye(2)),
    ...          Survivor("B", (20, 0), 1e-6 * np.eye(2)),
    ...          Survivor("C", (0, 20), 1e-6 * np.eye(2))]
    >>> ways = ways_back(Target("D", (10, 10), 0.02), marks)
    >>> ways[0].offered, ways[0].checks[0].unit
    (True, 'm')
    """
    limits = limits or Limits()
    tools = tools or Tools()
    if target.sort is not Sort.STAKE:
        return _never(target)
    scene = look(
        target,
        candidates,
        lineage=lineage,
        obstacles=obstacles,
        tools=tools,
        limits=limits,
    )
    ways: list[Way] = []
    for kind, make in MAKERS.items():
        ways += _of_kind(kind, make, scene)
    if tools.level is not None:
        ways += levels(target, candidates, tools.level, limits.per_kind)
    ways.sort(key=_key)
    return tuple(replace(way, rank=i + 1) for i, way in enumerate(ways))


def _of_kind(
    kind: Kind, make: Callable[[Scene], list[Draft]], scene: Scene
) -> list[Way]:
    if not _equipped(kind, scene.tools):
        return []
    drafts = make(scene) if len(scene.marks) else []
    if scene.usable_total < 2:
        return [_lonely(kind, scene)]
    if not drafts:
        return [_without(kind, scene, Refusal.SINGULAR, TOO_FEW[kind])]
    ways = sorted((_judged(draft, scene) for draft in drafts), key=_key)
    offered = [w for w in ways if w.offered][: scene.limits.per_kind]
    refused = [w for w in ways if not w.offered]
    basis = [w for w in refused if w.refusal is Refusal.BASIS_NOT_USABLE]
    if offered:
        return offered + basis[:1]
    return refused[:1] + [w for w in basis[:1] if w not in refused[:1]]


def _judged(draft: Draft, scene: Scene) -> Way:
    blocked = [scene.marks[i] for i in draft.marks if not scene.usable[i]]
    if blocked:
        mark = blocked[0]
        why = f"{mark.id} may not be used" + (
            f": {mark.why_not}" if mark.why_not else "."
        )
        return _without(draft.kind, scene, Refusal.BASIS_NOT_USABLE, why, draft)
    if draft.singular:
        return _without(draft.kind, scene, Refusal.SINGULAR, draft.singular, draft)
    covariance = carried(draft, scene)
    checks = checks_for(draft, scene, covariance)
    if not checks.chosen:
        why = "No mark is left that could check it."
        return _without(draft.kind, scene, Refusal.NO_CHECK, why, draft)
    shape = ellipse(covariance)
    ratio = shape.semi_major_m / scene.target.tolerance_m
    untrusted = tuple(scene.marks[i].id for i in draft.marks if not scene.trusted[i])
    return Way(
        kind=draft.kind,
        component="position",
        target=scene.target.id,
        marks=tuple(scene.marks[i].id for i in draft.marks),
        untrusted=untrusted,
        numbers=draft.numbers,
        covariance_m2=covariance,
        ellipse_95=shape,
        semi_major_m=shape.semi_major_m,
        tolerance_m=scene.target.tolerance_m,
        ratio=ratio,
        checks=checks.chosen,
        smallest_move_m=checks.smallest_move_m,
        cautions=_cautions(draft, checks, ratio, bool(untrusted)),
        refusal=None,
        reason="",
        provisional=not all(scene.control[i] for i in draft.marks),
        cost_min=draft.cost_min,
        to_marks=tuple(
            (scene.marks[i].id, jacobian)
            for i, jacobian in zip(draft.marks, draft.jacobians, strict=True)
        ),
        noise_m2=draft.noise,
        stand_at=draft.stand_at,
    )


def _cautions(
    draft: Draft, checks: Checks, ratio: float, untrusted: bool
) -> tuple[Caution, ...]:
    found = list(draft.cautions)
    if untrusted:
        found.append(Caution.NOT_CHECKED)
    if ratio > 1:
        found.append(Caution.OVER_TOLERANCE)
    if checks.chosen[0] is draft.own_check:
        found.append(Caution.SETUP_CHECK_ONLY)
    elif math.isinf(checks.smallest_move_m):
        found.append(Caution.CHECK_IS_BLIND)
    if not checks.chosen[0].trusted:
        found.append(Caution.CHECK_NOT_TRUSTED)
    return tuple(found)


def _key(way: Way) -> tuple[bool, bool, bool, bool, bool, float, float]:
    return (
        not way.offered,
        bool(way.untrusted),
        way.ratio > 1,
        Caution.BLOCKED in way.cautions,
        way.provisional,
        way.ratio,
        way.cost_min,
    )


def _equipped(kind: Kind, tools: Tools) -> bool:
    if kind in (Kind.POLAR, Kind.FREE_STATION, Kind.BEST_FIT):
        return tools.total_station is not None
    if kind is Kind.STRINGS:
        return tools.string is not None
    if kind is Kind.IN_LINE:
        return tools.tape is not None and tools.string is not None
    if kind is Kind.RIGHT_ANGLE:
        return tools.tape is not None and tools.right_angle is not None
    return tools.tape is not None


def _lonely(kind: Kind, scene: Scene) -> Way:
    left = [scene.marks[i].id for i in np.flatnonzero(scene.usable)]
    bad = [m for m in scene.marks if not m.usable]
    why = f"Only {left[0]} survives to set from." if left else "Nothing survives here."
    if bad and not left:
        why = f"No survivor may be used; {bad[0].id}"
        why += f": {bad[0].why_not}" if bad[0].why_not else " may not."
        return _without(kind, scene, Refusal.BASIS_NOT_USABLE, why)
    return _without(kind, scene, Refusal.SINGLE_SURVIVOR, why)


def _without(
    kind: Kind, scene: Scene, refusal: Refusal, why: str, draft: Draft | None = None
) -> Way:
    marks = () if draft is None else draft.marks
    return _refused(
        kind, scene.target, refusal, why, tuple(scene.marks[i].id for i in marks)
    )


def _refused(
    kind: Kind, target: Target, refusal: Refusal, why: str, marks: tuple[str, ...]
) -> Way:
    return Way(
        kind=kind,
        component="position",
        target=target.id,
        marks=marks,
        untrusted=(),
        numbers=(),
        covariance_m2=np.full((2, 2), np.inf),
        ellipse_95=None,
        semi_major_m=math.inf,
        tolerance_m=target.tolerance_m,
        ratio=math.inf,
        checks=(),
        smallest_move_m=math.inf,
        cautions=(),
        refusal=refusal,
        reason=why,
        provisional=False,
        cost_min=0.0,
        to_marks=(),
        noise_m2=np.full((2, 2), np.inf),
    )


def _never(target: Target) -> tuple[Way, ...]:
    if target.sort is Sort.LEGAL_MONUMENT:
        why = "A legal monument is not put back here; it goes to the surveyor."
    else:
        why = "Control is re-established with new values, never set back to old ones."
    ways = [
        _refused(kind, target, Refusal.BASIS_NOT_USABLE, why, ()) for kind in MAKERS
    ]
    return tuple(replace(way, rank=i + 1) for i, way in enumerate(ways))
