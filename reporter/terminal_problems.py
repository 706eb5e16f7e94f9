"""Problems in the terminal: by what they do to the results, the gravest first."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import replace

from reporter.outcome import Bearing
from reporter.output.numbers import counted
from reporter.problems import Grade, Problem
from reporter.terminal_text import paragraph, section

_TITLES = {
    Bearing.UNREADABLE: "Cannot be read",
    Bearing.WITHHELD: "Results withheld",
    Bearing.NOT_COUNTED: "Runs that do not count",
    Bearing.BEARS: "Bears on a result",
    Bearing.NOTE: "Notes",
}


def problems_text(problems: Sequence[Problem], bearing: Callable[[Problem], Bearing] | None = None) -> str:
    """Problems by what they do, the gravest first, each with place, found, expected and what to do.

    Problems that differ only in what was found are printed as one; the number counts each.  Without an outcome
    that knows what a problem bears on, whatever blocks a result is said to withhold it.
    """
    groups = []
    for kind, title in _TITLES.items():
        group = [problem for problem in problems if (bearing or _by_grade)(problem) is kind]
        alike: dict[Problem, list[str]] = {}
        for problem in group:
            alike.setdefault(replace(problem, found="", concerns=()), []).append(problem.found)
        blocks = [_problem(problem, found) for problem, found in alike.items()]
        groups.append(section(f"{title} ({len(group)})", blocks))
    return "\n\n".join(group for group in groups if group)


def _by_grade(problem: Problem) -> Bearing:
    grades = {Grade.UNREADABLE: Bearing.UNREADABLE, Grade.BLOCKS: Bearing.WITHHELD, Grade.NOTE: Bearing.NOTE}
    return grades[problem.grade]


def _problem(problem: Problem, found: Sequence[str]) -> str:
    """A problem, or several that differ in what was found alone."""
    where = problem.place.text()
    lines = [paragraph(f"{where}: {problem.title}" if where else problem.title)]
    facts = [("Found:", words) for words in _together(found)]
    for name, words in (*facts, ("Expected:", problem.expected), ("To do:", problem.remedy)):
        if words:
            lines.append(paragraph(f"{name:<10}{counted(words)}", indent=4, hang=14))
    return "\n".join(lines)


def _together(found: Sequence[str]) -> list[str]:
    """What was found, once for the channels of which the same is said of a run."""
    names: dict[str, list[str]] = {}
    for text in found:
        name, of_run, rest = text.partition(", run ")
        names.setdefault(f", run {rest}" if of_run else text, []).append(name if of_run else "")
    return [f"{', '.join(name for name in some if name)}{words}" for words, some in names.items()]
