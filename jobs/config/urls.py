"""Every address of Lathbook. The door opens none that does not say who may."""

from __future__ import annotations

from django.urls import include, path

urlpatterns = [
    path("jobs/<str:job>/", include("stakes.urls")),
]
