"""The answer: each limit beside the runs, the average, the margin, and how it was entered."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from reporter.gases import find_gas
from reporter.ledger import FromEquation
from reporter.outcome import Comparison, RunResult, RunState
from reporter.output.charts import Bar, ComparisonBars, comparison_strip
from reporter.output.numbers import counted, day, decimals_in, formulas, shortest, significant, unit_text
from reporter.output.view.desk import CARRIED, Desk, entered, fuel_words, gas_name, said
from reporter.output.view.model import AnyCell, Cell, Column, Item, LimitsView, LimitView, Picture, Row, Shown, Table
from reporter.output.view.route import factor_route
from reporter.output.view.tabular import aligned, side_by_side
from reporter.record import Limit, Run, text_of

_YES = "yes"
#: Significant digits of an average before it is rounded.
_DIGITS = 6
_RELATIONS = {"at most": "at_most", "less than": "less_than", "at least": "at_least"}


def limits(desk: Desk) -> LimitsView:
    """All limits in the order they were entered."""
    made = desk.outcome.comparisons
    if not made:
        return LimitsView(None, (), desk.words("lead.no_limits"))
    groups = side_by_side(desk.outcome.runs)
    first, *rest = [_table(desk, some, with_average=at == 0) for at, some in enumerate(groups)]
    views = tuple(_limit(desk, comparison) for comparison in made)
    return LimitsView(first, views, desk.words("lead.summary"), tuple(rest))


def relation_words(desk: Desk, comparison: Comparison) -> str:
    """The fixed phrase that says how the measured value stands to the limit, or why it was not compared."""
    if comparison.is_met is None:
        return desk.words("limit.not_compared", reason=formulas(comparison.reason))
    ending = "met" if comparison.is_met else "not_met"
    return desk.words(f"limit.{_relation(comparison.limit)}_{ending}")


def limit_words(desk: Desk, limit: Limit) -> str:
    """A limit in words as it was entered, e.g. ``at most 30 ppm, dry, at 3 % O₂``."""
    relation = desk.words(f"limit.symbol_{_relation(limit)}")
    unit = unit_text(limit.unit.value.unit)
    basis = _basis(limit)
    return f"{relation} {shortest(limit.limit.value, 8)} {unit}{', ' if basis else ''}{basis}"


def _relation(limit: Limit) -> str:
    return _RELATIONS[text_of(limit.relation, "at most")]


def _basis(limit: Limit) -> str:
    parts = []
    if limit.moisture_basis is not None:
        parts.append(limit.moisture_basis.value.value)
    if limit.reference_oxygen is not None:
        parts.append(f"at {shortest(limit.reference_oxygen.value, 4)} % O₂")
    if limit.reference_carbon_dioxide is not None:
        parts.append(f"at {shortest(limit.reference_carbon_dioxide.value, 4)} % CO₂")
    if limit.expressed_as is not None:
        parts.append(f"as {gas_name(limit.expressed_as.value)}")
    return ", ".join(parts)


def _limit(desk: Desk, comparison: Comparison) -> LimitView:
    limit = comparison.limit
    return LimitView(
        anchor=f"limit-{limit.key}",
        name=limit.limit_id.value,
        heading=f"{gas_name(limit.pollutant.value)} {limit_words(desk, limit)}",
        relation_words=relation_words(desk, comparison),
        is_met=comparison.is_met,
        facts=_facts(desk, comparison),
        picture=_picture(desk, comparison),
        notes=tuple(formulas(note) for note in _notes(desk, comparison)),
    )


def _table(desk: Desk, runs: Sequence[RunResult], *, with_average: bool) -> Table:
    """One column per run, then average, rounded, limit, margin; load and fuel of the runs at the foot."""
    columns = [Column("", width=2.6)]
    columns += [Column(f"Run {run.run.run.value}", number=True) for run in runs]
    ends = ("Average", "Rounded", "Limit", "Margin") if with_average else ()
    columns += [Column(title, number=True) for title in ends]
    rows: list[Row] = []
    for comparison in desk.outcome.comparisons:
        rows += _rows(desk, comparison, runs, with_average=with_average)
    load, fuel = Cell("Load", strong=True), Cell("Fuel", strong=True)
    rest = (Cell("", span=len(ends)),) if ends else ()
    rows.append(Row((load, *(_load(desk, run.run) for run in runs), *rest), style="foot"))
    fuels = [fuel_words(desk.outcome.record, run.run) or desk.missing for run in runs]
    same = len(set(fuels)) == 1
    rows.append(Row((fuel, Cell(fuels[0], span=len(runs) + len(ends))) if same else (fuel, *fuels, *rest)))
    return aligned(Table(tuple(columns), tuple(rows)))


def _rows(desk: Desk, comparison: Comparison, some: Sequence[RunResult], *, with_average: bool) -> list[Row]:
    limit = comparison.limit
    unit = unit_text(limit.unit.value.unit)
    of_run = {segment: (key, at) for at, (segment, key, _) in enumerate(comparison.runs)}
    runs = [run.key for run in some]
    columns = 1 + len(runs) + (4 if with_average else 0)
    words = f"{limit.limit_id.value}: {relation_words(desk, comparison)}"
    ledger = desk.outcome.ledger
    measured: list[AnyCell] = [f"{gas_name(limit.pollutant.value)} [{unit}]"]
    measured += desk.row([ledger.get(of_run[run][0]) if run in of_run else None for run in runs])
    measured += _compared(desk, comparison) if with_average else []
    rows = [Row((Cell(words, strong=True, span=columns),), style="group"), Row(tuple(measured))]
    counts = [_counts(desk, comparison, of_run[run][1]) if run in of_run else desk.missing for run in runs]
    if of_run and any(count != _YES for count in counts):
        held = desk.averaged(comparison.value)
        of = desk.words("limit.average_of", runs=desk.run_names(held)) if held else ""
        rest = (Cell(of, span=4),) if with_average else ()
        rows.append(Row((desk.words("limit.counts"), *counts, *rest)))
    return rows


def _compared(desk: Desk, comparison: Comparison) -> list[AnyCell]:
    """Average with six significant digits, rounded (in words where nothing is rounded), limit, margin."""
    margin_key = comparison.margin if comparison.compared else ""
    cells = [desk.show(key) for key in (comparison.value, comparison.rounded, comparison.limit_key, margin_key)]
    average, rounded = cells[:2]
    if isinstance(average, Shown):
        cells[0] = _with_text(average, significant(float(desk.outcome.ledger[average.key].value), _DIGITS))
    if isinstance(rounded, Shown) and _is_not_rounded(desk, rounded.key):
        cells[1] = Cell(desk.words("limit.not_rounded"))
    return cells


def _is_not_rounded(desk: Desk, key: str) -> bool:
    origin = desk.outcome.ledger[key].origin
    return isinstance(origin, FromEquation) and origin.equation.name == CARRIED


def _with_text(cell: Shown, text: str) -> Shown:
    return replace(cell, text=text, decimals=decimals_in(text))


def _counts(desk: Desk, comparison: Comparison, at: int) -> str:
    segment, _, indicator = comparison.runs[at]
    entry = desk.outcome.ledger.get(indicator) if indicator else None
    state = desk.outcome.run(segment).state
    if entry is not None and float(entry.value) == 1.0:
        return _YES
    return "excluded" if state is RunState.EXCLUDED else "no"


def _load(desk: Desk, run: Run) -> str:
    key = f"run.{run.key}.load"
    ledger = desk.outcome.ledger
    if key not in ledger:
        return said_load(desk, run)
    share = f"{key}.share"
    text = (
        desk.number_text(key) if ledger[key].unit not in {"", "1"} else f"{desk.number_text(key)} {said(run.load_unit)}"
    )
    return f"{text} ({desk.number_text(share)})" if share in ledger else text


def said_load(desk: Desk, run: Run) -> str:
    """The load of a run as it was entered."""
    if run.load is None:
        return desk.missing
    return f"{entered(run.load, desk.missing)} {said(run.load_unit)}".strip()


def _facts(desk: Desk, comparison: Comparison) -> tuple[Item, ...]:
    limit = comparison.limit
    source = ", ".join(part for part in (said(limit.authority), said(limit.citation)) if part)
    rows = [
        ("Source", source or desk.words("limit.no_source")),
        ("Basis", basis_words(desk, comparison)),
        ("Applies", said(limit.applies_when)),
        ("Entered", f"{_entered_by(desk, limit)}; {_in_force(desk, limit)}"),
        ("Averaging", _averaging(desk, comparison)),
        ("Rounding", _rounding(desk, comparison)),
    ]
    if comparison.with_excluded:
        rows.append(("With excluded runs", desk.number_text(comparison.with_excluded)))
    if comparison.cross:
        rows.append(("Cross-check", _cross_words(desk, comparison)))
    return tuple(Item(label, text) for label, text in rows if text)


def _averaging(desk: Desk, comparison: Comparison) -> str:
    """How runs are averaged, how many count and are required, and how long each has to be."""
    limit = comparison.limit
    words = text_of(limit.averaging, "mean of runs")
    if comparison.count and comparison.required:
        held = desk.averaged(comparison.value)
        count, required = desk.number_text(comparison.count), desk.number_text(comparison.required)
        names = f" ({desk.run_names(held)})" if held and len(held) < len(desk.outcome.runs) else ""
        words = f"{words}; {count} of {required} required{names}"
    if limit.minimum_run_length is not None:
        words = f"{words}, each at least {entered(limit.minimum_run_length, '')}"
    return words


def _rounding(desk: Desk, comparison: Comparison) -> str:
    """The rule, and whether the limit's record names it."""
    rule = formulas(counted(comparison.rounding_words))
    if not rule or text_of(comparison.limit.rounding):
        return rule and desk.words("limit.rounding_entered", rule=rule)
    return desk.words("limit.rounding_default", rule=rule)


