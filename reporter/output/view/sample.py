"""The complete sample calculation: from the readings of one run to each gas and each limit's unit."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, field, replace
from typing import Any

from reporter.equation import Equation
from reporter.ledger import Entry, FromCells, FromEquation, FromTable, Stated
from reporter.outcome import Comparison, GasResult, RunResult, RunState
from reporter.output.numbers import formulas, shortest, unit_text
from reporter.output.view.criteria import needs_alternative
from reporter.output.view.desk import Desk, cell_words, gas_name
from reporter.output.view.limits import limit_words, relation_words
from reporter.output.view.model import Chapter, Shown, Source, Step
from reporter.trace import Name
from reporter.typeset import html_formula, symbol_html, text_formula

#: Significant digits of numbers put into equations.
DIGITS = 6
#: From here on numbers are put in with a decimal: differences of meter readings rest on their last digits.
_LARGE = 1e6
#: Chapters of the run as a whole: what each leads to.
_OF_RUN = (
    ("Moisture", ("moisture",)),
    ("Stack pressure and flow", ("stack_pressure", "flow.dry_standard")),
    ("Heat input", ("heat_input", "heat_input.metered", "heat_input.metered_difference")),
)
#: What a second route adds to a rate.
_SECOND = ("by_flow", "by_heat_input", "route_difference")


@dataclass
class _Writer:
    """Steps as they are written: each entry once, numbered from the first; each equation set out once."""

    desk: Desk
    run: str
    about: str = ""
    numbers: dict[str, int] = field(default_factory=dict)
    equations: set[str] = field(default_factory=set)

    def chapter(self, title: str, keys: Iterable[str], about: str = "") -> Chapter | None:
        """The steps that lead to some entries and were not written before; `about` is what all their labels name."""
        self.about = about or title
        needed = self.desk.needed(keys)
        ledger = self.desk.outcome.ledger
        steps = [self._step(entry) for entry in ledger if entry.key in needed and self._is_new(entry)]
        return Chapter(title, tuple(steps)) if steps else None

    def comparison(self, title: str, comparison: Comparison) -> Chapter | None:
        """From the results of the runs to the comparison: average, rounding, margin, answer."""
        ledger = self.desk.outcome.ledger
        self.about = f"limit {comparison.limit.key}"
        keys = [comparison.value, comparison.rounded, comparison.margin]
        of_runs = {key for _, key, _ in comparison.runs}
        needed = self.desk.needed((key for key in keys if key), stop=of_runs)
        steps = [self._step(entry) for entry in ledger if entry.key in needed and self._is_new(entry)]
        if comparison.compared:
            words = relation_words(self.desk, comparison)
            steps.append(replace(self._step(ledger[comparison.met]), title=words))
        return Chapter(title, tuple(steps)) if steps else None

    def _is_new(self, entry: Entry) -> bool:
        computed = isinstance(entry.origin, FromEquation) and not entry.is_indicator
        return computed and entry.key not in self.numbers and self.desk.source_of(entry.key) == entry.key

    def _step(self, entry: Entry) -> Step:
        desk = self.desk
        origin = entry.origin
        assert isinstance(origin, FromEquation)
        self.numbers[entry.key] = len(self.numbers) + 1
        desk.printed[entry.key] = None
        equation = origin.equation.in_system(desk.outcome.ledger.system)
        is_new = equation.name not in self.equations
        self.equations.add(equation.name)
        return Step(
            number=self.numbers[entry.key],
            title=self._title(entry.key),
            formula=_formula(equation) if is_new else "",
            line=desk.equation_line(equation) if is_new else "",
            numbers=text_formula(desk.outcome.ledger.trace(entry), _number),
            result=Shown(entry.key, value_text(entry), unit_text(entry.unit)),
            basis=formulas(entry.basis.text()),
            citation=equation.citation.text(),
            sources=self._sources(entry),
        )

    def _title(self, key: str) -> str:
        """The words for an entry, without the gas of its chapter and the run of the calculation."""
        words = self.desk.label(key).removesuffix(self.run)
        return words.removeprefix(f"{self.about}, ")

    def _sources(self, entry: Entry) -> tuple[Source, ...]:
        """The inputs of an entry: symbol, number, and the place it comes from (a step where it has one)."""
        origin = entry.origin
        assert isinstance(origin, FromEquation)
        found = []
        for name, keys in origin.inputs:
            symbol = origin.equation.parameters[name].symbol
            if isinstance(keys, str):
                found.append(self._source(symbol, keys))
            else:
                found += [self._source(f"{symbol}{at}", key) for at, key in enumerate(keys, 1)]
        return tuple(found)

    def _source(self, symbol: str, key: str) -> Source:
        """A number put in; what was read from a cell is derived by naming the cell."""
        entry = self.desk.outcome.ledger[key]
        if entry.is_indicator:
            return Source(symbol, value_text(entry), "", "", "section-criteria")
        if isinstance(entry.origin, FromCells):
            return Source(symbol, value_text(entry), unit_text(entry.unit), cell_words(entry.origin), "")
        self.desk.printed[key] = None
        key = self.desk.source_of(key)
        if key in self.numbers:
            step = self.numbers[key]
            return Source(symbol, value_text(entry), unit_text(entry.unit), f"step {step}", f"step-{step}")
        return Source(symbol, value_text(entry), unit_text(entry.unit), formulas(_where(entry)), key)


def _where(entry: Entry) -> str:
    """A short place for a leaf; a computed entry is led to by its key alone."""
    match entry.origin:
        case FromTable(citation=citation):
            return citation.text()
        case Stated(reason=reason):
            return reason
    return ""


def number_text(value: float) -> str:
    """A number with six significant digits, from a million on to one decimal."""
    digits = DIGITS if abs(value) < _LARGE else math.floor(math.log10(abs(value))) + 2
    return shortest(value, digits)


def value_text(entry: Entry) -> str:
    """The value of an entry as it is put into equations; a series by its count."""
    if entry.is_series:
        return f"{len(entry.value)} readings"
    if entry.is_indicator:
        return "yes" if float(entry.value) == 1.0 else "no"
    return number_text(float(entry.value))


def _formula(equation: Equation[Any]) -> str:
    """Markup of an equation, its symbol before it."""
    return f"{symbol_html(equation.symbol)} = {html_formula(equation.symbols())}"


def _number(name: Name) -> str:
    return f"{len(name.value)} readings" if name.series else number_text(float(name.value))


def sample_run(desk: Desk) -> RunResult | None:
    """The run whose results count in most comparisons, the first of equals; None where no run has results."""
    ledger = desk.outcome.ledger

    def merit(run: RunResult) -> tuple[int, int]:
        """In how many comparisons a run counts, then for how many gases it is valid."""
        flags = [flag for one in desk.outcome.comparisons for key, _, flag in one.runs if key == run.key]
        counted = [flag for flag in flags if flag in ledger and float(ledger[flag].value) == 1.0]
        return len(counted), sum(gas.is_valid for gas in run.gases)

    return max(desk.outcome.runs, key=merit, default=None)


def sample_lead(desk: Desk, run: RunResult | None) -> str:
    """What the calculation shows, and whose run it is."""
    lead = desk.words("lead.sample")
    if run is None:
        return lead
    name = "run.sample" if run.state is RunState.VALID else "run.none_valid"
    return f"{lead} {desk.words(name, run=run.run.run.value)}"


def sample(desk: Desk, run: RunResult | None) -> tuple[Chapter, ...]:
    """A chapter per gas, then one per limit, then the average and the comparison of each."""
    if run is None:
        return ()
    writer = _Writer(desk, f", run {run.key}")
    stem = f"run.{run.key}"
    chapters = [
        writer.chapter(gas_name(gas.gas), [*_judged(desk, run, gas), f"{stem}.{gas.segment}.dry"]) for gas in run.gases
    ]
    for title, names in _OF_RUN:
        keys = [f"{stem}.{name}" for name in names]
        chapters.append(writer.chapter(title, [key for key in keys if key in desk.outcome.ledger]))
    for comparison in desk.outcome.comparisons:
        chapters.append(writer.chapter(_title(desk, comparison), _of_run(desk, comparison, run), _gas(comparison)))
    for comparison in desk.outcome.comparisons:
        title = desk.words("limit.calculated", limit=comparison.limit.limit_id.value)
        chapters.append(writer.comparison(title, comparison))
    return tuple(chapter for chapter in chapters if chapter is not None)


def _judged(desk: Desk, run: RunResult, gas: GasResult) -> list[str]:
    """What the criteria behind a gas's validity in a run are applied to: errors, biases, drifts, converter.

    The difference of an alternative is taken in where its share is beyond the bound.
    """
    ledger = desk.outcome.ledger
    stem = f"run.{run.key}.{gas.segment}"
    stack = [f"{stem}.{name}" for name in ("valid", "clean") if f"{stem}.{name}" in ledger]
    flags: set[str] = set()
    while stack:
        key = stack.pop()
        origin = ledger[key].origin
        if key not in flags and ledger[key].is_indicator and isinstance(origin, FromEquation):
            flags.add(key)
            stack += origin.keys()
    found = []
    for check in desk.outcome.checks:
        converter = not check.runs and gas_name(check.gas) == gas_name(gas.gas) and "converter" in check.value
        if check.key in flags or converter:
            found.append(check.value)
            if needs_alternative(desk, check):
                found.append(check.difference)
    return found


def _of_run(desk: Desk, comparison: Comparison, run: RunResult) -> list[str]:
    """A run's result for a limit, by the limit's route and by the second one, with their difference."""
    found = []
    for segment, key, _ in comparison.runs:
        if segment == run.key:
            found.append(key)
            found += [one for name in _SECOND if (one := f"{key}.{name}") in desk.outcome.ledger]
    return found


def _gas(comparison: Comparison) -> str:
    return gas_name(comparison.limit.pollutant.value)


def _title(desk: Desk, comparison: Comparison) -> str:
    limit = comparison.limit
    return f"{_gas(comparison)}, for limit {limit.limit_id.value}: {limit_words(desk, limit)}"
