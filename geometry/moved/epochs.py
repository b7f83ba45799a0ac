"""Two epochs of measurements compared: which marks moved between them.

Comparing what was measured twice is about twice as sharp as comparing with recorded
coordinates, because the errors of the record take no part. Each epoch is adjusted as a
free network; what nothing measured (shift, turn, sometimes size) is taken out of the
differences, and displacements are shown relative to the marks that did not move.

Pelzer 1971, Niemeier 1981 (congruency), Baarda 1973 (S-transformation), Caspary,
*Concepts of Network and Deformation Analysis*; from memory.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from geometry.adjust.datum import fitted, plane_motions
from geometry.adjust.report import LevelAdjustment, NetworkAdjustment
from geometry.checked import Array
from geometry.ellipse import Ellipse, ellipse
from geometry.errors import EmptyInput, OutOfRange, Singular
from geometry.moved.answer import MovedAnswer, Tell
from geometry.moved.conclude import conclude
from geometry.moved.evidence import Evidence, inverse_of
from geometry.moved.suspicion import Suspicion
from geometry.moved.tell import Shift, tell
from geometry.verdicts import Verdict


@dataclass(frozen=True, slots=True, eq=False)
class Displacement:
    """Second place less first, relative to the stable marks; metres.

    `displacement_m` is (2,) or (1,); `ellipse_95` is None for heights.
    """

    mark: str
    displacement_m: Array
    covariance_m2: Array
    ellipse_95: Ellipse | None
    verdict: Verdict


@dataclass(frozen=True, slots=True, eq=False)
class EpochAnswer:
    """Which mark moved between two epochs.

    `answer` as from `which_moved`; its `test` is the congruency test. `displacements`
    of all common marks are relative to the marks in `stable`.
    """

    answer: MovedAnswer
    displacements: tuple[Displacement, ...]
    stable: tuple[str, ...]

    @property
    def verdict(self) -> Verdict:
        """The verdict of the answer."""
        return self.answer.verdict


def compare_epochs(
    first: NetworkAdjustment,
    second: NetworkAdjustment,
    marks: Sequence[str] = (),
    *,
    alpha: float = 0.001,
    power: float = 0.80,
    global_alpha: float = 0.05,
    tell_sigma_m: float = 0.003,
) -> EpochAnswer:
    """Which of `marks` moved from the first epoch to the second.

    Both are adjustments of free networks with the same start coordinates of the
    marks; `marks` are the points that are the same on the ground in both (every
    common name when empty, so give it when free stations share names).

    >>> from geometry.adjust import Distance, adjust_network
    >>> at = {"A": (0, 0), "B": (60, 0), "C": (60, 60), "D": (0, 60), "E": (30, 90)}
    >>> def epoch(place):
    ...     lengths = [Distance(a, b, float(np.hypot(*np.subtract(place[b], place[a]))),
    ...                0.001) for a in at for b in at if a < b]
    ...     return adjust_network(at, lengths, free=True)
    >>> compared = compare_epochs(epoch(at), epoch(at | {"C": (60.02, 60)}))
    >>> [m.mark for m in compared.answer.moved]
    ['C']

    Raises EmptyInput, OutOfRange, Singular.
    """
    names = _common(first.names, second.names, marks)
    motions = set(first.motions) | set(second.motions)
    one, two = (
        net.positions_m[[net.number(n) for n in names]] for net in (first, second)
    )
    if motions:
        two = fitted(
            two, one, np.ones(len(names)),
            turn="turn" in motions, scale="scale" in motions,
        )  # fmt: skip
    free = plane_motions(one, turn="turn" in motions, scale="scale" in motions)
    free = free if motions else np.zeros((2 * len(names), 0))
    return _compare(
        names, one, two, first.joint_covariance(names), second.joint_covariance(names),
        free, (alpha, power, global_alpha), tell_sigma_m,
    )  # fmt: skip


def compare_level_epochs(
    first: LevelAdjustment,
    second: LevelAdjustment,
    marks: Sequence[str] = (),
    *,
    alpha: float = 0.001,
    power: float = 0.80,
    global_alpha: float = 0.05,
    tell_sigma_m: float = 0.002,
) -> EpochAnswer:
    """Which benchmark rose or fell between two levellings; see `compare_epochs`.

    >>> from geometry.adjust import HeightDifference, adjust_levels
    >>> def levelled(b):
    ...     z = {"A": 0.0, "B": b, "C": 2.0, "D": 1.5}
    ...     return adjust_levels([HeightDifference(p, q, z[q] - z[p], 0.0005)
    ...                           for p in z for q in z if p < q], free=True)
    >>> compared = compare_level_epochs(levelled(1.0), levelled(0.98))
    >>> [m.mark for m in compared.answer.moved], compared.stable
    (['B'], ('A', 'C', 'D'))

    Raises EmptyInput, OutOfRange, Singular.
    """
    names = _common(first.names, second.names, marks)
    one, two = (
        net.heights_m[[net.number(n) for n in names]][:, None]
        for net in (first, second)
    )
    count = 1 if first.motions or second.motions else 0
    if count:
        two = two + (one - two).mean()
    return _compare(
        names, one, two, first.joint_covariance(names), second.joint_covariance(names),
        np.ones((len(names), count)), (alpha, power, global_alpha), tell_sigma_m,
    )  # fmt: skip


def _common(
    one: Sequence[str], two: Sequence[str], marks: Sequence[str]
) -> tuple[str, ...]:
    both = set(one) & set(two)
    missing = [n for n in marks if n not in both]
    if missing:
        raise OutOfRange(f"Mark {missing[0]} was not measured in both epochs.")
    names = tuple(marks) or tuple(n for n in one if n in both)
    if not names:
        raise EmptyInput("No mark was measured in both epochs.")
    return names


def _compare(
    names: tuple[str, ...],
    one: Array,
    two: Array,
    q1: Array,
    q2: Array,
    motions: Array,
    levels: tuple[float, float, float],
    tell_sigma_m: float,
) -> EpochAnswer:
    width = one.shape[1]
    moved = (two - one).ravel()
    weight = weight_without(q1 + q2, motions)
    rank = len(moved) - motions.shape[1]
    pull = weight @ moved
    evidence = Evidence(
        width=width,
        pull=pull,
        strength=weight,
        prior=np.full(len(names), float(np.linalg.eigvalsh(weight)[-1])),
        residual=np.zeros(0),
        redundancy=np.zeros(0),
        shared=np.zeros((0, len(moved))),
        squares=float(moved @ pull),
        dof=max(rank, 0),
    )

    def teller(group: Sequence[Suspicion]) -> Tell | None:
        shifts = _present_shifts(evidence, names, moved, q2, group)
        return tell(names, two, q2, shifts, tell_sigma_m)

    alpha, power, global_alpha = levels
    answer = conclude(evidence, names, (), alpha, power, global_alpha, teller)
    stable = _stable(answer, names, motions, width)
    shown = _displacements(answer, names, moved, q1 + q2, motions, stable)
    return EpochAnswer(answer, shown, stable)


def weight_without(q: Array, motions: Array) -> Array:
    """Pseudoinverse of a covariance of differences with free motions taken out.

    With N an orthonormal basis of the motions and S = I - N N', it is
    (S Q S + c N N')^-1 - N N' / c for any c. Raises Singular when the rest of the
    covariance has no full rank.
    """
    basis = np.linalg.qr(motions)[0]
    project = np.eye(len(q)) - basis @ basis.T
    size = max(float(np.trace(q)) / len(q), 1e-30)
    filled = project @ q @ project + size * basis @ basis.T
    lowest = float(np.linalg.eigvalsh(filled)[0])
    if lowest < 1e-10 * size:
        raise Singular(
            "The two epochs leave some mark without any uncertainty.",
            do="Compare free adjustments, and only marks that both epochs measured.",
        )
    weight: Array = np.linalg.inv(filled) - basis @ basis.T / size
    return 0.5 * (weight + weight.T)


def _present_shifts(
    evidence: Evidence,
    names: Sequence[str],
    moved: Array,
    q2: Array,
    group: Sequence[Suspicion],
) -> list[Shift]:
    """Where each explanation puts the marks now: the stable ones share both epochs."""
    shifts: list[Shift] = []
    for one in group:
        own = evidence.own(one.index)
        prior = float(evidence.prior[one.index])
        inverse, _ = inverse_of(evidence.strength[own, own], prior)
        rest = moved.copy()
        rest[own] -= inverse @ evidence.pull[own]
        change = -(q2 @ evidence.strength @ rest)
        shifts.append((names[one.index], change.reshape(-1, evidence.width)))
    return shifts


def _stable(
    answer: MovedAnswer, names: tuple[str, ...], motions: Array, width: int
) -> tuple[str, ...]:
    still = tuple(
        m.mark
        for m in answer.marks
        if m.verdict in (Verdict.PASS, Verdict.UNDECIDED, Verdict.NOT_TESTED)
    )
    needed = 2 if width == 2 and motions.shape[1] > 2 else 1
    return still if len(still) >= needed else names


def _displacements(
    answer: MovedAnswer,
    names: tuple[str, ...],
    moved: Array,
    q: Array,
    motions: Array,
    stable: tuple[str, ...],
) -> tuple[Displacement, ...]:
    """d and Q carried to the datum of the stable marks."""
    width = len(moved) // len(names)
    chosen = np.repeat([float(n in set(stable)) for n in names], width)
    transform = np.eye(len(moved))
    if motions.shape[1]:
        gathered = motions * chosen[:, None]
        transform -= motions @ np.linalg.inv(motions.T @ gathered) @ gathered.T
    shift, joint = transform @ moved, transform @ q @ transform.T
    shown = []
    for i, name in enumerate(names):
        own = slice(i * width, (i + 1) * width)
        block = joint[own, own]
        shape = ellipse(0.5 * (block + block.T)) if width == 2 else None
        shown.append(
            Displacement(name, shift[own], block, shape, answer.mark(name).verdict)
        )
    return tuple(shown)
