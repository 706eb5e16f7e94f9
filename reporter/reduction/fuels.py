"""Fuels of a test: F factors by the source entered, heat input of a run, shares of heat input."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

from reporter.conversions import convert_entry
from reporter.errors import FluebookError
from reporter.ledger import Entry, slug
from reporter.methods.f_factors import eq_19_13, eq_19_14, eq_19_15, eq_19_16, eq_19_17, eq_19_18
from reporter.methods.method_19 import FC_BASIS, FD_BASIS, FW_BASIS
from reporter.methods.tables import DEFAULT_TABLE, FuelFactor, fuel_factors
from reporter.record import FuelRow, FuelUse, Real, text_of
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book
from reporter.reduction.equations import (
    carried,
    heat_from_liquid,
    heat_from_mass,
    heat_from_volume,
    heat_share,
    heat_total,
    metered_volume_rate,
)
from reporter.units import dimension

_ELEMENTS = ("hydrogen", "carbon", "sulfur", "nitrogen", "oxygen")


@dataclass(frozen=True, slots=True)
class Factors:
    """F factors as entries; a factor that the source does not give is None."""

    fd: Entry | None
    fw: Entry | None
    fc: Entry | None

    def named(self, name: str) -> Entry | None:
        """The factor ``fd``, ``fw`` or ``fc``."""
        found: Entry | None = getattr(self, name)
        return found


NO_FACTORS = Factors(None, None, None)


def fuel_key(name: str, table: str = DEFAULT_TABLE) -> str:
    """Key stem of a fuel's entries."""
    stem = f"fuel.{slug(name)}"
    return stem if table == DEFAULT_TABLE else f"{stem}.table_{slug(table)}"


def factors_of(book: Book, row: FuelRow, table: str = DEFAULT_TABLE) -> Factors:
    """The F factors of one fuel, by its factor source: published, analysis or gas analysis."""
    source = row.factor_source.value
    stem = fuel_key(row.fuel.value, table)
    try:
        if source == "published":
            return _published(book, row, stem, table)
        if source == "analysis":
            return _from_analysis(book, row, stem)
        from reporter.reduction.composition import factors_from_composition

        return factors_from_composition(book, row, stem)
    except FluebookError as error:
        book.trouble("factor-missing", row.place, str(error), concerns=(stem,))
        return NO_FACTORS


def _published(book: Book, row: FuelRow, stem: str, table: str) -> Factors:
    found = fuel_factors(row.fuel.value, table)
    unit = book.unit("ft3/MMBtu", "m3/J")

    def enter(name: str, factor: FuelFactor, basis: object) -> Entry:
        key = f"{stem}.{name}"
        known = book.ledger.get(key)
        if known is not None:
            return known
        raw_unit = "ft3/MMBtu"
        if unit == raw_unit:
            made = book.table(key, factor.us, unit, found.citation, row=found.row)
        else:
            raw = book.table(f"{key}.printed", factor.us, raw_unit, found.citation, row=found.row)
            made = convert_entry(book.ledger, key, raw, unit)
            if factor.si is not None and factor.difference is not None and abs(factor.difference) > 1e-3:
                book.say(
                    f"{found.row}, {name.capitalize()}: the metric value printed in the table is "
                    f"{factor.si:.4g} m3/J, {100 * factor.difference:+.2f} % from the converted one used here."
                )
        return _with_basis(book, made, basis)

    fw = enter("fw", found.fw, FW_BASIS) if found.fw is not None else None
    return Factors(enter("fd", found.fd, FD_BASIS), fw, enter("fc", found.fc, FC_BASIS))


def _with_basis(book: Book, entry: Entry, basis: object) -> Entry:
    """A table value with the basis of its column."""
    from reporter.basis import Basis

    assert isinstance(basis, Basis)
    return book.ledger.set_basis(entry.key, basis)


def _from_analysis(book: Book, row: FuelRow, stem: str) -> Factors:
    """Eqs. 19-13 to 19-15 on the basis the analysis was reported on."""
    if row.gross_heating_value is None:
        book.trouble(
            "factor-missing", row.place, f"{row.fuel.value}: no gross heating value", concerns=(stem,)
        )
        return NO_FACTORS
    parts: dict[str, Entry] = {}
    for name in _ELEMENTS:
        value: Real | None = getattr(row, name)
        key = f"{stem}.{name}"
        parts[name] = (
            book.given(key, value, "%")
            if value is not None
            else book.state(key, 0.0, "%", f"{name} not reported: none")
        )
    gcv = book.given(f"{stem}.gross_heating_value", row.gross_heating_value, book.unit("Btu/lb", "kJ/kg"))
    inputs = {**parts, "gcv": gcv}
    fd = book.apply(eq_19_13, f"{stem}.fd", inputs)
    fc = book.apply(eq_19_15, f"{stem}.fc", {"carbon": parts["carbon"], "gcv": gcv})
    fw = None
    if row.water is not None and text_of(row.analysis_basis, "as fired") == "as fired":
        wet_inputs = {**inputs, "water": book.given(f"{stem}.water", row.water, "%")}
        fw = book.apply(eq_19_14, f"{stem}.fw", wet_inputs)
    return Factors(fd, fw, fc)


def heat_inputs(book: Book, about: RunBook) -> dict[str, Entry]:
    """Heat input of each fuel of a run from Fuel use, by fuel name."""
    found: dict[str, Entry] = {}
    for use in book.record.fuel_use:
        if use.run.value == about.run.run.value:
            entry = _heat_of(book, about, use)
            if entry is not None:
                found[use.fuel.value] = entry
    return found


