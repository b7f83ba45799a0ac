"""What may be said by program: for each kind of entry the action that says it.

The facts of an item are the arguments of the action, under the same names: what a
person measured or saw. Verdicts, labels, gates and everything else that follows are
worked out by the same action the pages use, and are never taken from outside.
"""

from __future__ import annotations

import inspect
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from functools import cached_property
from typing import Any, get_type_hints
from uuid import UUID

import msgspec

from jobs.actions import handovers, holds, requests, visits
from jobs.api.plain import refuse_unknown_names, unreadable
from jobs.models import Company
from jobs.queries.companies import companies_seen
from jobs.rights import SEATED, Role
from stakes.actions import (
    answering,
    cautions,
    checking,
    condition,
    control,
    gates,
    questions,
    retiring,
    setting,
    setups,
    sheets,
)
from stakes.actions.correcting import needed
from stakes.can import Asked, Can
from stakes.record import Refused

GIVEN = ("record", "by", "at", "key")
"""Said by the item itself or by who sends it, never among the facts."""

WORKED_OUT = ("more_gates", "way", "provisional", "carries", "sent_by_rule")
"""Parameters by which one action hands something to another."""


@dataclass(frozen=True)
class Act:
    """One kind of entry, the action that says it, and the right that takes."""

    kind: str
    do: Callable[..., object]
    right: Can
    renamed: Mapping[str, str] = field(default_factory=dict)
    fill: Callable[[Asked, dict[str, Any]], None] | None = None

    @cached_property
    def facts(self) -> type[msgspec.Struct]:
        """The facts of an item of this kind, as a type with the action's own names."""
        hints = get_type_hints(self.do)
        fields: list[Any] = []
        for name, parameter in inspect.signature(self.do).parameters.items():
            if name in GIVEN or name in WORKED_OUT:
                continue
            sort = UUID if hints[name] is Company else hints[name]
            if parameter.default is parameter.empty:
                optional = self.fill is not None and hints[name] is Company
                fields.append((name, sort | None, None) if optional else (name, sort))
            else:
                fields.append((name, sort, parameter.default))
        return msgspec.defstruct(
            "".join(word.capitalize() for word in self.kind.split()),
            fields,
            kw_only=True,
            forbid_unknown_fields=True,
            rename=dict(self.renamed),
        )

    def arguments(self, who: Asked, facts: dict[str, Any]) -> dict[str, Any]:
        """The action's arguments; Refused, naming what cannot be read."""
        try:
            read = msgspec.convert(facts, self.facts)
        except msgspec.ValidationError as error:
            raise unreadable(f"{error}.") from error
        refuse_unknown_names(facts, msgspec.to_builtins(read))
        said = {name: getattr(read, name) for name in read.__struct_fields__}
        if self.fill is not None:
            self.fill(who, said)
        return said


def _askers_company(who: Asked, said: dict[str, Any]) -> None:
    """A contractor asks for the own company; the office names the one that asked."""
    own = companies_seen(who)
    said["company"] = _company(who, said["company"] if own is None else who.company)


def _named_company(who: Asked, said: dict[str, Any]) -> None:
    said["company"] = _company(who, said["company"])


def _company(who: Asked, key: UUID | str | None) -> Company:
    kinds = [kind for kind, roles in SEATED.items() if Role.CONTRACTOR in roles]
    seated = who.record.seats.values("company")
    found = Company.objects.filter(pk=key, pk__in=seated, kind__in=kinds).first()
    if found is None:
        raise Refused(
            "The company is none of the contractors seated on this job.",
            do="Name it by its key.",
            field="company",
            code="no company",
        )
    return found


_LISTED = {"marks": "listed"}


def _act(
    kind: str,
    do: Callable[..., object],
    right: Can | None = None,
    *,
    renamed: Mapping[str, str] | None = None,
    fill: Callable[[Asked, dict[str, Any]], None] | None = None,
) -> Act:
    return Act(kind, do, right or needed(kind), renamed or {}, fill)


def _table() -> dict[str, Act]:
    return {
        act.kind: act
        for act in (
            # The ground.
            _act("seen", condition.see_marks, renamed=_LISTED),
            _act("destroyed", condition.report_gone, renamed=_LISTED),
            _act("built from", condition.note_built_from, renamed=_LISTED),
            _act("foreign mark found", condition.find_foreign_mark),
            _act("set", setting.set_stake),
            _act("setup opened", setups.open_setup),
            _act("setup re-checked", setups.recheck_setup),
            _act("setup closed", setups.close_setup),
            _act("checked", checking.check_stakes),
            _act("hazard flagged", cautions.flag_hazard),
            _act("locate ticket recorded", cautions.record_locate),
            # The surveyor's and the office's word.
            _act("gate accepted", gates.accept_gate, renamed=_LISTED),
            _act("value adopted", control.adopt_value),
            _act("trust answered", answering.answer_doubt, renamed=_LISTED),
            _act("retired", retiring.retire_marks, renamed=_LISTED),
            _act("superseded", retiring.supersede_marks, renamed=_LISTED),
            _act("question asked", questions.ask_question),
            _act("question answered", questions.answer_question),
            _act("direction given", questions.give_direction),
            _act("direction settled", questions.settle_direction),
            _act("sheet read", sheets.read_sheet),
            # The day.
            _act("visit planned", visits.plan_visit),
            _act("visit cancelled", visits.cancel_visit),
            _act("crew arrived", visits.arrive, Can.RECORD),
            _act("crew stood by", visits.stand_by, Can.RECORD),
            _act("crew left", visits.leave, Can.RECORD),
            _act("task ended", visits.end_task, Can.RECORD),
            _act("day ticket closed", visits.close_ticket, Can.RECORD),
            _act(
                "request made",
                requests.make_request,
                Can.REQUEST,
                fill=_askers_company,
            ),
            _act("request accepted", requests.accept_request),
            _act("request declined", requests.decline_request),
            _act("handed over", handovers.hand_over, fill=_named_company),
            _act("hold sent", holds.send_hold),
            _act("hold lifted", holds.lift_hold),
        )
    }


_ACTS: dict[str, Act] = {}


def acts() -> dict[str, Act]:
    """Every act by its kind; made at first use, when all kinds have told their right."""
    if not _ACTS:
        _ACTS.update(_table())
    return _ACTS


def act_called(kind: str) -> Act:
    found = acts().get(kind)
    if found is None:
        raise Refused(
            f"Nothing of the kind {kind!r} is said by program.",
            do="Use one of the kinds listed at /api/kinds/, or the page it has.",
            code="unknown kind",
        )
    return found
