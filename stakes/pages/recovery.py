"""Ways back: which ways a lost mark may be put back by, and recording that it was."""

from __future__ import annotations

from uuid import UUID

from django.http import Http404, HttpRequest, HttpResponse
from django.shortcuts import render
from django.urls import reverse
from django.utils.safestring import mark_safe

from geometry.ways import Way
from stakes.actions.putting_back import put_back
from stakes.can import Can, needs
from stakes.drawings.plan import DrawnEllipse, Plan, Ray, draw
from stakes.forms.recovery import PutBackForm
from stakes.pages.field.answering import answered, passage_of
from stakes.pages.field.home import view_of
from stakes.pages.field.signs import sign_of, state_words
from stakes.pages.field.where import files, page, sent, state_of, visit_of
from stakes.queries import ways
from stakes.queries.drawing import plan_of
from stakes.queries.setups import usable_setups
from stakes.queries.state import JobState
from stakes.record import Refused

MAGNIFIED = 200


@needs(Can.READ)
def ways_back(request: HttpRequest, job: str, mark: UUID) -> HttpResponse:
    """Every way, with the one looked at drawn on the plan (?way=rank)."""
    state, view = state_of(request), view_of(request, mark)
    try:
        found = ways.ways_for(state, mark)
    except Refused as refused:
        context = {"view": view, "sign": sign_of(view, 34), "refused": str(refused)}
        return render(request, "stakes/recovery/refused.html", context)
    offered = [way for way in found.ways if way.offered]
    # Where it stands comes first; its height is a way of its own beside that.
    offered.sort(key=lambda way: (way.component != "position", way.rank))
    shown = next((w for w in offered if str(w.rank) == request.GET.get("way")), None)
    shown = shown or (offered[0] if offered else None)
    context = {
        "view": view,
        "found": found,
        "sign": sign_of(view, 34),
        "said": state_words(view),
        "offered": [_row(found, way) for way in offered],
        "not_offered": [_row(found, way) for way in found.ways if not way.offered],
        "shown": shown,
        "drawing": mark_safe(_drawn(state, found, shown)),
        "magnified": MAGNIFIED,
        "q": _carry(request),
    }
    return render(request, "stakes/recovery/ways.html", context)


def _carry(request: HttpRequest) -> str:
    """What the address carries on: visit and request."""
    kept = [f"{k}={request.GET[k]}" for k in ("visit", "ask") if _key(request, k)]
    return "&".join(kept)


def _key(request: HttpRequest, name: str) -> UUID | None:
    try:
        return UUID(request.GET.get(name, ""))
    except ValueError:
        return None


def _row(found: ways.WaysBack, way: Way) -> dict[str, object]:
    return {
        "way": way,
        "marks": ", ".join(found.labels.get(m, m) for m in way.marks),
        "untrusted": [found.labels.get(m, m) for m in way.untrusted],
        "numbers": [ways.number_words(found, number) for number in way.numbers],
        "within": ways.size_words(found, way.semi_major_m),
        "fits": ways.fits_words(way),
        "reason": _named(found, way.reason),
        "checks": [
            (ways.check_words(found, check), ways.expected_words(found, check))
            for check in way.checks
        ],
        "cautions": [caution.value for caution in way.cautions],
    }


def _named(found: ways.WaysBack, sentence: str) -> str:
    """A sentence of the computation with keys of marks as their numbers."""
    for key, label in found.labels.items():
        if key in sentence:
            sentence = sentence.replace(key, label)
    return sentence


def _drawn(state: JobState, found: ways.WaysBack, way: Way | None) -> str:
    """The plan with the way that sets solid and its check dashed, ellipse magnified."""
    base = plan_of(state, f"Ways back for {found.view.label}")
    at = (float(found.view.plan.easting_m or 0), float(found.view.plan.northing_m or 0))
    rays, ellipses = [], []
    if way is not None:
        for key in way.marks:
            rays.append(Ray((_place(state, key), at)))
        for check in way.checks[:1]:
            ends = {end for end in (check.at, check.to) if end in found.labels}
            rays += [
                Ray((_place(state, end), at), dashed=True)
                for end in ends - {str(found.view.key)}
            ]
        if way.ellipse_95 is not None:
            ellipses.append(
                DrawnEllipse(
                    at,
                    way.ellipse_95.semi_major_m,
                    way.ellipse_95.semi_minor_m,
                    way.ellipse_95.azimuth_rad,
                    MAGNIFIED,
                )
            )
    plan = Plan(
        marks=base.marks,
        zones=base.zones,
        rays=rays,
        ellipses=ellipses,
        unit_m=base.unit_m,
        unit=base.unit,
        title=base.title,
    )
    return draw(plan, prefix="ways")


def _place(state: JobState, key: str) -> tuple[float, float]:
    plan = state.marks[UUID(key)].plan
    return float(plan.easting_m or 0), float(plan.northing_m or 0)


@needs(Can.RECORD)
def put_back_page(
    request: HttpRequest, job: str, mark: UUID, rank: int
) -> HttpResponse:
    """Record that a mark was put back by one of the ways; rank 0 is "done otherwise"."""
    state, view = state_of(request), view_of(request, mark)
    back = reverse("stakes:ways", kwargs={"job": job, "mark": mark})
    back += f"?{_carry(request)}" if _carry(request) else ""
    try:
        found = ways.ways_for(state, mark)
        way = found.way(rank) if rank else None
    except Refused as refused:
        context = {"view": view, "sign": sign_of(view, 34), "refused": str(refused)}
        return render(request, "stakes/recovery/refused.html", context, status=409)
    check = ways.own_check(way) if way and way.checks else None
    form = PutBackForm(
        sent(request),
        files(request),
        state=state,
        visit=visit_of(request),
        view=view,
        setups=usable_setups(state),
        otherwise=way is None,
        needs_reason=bool(way and way.needs_reason),
        angle=bool(check and check.unit == "rad"),
        check=check is not None,
    )

    def do(photos: tuple[str, ...]) -> str:
        said = form.cleaned_data
        put_back(
            **form.said(),
            mark=mark,
            by=request.asked.by,
            rank=rank or None,
            described=said.get("described", ""),
            reason=said["reason"],
            setup=UUID(said["setup"]) if said["setup"] else None,
            measured=said.get("measured"),
            measured_angle=said.get("measured_angle", ""),
            holds=said["holds"],
            old=said["old"],
            match=said.get("match", ""),
            passage=passage_of(request, form),
            remark=said["remark"],
            photos=photos,
            ask=_key(request, "ask"),
        )
        return reverse("stakes:mark", kwargs={"job": job, "mark": mark})

    row = _row(found, way) if way else None
    return answered(
        request,
        form,
        "put_back.html",
        do,
        done=f"{view.label} is put back. Its page shows the check.",
        back=back,
        view=view,
        row=row,
        check=(ways.check_words(found, check), ways.expected_words(found, check))
        if check
        else None,
        sign=sign_of(view, 34),
    )


@needs(Can.READ)
def lost(request: HttpRequest, job: str) -> HttpResponse:
    """Every mark that is gone or disturbed, each with its way to the ways back."""
    state = state_of(request)
    views = [
        view
        for view in state.marks.values()
        if view.standing in ("gone", "disturbed") and not view.plan.is_control
    ]
    if request.method not in ("GET", "HEAD"):
        raise Http404
    views.sort(key=lambda v: v.label)
    return page(request, "lost.html", views=[(v, sign_of(v, 22)) for v in views])
