"""What matching makes of a hundred thousand shots with known mistakes among them.

Run with `python -m tests.simulations.matching`; fixed seed, never collected.
"""

from __future__ import annotations

import numpy as np

from geometry.match import Status, match_shots

COUNT = 100_000
RATE = 0.005
MISTAKES = {
    "none": Status.MATCHED,
    "numbers exchanged": Status.SWAPPED,
    "no number": Status.BY_PLACE,
    "leading zeros dropped": Status.LOOK_ALIKE,
    "staked 5 m off": Status.FAR,
    "set at another mark": Status.OTHER_PLACE,
    "not in the plan": Status.UNPLANNED,
    "shot twice": Status.REPEATED,
}


def main() -> None:
    rng = np.random.default_rng(2024)
    plan = rng.uniform(0, 20_000, (COUNT, 2)) + np.array([5e5, 4.2e6])
    names = [f"ST-{i:06d}" for i in range(COUNT)]
    shots = plan + rng.normal(0, 0.01, plan.shape)
    written = [name.lower().replace("-", " ") for name in names]
    kinds = np.zeros(COUNT, dtype=int)
    # the last tenth stays honest, so that other marks have somebody at home
    rows = rng.permutation(COUNT * 9 // 10)
    each = int(RATE * COUNT) // 2 * 2
    for kind, mistake in enumerate(list(MISTAKES)[1:], start=1):
        chosen = rows[(kind - 1) * each : kind * each]
        kinds[chosen] = kind
        spoil(mistake, chosen, plan, shots, written, names, rng)
    again = rows[6 * each : 7 * each]
    shots[again] = plan[again] + rng.normal(0, 0.004, (each, 2))
    extra = plan[again] + rng.uniform(0.1, 0.2, (each, 2))
    found = match_shots(
        names,
        plan,
        [*written, *(names[i] for i in again)],
        np.vstack([shots, extra]),
    )
    kinds[again] = 0
    kinds = np.concatenate([kinds, np.full(each, 7)])
    print(f"{'mistake':24}{'shots':>8}{'told so':>10}   otherwise told")
    for kind, (mistake, status) in enumerate(MISTAKES.items()):
        told = found.status[kinds == kind]
        other = {
            Status(s).name.lower(): int((told == s).sum())
            for s in np.unique(told)
            if s != status
        }
        print(f"{mistake:24}{told.size:8}{np.mean(told == status):10.4f}   {other}")


def spoil(
    mistake: str,
    rows: np.ndarray,
    plan: np.ndarray,
    shots: np.ndarray,
    written: list[str],
    names: list[str],
    rng: np.random.Generator,
) -> None:
    """Put one kind of mistake into the chosen shots."""
    half = len(rows) // 2
    if mistake == "numbers exchanged":
        for a, b in zip(rows[:half], rows[half:], strict=True):
            written[a], written[b] = written[b], written[a]
    elif mistake == "no number":
        for i in rows:
            written[i] = ""
    elif mistake == "leading zeros dropped":
        for i in rows:
            written[i] = f"st {int(names[i][3:])}"
    elif mistake == "staked 5 m off":
        azimuth = rng.uniform(0, 2 * np.pi, len(rows))
        shots[rows] += 5 * np.column_stack([np.sin(azimuth), np.cos(azimuth)])
    elif mistake == "set at another mark":
        shots[rows] = plan[-len(rows) :] + rng.normal(0, 0.01, (len(rows), 2))
    elif mistake == "not in the plan":
        shots[rows] += 30_000.0
        for i in rows:
            written[i] = f"X{i}Q"


if __name__ == "__main__":
    main()
