"""What can be read two ways is asked; what a file cannot be read for is a problem; never a guess."""

from __future__ import annotations

from collections.abc import Mapping
from datetime import date, datetime
from pathlib import Path
from typing import Any

import pytest

from reporter.errors import RecordError
from reporter.intake.foreign import ForeignReadings, apply, load, look, mapping_of, save
from reporter.intake.foreign.answers import questions_toml, read_answers
from reporter.intake.foreign.apply import apply_to_grid
from reporter.intake.foreign.grid import grid_of
from reporter.intake.foreign.look import Look, look_at_grid
from reporter.intake.foreign.mapping import differences
from reporter.intake.foreign.words import (
    basis_of,
    folded,
    gases_in,
    stamp_of,
    time_part,
    units_in,
    without_correction,
)
from reporter.record import ReadingKind
from tests.corpus.case import END, HEADERS, book, number, rows_on
from tests.corpus.case import text as table
from tests.corpus.corpus import CASES
from tests.corpus.truth import TRUTH as WHOLE

TRUTH = WHOLE[8:20]


def text(**how: Any) -> str:
    """Twelve minutes of the truth, 09:58 to 10:09."""
    return table(rows=TRUTH, **how)


LINES = text().splitlines()


def seen(content: str | bytes, answers: Mapping[str, str] | None = None, name: str = "logger.csv") -> Look:
    data = content if isinstance(content, bytes) else content.encode()
    return look_at_grid(grid_of(name, data), END if answers is None else answers)


def keys(found: Look) -> set[str]:
    return {question.key for question in found.questions}


def made(content: str, answers: Mapping[str, str] | None = None) -> ForeignReadings:
    found = seen(content, answers)
    assert not found.questions, [q.text() for q in found.questions]
    return apply_to_grid(found.grid, mapping_of(found))


def replaced(row: int, cell: int, new: str) -> str:
    """The plain file with one cell of a row of readings changed."""
    lines = list(LINES)
    cells = lines[row].split(",")
    cells[cell] = new
    lines[row] = ",".join(cells)
    return "\n".join(lines) + "\n"


@pytest.mark.parametrize(
    ("header", "gases", "units", "basis"),
    [
        ("NOx @ 3% O2 [ppm dry]", ("nox",), ["ppm"], "dry"),
        ("O2%", ("o2",), ["%"], ""),
        ("02% wet", ("o2",), ["%"], "wet"),
        ("NO_x", ("nox",), [], ""),
        ("NO | ppm tr", ("no",), ["ppm"], "dry"),
        ("Dióxido de carbono (% seco)", ("co2",), ["%"], "dry"),
        ("Monoxyde d'azote ppmvw", ("no",), ["ppm"], "wet"),
        ("CO mg/m3", ("co",), ["mg/m3"], ""),
        ("CO/CO2 ratio", ("co2", "co"), [], ""),
        ("Notes", (), [], ""),
        ("Normal flow", (), [], ""),
        ("Stack W NOx ppm", ("nox",), ["ppm"], ""),
        ("NOx ppm 10 sec", ("nox",), ["ppm"], ""),
        ("NOx-ppm", ("nox",), ["ppm"], ""),
        ("CO/ppm", ("co",), ["ppm"], ""),
        ("O₂/%", ("o2",), ["%"], ""),
        ("O2 %db", ("o2",), ["%"], "dry"),
        ("NOxppm", ("nox",), ["ppm"], ""),
        ("ppmCO", ("co",), ["ppm"], ""),
        ("O2percent", ("o2",), ["%"], ""),
        ("Nozzle ppm", (), ["ppm"], ""),
    ],
)
def test_the_words_of_a_header(header: str, gases: tuple[str, ...], units: list[str], basis: str) -> None:
    assert gases_in(header) == gases
    assert [unit.unit for unit in units_in(header)] == units
    assert basis_of(header) == basis


@pytest.mark.parametrize(
    ("header", "reference", "corrected"),
    [
        ("NOx ppmvd@15%O2", 15.0, True),
        ("NOx corr. 3% O2", 3.0, True),
        ("NOx@O2ref mg/Nm3", None, True),
        ("NOx ppmvdc", None, True),
        ("NOx mg/m3 bez. 11 % O2", 11.0, True),
        ("NOx at stack ppm", None, False),
        ("NOx ppm", None, False),
        ("O2 % dry", None, False),
    ],
)
def test_the_words_of_a_correction(header: str, reference: float | None, corrected: bool) -> None:
    assert without_correction(folded(header))[1:] == (reference, corrected)


@pytest.mark.parametrize(
    ("header", "part", "stamp"),
    [
        ("Date/Time", "both", ""), ("Fecha y hora", "both", ""), ("Uhrzeit", "time", ""), ("Datum", "date", ""),
        ("Interval end", "both", "interval end"), ("Time (start)", "time", "interval start"),
        ("Response time", "", ""), ("Elapsed time", "", ""), ("Time zone", "", ""),
    ],
)  # fmt: skip
def test_the_words_of_a_time_header(header: str, part: str, stamp: str) -> None:
    assert time_part(header) == part
    assert not part or stamp_of(header) == stamp


