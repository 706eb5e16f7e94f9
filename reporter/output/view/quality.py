"""Quality criteria: their outcome in a few lines, and everything invalid, missing or estimated."""

from __future__ import annotations

import re
from collections.abc import Sequence

from reporter.outcome import Bearing, Check, RunState
from reporter.output.applied import Applied, applied
from reporter.output.numbers import capital, counted, formulas
from reporter.output.view.criteria import adopts, bound_words, cited
from reporter.output.view.desk import Desk, gas_name
from reporter.output.view.model import AnyCell, Cell, Column, ProblemView, QualityView, Row, Table
from reporter.output.view.not_applied import not_applied
from reporter.output.view.standing import dagger
from reporter.problems import Problem

#: A minus as people type it, before a number.
_MINUS = re.compile(r"(?<=\s)-(?=[0-9])")


def quality(desk: Desk) -> QualityView:
    """The outcome of all criteria, the runs that do not count, and every problem in words."""
    checks = desk.outcome.checks
    if not checks:
        lead = desk.words("lead.quality_none")
    elif all(check.met for check in checks):
        lead = desk.words("lead.quality_all_met")
    else:
        lead = desk.words("lead.quality_some")
    return QualityView(
        lead=lead,
        table=_overview(desk) if checks else None,
        not_met=tuple(_not_met(desk, line) for line in applied(desk.outcome, (c for c in checks if not c.met))),
        runs=tuple(_run_words(desk)),
        not_applied=not_applied(desk),
        problems=tuple(_problems(desk)),
        assumed=tuple(capital(formulas(sentence)) for sentence in desk.outcome.stated if not _said_before(sentence)),
    )


def _said_before(sentence: str) -> bool:
    """Whether a sentence only names criteria that are not applied: they have a list of their own."""
    return sentence.endswith("their criteria are not applied here.")


def _groups(checks: Sequence[Check]) -> dict[str, list[Check]]:
    """Checks of one criterion together, by the part of the title before its particulars."""
    groups: dict[str, list[Check]] = {}
    for check in checks:
        groups.setdefault(check.title.partition(",")[0], []).append(check)
    return groups


def _overview(desk: Desk) -> Table:
    """One row per criterion: whether it is met, for each gas."""
    groups = _groups(desk.outcome.checks)
    gases = list(dict.fromkeys(check.gas for check in desk.outcome.checks if check.gas))
    columns = [Column("Criterion", width=3.6), Column("Paragraph", width=2.2)]
    columns += [Column(gas_name(gas), width=1.1) for gas in gases] or [Column("", width=1.1)]
    rows = []
    for title, checks in groups.items():
        cells: list[AnyCell] = [formulas(title), cited(checks)]
        if any(check.gas for check in checks):
            cells += [_answer(desk, [check for check in checks if check.gas == gas]) for gas in gases]
        else:
            cells.append(_answer(desk, checks, span=len(gases)) if gases else _answer(desk, checks))
        rows.append(Row(tuple(cells)))
    parts = [desk.words("criterion.overview"), _adoptions(desk)]
    if any(dagger(desk, (check.bound, check.alternative)) for check in desk.outcome.checks):
        parts.append(desk.words("criterion.recalled"))
    return Table(tuple(columns), tuple(rows), note=" ".join(part for part in parts if part))


def _adoptions(desk: Desk) -> str:
    """Which method adopts the criteria for which gases."""
    by_words: dict[str, dict[str, None]] = {}
    for check in desk.outcome.checks:
        if adopts(check):
            by_words.setdefault(check.citation.number, {})[gas_name(check.gas)] = None
    parts = [f"{', '.join(gases)} {words}" for words, gases in by_words.items()]
    return f"{desk.words('criterion.adopted')} {'; '.join(parts)}." if parts else ""


def _answer(desk: Desk, checks: Sequence[Check], *, span: int = 1) -> AnyCell:
    """Whether all applications of a criterion are met, with a dagger where its number is recalled; else a dash."""
    if not checks:
        return desk.missing
    met = all(check.met for check in checks)
    mark = dagger(desk, (key for check in checks for key in (check.bound, check.alternative)))
    answer = desk.words("criterion.met" if met else "criterion.not_met") + mark
    return Cell(desk.words("criterion.as_a_whole", answer=answer) if span > 1 else answer, strong=not met, span=span)


def _not_met(desk: Desk, line: Applied) -> str:
    check = line.check
    name = ": ".join(part for part in (gas_name(check.gas), formulas(line.title)) if part)
    words = f"{name} {desk.words('criterion.not_met')} ({check.citation.text()})"
    numbers = f"{desk.number_text(check.value)}, {desk.words('criterion.asked', bound=bound_words(desk, check))}"
    consequence = f"; {formulas(check.consequence)}" if check.consequence else ""
    return f"{words}: {numbers}{consequence}."


def _run_words(desk: Desk) -> list[str]:
    sentences = []
    for run in desk.outcome.runs:
        name = f"Run {run.run.run.value}"
        if run.state is RunState.EXCLUDED:
            sentences.append(f"{name} {desk.words('run.excluded_because', reason='; '.join(run.reasons))}.")
        for gas in run.gases:
            if not gas.is_valid:
                reason = formulas("; ".join(gas.reasons) or "; ".join(run.reasons))
                words = desk.words("run.invalid_because", paragraph=_paragraph(desk, run.key, gas.gas), reason=reason)
                sentences.append(f"{name}, {gas_name(gas.gas)}, {words}.")
    return sentences


def _paragraph(desk: Desk, run: str, gas: str) -> str:
    """The paragraphs of the criteria that make a run invalid for a gas: its own, else earlier ones of the gas."""
    mine = [c for c in desk.outcome.checks if gas_name(c.gas) == gas_name(gas) and not c.met]
    own = [c for c in mine if c.decides_validity and (run in c.runs or not c.runs)]
    paragraphs = dict.fromkeys(check.citation.text() for check in own or mine)
    return " and ".join(paragraphs) or desk.words("criterion.no_paragraph")


def _problems(desk: Desk) -> list[ProblemView]:
    """Problems, the gravest first; those of one code and bearing together, in the order of the input."""
    order = list(Bearing)
    bearings = [(problem, desk.outcome.bearing(problem)) for problem in desk.outcome.problems]
    alike: dict[tuple[str, Bearing], list[Problem]] = {}
    for problem, bearing in sorted(bearings, key=lambda one: order.index(one[1])):
        alike.setdefault((problem.code, bearing), []).append(problem)
    return [
        ProblemView(
            grade=capital(desk.words(f"grade.{bearing.value}")),
            title=formulas(some[0].title),
            found=_found_words(desk, some),
            where=", ".join(dict.fromkeys(_where(problem) for problem in some)),
        )
        for (_, bearing), some in alike.items()
    ]


def _found_words(desk: Desk, problems: Sequence[Problem]) -> str:
    """What was found, once for the channels that share it."""
    names = {channel.channel.value for channel in desk.outcome.record.channels}
    channels: dict[str, dict[str, None]] = {}
    for found, of in dict.fromkeys((problem.found, problem.place.field) for problem in problems if problem.found):
        name, comma, rest = found.partition(", ")
        head, words = (name, rest) if comma and name in names else ("", found)
        if found[0].isdigit() and of in names:
            head = of
        channels.setdefault(words, {})[head] = None
    texts = [", ".join(part for part in (*heads, words) if part) for words, heads in channels.items()]
    return _MINUS.sub("−", formulas(counted("; ".join(texts))))


def _where(problem: Problem) -> str:
    place = problem.place
    return f"{place.sheet}!{place.cell}" if place.sheet and place.cell else place.sheet or place.file
