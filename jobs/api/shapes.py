"""What goes over the wire, as the OpenAPI description tells it; a test holds the answers
to these shapes. They describe and never convert: reading is done in `items`."""

from __future__ import annotations

from typing import Any

from drf_spectacular.utils import OpenApiParameter
from rest_framework import serializers as s

OUTCOMES = ("recorded", "already", "conflict", "refused")
WAITING = ("recorded", "already", "conflict", "waiting", "set aside")


def whole(name: str, words: str) -> OpenApiParameter:
    return OpenApiParameter(name, int, description=words)


def word(name: str, words: str) -> OpenApiParameter:
    return OpenApiParameter(name, str, description=words)


LIMIT = whole("limit", "At most so many.")
MOMENT = [
    word("at", "The moment T on the ground, as 2026-03-02T16:40; the job's own zone."),
    word("known", "K: an entry number, or a time, by which things were recorded."),
]
RECORD_ASKED = [
    whole("after", "Entries with a higher number than this."),
    word("kind", "Only entries of this kind."),
    LIMIT,
]
MARKS_ASKED = [
    *MOMENT,
    word(
        "standing", "Only marks that are planned, standing, disturbed, gone, retired."
    ),
    word("trust", "Only marks of this trust."),
    whole("after", "Where to read on: `next` of the answer before."),
    LIMIT,
]


class Empty(s.Serializer[Any]):
    """Nothing."""


class Refusal(s.Serializer[Any]):
    """Why something was not done: what is wrong, where, what to do."""

    code = s.CharField()
    what = s.CharField()
    where = s.CharField()
    do = s.CharField()
    field = s.CharField()


class Item(s.Serializer[Any]):
    """One statement; `facts` are described by kind at /api/kinds/."""

    key = s.UUIDField()
    kind = s.CharField(required=False)
    facts = s.DictField(required=False)
    happened_at = s.DateTimeField(required=False, allow_null=True)
    known = s.CharField(required=False, allow_null=True)
    counter = s.IntegerField(required=False, min_value=0)
    corrects = s.UUIDField(required=False, allow_null=True)
    withdraws = s.BooleanField(required=False)
    why = s.CharField(required=False, allow_blank=True)


class Items(s.Serializer[Any]):
    items = Item(many=True)


class Outcome(s.Serializer[Any]):
    """What became of one item: its number, or why it has none."""

    key = s.CharField(allow_null=True)
    outcome = s.ChoiceField(OUTCOMES)
    number = s.IntegerField(required=False)
    code = s.CharField(required=False)
    what = s.CharField(required=False)
    where = s.CharField(required=False)
    do = s.CharField(required=False)
    field = s.CharField(required=False)


class Outcomes(s.Serializer[Any]):
    outcomes = Outcome(many=True)


class PhoneItem(Item):
    """A statement of a phone, for which job and at which time of the device."""

    job = s.CharField()
    device_time = s.DateTimeField()
    author = s.UUIDField(required=False, allow_null=True)


class Sync(s.Serializer[Any]):
    """`sent_at` is the device's clock as it sends."""

    sent_at = s.DateTimeField()
    device = s.CharField(required=False, allow_blank=True)
    items = PhoneItem(many=True)


class PhoneOutcome(Outcome):
    outcome = s.ChoiceField(WAITING)
    job = s.CharField()


class Synced(s.Serializer[Any]):
    """An outcome for every item, and where the record of each job stands."""

    outcomes = PhoneOutcome(many=True)
    heads = s.DictField(child=s.IntegerField())


class Entry(s.Serializer[Any]):
    """An entry with its hashed body."""

    number = s.IntegerField()
    key = s.UUIDField()
    kind = s.CharField()
    counts = s.BooleanField()
    overruled_by = s.IntegerField(allow_null=True)
    leaf = s.CharField()
    body = s.DictField()


class RecordPart(s.Serializer[Any]):
    head = s.IntegerField()
    entries = Entry(many=True)
    next = s.IntegerField()


class Job(s.Serializer[Any]):
    number = s.CharField()
    name = s.CharField()
    unit = s.CharField()


class Jobs(s.Serializer[Any]):
    jobs = Job(many=True)


class Judged(s.Serializer[Any]):
    trust = s.CharField()
    reason = s.CharField()
    marks = s.ListField(child=s.UUIDField())


class Stake(s.Serializer[Any]):
    ordinal = s.IntegerField()
    set_at = s.DateTimeField(allow_null=True)
    last_seen = s.DateTimeField(allow_null=True)
    first_missing = s.DateTimeField(allow_null=True)
    setup = s.UUIDField(allow_null=True)
    handed_over = s.BooleanField()
    provisional = s.BooleanField()


class Mark(s.Serializer[Any]):
    """A mark as it stands; coordinates are texts in the job's unit."""

    key = s.UUIDField()
    label = s.CharField()
    purpose = s.CharField()
    sort = s.CharField()
    stage = s.CharField()
    carries = s.CharField()
    line = s.CharField()
    unit = s.CharField()
    northing = s.CharField(allow_null=True)
    easting = s.CharField(allow_null=True)
    elevation = s.CharField(allow_null=True)
    standing = s.CharField()
    position = Judged()
    elevation_trust = Judged()
    on_hold = s.BooleanField()
    stake = Stake(allow_null=True)


class Marks(s.Serializer[Any]):
    as_of = s.CharField()
    head = s.IntegerField()
    marks = Mark(many=True)
    next = s.IntegerField(allow_null=True)


class MarkNow(s.Serializer[Any]):
    as_of = s.CharField()
    mark = Mark()


