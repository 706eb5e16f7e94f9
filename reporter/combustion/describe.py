"""The figures of a fuel, published and computed, as rows for a terminal or a page."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from textwrap import fill

from reporter.combustion.fuel import Fuel
from reporter.combustion.fuel_entries import enter_fuel
from reporter.combustion.parse import fuel_from_text, parse_composition
from reporter.combustion.stoichiometry_entries import enter_stoichiometry
from reporter.equation import System
from reporter.errors import RecordError
from reporter.ledger import Entry, FromEquation, FromTable, Ledger, Stated
from reporter.methods.f_factors import eq_19_13, eq_19_14, eq_19_15
from reporter.methods.method_3b import fo_range, fuel_factor_from_f
from reporter.methods.tables import FuelFactor, FuelFactors, fuel_factors

__all__ = ["FuelFigure", "FuelFigures", "describe_fuel", "fuel_from_text", "parse_composition"]
_STEM = "fuel.it"
_WIDTH = 110


@dataclass(frozen=True, slots=True)
class FuelFigure:
    """One figure: label, value, unit, where it comes from, and a note."""

    label: str
    value: float
    unit: str
    source: str
    note: str = ""

    def shown(self) -> str:
        """The value with five significant digits."""
        text = f"{self.value:.5g}"
        return f"{self.value:.0f}" if "e+" in text else text


@dataclass(frozen=True)
class FuelFigures:
    """The figures of one fuel, with what must be said of them; as text, a table."""

    title: str
    rows: tuple[FuelFigure, ...]
    remarks: tuple[str, ...]

    def __iter__(self) -> Iterator[FuelFigure]:
        return iter(self.rows)

    def row(self, label: str) -> FuelFigure:
        """The figure of a label (`KeyError` if there is none)."""
        found = next((row for row in self.rows if row.label == label), None)
        if found is None:
            raise KeyError(label)
        return found

    def __str__(self) -> str:
        cells = [(row.label, row.shown(), row.unit, row.source, row.note) for row in self.rows]
        widths = [max(len(cell[i]) for cell in cells) for i in range(4)]
        lines = [self.title, ""]
        for label, value, unit, source, note in cells:
            line = f"{label:<{widths[0]}}  {value:>{widths[1]}} {unit:<{widths[2]}}  {source:<{widths[3]}}  {note}"
            lines.append(line.rstrip())
        return "\n".join([*lines, "", *(fill(remark, _WIDTH) for remark in self.remarks)]).rstrip()


def describe_fuel(fuel: Fuel | str, system: System = System.US) -> FuelFigures:
    """Composition, heating values, F factors, air, fuel factor, highest CO2 and combustion water of a fuel.

    Parameters
    ----------
    fuel
        A fuel, or its text (`fuel_from_text`).
    system
        Unit system of the figures.

    Returns
    -------
    FuelFigures
        Rows in reading order; each names its table, equation or origin.

    Raises
    ------
    RecordError
        The text is neither a published fuel name nor a composition.

    Examples
    --------
    >>> describe_fuel("natural gas").row("F_d published").value
    8710.0
    """
    it = fuel_from_text(fuel) if isinstance(fuel, str) else fuel
    ledger = Ledger(system)
    enter_fuel(ledger, _STEM, it)
    enter_stoichiometry(ledger, _STEM)
    published = _published(it)
    rows = [
        *_composition(ledger, it),
        *_heat(ledger),
        *_factors(ledger, it, published),
        *_combustion(ledger),
        *_fuel_factor(ledger, published),
    ]
    return FuelFigures(_title(it), tuple(rows), tuple(_remarks(ledger, it)))


def _title(fuel: Fuel) -> str:
    given = "gas; amounts per mole of fuel" if fuel.is_gas else "by weight; amounts per kg of fuel as fired"
    return f"{fuel.name} ({given})"


def _remarks(ledger: Ledger, fuel: Fuel) -> Iterator[str]:
    if fuel.assumed:
        yield (
            "The composition is assumed: a typical one for this fuel name, common practice, each share with the "
            "half of its usual range. Enter an analysis where one exists; nothing is claimed beyond the ranges."
        )
    if f"{_STEM}.gross_heating_value" not in ledger:
        yield "No heating value is given: no F factors are computed."
    yield (
        "Computed figures: element balance, dry air of 20.9 % oxygen, volumes at 68 °F and 29.92 inHg, gross heating "
        "value. A method's published F factor is used as printed unless the record says otherwise."
    )


def _published(fuel: Fuel) -> FuelFactors | None:
    try:
        return fuel_factors(fuel.name)
    except RecordError:
        return None


def source_of(entry: Entry) -> str:
    """Where an entry comes from, in a few words."""
    origin = entry.origin
    if isinstance(origin, FromEquation):
        return origin.equation.citation.text()
    if isinstance(origin, FromTable):
        return origin.citation.text()
    return origin.reason if isinstance(origin, Stated) else origin.place.text()


def _figure(ledger: Ledger, name: str, label: str, note: str = "", *, unit: str = "") -> FuelFigure | None:
    entry = ledger.get(f"{_STEM}.{name}")
    if entry is None:
        return None
    shown = unit or {"1": ""}.get(entry.unit, entry.unit)
    return FuelFigure(label, float(entry.value), shown, source_of(entry), note or entry.note)


def _made(*figures: FuelFigure | None) -> list[FuelFigure]:
    return [figure for figure in figures if figure is not None]


def _composition(ledger: Ledger, fuel: Fuel) -> list[FuelFigure]:
    made = []
    for share in fuel.shares:
        name = f"component.{share.name}.mole_percent" if fuel.is_gas else f"{share.name}_percent"
        label = ledger[f"{_STEM}.{name}"].label.removeprefix(f"{fuel.name}: ")
        made.append(_figure(ledger, name, label if " by " in label else f"{label} by mole"))
    return _made(*made, _figure(ledger, "molar_mass", "molar mass"))


def _heat(ledger: Ledger) -> list[FuelFigure]:
    return _made(
        _figure(ledger, "gross_heating_value", "gross heating value"),
        _figure(ledger, "gross_heating_value.by_volume", "gross heating value by volume", "68 °F, 29.92 inHg"),
        _figure(ledger, "net_heating_value", "net heating value"),
    )


def _factors(ledger: Ledger, fuel: Fuel, published: FuelFactors | None) -> list[FuelFigure]:
    rows: list[FuelFigure] = []
    by_analysis = {} if fuel.is_gas else _by_analysis(ledger)
    for symbol in ("d", "w", "c"):
        printed: FuelFactor | None = getattr(published, f"f{symbol}", None) if published else None
        if printed is not None and published is not None:
            rows.append(_printed(symbol, printed, published, ledger.system))
        for label, entry in (
            ("composition", ledger.get(f"{_STEM}.f{symbol}.composition")),
            ("analysis", by_analysis.get(symbol)),
        ):
            if entry is not None:
                rows.append(_computed(symbol, label, entry, printed, ledger.system))
    return rows


def _printed(symbol: str, printed: FuelFactor, table: FuelFactors, system: System) -> FuelFigure:
    unit = "ft3/MMBtu" if system is System.US else "m3/J"
    note = "" if printed.status_us == "found" else "remembered, not read in a copy of the table"
    if system is System.SI and printed.si is not None and printed.difference is not None:
        converted = f"converted from ft3/MMBtu; printed {printed.si:.3g}, {_percent(printed.difference)}"
        note = "; ".join(part for part in (converted, note) if part)
    return FuelFigure(f"F_{symbol} published", printed.value(system), unit, table.citation.text(), note)


def _computed(symbol: str, way: str, entry: Entry, printed: FuelFactor | None, system: System) -> FuelFigure:
    note = ""
    if printed is not None:
        note = f"{_percent(float(entry.value) / printed.value(system) - 1)} of the published one"
    return FuelFigure(f"F_{symbol} by {way}", float(entry.value), entry.unit, source_of(entry), note)


def _percent(ratio: float) -> str:
    return f"{100 * ratio:+.1f} %".replace("-", "−")


def _by_analysis(ledger: Ledger) -> dict[str, Entry]:
    """F factors by Eqs. 19-13 to 19-15, on the fuel as fired."""
    heat = ledger.get(f"{_STEM}.gross_heating_value")
    if heat is None:
        return {}
    shares = {}
    for name in ("hydrogen", "carbon", "sulfur", "nitrogen", "oxygen", "water"):
        stem = f"{_STEM}.{name}_percent"
        entry = ledger.get(f"{stem}.as_fired") or ledger.get(stem)
        shares[name] = entry or ledger.enter(stem, 0.0, "%", Stated(f"the analysis names no {name}"))
    return {
        symbol: ledger.apply(
            eq,
            f"{_STEM}.f{symbol}.analysis",
            {name: heat if name == "gcv" else shares[name] for name, p in eq.parameters.items() if p.constant is None},
        )
        for symbol, eq in (("d", eq_19_13), ("w", eq_19_14), ("c", eq_19_15))
    }


def _combustion(ledger: Ledger) -> list[FuelFigure]:
    return _made(
        _figure(ledger, "stoichiometric_oxygen", "stoichiometric oxygen by mole"),
        _figure(ledger, "stoichiometric_air", "stoichiometric dry air by mole"),
        _figure(ledger, "stoichiometric_air.by_mass", "stoichiometric dry air by mass", unit="kg/kg"),
        _figure(ledger, "combustion_water", "combustion water by mole"),
        _figure(ledger, "co2_max", "highest CO2, dry"),
    )


def _fuel_factor(ledger: Ledger, published: FuelFactors | None) -> list[FuelFigure]:
    made = _made(_figure(ledger, "fuel_factor.composition", "F_o by composition"))
    if published is None:
        return made
    value = fuel_factor_from_f.evaluate({"fd": published.fd.us, "fc": published.fc.us}, ledger.system)
    made.append(
        FuelFigure("F_o published", value, "", fuel_factor_from_f.citation.text(), "from the published F factors")
    )
    expected = fo_range(published.fuel)
    if expected is not None:
        citation = expected.citation.text()
        made.append(FuelFigure("F_o expected, lowest", expected.low, "", citation))
        made.append(FuelFigure("F_o expected, highest", expected.high, "", citation))
    return made
