"""The worker: ticks, claims, does one job after the other."""

import os
import secrets
import signal
import socket
import time
from typing import Any

from django.core.management.base import BaseCommand, CommandParser
from django.db import close_old_connections
from django.utils import timezone

from chemicals.jobs.services import retry_failed, run_next, tick

POLL_SECONDS = 0.2
"""How long an idle worker sleeps: one indexed query each time."""


class Command(BaseCommand):
    """Do background jobs until told to stop. Any number of these may run at once."""

    help = "Do background jobs until SIGTERM or Ctrl-C; the job in hand is finished first."
    requires_system_checks = ()  # a worker shows no pages; whoever starts it has checked
    stopping = False

    def add_arguments(self, parser: CommandParser) -> None:
        parser.add_argument("--once", action="store_true", help="do what is due now, then end")
        parser.add_argument("--retry-failed", action="store_true", help="first queue every failed job again")

    def handle(self, *args: Any, **options: Any) -> None:
        worker = f"{socket.gethostname()[:60]}:{os.getpid()}:{secrets.token_hex(4)}"
        if options["retry_failed"]:
            self.stdout.write(f"Queued again: {retry_failed(now=timezone.now())} failed jobs.")
        if options["once"]:
            self.work_off(worker)
            return
        for number in (signal.SIGTERM, signal.SIGINT):
            signal.signal(number, self.stop)
        while not self.stopping:
            self.work_off(worker)
            time.sleep(POLL_SECONDS)

    def stop(self, *args: object) -> None:
        """Note the signal: the loop ends after the job in hand."""
        self.stopping = True

    def work_off(self, worker: str) -> None:
        """Do all that is due, with the clock read anew for each job."""
        close_old_connections()
        tick(now=timezone.now())
        while not self.stopping and run_next(now=timezone.now(), worker=worker):
            tick(now=timezone.now())
