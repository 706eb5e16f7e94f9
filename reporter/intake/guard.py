"""A look at a file before it is opened: is it a workbook, is it whole, and could opening it do harm?

The parts of the zip container are streamed and searched with regular expressions; nothing is parsed, nothing
is written.  The same pass finds formulas that have no stored value, so that the workbook is loaded once.
"""

from __future__ import annotations

import codecs
import io
import re
import zipfile
import zlib
from collections import Counter
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field

from reporter.intake.cellscan import CellScan
from reporter.intake.container import is_plain, strange_list
from reporter.intake.corner import ATTRIBUTES, MAX_COLUMN, PREFIX, column_number, crowded_row, far_cell

MEGABYTE = 1 << 20
#: Caps on what a workbook may unpack to.
MAX_TOTAL = 100 * MEGABYTE
MAX_RATIO = 200
MAX_ENTRIES = 2000
#: A part smaller than this may be packed at any ratio (repeated styles pack very well).
SMALL_PART = MEGABYTE
#: Cap on the area of merged cells and links of one sheet.
MAX_AREA = 20_000
#: Caps on what all parts hold together: cells, and other elements by name.
MAX_CELLS = 500_000
MAX_ELEMENTS = {"c": MAX_CELLS, "si": MAX_CELLS, "row": 200_000, "xf": 65_490, "sheet": 255}
_CALLED = {"c": "cells", "si": "texts", "row": "rows", "xf": "cell formats", "sheet": "sheets"}
MAX_ROW_BYTES = 4 * MEGABYTE

_WIDE_MARKS = (b"\xff\xfe", b"\xfe\xff")
_OLE = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"
_OLE_ENCRYPTED = "EncryptedPackage".encode("utf-16-le")
_DTD = re.compile(rb"<!(?:DOCTYPE|ENTITY)")
_ENCODING = re.compile(rb"^\s*<\?xml[^>]*?encoding\s*=\s*[\"']([^\"']*)[\"']")
_PREFIXED = re.compile(rb":(?:c|row|si|xf|sheet)[\s>/]")
_COUNTED = re.compile(rb"<" + PREFIX + rb"(c|row|si|xf|sheet)[\s>/]")
_AREA = re.compile(rb"<" + PREFIX + rb"(?:mergeCell|hyperlink)\s" + ATTRIBUTES + rb">")
_REF = re.compile(rb"\bref\s*=\s*[\"']([^\"']*)[\"']")
_RANGE = re.compile(rb"^\$?([A-Z]{1,3})\$?(\d{1,7})(?::\$?([A-Z]{1,3})\$?(\d{1,7}))?$")
_FORMULA_CELL = re.compile(
    rb"<" + PREFIX + rb"c\s" + ATTRIBUTES + rb">\s*<" + PREFIX + rb"f\b[^<>]*(?:/>|>[^<]*</[^<>]*>)\s*"
    rb"(?:</" + PREFIX + rb"c>|<" + PREFIX + rb"v\s*/>|<" + PREFIX + rb"v\s*></)"
)
_ROW_END = re.compile(rb"</" + PREFIX + rb"(?:row|si|xf)\s*>")
_ADDRESS = re.compile(rb"\br\s*=\s*[\"']([A-Z]+\d+)[\"']")
_TEXT_RESULT = re.compile(rb"\bt\s*=\s*[\"']str[\"']")


@dataclass(frozen=True, slots=True)
class Finding:
    """What the look found: a code of the catalogue, what was found, and the part of the file."""

    code: str
    found: str
    sheet_part: str = ""
    cell: str = ""


@dataclass(slots=True)
class Look:
    """Result of the look: findings, and by part of the container the formulas without a stored value, and the cells."""

    findings: list[Finding] = field(default_factory=list)
    uncalculated: dict[str, frozenset[str]] = field(default_factory=dict)
    macros: bool = False
    counts: Counter[bytes] = field(default_factory=Counter)
    scans: dict[str, CellScan] = field(default_factory=dict)
    plain: bool = False

    @property
    def stops(self) -> bool:
        """Whether the file must not be opened."""
        return bool(self.findings)


def look_at(content: bytes, cells: int = MAX_CELLS) -> Look:
    """Look at the bytes of a workbook file of at most so many cells; a file that must not be opened has findings."""
    if content.startswith(_OLE):
        code = "encrypted" if _OLE_ENCRYPTED in content else "old-workbook"
        return Look([Finding(code, "a file of the old binary container")])
    if not content.startswith(b"PK"):
        return Look([Finding("not-a-workbook", _what_it_is(content[:4096]))])
    look = Look()
    try:
        with zipfile.ZipFile(io.BytesIO(content)) as archive:
            if not _container(archive, look):
                for info in archive.infolist():
                    _part(archive, info, look, cells)
                    if look.stops:
                        break
                else:
                    _list(content, archive, look)
    except (zipfile.BadZipFile, zlib.error, EOFError, OSError, ValueError, NotImplementedError) as error:
        look.findings.append(Finding("truncated", str(error) or type(error).__name__))
    return look


