"""``python -m reporter`` is the command ``fluebook``."""

from reporter.cli import entry_point

entry_point()
