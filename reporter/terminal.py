"""What `fluebook check` prints: runs, results, limits, criteria not met, problems, in plain text.

Lines are at most `terminal_text.WIDTH` characters, apart from words that cannot be broken.  The fixed phrases are those
of the report; numbers are rounded for print only.
"""

from __future__ import annotations

from collections.abc import Sequence
from datetime import datetime

from reporter.errors import LedgerError
from reporter.gases import gas
from reporter.ledger import Entry
from reporter.outcome import Comparison, GasResult, Outcome, RunResult, RunState
from reporter.output.applied import Applied, applied
from reporter.output.finding_words import finding_words
from reporter.output.numbers import capital, day, moment, runs_text, shortest, shown, significant, unit_text
from reporter.output.phrases import Phrases, load_phrases
from reporter.quantities import quantity_of
from reporter.record import text_of
from reporter.synthetic import stamped
from reporter.terminal_problems import problems_text as problems_text
from reporter.terminal_text import paragraph, section, table

#: Rows below the gases in the table of results, where they are in the ledger.
_ALSO = ("moisture", "combustion.excess_air", "combustion.equivalence_ratio", "combustion.fuel_factor")


def summary(outcome: Outcome) -> str:
    """All that was found about a test, in sections.

    Parameters
    ----------
    outcome
        The assessed test.

    Returns
    -------
    str
        Lines without a newline at the end.
    """
    words = load_phrases()
    parts = [
        _head(outcome),
        section("Runs", _runs(outcome, words)),
        section("Results of the runs", _results(outcome)),
        section("Limits as entered", _limits(outcome, words)),
        section("Criteria", _criteria(outcome, words)),
        section("What fuel, air and readings imply", _findings(outcome)),
        section("Taken where nothing was entered", [paragraph(capital(line)) for line in outcome.stated]),
        problems_text(outcome.problems, outcome.bearing),
    ]
    return "\n\n".join(part for part in parts if part)


def overview(rows: Sequence[tuple[str, str, tuple[int, int]]]) -> str:
    """The end of a run of several inputs: name, state in words, results withheld and notes of each."""
    cells = [[name, words, str(withheld), str(notes)] for name, words, (withheld, notes) in rows]
    head = ["Input", "State", "Withheld", "Notes"]
    return section(f"{len(rows)} inputs", [table(head, cells, numbers={2, 3}, wrapped=1)])


def _head(outcome: Outcome) -> str:
    record = outcome.record
    test = record.test
    count = len(outcome.runs)
    facts = [
        f"test of {day(test.test_date.value)}",
        f"{count} run{'s' if count != 1 else ''}",
        ", ".join(dict.fromkeys(gas(channel.gas.value).label for channel in record.channels)),
    ]
    rows = record.readings.rows
    if rows:
        facts.append(f"{len(rows)} logged intervals, {_span(rows[0].time, rows[-1].time)}")
    name = stamped(record, record.source.name)
    lines = (name, f"{test.facility.value}, {test.unit_tested.value}", "; ".join(facts))
    return "\n".join(paragraph(line, indent=0, hang=2) for line in lines if line)


def _span(start: datetime, end: datetime) -> str:
    """Two times, with their days where these differ."""
    if start.date() == end.date():
        return f"{moment(start)} to {moment(end)}"
    return f"{day(start)} {moment(start)} to {day(end)} {moment(end)}"


# ---- runs and results -----------------------------------------------------------------------------------


def _runs(outcome: Outcome, words: Phrases) -> list[str]:
    rows = []
    for result in outcome.runs:
        run = result.run
        load = "" if run.load is None else f"{shortest(run.load.value, 6)} {text_of(run.load_unit)}"
        span = _span(run.start.value, run.end.value)
        rows.append([run.run.value, span, load.strip(), _state(outcome, result, words)])
    return [table(["Run", "Time", "Load", "State"], rows, wrapped=3)]


def _state(outcome: Outcome, result: RunResult, words: Phrases) -> str:
    if result.state is RunState.VALID:
        missing, whole = result.gaps
        return words("run.valid_with_gaps", missing=missing, whole=whole) if missing else words("run.valid")
    reason = "; ".join(result.reasons)
    if result.state is RunState.EXCLUDED:
        return words("run.excluded_because", reason=reason) if reason else words("run.excluded")
    paragraphs = dict.fromkeys(
        check.citation.text()
        for check in outcome.checks
        if not check.met and check.decides_validity and result.key in check.runs
    )
    if not paragraphs:
        return f"{words('run.invalid')}: {reason}" if reason else words("run.invalid")
    return words("run.invalid_because", paragraph=" and ".join(paragraphs), reason=reason)


def _results(outcome: Outcome) -> list[str]:
    """A row per gas and quantity, a column per run; what does not count stands in brackets."""
    first: dict[str, GasResult] = {}
    for result in outcome.runs:
        for found in result.gases:
            first.setdefault(found.segment, found)
    rows = [_gas_row(outcome, found) for found in first.values()]
    rows += [_row(outcome, ending, capital(_quantity_label(ending))) for ending in _ALSO]
    head = ["", *(f"Run {result.run.run.value}" for result in outcome.runs), "Average"]
    kept = [row for row in rows if any(row[1:])]
    if not kept:
        return []
    lines = [table(head, kept, numbers=set(range(1, len(head))))]
    if any(cell.startswith("(") for row in kept for cell in row[1:]):
        lines.append(paragraph("In brackets: does not count in an average."))
    return lines


def _gas_row(outcome: Outcome, found: GasResult) -> list[str]:
    usual = found.segment == found.channel.gas.value
    name = found.gas if usual else f"{found.gas}, {found.channel.channel.value}"
    for quantity in ("corrected", "mean"):
        row = _row(outcome, f"{found.segment}.{quantity}", name, found.segment)
        if any(row[1:]):
            return row if quantity == "corrected" else [f"{row[0]}, not corrected", *row[1:]]
    return [name]


