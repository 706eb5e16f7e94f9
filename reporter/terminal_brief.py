"""The few lines that `fluebook report` prints: states, limits, what is withheld and why, counts of the rest."""

from __future__ import annotations

from collections import Counter

from reporter.outcome import Comparison, Outcome, RunState
from reporter.output.numbers import counted, shown, unit_text
from reporter.output.phrases import Phrases, load_phrases
from reporter.problems import Grade
from reporter.record import text_of
from reporter.synthetic import stamped
from reporter.terminal_text import paragraph, section


def brief(outcome: Outcome) -> str:
    """What was found about a test, in a few lines; `terminal.summary` says it in full."""
    words = load_phrases()
    lines = [paragraph(f"{_runs(outcome)}; {_criteria(outcome)}")]
    lines += [paragraph(_limit(outcome, comparison, words)) for comparison in outcome.comparisons]
    for problem in outcome.problems:
        if problem.grade is Grade.BLOCKS:
            does = words(f"grade.{outcome.bearing(problem).value}")
            title = problem.title[:1].lower() + problem.title[1:]
            lines.append(paragraph(f"{does}: {title}. {problem.found} [{problem.code}]"))
    notes = sum(1 for problem in outcome.problems if problem.grade is Grade.NOTE)
    if notes:
        said = counted(f"{notes} note(s)")
        them = "it" if notes == 1 else "them"
        lines.append(paragraph(f"{said}: `fluebook check` lists {them}, and so does the report"))
    return section(stamped(outcome.record, outcome.record.source.name), lines)


def _runs(outcome: Outcome) -> str:
    states = Counter(result.state for result in outcome.runs)
    parts = [f"{count} {state.value}" for state in RunState if (count := states[state])]
    return counted(f"{len(outcome.runs)} run(s): {', '.join(parts)}")


def _criteria(outcome: Outcome) -> str:
    missed = sum(1 for check in outcome.checks if not check.met)
    if not outcome.checks:
        return "no criterion was applied"
    return f"{len(outcome.checks)} criteria applied, {f'{missed} not met' if missed else 'all met'}"


def _limit(outcome: Outcome, comparison: Comparison, words: Phrases) -> str:
    name = comparison.limit.limit_id.value
    if not comparison.compared:
        return f"{name}: {words('limit.not_compared', reason=comparison.reason)}"
    value, bound = outcome.ledger[comparison.rounded], outcome.ledger[comparison.limit_key]
    relation = text_of(comparison.limit.relation, "at most").replace(" ", "_")
    said = words(f"limit.{relation}_{'met' if comparison.is_met else 'not_met'}")
    return f"{name}: {shown(value)} {unit_text(value.unit)}, {said} ({shown(bound)} {unit_text(bound.unit)})"
