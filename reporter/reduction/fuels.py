"""Fuels of a test: F factors by the source entered, heat input of a run, shares of heat input."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from reporter.conversions import convert_entry
from reporter.errors import FluebookError
from reporter.ledger import Entry, slug
from reporter.methods.f_factors import eq_19_13, eq_19_14, eq_19_15, eq_19_16, eq_19_17, eq_19_18
from reporter.methods.method_19 import FC_BASIS, FD_BASIS, FW_BASIS
from reporter.methods.tables import DEFAULT_TABLE, FuelFactor, fuel_factors
from reporter.record import FuelRow, Real, text_of
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book
from reporter.reduction.fuel_heat import heat_share

_ELEMENTS = ("hydrogen", "carbon", "sulfur", "nitrogen", "oxygen")
#: How far shares of heat input as entered may be from 100 % [%].
_WHOLE = 0.1
#: What an emission rate is made from, in words.
_WANTED = {
    "fd": "the dry F factor (F_d) of the fuel",
    "fw": "the wet F factor (F_w) of the fuel",
    "fc": "the carbon F factor (F_c) of the fuel",
    "bws": "the moisture of the stack gas",
    "bwa": "the moisture of the ambient air",
}


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
            return _from_analysis(book, row, fuel_key(row.fuel.value))
        from reporter.reduction.composition import factors_from_composition

        return factors_from_composition(book, row, fuel_key(row.fuel.value))
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
    needed = {"carbon": row.carbon, "hydrogen": row.hydrogen, "gross heating value": row.gross_heating_value}
    lacking = [name for name, value in needed.items() if value is None]
    if lacking or row.gross_heating_value is None:
        said = f"{row.fuel.value}: the analysis has no {' and no '.join(lacking)}"
        book.trouble("factor-missing", row.place, said, concerns=(stem,))
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


def shares(book: Book, about: RunBook, parts: dict[str, Entry]) -> dict[str, Entry]:
    """Share of heat input of each fuel in a run: from Fuel use, else as entered, else one fuel alone.

    Empty where it cannot be stated; the reason is a problem of its own only where a result needs the share.
    """
    rows, run = book.record.fuels, about.run.run.value
    metered = {use.fuel.value for use in book.record.fuel_use if use.run.value == run}
    whole = book.ledger.get(about.key("heat_input.metered"))
    if len(parts) > 1 and whole is not None and whole.value > 0.0:
        return {
            name: book.apply(heat_share, about.key(f"share.{slug(name)}"), {"part": part, "whole": whole})
            for name, part in parts.items()
        }
    all_entered = all(row.share_of_heat_input is not None for row in rows)
    if len(rows) == 1 or (len(parts) == len(metered) == 1 and not all_entered):
        name = next(iter(parts), rows[0].fuel.value if rows else "")
        if len(rows) > 1:
            book.say(f"Run {run}: {name} is the only fuel in Fuel use; it is taken as the only one burned.")
        return {name: book.state(about.key(f"share.{slug(name)}"), 1.0, "1", "one fuel")}
    return _entered_shares(book, about, rows)


def _entered_shares(book: Book, about: RunBook, rows: Sequence[FuelRow]) -> dict[str, Entry]:
    """The shares entered on the sheet Fuel, where each fuel has one and they make up the whole."""
    entered = {row.fuel.value: row.share_of_heat_input for row in rows if row.share_of_heat_input is not None}
    if not rows or len(entered) < len(rows):
        return {}
    made: dict[str, Entry] = {}
    for name, value in entered.items():
        percent = book.given(f"fuel.{slug(name)}.share_entered", value, "%")
        key = about.key(f"share.{slug(name)}")
        made[name] = book.ledger.get(key) or convert_entry(book.ledger, key, percent, "1")
    total = 100.0 * sum(entry.value for entry in made.values())
    if abs(total - 100.0) > _WHOLE:
        said = f"the shares of heat input add up to {total:.4g} %"
        book.trouble("fuel-missing", rows[0].place, said, expected="shares that add up to 100 %")
        return {}
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


def factors_lacking(book: Book, share: Mapping[str, Entry], names: Sequence[str]) -> tuple[str, str]:
    """Code and words for what an emission rate wants: fuel, shares of heat input, or what the fuel's source lacks."""
    if not book.record.fuels:
        return "fuel-missing", "no fuel is entered"
    if not share:
        words = "the share of heat input of each fuel is missing: Fuel use of the run, or the shares on the sheet Fuel"
        return "fuel-missing", words
    return "factor-missing", f"{' and '.join(_WANTED[name] for name in names)} is missing"


def _all(parts: Sequence[Entry | None]) -> list[Entry]:
    return [part for part in parts if part is not None]