def _row(outcome: Outcome, ending: str, name: str, segment: str = "") -> list[str]:
    ledger = outcome.ledger
    cells = []
    some: Entry | None = None
    for result in outcome.runs:
        entry = ledger.get(f"run.{result.key}.{ending}")
        some = some or entry
        text = "" if entry is None else shown(entry)
        cells.append(text if not text or _counts(result, segment) else f"({text})")
    average = ledger.get(f"average.{ending}")
    cells.append("" if average is None else shown(average))
    if some is None:
        return [name]
    facets = [unit_text(some.unit), some.basis.moisture.value]
    return [", ".join(part for part in (name, *facets) if part), *cells]


def _counts(result: RunResult, segment: str) -> bool:
    found = result.gas(segment) if segment else None
    return result.state is not RunState.EXCLUDED and (found is None or found.is_valid)


def _quantity_label(ending: str) -> str:
    """The words for a quantity; those of its key where the quantity table has none."""
    try:
        return quantity_of(f"run.1.{ending}")[0].label
    except LedgerError:
        return ending.rsplit(".", 1)[-1].replace("_", " ")


# ---- limits ---------------------------------------------------------------------------------------------


def _limits(outcome: Outcome, words: Phrases) -> list[str]:
    if not outcome.comparisons:
        return [paragraph(words("lead.no_limits"))]
    return [_limit(outcome, comparison, words) for comparison in outcome.comparisons]


def _limit(outcome: Outcome, comparison: Comparison, words: Phrases) -> str:
    limit = comparison.limit
    relation = text_of(limit.relation, "at most")
    ledger = outcome.ledger
    bound, value, rounded = (ledger.get(k) for k in (comparison.limit_key, comparison.value, comparison.rounded))
    basis = next((entry.basis.text() for entry in (bound, value) if entry is not None), "")
    entered = f"{relation} {limit.limit.text or shortest(limit.limit.value, 8)}"
    about = f"{gas(limit.pollutant.value).label} {entered} {unit_text(limit.unit.value.unit)}"
    lines = [paragraph(f"{limit.limit_id.value}: {', '.join(part for part in (about, basis) if part)}")]
    if comparison.is_met is None:
        said = words("limit.not_compared", reason=comparison.reason)
    else:
        said = words(f"limit.{relation.replace(' ', '_')}_{'met' if comparison.is_met else 'not_met'}")
    lines.append(paragraph(said, indent=4, hang=4))
    if value is not None and rounded is not None:
        numbers = f"{_compared(rounded)} ({comparison.rounding_words})"
        if rounded.value != value.value:
            numbers += f", unrounded {shown(value)}"
        lines.append(paragraph(f"{numbers}; {_run_values(outcome, comparison)}", indent=4, hang=4))
    lines += [paragraph(note, indent=4, hang=4) for note in comparison.notes]
    return "\n".join(lines)


def _compared(rounded: Entry) -> str:
    """A compared number with the digits its rounding left; six where nothing was rounded."""
    return shown(rounded) if rounded.decimals is not None else significant(rounded.value, 6)


def _run_values(outcome: Outcome, comparison: Comparison) -> str:
    ledger = outcome.ledger
    parts = []
    for run, key, indicator in comparison.runs:
        entry, counts = ledger.get(key), ledger.get(indicator)
        if entry is not None:
            text = f"run\u00a0{outcome.run(run).run.run.value}\u00a0{shown(entry)}"
            parts.append(text if counts is not None and counts.value == 1.0 else f"({text})")
    return ", ".join(parts) or "no run has this result"


# ---- criteria and findings ------------------------------------------------------------------------------


def _criteria(outcome: Outcome, words: Phrases) -> list[str]:
    checks = outcome.checks
    missed = [check for check in checks if not check.met]
    if not checks:
        return [paragraph(words("lead.quality_none"))]
    if not missed:
        return [paragraph(words("lead.quality_all_met", count=len(checks)))]
    lead = words("lead.quality_some", met=len(checks) - len(missed), count=len(checks))
    return [paragraph(lead), *(_missed(outcome, line, words) for line in applied(outcome, missed))]


def _missed(outcome: Outcome, line: Applied, words: Phrases) -> str:
    ledger, check = outcome.ledger, line.check
    value, bound = ledger.get(check.value), ledger.get(check.bound)
    numbers = ""
    if value is not None and bound is not None:
        within = words("criterion.within", bound=_number(bound))
        asked = within if check.difference or check.relation == "within" else f"{check.relation} {_number(bound)}"
        numbers = f": {_number(value)}, {words('criterion.asked', bound=asked)}"
    difference, alternative = ledger.get(check.difference), ledger.get(check.alternative)
    if difference is not None and alternative is not None:
        said = words("criterion.instead", difference=_number(difference), most=_number(alternative))
        numbers += f"; {said}"
    about = f"{check.gas}: " if check.gas else ""
    said = f"{about}{line.title} {words('criterion.not_met')} ({check.citation.text()}){numbers}"
    lines = [paragraph(said)]
    if check.consequence:
        lines.append(paragraph(check.consequence, indent=4, hang=4))
    return "\n".join(lines)


def _number(entry: Entry) -> str:
    return f"{shown(entry)} {unit_text(entry.unit)}".strip()


def _findings(outcome: Outcome) -> list[str]:
    """Findings in words, those of several runs once."""
    lines = []
    for keys, words in finding_words(outcome.findings, load_phrases()):
        names = [outcome.run(key).run.run.value for key in keys]
        lines.append(paragraph(f"{capital(runs_text(names))}: {words}" if names else words))
    return lines
