"""Correction to a reference diluent as a limit fixes it, with its gain and uncertainty near the constant."""

from __future__ import annotations

from reporter.ledger import Entry, slug
from reporter.methods.method_3b import fuel_factor_from_f
from reporter.methods.reference import (
    carbon_dioxide_reference,
    correction_factor_uncertainty,
    gain,
    oxygen_reference,
    oxygen_reference_by_co2,
    reference_refusal,
)
from reporter.methods.tables import DEFAULT_TABLE
from reporter.record import Limit
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book
from reporter.reduction.fuels import Factors
from reporter.reduction.plans import Plan
from reporter.reduction.uncertainty import reading_uncertainty

#: Relative change per percent oxygen [%] above which the report says that the correction is sensitive.
_SENSITIVE = 25.0


def at_reference(
    book: Book, about: RunBook, plan: Plan, value: Entry, key: str, factors: Factors | None
) -> Entry | tuple[str, str]:
    """A dry concentration at the limit's reference diluent, or (problem code, reason)."""
    limit = plan.limit
    assert limit is not None
    if plan.diluent == "CO2":
        return _by_carbon_dioxide(book, about, plan, value, key, factors)
    run = about.run.run.value
    oxygen = about.dry.get("o2")
    if oxygen is None:
        return "diluent-missing", f"run {run}: no dry oxygen"
    k = oxygen_constant(book, limit)
    assert limit.reference_oxygen is not None
    reference = book.given(f"limit.{limit.key}.reference_oxygen", limit.reference_oxygen, "%")
    refusal = reference_refusal(k.value, oxygen.value)
    if refusal is not None:
        return "oxygen-at-or-above-air", f"run {run}: {refusal}"
    inputs = {"c": value, "o2": oxygen, "reference": reference, "k": k}
    made = book.ledger.apply(oxygen_reference, key, inputs)
    _sensitivity(book, about, key, k, oxygen)
    return made


def oxygen_constant(book: Book, limit: Limit) -> Entry:
    """The percent oxygen of dry air a limit is corrected with; 20.9 where it was not entered (then said)."""
    key = f"limit.{limit.key}.oxygen_constant"
    if limit.oxygen_constant is not None:
        return book.given(key, limit.oxygen_constant, "%")
    words = f"limit {limit.limit_id.value}: no oxygen constant was entered; 20.9 % is taken"
    book.say(f"{words[0].upper()}{words[1:]}.")
    return book.state(key, 20.9, "%", words)


def _by_carbon_dioxide(
    book: Book, about: RunBook, plan: Plan, value: Entry, key: str, factors: Factors | None
) -> Entry | tuple[str, str]:
    run, limit = about.run.run.value, plan.limit
    assert limit is not None
    diluent = about.dry.get("co2")
    if diluent is None:
        return "diluent-missing", f"run {run}: no dry carbon dioxide"
    if diluent.value <= 0.0:
        return "diluent-missing", f"run {run}: carbon dioxide {diluent.value:.4g} % is not above zero"
    if limit.reference_carbon_dioxide is not None:
        name = f"limit.{limit.key}.reference_carbon_dioxide"
        reference = book.given(name, limit.reference_carbon_dioxide, "%")
        return book.ledger.apply(carbon_dioxide_reference, key, {"c": value, "co2": diluent, "reference": reference})
    if factors is None or factors.fd is None or factors.fc is None:
        return "factor-missing", f"run {run}: the CO2 route needs the fuel's F factors"
    assert limit.reference_oxygen is not None
    other = "" if plan.table == DEFAULT_TABLE else f".table_{slug(plan.table)}"
    named = about.key(f"combustion.fuel_factor.expected{other}")
    fo = book.apply(fuel_factor_from_f, named, {"fd": factors.fd, "fc": factors.fc})
    inputs = {
        "c": value,
        "co2": diluent,
        "reference": book.given(f"limit.{limit.key}.reference_oxygen", limit.reference_oxygen, "%"),
        "fo": fo,
        "k": oxygen_constant(book, limit),
    }
    return book.ledger.apply(oxygen_reference_by_co2, key, inputs)


def _sensitivity(book: Book, about: RunBook, key: str, k: Entry, oxygen: Entry) -> None:
    """What one percent of oxygen changes, and what the oxygen's own uncertainty does."""
    change = book.apply(gain, f"{key}.gain", {"k": k, "o2": oxygen})
    u_o2 = reading_uncertainty(book, about, "o2")
    relative = None
    if u_o2 is not None:
        inputs = {"u_o2": u_o2, "k": k, "o2": oxygen}
        relative = book.apply(correction_factor_uncertainty, f"{key}.gain_uncertainty", inputs)
    if change.value > _SENSITIVE:
        said = f"run {about.run.run.value}: one percent of oxygen changes the corrected value by {change.value:.0f} %"
        if relative is not None:
            said += f"; its relative standard uncertainty from oxygen is {relative.value:.1f} %"
        book.trouble("near-oxygen-constant", about.run.place, said)
