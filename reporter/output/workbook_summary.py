"""Summary: each limit beside the runs' values, its wording live, and the state of each run."""

from __future__ import annotations

from collections.abc import Callable
from datetime import date
from functools import partial

from reporter.gases import find_gas
from reporter.ledger import Ledger
from reporter.outcome import Comparison, Outcome, RunResult, RunState
from reporter.output.numbers import unit_text
from reporter.output.phrases import Phrases
from reporter.output.workbook_book import Column, Sheet
from reporter.output.workbook_home import fixed_format, number_format, significant_format
from reporter.output.workbook_words import words
from reporter.record import Given, text_of

_RELATIONS = {"at most": "at_most", "less than": "less_than", "at least": "at_least"}


def quoted(text: str) -> str:
    """A text as a literal of a formula."""
    return '"' + text.replace('"', '""') + '"'


def write_summary(sheet: Sheet, outcome: Outcome, phrases: Phrases) -> None:
    """Identity, the limits with what was measured, the state of each run."""
    said = words("summary")
    limits = outcome.comparisons
    width = 1 + max(len(limits), said["least_columns"])
    sheet.widths([Column("", said["label_width"])] + [Column("", said["value_width"])] * (width - 1))
    sheet.title(said["title"], said["note"])
    _identity(sheet, outcome)
    sheet.section(said["limits"], width)
    if limits:
        heads = [Column(made.limit.limit_id.value, style="number") for made in limits]
        sheet.head([Column("Limit"), *heads])
        _limits(sheet, outcome, phrases)
    else:
        sheet.text(0, phrases("lead.no_limits"))
        sheet.next()
    sheet.section(said["runs"], width)
    sheet.head(
        [
            Column(name, style="number" if name == "Load" else "after" if name == "Fuel" else "text")
            for name in said["run_columns"]
        ]
    )
    first = sheet.row
    for run in outcome.runs:
        _run(sheet, outcome, run, phrases)
    sheet.rules(first, len(said["run_columns"]))


def _identity(sheet: Sheet, outcome: Outcome) -> None:
    first = sheet.row
    for name in words("summary")["identity"]:
        given: Given[object] | None = getattr(outcome.record.test, name)
        if given is not None:
            sheet.text(0, name.replace("_", " ").capitalize(), "strong")
            sheet.text(1, given.value.isoformat() if isinstance(given.value, date) else str(given.value))
            sheet.next()
    sheet.rules(first, 3)


def _limits(sheet: Sheet, outcome: Outcome, phrases: Phrases) -> None:
    """One column for each limit, one row for each thing that is said of it."""
    said = words("summary")["rows"]
    ledger, made = outcome.ledger, outcome.comparisons
    first = sheet.row

    def row(title: str, write: Callable[[int, Comparison], None]) -> None:
        sheet.text(0, title, "strong")
        for column, comparison in enumerate(made, 1):
            write(column, comparison)
        sheet.next()

    def texts(title: str, text: Callable[[Comparison], str]) -> None:
        row(title, lambda column, comparison: sheet.text(column, text(comparison), "wrap right"))

    def numbers(title: str, key: Callable[[Comparison], str], rests_on_average: bool) -> None:
        row(title, lambda column, each: _number(sheet, ledger, column, each, key(each), rests_on_average))

    texts(said["pollutant"], lambda each: _gas(each.limit.pollutant.value))
    texts(said["basis"], lambda each: ledger[each.value].basis.text() if each.value else "")
    texts(said["unit"], lambda each: unit_text(each.limit.unit.value.unit))
    for run in outcome.runs:
        title = said["run"].format(run=run.run.run.value)
        row(title, partial(_run_value, sheet, ledger, run.key))
    numbers(said["value"], lambda each: each.value, True)
    numbers(said["rounded"], lambda each: each.rounded, True)
    row(said["limit"], lambda column, each: _limit(sheet, ledger, column, each, phrases))
    numbers(said["margin"], lambda each: each.margin, True)
    numbers(said["count"], lambda each: each.count, False)
    numbers(said["required"], lambda each: each.required, False)
    row(said["result"], lambda column, each: _result(sheet, outcome, column, each, phrases))
    texts(said["rounding"], lambda each: each.rounding_words or text_of(each.limit.rounding))
    texts(said["authority"], lambda each: text_of(each.limit.authority))
    texts(said["citation"], lambda each: text_of(each.limit.citation))
    sheet.rules(first, 1 + len(made))


def _gas(name: str) -> str:
    found = find_gas(name)
    return found.label if found is not None else name


def _run_value(sheet: Sheet, ledger: Ledger, run: str, column: int, comparison: Comparison) -> None:
    """A run's value, or that it is not counted, as its indicator says."""
    found = next(((key, flag) for name, key, flag in comparison.runs if name == run), None)
    said = words("summary")
    if found is None:
        sheet.text(column, said["none"], "number")
        return
    key, flag = found
    value = ledger[key].value if ledger[flag].value == 1.0 else said["not_counted"]
    formula = f"IF({flag}=1,{key},{quoted(said['not_counted'])})"
    sheet.live(column, formula, value, number_format(ledger[key]))


