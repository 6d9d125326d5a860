from django.apps import AppConfig


class ClearanceConfig(AppConfig):
    name = "compliance.clearance"
