from django.apps import AppConfig


class JournalConfig(AppConfig):
    name = "chemicals.journal"

    def ready(self) -> None:
        from chemicals.journal import triggers  # registers the system check

        assert self.get_model("Entry")._meta.db_table == triggers.TABLE  # noqa: S101  (a renamed table loses its triggers)
