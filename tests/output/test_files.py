"""A finished file appears whole or not at all."""

from __future__ import annotations

import errno
import os
import pickle
import stat
from pathlib import Path

import pytest

from reporter.errors import OutputError
from reporter.output.files import write_all


def write_whole(path: Path, content: bytes) -> None:
    write_all({path: content})


def failing(number: int):
    def fail(*arguments: object, **named: object) -> None:
        raise OSError(number, os.strerror(number))

    return fail


def test_the_file_holds_exactly_the_bytes(tmp_path: Path) -> None:
    content = bytes(range(256)) * 1000
    write_whole(tmp_path / "a.bin", content)
    assert (tmp_path / "a.bin").read_bytes() == content
    assert [p.name for p in tmp_path.iterdir()] == ["a.bin"]


def test_an_older_file_is_replaced(tmp_path: Path) -> None:
    path = tmp_path / "a.txt"
    path.write_bytes(b"old and longer")
    write_whole(path, b"new")
    assert path.read_bytes() == b"new"


def test_a_missing_folder_is_made(tmp_path: Path) -> None:
    write_whole(tmp_path / "b" / "c" / "a.txt", b"x")
    assert (tmp_path / "b" / "c" / "a.txt").read_bytes() == b"x"


def test_permissions_are_those_of_any_new_file(tmp_path: Path) -> None:
    plain = tmp_path / "plain"
    plain.write_bytes(b"")
    write_whole(tmp_path / "whole", b"")
    assert stat.S_IMODE((tmp_path / "whole").stat().st_mode) == stat.S_IMODE(plain.stat().st_mode)


def test_a_link_is_replaced_and_not_followed(tmp_path: Path) -> None:
    other = tmp_path / "other"
    other.write_bytes(b"kept")
    link = tmp_path / "link"
    link.symlink_to(other)
    write_whole(link, b"new")
    assert other.read_bytes() == b"kept"
    assert not link.is_symlink()
    assert link.read_bytes() == b"new"


@pytest.mark.parametrize("step", ["fsync", "replace"])
@pytest.mark.parametrize(
    ("number", "words"),
    [(errno.ENOSPC, "the disk is full"), (errno.EACCES, "no permission"), (errno.EIO, os.strerror(errno.EIO))],
)
def test_a_failure_leaves_the_old_file_and_nothing_else(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, step: str, number: int, words: str
) -> None:
    path = tmp_path / "a.txt"
    path.write_bytes(b"old")
    monkeypatch.setattr(os, step, failing(number))
    with pytest.raises(OutputError) as caught:
        write_whole(path, b"new")
    assert words in caught.value.message
    assert caught.value.place == str(path)
    assert path.read_bytes() == b"old"
    assert [p.name for p in tmp_path.iterdir()] == ["a.txt"]


@pytest.mark.parametrize("linked", [True, False])
def test_where_one_of_several_cannot_be_written_all_places_are_as_they_were(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, linked: bool
) -> None:
    """The last file is open in another program: the older results stay, the new ones leave nothing."""
    paths = [tmp_path / name for name in ("a.json", "a.xlsx", "a.pdf")]
    paths[0].write_bytes(b"old json")
    paths[2].write_bytes(b"old pdf")
    replace = os.replace

    def locked(source: Path, target: Path) -> None:
        if Path(target) == paths[2]:
            raise PermissionError(errno.EACCES, os.strerror(errno.EACCES))
        replace(source, target)

    monkeypatch.setattr(os, "replace", locked)
    if not linked:
        monkeypatch.setattr(os, "link", failing(errno.EPERM))
    with pytest.raises(OutputError, match="another program has the file open"):
        write_all(dict.fromkeys(paths, b"new"))
    left = {path.name: path.read_bytes() for path in tmp_path.iterdir()}
    assert left == {"a.json": b"old json", "a.pdf": b"old pdf"}


def test_several_files_replace_their_elders_and_leave_nothing_else(tmp_path: Path) -> None:
    (tmp_path / "a.json").write_bytes(b"old")
    write_all({tmp_path / name: name.encode() for name in ("a.json", "a.xlsx", "a.pdf")})
    left = {path.name: path.read_bytes() for path in tmp_path.iterdir()}
    assert left == {name: name.encode() for name in ("a.json", "a.xlsx", "a.pdf")}


def test_an_interruption_leaves_nothing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def interrupt(descriptor: int) -> None:
        raise KeyboardInterrupt

    monkeypatch.setattr(os, "fsync", interrupt)
    with pytest.raises(KeyboardInterrupt):
        write_whole(tmp_path / "a.txt", b"new")
    assert list(tmp_path.iterdir()) == []


def test_a_file_in_place_of_the_folder_is_refused(tmp_path: Path) -> None:
    (tmp_path / "folder").write_bytes(b"a file")
    with pytest.raises(OutputError, match="a file"):
        write_whole(tmp_path / "folder" / "a.txt", b"x")
    with pytest.raises(OutputError, match="a file"):
        write_whole(tmp_path / "folder" / "deeper" / "a.txt", b"x")


def test_a_folder_in_place_of_the_file_is_refused(tmp_path: Path) -> None:
    (tmp_path / "a.txt").mkdir()
    with pytest.raises(OutputError, match="a folder of this name"):
        write_whole(tmp_path / "a.txt", b"x")
    assert list((tmp_path / "a.txt").iterdir()) == []


def test_the_error_survives_pickling(tmp_path: Path) -> None:
    (tmp_path / "a.txt").mkdir()
    with pytest.raises(OutputError) as caught:
        write_whole(tmp_path / "a.txt", b"x")
    again = pickle.loads(pickle.dumps(caught.value))
    assert (again.message, again.place) == (caught.value.message, caught.value.place)
