"""Summary and Runs: each limit beside the runs' values, and the results of each run, all live by name."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from datetime import date

from reporter.ledger import Entry, Ledger
from reporter.outcome import Comparison, Outcome, RunResult, RunState
from reporter.output.numbers import unit_text
from reporter.output.phrases import Phrases
from reporter.output.workbook_book import Book, Column, Sheet
from reporter.output.workbook_home import known_quantity, label, number_format
from reporter.output.workbook_words import columns, words
from reporter.record import Given, text_of

_RELATIONS = {"at most": "at_most", "less than": "less_than", "at least": "at_least"}


def quoted(text: str) -> str:
    """A text as a literal of a formula."""
    return '"' + text.replace('"', '""') + '"'


def write_summary(book: Book, sheet: Sheet, outcome: Outcome, phrases: Phrases) -> None:
    """Identity, the limits with what was measured, the state of each run."""
    said = words("summary")
    runs = outcome.runs
    middle = [Column(f"Run {run.run.run.value}", 12) for run in runs]
    table = [*columns("summary", "left"), *middle, *columns("summary", "right")]
    for index, column in enumerate(table):
        sheet.made.set_column(index, index, column.width)
    sheet.title(said["title"], said["note"])
    _identity(sheet, outcome)
    sheet.section(said["limits"], len(table))
    sheet.head(table, widths=False)
    if not outcome.comparisons:
        sheet.text(0, phrases("lead.no_limits"))
        sheet.row += 1
    for comparison in outcome.comparisons:
        _limit(sheet, outcome, comparison, phrases, table)
    sheet.section(said["runs"], len(table))
    sheet.head([Column(name) for name in said["run_columns"]], widths=False)
    for run in runs:
        _run(sheet, outcome.ledger, run, phrases)


def _identity(sheet: Sheet, outcome: Outcome) -> None:
    for name in words("summary")["identity"]:
        given: Given[object] | None = getattr(outcome.record.test, name)
        if given is None:
            continue
        sheet.text(0, name.replace("_", " ").capitalize(), "strong")
        value = given.value
        sheet.made.merge_range(sheet.row, 1, sheet.row, 5, "", sheet.book.format("text"))
        if isinstance(value, date):
            sheet.text(1, value.isoformat())
        else:
            sheet.text(1, str(value))
        sheet.row += 1


def _limit(sheet: Sheet, outcome: Outcome, comparison: Comparison, phrases: Phrases, table: Sequence[Column]) -> None:
    ledger, limit = outcome.ledger, comparison.limit
    of_run = {run: (key, flag) for run, key, flag in comparison.runs}
    entry = ledger.get(comparison.value)
    basis = entry.basis.text() if entry is not None else ""
    unit = unit_text(limit.unit.value.unit)
    sheet.texts([limit.limit_id.value, limit.pollutant.value, basis, unit], table)
    column = 4
    for run in outcome.runs:
        _run_value(sheet, ledger, column, of_run.get(run.key), phrases)
        column += 1
    relation = text_of(limit.relation, "at most")
    for key, counted in (
        (comparison.value, True),
        (comparison.rounded, True),
        ("", False),
        (comparison.limit_key, False),
        (comparison.margin, True),
        (comparison.count, False),
        (comparison.required, False),
    ):
        _live_or_missing(sheet, ledger, column, key, comparison.count if counted else "", phrases)
        column += 1
    sheet.text(column - 5, phrases(f"limit.symbol_{_RELATIONS[relation]}"))
    formula, value = result_words(outcome, comparison, phrases)
    if formula:
        sheet.live(column, formula, value, style="strong")
    else:
        sheet.text(column, value, "strong")
    source = "; ".join(part for part in (text_of(limit.authority), text_of(limit.citation)) if part)
    rounding = comparison.rounding_words or text_of(limit.rounding)
    sheet.texts({column + 1: rounding, column + 2: source}, table)
    sheet.row += 1


def _run_value(sheet: Sheet, ledger: Ledger, column: int, found: tuple[str, str] | None, phrases: Phrases) -> None:
    """A run's value, or that it is not counted, as its indicator says."""
    if found is None:
        sheet.text(column, words("summary")["none"], "number")
        return
    key, flag = found
    entry, not_counted = ledger[key], words("summary")["not_counted"]
    value = entry.value if ledger[flag].value == 1.0 else not_counted
    sheet.live(column, f"IF({flag}=1,{key},{quoted(not_counted)})", value, number_format(entry))


def _live_or_missing(sheet: Sheet, ledger: Ledger, column: int, key: str, count: str, phrases: Phrases) -> None:
    """A reference to an entry; one that rests on an average is blanked where no run counts."""
    if not key:
        sheet.text(column, words("summary")["none"], "number")
        return
    entry, none = ledger[key], quoted(words("summary")["none"])
    formula = f"IF({count}=0,{none},{key})" if count else key
    sheet.live(column, formula, entry.value, number_format(entry))


