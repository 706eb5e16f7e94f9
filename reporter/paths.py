"""Where the documents of a test lie: beside the field workbook or in a folder below it, nowhere else."""

from __future__ import annotations

import os
from pathlib import Path, PurePosixPath, PureWindowsPath


def attachment_path(folder: Path, name: str) -> Path | None:
    """The file of an attachment beside the workbook or in a folder below it; None if there is none.

    A path that leads elsewhere (absolute, upwards, or through a link) is none.
    """
    plain = name.replace("\\", "/")
    if PurePosixPath(plain).is_absolute() or PureWindowsPath(name).drive or "\x00" in name:
        return None
    try:
        found = (folder / plain).resolve()
        inside = os.path.commonpath([found, folder.resolve()]) == str(folder.resolve())
        return found if inside and found.is_file() else None
    except (OSError, ValueError):
        return None
