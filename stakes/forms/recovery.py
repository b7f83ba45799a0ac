"""The form that records a mark put back: the way, its check, the old stake's fate."""

from __future__ import annotations

from typing import Any

from django import forms

from stakes.forms.field.asking import (
    FieldForm,
    LengthField,
    PassageFields,
    RemarkFields,
)
from stakes.queries.setups import OpenSetup
from stakes.queries.state import JobState, MarkView

OLD = [
    ("not found", "Not found"),
    ("pulled", "Pulled"),
    ("left and voided", "Left in the ground and voided"),
]


class PutBackForm(RemarkFields, PassageFields, FieldForm):
    """`angle` says that the way's own check is an angle, `check` that it has one."""

    late = ("at", "remark", "photos")

    def __init__(
        self,
        *args: Any,
        state: JobState,
        view: MarkView,
        setups: list[OpenSetup],
        otherwise: bool,
        needs_reason: bool,
        angle: bool,
        check: bool,
        **more: Any,
    ) -> None:
        super().__init__(*args, state=state, **more)
        listed = [("", "no instrument set up: tape or string")]
        listed += [
            (str(s.row.key), f"{s.row.sort}, checked {s.ago} ago") for s in setups
        ]
        own: dict[str, forms.Field] = {}
        if otherwise:
            own["described"] = forms.CharField(
                label="How it was put back",
                max_length=500,
                widget=forms.Textarea(attrs={"rows": 3}),
            )
        own["setup"] = forms.ChoiceField(
            label="Set from which setup", choices=listed, required=False
        )
        own["holds"] = forms.CharField(
            label="What holds it", max_length=80, initial="hub and tack"
        )
        if check and angle:
            own["measured_angle"] = forms.CharField(
                label="The check measured, degrees-minutes-seconds",
                max_length=30,
                required=False,
            )
        elif check:
            own["measured"] = LengthField("The check measured")
        own["old"] = forms.ChoiceField(
            label="What became of the old stake", choices=OLD, widget=forms.RadioSelect
        )
        if view.stake is not None and view.stake.built_from:
            own["match"] = forms.CharField(
                label="Work was built from the old stake: hold design, or match the work?",
                max_length=500,
                help_text="The licensed surveyor decides; write the decision.",
            )
        own["reason"] = forms.CharField(
            label="Why this way all the same" if needs_reason else "A word of reason",
            max_length=500,
            required=needs_reason,
        )
        for name, field in own.items():
            if isinstance(field, LengthField):
                field.unit = state.record.length_unit
                field.label = f"{field.label}, {field.unit}"
            self.fields[name] = field
        self.order_fields(own)
