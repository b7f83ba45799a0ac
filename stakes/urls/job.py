"""Addresses that read a job: plan, marks, record."""

from __future__ import annotations

from django.urls import path

from stakes.pages.job import marks, plan, record

urlpatterns = [
    path("plan/", plan.plan, name="plan"),
    path("plan.svg", plan.plan_svg, name="plan-svg"),
    path("marks/", marks.marks, name="marks"),
    path("marks/<uuid:mark>/", marks.mark, name="mark"),
    path("record/", record.record, name="record"),
    path("record/<int:number>/", record.entry, name="entry"),
    path("record/<int:number>/withdraw/", record.entry_withdraw, name="entry-withdraw"),
    path("record/<int:number>/correct/", record.entry_correct, name="entry-correct"),
]
