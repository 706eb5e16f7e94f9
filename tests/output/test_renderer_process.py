"""The renderer in a process of its own gives the same bytes, and whatever happens to it is said or made good."""

from __future__ import annotations

import io
import os
import signal
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

from reporter.errors import OutputError
from reporter.outcome import Outcome
from reporter.output import renderer_process
from reporter.output.pdf import PdfOptions, enclosures, pages_of, render_pdf
from reporter.output.phrases import load_phrases
from reporter.output.renderer import PageRenderer
from reporter.output.renderer_process import RendererProcess, renderer_beside
from tests.output.conftest import ENCLOSED, ISSUED, SAMPLES, overlay


@pytest.fixture
def beside() -> Iterator[RendererProcess]:
    """A process of its own, ended after the test."""
    made = RendererProcess()
    yield made
    made.close()


def made_by(renderer: PageRenderer, outcome: Outcome, templates: Path | None = None) -> bytes:
    """The report of a test by a renderer."""
    options = PdfOptions(templates=templates, folder=SAMPLES)
    pages = pages_of(outcome, tuple(ENCLOSED), issued=ISSUED, version="0.1.0", options=options)
    renderer.lay_out(pages, templates)
    return renderer.finish(enclosures(outcome, ENCLOSED, load_phrases(templates)))


def test_one_process_gives_every_report_the_bytes_it_has_here(
    beside: RendererProcess, boiler: Outcome, thin: Outcome, boiler_pdf: bytes
) -> None:
    short = render_pdf(thin, issued=ISSUED, version="0.1.0", enclosed=ENCLOSED, options=PdfOptions(folder=SAMPLES))
    assert made_by(beside, thin) == short
    assert made_by(beside, boiler) == boiler_pdf
    assert made_by(beside, thin) == short


def test_an_error_of_the_templates_comes_back_and_the_next_report_is_made(
    beside: RendererProcess, thin: Outcome, tmp_path: Path
) -> None:
    overlay(tmp_path, letterhead__html="{{ view.nothing }}")
    with pytest.raises(OutputError, match="templates cannot be filled in") as said:
        made_by(beside, thin, tmp_path)
    assert said.value.place.startswith(("letterhead.html", "template"))
    assert made_by(beside, thin).startswith(b"%PDF-")


def test_a_process_that_ends_costs_its_own_report_alone(beside: RendererProcess, thin: Outcome) -> None:
    made_by(beside, thin)
    beside._process.kill()
    with pytest.raises(OutputError, match="renderer ended"):
        made_by(beside, thin)
    assert made_by(beside, thin).startswith(b"%PDF-")


def test_where_no_process_comes_up_the_report_is_made_here(
    thin: Outcome, monkeypatch: pytest.MonkeyPatch, tmp_path: Path
) -> None:
    monkeypatch.setattr(renderer_process, "_started", lambda: subprocess.Popen(
        [sys.executable, "-c", "pass"], stdin=subprocess.PIPE, stdout=subprocess.PIPE
    ))  # fmt: skip
    beside = RendererProcess()
    assert made_by(beside, thin).startswith(b"%PDF-")
    beside.close()


def test_a_renderer_that_is_loaded_here_is_not_loaded_twice(thin: Outcome, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setitem(sys.modules, "weasyprint", sys)
    with renderer_beside() as renderer:
        assert renderer is None


def test_the_process_ends_with_the_block(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.delitem(sys.modules, "weasyprint", raising=False)
    with renderer_beside() as renderer:
        assert isinstance(renderer, RendererProcess)
        process = renderer._process
        assert process.poll() is None
    assert process.returncode == -signal.SIGKILL
    with pytest.raises(ProcessLookupError):
        os.kill(process.pid, 0)


def test_the_process_ends_when_nobody_speaks_to_it() -> None:
    code = "from reporter.output import renderer_process as r; r._main()"
    made = subprocess.run([sys.executable, "-c", code], input=b"", capture_output=True, check=True)
    assert made.stderr == b""


def test_an_error_that_cannot_be_handed_over_is_worded() -> None:
    class OddError(Exception):
        def __reduce__(self) -> str:
            raise TypeError("not to be pickled")

    import pickle

    stream = io.BytesIO()
    renderer_process._answer(stream, OddError("of its own kind"))
    answer = pickle.loads(stream.getvalue())
    assert isinstance(answer, OutputError)
    assert "of its own kind" in str(answer)
