from django.apps import AppConfig


class OpsConfig(AppConfig):
    name = "compliance.ops"

    def ready(self) -> None:
        from compliance.ops import checks  # noqa: F401  (registers the deployment checks)
