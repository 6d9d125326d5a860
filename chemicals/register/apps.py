from django.apps import AppConfig


class RegisterConfig(AppConfig):
    name = "chemicals.register"
