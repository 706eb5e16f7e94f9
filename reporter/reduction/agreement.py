"""Measured CO2 and moisture against what fuel, air and measured oxygen imply, as criteria that are live entries."""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from functools import cache
from typing import Any

from reporter.basis import Moisture
from reporter.combustion.agreement import (
    agreement_bound,
    as_if_wet,
    co2_on_line,
    co2_spread,
    line_slope,
    moisture_at_oxygen,
    moisture_highest,
    moisture_lowest,
    moisture_spread,
    o2_on_line,
    scale_to_line,
    uncertainty_allowed,
)
from reporter.combustion.air import air_model, enter_air
from reporter.combustion.fuel import nominal_reach
from reporter.combustion.state import State
from reporter.equation import Citation
from reporter.ledger import Entry, Given
from reporter.methods.criteria import all_met, at_or_above, at_or_below, criteria, reading_difference, share_within
from reporter.outcome import Check
from reporter.record import text_of
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book
from reporter.reduction.calibration import method_of
from reporter.reduction.composition import composition_key
from reporter.reduction.uncertainty import reading_uncertainty
from reporter.resources import table_text

_GUM = Citation("gum", "5.1.2")
_TYPICAL = Citation("practice", "", "typical composition")
_WATER = Citation("practice", "", "1 % H2O")
_ALLOWED = (
    "Where oxygen and CO2 are held against the line of the fuel, the calibration error that the method accepts is part "
    "of an uncertainty that was not entered, as a rectangular distribution."
)
_LOOK = "to be investigated before acceptance"


@cache
def agreement_table() -> dict[str, Any]:
    """What is held against what, and from where a hint is given."""
    return tomllib.loads(table_text("agreement.toml"))


def stem(about: RunBook, name: str) -> str:
    """A ledger key of the agreement of a run."""
    return about.key(f"combustion.agreement.{name}")


def judge_agreement(book: Book, about: RunBook, state: State, assumed: Mapping[str, Entry]) -> None:
    """Enter the criteria of a run: CO2 on the line of the fuel, moisture near the water of combustion.

    `assumed` holds the shares of heat input of the fuels whose composition is assumed, by name.
    """
    if state.by == "o2":
        _carbon_dioxide(book, about, state, assumed)
    _water(book, about, state, assumed)


# ---- carbon dioxide ------------------------------------------------------------------------------------------


def _carbon_dioxide(book: Book, about: RunBook, state: State, assumed: Mapping[str, Entry]) -> None:
    difference = book.ledger.get(about.key("combustion.co2_difference"))
    oxygen, dioxide = about.dry.get("o2"), about.dry.get("co2")
    if difference is None or oxygen is None or dioxide is None:
        return
    doubts = {name: _uncertainty(book, about, name) for name in ("o2", "co2")}
    if doubts["o2"] is None or doubts["co2"] is None:
        return
    air = enter_air(book.ledger, air_model("physical")).oxygen
    line = {"expected": state.entry("co2_expected"), "o2": oxygen, "air_oxygen": air}
    slope = book.apply(line_slope, stem(about, "slope"), line)
    inputs = {
        "u_co2": doubts["co2"],
        "u_o2": doubts["o2"],
        "slope": slope,
        "spread": _spread(book, about, state, "co2", assumed),
    }
    bound = book.apply(agreement_bound, stem(about, "co2_bound"), inputs)
    met = book.apply(share_within, stem(about, "co2_met"), {"value": difference, "bound": bound})
    _note(book, about, met, difference, bound, ("CO2", "Carbon dioxide against that expected of the fuel", "within"))
    if met.value != 1.0:
        point = {"slope": slope, "air_oxygen": air}
        book.apply(o2_on_line, stem(about, "o2_needed"), {**point, "co2": dioxide})
        book.apply(scale_to_line, stem(about, "scale_needed"), {**point, "co2": dioxide, "o2": oxygen})
        said = f"measured {dioxide.value:.2f} %, expected {line['expected'].value:.2f} %, bound {bound.value:.2f} %"
        found = f"run {about.run.run.value}: {said}"
        book.trouble("co2-against-fuel", about.run.place, found, concerns=(difference.key,))
        _if_wet(book, about, point, bound)


def _uncertainty(book: Book, about: RunBook, segment: str) -> Entry | None:
    """Standard uncertainty of a dry diluent: as entered, else with the calibration error its method accepts."""
    lane, corrected = about.lanes[segment], about.corrected[segment]
    found = reading_uncertainty(book, about, segment)
    if lane.channel.standard_uncertainty is None:
        held = criteria(method_of(lane)) or {}
        error = held.get("calibration_error")
        if error is None or corrected.span is None or corrected.span.unit != "%":
            return None
        reason = "neither cylinder nor drift states one"
        inputs = {
            "known": found or book.state(stem(about, f"{segment}_known"), 0.0, "%", reason),
            "allowed": book.table(f"criterion.{lane.segment}.{error.name}.bound", error.bound, "%", error.citation),
            "span": corrected.span,
        }
        book.say(_ALLOWED)
        found = book.apply(uncertainty_allowed, stem(about, f"{segment}_uncertainty"), inputs)
    if found is None or about.measured[segment].basis.moisture is not Moisture.WET:
        return found
    if about.moisture is None:
        return None
    wet = {"value": found, "moisture": about.moisture}
    return book.apply(as_if_wet, stem(about, f"{segment}_uncertainty.dry"), wet)