def result_words(outcome: Outcome, comparison: Comparison, phrases: Phrases) -> tuple[str, str]:
    """The wording of a comparison as a live formula (empty where it is fixed) and as it is now."""
    relation = _RELATIONS[text_of(comparison.limit.relation, "at most")]
    met, not_met = (phrases(f"limit.{relation}_{end}") for end in ("met", "not_met"))
    count, required = comparison.count, comparison.required
    now = phrases("limit.not_compared", reason=comparison.reason)
    if comparison.is_met is not None:
        now = met if comparison.is_met else not_met
    if not comparison.met or not (comparison.compared or _too_few(outcome.ledger, comparison)):
        return "", now
    formula = f"IF({comparison.met}=1,{quoted(met)},{quoted(not_met)})"
    if not any(text_of(run.run.approval_reference) for run in outcome.runs):
        head, tail = _few_words(phrases)
        few = f'{quoted(head)}&{count}&" valid run(s) of "&{required}&{quoted(" required" + tail)}'
        formula = f"IF({count}<{required},{few},{formula})"
    else:
        none = phrases("limit.not_compared", reason="no valid run has this result")
        formula = f"IF({count}=0,{quoted(none)},{formula})"
    return formula, now


def _few_words(phrases: Phrases) -> tuple[str, str]:
    head, _, tail = phrases("limit.not_compared", reason="\0").partition("\0")
    return head, tail


def _too_few(ledger: Ledger, comparison: Comparison) -> bool:
    """Whether too few valid runs are the reason that no comparison was made."""
    count, required = (ledger[key].value for key in (comparison.count, comparison.required))
    return bool(count < required) and comparison.reason.startswith(f"{count:.0f} valid run")


def _run(sheet: Sheet, ledger: Ledger, run: RunResult, phrases: Phrases) -> None:
    sheet.text(0, run.run.run.value, "strong")
    sheet.moment(1, run.run.start.value)
    sheet.moment(2, run.run.end.value)
    formula, value = state_words(run, phrases)
    if formula:
        sheet.live(3, formula, value, style="text")
    else:
        sheet.text(3, value)
    sheet.text(4, "; ".join(run.reasons))
    sheet.row += 1


def state_words(run: RunResult, phrases: Phrases) -> tuple[str, str]:
    """The state of a run as a live formula of its gases' validity (empty where the user excluded it)."""
    valid, invalid, excluded = (phrases(f"run.{word}") for word in ("valid", "invalid", "excluded"))
    if run.state is RunState.EXCLUDED:
        return "", excluded
    flags = ",".join(f"{gas.valid}=1" for gas in run.gases)
    now = valid if run.state is RunState.VALID else invalid
    return (f"IF(AND({flags}),{quoted(valid)},{quoted(invalid)})", now) if flags else ("", now)


def write_runs(book: Book, sheet: Sheet, outcome: Outcome) -> None:
    """A matrix of quantities by runs; a value that does not count is greyed by its indicator."""
    said = words("runs")
    runs = outcome.runs
    table = [*columns("runs", "left"), *(Column(f"Run {r.run.run.value}", said["run_width"]) for r in runs)]
    table.append(Column(**said["average"]))
    sheet.title(said["title"], said["note"])
    sheet.head(table, freeze=1)
    group = ""
    for name, entries in _matrix(outcome.ledger, runs).items():
        subject = name.partition(".")[0]
        if subject != group:
            group = subject
        first = next(iter(entries.values()))
        sheet.texts([_row_label(first), unit_text(first.unit), first.basis.text()], table)
        for column, run in enumerate(runs, 3):
            entry = entries.get(run.key)
            gas = run.gas(subject)
            counts = gas is None or gas.is_valid
            if entry is None:
                sheet.text(column, "", "text")
            else:
                style = "number" if counts else "grey"
                sheet.live(column, entry.key, entry.value, number_format(entry), style)
        average = outcome.ledger.get(f"average.{name}")
        if average is None:
            sheet.text(3 + len(runs), "", "text")
        else:
            sheet.live(3 + len(runs), average.key, average.value, number_format(average))
        sheet.row += 1


def _row_label(entry: Entry) -> str:
    return ", ".join(part for part in label(entry).split(", ") if not part.startswith("run "))


def _matrix(ledger: Ledger, runs: Sequence[RunResult]) -> Mapping[str, dict[str, Entry]]:
    """Entries by the key after ``run.<run>.`` and by run, in the order of the first run that has them."""
    shown = set(words("runs")["quantities"])
    found: dict[str, dict[str, Entry]] = {}
    for run in runs:
        prefix = f"run.{run.key}."
        for entry in ledger.under(prefix.rstrip(".")):
            quantity = known_quantity(entry.key)
            if not entry.is_series and quantity is not None and quantity.segment in shown:
                found.setdefault(entry.key.removeprefix(prefix), {})[run.key] = entry
    subjects = list(dict.fromkeys(name.partition(".")[0] for name in found))
    return {name: found[name] for subject in subjects for name in found if name.partition(".")[0] == subject}
