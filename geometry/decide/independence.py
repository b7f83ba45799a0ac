"""How independent a check is of the setting it checks: grade 0 to 3.

A check is worth what it does not share with the setting. What is not recorded counts
as shared, because nobody can show that it was not.
"""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass, field


@dataclass(frozen=True, slots=True)
class Means:
    """With what a stake was set, or a check was made.

    `setup`: identity of the setup; `control`: the marks it was positioned and oriented
    on, or the marks of the string; `method`: for instance "total station", "tape",
    "level", "satellite"; `instrument`: serial; `person`: who measured. None or empty:
    not recorded (for `control`: none used).
    """

    setup: str | None = None
    control: Collection[str] = field(default_factory=frozenset)
    method: str | None = None
    instrument: str | None = None
    person: str | None = None


@dataclass(frozen=True, slots=True)
class Independence:
    """`grade` 0 to 3, what both share, and the control marks both rest on."""

    grade: int
    shared: tuple[str, ...]
    shared_control: tuple[str, ...]
    reason: str


_REASONS = {
    0: "It was made in the same setup, so it repeats that setup's errors.",
    1: "It has a new setup but rests on the same control by the same method.",
    2: "It rests on other control, or another method was used.",
    3: "It rests on other control and another person measured.",
}


def independence(setting: Means, check: Means) -> Independence:
    """Grade of `check` by what it does not share with `setting`.

    0 same setup; 1 new setup, same control; 2 other control or other method; 3 other
    control and other person. Other control means none in common: one shared mark that
    moved shifts both. A check that uses no control (a tape between two stakes) has no
    *other* control; its grade comes from its method.

    >>> a = Means("S1", {"CP1", "CP2"}, "total station", "1234", "A")
    >>> b = Means("S9", {"CP3", "CP4"}, "total station", "1234", "B")
    >>> independence(a, b).grade, independence(a, a).grade
    (3, 0)
    """
    common = tuple(sorted(set(setting.control) & set(check.control)))
    other_control = bool(setting.control) and bool(check.control) and not common
    other_method = _differ(setting.method, check.method)
    other_person = _differ(setting.person, check.person)
    differs = {
        "setup": _differ(setting.setup, check.setup),
        "control": other_control or not check.control,
        "method": other_method,
        "instrument": _differ(setting.instrument, check.instrument),
        "person": other_person,
    }
    if not differs["setup"]:
        grade = 0
    elif other_control and other_person:
        grade = 3
    elif other_control or other_method:
        grade = 2
    else:
        grade = 1
    shared = tuple(name for name, apart in differs.items() if not apart)
    return Independence(grade, shared, common, _REASONS[grade])


def _differ(one: str | None, other: str | None) -> bool:
    return bool(one) and bool(other) and one != other
