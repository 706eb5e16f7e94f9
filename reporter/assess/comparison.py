"""Each limit beside what was measured: on its own basis, with its own averaging, relation and rounding."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Any

from reporter.assess.averages import Average, order_of_averaging
from reporter.assess.extremes import highest_of_valid, lowest_of_valid
from reporter.assess.rounding import Rule, decimals_of, rounding_rule, significant_places
from reporter.assess.validity import channels_behind
from reporter.basis import NO_BASIS, NO_VOLUME, Basis, Moisture, Oxygen, OxygenKind
from reporter.conversions import convert_entry
from reporter.equation import Equation
from reporter.errors import BasisError, RecordError
from reporter.gases import Gas, find_gas
from reporter.ledger import Entry, slug
from reporter.methods.averages import (
    at_least_limit,
    at_most_limit,
    count_valid,
    less_than_limit,
    margin,
    percent_of_limit,
)
from reporter.methods.criteria import at_or_above
from reporter.outcome import Comparison
from reporter.record import Limit, MoistureBasis, text_of
from reporter.reduction import plans as kinds
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book
from reporter.reduction.equations import carried
from reporter.reduction.plans import Plan
from reporter.reduction.results import Missing

_RELATIONS: dict[str, Equation[Any]] = {
    "at most": at_most_limit,
    "less than": less_than_limit,
    "at least": at_least_limit,
}


@dataclass(frozen=True, slots=True)
class Made:
    """What a limit is compared with: its plan, the average, why runs lack the result, and why no run is meant."""

    plan: Plan
    average: Average
    missing: tuple[Missing, ...]
    refusal: str = ""


def compare(book: Book, runs: Sequence[RunBook], made: Made) -> Comparison:
    """The comparison of one limit; a `Comparison` without ``met`` where none can be made, with its reason."""
    limit = made.plan.limit
    assert limit is not None
    key = f"comparison.{limit.key}"
    blank = Comparison(limit=limit, key=key, quantity=_name(made.plan), runs=_runs(made))
    reason = _refusal(book, limit, key)
    if not reason and made.plan.problem is not None:
        book.trouble(made.plan.problem[0], limit.place, made.plan.problem[1], concerns=(key,))
        reason = made.plan.problem[1]
    if made.refusal:
        book.trouble("basis-missing", limit.place, f"limit {limit.limit_id.value}: {made.refusal}", concerns=(key,))
        reason = reason or made.refusal
    for gap in made.missing:
        book.trouble(gap.code, limit.place, gap.words, concerns=(key,))
    if made.average.entry is None:
        reason = reason or (made.missing[0].words if made.missing else "no valid run has this result")
        return _without(blank, reason)
    try:
        if reason:
            return _measured(book, made, blank, reason)[0]
        return _compared(book, runs, made, blank)
    except (BasisError, RecordError) as error:
        code = "rounding-rule-unknown" if isinstance(error, RecordError) else "basis-missing"
        book.trouble(code, limit.place, error.message, concerns=(key,))
        return _without(blank, error.message)


def _without(blank: Comparison, reason: str) -> Comparison:
    return replace(blank, reason=reason)


def _name(plan: Plan) -> str:
    return f"{plan.lane.segment}.{plan.ending}"


def _runs(made: Made) -> tuple[tuple[str, str, str], ...]:
    return tuple((about.run.key, entry.key, flag.key) for about, entry, flag in made.average.runs)


def _refusal(book: Book, limit: Limit, key: str) -> str:
    """Why a limit is not compared whatever was measured: no citation, or not in force."""
    lacking = [
        name for name, value in (("authority", limit.authority), ("citation", limit.citation)) if not text_of(value)
    ]
    if lacking:
        said = f"limit {limit.limit_id.value}: no {' and no '.join(lacking)} entered"
        book.trouble("no-citation", limit.place, said, concerns=(key,))
        return f"no {' and no '.join(lacking)} is entered for this limit"
    first = book.record.test.test_date.value
    last_day = book.record.test.last_test_day
    last = last_day.value if last_day is not None else first
    start, end = limit.in_force_from, limit.in_force_until
    if start is None:
        book.trouble("effective-date-missing", limit.place, f"limit {limit.limit_id.value}")
    if (start is not None and start.value > first) or (end is not None and end.value < last):
        said = f"limit {limit.limit_id.value}: test on {first}" + (f" to {last}" if last != first else "")
        book.trouble("limit-not-in-force", limit.place, said, concerns=(key,))
        return "the limit was not in force on the day of the test, as entered"
    return ""


def limit_basis(plan: Plan) -> Basis:
    """The basis a limit is stated on, from its record."""
    limit = plan.limit
    assert limit is not None
    expressed = _expressed(limit, plan.lane.gas)
    if plan.quantity not in {kinds.CONCENTRATION, kinds.MASS_CONCENTRATION}:
        return Basis(expressed_as=expressed)
    oxygen = Oxygen(OxygenKind.AS_MEASURED)
    if plan.referenced:
        carbon = limit.reference_carbon_dioxide
        if plan.diluent == "CO2" and carbon is not None:
            oxygen = Oxygen(OxygenKind.CORRECTED, carbon.value, None, "CO2")
        elif limit.reference_oxygen is not None:
            k = limit.oxygen_constant.value if limit.oxygen_constant is not None else 20.9
            oxygen = Oxygen(OxygenKind.CORRECTED, limit.reference_oxygen.value, k, "O2")
    mass = plan.quantity == kinds.MASS_CONCENTRATION
    return Basis(
        moisture=Moisture.WET if plan.moisture is MoistureBasis.WET else Moisture.DRY,
        oxygen=oxygen,
        standard=plan.standard if mass else NO_VOLUME,
        expressed_as=expressed if mass else "",
    )


def _expressed(limit: Limit, gas: Gas) -> str:
    """What a limit's mass is stated as, in the words of the gas table: nothing where it is the gas itself."""
    text = text_of(limit.expressed_as).strip()
    if not text:
        return gas.expressed_as
    named = find_gas(re.sub(r"^as\s+", "", text, flags=re.IGNORECASE))
    if named is None:
        return text
    return "" if named.key == gas.key and not gas.expressed_as else named.label


