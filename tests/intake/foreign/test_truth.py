"""Every shape of the one truth gives exactly the truth, or the expected question or problem."""

from __future__ import annotations

import sys
from pathlib import Path

import pytest

sys.path.insert(0, str(Path(__file__).parent))

from catalogue_of_shapes import SHAPES
from shapes import TRUTH, Shape

from reporter.errors import RecordError
from reporter.intake.foreign import apply, load, look, mapping_of, save
from reporter.problems import Grade
from reporter.record import ReadingKind

READ = {name: shape for name, shape in SHAPES.items() if not shape.problem}


def written(shape: Shape, folder: Path) -> Path:
    path = folder / shape.name
    path.write_bytes(shape.content)
    return path


def test_there_are_at_least_forty_shapes() -> None:
    assert len(READ) >= 40


@pytest.mark.parametrize("name", READ)
def test_the_truth_comes_of_it(name: str, tmp_path: Path) -> None:
    shape = READ[name]
    path = written(shape, tmp_path)
    found = look(path, shape.answers)
    assert not found.questions, [q.text() for q in found.questions]
    save(mapping_of(found), tmp_path / "a.map.toml")
    made = apply(path, load(tmp_path / "a.map.toml"))
    assert not [p for p in made.problems if p.grade is Grade.UNREADABLE], [p.text() for p in made.problems]
    assert shape.notes <= {p.code for p in made.problems}
    order = [made.readings.channels.index(name) for name in ("NOx", "CO", "O2")]
    rows = [(row.time, *(row.readings[i].value for i in order)) for row in made.readings.rows]
    if name == "percent cells":  # a percentage cell holds the hundredth part, which no float holds exactly
        assert [row[:3] for row in rows] == [row[:3] for row in TRUTH]
        assert [row[3] for row in rows] == pytest.approx([row[3] for row in TRUTH], rel=1e-12)
    else:
        assert rows == TRUTH
    assert all(reading.kind is ReadingKind.NUMBER for row in made.readings.rows for reading in row.readings)
    assert {c.gas: (c.unit, c.basis) for c in made.columns} == {
        "nox": ("ppm", "dry"), "co": ("ppm", "dry"), "o2": ("%", "dry")
    }  # fmt: skip


@pytest.mark.parametrize("name", [name for name, shape in READ.items() if shape.answers])
def test_without_answers_it_asks(name: str, tmp_path: Path) -> None:
    shape = READ[name]
    found = look(written(shape, tmp_path))
    keys = {question.key for question in found.questions}
    for wanted in ["table"] if "table" in shape.answers else shape.answers:
        start, _, rest = wanted.partition("*")
        assert any(key.startswith(start) and key.endswith(rest) for key in keys) or wanted.startswith(
            ("word", "column")
        )
    with pytest.raises(RecordError, match="open questions"):
        mapping_of(found)


@pytest.mark.parametrize("name", [name for name, shape in SHAPES.items() if shape.problem])
def test_the_problem_is_said(name: str, tmp_path: Path) -> None:
    shape = SHAPES[name]
    found = look(written(shape, tmp_path))
    assert shape.problem in {p.code for p in found.problems}
    assert found.mapping is None


def test_a_file_that_is_not_there_is_a_problem(tmp_path: Path) -> None:
    assert [p.code for p in look(tmp_path / "none.csv").problems] == ["not-a-workbook"]
