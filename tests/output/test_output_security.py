"""Documents and texts made to do harm: nothing is run, followed or fetched, and nothing stops the report."""

from __future__ import annotations

import io
import json
import re
import time
import zipfile
import zlib
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import openpyxl
import pikepdf
import pytest

from reporter.api import assess, report_files
from reporter.intake import read_bytes
from reporter.outcome import Outcome
from reporter.output.binding import MAX_PAGES, page_count
from reporter.problems import Place
from reporter.record import Attachment, Given
from tests.output.conftest import ISSUED
from tests.output.test_pdf import pages_of

_A4 = b"/MediaBox[0 0 595 842]"
_FORM = b"<</Type/XObject/Subtype/Form/BBox[0 0 9 9]/Length 1>>stream\nq\nendstream"


def file_of(*objects: bytes) -> bytes:
    """A PDF file of these objects, the first its catalogue."""
    out, places = b"%PDF-1.7\n", []
    for number, content in enumerate(objects, 1):
        places.append(len(out))
        out += b"%d 0 obj\n%s\nendobj\n" % (number, content)
    table = b"".join(b"%010d 00000 n \n" % place for place in places)
    tail = b"trailer<</Size %d/Root 1 0 R>>\nstartxref\n%d\n%%%%EOF" % (len(objects) + 1, len(out))
    return out + b"xref\n0 %d\n0000000000 65535 f \n%s%s" % (len(objects) + 1, table, tail)


def one_page(entries: bytes = b"", *objects: bytes, media: bytes = _A4, tree: bytes = b"/Count 1") -> bytes:
    """A PDF file of one page with these entries; further objects are numbered from 4."""
    page = b"<</Type/Page/Parent 2 0 R%s%s>>" % (media, entries)
    return file_of(b"<</Type/Catalog/Pages 2 0 R>>", b"<</Type/Pages/Kids[3 0 R]%s>>" % tree, page, *objects)


def stream(data: bytes, entries: bytes = b"") -> bytes:
    return b"<</Length %d%s>>stream\n%s\nendstream" % (len(data), entries, data)


def encrypted(revision: int) -> bytes:
    with pikepdf.open(io.BytesIO(one_page())) as pdf:
        buffer = io.BytesIO()
        aes = revision > 3
        pdf.save(buffer, encryption=pikepdf.Encryption(owner="key", user="", R=revision, aes=aes, metadata=aes))
    return buffer.getvalue()


def many_pages(number: int) -> bytes:
    with pikepdf.new() as pdf:
        for _ in range(number):
            pdf.add_blank_page()
        buffer = io.BytesIO()
        pdf.save(buffer)
    return buffer.getvalue()


ACTIONS = b"/AA<</O 6 0 R>>/A 6 0 R/OpenAction 6 0 R/F(file:///etc/passwd)/Ref<</F(http://example.invalid)>>"
#: Documents that are bound in, each for what it leads to.
BOUND = {
    "nothing on the page": one_page(),
    "a name of nothing": one_page(b"/Resources<</Font<</F1 99 0 R>>>>/Group 98 0 R/Annots[null 97 0 R]"),
    "resources that are none": one_page(b"/Resources[1 2]"),
    "resources that hold themselves": one_page(b"/Resources 4 0 R", b"<</XObject<</A 4 0 R>>>>"),
    "a corner for a corner": one_page(media=b"/MediaBox[595 842 0 0]"),
    "turned by words": one_page(b"/Rotate(abc)"),
    "more pages said than there are": one_page(tree=b"/Count 2000000000"),
    "content that closes what it did not open": one_page(b"/Contents 4 0 R", stream(b"Q Q Q EMC EMC ET")),
    "content that ends the file": one_page(b"/Contents 4 0 R", stream(b"endstream endobj %%EOF")),
    "a name that ends an object": one_page(b"/Resources<</Font<</F#3e#3e#20endobj 4 0 R>>>>", b"<</Type/Font>>"),
    "scripts and actions": one_page(
        b"/AA<</O 6 0 R>>/Annots[4 0 R<</Subtype/Link/Rect[0 0 9 9]/A 6 0 R>>]",
        b"<</Subtype/Widget/Rect[0 0 9 9]/AP<</N 5 0 R>>/A 6 0 R>>",
        _FORM.replace(b"/Type", ACTIONS + b"/Type"),
        b"<</S/JavaScript/JS(app.alert\\(1\\))/Next<</S/Launch/F(cmd.exe)>>>>",
    ),
}
#: Documents that are named in the report and not bound in.
REFUSED = {
    "no document": b"%PDF-1.7",
    "encrypted, opened by no key (AES)": encrypted(6),
    "encrypted, opened by no key (RC4)": encrypted(3),
    "pages that hold themselves": file_of(b"<</Type/Catalog/Pages 2 0 R>>", b"<</Type/Pages/Count 1/Kids[2 0 R]>>"),
    "no area": one_page(media=b"/MediaBox[0 0 0 0]"),
    "no box": one_page(media=b""),
    "a box of words": one_page(media=b"/MediaBox[(a)/B null 3]"),
    "a box without end": one_page(media=b"/MediaBox[0 0 1000000000 1]"),
    "a hundred megabytes of blanks": one_page(
        b"/Contents 4 0 R", stream(zlib.compress(b" " * (100 << 20)), b"/Filter/FlateDecode")
    ),
    "a filter that is none": one_page(b"/Contents 4 0 R", stream(b"abc", b"/Filter/Nope")),
    "objects deep in each other": one_page(
        b"/Resources<</A 4 0 R>>", *(b"<</A<</B %d 0 R>>>>" % number for number in range(5, 905)), b"[]"
    ),
    "a stamp without a place": one_page(b"/Annots[4 0 R]", b"<</Subtype/Stamp/AP<</N 5 0 R>>>>", _FORM),
    "too many pages": many_pages(MAX_PAGES + 1),
}


