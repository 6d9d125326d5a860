"""All addresses: pages at the top, the API under /api/v1/."""

from django.urls import URLPattern, URLResolver, include, path

urlpatterns: list[URLPattern | URLResolver] = [
    path("", include("compliance.web.urls")),
    path("api/v1/", include("compliance.api.urls")),
]