def _heat_of(book: Book, about: RunBook, use: FuelUse) -> Entry | None:
    stem = about.key(f"fuel_use.{slug(use.fuel.value)}")
    if use.heating_value is None:
        return None
    if text_of(use.heating_value_kind, "gross") == "net":
        said = f"{use.fuel.value}, run {use.run.value}: the heating value is net; F factors go with gross"
        book.trouble("heat-input-missing", use.place, said, concerns=(about.key("heat_input"),))
        return None
    heating_unit = use.heating_value.unit.unit if use.heating_value.unit is not None else ""
    by_mass = heating_unit != "" and dimension(heating_unit) == "heat_by_mass"
    liquid = heating_unit in {"MJ/L", "Btu/gal", "MMBtu/gal"}
    if by_mass:
        eq, rate_unit, heat_unit = heat_from_mass, book.unit("lb/h", "kg/h"), book.unit("Btu/lb", "kJ/kg")
    elif liquid:
        eq, rate_unit, heat_unit = heat_from_liquid, book.unit("gal/h", "L/h"), book.unit("Btu/gal", "MJ/L")
    else:
        eq, rate_unit, heat_unit = heat_from_volume, book.unit("ft3/h", "m3/h"), book.unit("Btu/ft3", "MJ/m3")
    rate = _rate(book, about, use, stem, rate_unit)
    if rate is None:
        said = f"{use.fuel.value}, run {use.run.value}: neither a rate nor two meter readings"
        book.trouble("heat-input-missing", use.place, said, concerns=(about.key("heat_input"),))
        return None
    heating = book.given(f"{stem}.heating_value", use.heating_value, heat_unit)
    return book.apply(eq, f"{stem}.heat_input", {"rate": rate, "heating_value": heating})


def _rate(book: Book, about: RunBook, use: FuelUse, stem: str, unit: str) -> Entry | None:
    if use.rate is not None:
        return book.given(f"{stem}.rate", use.rate, unit)
    if use.meter_end is None or use.meter_start is None or unit not in {"ft3/h", "m3/h"}:
        return None
    volume = book.unit("ft3", "m3")
    factor = (
        book.given(f"{stem}.meter_factor", use.meter_factor, "1")
        if use.meter_factor is not None
        else book.state(f"{stem}.meter_factor", 1.0, "1", "fuel meter factor not entered: 1 is taken")
    )
    minutes = book.given_duration(about.run)
    key = about.key("duration.hours")
    hours = book.ledger.get(key) or convert_entry(book.ledger, key, minutes, "h")
    inputs = {
        "end": book.given(f"{stem}.meter_end", use.meter_end, volume),
        "start": book.given(f"{stem}.meter_start", use.meter_start, volume),
        "factor": factor,
        "duration": hours,
    }
    return book.apply(metered_volume_rate, f"{stem}.rate", inputs)


def heat_input(book: Book, about: RunBook, parts: dict[str, Entry]) -> Entry | None:
    """Heat input of a run [MMBtu/h or GJ/h]: as entered, else the sum of the fuels metered."""
    total = (
        book.apply(heat_total, about.key("heat_input.metered"), {"parts": list(parts.values())})
        if parts
        else None
    )
    if about.run.heat_input is not None:
        return book.given(about.key("heat_input"), about.run.heat_input, book.unit("MMBtu/h", "GJ/h"))
    return None if total is None else book.apply(carried, about.key("heat_input"), {"value": total})


def shares(book: Book, about: RunBook, parts: dict[str, Entry]) -> dict[str, Entry]:
    """Share of heat input of each fuel in a run: from Fuel use, else as entered, else one fuel alone."""
    rows = book.record.fuels
    if parts and len(parts) > 1:
        whole = book.ledger[about.key("heat_input.metered")]
        return {
            name: book.apply(heat_share, about.key(f"share.{slug(name)}"), {"part": part, "whole": whole})
            for name, part in parts.items()
        }
    if len(parts) == 1 or len(rows) == 1:
        name = next(iter(parts), rows[0].fuel.value if rows else "")
        return {name: book.state(about.key(f"share.{slug(name)}"), 1.0, "1", "one fuel")}
    entered = {row.fuel.value: row.share_of_heat_input for row in rows}
    if any(value is None for value in entered.values()):
        return {}
    made: dict[str, Entry] = {}
    for name, value in entered.items():
        assert value is not None
        percent = book.given(f"fuel.{slug(name)}.share_entered", value, "%")
        key = about.key(f"share.{slug(name)}")
        made[name] = book.ledger.get(key) or convert_entry(book.ledger, key, percent, "1")
    return made


def run_factors(book: Book, about: RunBook, share: dict[str, Entry], table: str = DEFAULT_TABLE) -> Factors:
    """F factors of a run, prorated by heat input where several fuels burn (Eqs. 19-16 to 19-18)."""
    rows = {row.fuel.value: row for row in book.record.fuels}
    used = [name for name in share if name in rows]
    if not used:
        return NO_FACTORS
    each = [factors_of(book, rows[name], table) for name in used]
    if len(each) == 1:
        return each[0]
    end = "" if table == DEFAULT_TABLE else f".table_{slug(table)}"
    weights = [share[name] for name in used]
    made: list[Entry | None] = []
    for name, eq in (("fd", eq_19_16), ("fw", eq_19_17), ("fc", eq_19_18)):
        parts = [factors.named(name) for factors in each]
        made.append(
            book.apply(eq, about.key(f"{name}{end}"), {"shares": weights, "factors": _all(parts)})
            if all(part is not None for part in parts)
            else None
        )
    return Factors(*made)


def _all(parts: Sequence[Entry | None]) -> list[Entry]:
    return [part for part in parts if part is not None]
