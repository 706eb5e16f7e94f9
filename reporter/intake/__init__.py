"""From a field workbook, or a record in JSON, to a typed record or problems that name the cell."""

from reporter.intake.read import ReadResult, read, read_bytes
from reporter.paths import attachment_path

__all__ = ["ReadResult", "attachment_path", "read", "read_bytes"]