@pytest.mark.parametrize(
    ("content", "key"),
    [
        (text(clock=lambda t: f"04/05/2026 {t:%H:%M}"), "date-order"),
        (text(clock=lambda t: f"04.05.06 {t:%H:%M}"), "date-order"),
        (text(clock=lambda t: f"46132.{int(t.minute * 694.4444) + 41319:05d}"), "date-order"),
        (text(clock=lambda t: f"{t:%H:%M}"), "day"),
        (text(delimiter=";", show=lambda v: f"{v * 1000:,.0f}"), "decimal-mark"),
        (text(delimiter=";").replace(f"{TRUTH[0][1]:.2f}", "24,10"), "decimal-mark"),
        (text(headers=(("Time", "NOx ppm dry", "CO dry", "O2 % dry"),)), "column.C.unit"),
        (text(headers=(("Time", "NOx ppm dry", "CO ppm", "O2 % dry"),)), "column.C.basis"),
        (text(headers=(("Time", "NOx ppm dry", "ppm dry", "O2 % dry"),)), "column.C.gas"),
        (text(headers=(("Time", "NOx ppm dry", "NOx status ppm dry", "O2 % dry"),)), "column.C.gas"),
        (text(headers=(("Time", "NOx A ppm dry", "NOx B ppm dry", "O2 % dry"),)), "gas.nox.columns"),
        (text(headers=(("Time", "NOx ppm dry @ 15% O2", "CO ppm dry", "O2 % dry"),)), "column.B.corrected"),
        (text(show=lambda v: f"{v / 100:.4f}"), "column.D.fraction"),
        (replaced(4, 1, "purged"), "word.purged"),
        (replaced(4, 2, "9999"), "word.9999"),
        (replaced(4, 1, "2A.0"), "word.2A.0"),
        (text(show=lambda v: f"{v:.2f}".replace(".", ",")), "cells-without-header"),
        (text().replace("\n2026-04-20 10:0", "\n20/04/2026 10:0", 3).replace("2026-04-20", "4/20/2026"), "date-order"),
    ],
)
def test_it_asks(content: str, key: str) -> None:
    found = seen(content)
    assert key in keys(found)
    with pytest.raises(RecordError, match="open questions"):
        mapping_of(found)


@pytest.mark.parametrize(
    ("written", "kind", "value"),
    [
        ("ND", ReadingKind.NOT_DETECTED, None), ("<0.5", ReadingKind.BELOW, 0.5), (">100", ReadingKind.OVER, 100.0),
        ("OVER", ReadingKind.OVER, None), ("CAL", ReadingKind.CALIBRATION, None), ("---", ReadingKind.BLANK, None),
        ("#DIV/0!", ReadingKind.ERROR, None), ("#N/A", ReadingKind.ERROR, None), ("-999", ReadingKind.ERROR, None),
        ("", ReadingKind.BLANK, None), ("-0.1", ReadingKind.NUMBER, -0.1), ("1e1", ReadingKind.NUMBER, 10.0),
    ],
)  # fmt: skip
def test_words_in_cells_stay_what_they_are(written: str, kind: ReadingKind, value: float | None) -> None:
    reading = made(replaced(4, 1, written)).readings.rows[3].readings[0]
    assert (reading.kind, reading.value) == (kind, value)


@pytest.mark.parametrize(
    ("content", "code"),
    [
        (replaced(4, 3, "209"), "out-of-range"),
        (replaced(4, 0, "soon"), "not-a-time"),
        (replaced(4, 0, ""), "not-a-time"),
        (replaced(4, 2, "3.1,7"), "row-out-of-line"),
        ("\n".join([*LINES, "2026-04-20 09:58:00,99,99,4,9"]) + "\n", "duplicate-time"),
    ],
)
def test_it_stops(content: str, code: str) -> None:
    found = made(content)
    assert code in {p.code for p in found.problems}
    place = next(p.place for p in found.problems if p.code == code)
    assert place.cell


def test_a_row_cut_off_at_the_end_is_left_out_and_said() -> None:
    found = made("\n".join([*LINES, "2026-04-20 10:07:00,24.1"]))
    assert len(found.readings.rows) == len(TRUTH)
    assert "the file ends inside this row" in found.report.left_out[0].why


def test_gaps_and_the_time_base_are_reported() -> None:
    found = made("\n".join([*LINES[:5], *LINES[8:]]) + "\n")
    assert found.report.step == 60.0
    assert found.report.gaps == ((datetime(2026, 4, 20, 10, 1), datetime(2026, 4, 20, 10, 5)),)


def test_midnight_as_24_00_is_the_end_of_the_day() -> None:
    found = made(replaced(12, 0, "2026-04-20 24:00"))
    assert found.readings.rows[-1].time == datetime(2026, 4, 21)


