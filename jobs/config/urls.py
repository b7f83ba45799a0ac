"""Every address of Lathbook. The door opens none that does not say who may."""

from __future__ import annotations

from django.urls import include, path

from jobs.pages import sign_in, start

urlpatterns = [
    path("", start.start, name="start"),
    path("sign-in/", sign_in.sign_in, name="sign-in"),
    path("sign-out/", sign_in.sign_out, name="sign-out"),
    path(
        "set-password/<uuid:person>/<str:proof>/",
        sign_in.set_own_password,
        name="set-password",
    ),
    path("api/", include("jobs.api.urls")),
    path("", include("jobs.urls")),
    path("jobs/<str:job>/", include("stakes.urls")),
    path("field/<str:job>/", include("stakes.urls.field")),
]
