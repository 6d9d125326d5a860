"""Import of the register without a browser."""

from chemicals.process.models import Subject
from compliance.ops.management.commands import import_entries


class Command(import_entries.Command):
    """Record all products and containers of a CSV or XLSX file, or say everything that is wrong and record nothing."""

    help = "Import the register from FILE, a CSV or XLSX file of products and containers: all of it or nothing."
    subject = Subject.REGISTER
