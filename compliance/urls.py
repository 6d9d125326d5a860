"""All addresses: pages at the top, the API under /api/v1/."""

from django.urls import URLPattern, URLResolver

urlpatterns: list[URLPattern | URLResolver] = []
