"""Arithmetic means of the valid runs' results, and what averaging the inputs first would have given."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from reporter.assess.validity import counts, included
from reporter.errors import FluebookError
from reporter.ledger import Entry, FromEquation
from reporter.methods.averages import mean_of_valid, percent_difference
from reporter.quantities import label_of
from reporter.record import Limit
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book

_ORDER_PERCENT = 1.0


@dataclass(frozen=True, slots=True)
class Average:
    """The average of a result: its entry (None where no run counts) and the runs with their indicators."""

    entry: Entry | None
    runs: tuple[tuple[RunBook, Entry, Entry], ...]
    with_excluded: Entry | None


def average(book: Book, runs: Sequence[RunBook], name: str, limit: Limit | None = None, *, suffix: str = "") -> Average:
    """Average ``run.<run>.<name>`` over the runs that count, key ``average.<name>`` with the suffix."""
    parts: list[tuple[RunBook, Entry, Entry]] = []
    for about in runs:
        entry = book.ledger.get(about.key(name))
        if entry is not None:
            parts.append((about, entry, counts(book, about, entry, limit)))
    key = f"average.{name}{suffix}"
    made = _mean(book, key, [(entry, flag) for _, entry, flag in parts])
    both = None
    if any(included(book, about) is not None for about, _, _ in parts):
        pairs = [(e, counts(book, a, e, limit, whatever_excluded=True)) for a, e, _ in parts]
        both = _mean(book, f"{key}.with_excluded", pairs)
    return Average(made, tuple(parts), both)


def _mean(book: Book, key: str, parts: Sequence[tuple[Entry, Entry]]) -> Entry | None:
    if not any(flag.value == 1.0 for _, flag in parts):
        return None
    if len({(entry.unit, entry.basis) for entry, _ in parts}) > 1:
        book.say(f"{label_of(key)}: not stated; the runs have it in different units or on different bases.")
        return None
    inputs = {"values": [entry for entry, _ in parts], "flags": [flag for _, flag in parts]}
    return book.apply(mean_of_valid, key, inputs)


def order_of_averaging(book: Book, runs: Sequence[RunBook], name: str, made: Average) -> None:
    """What the equation gives on mean inputs, beside the mean of the runs' results; said above one percent."""
    if made.entry is None or len(made.runs) < 2:
        return
    first = made.runs[0][1]
    origin = first.origin
    if not isinstance(origin, FromEquation):
        return
    prefix = made.runs[0][0].key("")
    inputs: dict[str, Entry] = {}
    varying = 0
    for argument, key in origin.inputs:
        if not isinstance(key, str):
            return
        if not key.startswith(prefix):
            inputs[argument] = book.ledger[key]
            continue
        mean = _mean_input(book, made, argument, key.removeprefix(prefix))
        if mean is None:
            return
        inputs[argument], varying = mean, varying + 1
    if varying < 2:
        return
    try:
        other = book.apply(origin.equation, f"{made.entry.key}.from_means", inputs)
        inputs = {"value": other, "reference": made.entry}
        difference = book.apply(percent_difference, f"{made.entry.key}.order_difference", inputs)
    except FluebookError:
        return
    if abs(difference.value) > _ORDER_PERCENT:
        said = f"{name}: mean inputs would give {difference.value:+.2f} % against the mean of the runs' results"
        book.trouble("order-of-averaging", book.file_place(), said)


def _mean_input(book: Book, made: Average, argument: str, name: str) -> Entry | None:
    """Mean of an input over the same runs as the result; None where a run lacks it."""
    assert made.entry is not None
    pairs = [(book.ledger.get(about.key(name)), flag) for about, _, flag in made.runs]
    entries = [entry for entry, _ in pairs if entry is not None]
    if len(entries) < len(pairs):
        return None
    inputs = {"values": entries, "flags": [flag for _, flag in pairs]}
    label = entries[0].label or label_of(f"average.{name}")
    return book.apply(mean_of_valid, f"{made.entry.key}.mean_of_{argument}", inputs, label=label)
