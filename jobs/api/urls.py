"""Addresses of the JSON API."""

from __future__ import annotations

from django.urls import path
from drf_spectacular.views import SpectacularAPIView

from jobs.api import asks, kinds, phone, points, reading, writing
from jobs.api import schema as _schema  # noqa: F401  (registers itself)
from jobs.declared import Who, open_to

app_name = "api"
urlpatterns = [
    path(
        "schema/", open_to(Who.SIGNED_IN)(SpectacularAPIView.as_view()), name="schema"
    ),
    path("kinds/", kinds.kinds, name="kinds"),
    path("phone/", phone.phone, name="phone"),
    path("jobs/", reading.jobs, name="jobs"),
    path("jobs/<str:job>/marks/", reading.marks, name="marks"),
    path("jobs/<str:job>/marks.geojson", points.geojson, name="marks-geojson"),
    path("jobs/<str:job>/marks.csv", points.comma, name="marks-csv"),
    path("jobs/<str:job>/marks/<uuid:mark>/", reading.mark, name="mark"),
    path("jobs/<str:job>/marks/<uuid:mark>/history/", reading.history, name="history"),
    path("jobs/<str:job>/marks/<uuid:mark>/ways-back/", reading.ways_back, name="ways"),
    path("jobs/<str:job>/record/", writing.RecordView.as_view(), name="record"),
    path("jobs/<str:job>/checks/", reading.checks, name="checks"),
    path("jobs/<str:job>/requests/", asks.RequestsView.as_view(), name="requests"),
    path("jobs/<str:job>/visits/", reading.visits, name="visits"),
    path("jobs/<str:job>/handovers/", reading.handovers, name="handovers"),
    path("jobs/<str:job>/holds/", reading.holds, name="holds"),
]