@pytest.mark.parametrize("name", BOUND)
def test_a_document_that_can_be_drawn_is_counted(name: str, caplog: pytest.LogCaptureFixture) -> None:
    assert page_count(BOUND[name]) == 1
    assert caplog.records == []


@pytest.mark.parametrize("name", REFUSED)
def test_a_document_that_cannot_be_drawn_is_none(name: str, caplog: pytest.LogCaptureFixture) -> None:
    start = time.process_time()
    assert page_count(REFUSED[name]) == 0
    assert time.process_time() - start < 2.0
    assert caplog.records == []


def entries_of(content: bytes) -> Iterator[tuple[str, Any]]:
    """Key and value of every dictionary and stream of a PDF file."""
    with pikepdf.open(io.BytesIO(content)) as pdf:
        for thing in pdf.objects:
            if isinstance(thing, (pikepdf.Dictionary, pikepdf.Stream)):
                yield from ((key, thing.get(key)) for key in thing.keys())  # noqa: SIM118


@pytest.fixture(scope="module")
def bound_report(
    thin: Outcome,
    changed: Callable[..., Outcome],
    render: Callable[..., bytes],
    tmp_path_factory: pytest.TempPathFactory,
) -> bytes:
    folder = tmp_path_factory.mktemp("papers")
    names = [f"{number}.pdf" for number, _ in enumerate((*BOUND, *REFUSED))]
    for name, content in zip(names, (*BOUND.values(), *REFUSED.values()), strict=True):
        (folder / name).write_bytes(content)
    rows = tuple(Attachment(Place(), Given(name), Given("certificate")) for name in names)
    return render(changed(thin, attachments=rows), folder=folder)


def test_every_document_is_bound_in_or_said_not_to_be(bound_report: bytes) -> None:
    text = " ".join("".join(pages_of(bound_report)).split())
    assert text.count("could not be read as a PDF or a picture; not bound in") == len(REFUSED)
    for number in range(len(BOUND) + len(REFUSED)):
        assert f"{number}.pdf" in text


def test_scripts_actions_and_files_elsewhere_stay_behind(bound_report: bytes) -> None:
    keys = {key for key, _ in entries_of(bound_report)}
    assert keys.isdisjoint({"/JS", "/AA", "/OpenAction", "/URI", "/Ref", "/FFilter"})
    kinds = {str(value) for key, value in entries_of(bound_report) if key == "/S"}
    assert kinds.isdisjoint({"/JavaScript", "/Launch", "/URI", "/GoToR", "/SubmitForm", "/ImportData"})
    assert b"etc/passwd" not in bound_report


