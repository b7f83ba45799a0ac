"""Heights, revisions and single stakes, simulated."""

from __future__ import annotations

import math

import numpy as np

from geometry.signature import (
    Kind,
    StakeReading,
    explain_stake,
    height_signature,
    nearest_revision,
    setup,
)
from geometry.signature import Line as StakedLine
from geometry.verdicts import Verdict
from tests.simulations.signature_fields import (
    BACKSIGHT,
    GRID,
    SECOND,
    Case,
    Rng,
    ambiguous,
    held,
    measured,
    right,
    share,
    sign,
    stakes,
    table,
)

HEIGHTS = (
    Kind.NOTHING,
    Kind.HEIGHT_CONSTANT,
    Kind.ROD,
    Kind.HEIGHT_FROM,
    Kind.HEIGHT_ANGLE,
    Kind.SIGN,
    Kind.REFERENCE,
    Kind.TILT,
)


def height_case(truth: Kind, count: int, rng: Rng) -> Case:
    at = setup(GRID)
    points = stakes("all round", count, rng)
    length = np.hypot(*(points - GRID).T)
    rods = rng.choice(["1.50", "2.00"], count)
    cuts = rng.uniform(-1.5, 1.5, count)
    size = sign(rng) * rng.uniform(0.03, 0.30)
    tilt = rng.uniform(100e-6, 400e-6)
    dz = {
        Kind.HEIGHT_CONSTANT: np.full(count, size),
        Kind.ROD: np.where(rods == "2.00", size, 0.0),
        Kind.HEIGHT_FROM: np.where(np.arange(count) >= count // 2, size, 0.0),
        Kind.HEIGHT_ANGLE: sign(rng) * rng.uniform(40, 120) * SECOND * length,
        Kind.SIGN: 2 * cuts,
        Kind.REFERENCE: np.full(count, -0.15),
        Kind.TILT: tilt * (points - GRID)[:, 0] * 1.0,
    }.get(truth, np.zeros(count))
    dz = dz + rng.normal(0, 0.002) + length * rng.normal(0, 4 * SECOND)
    dz = dz + rng.normal(0, np.hypot(0.002, at.direction_rad * length))
    wild = rng.random(count) < 0.03
    dz[wild] += rng.normal(0, 0.1, int(wild.sum()))
    read = height_signature(
        points,
        dz,
        [at],
        rods=rods.tolist(),
        cuts_m=cuts,
        references={"the flow line": -0.15},
    )
    return Case(truth, read)


def report_heights(runs: int, rng: Rng) -> None:
    print("\nHeights, all round, 3 % wild: right, true cause in the answer, ambiguous")
    table(
        [
            (
                "cause",
                "12 right",
                "in answer",
                "ambiguous",
                "60 right",
                "in answer",
                "amb.",
            )
        ]
    )
    for truth in HEIGHTS:
        cells = []
        for count in (12, 60):
            cases = [height_case(truth, count, rng) for _ in range(runs)]
            cells += [
                share(right(c) for c in cases),
                share(held(c) for c in cases),
                share(ambiguous(c) for c in cases),
            ]
        table([(truth.value, *cells)])


def report_revisions(runs: int, rng: Rng) -> None:
    print("\nNearest of 3 revisions, 12 marks: current plan accused; older plan named")
    at = setup(GRID, BACKSIGHT)
    table([("marks moved, by", "accused", "named", "ambiguous")])
    for count, size in ((1, 0.05), (1, 0.15), (3, 0.02), (3, 0.05), (3, 0.15)):
        accused, named, ambiguous = 0, 0, 0
        for _ in range(runs):
            plan = stakes("all round", 12, rng)
            older = {name: revision(plan, count, size, rng) for name in ("A", "B", "C")}
            honest = measured(plan, at, np.zeros_like(plan), 0.03, rng)
            read = nearest_revision(plan, honest, older, [at]).signature
            accused += read.verdict is not Verdict.PASS
            move = np.zeros_like(plan)
            move[older["B"][0]] = older["B"][1] - plan[older["B"][0]]
            read = nearest_revision(plan, honest + move, older, [at]).signature
            named += bool(read.causes) and read.causes[0].about == "B"
            ambiguous += read.verdict is Verdict.AMBIGUOUS
        cells = [f"{n / runs:.3f}" for n in (accused, named, ambiguous)]
        table([(f"{count} by {1000 * size:.0f} mm", *cells)])


def revision(
    plan: np.ndarray, count: int, size: float, rng: Rng
) -> tuple[np.ndarray, np.ndarray]:
    rows = np.sort(rng.choice(len(plan), count, replace=False))
    azimuth = rng.uniform(0, 2 * math.pi)
    return rows, plan[rows] + size * np.array([math.sin(azimuth), math.cos(azimuth)])


def report_one_stake(runs: int, rng: Rng) -> None:
    print("\nOne stake: slip named alone; among several; random knocks blamed")
    line = StakedLine(azimuth_rad=0.3, offset_m=3.0)
    right_hand = np.array([math.cos(0.3), -math.sin(0.3)])
    along = np.array([math.sin(0.3), math.cos(0.3)])
    design = np.array([5123.46, 8461.72])
    slips = {
        "offset on the wrong side": -6.0 * right_hand,
        "another offset": 2.0 * right_hand,
        "station out by a round step": 10.0 * along,
        "digits exchanged": np.array([0.18, 0.0]),
    }
    table([("slip", "alone", "among several")])
    for name, move in slips.items():
        reads = [one_stake(design, move, line, rng) for _ in range(runs)]
        alone = [r.verdict is Verdict.FAIL and r.hints[0].slip == name for r in reads]
        among = [any(h.slip == name for h in r.hints) for r in reads]
        table([(name, f"{np.mean(alone):.3f}", f"{np.mean(among):.3f}")])
    for size in (0.1, 0.5, 2.0, 8.0):
        blamed = 0
        for _ in range(runs):
            azimuth = rng.uniform(0, 2 * math.pi)
            knock = size * np.array([math.sin(azimuth), math.cos(azimuth)])
            read = one_stake(design, knock, line, rng)
            blamed += read.verdict is not Verdict.UNDECIDED
        table([(f"knocked {size:g} m: blamed", f"{blamed / runs:.3f}")])


def one_stake(
    design: np.ndarray, move: np.ndarray, line: StakedLine, rng: Rng
) -> StakeReading:
    shot = design + move + rng.normal(0, 0.005, 2)
    typed = (f"{design[0]:.2f}", f"{design[1]:.2f}")
    return explain_stake(design, shot, lines=[line], typed=typed)
