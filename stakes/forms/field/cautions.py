"""Locate tickets and hazards of a site; accepting what passed a gate."""

from __future__ import annotations

import uuid
from datetime import datetime
from typing import Any, get_args

from django import forms

from stakes.forms.field.asking import FieldForm, moment_typed
from stakes.forms.field.condition import MarksField
from stakes.kinds.cautions import Hazard, OwnerAnswer, Private, UtilityOwner
from stakes.models import Zone
from stakes.queries.locates import Ticket

OWNERS = 6
MOMENT = {"type": "datetime-local"}


class LocateForm(FieldForm):
    """A utility locate and what the owners answered."""

    number = forms.CharField(label="Ticket number", max_length=60)
    whose = forms.CharField(
        label="Whose ticket", max_length=120, help_text="Who asked for the locate."
    )
    area = forms.CharField(
        label="Where", max_length=300, help_text="As the ticket says."
    )
    zone = forms.ChoiceField(label="Covers", required=False)
    valid_from = forms.CharField(
        label="Valid from", widget=forms.DateTimeInput(attrs=dict(MOMENT))
    )
    valid_to = forms.CharField(
        label="Valid to", widget=forms.DateTimeInput(attrs=dict(MOMENT))
    )
    private_lines = forms.ChoiceField(
        label="Private lines",
        choices=[(p, p) for p in get_args(Private)],
        initial="not asked",
        widget=forms.RadioSelect,
        help_text="Lines the one-call centre does not know: ask the owner of the site.",
    )
    private_by = forms.CharField(label="Who said so", required=False, max_length=120)

    def __init__(self, *args: Any, ticket: Ticket | None = None, **more: Any) -> None:
        owners: dict[str, forms.Field] = {}
        for n in range(1, OWNERS + 1):
            owners[f"owner{n}"] = forms.CharField(
                label=f"Owner {n}", required=False, max_length=120
            )
            owners[f"answer{n}"] = forms.ChoiceField(
                label="Answer",
                required=False,
                initial="no answer yet",
                choices=[(a, a) for a in get_args(OwnerAnswer)],
            )
        self.base_fields = {**self.base_fields, **owners}
        super().__init__(*args, **more)
        zones = Zone.objects.filter(record=self.record, closed=True).order_by("name")
        self.fields["zone"].choices = [
            ("", "the whole job"),
            *((str(z.key), f"{z.sort} {z.name}") for z in zones),
        ]
        if ticket is not None:
            self._start_from(ticket)

    def owner_rows(self) -> list[tuple[forms.BoundField, forms.BoundField]]:
        return [(self[f"owner{n}"], self[f"answer{n}"]) for n in range(1, OWNERS + 1)]

    def about(self) -> list[forms.BoundField]:
        names = ("number", "whose", "area", "zone", "valid_from", "valid_to")
        return [self[name] for name in names]

    def clean_valid_from(self) -> datetime | None:
        return moment_typed(self.cleaned_data["valid_from"], self.record)

    def clean_valid_to(self) -> datetime | None:
        return moment_typed(self.cleaned_data["valid_to"], self.record)

    def clean_zone(self) -> uuid.UUID | None:
        text = self.cleaned_data["zone"]
        return uuid.UUID(text) if text else None

    def facts(self) -> dict[str, Any]:
        said = self.cleaned_data
        names = (
            "number",
            "whose",
            "area",
            "zone",
            "valid_from",
            "valid_to",
            "private_lines",
            "private_by",
        )
        owners = [
            UtilityOwner(owner=said[f"owner{n}"], answer=said[f"answer{n}"])
            for n in range(1, OWNERS + 1)
            if said.get(f"owner{n}")
        ]
        return {**{name: said[name] for name in names}, "owners": owners}

    def _start_from(self, ticket: Ticket) -> None:
        fact, zone = ticket.fact, self.record.time_zone
        start = {
            "number": fact.number,
            "whose": fact.whose,
            "area": fact.area,
            "zone": str(fact.zone or ""),
            "valid_from": f"{fact.valid_from.astimezone(zone):%Y-%m-%dT%H:%M}",
            "valid_to": f"{fact.valid_to.astimezone(zone):%Y-%m-%dT%H:%M}",
            "private_lines": fact.private_lines,
            "private_by": fact.private_by,
        }
        for n, owner in enumerate(fact.owners[:OWNERS], 1):
            start |= {f"owner{n}": owner.owner, f"answer{n}": owner.answer}
        for name, value in start.items():
            self.initial.setdefault(name, value)


class HazardForm(FieldForm):
    """A hazard of the site, so that crews are told."""

    sort = forms.ChoiceField(
        label="Hazard",
        choices=[(h, h) for h in get_args(Hazard)],
        widget=forms.RadioSelect,
    )
    words = forms.CharField(label="Where and what", max_length=300)


class HazardGoneForm(FieldForm):
    """A hazard that is no longer there."""

    words = forms.CharField(label="How it is known", max_length=300)


class AcceptForm(FieldForm):
    """The surveyor's acceptance of what passed a gate."""

    mark = MarksField(required=True, error_messages={"required": "Tick at least one."})
    reason = forms.CharField(
        label="Why they are good to use all the same",
        max_length=500,
        widget=forms.Textarea(attrs={"rows": 3}),
    )