def _spread(book: Book, about: RunBook, state: State, name: str, assumed: Mapping[str, Entry]) -> Entry:
    """How far the assumed compositions reach in an expected value, each share at the end of its range."""
    key, expected = stem(about, f"{name}_spread"), state.entry(f"{name}_expected")
    if not assumed:
        return book.state(key, 0.0, expected.unit, "no composition is assumed")
    eq, number = (co2_spread, 0) if name == "co2" else (moisture_spread, 1)
    reaches = [
        book.table(f"{composition_key(fuel)}.{name}_reach", nominal_reach(fuel)[number], "%", _TYPICAL, row=fuel)
        for fuel in assumed
    ]
    inputs: dict[str, Given] = {"expected": expected, "shares": list(assumed.values()), "reaches": reaches}
    return book.apply(eq, key, inputs)


def _if_wet(book: Book, about: RunBook, point: Mapping[str, Entry], bound: Entry) -> None:
    """Whether the point would lie on the line if both gases had been read on wet gas."""
    moisture = about.moisture
    dry = all(about.measured[name].basis.moisture is Moisture.DRY for name in ("o2", "co2"))
    if moisture is None or not dry or _is_calculated(about):
        return
    gases = {
        name: book.apply(as_if_wet, stem(about, f"wet.{name}"), {"value": about.dry[name], "moisture": moisture})
        for name in ("o2", "co2")
    }
    expected = book.apply(co2_on_line, stem(about, "wet.co2_expected"), {**point, "o2": gases["o2"]})
    off = {"reading": gases["co2"], "other": expected}
    difference = book.apply(reading_difference, stem(about, "wet.co2_difference"), off)
    wide = book.apply(as_if_wet, stem(about, "wet.co2_bound"), {"value": bound, "moisture": moisture})
    book.apply(share_within, stem(about, "wet.co2_met"), {"value": difference, "bound": wide})
    other = {
        "expected": book.ledger[about.key("combustion.moisture_expected")],
        "o2": about.dry["o2"],
        "other": gases["o2"],
        "air_oxygen": point["air_oxygen"],
    }
    water = book.apply(moisture_at_oxygen, stem(about, "wet.moisture_expected"), other)
    off = {"reading": moisture, "other": water}
    book.apply(reading_difference, stem(about, "wet.moisture_difference"), off)


# ---- moisture ------------------------------------------------------------------------------------------------


def _is_calculated(about: RunBook) -> bool:
    return text_of(about.run.moisture_source) == "fuel calculation"


def _water(book: Book, about: RunBook, state: State, assumed: Mapping[str, Entry]) -> None:
    difference = book.ledger.get(about.key("combustion.moisture_difference"))
    if difference is None or about.moisture is None or _is_calculated(about):
        return
    rule = agreement_table()["moisture"]
    tolerance = book.table("criterion.moisture.tolerance", rule["tolerance"], "1", _WATER)
    both = {"tolerance": tolerance, "spread": _spread(book, about, state, "moisture", assumed)}
    low = book.apply(moisture_lowest, stem(about, "moisture_lowest"), both)
    more = {
        "humidity": _uncounted(book, about),
        "air": state.entry("air_dry"),
        "wet": state.entry("wet_products"),
        "expected": state.entry("moisture_expected"),
    }
    high = book.apply(moisture_highest, stem(about, "moisture_highest"), {**both, **more})
    pairs = {"value": difference}
    above = book.apply(at_or_above, stem(about, "moisture_not_below"), {**pairs, "bound": low})
    below = book.apply(at_or_below, stem(about, "moisture_not_above"), {**pairs, "bound": high})
    title = "Moisture less that expected of combustion"
    _note(book, about, above, difference, low, ("", f"{title}, lower end", "at least"))
    _note(book, about, below, difference, high, ("", f"{title}, upper end", "at most"))
    wet = book.ledger.get(stem(about, "wet.moisture_difference"))
    if wet is not None:
        flags = [
            book.apply(at_or_above, stem(about, "wet.moisture_not_below"), {"value": wet, "bound": low}),
            book.apply(at_or_below, stem(about, "wet.moisture_not_above"), {"value": wet, "bound": high}),
        ]
        book.apply(all_met, stem(about, "wet.moisture_met"), {"flags": flags})
    for met, code in ((above, "moisture-below-combustion"), (below, "moisture-above-combustion")):
        if met.value != 1.0:
            said = (
                f"run {about.run.run.value}: measured {100 * about.moisture.value:.1f} %, "
                f"combustion of the fuel gives {100 * more['expected'].value:.1f} %"
            )
            book.trouble(code, about.run.place, said, concerns=(difference.key,))


def _uncounted(book: Book, about: RunBook) -> Entry:
    """Water the air may have held although none was entered [mol/mol dry air]."""
    key = stem(about, "air_uncounted")
    if about.key("moisture.ambient") in book.ledger:
        return book.state(key, 0.0, "1", "the moisture of the air was entered and is counted")
    share = agreement_table()["moisture"]["air_moisture"]
    words = f"no moisture of the air entered: up to {share}, which Method 19 (12.2.2.1) allows anywhere at any time"
    return book.state(key, share / (1 - share), "1", words)


def _note(book: Book, about: RunBook, met: Entry, value: Entry, bound: Entry, words: tuple[str, str, str]) -> None:
    """List a criterion of the agreement: gas, title and relation in `words`."""
    gas, title, relation = words
    book.checks.append(
        Check(
            key=met.key,
            title=f"{title}, run {about.run.run.value}",
            gas=gas,
            runs=(about.run.key,),
            value=value.key,
            bound=bound.key,
            citation=_GUM if gas else _WATER,
            met=met.value == 1.0,
            consequence="" if met.value == 1.0 else _LOOK,
            relation=relation,
        )
    )
