"""Cells of readings that are no plain number: words with a known meaning, sentinels, and words to ask about."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from reporter.intake.dates import Fault
from reporter.intake.foreign.columns import Lane
from reporter.intake.foreign.grid import Grid, letters
from reporter.intake.foreign.mapping import meaning_of
from reporter.intake.foreign.model import Desk, Option
from reporter.intake.foreign.numbers import NumberStyle
from reporter.intake.readings import reading_of
from reporter.intake.sheets import sentinels
from reporter.intake.table import Cell, Raw, clean, plain_number
from reporter.record import Reading, ReadingKind

#: More different unknown words than this in one column, and it is said to hold no readings.
MANY_WORDS = 12
_KINDS = (
    ReadingKind.BLANK, ReadingKind.NOT_DETECTED, ReadingKind.OVER, ReadingKind.CALIBRATION, ReadingKind.ERROR
)  # fmt: skip
_LOOKALIKES = str.maketrans({"O": "0", "o": "0", "l": "1", "I": "1"})


def read_cell(value: Raw, unit: str, style: NumberStyle, words: Mapping[str, str]) -> Reading | Fault:
    """What one cell of a reading holds, by the number style and the words of a mapping."""
    text = plain_number(value) if isinstance(value, float) else clean(value) if isinstance(value, str) else ""
    meaning = words.get(text)
    if meaning is not None and meaning != "number":
        kind = meaning_of(meaning)
        if kind is not None:
            return Reading(kind, None, text)
        value = meaning
    if isinstance(value, str):
        value = style.plain(value) if meaning is None else value
    found = reading_of(Cell("", value), unit)
    if isinstance(found, Reading) and isinstance(value, str) and found.text != text:
        return Reading(found.kind, found.value, text)
    return found


def words_of(lanes: Sequence[Lane], style: NumberStyle, desk: Desk, grid: Grid) -> tuple[tuple[str, str], ...]:
    """The words of a file with meanings that are not those everyone knows; unknown ones are asked about."""
    words: dict[str, str] = {}
    for lane in lanes:
        unknown: dict[str, Fault] = {}
        for value in dict.fromkeys(cell for cell in lane.cells if isinstance(cell, (str, float))):
            read = read_cell(value, lane.unit, style, words)
            text = plain_number(value) if isinstance(value, float) else clean(value)
            if isinstance(read, Fault):
                unknown.setdefault(text, read)
            elif read.kind is ReadingKind.NUMBER and read.value in sentinels():
                words[text] = _sentinel(text, lane, desk)
        for text, fault in list(unknown.items())[:MANY_WORDS]:
            meaning = _unknown(text, fault, lane, desk, style)
            if meaning:
                words[text] = meaning
        if len(unknown) > MANY_WORDS:
            found = f"{len(unknown)} different texts, such as {next(iter(unknown))!r}"
            desk.ask(f"column.{letters(lane.column)}.words", "Does this column hold readings?", found, ())
    return tuple((word, meaning) for word, meaning in words.items() if meaning)


def _sentinel(text: str, lane: Lane, desk: Desk) -> str:
    """A number that loggers write for a missing value, where it could be measured."""
    options = (Option("error value", "no reading"), Option("number", "it was measured"))
    return desk.ask(
        f"word.{text}", f"What does {text} in {lane.name} mean?", "a number loggers write for none", options
    )


def _unknown(text: str, fault: Fault, lane: Lane, desk: Desk, style: NumberStyle) -> str:
    plain = style.plain(text)
    if fault.code == "error-value":
        return ""
    if fault.code == "out-of-range":
        try:
            value = float(plain)
        except ValueError:
            return ""
        if value in sentinels():
            desk.say(f"{lane.name}: {text} is no reading, as loggers write for a missing value")
            return "error value"
        return ""
    options = [Option(kind.value) for kind in _KINDS]
    repaired = plain.translate(_LOOKALIKES)
    if repaired != plain and not isinstance(reading_of(Cell("", repaired), lane.unit), Fault):
        options.append(Option(repaired, "letters were typed for digits"))
    return desk.ask(f"word.{text}", f"What does {text!r} in {lane.name} mean?", fault.found, options)
