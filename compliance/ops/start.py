"""What must be true before the service starts, and the processes that it consists of."""

import errno
import fcntl
import hashlib
import os
import socket
import sys
from collections.abc import Iterator, Sequence
from contextlib import contextmanager, suppress
from pathlib import Path

from django.apps import apps
from django.conf import settings
from django.contrib.staticfiles.finders import get_finders
from django.core.management import call_command
from django.db import connection
from django.db.migrations.recorder import MigrationRecorder

from compliance.ops.supervisor import Child

OUR_PACKAGES = ("chemicals.", "compliance.")


class StartError(Exception):
    """The service cannot start; the message says what to do."""


def split_address(bind: str) -> tuple[str, int]:
    """Split "host:port"; a host of several colons stands in brackets, as in "[::1]:8000"."""
    host, _, port = bind.rpartition(":")
    if not host or not port.isdecimal() or int(port) > 65535:
        raise StartError(f"BIND is {bind!r}. Write it as address and port, like 127.0.0.1:8000.")
    return host.strip("[]"), int(port)


def require_public_address(bind: str) -> None:
    """Refuse to guess what a phone in the workshop can reach, if the whole network is served."""
    host, port = split_address(bind)
    if host in {"0.0.0.0", "::"} and not os.environ.get("PUBLIC_URL"):  # noqa: S104  (the user's wish)
        raise StartError(
            f"BIND={bind} serves the whole network. Set PUBLIC_URL to the address that phones will open, "
            f"like http://workshop.local:{port}; codes on labels contain it."
        )


def require_free_port(bind: str) -> None:
    """Refuse an address that cannot be listened at, before a web server fails at it again and again."""
    host, port = split_address(bind)
    family = socket.AF_INET6 if ":" in host else socket.AF_INET
    with socket.socket(family, socket.SOCK_STREAM) as probe:
        probe.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
        try:
            probe.bind((host, port))
        except OSError as error:
            if error.errno == errno.EADDRINUSE:
                raise StartError(
                    f"Another program listens at {bind}. End it, or choose another port: BIND={host}:{port + 1}"
                ) from error
            raise StartError(
                f"Cannot listen at {bind}: {error.strerror}. Set BIND to an address of this machine."
            ) from error


@contextmanager
def hold_folder(data: Path) -> Iterator[None]:
    """Keep the data folder for this process: one service, upgrade or restore at a time. Ends with the process.

    Meanwhile this process and its children write files that only their user may read.
    """
    mask = os.umask(0o077)
    try:
        data.mkdir(parents=True, exist_ok=True)
        with (data / "in-use").open("w") as handle:
            try:
                fcntl.flock(handle, fcntl.LOCK_EX | fcntl.LOCK_NB)
            except BlockingIOError as error:
                raise StartError(f"Gramledger already runs on the folder {data}. End it first.") from error
            yield
    finally:
        os.umask(mask)


def _migrations_of_code() -> set[tuple[str, str]]:
    names = set()
    for config in apps.get_app_configs():
        folder = Path(config.path) / "migrations"
        names |= {(config.label, path.stem) for path in folder.glob("[0-9a-z]*.py")}
    return names


def pending_migrations() -> list[str]:
    """Return the migrations that the database lacks. Reads names only: cheap enough for every start."""
    missing = _migrations_of_code() - set(MigrationRecorder(connection).applied_migrations())
    return sorted(f"{app}.{name}" for app, name in missing)


def is_empty_database() -> bool:
    """Tell whether no migration has ever run here."""
    return not MigrationRecorder(connection).applied_migrations()


def refuse_newer_database() -> None:
    """Refuse a database that a newer version of this program has migrated: we would not understand it."""
    ours = {config.label for config in apps.get_app_configs() if config.name.startswith(OUR_PACKAGES)}
    applied = {(app, name) for app, name in MigrationRecorder(connection).applied_migrations() if app in ours}
    unknown = sorted(f"{app}.{name}" for app, name in applied - _migrations_of_code())
    if unknown:
        raise StartError(
            f"The database is newer than this program: it has {', '.join(unknown)}. "
            "Install the version that wrote it, or restore a backup made by this version."
        )


def collect_static(data: Path) -> bool:
    """Collect style sheet and scripts if any has changed since the last time; tell whether it did."""
    stamp = data / "static-stamp"
    wanted = _digest_of_static()
    with suppress(FileNotFoundError):
        if stamp.read_text() == wanted:
            return False
    call_command("collectstatic", interactive=False, verbosity=0, clear=True)
    stamp.write_text(wanted)
    return True


def _digest_of_static() -> str:
    digest = hashlib.sha256()
    for finder in get_finders():
        for name, storage in finder.list([]):
            status = Path(storage.path(name)).stat()
            digest.update(f"{name}\0{status.st_size}\0{status.st_mtime_ns}\0".encode())
    return digest.hexdigest()


def service_children(bind: str) -> Sequence[Child]:
    """Return the programs of the service: one web process with four threads, as SQLite likes it, and a worker."""
    web = [sys.executable, "-m", "gunicorn", "compliance.wsgi", "--bind", bind, "--workers", "1", "--threads", "4"]
    web += [
        "--no-control-socket",
        "--graceful-timeout",
        "5",
        "--log-level",
        "warning",
        "--chdir",
        str(settings.BASE_DIR),
    ]
    work = [sys.executable, str(settings.BASE_DIR / "manage.py"), "work"]
    return [Child("web", web), Child("work", work)]


def write_private(path: Path, text: str) -> None:
    """Write a file that only its user may read, all of it or nothing."""
    fresh = path.with_name(f"{path.name}.{os.getpid()}")
    fresh.unlink(missing_ok=True)
    fresh.touch(mode=0o600)
    fresh.write_text(text)
    fresh.replace(path)
