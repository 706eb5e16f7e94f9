"""Writing of finished files: a file appears whole or not at all, and several together or none."""

from __future__ import annotations

import errno
import os
import secrets
from collections.abc import Iterator, Mapping
from contextlib import contextmanager, suppress
from pathlib import Path

from reporter.errors import OutputError

_WORDS = {
    errno.EACCES: "there is no permission to write here, or another program has the file open",
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


def write_all(files: Mapping[Path, bytes]) -> None:
    """Write files beside their places and move them there when all are complete; missing folders are made.

    A file of that name is replaced in one step; a link of that name is replaced, not followed.  Whatever
    goes wrong, no part of a file remains, and each place is as it was.

    Parameters
    ----------
    files
        All the bytes of each file, by where it shall stand.

    Raises
    ------
    OutputError
        A file could not be written; the message says why, the place is its path.
    """
    places = [_Place(path) for path in files]
    try:
        for place, content in zip(places, files.values(), strict=True):
            with _worded(place.path):
                place.write(content)
        for place in places:
            with _worded(place.path):
                place.take()
    except BaseException:
        for place in reversed(places):
            with suppress(OSError):
                place.give_back()
        raise
    for place in places:
        place.settle()


class _Place:
    """Where a file shall stand, the new one beside it, and the old one kept until all is done."""

    def __init__(self, path: Path) -> None:
        self.path = path
        token = secrets.token_hex(8)
        self.new, self.old = path.parent / f".{token}.part", path.parent / f".{token}.old"
        self.taken = False

    def write(self, content: bytes) -> None:
        """Write the new file beside its place."""
        if self.path.is_dir() and not self.path.is_symlink():
            raise IsADirectoryError(errno.EISDIR, os.strerror(errno.EISDIR))
        self.path.parent.mkdir(parents=True, exist_ok=True)
        with self.new.open("xb") as file:
            file.write(content)
            file.flush()
            os.fsync(file.fileno())

    def take(self) -> None:
        """Move the new file to its place; what stood there is kept under another name."""
        if os.path.lexists(self.path):
            try:
                os.link(self.path, self.old, follow_symlinks=False)
            except (OSError, NotImplementedError):
                self.path.rename(self.old)
        os.replace(self.new, self.path)
        self.taken = True

    def give_back(self) -> None:
        """Have the place as it was."""
        if self.taken:
            self.path.unlink()
        if os.path.lexists(self.old) and not os.path.lexists(self.path):
            self.old.rename(self.path)
        self.old.unlink(missing_ok=True)
        self.new.unlink(missing_ok=True)

    def settle(self) -> None:
        """Leave the old file, and have the folder's new entry on the disk where the system can do that."""
        with suppress(OSError):
            self.old.unlink(missing_ok=True)
            descriptor = os.open(self.path.parent, os.O_RDONLY)
            try:
                os.fsync(descriptor)
            finally:
                os.close(descriptor)


@contextmanager
def _worded(path: Path) -> Iterator[None]:
    """What the system says against a file, as an error that names it."""
    try:
        yield
    except OSError as error:
        words = _WORDS.get(error.errno or 0, error.strerror or type(error).__name__)
        raise OutputError(f"{path.name} was not written: {words}", str(path)) from error
