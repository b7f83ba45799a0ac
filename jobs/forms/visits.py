"""Forms of visits: plan, move, on site, wait, outcome, leave, the day's ticket."""

from __future__ import annotations

from typing import Any, get_args

from django import forms

from jobs.forms.asking import LONG, SIGNATURES, Keyed, LocalMoment, MarkList, when
from jobs.kinds.visits import Outcome, TaskSort
from jobs.models import Crew, Request, Visit
from stakes.models import Record


class VisitForm(Keyed):
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
        self.fields["requests"].label_from_instance = request_words


def request_words(request: Request) -> str:
    """A request in a list to choose from."""
    count = len(request.listed)
    marks = f", {count} mark{'' if count == 1 else 's'}" if count else ""
    words = f": {request.words[:60]}" if request.words else ""
    return f"{request.company_name}, {request.sort}{marks}{words}"


class VisitMoveForm(VisitForm):
    """A visit planned anew: its tasks stay unless they are unticked."""

    def __init__(
        self, *args: Any, record: Record, requests: Any, visit: Visit, **kwargs: Any
    ) -> None:
        super().__init__(*args, record=record, requests=requests, **kwargs)
        tasks = [(t["task"], task_words(t)) for t in visit.tasks]
        self.fields["tasks"] = forms.MultipleChoiceField(
            choices=tasks,
            label="Its tasks",
            required=False,
            widget=forms.CheckboxSelectMultiple,
        )
        self.fields["requests"].label = "More requests to answer"
        self.order_fields(["key", "crew", "starts_at", "ends_at", "tasks"])


def task_words(task: dict[str, Any]) -> str:
    """A task of a visit in a list to choose from."""
    words = task.get("words", "")
    return f"{task['sort'].capitalize()}{f': {words}' if words else ''}"


class ArriveForm(Keyed):
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


class LeaveForm(Keyed):
    remark = forms.CharField(label="Remark", required=False, max_length=500)

    def __init__(self, *args: Any, record: Record, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.fields["at"] = when(record, "Left at")


class StandByForm(Keyed):
    reason = forms.CharField(label="Why", max_length=500)

    def __init__(self, *args: Any, record: Record, **kwargs: Any) -> None:
        super().__init__(*args, **kwargs)
        self.fields["since"] = LocalMoment(record=record, label="From")
        self.fields["until"] = LocalMoment(record=record, label="To")
        self.order_fields(["since", "until", "reason"])


class OutcomeForm(Keyed):
    outcome = forms.ChoiceField(
        label="How it ended",
        choices=[(o, o.capitalize()) for o in get_args(Outcome)],
        widget=forms.RadioSelect,
    )
    sent_away_by = forms.CharField(
        label="Sent away by whom", required=False, max_length=120
    )
    remark = forms.CharField(label="Remark", required=False, max_length=500)


class TicketForm(Keyed):
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