def test_times_alone_join_the_test_date(tmp_path: Path) -> None:
    path = tmp_path / "a.csv"
    path.write_text(text(clock=lambda t: f"{t:%H:%M}"), encoding="utf-8")
    mapping = mapping_of(look(path, {**END, "day": "test date"}))
    assert apply(path, mapping, day=date(2026, 4, 20)).readings.rows[0].time == TRUTH[0][0]
    assert "not-a-time" in {p.code for p in apply(path, mapping).problems}


def test_a_clock_of_twelve_hours_is_noticed() -> None:
    lines = ["Time,NOx ppm dry,O2 % dry", *(f"2026-04-20 {h}:{m:02d},24.1,4.1" for h in (11, 12, 1) for m in (0, 30))]
    assert "half-day-clock" in keys(seen("\n".join(lines) + "\n"))


@pytest.mark.parametrize("answer", ["as written", "America/Denver", "Mars/Olympus"])
def test_a_clock_that_goes_back_is_not_taken(answer: str) -> None:
    """01:30 daylight time to 01:59, then 01:00 standard time: by either clock the second half would come first."""
    found = seen(CASES["autumn, an hour twice with offsets"].content, {**END, "time-zone": answer})
    (question,) = found.questions
    assert question.key == "time-zone"
    assert "goes back from 2026-11-01 01:59 to 01:00" in question.found
    assert "as written" not in question.answers


def test_questions_are_written_and_read_back(tmp_path: Path) -> None:
    found = seen(text(clock=lambda t: f"04/05/2026 {t:%H:%M}"), {})
    file = tmp_path / "q.toml"
    file.write_text(questions_toml("a\nb", found.questions), encoding="utf-8")
    assert read_answers(file) == {}
    filled = file.read_text(encoding="utf-8").replace('answer = ""', 'answer = "day first"', 1)
    file.write_text(filled, encoding="utf-8")
    assert read_answers(file) == {found.questions[0].key: "day first"}


def test_an_answer_that_is_none_of_the_options_stays_open() -> None:
    found = seen(text(), {"stamp": "noon"})
    assert keys(found) == {"stamp"}
    assert "noon" in found.questions[0].found


def test_a_mapping_is_kept_and_its_shape_is_held(tmp_path: Path) -> None:
    found = seen(text())
    mapping = mapping_of(found, name='A "firm" (invented)')
    save(mapping, tmp_path / "a.map.toml")
    assert load(tmp_path / "a.map.toml") == mapping
    assert differences(mapping, found.grid) == ()
    other = grid_of("b.csv", text(headers=(("Time", "NOx [ppm wet]", *HEADERS[2:]),)).encode())
    assert differences(mapping, other) == ("no column 'NOx [ppm dry]'", "a new column 'NOx [ppm wet]'")
    assert [p.code for p in apply_to_grid(other, mapping).problems] == ["mapping-differs"]


def test_an_order_of_dates_that_changed_is_noticed() -> None:
    mapping = mapping_of(seen(text(clock=lambda t: f"{t:%d/%m/%Y %H:%M}")))
    other = grid_of("b.csv", text(clock=lambda t: f"{t:%m/%d/%Y %H:%M}").encode())
    assert "mapping-differs" in {p.code for p in apply_to_grid(other, mapping).problems}


@pytest.mark.parametrize(
    ("old", "new"),
    [
        ('unit = "ppm"', 'unit = "pints"'),
        ("form = 1", "form = 9"),
        ('use = "time"', 'use = "ignore"'),
        ("[time]", "[tme]"),
    ],
)
def test_a_mapping_that_holds_nonsense_is_refused(old: str, new: str, tmp_path: Path) -> None:
    file = tmp_path / "a.map.toml"
    save(mapping_of(seen(text())), file)
    changed = file.read_text(encoding="utf-8").replace(old, new, 1)
    file.write_text(changed, encoding="utf-8")
    with pytest.raises(RecordError, match="mapping"):
        load(file)


def test_hidden_parts_of_a_workbook_are_said() -> None:
    def hide(made: object) -> None:
        rows_on(made.active)  # type: ignore[attr-defined]
        made.active.row_dimensions[4].hidden = True  # type: ignore[attr-defined]

    found = seen(book(hide), name="logger.xlsx")
    assert any("1 hidden rows" in line for line in found.evidence)


def test_text_that_looks_like_a_formula_stays_text() -> None:
    found = made(text(above=["=1+1", "+cmd", "@x"], show=number))
    assert len(found.readings.rows) == len(TRUTH)


def test_a_reading_that_looks_like_oxygen_makes_no_header_of_its_row() -> None:
    """0,02 has the letters of 02, as some write O2; two columns of words beside it do not make the row a header."""
    lines = [";".join((*HEADERS, "State", "Mode"))]
    lines += [";".join([f"{row[0]}", *(number(v, ",") for v in row[1:]), "on stack", "auto"]) for row in TRUTH]
    cells = lines[3].split(";")
    lines[3] = ";".join([*cells[:2], "0,02", *cells[3:]])
    found = made("\n".join(lines) + "\n")
    assert len(found.readings.rows) == len(TRUTH)
    assert found.readings.rows[2].readings[1].value == 0.02
