"""Forms of requests, visits, handovers and holds. Times are those of the site."""

from __future__ import annotations

from datetime import datetime, timedelta
from typing import Any, get_args
from uuid import UUID

from django import forms

from jobs.defaults.payers import CAUSES, PAYERS
from jobs.kinds.requests import AskSort
from jobs.kinds.visits import Outcome, TaskSort
from jobs.models import Company, CompanyKind, Crew
from stakes.models import Mark, Record
from stakes.queries.drawing import natural

LONG = {"rows": 3}
PARTIES = (CompanyKind.GENERAL, CompanyKind.TRADE, CompanyKind.OWNER)


class LocalMoment(forms.DateTimeField):
    """A time of the site, chosen with the device's own control."""

    def __init__(self, *, record: Record, **more: Any) -> None:
        widget = forms.DateTimeInput(
            attrs={"type": "datetime-local"}, format="%Y-%m-%dT%H:%M"
        )
        super().__init__(widget=widget, **more)
        self.record = record
        self.error_messages["invalid"] = (
            "This is not a date and time. Write it as 2026-03-02T16:40."
        )

    def to_python(self, value: Any) -> datetime | None:
        moment = super().to_python(value)
        if moment is None:
            return None
        # Django reads it in the server's zone; the clock on the site is what was meant.
        return moment.replace(tzinfo=self.record.time_zone)


class MarkList(forms.CharField):
    """Numbers of marks as people write them: 101, 104-107, B2."""

    def __init__(self, *, record: Record, **more: Any) -> None:
        more.setdefault("widget", forms.Textarea(attrs={"rows": 2}))
        more.setdefault("help_text", "Numbers with commas; 101-108 for a run.")
        super().__init__(max_length=5000, **more)
        self.record = record

    def clean(self, value: Any) -> list[UUID]:
        text = super().clean(value) or ""
        found = Mark.objects.filter(record=self.record)
        known = dict(found.values_list("label", "key"))
        keys: dict[UUID, None] = {}
        for piece in (p.strip() for p in text.replace("\n", ",").split(",")):
            if piece:
                keys |= dict.fromkeys(self._keys(piece, known))
        return list(keys)

    def _keys(self, piece: str, known: dict[str, UUID]) -> list[UUID]:
        if piece in known:
            return [known[piece]]
        first, dash, last = piece.partition("-")
        first, last = first.strip(), last.strip()
        if dash and first.isdecimal() and last.isdecimal() and len(first + last) < 20:
            low, high = int(first), int(last)
            run = [label for label in known if label.isdecimal()]
            inside = [label for label in run if low <= int(label) <= high]
            if inside:
                return [known[label] for label in sorted(inside, key=natural)]
        raise forms.ValidationError(
            f"There is no mark {piece[:40]!r} on this job. Copy the number from the "
            "stake or the list of marks."
        )


class RequestForm(forms.Form):
    key = forms.UUIDField(widget=forms.HiddenInput, required=False)
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
        self.fields |= {
            "listed": MarkList(record=record, label="Which marks", required=False),
            "words": forms.CharField(
                label="In your words",
                required=False,
                max_length=2000,
                widget=forms.Textarea(attrs=LONG),
                help_text="What to lay out, limits, offset and side, grade to what.",
            ),
            "needed_by": LocalMoment(record=record, label="Needed by", required=False),
            "built_from": forms.CharField(
                label="Has anything been built from them?",
                required=False,
                max_length=500,
                help_text="If so, telephone the survey firm now; do not wait for this.",
            ),
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
                label="Telephone on site", required=False, max_length=40
            ),
            "photo": forms.FileField(label="Photo", required=False),
        }


class AcceptForm(forms.Form):
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


class ReasonForm(forms.Form):
    reason = forms.CharField(
        label="Reason", max_length=1000, widget=forms.Textarea(attrs=LONG)
    )


class WordsForm(forms.Form):
    words = forms.CharField(
        label="Your words", max_length=2000, widget=forms.Textarea(attrs=LONG)
    )


class CostForm(forms.Form):
    accepted = forms.ChoiceField(
        label="The cost of this work",
        choices=[("yes", "We accept it"), ("no", "We dispute it")],
        widget=forms.RadioSelect,
    )
    words = forms.CharField(label="Why", required=False, max_length=1000)


class VisitForm(forms.Form):
    crew = forms.ModelChoiceField(Crew.objects.none(), label="Crew", required=False)

    def __init__(
        self, *args: Any, record: Record, requests: Any, **kwargs: Any
    ) -> None:
        super().__init__(*args, **kwargs)
        crews = Crew.objects.filter(is_active=True).select_related("party_chief")
        self.fields["crew"].queryset = crews
        self.fields |= {
            "starts_at": LocalMoment(record=record, label="From"),
            "ends_at": LocalMoment(record=record, label="To", required=False),
            "requests": forms.ModelMultipleChoiceField(
                requests,
                label="Requests to answer",
                required=False,
                widget=forms.CheckboxSelectMultiple,
            ),
            "sort": forms.ChoiceField(
                label="Another task",
                required=False,
                choices=[("", "none"), *((s, s) for s in get_args(TaskSort))],
            ),
            "listed": MarkList(record=record, label="For which marks", required=False),
            "words": forms.CharField(
                label="A word to the crew", required=False, max_length=1000
            ),
        }
        label = self.fields["requests"]
        label.label_from_instance = lambda r: (
            f"{r.company_name}: {r.sort}, {r.words[:60]}"
        )


