#!/usr/bin/env python
"""Django's command line for Gramledger."""

import os
import sys

if __name__ == "__main__":
    os.environ.setdefault("DJANGO_SETTINGS_MODULE", "compliance.settings")
    from django.core.management import execute_from_command_line

    execute_from_command_line(sys.argv)
