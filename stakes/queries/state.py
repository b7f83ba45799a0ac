"""The whole job at one moment: every mark with its standing and its joined trust.

Now and the past are the same fold (`stakes.standing`); now only starts from the same
narrow columns. The number of queries does not depend on the number of marks.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from datetime import datetime
from typing import Any
from uuid import UUID

from stakes.folds.marks import plan_rows, states_of
from stakes.folds.setups import effects_of as setup_effects
from stakes.folds.setups import opened_setups
from stakes.models import Mark, Record, Setup
from stakes.record import reading
from stakes.standing import setups as setup_fold
from stakes.standing.marks import MarkState, StakeState, Standing, Trust
from stakes.standing.trust import Judge, Judged, Leaning, worse


@dataclass(frozen=True, slots=True)
class MarkView:
    """One mark as a page shows it: the plan, the ground, and what may be trusted."""

    plan: Mark
    state: MarkState
    position: Judged
    elevation: Judged

    @property
    def key(self) -> UUID:
        return self.plan.key

    @property
    def label(self) -> str:
        return self.plan.label

    @property
    def stake(self) -> StakeState | None:
        return self.state.stake

    @property
    def standing(self) -> Standing:
        return self.state.standing

    @property
    def trust(self) -> Judged:
        """One word for a sign: the worse of what the mark carries."""
        if self.plan.carries == "position":
            return self.position
        if self.plan.carries == "elevation":
            return self.elevation
        return worse(self.position, self.elevation)

    @property
    def is_usable(self) -> bool:
        """Fit to work from: standing, checked and free of doubt."""
        up = self.standing is Standing.STANDING
        return up and self.trust.trust is Trust.CHECKED

    @property
    def held_back(self) -> bool:
        """Not to be built from: a gate was passed, or a hold is out."""
        return self.state.held or bool(self.stake and self.stake.held)


@dataclass(frozen=True, slots=True)
class JobState:
    """Every mark and setup of a job at (T, K)."""

    record: Record
    marks: Mapping[UUID, MarkView]
    setups: Mapping[UUID, Setup]
    judge: Judge
    at: datetime | None = None
    known: int | None = None
    by_label: Mapping[str, MarkView] = field(default_factory=dict)


def job_state(
    record: Record, at: datetime | None = None, known: int | None = None
) -> JobState:
    """What stood at T (`at`, None: now) by what was recorded up to K (`known`)."""
    upto: dict[str, Any] = {}
    if at is not None:
        upto["happened_at__lte"] = at
    if known is not None:
        upto["number__lte"] = known
    overruled = reading.corrections(record, known)
    states = states_of(record, overruled, **upto)
    plans = plan_rows(record, overruled, at, known)
    leanings, setups = _leanings(record, overruled, upto, at, known)
    judge = Judge(states, leanings)
    views = {
        key: MarkView(
            plan=plan,
            state=states.get(key) or MarkState(),
            position=judge.stake(key, "p"),
            elevation=judge.stake(key, "e"),
        )
        for key, plan in plans.items()
    }
    return JobState(
        record=record,
        marks=views,
        setups=setups,
        judge=judge,
        at=at,
        known=known,
        by_label={view.label: view for view in views.values()},
    )


def _leanings(
    record: Record,
    overruled: dict[int, int],
    upto: dict[str, Any],
    at: datetime | None,
    known: int | None,
) -> tuple[dict[UUID, Leaning], dict[UUID, Setup]]:
    effects = setup_effects(record, overruled, **upto)
    rows = opened_setups(record, overruled, at, known)
    leanings = {
        key: Leaning(setup_fold.fold(effects[key]), [UUID(m) for m in row.bears_on])
        for key, row in rows.items()
    }
    return leanings, rows
