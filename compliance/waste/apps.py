from django.apps import AppConfig


class WasteConfig(AppConfig):
    name = "compliance.waste"
