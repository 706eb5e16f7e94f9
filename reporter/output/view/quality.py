"""Quality criteria: their outcome in a few lines, and each with the numbers it rests on."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from itertools import zip_longest

from reporter.ledger import Entry, FromEquation
from reporter.outcome import Bearing, Check, RunState
from reporter.output.numbers import FIGURE_SPACE, capital, counted, formulas, unit_text
from reporter.output.view.desk import Desk, gas_name
from reporter.output.view.model import AnyCell, Block, Cell, Column, ProblemView, QualityView, Row, Table
from reporter.output.view.not_applied import not_applied
from reporter.output.view.standing import dagger
from reporter.problems import Problem

#: A criterion with more bounds than this has each beside its value.
_MOST_BOUNDS = 2


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
        not_met=tuple(_not_met(desk, check) for check in checks if not check.met),
        runs=tuple(_run_words(desk)),
        not_applied=not_applied(desk),
        problems=tuple(_problems(desk)),
        assumed=tuple(capital(formulas(sentence)) for sentence in desk.outcome.stated if not _said_before(sentence)),
    )


def _said_before(sentence: str) -> bool:
    """Whether a sentence only names criteria that are not applied: they have a list of their own."""
    return sentence.endswith("their criteria are not applied here.")


def _groups(checks: Sequence[Check]) -> dict[str, list[Check]]:
    """Checks of one criterion together, by the part of the title before its particulars.

    A check that bears on two runs (closing one, opening the next) is listed once, with both.
    """
    groups: dict[str, dict[tuple[str, str], Check]] = {}
    for check in checks:
        mine = groups.setdefault(check.title.partition(",")[0], {})
        same = mine.get((check.value, check.bound))
        runs = check.runs if same is None else tuple(dict.fromkeys((*same.runs, *check.runs)))
        mine[check.value, check.bound] = replace(check if same is None else same, runs=runs)
    return {title: list(mine.values()) for title, mine in groups.items()}


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
            cells.append(_answer(desk, checks, span=max(len(gases), 1)))
        rows.append(Row(tuple(cells)))
    parts = [desk.words("criterion.overview"), _adoptions(desk)]
    if any(dagger(desk, (check.bound, check.alternative)) for check in desk.outcome.checks):
        parts.append(desk.words("criterion.recalled"))
    return Table(tuple(columns), tuple(rows), note=" ".join(part for part in parts if part))


def cited(checks: Sequence[Check]) -> str:
    """Where a criterion is printed, once, without the methods that adopt it."""
    texts = [replace(check.citation, number="") if _adopts(check) else check.citation for check in checks]
    return " and ".join(dict.fromkeys(citation.text() for citation in texts))


def _adopts(check: Check) -> bool:
    return check.citation.number.startswith("as adopted")


def _adoptions(desk: Desk) -> str:
    """Which method adopts the criteria for which gases."""
    by_words: dict[str, dict[str, None]] = {}
    for check in desk.outcome.checks:
        if _adopts(check):
            by_words.setdefault(check.citation.number, {})[gas_name(check.gas)] = None
    parts = [f"{', '.join(gases)} {words}" for words, gases in by_words.items()]
    return f"{desk.words('criterion.adopted')} {'; '.join(parts)}." if parts else ""


def _answer(desk: Desk, checks: Sequence[Check], *, span: int = 1) -> AnyCell:
    """Whether all applications of a criterion are met, with a dagger where its number is recalled; else a dash."""
    if not checks:
        return desk.missing
    met = all(check.met for check in checks)
    mark = dagger(desk, (key for check in checks for key in (check.bound, check.alternative)))
    return Cell(desk.words("criterion.met" if met else "criterion.not_met") + mark, strong=not met, span=span)


def _not_met(desk: Desk, check: Check) -> str:
    words = f"{_name(check)} {desk.words('criterion.not_met')} ({check.citation.text()})"
    value, bound = desk.number_text(check.value), desk.number_text(check.bound)
    consequence = f"; {formulas(check.consequence)}" if check.consequence else ""
    return f"{words}: {value}, {_relation(desk, check)} {bound}{consequence}."


def _name(check: Check) -> str:
    return ", ".join(part for part in (gas_name(check.gas), formulas(check.title)) if part)


def _relation(desk: Desk, check: Check) -> str:
    return desk.words(f"criterion.{check.relation.replace(' ', '_')}")


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
                sentences.append(f"{name}, {gas_name(gas.gas)}: {words}.")
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
    for found in dict.fromkeys(problem.found for problem in problems if problem.found):
        name, comma, rest = found.partition(", ")
        head, words = (name, rest) if comma and name in names else ("", found)
        channels.setdefault(words, {})[head] = None
    texts = [", ".join(part for part in (*heads, words) if part) for words, heads in channels.items()]
    return formulas(counted("; ".join(texts)))


def _where(problem: Problem) -> str:
    place = problem.place
    return f"{place.sheet}!{place.cell}" if place.sheet and place.cell else place.sheet or place.file


def criteria(desk: Desk) -> tuple[Block, ...]:
    """One table for each criterion, grouped by the equation its value is computed by."""
    groups = _groups(desk.outcome.checks)
    blocks = [_block(desk, title, checks) for title, checks in groups.items()]
    if any(dagger(desk, (check.bound, check.alternative)) for check in desk.outcome.checks):
        blocks.insert(0, Block(text=(desk.words("criterion.recalled"),)))
    return tuple(blocks)


def _block(desk: Desk, title: str, checks: Sequence[Check]) -> Block:
    """Value and answer of each application, two beside each other; bound and equation stand above."""
    values = [desk.outcome.ledger[check.value] for check in checks]
    common, shared = _common_bounds(desk, checks), _share_bounds(desk, checks)
    bounds = [key for check in checks for key in (check.bound, check.alternative) if key and desk.is_read(key)]
    cells = _cells(desk, checks, bound=not shared)
    half = -(-len(cells) // 2)
    pairs = zip_longest(cells[:half], cells[half:], fillvalue="")
    words = f"{common}{_value_words(desk, values)}"
    table = Table((Column(""), Column("")), tuple(Row(pair) for pair in pairs))
    return Block(title=formulas(title), anchor=desk.place(bounds), text=(words,), tables=(table,))


def _cells(desk: Desk, checks: Sequence[Check], *, bound: bool) -> list[Cell]:
    """One cell per check: what was checked, its value, whether it is met; below, a difference that decides."""
    texts = []
    for check in checks:
        name = _row_name(check)
        if bound:
            name += f", {_relation(desk, check)} {desk.number_text(check.bound)}"
        more = ""
        if needs_alternative(desk, check):
            more = f"\n{desk.words('criterion.difference')} {desk.number_text(check.difference)}"
        texts.append((name, desk.number_text(check.value, unit=False), check, more))
    widest = max(len(value) for _, value, *_ in texts)
    return [
        Cell(
            f"{name}\t{value.rjust(widest, FIGURE_SPACE)}\u2002"
            f"{desk.words('criterion.met' if check.met else 'criterion.not_met')}{more}",
            to=check.value,
            strong=not check.met,
        )
        for name, value, check, more in texts
    ]


def needs_alternative(desk: Desk, check: Check) -> bool:
    """Whether a share beyond its bound makes the difference decide."""
    ledger = desk.outcome.ledger
    return bool(check.alternative) and abs(float(ledger[check.value].value)) > float(ledger[check.bound].value)


def _row_name(check: Check) -> str:
    particulars = check.title.partition(",")[2].strip()
    if len(check.runs) > 1:
        particulars = f"{particulars.rpartition(', ')[0]}, between runs {'–'.join(check.runs)}"
    return formulas(", ".join(part for part in (gas_name(check.gas), particulars) if part))


def _common_bounds(desk: Desk, checks: Sequence[Check]) -> str:
    """The criterion in a sentence; its paragraph alone where the bounds stand beside the values."""
    source = f"{cited(checks)}{_adopted_by(desk, checks)}"
    if not _share_bounds(desk, checks):
        return f"{source}. "
    bounds = dict.fromkeys(f"{_relation(desk, check)} {desk.number_text(check.bound)}" for check in checks)
    words = f" {desk.words('criterion.and')} ".join(bounds)
    others = dict.fromkeys(desk.number_text(check.alternative) for check in checks if check.alternative)
    if others:
        words += f", {desk.words('criterion.alternative')} {' / '.join(others)}"
    return f"{words[:1].upper()}{words[1:]} ({source}). "


def _adopted_by(desk: Desk, checks: Sequence[Check]) -> str:
    """The methods that adopt a criterion, each with a dagger where its number is recalled."""
    marks: dict[str, str] = {}
    for check in checks:
        words = check.citation.number if _adopts(check) else ""
        marks[words] = marks.get(words, "") or dagger(desk, (check.bound, check.alternative))
    own = marks.pop("", "")
    stem = "as adopted by "
    methods = ", ".join(f"{words.removeprefix(stem)}{mark}" for words, mark in marks.items())
    return f"{own}; {stem}{methods}" if methods else own


def _share_bounds(desk: Desk, checks: Sequence[Check]) -> bool:
    """Whether the applications of a criterion have so few bounds that they stand above the table."""
    bounds = {(check.relation, float(desk.outcome.ledger[check.bound].value)) for check in checks}
    return len(bounds) <= _MOST_BOUNDS


def _value_words(desk: Desk, values: Sequence[Entry]) -> str:
    """The equation of the values, with their unit."""
    origin = values[0].origin
    if not isinstance(origin, FromEquation):
        return ""
    units = {unit_text(value.unit) for value in values}
    unit = f" [{units.pop()}]" if len(units) == 1 and units != {""} else ""
    equation = origin.equation
    return f"{desk.words('criterion.value_by')}{unit} {desk.equation_line(equation)} ({equation.citation.text()})."
