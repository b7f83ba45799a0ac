"""Whether stakes fit an older revision of the plan better than the current one.

Only marks that a revision moved can tell. Each revision is a cause with nothing to
fit: where its marks were, less where they are. Setup effects and wild shots are
treated as everywhere else.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from geometry import checked
from geometry.checked import Array
from geometry.errors import OutOfRange, WrongShape
from geometry.signature.answer import FEWEST, Names, answered, not_tested
from geometry.signature.findings import NextShot, Signature
from geometry.signature.hypotheses import Field, Hypothesis
from geometry.signature.kinds import Kind
from geometry.signature.setups import Setup, effects, noise
from geometry.signature.trying import Weighed, weigh_each
from geometry.signature.weigh import evidence
from geometry.signature.words import METRES, Words

_TELLS = 4.0


@dataclass(frozen=True, slots=True, eq=False)
class RevisionReading:
    """The signature, and for each revision the rows of shots that can tell it.

    `telling` gives rows that moved between it and the current plan by more than the
    shots' noise; with none, nothing could be said about that revision.
    """

    signature: Signature
    telling: Mapping[str, NDArray[np.int64]]


def nearest_revision(
    design: ArrayLike,
    shots: ArrayLike,
    revisions: Mapping[str, tuple[Sequence[int], ArrayLike]],
    setups: Sequence[Setup] = (),
    *,
    tolerance_m: float = 0.015,
    point_m: float = 0.003,
    common_m: float = 0.0,
    words: Words = METRES,
) -> RevisionReading:
    """Which revision shots (n, 2) were staked from; `design` (n, 2) is the current.

    A revision gives the rows that stood elsewhere in it and where (k, 2). Pass means
    the current plan, fail another one, ambiguous several alike. E, N in metres.

    >>> plan = np.array([(0.0, 0.0), (10.0, 0.0), (20.0, 0.0), (30.0, 0.0)])
    >>> older = {"B": ([1, 2], plan[[1, 2]] + [0.0, 0.15])}
    >>> shots = plan + [0.001, -0.001]
    >>> shots[[1, 2]] += [0.0, 0.15]
    >>> nearest_revision(plan, shots, older).signature.reason
    'The stakes fit revision B better: 2 of the 2 that it had elsewhere.'

    Raises WrongShape, NotFinite, or OutOfRange for a row that is none.
    """
    plan, seen = checked.points("design", design), checked.points("shots", shots)
    if plan.shape != seen.shape:
        raise WrongShape("Every shot needs its design point.")
    if len(plan) < FEWEST:
        return RevisionReading(not_tested(len(plan)), {})
    fixed_setups = tuple(setups)
    blocks = noise(fixed_setups, plan, checked.positive("point_m", point_m))
    ev = evidence(seen - plan, blocks, *effects(fixed_setups, plan, common_m))
    moves = {name: _moved(name, plan, *given) for name, given in revisions.items()}
    sigma = np.sqrt(np.einsum("nii->n", blocks))
    telling = {
        name: np.flatnonzero(np.hypot(*move.T) > _TELLS * sigma)
        for name, move in moves.items()
    }
    causes = [Hypothesis(Kind.NOTHING)] + [
        Hypothesis(Kind.REVISION, fixed=_rows(plan, move), about=name)
        for name, move in moves.items()
        if telling[name].size
    ]
    tried = weigh_each(ev, plan, causes)
    found = answered(
        tried,
        plan,
        Names(fixed_setups, (), words),
        checked.positive("tolerance_m", tolerance_m),
        lambda a, b: _tell(a, b, plan, sigma, words),
    )
    return RevisionReading(_counted(found, seen - plan, moves, telling, sigma), telling)


def _moved(name: str, plan: Array, rows: Sequence[int], places: ArrayLike) -> Array:
    there = checked.points(f"revision {name}", places)
    index = np.asarray(rows, dtype=np.int64).reshape(-1)
    if len(index) != len(there):
        raise WrongShape(f"Revision {name} needs one place for each of its rows.")
    if index.size and not 0 <= int(index.min()) <= int(index.max()) < len(plan):
        raise OutOfRange(f"Revision {name} names a row that is not in the design.")
    move = np.zeros_like(plan)
    move[index] = there - plan[index]
    return move


def _rows(plan: Array, move: Array) -> Field:
    return lambda points: move if points is plan else np.zeros_like(points)


def _tell(a: Weighed, b: Weighed, plan: Array, sigma: Array, words: Words) -> NextShot:
    """The mark that the two revisions had farthest apart, to be shot again."""
    gap = np.hypot(*(a.hypothesis.fixed_at(plan) - b.hypothesis.fixed_at(plan)).T)
    row = int(np.argmax(gap / sigma))
    times = float(gap[row] / sigma[row])
    return NextShot(
        point=plan[row],
        candidate=row,
        differ_m=float(gap[row]),
        times=times,
        decides=times >= _TELLS,
        sentence=f"Shoot stake {row + 1} of the list again: the two revisions differ "
        f"there by {words.length(float(gap[row]))}."
        if times >= _TELLS
        else "The two revisions had every stake that was shot in the same place: "
        "shoot a mark that moved between them.",
    )


def _counted(
    found: Signature,
    residuals: Array,
    moves: Mapping[str, Array],
    telling: Mapping[str, NDArray[np.int64]],
    sigma: Array,
) -> Signature:
    """The sentence with the number of telling stakes that stand in the old place."""
    causes = []
    for cause in found.causes:
        rows = telling[cause.about]
        left = np.hypot(*(residuals[rows] - moves[cause.about][rows]).T)
        now = np.hypot(*residuals[rows].T)
        # nearer to the old place than to the new one, as a count anyone can repeat
        there = int((left < now).sum())
        sentence = (
            f"The stakes fit revision {cause.about} better: {there} of the "
            f"{rows.size} that it had elsewhere."
        )
        causes.append(replace(cause, sentence=sentence))
    if not causes:
        return found
    tail = found.reason
    for before, after in zip(found.causes, causes, strict=True):
        tail = tail.replace(before.sentence, after.sentence)
    return replace(found, causes=tuple(causes), reason=tail)
