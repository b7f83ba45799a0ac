"""Addresses of people, jobs and terms. What stands under a job carries its number."""

from __future__ import annotations

from django.urls import path

from jobs.pages import companies, jobs, people, seats, sign_in, terms, tolerances

app_name = "jobs"
urlpatterns = [
    path("account/", sign_in.account, name="account"),
    path("account/password/", sign_in.change_password, name="password"),
    path("account/tokens/", sign_in.token_make, name="token-make"),
    path(
        "account/tokens/<uuid:token>/revoke/", sign_in.token_revoke, name="token-revoke"
    ),
    path("people/", people.people, name="people"),
    path("people/add/", people.person_add, name="person-add"),
    path("people/<uuid:person>/", people.person, name="person"),
    path("people/<uuid:person>/change/", people.person_change, name="person-change"),
    path("people/<uuid:person>/link/", people.person_link, name="person-link"),
    path("people/<uuid:person>/close/", people.person_close, name="person-close"),
    path("people/<uuid:person>/reopen/", people.person_reopen, name="person-reopen"),
    path("companies/", companies.companies, name="companies"),
    path("companies/add/", companies.company_add, name="company-add"),
    path(
        "companies/<uuid:company>/change/",
        companies.company_change,
        name="company-change",
    ),
    path("crews/", companies.crews, name="crews"),
    path("crews/add/", companies.crew_add, name="crew-add"),
    path("crews/<uuid:crew>/change/", companies.crew_change, name="crew-change"),
    path("crews/<uuid:crew>/disband/", companies.crew_disband, name="crew-disband"),
    path("jobs/", jobs.jobs, name="jobs"),
    path("jobs/open/", jobs.job_open, name="job-open"),
    path("jobs/<str:job>/", jobs.home, name="home"),
    path("jobs/<str:job>/describe/", jobs.describe, name="describe"),
    path("jobs/<str:job>/close/", jobs.close, name="close"),
    path("jobs/<str:job>/reopen/", jobs.reopen, name="reopen"),
    path("jobs/<str:job>/people/", seats.seats, name="seats"),
    path("jobs/<str:job>/people/give/", seats.seat_give, name="seat-give"),
    path("jobs/<str:job>/people/<uuid:seat>/end/", seats.seat_end, name="seat-end"),
    path("jobs/<str:job>/terms/", terms.terms, name="terms"),
    path("jobs/<str:job>/terms/unit/", terms.unit_set, name="unit-set"),
    path("jobs/<str:job>/terms/frame/", terms.frame_set, name="frame-set"),
    path("jobs/<str:job>/terms/notice/", terms.notice_set, name="notice-set"),
    path("jobs/<str:job>/terms/re-stake/", terms.restake_set, name="restake-set"),
    path("jobs/<str:job>/terms/hold-time/", terms.hold_time_set, name="hold-time-set"),
    path(
        "jobs/<str:job>/terms/tolerances/add/",
        tolerances.tolerance_add,
        name="tolerance-add",
    ),
    path(
        "jobs/<str:job>/terms/tolerances/<uuid:tolerance>/",
        tolerances.tolerance_change,
        name="tolerance-change",
    ),
    path(
        "jobs/<str:job>/terms/tolerances/<uuid:tolerance>/remove/",
        tolerances.tolerance_remove,
        name="tolerance-remove",
    ),
]
