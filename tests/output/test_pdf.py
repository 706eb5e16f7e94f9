"""The report as a file: structure, links, attachments, and nothing fetched from anywhere."""

from __future__ import annotations

import io
import re
import subprocess
import sys
from collections.abc import Callable
from dataclasses import replace
from functools import cache
from pathlib import Path

import pikepdf
import pytest
from pypdf import PageObject, PdfReader

from reporter.errors import OutputError
from reporter.outcome import Outcome
from reporter.output.pages import page_text, rich, well_formed
from reporter.output.pdf import PdfOptions, render_pdf
from reporter.output.phrases import load_phrases
from reporter.output.view.build import build_view
from reporter.record import Given
from tests.output.conftest import ENCLOSED, ISSUED, overlay
from tests.output.test_phrases import FORBIDDEN


@cache
def pages_of(content: bytes) -> list[str]:
    return [page.extract_text() for page in PdfReader(io.BytesIO(content)).pages]


def destinations(pdf: pikepdf.Pdf) -> set[str]:
    names = pdf.Root.Names.Dests.Names
    return {str(names[at]) for at in range(0, len(names), 2)}


def test_the_file_claims_pdf_a_3u_with_tags_language_and_title(boiler_pdf: bytes) -> None:
    """ISO 19005-3: identification schema in XMP, output intent, file identifier, no encryption."""
    with pikepdf.open(io.BytesIO(boiler_pdf)) as pdf:
        meta = pdf.open_metadata()
        assert (meta["pdfaid:part"], meta["pdfaid:conformance"]) == ("3", "U")
        assert pdf.Root.OutputIntents[0].S == "/GTS_PDFA1"
        assert len(pdf.trailer.ID) == 2
        assert pdf.Root.Lang == "en"
        assert pdf.Root.MarkInfo.Marked
        assert pdf.Root.StructTreeRoot.K
        assert str(pdf.docinfo.Title).startswith("Emission test report, Boiler 2")
        assert not pdf.is_encrypted
        assert b"/JavaScript" not in boiler_pdf


def test_every_font_is_embedded(boiler_pdf: bytes) -> None:
    with pikepdf.open(io.BytesIO(boiler_pdf)) as pdf:
        fonts = [
            one for one in pdf.objects if isinstance(one, pikepdf.Dictionary) and one.get("/Type") == "/FontDescriptor"
        ]
        assert fonts
        for font in fonts:
            assert any(name in font for name in ("/FontFile", "/FontFile2", "/FontFile3"))


@pytest.fixture(scope="module")
def wood_pdf(wood: Outcome, render: Callable[..., bytes]) -> bytes:
    """A report in SI units with the readings printed."""
    return render(wood, minute_data=True)


def test_the_reports_own_pages_use_the_font_of_the_package_alone(wood_pdf: bytes) -> None:
    with pikepdf.open(io.BytesIO(wood_pdf)) as pdf:
        names = {
            str(one.FontName)
            for one in pdf.objects
            if isinstance(one, pikepdf.Dictionary) and one.get("/Type") == "/FontDescriptor"
        }
    assert names
    assert all("Source-Sans" in name or "SourceSans" in name for name in names), names


def test_source_and_results_are_attached_with_their_relationship(boiler: Outcome, boiler_pdf: bytes) -> None:
    with pikepdf.open(io.BytesIO(boiler_pdf)) as pdf:
        assert len(pdf.Root.AF) == len(ENCLOSED) + 1
        kinds = {str(one.UF): str(one.AFRelationship) for one in pdf.Root.AF}
        contents = {name: spec.get_file().read_bytes() for name, spec in pdf.attachments.items()}
        dates = {str(one.EF.F.Params.ModDate) for one in pdf.Root.AF}
    source = boiler.record.source
    assert kinds == {source.name: "/Source", **dict.fromkeys(ENCLOSED, "/Data")}
    assert contents == {source.name: source.content, **ENCLOSED}
    assert all(date.startswith("D:20260501120000") for date in dates)


def test_every_link_leads_somewhere(boiler_pdf: bytes) -> None:
    with pikepdf.open(io.BytesIO(boiler_pdf)) as pdf:
        known = destinations(pdf)
        links = [str(note.Dest) for page in pdf.pages for note in page.get("/Annots", []) if "/Dest" in note]
        assert len(links) > 400
        assert set(links) <= known
        assert all(int(note.F) & 4 for page in pdf.pages for note in page.get("/Annots", []))