def _in_limit_unit(book: Book, entry: Entry, unit: str) -> Entry:
    if entry.unit == unit:
        return entry
    key = f"{entry.key}.as_{slug(unit.replace('µ', 'u').replace('%', 'percent'))}"
    return book.ledger.get(key) or convert_entry(book.ledger, key, entry, unit)


def _measured(book: Book, made: Made, blank: Comparison, reason: str = "") -> tuple[Comparison, Entry, Entry]:
    """What was measured beside the limit, unrounded and rounded, with nothing compared; value and bound with it."""
    limit, key = blank.limit, blank.key
    unit = limit.unit.value.unit
    places = decimals_of(limit.limit.text)
    bound = book.given(f"{key}.limit", limit.limit, unit, basis=limit_basis(made.plan), decimals=places)
    relation = text_of(limit.relation, "at most")
    rule = rounding_rule(limit)
    parts = [(_in_limit_unit(book, entry, unit), flag) for _, entry, flag in made.average.runs]
    each = text_of(limit.averaging, "mean of runs") == "each run"
    assert made.average.entry is not None
    value = _in_limit_unit(book, made.average.entry, unit)
    if each:
        eq = lowest_of_valid if relation == "at least" else highest_of_valid
        inputs = {"values": [e for e, _ in parts], "flags": [f for _, f in parts]}
        value = book.apply(eq, f"{key}.value", inputs)
    rounded = _rounded(book, key, value, rule)
    shut = made.average.with_excluded
    cross = book.ledger.get(f"{made.average.entry.key}.cross_check")
    shown = replace(
        blank,
        runs=tuple(
            (about.run.key, entry.key, flag.key)
            for (about, _, _), (entry, flag) in zip(made.average.runs, parts, strict=True)
        ),
        value=value.key,
        rounded=rounded.key,
        limit_key=bound.key,
        count=book.apply(count_valid, f"{key}.count", {"flags": [flag for _, flag in parts]}).key,
        required=_required(book, limit, key).key,
        reason=reason,
        rounding_words=rule.words,
        with_excluded="" if shut is None else shut.key,
        cross="" if cross is None else cross.key,
        cross_words="" if cross is None else "second route",
        notes=_notes(book, made, each, limit),
    )
    return shown, rounded, bound


