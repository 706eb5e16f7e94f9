"""The container of a workbook: which parts its sheets stand in, and whether every reader sees the same parts in it."""

from __future__ import annotations

import posixpath
import zipfile
from collections.abc import Iterator

_END, _END_SIZE = b"PK\x05\x06", 22
_LARGE_ENDS = (b"PK\x06\x06", b"PK\x06\x07")
#: Bytes at the end of a file in which a reader looks for the end of the container.
_TAIL = 66_000
#: Header of the field that gives a part a second name.
_SECOND_NAME = b"up"
#: Parts that make another reader take the file for another kind of workbook.
_OTHER_KINDS = ("content.xml", "workbook.bin", "mimetype")


def sheets_of(archive: zipfile.ZipFile) -> Iterator[tuple[str, str]]:
    """The part of the container each sheet's cells stand in, and the name of the sheet, in their order."""
    from defusedxml.ElementTree import fromstring

    book = next(name for name in archive.namelist() if name.endswith("workbook.xml"))
    folder, base = posixpath.split(book)
    relations = fromstring(archive.read(f"{folder}/_rels/{base}.rels"))
    targets = {
        relation.get("Id"): posixpath.normpath(posixpath.join("/" + folder, relation.get("Target", "")))
        for relation in relations
    }
    for node in fromstring(archive.read(book)).iter():
        if node.tag.endswith("}sheet"):
            identity = next((v for k, v in node.attrib.items() if k.endswith("}id")), "")
            yield targets.get(identity, "").lstrip("/"), node.get("name", "")


def strange_list(archive: zipfile.ZipFile) -> str:
    """What is wrong with the parts of a workbook as a list, in words; empty if nothing is.

    A part that stands in for several sheets is read once for each, whatever was counted in it.
    """
    from defusedxml.ElementTree import fromstring

    kinds = fromstring(archive.read("[Content_Types].xml"))
    books = [kind.get("PartName", "") for kind in kinds if kind.get("ContentType", "").endswith("main+xml")]
    names = [name for name in archive.namelist() if name.lower().endswith("workbook.xml")]
    if len(names) != 1 or any(book.endswith(".xml") and book.lstrip("/") not in (*names, "") for book in books):
        return "more than one list of sheets"
    parts = [part.casefold() for part, _ in sheets_of(archive) if part]
    return "several sheets that stand in one part" if len(parts) != len(set(parts)) else ""


def is_plain(content: bytes, archive: zipfile.ZipFile) -> bool:
    """Whether any reader of the container finds the same parts in it: one end, no second names, no other kind."""
    tail = content[-_TAIL:]
    start, size = archive.start_dir, len(content) - _END_SIZE - archive.start_dir
    end = content[-_END_SIZE:]
    one_end = (
        end.startswith(_END)
        and tail.count(_END) == 1
        and not any(mark in tail for mark in _LARGE_ENDS)
        and (int.from_bytes(end[12:16], "little"), int.from_bytes(end[16:20], "little")) == (size, start)
    )
    names = [info.filename for info in archive.infolist()]
    return (
        one_end
        and "xl/workbook.xml" in names
        and not any(name.lower().endswith(_OTHER_KINDS) for name in names)
        and not any(_SECOND_NAME in info.extra for info in archive.infolist())
    )