def _cross_words(desk: Desk, comparison: Comparison) -> str:
    """The second route by name, its average, and its difference from the limit's own route."""
    ledger = desk.outcome.ledger
    inputs = ledger[comparison.cross].origin
    assert isinstance(inputs, FromEquation)
    first = ledger[inputs.keys()[0]]
    value = desk.number_text(comparison.cross)
    of_runs = [f"run.{run.key}.{comparison.quantity}.route_difference" for run in desk.outcome.runs]
    found = [desk.number_text(key) for key in of_runs if key in ledger]
    return desk.words(
        "limit.second_route", route=first.note or "second route", value=value, difference=", ".join(found)
    )


def _entered_by(desk: Desk, limit: Limit) -> str:
    if limit.entered_by is None:
        return desk.words("limit.entered_by_nobody")
    if limit.entered_on is None:
        return desk.words("limit.entered_by", who=limit.entered_by.value)
    return desk.words("limit.entered_by_on", who=limit.entered_by.value, day=day(limit.entered_on.value))


def _in_force(desk: Desk, limit: Limit) -> str:
    if limit.in_force_from is None:
        return desk.words("limit.no_effective_date")
    until = f" to {day(limit.in_force_until.value)}" if limit.in_force_until is not None else ""
    return f"in force from {day(limit.in_force_from.value)}{until}"


