"""Three disturbances at once: never an exception, never a wrong number; the truth, or a question or a problem."""

from __future__ import annotations

from collections import Counter
from dataclasses import dataclass, field
from random import Random

import pytest

from reporter.intake.foreign import look, mapping_of
from reporter.intake.foreign.apply import apply_to_grid
from reporter.problems import Grade
from tests.corpus.disturbances_of_form import ANY, BOOK, TEXT
from tests.corpus.draft import Draft
from tests.corpus.truth import CHANNELS, STARTS

BATCHES, EACH = 12, 60
#: No file with one of these may be read, unless another disturbance takes it back.
_MUST_STOP = ("row_twice_changed", "cell_too_many")


@dataclass
class Tally:
    """How often each disturbance was met, and how often the truth came out all the same."""

    met: Counter[str] = field(default_factory=Counter)
    read: Counter[str] = field(default_factory=Counter)
    files: int = 0
    whole: int = 0


@pytest.fixture(scope="module")
def tally() -> Tally:
    return Tally()


@pytest.mark.parametrize("batch", range(BATCHES))
def test_three_disturbances_at_once(batch: int, tally: Tally, tmp_path_factory: pytest.TempPathFactory) -> None:
    folder = tmp_path_factory.mktemp("together")
    for number in range(EACH):
        chance = Random(batch * 1000 + number)
        draft = Draft(book=number % 5 == 0)
        table = {**ANY, **(BOOK if draft.book else TEXT)}
        names = chance.sample(sorted(table), 3)
        for name in names:
            table[name](draft, chance)
        path = folder / draft.name
        path.write_bytes(draft.content())
        said = f"seed {batch * 1000 + number}: {', '.join(names)}"
        tally.files += 1
        tally.met.update(names)
        found = look(path, draft.answers)
        if found.questions or found.mapping is None:
            continue
        day = draft.shift(STARTS[0]).date()
        made = apply_to_grid(found.grid, mapping_of(found), day=day)
        if any(p.grade is Grade.UNREADABLE for p in made.problems):
            continue
        order = [made.readings.channels.index(name) for name in CHANNELS]
        rows = [
            (row.time, tuple((row.readings[i].kind.value, row.readings[i].value) for i in order))
            for row in made.readings.rows
        ]
        assert rows == draft.expected(), said
        tally.whole += 1
        tally.read.update(names)


def test_most_files_are_read_and_every_disturbance_is_met(tally: Tally) -> None:
    assert tally.files == BATCHES * EACH >= 500
    assert tally.whole > tally.files // 2, "the test stops too often to say much"
    every = {*ANY, *TEXT, *BOOK}
    assert set(tally.met) == every
    assert every - set(tally.read) <= set(_MUST_STOP), "these are never read"
