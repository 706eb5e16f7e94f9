"""Damaged files never break the reader, and what still reads without a question is never another number quietly."""

from __future__ import annotations

import random

import pytest

from reporter.intake.foreign.apply import apply_to_grid
from reporter.intake.foreign.grid import grid_of
from reporter.intake.foreign.look import look_at_grid, mapping_of
from tests.corpus.case import END, plain
from tests.corpus.corpus import CASES
from tests.corpus.truth import TRUTH

TEXTS = [case for case in CASES.values() if case.file == "logger.csv" and not case.stops]
PIECES = (
    b"ND", b"<0.5", b"-999", b"9999", b"--", b"#N/A", b"1E+30", b"O", b",", b";", b"\n", b'"', b"\t", b"-", b".", b"0",
    b" ", b"24:00", b"32/13/2026", b"\xff", b"\x00", b"Average", b"=1+1", b"nan", b"inf", b"1e999", b"%", b"(", b"NOx",
    b"O2", b"Time", b"wet", b"+99:00",
)  # fmt: skip


def damaged(content: bytes, chance: random.Random) -> bytes:
    data = bytearray(content)
    for _ in range(chance.randint(1, 3)):
        at = chance.randrange(len(data))
        kind = chance.randrange(4)
        if kind == 0:
            data[at : at + chance.randint(0, 4)] = chance.choice(PIECES)
        elif kind == 1:
            del data[at : at + chance.randint(1, 5)]
        elif kind == 2:
            lines = bytes(data).split(b"\n")
            one, two = chance.randrange(len(lines)), chance.randrange(len(lines))
            lines[one], lines[two] = lines[two], lines[one]
            data = bytearray(b"\n".join(lines))
        else:
            data[at] = chance.randrange(256)
    return bytes(data)


@pytest.mark.parametrize("seed", range(10))
def test_damage_gives_questions_or_problems_and_no_exception(seed: int) -> None:
    chance = random.Random(seed)
    for _ in range(25):
        case = chance.choice(TEXTS)
        grid = grid_of("logger.csv", damaged(case.content, chance))
        found = look_at_grid(grid, case.answers)
        answers = dict(case.answers)
        answers |= {q.key: chance.choice(q.options).answer for q in found.questions if q.options}
        again = look_at_grid(grid, answers)
        if again.mapping is not None and not again.questions:
            made = apply_to_grid(grid, mapping_of(again))
            assert len(made.readings.rows) <= 2 * len(TRUTH) + 2


@pytest.mark.parametrize("length", range(40, 500))
def test_a_file_cut_short_gives_rows_of_the_truth_only(length: int) -> None:
    found = look_at_grid(grid_of("logger.csv", plain()[:length]), END)
    if found.mapping is None or found.questions:
        return
    made = apply_to_grid(found.grid, mapping_of(found))
    whole = {moment: dict(zip(("NOx", "CO", "O2", "CO2"), values, strict=True)) for moment, *values in TRUTH}
    for row in made.readings.rows:
        for channel, reading in zip(made.readings.channels, row.readings, strict=True):
            assert reading.value == whole[row.time][channel]