def _compared(book: Book, runs: Sequence[RunBook], made: Made, blank: Comparison) -> Comparison:
    limit, key = blank.limit, blank.key
    relation = text_of(limit.relation, "at most")
    if limit.relation is None:
        book.say(f"Limit {limit.limit_id.value}: no relation was entered; 'at most' is taken.")
    shown, rounded, bound = _measured(book, made, blank)
    both = {"value": rounded, "limit": bound}
    met = book.apply(_RELATIONS[relation], f"{key}.met", both)
    unrounded = {"value": book.ledger[shown.value], "limit": bound}
    left = book.apply(margin, f"{key}.margin", unrounded, decimals=decimals_of(limit.limit.text) + 2)
    if bound.value != 0.0:
        book.apply(percent_of_limit, f"{key}.percent", both)
    count, required = book.ledger[shown.count], book.ledger[shown.required]
    enough = book.apply(at_or_above, f"{key}.enough", {"value": count, "bound": required})
    reason, approved = "", tuple[str, ...]()
    if enough.value != 1.0:
        reason, approved = _too_few(book, limit, key, count, required, runs)
    if text_of(limit.averaging, "mean of runs") != "each run":
        order_of_averaging(book, runs, _name(made.plan), made.average)
    return replace(
        shown,
        margin=left.key,
        met=met.key,
        is_met=None if reason else met.value == 1.0,
        reason=reason,
        notes=shown.notes + approved,
    )


def _notes(book: Book, made: Made, each: bool, limit: Limit) -> tuple[str, ...]:
    notes: list[str] = []
    if limit.minimum_run_length is not None:
        bound = book.ledger[f"limit.{limit.key}.minimum_run_length"]
        lengths = [(about.run.run.value, _valid_minutes(book, about, entry)) for about, entry, _ in made.average.runs]
        notes += [
            f"run {name} has {minutes:g} min with valid readings; the limit asks for {bound.value:g} min"
            for name, minutes in lengths
            if minutes < bound.value
        ]
    if each:
        notes.append("each run is compared; the value shown is the one nearest to or beyond the limit")
    if limit.in_force_from is None:
        notes.append("no date from which the limit is in force was entered")
    if text_of(limit.decision_rule):
        notes.append(f"decision rule as entered: {text_of(limit.decision_rule)}; the plain comparison is shown")
    if made.plan.lane.gas.by_analogy and made.plan.quantity == kinds.EMISSION_RATE:
        notes.append("by analogy with Method 19")
    return tuple(notes)


def _valid_minutes(book: Book, about: RunBook, entry: Entry) -> float:
    """The fewest valid minutes of the channels a result rests on; the length of the run where it rests on none."""
    keys = (about.key(f"{segment}.valid_minutes") for segment in channels_behind(book, about, entry))
    found = [float(book.ledger[key].value) for key in keys if key in book.ledger]
    return min(found, default=float(book.given_duration(about.run).value))


def _required(book: Book, limit: Limit, key: str) -> Entry:
    if limit.runs_required is not None:
        return book.given(f"{key}.required", limit.runs_required, "1")
    words = "three runs unless entered otherwise (40 CFR 60.8(f))"
    return book.state(f"{key}.required", 3.0, "1", words)


def _rounded(book: Book, key: str, value: Entry, rule: Rule) -> Entry:
    """The compared number; zero has no significant digits and is compared as it is."""
    if rule.equation is None or (rule.significant and value.value == 0.0):
        return book.apply(carried, f"{key}.rounded", {"value": value})
    name = "digits" if rule.significant else "decimals"
    digits = book.state(f"{key}.rounding_{name}", float(rule.digits), "1", rule.words, basis=NO_BASIS)
    places = rule.digits if not rule.significant else significant_places(value.value, rule.digits)
    return book.apply(rule.equation, f"{key}.rounded", {"value": value, name: digits}, decimals=places)


def _too_few(
    book: Book, limit: Limit, key: str, count: Entry, required: Entry, runs: Sequence[RunBook]
) -> tuple[str, tuple[str, ...]]:
    """The reason for too few valid runs, or the approval that lets fewer stand."""
    approvals = [text_of(about.run.approval_reference) for about in runs if text_of(about.run.approval_reference)]
    said = f"{count.value:.0f} valid run(s) of {required.value:.0f} required"
    if approvals:
        return "", (f"{said}; fewer runs as approved: {', '.join(dict.fromkeys(approvals))}",)
    book.trouble("too-few-valid-runs", limit.place, f"limit {limit.limit_id.value}: {said}", concerns=(key,))
    return said, ()


def not_measured(limit: Limit) -> Comparison:
    """A limit whose pollutant no channel measures."""
    named = find_gas(limit.pollutant.value)
    reason = f"no channel measures {limit.pollutant.value if named is None else named.label}"
    return Comparison(limit=limit, key=f"comparison.{limit.key}", quantity="", runs=(), reason=reason)