def basis_words(desk: Desk, comparison: Comparison) -> str:
    """On what the compared number rests: basis, route, form of Method 19, factor, heating value."""
    ledger = desk.outcome.ledger
    entry = ledger.get(comparison.value) if comparison.value else None
    parts = [entry.basis.text() if entry is not None else _basis(comparison.limit)]
    first = ledger.get(comparison.runs[0][1]) if comparison.runs else None
    if first is not None and first.note.startswith("from "):
        route = said(comparison.limit.mass_rate_route)
        parts.append(f"mass rate {first.note}{'' if route else ', the route taken where the limit names none'}")
    if first is not None:
        parts += factor_route(desk, first.key)
    gas = find_gas(comparison.limit.pollutant.value)
    if gas is not None and gas.by_analogy and len(parts) > 1 and any("Method 19" in part for part in parts):
        parts.append(desk.words("limit.by_analogy"))
    return formulas("; ".join(part for part in parts if part))


def _notes(desk: Desk, comparison: Comparison) -> Sequence[str]:
    done = desk.words("limit.by_analogy")  # stands in the basis
    return tuple(counted(note) for note in dict.fromkeys(comparison.notes) if note != done)


def _picture(desk: Desk, comparison: Comparison) -> Picture | None:
    """The runs and the average on one axis with the limit; nothing where no run has a value."""
    ledger = desk.outcome.ledger
    unit = unit_text(comparison.limit.unit.value.unit)
    bars = []
    for segment, key, indicator in comparison.runs:
        cell = desk.show(key)
        if isinstance(cell, Shown):
            counts = ledger.get(indicator) if indicator else None
            counted = counts is not None and float(counts.value) == 1.0
            name = desk.outcome.run(segment).run.run.value
            bars.append(Bar(f"run {name}", float(ledger[key].value), cell.text, counted))
    if not bars:
        return None
    average = limit = None
    if comparison.value in ledger:
        average = Bar("average", float(ledger[comparison.value].value), desk.number_text(comparison.value))
    if comparison.limit_key in ledger:
        limit = float(ledger[comparison.limit_key].value)
    heading = f"limit {limit_words(desk, comparison.limit)}"
    strip = ComparisonBars(tuple(bars), average, limit, heading, unit)
    title = f"{gas_name(comparison.limit.pollutant.value)}: runs and average beside the {heading}."
    return Picture(comparison_strip(strip, title=title))
