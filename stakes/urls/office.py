"""Addresses of the office: drafts of the plan, control, sheets, import, layout."""

from __future__ import annotations

from django.urls import path

from stakes.pages.office import (
    control,
    control_work,
    drafts,
    importing,
    layout,
    points,
    sheets,
    zones,
)

PLAN = [
    path("plan/drafts/", drafts.drafts, name="drafts"),
    path("plan/drafts/<uuid:draft>/", drafts.draft, name="draft"),
    path("plan/drafts/<uuid:draft>/check/", drafts.draft_check, name="draft-check"),
    path("plan/drafts/<uuid:draft>/issue/", drafts.draft_issue, name="draft-issue"),
    path("plan/drafts/<uuid:draft>/leave/", drafts.draft_leave, name="draft-leave"),
    path("plan/retire/", drafts.stage_retire, name="stage-retire"),
    path("plan/import/", importing.points, name="import"),
    path("plan/zones/", zones.zones, name="zones"),
    path("plan/zones/add/", zones.zone_add, name="zone-add"),
    path("plan/zones/<uuid:zone>/", zones.zone_change, name="zone-change"),
    path("plan/zones/<uuid:zone>/remove/", zones.zone_remove, name="zone-remove"),
    path("plan/zones/<uuid:zone>/soil/", layout.soil_classify, name="soil-classify"),
    path("marks/add/", drafts.marks_add, name="marks-add"),
    path("marks.csv", points.comma, name="marks-csv"),
    path("marks.geojson", points.geojson, name="marks-geojson"),
    path("layout/", layout.layout, name="layout"),
    path("layout/keep/", layout.layout_keep, name="layout-keep"),
]
CONTROL = [
    path("control/", control.control, name="control"),
    path("control/recover/", control_work.recover, name="control-recover"),
    path("control/traverse/", control_work.traverse, name="control-traverse"),
    path("control/levels/", control_work.levels, name="control-levels"),
    path("control/answer/", control.doubt_answer, name="doubt-answer"),
    path("control/<uuid:mark>/", control.control_mark, name="control-mark"),
    path("control/<uuid:mark>/adopt/", control.value_adopt, name="value-adopt"),
]
SHEETS = [
    path("sheets/", sheets.sheets, name="sheets"),
    path("sheets/add/", sheets.sheet_add, name="sheet-add"),
    path("sheets/<uuid:sheet>/", sheets.sheet, name="sheet"),
    path("sheets/<uuid:sheet>/file/", sheets.sheet_file, name="sheet-file"),
    path("sheets/<uuid:sheet>/read/", sheets.sheet_read, name="sheet-read"),
    path(
        "sheets/<uuid:sheet>/supersede/",
        sheets.sheet_supersede,
        name="sheet-supersede",
    ),
    path("questions/ask/", sheets.question_ask, name="question-ask"),
    path(
        "questions/<uuid:question>/answer/",
        sheets.question_answer,
        name="question-answer",
    ),
    path("directions/give/", sheets.direction_give, name="direction-give"),
    path(
        "directions/<uuid:direction>/settle/",
        sheets.direction_settle,
        name="direction-settle",
    ),
]
urlpatterns = [*PLAN, *CONTROL, *SHEETS]