def _list(content: bytes, archive: zipfile.ZipFile, look: Look) -> None:
    """Look at what the parts are for, now that each may be parsed."""
    look.plain = is_plain(content, archive)
    try:
        strange = strange_list(archive)
    except Exception:  # a damaged list is said by the reader of the workbook
        look.plain, strange = False, ""
    if strange:
        look.findings.append(Finding("not-a-workbook", strange))


def names_may_be_read(content: bytes) -> bool:
    """Whether the names of the sheets may be read, by the list of the parts and their sizes alone."""
    try:
        with zipfile.ZipFile(io.BytesIO(content)) as archive:
            small = all(
                info.file_size <= SMALL_PART
                for info in archive.infolist()
                if info.filename.endswith(("workbook.xml", "workbook.xml.rels"))
            )
            return small and not _container(archive, Look())
    except (zipfile.BadZipFile, OSError, ValueError, NotImplementedError):
        return False


def _what_it_is(start: bytes) -> str:
    """What a file that is no zip container seems to be."""
    if not start:
        return "an empty file"
    if start.startswith(b"%PDF-"):
        return "a PDF document"
    if start.isascii() and b"\x00" not in start:
        return "plain text, such as comma-separated values"
    return "a file that is no zip container"


def _container(archive: zipfile.ZipFile, look: Look) -> bool:
    """Look at the list of parts; True if that alone stops."""
    infos = archive.infolist()
    names = {info.filename for info in infos}
    look.macros = any(name.endswith("vbaProject.bin") for name in names)
    total = sum(info.file_size for info in infos)
    twice = len({info.filename.casefold() for info in infos}) < len(infos)
    tight = [i for i in infos if i.file_size > SMALL_PART and i.file_size > MAX_RATIO * max(i.compress_size, 1)]
    if any(info.flag_bits & 1 for info in infos):
        look.findings.append(Finding("encrypted", "parts of the file are encrypted"))
    elif any(info.compress_type not in (zipfile.ZIP_STORED, zipfile.ZIP_DEFLATED) for info in infos):
        look.findings.append(Finding("not-a-workbook", "parts packed in a way no spreadsheet program uses"))
    elif len(infos) > MAX_ENTRIES:
        look.findings.append(Finding("zip-bomb", f"{len(infos)} parts"))
    elif twice:
        look.findings.append(Finding("not-a-workbook", "two parts of one name"))
    elif total > MAX_TOTAL:
        look.findings.append(Finding("zip-bomb", f"{total // MEGABYTE} MB unpacked"))
    elif tight:
        ratio = tight[0].file_size // max(tight[0].compress_size, 1)
        look.findings.append(Finding("zip-bomb", f"a part packed {ratio} to 1"))
    elif "[Content_Types].xml" not in names or not any(n.endswith("workbook.xml") for n in names):
        look.findings.append(Finding("not-a-workbook", "a zip container that holds no workbook of sheets"))
    return look.stops


def _part(archive: zipfile.ZipFile, info: zipfile.ZipInfo, look: Look, cells: int) -> None:
    """Look through one part, if it is XML: the name of a part says nothing about what a reader takes it for."""
    name, area, wide = info.filename, 0, False
    uncalculated: set[str] = set()
    scan = CellScan()
    for number, piece in enumerate(_pieces(archive, info)):
        if number == 0:
            wide = _is_wide(archive, info)
            kind = _kind(piece)
            if kind == "binary" and not name.endswith((".xml", ".rels")):
                return
            if kind:
                look.findings.append(Finding("not-a-workbook", f"the part {name} is {kind}, not UTF-8 text"))
                return
        prefixed = _PREFIXED.search(piece) is not None
        usual = scan.see(piece) and not (prefixed or wide)
        _count(piece, look.counts, scan, prefixed=prefixed)
        area += sum(_areas(piece))
        if _DTD.search(piece):
            look.findings.append(Finding("dtd", f"in the part {name}"))
        elif far := far_cell(piece, scan, usual=usual):
            look.findings.append(Finding("far-cell", "", name, far))
        elif not usual and crowded_row(piece):
            look.findings.append(Finding("far-cell", f"more than {MAX_COLUMN} cells in a row", name))
        elif len(piece) > MAX_ROW_BYTES:
            look.findings.append(Finding("zip-bomb", f"a row of more than {MAX_ROW_BYTES // MEGABYTE} MB", name))
        elif many := _too_many(look.counts, cells):
            look.findings.append(Finding("zip-bomb", many, name))
        elif area > MAX_AREA:
            look.findings.append(Finding("far-cell", "merged cells or links over a vast area", name))
        if look.stops:
            return
        if prefixed or "f" in scan.starts or b":f" in piece:
            uncalculated.update(_uncalculated(piece))
    scan.odd |= not usual
    look.scans[name] = scan
    if uncalculated:
        look.uncalculated[name] = frozenset(uncalculated)