class ArriveForm(forms.Form):
    members = forms.CharField(
        label="Who is there, with which duty",
        required=False,
        max_length=1000,
        widget=forms.Textarea(attrs=LONG),
        help_text="One a line: name, duty.",
    )
    weather = forms.CharField(label="Weather", required=False, max_length=200)
    instruments = forms.CharField(
        label="Instrument checks of the day",
        required=False,
        max_length=2000,
        widget=forms.Textarea(attrs=LONG),
        help_text="One a line: instrument, serial, what was checked and read.",
    )
    told_operators = forms.CharField(
        label="Machine operators told", required=False, max_length=200
    )

    def __init__(self, *args: Any, record: Record, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.fields["at"] = when(record, "Arrived at")


class LeaveForm(forms.Form):
    remark = forms.CharField(label="Remark", required=False, max_length=500)

    def __init__(self, *args: Any, record: Record, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.fields["at"] = when(record, "Left at")


class StandByForm(forms.Form):
    reason = forms.CharField(label="Why", max_length=500)

    def __init__(self, *args: Any, record: Record, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.fields["since"] = LocalMoment(record=record, label="From")
        self.fields["until"] = LocalMoment(record=record, label="To")
        self.order_fields(["since", "until", "reason"])


class OutcomeForm(forms.Form):
    outcome = forms.ChoiceField(
        label="How it ended",
        choices=[(o, o.capitalize()) for o in get_args(Outcome)],
        widget=forms.RadioSelect,
    )
    sent_away_by = forms.CharField(
        label="Sent away by whom", required=False, max_length=120
    )
    remark = forms.CharField(label="Remark", required=False, max_length=500)


SIGNATURES = [
    ("signed", "Signed"),
    ("declined", "Declined"),
    ("absent", "Nobody was there"),
]


class TicketForm(forms.Form):
    signature = forms.ChoiceField(
        label="The day's ticket", choices=SIGNATURES, widget=forms.RadioSelect
    )
    signed_by = forms.CharField(
        label="Name of the superintendent", required=False, max_length=120
    )
    company = forms.CharField(label="Company", required=False, max_length=120)
    words = forms.CharField(
        label="Their words, or why declined", required=False, max_length=1000
    )


class HandOverForm(forms.Form):
    signature = forms.ChoiceField(
        label="How it was received", choices=SIGNATURES, widget=forms.RadioSelect
    )
    to_whom = forms.CharField(label="To whom", required=False, max_length=120)
    words = forms.CharField(
        label="Their words, or why declined", required=False, max_length=1000
    )
    left_with = forms.CharField(
        label="Left with, or sent to", required=False, max_length=120
    )
    in_spite = forms.BooleanField(
        label="It was handed over already, in spite of what is lacking",
        required=False,
        help_text="What is lacking stands on the sheet and in the record.",
    )

    def __init__(self, *args: Any, record: Record, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        seated = record.seats.values("company")
        parties = Company.objects.filter(pk__in=seated, kind__in=PARTIES)
        self.fields["company"] = forms.ModelChoiceField(
            parties, label="To which company"
        )
        self.fields["listed"] = MarkList(record=record, label="Which stakes")
        self.order_fields(["company", "listed"])


class AnswerHandoverForm(forms.Form):
    acknowledged = forms.ChoiceField(
        label="These stakes",
        choices=[("yes", "We received them"), ("no", "We decline them")],
        widget=forms.RadioSelect,
    )
    words = forms.CharField(label="Why declined", required=False, max_length=1000)


class HoldForm(forms.Form):
    words = forms.CharField(
        label="What the holders read",
        max_length=1000,
        widget=forms.Textarea(attrs=LONG),
    )
    reason = forms.CharField(
        label="Reason, for the record",
        max_length=1000,
        widget=forms.Textarea(attrs=LONG),
    )

    def __init__(self, *args: Any, record: Record, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.fields["listed"] = MarkList(record=record, label="Which marks")
        self.order_fields(["listed"])


class LiftForm(ReasonForm):
    def __init__(self, *args: Any, record: Record, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.fields["listed"] = MarkList(record=record, label="Lift it for")
        self.order_fields(["listed"])


def when(record: Record, label: str) -> LocalMoment:
    """A time that is now unless said otherwise."""
    field = LocalMoment(record=record, label=label, required=False)
    field.help_text = "Empty: now."
    return field


def in_an_hour(record: Record, moment: datetime) -> datetime:
    return moment.astimezone(record.time_zone) + timedelta(hours=1)
