"""Findings of several runs are said once, with ranges; what differs in more than its numbers is said on its own."""

from __future__ import annotations

from reporter.outcome import Finding
from reporter.output.finding_words import finding_words
from reporter.output.phrases import Phrases

WORDS = Phrases({"hint.wet": "Water {water} %, of {fuels}."})


def hint(run: str, water: str, fuels: str) -> Finding:
    return Finding(run, "as shipped", phrase="hint.wet", values=(("water", water), ("fuels", fuels)))


def test_runs_that_differ_in_numbers_are_said_once_with_ranges() -> None:
    found = [hint("1", "9.9", "oil (10.2 %)"), hint("2", "16.5", "oil (10.2 %)"), hint("3", "10.1", "oil (9.8 %)")]
    assert finding_words(found, WORDS) == [(("1", "2", "3"), "Water 9.9 to 16.5 %, of oil (9.8 to 10.2 %).")]


def test_another_fuel_or_another_sentence_is_said_on_its_own() -> None:
    found = [
        hint("1", "9.9", "oil (10.2 %)"),
        hint("2", "9.9", "coal (8.1 %)"),
        Finding("1", "Lean."),
        Finding("2", "Lean."),
    ]
    assert finding_words(found, WORDS) == [
        (("1",), "Water 9.9 %, of oil (10.2 %)."),
        (("2",), "Water 9.9 %, of coal (8.1 %)."),
        (("1", "2"), "Lean."),
    ]


def test_what_is_of_all_runs_has_no_run() -> None:
    assert finding_words([Finding("", "All of them."), Finding("1", "All of them.")], WORDS) == [
        ((), "All of them."),
        (("1",), "All of them."),
    ]
