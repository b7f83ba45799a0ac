"""Setting a stake: what holds it, where it stands, what became of the one before."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import tzinfo
from typing import Any

from django import forms

from stakes.actions.setting import AsStaked
from stakes.forms.field.asking import (
    FieldForm,
    LengthField,
    PassageFields,
    RemarkFields,
)
from stakes.queries.before_setting import BREAKS_NO_GROUND, HOLDS, Caution
from stakes.queries.setups import OpenSetup
from stakes.queries.state import MarkView
from stakes.record.lengths import Measured

SIDES = {
    "north": [("north", "north"), ("south", "south")],
    "east": [("east", "east"), ("west", "west")],
}


class SetForm(RemarkFields, PassageFields, FieldForm):
    """One stake for one mark. Values or differences, not both."""

    setup = forms.ChoiceField(
        label="Set from", required=False, widget=forms.RadioSelect
    )
    old = forms.ChoiceField(
        label="What became of the stake before",
        required=False,
        choices=[
            ("pulled", "pulled"),
            ("not found", "not found"),
            ("left and voided", "left standing and voided"),
        ],
        widget=forms.RadioSelect,
    )
    holds = forms.ChoiceField(label="What holds it", widget=forms.RadioSelect)
    holds_other = forms.CharField(label="Something else", required=False, max_length=80)
    elevation = LengthField("Elevation of the hub")
    off_north = LengthField("Off the design, north or south")
    off_north_side = forms.ChoiceField(
        label="Which way", choices=SIDES["north"], required=False
    )
    off_east = LengthField("Off the design, east or west")
    off_east_side = forms.ChoiceField(
        label="Which way", choices=SIDES["east"], required=False
    )
    northing = LengthField("Northing as staked")
    easting = LengthField("Easting as staked")
    capped = forms.BooleanField(label="Steel is capped or bent over", required=False)
    far = forms.BooleanField(
        label="These numbers are what was measured", required=False
    )
    acknowledged = forms.MultipleChoiceField(
        label="Read and understood",
        required=False,
        widget=forms.CheckboxSelectMultiple,
    )
    surface = forms.BooleanField(required=False, widget=forms.HiddenInput)

    def __init__(
        self,
        *args: Any,
        view: MarkView,
        setups: Sequence[OpenSetup],
        cautions: Sequence[Caution] = (),
        surface: bool = False,
        **more: Any,
    ) -> None:
        super().__init__(*args, **more)
        self.view = view
        record, fields = self.record, self.fields
        fields["setup"].choices = [
            *((str(s.row.key), setup_words(s, record.time_zone)) for s in setups),
            ("", "no setup recorded"),
        ]
        listed = sorted(BREAKS_NO_GROUND) if surface else HOLDS
        fields["holds"].choices = [
            *((h, h) for h in listed),
            ("other", "something else"),
        ]
        self.initial.setdefault("holds", listed[0])
        self.initial.setdefault("surface", surface)
        still_open = [s for s in setups if s.row.closed_at is None]
        if still_open:
            self.initial.setdefault("setup", str(still_open[0].row.key))
        if view.stake is None or view.standing == "gone":
            del fields["old"]
        self._drop_what_it_does_not_carry(view.plan.carries)
        if not self.data.get("far") and "far" not in self.asked_for():
            fields["far"].widget = forms.HiddenInput()
        if cautions:
            fields["acknowledged"].choices = [(c.sort, c.sort) for c in cautions]
        else:
            del fields["acknowledged"]

    def asked_for(self) -> frozenset[str]:
        """Questions that only a refusal brings up; shown once the form came back."""
        return frozenset({"far"} if self.is_bound else ())

    def _drop_what_it_does_not_carry(self, carries: str) -> None:
        gone = {
            "position": ("elevation",),
            "elevation": (
                "off_north",
                "off_north_side",
                "off_east",
                "off_east_side",
                "northing",
                "easting",
            ),
        }.get(carries, ())
        for name in gone:
            del self.fields[name]

    def clean(self) -> dict[str, Any]:
        said = super().clean() or self.cleaned_data
        if said.get("holds") == "other" and not said.get("holds_other"):
            self.add_error("holds_other", "Say what holds it.")
        return said

    def what_holds(self) -> str:
        said = self.cleaned_data
        return said["holds_other"] if said["holds"] == "other" else said["holds"]

    def staked(self) -> AsStaked:
        said = self.cleaned_data
        return AsStaked(
            northing=said.get("northing"),
            easting=said.get("easting"),
            off_north=_signed(
                said.get("off_north"), said.get("off_north_side") == "south"
            ),
            off_east=_signed(said.get("off_east"), said.get("off_east_side") == "west"),
        )


def _signed(length: Measured | None, other_way: bool) -> Measured | None:
    """The difference with its sign: south and west are negative, a minus turns it."""
    if length is None or not other_way:
        return length
    zero = Measured(text="0", unit=length.unit, nm="0")
    return Measured.of(zero.length.minus(length.length))


def setup_words(setup: OpenSetup, zone: tzinfo) -> str:
    """A setup in a list: what it is, since when, how long since its check."""
    row = setup.row
    opened = row.opened_at.astimezone(zone)  # type: ignore[union-attr]
    words = f"{row.sort}, {row.opened_by}, {opened:%a %H:%M}"
    if row.closed_at is not None:
        return f"{words}, closed {row.closed_at.astimezone(zone):%a %H:%M}"
    ago = f"checked {setup.ago} ago" if setup.ever_passed else "never checked"
    return f"{words}, {ago}{', in question' if setup.doubt else ''}"
