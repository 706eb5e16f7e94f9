"""Writing of finished files: a file appears whole or not at all."""

from __future__ import annotations

import errno
import os
import secrets
from contextlib import suppress
from pathlib import Path

from reporter.errors import OutputError

_WORDS = {
    errno.EACCES: "there is no permission to write here",
    errno.EPERM: "there is no permission to write here",
    errno.EROFS: "the disk can only be read",
    errno.ENOSPC: "the disk is full",
    errno.EDQUOT: "the disk quota is used up",
    errno.EFBIG: "the file is larger than the disk allows",
    errno.ENAMETOOLONG: "the name is too long",
    errno.ENOTDIR: "a part of the path is a file, not a folder",
    errno.EISDIR: "a folder of this name is there already",
    errno.EEXIST: "a file stands where a folder is needed",
    errno.ENOENT: "the folder is not there",
    errno.ETXTBSY: "the file is in use",
}


def write_whole(path: Path, content: bytes) -> None:
    """Write a file beside its place and move it there when it is complete; a missing folder is made.

    A file of that name is replaced in one step; a link of that name is replaced, not followed.  Whatever
    goes wrong, no part of the file remains.

    Parameters
    ----------
    path
        Where the file shall stand.
    content
        All its bytes.

    Raises
    ------
    OutputError
        The file could not be written; the message says why, the place is the path.
    """
    try:
        if path.is_dir() and not path.is_symlink():
            raise IsADirectoryError(errno.EISDIR, os.strerror(errno.EISDIR))
        path.parent.mkdir(parents=True, exist_ok=True)
        _write_beside(path, content)
    except OSError as error:
        words = _WORDS.get(error.errno or 0, error.strerror or type(error).__name__)
        raise OutputError(f"{path.name} was not written: {words}", str(path)) from error


def _write_beside(path: Path, content: bytes) -> None:
    beside = path.parent / f".{secrets.token_hex(8)}.part"
    try:
        with beside.open("xb") as file:
            file.write(content)
            file.flush()
            os.fsync(file.fileno())
        os.replace(beside, path)
    except BaseException:
        with suppress(OSError):
            os.unlink(beside)
        raise
    _settle(path.parent)


def _settle(folder: Path) -> None:
    """Have the folder's new entry on the disk, where the system can do that for a folder."""
    with suppress(OSError):
        descriptor = os.open(folder, os.O_RDONLY)
        try:
            os.fsync(descriptor)
        finally:
            os.close(descriptor)