def test_each_key_is_an_anchor_and_a_printed_number_leads_to_its_own(boiler: Outcome, boiler_pdf: bytes) -> None:
    view = build_view(boiler, ISSUED, "0.1.0")
    with pikepdf.open(io.BytesIO(boiler_pdf)) as pdf:
        assert set(view.places) <= destinations(pdf)
        links = {str(note.Dest) for page in pdf.pages for note in page.get("/Annots", []) if "/Dest" in note}
    assert {"run.2.nox.corrected", "average.nox.at_reference", "run.1.heat_input"} <= links


def test_each_page_carries_number_report_and_input_hash_and_a_draft_says_so(boiler: Outcome, boiler_pdf: bytes) -> None:
    texts = pages_of(boiler_pdf)
    for at, text in enumerate(texts, 1):
        assert f"Page {at} of {len(texts)}" in text
        assert "PL-26-014" in text
        assert f"input {boiler.record.source.sha256[:12]}" in text
        assert "DRAFT" in text


def test_a_final_report_is_not_marked_as_a_draft(
    thin: Outcome, changed: Callable[..., Outcome], render: Callable[..., bytes]
) -> None:
    final = changed(thin, test=replace(thin.record.test, status=Given("final")))
    assert not any("DRAFT" in text for text in pages_of(render(final)))


def test_the_contents_name_the_page_of_each_section(boiler_pdf: bytes) -> None:
    texts = pages_of(boiler_pdf)
    contents = next(text for text in texts if re.search(r"^\s*Contents$", text, re.MULTILINE))
    rows = re.findall(r"^\s*(\d+)\s+(.+?)\s+(\d+)\s*$", contents[contents.index("Contents") :], re.MULTILINE)
    assert len(rows) >= 17
    for _, title, page in rows[:17]:
        assert title in texts[int(page) - 1]


def test_the_first_pages_answer_what_against_what_how_far(boiler: Outcome, boiler_pdf: bytes) -> None:
    text = " ".join(pages_of(boiler_pdf)[1].split())
    limit = boiler.comparisons[0].limit
    assert limit.citation is not None
    for words in ("at or below the limit as entered", limit.citation.value, "Average", "Margin", "Load", "Fuel"):
        assert words in text


def test_the_statements_stand_in_the_report(boiler_pdf: bytes) -> None:
    text = " ".join(" ".join(pages_of(boiler_pdf)).split())
    for name in ("limits", "no_decision", "review"):
        assert load_phrases()(f"statements.{name}") in text
    assert load_phrases()("cautions.burner") in text


def test_no_printed_word_is_a_forbidden_one(boiler_pdf: bytes) -> None:
    own = [text for text in pages_of(boiler_pdf) if "SHA-256" not in text or "Contents" in text]
    assert [match for text in own for match in FORBIDDEN.findall(text)] == []


def test_text_of_a_workbook_is_never_markup(
    thin: Outcome, changed: Callable[..., Outcome], render: Callable[..., bytes]
) -> None:
    hostile = '<img src="http://example.invalid/x.png"><script>1</script> & =cmd|x \x07'
    test = replace(thin.record.test, facility=Given(hostile), purpose=Given("<b>bold</b>"))
    content = render(changed(thin, test=test))
    text = " ".join(pages_of(content))
    assert "<b>bold</b>" in text
    assert "<script>1</script> & =cmd|x" in text
    assert b"example.invalid" not in b"".join(re.findall(rb"/URI \([^)]*\)", content))


def test_the_text_is_well_formed_and_leaves_nothing_undefined(boiler: Outcome) -> None:
    text = page_text(build_view(boiler, ISSUED, "0.1.0"), load_phrases(), ISSUED, None)
    assert well_formed(text) is not None
    assert "Undefined" not in text


def test_rich_text_marks_up_only_what_is_ours() -> None:
    assert str(rich("NOx & <b>")) == "NO<sub>x</sub> &amp; &lt;b&gt;"
    assert str(rich("1.2×10^−7 lb")) == "1.2×10<sup>−7</sup> lb"
    assert rich("plain <text>, § 8") == "plain <text>, §\u00a08"