class Line(s.Serializer[Any]):
    """One thing said of a mark; `entry` only for readers of the whole record."""

    happened_at = s.DateTimeField()
    recorded_at = s.DateTimeField()
    late = s.BooleanField()
    name = s.CharField()
    known = s.CharField()
    kind = s.CharField()
    sentence = s.CharField()
    verdict = s.CharField()
    details = s.DictField(child=s.CharField())
    not_recorded = s.ListField(child=s.CharField())
    counts = s.BooleanField()
    overruled_by = s.IntegerField(allow_null=True)
    remark = s.CharField(required=False)
    entry = Entry(required=False)


class History(s.Serializer[Any]):
    as_of = s.CharField()
    lines = Line(many=True)


class WayCheck(s.Serializer[Any]):
    check = s.CharField()
    expect = s.CharField()


class Way(s.Serializer[Any]):
    rank = s.IntegerField(allow_null=True)
    kind = s.CharField()
    component = s.CharField()
    offered = s.BooleanField()
    reason = s.CharField()
    marks = s.ListField(child=s.CharField())
    numbers = s.ListField(child=s.CharField())
    checks = WayCheck(many=True)
    within_95 = s.CharField()
    cautions = s.ListField(child=s.CharField())


class Ways(s.Serializer[Any]):
    mark = s.CharField()
    ways = Way(many=True)


class Check(s.Serializer[Any]):
    key = s.UUIDField()
    sort = s.CharField()
    listed = s.ListField(child=s.UUIDField())
    other = s.ListField(child=s.UUIDField())
    setup = s.UUIDField(allow_null=True)
    components = s.CharField()
    grade = s.IntegerField()
    reaches = s.ListField(child=s.CharField())
    verdict = s.CharField()
    made_at = s.DateTimeField()
    made_by = s.CharField()
    number = s.IntegerField()


class Checks(s.Serializer[Any]):
    checks = Check(many=True)


class Task(s.Serializer[Any]):
    """A task of a visit; `ask` is the request it answers, for those who may open it."""

    task = s.UUIDField()
    sort = s.CharField()
    words = s.CharField()
    listed = s.ListField(child=s.UUIDField())
    outcome = s.CharField(required=False)
    sent_away_by = s.CharField(required=False)
    remark = s.CharField(required=False)
    ask = s.UUIDField(required=False)


class Visit(s.Serializer[Any]):
    key = s.UUIDField()
    crew = s.CharField()
    starts_at = s.DateTimeField()
    ends_at = s.DateTimeField(allow_null=True)
    arrived_at = s.DateTimeField(allow_null=True)
    left_at = s.DateTimeField(allow_null=True)
    cancelled = s.CharField()
    ticket = s.CharField()
    tasks = Task(many=True)


class Visits(s.Serializer[Any]):
    visits = Visit(many=True)


class Handover(s.Serializer[Any]):
    key = s.UUIDField()
    listed = s.ListField(child=s.UUIDField())
    company_name = s.CharField()
    to_whom = s.CharField()
    signature = s.CharField()
    words = s.CharField()
    left_with = s.CharField()
    lacking = s.ListField(child=s.CharField())
    given_at = s.DateTimeField()
    given_by = s.CharField()
    answer = s.CharField()
    answer_words = s.CharField()
    answered_at = s.DateTimeField(allow_null=True)


class Handovers(s.Serializer[Any]):
    handovers = Handover(many=True)


class Hold(s.Serializer[Any]):
    key = s.UUIDField()
    listed = s.ListField(child=s.UUIDField())
    in_force = s.ListField(child=s.UUIDField())
    words = s.CharField()
    sent_at = s.DateTimeField()
    sent_by = s.CharField()
    lifted_at = s.DateTimeField(allow_null=True)


class Holds(s.Serializer[Any]):
    holds = Hold(many=True)


class Request(s.Serializer[Any]):
    """A request as its reader may see it; who pays only for those who see prices."""

    key = s.UUIDField()
    sort = s.CharField()
    company = s.UUIDField()
    company_name = s.CharField()
    asked_by = s.CharField()
    listed = s.ListField(child=s.UUIDField())
    words = s.CharField()
    received_at = s.DateTimeField()
    needed_by = s.DateTimeField(allow_null=True)
    earliest = s.DateTimeField(allow_null=True)
    built_from = s.CharField()
    state = s.CharField()
    promised_for = s.DateTimeField(allow_null=True)
    visit = s.UUIDField(allow_null=True)
    payer = s.CharField(required=False)
    cost = s.CharField(required=False)
    reason = s.CharField()
    closed_at = s.DateTimeField(allow_null=True)
    number = s.IntegerField()


class Requests(s.Serializer[Any]):
    requests = Request(many=True)


class RequestNow(s.Serializer[Any]):
    request = Request()


class Asking(s.Serializer[Any]):
    """A request to make; `company` is said by the office, which asks for others."""

    key = s.UUIDField()
    sort = s.ChoiceField(("lay out", "re-stake", "check", "explain"))
    company = s.UUIDField(required=False)
    listed = s.ListField(child=s.UUIDField(), required=False)
    words = s.CharField(required=False)
    needed_by = s.DateTimeField(required=False)
    last_seen = s.CharField(required=False)
    cause = s.CharField(required=False)
    cause_by = s.CharField(required=False)
    built_from = s.CharField(required=False)
    sheet_words = s.CharField(required=False)
    site_ready = s.CharField(required=False)
    phone = s.CharField(required=False)
    remark = s.CharField(required=False)


class Kind(s.Serializer[Any]):
    """What may be said: the right it takes, and the JSON Schema of its facts."""

    kind = s.CharField()
    right = s.CharField()
    words = s.CharField()
    facts = s.DictField()


class Kinds(s.Serializer[Any]):
    kinds = Kind(many=True)
