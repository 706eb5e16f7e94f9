"""Assessed samples, the report made of one of them, and a way to change what was entered."""

from __future__ import annotations

import logging
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import replace
from datetime import UTC, datetime
from pathlib import Path
from typing import Any

import pytest

from reporter.api import assess, opened
from reporter.outcome import Outcome
from reporter.output.pdf import PdfOptions, render_pdf

SAMPLES = Path(__file__).resolve().parents[2] / "sample_inputs" / "valid"
ISSUED = datetime(2026, 5, 1, 12, 0, tzinfo=UTC)
ENCLOSED = {"boiler.json": b'{"entries": {}}', "boiler.results.xlsx": b"PK results"}


@pytest.fixture(scope="session")
def boiler() -> Outcome:
    """The gas-fired boiler: US units, three limits, three attachments."""
    return opened(SAMPLES / "gas_boiler_us.xlsx")


@pytest.fixture(scope="session")
def wood() -> Outcome:
    """The wood-chip boiler: SI units, k = 21, no attachments."""
    return opened(SAMPLES / "wood_boiler_si.xlsx")


@pytest.fixture(scope="session")
def invalid() -> Outcome:
    """A test of four runs, the second made invalid for NOx by its bias."""
    return opened(SAMPLES / "bias_invalid_run.xlsx")


@pytest.fixture(scope="session")
def changed() -> Callable[..., Outcome]:
    """The outcome of another's record with some sheets replaced."""
    return lambda outcome, **sheets: assess(replace(outcome.record, **sheets))


@pytest.fixture(scope="session")
def thin(wood: Outcome, changed: Callable[..., Outcome]) -> Outcome:
    """A test of which little was entered: its report is short."""
    return changed(wood, limits=(), calibrations=(), cylinders=(), sheets=(), fuels=(), attachments=())


@contextmanager
def silent_renderer() -> Iterator[None]:
    """Any line of the renderer's log is a failure."""
    lines: list[str] = []

    class Keep(logging.Handler):
        def emit(self, record: logging.LogRecord) -> None:
            lines.append(record.getMessage())

    logger, keep = logging.getLogger("weasyprint"), Keep(logging.WARNING)
    logger.addHandler(keep)
    try:
        yield
    finally:
        logger.removeHandler(keep)
    assert lines == []


@pytest.fixture(scope="session")
def render() -> Callable[..., bytes]:
    """Make a report; a line in the renderer's log fails the test."""

    def made(outcome: Outcome, **options: Any) -> bytes:
        with silent_renderer():
            return render_pdf(outcome, issued=ISSUED, version="0.1.0", enclosed=ENCLOSED, options=PdfOptions(**options))

    return made


@pytest.fixture(scope="session")
def boiler_pdf(boiler: Outcome, render: Callable[..., bytes]) -> bytes:
    """The report of the gas-fired boiler with its documents bound in."""
    return render(boiler, folder=SAMPLES)


def overlay(folder: Path, **files: str) -> Path:
    """A firm's template folder with the files given, a point in a name written as two underscores."""
    for name, text in files.items():
        (folder / name.replace("__", ".")).write_text(text, encoding="utf-8")
    return folder
