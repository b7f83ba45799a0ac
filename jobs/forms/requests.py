"""Forms of requests: ask for stakes, decide, talk, answer the cost."""

from __future__ import annotations

from typing import Any, get_args

from django import forms

from jobs.defaults.payers import CAUSES, PAYERS
from jobs.forms.asking import LONG, Keyed, LocalMoment, MarkList
from jobs.kinds.requests import AskSort
from stakes.models import Record

BUILT = [("no", "No"), ("yes", "Yes"), ("unknown", "Not known")]


class RequestForm(Keyed):
    sort = forms.ChoiceField(
        label="What is asked",
        choices=[(s, s.capitalize()) for s in get_args(AskSort)],
        initial="re-stake",
    )

    def __init__(
        self, *args: Any, record: Record, companies: Any = None, **kwargs: Any
    ) -> None:
        super().__init__(*args, **kwargs)
        if companies is not None:
            self.fields["company"] = forms.ModelChoiceField(
                companies, label="For which company"
            )
            self.fields["at"] = LocalMoment(
                record=record,
                label="Received by telephone at",
                required=False,
                help_text="Empty: now. The notice runs from here.",
            )
        self.fields |= {
            "listed": MarkList(record=record, label="Which marks", required=False),
            "built": forms.ChoiceField(
                label="Has anything been built from them?",
                required=False,
                choices=BUILT,
                widget=forms.RadioSelect,
                help_text="If so, telephone the survey firm now; do not wait for this.",
            ),
            "built_from": forms.CharField(
                label="What was built", required=False, max_length=500
            ),
            "words": forms.CharField(
                label="In your words",
                required=False,
                max_length=2000,
                widget=forms.Textarea(attrs=LONG),
                help_text="What to lay out, limits, offset and side, grade to what.",
            ),
            "needed_by": LocalMoment(record=record, label="Needed by", required=False),
            "last_seen": forms.CharField(
                label="When were they last seen standing?",
                required=False,
                max_length=200,
            ),
            "cause": forms.ChoiceField(
                label="What happened to them, as you see it",
                required=False,
                choices=[("", "not known"), *((c, c) for c in CAUSES)],
            ),
            "sheet_words": forms.CharField(
                label="Sheet and revision in use", required=False, max_length=200
            ),
            "site_ready": forms.CharField(
                label="Is the site ready? Access, other trades, grade",
                required=False,
                max_length=300,
            ),
            "phone": forms.CharField(
                label="Telephone on site",
                required=False,
                max_length=40,
                widget=forms.TextInput(attrs={"type": "tel"}),
            ),
            "photo": forms.FileField(label="Photo", required=False),
        }

    def clean(self) -> dict[str, Any]:
        """Words alone say yes; "no" leaves none behind that would raise an alarm."""
        said = super().clean()
        built = said.pop("built", "")
        if built == "yes" and not said.get("built_from"):
            self.add_error("built_from", "Say what was built, and from which stakes.")
        if built == "no":
            said["built_from"] = ""
        return said


class AcceptForm(Keyed):
    payer = forms.ChoiceField(
        label="Who bears the cost",
        required=False,
        choices=[("", "not said yet"), *((p, p) for p in PAYERS)],
    )
    payer_reason = forms.CharField(
        label="By which term", required=False, max_length=300
    )
    words = forms.CharField(label="A word to who asked", required=False, max_length=500)

    def __init__(self, *args: Any, record: Record, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.fields["promised_for"] = LocalMoment(
            record=record,
            label="Promised for",
            required=False,
            help_text="Empty: accepted without a promised time.",
        )
        self.order_fields(["promised_for"])


class ReasonForm(Keyed):
    reason = forms.CharField(
        label="Reason", max_length=1000, widget=forms.Textarea(attrs=LONG)
    )


class WordsForm(Keyed):
    words = forms.CharField(
        label="Your words", max_length=2000, widget=forms.Textarea(attrs=LONG)
    )


class CostForm(Keyed):
    accepted = forms.ChoiceField(
        label="The cost of this work",
        choices=[("yes", "We accept it"), ("no", "We dispute it")],
        widget=forms.RadioSelect,
    )
    words = forms.CharField(label="Why", required=False, max_length=1000)
