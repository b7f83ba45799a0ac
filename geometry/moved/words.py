"""Which mark moved, in sentences a party chief understands, built from the answer."""

from __future__ import annotations

import math

from geometry.adjust.words import Say, compass, listed, metres, millimetres
from geometry.checked import Array
from geometry.ellipse import ellipse
from geometry.moved.answer import MarkReport, Move, MovedAnswer, Suspects
from geometry.moved.epochs import EpochAnswer
from geometry.verdicts import Verdict


def say_moved(
    answer: MovedAnswer, *, small: Say = millimetres, whole: Say = metres
) -> str:
    """The answer in a few sentences, never blaming one where two explain it.

    `small` words a small length and `whole` a distance between marks.

    >>> from geometry.adjust import HeightDifference, heights
    >>> from geometry.moved import which_benchmark_moved
    >>> marks = heights(["BM1", "BM2"], [10.0, 12.0], 0.002)
    >>> runs = [HeightDifference("BM1", "BM2", 2.0303, 0.001)] * 3
    >>> print(say_moved(which_benchmark_moved(marks, runs)))
    Either BM1 fell 30 mm or BM2 rose 30 mm: these measurements cannot tell. No \
measurement between these marks would tell: bring in another mark.
    """
    parts = [_move(move, small) for move in answer.moved]
    parts.extend(
        f"{words[0].upper()}{words[1:]} is wrong; measure it again."
        for words in answer.wrong_words
    )
    parts.extend(_suspects(group, small, whole) for group in answer.suspects)
    if answer.moved or answer.wrong_words or answer.suspects:
        if answer.left.verdict == Verdict.FAIL:
            parts.append("Even so the measurements do not all agree.")
    else:
        parts.append(_nothing(answer, small))
    if answer.not_tested and answer.verdict != Verdict.NOT_TESTED:
        parts.append(f"Not tested: {listed(answer.not_tested)}.")
    return " ".join(parts)


def say_mark(report: MarkReport, *, small: Say = millimetres) -> str:
    """One mark: its verdict, and the smallest move that would have been seen.

    >>> from geometry.adjust import HeightDifference, heights
    >>> from geometry.moved import which_benchmark_moved
    >>> marks = heights(["BM1", "BM2", "BM3"], [10.0, 12.0, 11.0], 0.001)
    >>> runs = [HeightDifference("BM1", "BM2", 2.0, 0.001)]
    >>> say_mark(which_benchmark_moved(marks, runs).mark("BM3"))
    'BM3: No spare measurement reaches it.'
    """
    if report.verdict != Verdict.PASS or report.smallest_m is None:
        return f"{report.mark}: {report.reason}"
    seen = small(report.smallest_m)
    return f"{report.mark}: no move found; one of {seen} would have been seen."


def say_epochs(
    compared: EpochAnswer, *, small: Say = millimetres, whole: Say = metres
) -> str:
    """The comparison of two epochs in a few sentences.

    >>> from geometry.adjust import HeightDifference, adjust_levels
    >>> from geometry.moved import compare_level_epochs
    >>> def levelled(b):
    ...     z = {"A": 0.0, "B": b, "C": 2.0, "D": 1.5}
    ...     return adjust_levels([HeightDifference(p, q, z[q] - z[p], 0.0005)
    ...                           for p in z for q in z if p < q], free=True)
    >>> say_epochs(compare_level_epochs(levelled(1.0), levelled(0.98)))
    'B fell 20 mm, give or take 1 mm. Compared with A, C and D, which stand.'
    """
    words = say_moved(compared.answer, small=small, whole=whole)
    if compared.verdict != Verdict.FAIL:
        return words
    return f"{words} Compared with {listed(compared.stable)}, which stand."


def _way(move_m: Array, small: Say) -> str:
    if len(move_m) == 1:
        up = "rose" if move_m[0] > 0 else "fell"
        return f"{up} {small(abs(float(move_m[0])))}"
    size = math.hypot(*move_m)
    return f"moved {small(size)} to the {compass(*(float(v) for v in move_m))}"


def _move(move: Move, small: Say) -> str:
    if len(move.move_m) == 1:
        spread = 1.96 * math.sqrt(float(move.covariance_m2[0, 0]))
    elif move.ellipse_95 is None:
        return (
            f"{move.mark} {_way(move.move_m, small)}, as far as such a small move can "
            "be measured."
        )
    else:
        spread = ellipse(move.covariance_m2).semi_major_m
    return f"{move.mark} {_way(move.move_m, small)}, give or take {small(spread)}."


def _suspects(group: Suspects, small: Say, whole: Say) -> str:
    choices = [f"{m.mark} {_way(m.move_m, small)}" for m in group.moves]
    choices.extend(f"the {words} is wrong" for words in group.measurement_words)
    words = f"Either {listed(choices, 'or')}: these measurements cannot tell."
    if group.measurement_words:
        again = listed([f"the {w}" for w in group.measurement_words])
        return f"{words} Measure {again} again."
    if group.tell is None:
        return (
            f"{words} No measurement between these marks would tell: bring in "
            "another mark."
        )
    expected = [f"{whole(v)} if it is {name}" for name, v in group.tell.expected_m]
    return f"{words} Measure the {group.tell.words}: {listed(expected)}."


def _nothing(answer: MovedAnswer, small: Say) -> str:
    if answer.verdict != Verdict.PASS:
        return answer.reason
    worst = [m.smallest_m for m in answer.marks if m.verdict == Verdict.PASS]
    seen = [w for w in worst if w is not None]
    if not seen:
        return answer.reason
    return (
        f"No mark moved; a move of {small(max(seen))} would have been seen at "
        f"{listed([m.mark for m in answer.marks if m.smallest_m is not None])}."
    )
