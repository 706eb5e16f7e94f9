"""What could not be stated though no limit asks for it: said once for each result, with its reasons."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from reporter.reduction.book import Book
from reporter.reduction.plans import Plan
from reporter.reduction.results import Missing


def say_gaps(book: Book, wanted: Sequence[Plan], missing: Mapping[str, Sequence[Missing]]) -> None:
    """Say which plain results are missing and why."""
    for plan in wanted:
        if plan.limit is not None:
            continue
        gaps = missing.get(f"{plan.lane.segment}.{plan.ending}", ())
        runs: dict[str, list[str]] = {}
        for gap in gaps:
            head, _, words = gap.words.rpartition(": ") if gap.words.startswith("run ") else ("", "", gap.words)
            runs.setdefault(words, []).append(head.removeprefix("run "))
        for words, names in runs.items():
            of = f" in run {', '.join(names)}" if all(names) else ""
            book.say(f"{plan.lane.gas.label}, {plan.quantity.replace('_', ' ')}: not stated{of}; {words}.")
