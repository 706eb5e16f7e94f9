"""Oxygen and carbon dioxide together: nitrogen, molecular weight, excess air, fuel factor and its range."""

from __future__ import annotations

from reporter.basis import DRY
from reporter.conversions import convert_entry
from reporter.equation import Citation
from reporter.ledger import Entry, slug
from reporter.methods.criteria import all_met, at_or_above, at_or_below
from reporter.methods.method_3 import dry_molecular_weight, nitrogen_by_difference, wet_molecular_weight
from reporter.methods.method_3b import (
    carbon_dioxide_adjusted,
    excess_air,
    fo_range,
    fuel_factor,
    fuel_factor_from_f,
    mixed_fuel_tolerance,
    oxygen_adjusted,
)
from reporter.outcome import Check
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book
from reporter.reduction.equations import (
    carbon_monoxide_counted,
    fuel_factor_bound,
)
from reporter.reduction.fuels import Factors

#: Percent oxygen of dry air in Methods 3B and 19.
_AIR = 20.9
_RANGE = Citation("m3b", "12.3", "Table 3B-1")
_MIXED = Citation("m3b", "12.3.3")


def reduce_diluents(book: Book, about: RunBook, fuels: tuple[str, ...], factors: Factors) -> None:
    """Enter what dry oxygen and carbon dioxide give together; silent where one of them is missing."""
    oxygen, dioxide = about.dry.get("o2"), about.dry.get("co2")
    if oxygen is None or dioxide is None:
        return
    if oxygen.value >= _AIR:
        book.say(f"Run {about.run.run.value}: oxygen is not below that of air; no excess air or fuel factor is stated.")
        return
    monoxide = _monoxide(book, about)
    gases = {"o2": oxygen, "co2": dioxide, "co": monoxide}
    nitrogen = book.apply(nitrogen_by_difference, about.key("combustion.nitrogen"), gases)
    weight = book.apply(dry_molecular_weight, about.key("combustion.molecular_weight_dry"), {**gases, "n2": nitrogen})
    if about.moisture is not None:
        inputs = {"md": weight, "bws": about.moisture}
        book.apply(wet_molecular_weight, about.key("combustion.molecular_weight_wet"), inputs)
    book.attempt(
        excess_air,
        about.key("combustion.excess_air.by_analysis"),
        {"o2": oxygen, "co": monoxide, "n2": nitrogen},
    )
    counted = book.apply(carbon_monoxide_counted, about.key("combustion.co_counted"), {"co": monoxide})
    adjusted = {
        "o2": book.apply(oxygen_adjusted, about.key("combustion.o2_adjusted"), {"o2": oxygen, "co": counted}),
        "co2": book.apply(
            carbon_dioxide_adjusted, about.key("combustion.co2_adjusted"), {"co2": dioxide, "co": counted}
        ),
    }
    factor = book.attempt(fuel_factor, about.key("combustion.fuel_factor"), adjusted)
    if factor is not None:
        _check_range(book, about, factor, fuels, factors)


def _monoxide(book: Book, about: RunBook) -> Entry:
    key = about.key("combustion.co_percent")
    dry = about.dry.get("co")
    if dry is None:
        return book.state(key, 0.0, "%", "carbon monoxide was not measured: none is counted", basis=DRY)
    found = book.ledger.get(key)
    return found or convert_entry(book.ledger, key, dry, "%")


def _check_range(book: Book, about: RunBook, factor: Entry, fuels: tuple[str, ...], factors: Factors) -> None:
    """The fuel factor against the range expected of the fuel; 12 % about the prorated one for a mixture."""
    known = fo_range(fuels[0]) if len(fuels) == 1 else None
    if known is not None:
        stem = f"fuel.{slug(fuels[0])}.fuel_factor"
        low = book.table(f"{stem}.lowest", known.low, "1", known.citation, row=known.fuel)
        high = book.table(f"{stem}.highest", known.high, "1", known.citation, row=known.fuel)
        citation = _RANGE
    elif factors.fd is not None and factors.fc is not None:
        inputs = {"fd": factors.fd, "fc": factors.fc}
        expected = book.apply(fuel_factor_from_f, about.key("combustion.fuel_factor.expected"), inputs)
        share = book.table("criterion.fuel_factor.tolerance", mixed_fuel_tolerance(), "%", _MIXED)
        opposite = book.state("criterion.fuel_factor.tolerance_below", -share.value, "%", "the same, below")
        bounds = {"expected": expected}
        low = book.apply(fuel_factor_bound, about.key("combustion.fuel_factor.lowest"), {**bounds, "share": opposite})
        high = book.apply(fuel_factor_bound, about.key("combustion.fuel_factor.highest"), {**bounds, "share": share})
        citation = _MIXED
    else:
        return
    stem = about.key("combustion.fuel_factor")
    above = book.apply(at_or_above, f"{stem}.not_below", {"value": factor, "bound": low})
    below = book.apply(at_or_below, f"{stem}.not_above", {"value": factor, "bound": high})
    met = book.apply(all_met, f"{stem}.met", {"flags": [above, below]})
    for bound, relation, words in ((low, "at least", "lower end"), (high, "at most", "upper end")):
        part = above if relation == "at least" else below
        book.checks.append(
            Check(
                key=part.key,
                title=f"Fuel factor, {words} of the range expected, run {about.run.run.value}",
                gas="",
                runs=(about.run.key,),
                value=factor.key,
                bound=bound.key,
                citation=citation,
                met=part.value == 1.0,
                consequence="" if part.value == 1.0 else "to be investigated before acceptance",
                relation=relation,
            )
        )
    if met.value != 1.0:
        said = f"fuel factor {factor.value:.3f}, expected {low.value:.3f} to {high.value:.3f}"
        found = f"run {about.run.run.value}: {said}"
        book.trouble("fuel-factor-out-of-range", about.run.place, found, concerns=(factor.key,))
