from django.apps import AppConfig


class DropoffsConfig(AppConfig):
    name = "compliance.dropoffs"
