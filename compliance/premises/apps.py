from django.apps import AppConfig


class PremisesConfig(AppConfig):
    name = "compliance.premises"