def _count(piece: bytes, counts: Counter[bytes], scan: CellScan, *, prefixed: bool) -> None:
    """Count what there may not be too many of; the rarer elements where a piece may have any."""
    if prefixed:
        counts.update(_COUNTED.findall(piece))
        return
    counts[b"c"] += scan.cells
    counts[b"row"] += scan.rows
    if scan.starts & {"s", "x"}:
        counts.update(name for name in _COUNTED.findall(piece) if name not in (b"c", b"row"))


def _too_many(counts: Mapping[bytes, int], cells: int) -> str:
    """Which elements there are too many of; empty if there are none."""
    for element, most in (MAX_ELEMENTS | {"c": cells}).items():
        if counts[element.encode()] > most:
            return f"more than {most:,} {_CALLED[element]}"
    return ""


def _pieces(archive: zipfile.ZipFile, info: zipfile.ZipInfo) -> Iterator[bytes]:
    """The part in pieces of about a megabyte that end where a row, or another element, ends.

    A literal ``<`` cannot stand inside an attribute, so that no element is cut in two.  UTF-16 (which some
    programs write into parts of their own) is given as UTF-8.
    """
    with archive.open(info) as stream:
        rest, wide = b"", None
        while chunk := stream.read(MEGABYTE):
            if wide is None and not rest and chunk.startswith(_WIDE_MARKS):
                wide = codecs.getincrementaldecoder("utf-16")("replace")
            rest += chunk if wide is None else wide.decode(chunk).encode("utf-8", "replace")
            cut = rest.rfind(b"</row>")
            cut = cut if cut >= 0 else _last_end_of_row(rest)
            if cut > 0 or len(rest) > MAX_ROW_BYTES:
                yield rest if cut <= 0 else rest[:cut]
                rest = b"" if cut <= 0 else rest[cut:]
        yield rest


def _is_wide(archive: zipfile.ZipFile, info: zipfile.ZipInfo) -> bool:
    """Whether a part is written in UTF-16, which is looked at as UTF-8."""
    with archive.open(info) as stream:
        return stream.read(2) in _WIDE_MARKS


def _last_end_of_row(data: bytes) -> int:
    """Where the last closing tag of a row (any prefix), or of a shared string, begins; -1 if there is none."""
    ends = [match.start() for match in _ROW_END.finditer(data)]
    return ends[-1] if ends else -1


def _kind(piece: bytes) -> str:
    """What a part is, by its first bytes: empty for UTF-8 text with a tag first."""
    if piece.startswith((b"<\x00", b"\x00<")):
        return "UTF-16 without its mark"
    start = piece.removeprefix(b"\xef\xbb\xbf").lstrip()
    if start and not start.startswith(b"<"):
        return "binary"
    match = _ENCODING.match(start)
    if match and match[1].lower() not in (b"utf-8", b"us-ascii", b"utf-16"):
        return match[1].decode("ascii", "replace")
    return ""


def _areas(piece: bytes) -> Iterator[int]:
    """The number of cells of each merged range and each link."""
    if b"mergeCell" not in piece and b"hyperlink" not in piece:
        return
    for match in _AREA.finditer(piece):
        reference = _REF.search(match[1])
        if reference is None:
            continue
        corners = _RANGE.match(reference[1])
        if corners is None:
            yield MAX_AREA + 1
        elif corners[3]:
            columns = column_number(corners[3].decode()) - column_number(corners[1].decode()) + 1
            yield max(1, columns) * max(1, int(corners[4]) - int(corners[2]) + 1)


def _uncalculated(piece: bytes) -> Iterator[str]:
    """Addresses of formulas that carry no value; an empty text is a value."""
    for match in _FORMULA_CELL.finditer(piece):
        address = _ADDRESS.search(match[1])
        if address and not (_TEXT_RESULT.search(match[1]) and not match[0].rstrip().endswith(b"c>")):
            yield address[1].decode("ascii")