def test_the_same_input_gives_the_same_bytes_in_another_process(boiler_pdf: bytes) -> None:
    code = (
        "import sys, hashlib; sys.path.insert(0, '.');"
        "from tests.output.conftest import *;"
        "pdf = render_pdf(opened(SAMPLES / 'gas_boiler_us.xlsx'), issued=ISSUED, version='0.1.0',"
        " enclosed=ENCLOSED, options=PdfOptions(folder=SAMPLES)); sys.stdout.buffer.write(pdf)"
    )
    made = subprocess.run(
        [sys.executable, "-c", code], capture_output=True, check=True, env={"PYTHONHASHSEED": "7", "PATH": ""}
    )
    assert made.stdout == boiler_pdf


def test_a_firms_letterhead_picture_style_and_words_are_laid_over(
    thin: Outcome, render: Callable[..., bytes], tmp_path: Path
) -> None:
    folder = overlay(
        tmp_path,
        letterhead__html='<p class="firm">Own heading<br>of the firm <img src="logo.svg" alt="sign"></p>',
        style_extra__css=".cover .tested { font-size: 14pt }",
        phrases__toml='[title]\nreport = "Measurement report"\n',
        logo__svg='<svg xmlns="http://www.w3.org/2000/svg" width="10" height="10"><rect width="10" height="10"/></svg>',
    )
    text = pages_of(render(thin, templates=folder))[0]
    assert "Own heading" in text
    assert "Measurement report" in text


@pytest.mark.parametrize(
    "letterhead",
    [
        '<img src="http://example.invalid/logo.png" alt="x"/>',
        '<img src="file:///etc/hostname" alt="x"/>',
        '<img src="../outside.svg" alt="x"/>',
        '<img src="missing.svg" alt="x"/>',
        '<link rel="stylesheet" href="https://example.invalid/x.css"/>',
    ],
)
def test_nothing_outside_the_template_folders_is_read(thin: Outcome, tmp_path: Path, letterhead: str) -> None:
    (tmp_path / "outside.svg").write_text("<svg/>", encoding="utf-8")
    inner = tmp_path / "own"
    inner.mkdir()
    overlay(inner, letterhead__html=letterhead)
    with pytest.raises(OutputError, match="ask for a file"):
        render_pdf(thin, issued=ISSUED, version="0.1.0", options=PdfOptions(templates=inner))


@pytest.mark.parametrize(
    "letterhead", ["\n{{ view.nothing }}", "\n{% if %}", "\n{% include 'none.html' %}", "\n{{ 1 / 0 }}"]
)
def test_a_faulty_template_is_an_error_with_its_place(thin: Outcome, tmp_path: Path, letterhead: str) -> None:
    overlay(tmp_path, letterhead__html=letterhead)
    with pytest.raises(OutputError, match=r"templates cannot be filled in: [^(/]+ \(letterhead\.html, line 2\)$"):
        render_pdf(thin, issued=ISSUED, version="0.1.0", options=PdfOptions(templates=tmp_path))


def _heights(page: PageObject) -> list[float]:
    """How high each text of a page stands, from its lower edge."""
    found: list[float] = []

    def visit(text: str, cm: list[float], tm: list[float], *_: object) -> None:
        if text.strip():
            found.append(tm[5] * cm[3] + cm[5])

    page.extract_text(visitor_text=visit)
    return found


def test_long_names_leave_page_number_report_number_and_hash_on_every_page(
    thin: Outcome, changed: Callable[..., Outcome], render: Callable[..., bytes]
) -> None:
    """Cut to one line, above and below: nothing of a long name stands outside the page."""
    firm = "Consolidated Emission Measurement and Combustion Engineers of the Upper Valley (invented) " * 5
    test = replace(
        thin.record.test,
        testing_firm=Given(firm),
        report_number=Given("HM-26-031 " + "A" * 150),
    )
    content = render(changed(thin, test=test))
    digest = thin.record.source.sha256[:12]
    reader = PdfReader(io.BytesIO(content))
    for number, page in enumerate(reader.pages, 1):
        text = page.extract_text()
        assert f"Page {number} of {len(reader.pages)}" in text
        assert f"input {digest}" in text
        assert "Report HM-26-031" in text
        assert all(0.0 < height < float(page.mediabox.height) for height in _heights(page))


def test_readings_are_printed_on_request(wood: Outcome, wood_pdf: bytes) -> None:
    plain = " ".join(" ".join(pages_of(wood_pdf)).split())
    for row in (wood.record.readings.rows[0], wood.record.readings.rows[-1]):
        assert " ".join([f"{row.time:%H:%M}", *(reading.text for reading in row.readings)]) in plain
