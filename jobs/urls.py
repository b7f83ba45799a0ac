"""Addresses of people, jobs and terms. What stands under a job carries its number."""

from __future__ import annotations

from django.urls import path

from jobs.pages import (
    companies,
    handovers,
    holds,
    jobs,
    on_site,
    people,
    requests,
    seats,
    sign_in,
    terms,
    tolerances,
    tray,
    visits,
)

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
    path("tray/", tray.tray, name="tray"),
    path("tray/<int:item>/admit/", tray.tray_admit, name="tray-admit"),
    path("tray/<int:item>/aside/", tray.tray_aside, name="tray-aside"),
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
    path("jobs/<str:job>/requests/", requests.requests, name="requests"),
    path("jobs/<str:job>/requests/make/", requests.request_make, name="request-make"),
    path("jobs/<str:job>/requests/<uuid:ask>/", requests.request_page, name="request"),
    path(
        "jobs/<str:job>/requests/<uuid:ask>/photos/<int:photo>/",
        requests.request_photo,
        name="request-photo",
    ),
    path(
        "jobs/<str:job>/requests/<uuid:ask>/accept/",
        requests.request_accept,
        name="request-accept",
    ),
    path(
        "jobs/<str:job>/requests/<uuid:ask>/decline/",
        requests.request_decline,
        name="request-decline",
    ),
    path(
        "jobs/<str:job>/requests/<uuid:ask>/talk/",
        requests.request_talk,
        name="request-talk",
    ),
    path(
        "jobs/<str:job>/requests/<uuid:ask>/cost/",
        requests.request_cost,
        name="request-cost",
    ),
    path(
        "jobs/<str:job>/requests/<uuid:ask>/withdraw/",
        requests.request_withdraw,
        name="request-withdraw",
    ),
    path(
        "jobs/<str:job>/requests/<uuid:ask>/close/",
        requests.request_close,
        name="request-close",
    ),
    path("jobs/<str:job>/visits/", visits.visits, name="visits"),
    path("jobs/<str:job>/visits/plan/", visits.visit_plan, name="visit-plan"),
    path("jobs/<str:job>/visits/<uuid:visit>/", visits.visit_page, name="visit"),
    path(
        "jobs/<str:job>/visits/<uuid:visit>/move/",
        visits.visit_move,
        name="visit-move",
    ),
    path(
        "jobs/<str:job>/visits/<uuid:visit>/cancel/",
        visits.visit_cancel,
        name="visit-cancel",
    ),
    path(
        "jobs/<str:job>/visits/<uuid:visit>/arrive/",
        on_site.visit_arrive,
        name="visit-arrive",
    ),
    path(
        "jobs/<str:job>/visits/<uuid:visit>/wait/",
        on_site.visit_wait,
        name="visit-wait",
    ),
    path(
        "jobs/<str:job>/visits/<uuid:visit>/leave/",
        on_site.visit_leave,
        name="visit-leave",
    ),
    path(
        "jobs/<str:job>/visits/<uuid:visit>/tasks/<uuid:task>/end/",
        on_site.task_end,
        name="task-end",
    ),
    path(
        "jobs/<str:job>/visits/<uuid:visit>/ticket/",
        on_site.ticket_close,
        name="ticket-close",
    ),
    path("jobs/<str:job>/handovers/", handovers.handovers, name="handovers"),
    path(
        "jobs/<str:job>/handovers/make/", handovers.handover_make, name="handover-make"
    ),
    path(
        "jobs/<str:job>/handovers/<uuid:handover>/",
        handovers.handover_page,
        name="handover",
    ),
    path(
        "jobs/<str:job>/handovers/<uuid:handover>/answer/",
        handovers.handover_answer,
        name="handover-answer",
    ),
    path("jobs/<str:job>/holds/", holds.holds, name="holds"),
    path("jobs/<str:job>/holds/send/", holds.hold_send, name="hold-send"),
    path("jobs/<str:job>/holds/<uuid:hold>/", holds.hold_page, name="hold"),
    path(
        "jobs/<str:job>/holds/<uuid:hold>/acknowledge/",
        holds.hold_acknowledge,
        name="hold-acknowledge",
    ),
    path("jobs/<str:job>/holds/<uuid:hold>/tell/", holds.hold_tell, name="hold-tell"),
    path("jobs/<str:job>/holds/<uuid:hold>/lift/", holds.hold_lift, name="hold-lift"),
]