HARM = (
    "=cmd|' /C calc'!A0", "+1+cmd|' /C calc'!A0", "@SUM(1+1)*cmd|'x'!A0", "-2+3+cmd|'x'!A0",
    "<script>alert(1)</script></table></body>", "<img src='file:///etc/passwd'>", "<style>*{display:none}</style>",
    "{{ 7 * 7 }}{% include '/etc/passwd' %}", "]]><!--", "https://example.invalid/x", "\x1b[2J\x07\x00\u202e",
    "{0.__class__}",
)  # fmt: skip


def harmful(record: dict[str, Any]) -> dict[str, Any]:
    """A record with harm in every text that is free."""
    for number, item in enumerate(("Facility", "Unit tested", "Authority", "Test lead", "Purpose", "Report number")):
        record["Test"][item] = HARM[number]
    record["Test"] |= {text: text for text in HARM}
    record["Channels"][0] |= {"Channel": HARM[4], "Analyzer": HARM[0], "Serial number": HARM[7]}
    for row in record["Readings"]:
        row[HARM[4]] = row.pop("NOx")
    record["Runs"][0] |= {"Run": HARM[0], "Heat input source": HARM[1]}
    record["Limits"] = [
        {"Limit id": text, "Pollutant": "NOx", "Limit": 9, "Unit": "ppm", "Authority": text, "Citation": text}
        for text in HARM
    ]
    record["Events"] = [{"Time": "9:05", "What": text, "Reason": text} for text in HARM]
    record["Attachments"] = [{"File": text, "What": "certificate"} for text in (*HARM, "../x.pdf", "/etc/passwd")]
    return record


@pytest.fixture(scope="module")
def harmful_files() -> dict[str, bytes]:
    rows = [{"Time": f"9:{minute:02d}", "NOx": 24.0, "O2": 4.0} for minute in range(12)]
    record = {
        "Test": {"Testing firm": "F", "Test date": "2026-04-14", "Time zone": "UTC", "Unit system": "US"},
        "Channels": [
            {"Channel": gas, "Gas": gas, "Unit": unit, "Moisture basis": "dry"}
            for gas, unit in (("NOx", "ppm"), ("O2", "%"))
        ],
        "Readings": rows,
        "Runs": [{"Run": "1", "Start": "9:00", "End": "9:10"}],
    }  # fmt: skip
    found = read_bytes("harm.json", json.dumps(harmful(record)).encode())
    assert found.record is not None, [problem.text() for problem in found.problems][:3]
    return report_files(assess(found.record), ISSUED)


def test_no_text_becomes_a_formula_or_a_link_of_the_workbook(harmful_files: dict[str, bytes]) -> None:
    content = harmful_files[".xlsx"]
    texts = set()
    for sheet in openpyxl.load_workbook(io.BytesIO(content)):
        for row in sheet.iter_rows():
            for cell in row:
                assert cell.hyperlink is None
                if cell.data_type == "f":
                    assert not re.search(r"cmd\||SUM\(1|7 \* 7|script|example", str(cell.value)), cell.coordinate
                elif isinstance(cell.value, str):
                    texts.add(cell.value)
    assert set(HARM[:4]) <= texts
    with zipfile.ZipFile(io.BytesIO(content)) as archive:
        assert not any(b"External" in archive.read(name) for name in archive.namelist() if name.endswith(".rels"))


def test_no_text_becomes_markup_or_an_action_of_the_report(harmful_files: dict[str, bytes]) -> None:
    content = harmful_files[".pdf"]
    text = "".join("".join(pages_of(content)).split())
    for harm in (HARM[0], HARM[4], HARM[5], HARM[6], HARM[7], HARM[11]):
        assert "".join(harm.split()) in text
    assert {key for key, _ in entries_of(content)}.isdisjoint({"/JS", "/AA", "/OpenAction", "/URI"})


def test_an_attachment_elsewhere_is_none(
    thin: Outcome, changed: Callable[..., Outcome], render: Any, tmp_path: Path
) -> None:
    folder = tmp_path / "job"
    folder.mkdir()
    (tmp_path / "secret.pdf").write_bytes(BOUND["nothing on the page"])
    (folder / "link.pdf").symlink_to(tmp_path / "secret.pdf")
    names = ("../secret.pdf", "link.pdf", str(tmp_path / "secret.pdf"))
    rows = tuple(Attachment(Place(), Given(name), Given("certificate")) for name in names)
    text = " ".join("".join(pages_of(render(changed(thin, attachments=rows), folder=folder))).split())
    assert text.count("not beside the field workbook; not bound in") == len(names)
