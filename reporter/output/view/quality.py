"""Quality criteria: their outcome in a few lines, and each with the numbers it rests on."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from reporter.ledger import Entry, FromEquation
from reporter.output.numbers import formulas
from reporter.output.view.desk import Desk, aligned, gas_name
from reporter.output.view.model import AnyCell, Block, Cell, Column, ProblemView, QualityView, Row, Table
from reporter.outcome import Check, RunState
from reporter.problems import Grade

_MOST_INPUTS = 3
#: An input that is the same for all rows of a gas stands beside the gas's name.
_SHARED = ("span",)


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
        problems=tuple(_problems(desk)),
        assumed=tuple(formulas(sentence) for sentence in desk.outcome.stated),
    )


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
    columns += [Column(gas_name(gas), width=1.1) for gas in gases]
    rows = []
    for title, checks in groups.items():
        cells: list[AnyCell] = [title, checks[0].citation.text()]
        for gas in gases:
            mine = [check.met for check in checks if check.gas == gas]
            words = desk.words("criterion.met" if all(mine) else "criterion.not_met")
            cells.append(Cell(words, strong=not all(mine)) if mine else desk.missing)
        rows.append(Row(tuple(cells)))
    return Table(tuple(columns), tuple(rows), note=desk.words("criterion.overview"))


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
    """The paragraphs of the criteria of a run and gas that are not met, else of the method's run criteria."""
    mine = [c for c in desk.outcome.checks if gas_name(c.gas) == gas_name(gas) and (run in c.runs or not c.runs)]
    chosen = [c for c in mine if not c.met and c.decides_validity] or mine
    return " and ".join(dict.fromkeys(c.citation.text() for c in chosen)) or desk.words("criterion.no_paragraph")


def _problems(desk: Desk) -> list[ProblemView]:
    """Problems, the gravest first; equal ones in the order of the input."""
    order = (Grade.UNREADABLE, Grade.BLOCKS, Grade.NOTE)
    names = {Grade.UNREADABLE: "unreadable", Grade.BLOCKS: "blocks", Grade.NOTE: "note"}
    ranked = sorted(desk.outcome.problems, key=lambda problem: order.index(problem.grade))
    return [
        ProblemView(
            grade=desk.words(f"grade.{names[problem.grade]}"),
            title=formulas(problem.title),
            found=formulas(problem.found),
            where=problem.place.text().partition(", ")[2] or problem.place.text(),
            remedy=formulas(problem.remedy),
            code=problem.code,
        )
        for problem in ranked
    ]


def criteria(desk: Desk) -> tuple[Block, ...]:
    """One table for each criterion, grouped by the equation its value is computed by."""
    groups = _groups(desk.outcome.checks)
    return tuple(_block(desk, title, checks) for title, checks in groups.items())


def _block(desk: Desk, title: str, checks: Sequence[Check]) -> Block:
    ledger = desk.outcome.ledger
    names = _inputs(desk, checks)
    values = [ledger[check.value] for check in checks]
    equation = values[0].origin.equation if isinstance(values[0].origin, FromEquation) else None
    columns = [Column("", width=3.4)]
    symbols = [equation.parameters[name].symbol for name in names] if equation is not None else []
    columns += [Column(formulas(symbol.replace("_", " ")), number=True) for symbol in symbols]
    columns.append(Column("Value", _common_unit(values), number=True))
    has_difference = any(_needs_alternative(desk, check) for check in checks)
    if has_difference:
        columns.append(Column("Difference", number=True))
    columns.append(Column("", width=0.9))
    rows: list[Row] = []
    for check, entry in zip(checks, values, strict=True):
        cells: list[AnyCell] = [_row_name(desk, check, entry)]
        given = dict(entry.origin.inputs) if isinstance(entry.origin, FromEquation) else {}
        cells += [desk.show(key) if isinstance(key := given.get(name, ""), str) else desk.missing for name in names]
        cells.append(desk.shown(entry))
        if has_difference:
            cells.append(desk.show(check.difference, unit=True) if check.alternative else "")
        cells.append(Cell(desk.words("criterion.met" if check.met else "criterion.not_met"), strong=not check.met))
        rows.append(Row(tuple(cells), anchor=desk.anchor(entry.key)))
    return Block(title=title, text=(_bound_words(desk, checks, values[0]),), tables=(aligned(Table(tuple(columns), tuple(rows))),))


def _needs_alternative(desk: Desk, check: Check) -> bool:
    """Whether a share beyond its bound makes the difference decide."""
    ledger = desk.outcome.ledger
    return bool(check.alternative) and abs(float(ledger[check.value].value)) > float(ledger[check.bound].value)


def _inputs(desk: Desk, checks: Sequence[Check]) -> list[str]:
    """The arguments of the value's equation that have a column: alike in all rows, at most three."""
    shapes = set()
    for check in checks:
        origin = desk.outcome.ledger[check.value].origin
        if not isinstance(origin, FromEquation):
            return []
        single = (n for n, key in origin.inputs if isinstance(key, str) and not desk.outcome.ledger[key].is_series)
        shapes.add((origin.equation.name, tuple(single)))
    if len(shapes) != 1:
        return []
    _, names = shapes.pop()
    return [name for name in names if name not in _SHARED][:_MOST_INPUTS]


def _common_unit(entries: Sequence[Entry]) -> str:
    units = {entry.unit for entry in entries}
    return units.pop() if len(units) == 1 else ""


def _row_name(desk: Desk, check: Check, entry: Entry) -> str:
    particulars = check.title.partition(",")[2].strip()
    run = f"run {', '.join(check.runs)}" if check.runs and "run" not in particulars else ""
    span = ""
    if isinstance(entry.origin, FromEquation):
        key = dict(entry.origin.inputs).get("span", "")
        span = f"span {desk.number_text(key)}" if isinstance(key, str) and key else ""
    return ", ".join(part for part in (gas_name(check.gas), particulars, run, span) if part)


def _bound_words(desk: Desk, checks: Sequence[Check], entry: Entry) -> str:
    """The criterion in a sentence: bound, alternatives by unit, paragraph, equation of the value."""
    bounds = list(dict.fromkeys(desk.number_text(check.bound) for check in checks))
    words = f"{_relation(desk, checks[0])} {' / '.join(bounds)}" if len(bounds) <= 2 else _relation(desk, checks[0])
    others = dict.fromkeys(desk.number_text(check.alternative) for check in checks if check.alternative)
    if others:
        words += f", {desk.words('criterion.alternative')} {' / '.join(others)}"
    words += f" ({checks[0].citation.text()})."
    origin = entry.origin
    if isinstance(origin, FromEquation):
        words += f" {desk.words('criterion.value_by')} {desk.equation_line(origin.equation)} ({origin.equation.citation.text()})."
    return formulas(words[0].upper() + words[1:])