def _number(
    sheet: Sheet, ledger: Ledger, column: int, comparison: Comparison, key: str, rests_on_average: bool
) -> None:
    """A reference to an entry; one that rests on an average is a dash where no run counts."""
    none = words("summary")["none"]
    if not key:
        sheet.text(column, none, "number")
        return
    shape = _rounded_format(ledger, comparison) if key == comparison.rounded else number_format(ledger[key])
    formula = f"IF({comparison.count}=0,{quoted(none)},{key})" if rests_on_average else key
    sheet.live(column, formula, ledger[key].value, shape)


def _rounded_format(ledger: Ledger, comparison: Comparison) -> str:
    """As many decimals as the rounding rule leaves."""
    value = ledger[comparison.rounded].value
    decimals = ledger.get(f"{comparison.key}.rounding_decimals")
    digits = ledger.get(f"{comparison.key}.rounding_digits")
    if decimals is not None:
        return fixed_format(int(decimals.value))
    return significant_format(value, int(digits.value)) if digits is not None else "General"


def _limit(sheet: Sheet, ledger: Ledger, column: int, comparison: Comparison, phrases: Phrases) -> None:
    """The limit as a number with its relation before it."""
    key, none = comparison.limit_key, words("summary")["none"]
    if not key:
        sheet.text(column, none, "number")
        return
    relation = phrases(f"limit.symbol_{_relation(comparison)}")
    sheet.live(column, key, ledger[key].value, f'"{relation} "General')


def _relation(comparison: Comparison) -> str:
    return _RELATIONS[text_of(comparison.limit.relation, "at most")]


def _result(sheet: Sheet, outcome: Outcome, column: int, comparison: Comparison, phrases: Phrases) -> None:
    formula, value = result_words(outcome, comparison, phrases)
    sheet.text(column, value, "strong right")
    if formula:
        sheet.live(column, formula, value, style="strong right")


def result_words(outcome: Outcome, comparison: Comparison, phrases: Phrases) -> tuple[str, str]:
    """The wording of a comparison as a live formula (empty where it is fixed) and as it is now."""
    met, not_met = (phrases(f"limit.{_relation(comparison)}_{end}") for end in ("met", "not_met"))
    now = phrases("limit.not_compared", reason=comparison.reason)
    if comparison.is_met is not None:
        now = met if comparison.is_met else not_met
    if not comparison.met or not (comparison.compared or _too_few(outcome.ledger, comparison)):
        return "", now
    count, required = comparison.count, comparison.required
    answer = f"IF({comparison.met}=1,{quoted(met)},{quoted(not_met)})"
    none = phrases("limit.not_compared", reason="no valid run has this result")
    if any(text_of(run.run.approval_reference) for run in outcome.runs):
        return f"IF({count}=0,{quoted(none)},{answer})", now
    head, _, tail = phrases("limit.not_compared", reason="\0").partition("\0")
    few = f'{quoted(head)}&{count}&" valid run(s) of "&{required}&{quoted(" required" + tail)}'
    return f"IF({count}=0,{quoted(none)},IF({count}<{required},{few},{answer}))", now


def _too_few(ledger: Ledger, comparison: Comparison) -> bool:
    """Whether too few valid runs are the reason that no comparison was made."""
    count, required = (ledger[key].value for key in (comparison.count, comparison.required))
    return bool(count < required) and comparison.reason.startswith(f"{count:.0f} valid run")


def _run(sheet: Sheet, outcome: Outcome, run: RunResult, phrases: Phrases) -> None:
    sheet.text(0, run.run.run.value, "strong")
    sheet.moment(1, run.run.start.value)
    sheet.moment(2, run.run.end.value)
    formula, value = state_words(run, phrases)
    sheet.text(3, value, "wrap")
    if formula:
        sheet.live(3, formula, value, style="wrap")
    load = outcome.ledger.get(f"run.{run.key}.load")
    if load is not None:
        sheet.live(4, load.key, load.value, f'{number_format(load)}" {_load_unit(run, load.unit)}"')
    used = [use.fuel.value for use in outcome.record.fuel_use if use.run.value == run.run.run.value]
    fuels = used or [fuel.fuel.value for fuel in outcome.record.fuels]
    sheet.text(5, ", ".join(dict.fromkeys(fuels)), "after")
    sheet.text(6, "; ".join(run.reasons), "wrap")
    sheet.next()


def _load_unit(run: RunResult, unit: str) -> str:
    return (unit_text(unit) or text_of(run.run.load_unit)).replace('"', "")


def state_words(run: RunResult, phrases: Phrases) -> tuple[str, str]:
    """The state of a run as a live formula of its gases' validity (empty where the user excluded it)."""
    valid, invalid, excluded = (phrases(f"run.{word}") for word in ("valid", "invalid", "excluded"))
    if run.state is RunState.EXCLUDED:
        return "", excluded
    flags = ",".join(f"{gas.valid}=1" for gas in run.gases)
    now = valid if run.state is RunState.VALID else invalid
    return (f"IF(AND({flags}),{quoted(valid)},{quoted(invalid)})", now) if flags else ("", now)
