"""The combustion balance of a run for the fuel, or the mixture of fuels, that burned; what it says."""

from __future__ import annotations

from reporter.combustion.air import air_model
from reporter.combustion.findings import FindingKind, findings
from reporter.combustion.fuel import Fuel
from reporter.combustion.fuel_entries import spreads
from reporter.combustion.run import balance_run
from reporter.combustion.run_book import FlueGas
from reporter.combustion.state import State
from reporter.errors import FluebookError
from reporter.ledger import Entry, slug
from reporter.methods.criteria import reading_difference
from reporter.outcome import Finding
from reporter.record import FuelRow, text_of
from reporter.reduction.agreement import agreement_table, judge_agreement
from reporter.reduction.bases import RunBook
from reporter.reduction.blend import enter_blend
from reporter.reduction.book import Book
from reporter.reduction.composition import composition_key, enter_composition, fuel_of
from reporter.reduction.uncertainty import reading_uncertainty

_HYDROCARBONS = {"thc": "C3H8", "c3h8": "C3H8", "ch4": "CH4"}


def balance(book: Book, about: RunBook, share: dict[str, Entry]) -> State | None:
    """Solve the balance of a run and say what it finds; None where fuel or diluent is not known."""
    rows = {row.fuel.value: row for row in book.record.fuels}
    burned = [rows[name] for name in share if name in rows]
    measured = about.measured
    if not burned or not ({"o2", "co2"} & measured.keys()) or _nothing_burned(book, about):
        return None
    try:
        stem = _fuel(book, about, burned, share)
        if stem is None:
            return None
        state = balance_run(book.ledger, about.key("combustion"), stem, _gas(book, about))
    except FluebookError as error:
        book.say(f"Run {about.run.run.value}: no combustion balance; {error.message}.")
        return None
    _differences(book, about)
    fuels = {row.fuel.value: fuel for row in burned if (fuel := fuel_of(book, row)) is not None and fuel.assumed}
    judge_agreement(book, about, state, {name: share[name] for name in fuels})
    _say(book, about, state, fuels)
    return state


def _nothing_burned(book: Book, about: RunBook) -> bool:
    """Whether oxygen at or above that of air leaves no combustion gas to balance; said as a finding."""
    oxygen = about.dry.get("o2") or about.measured.get("o2")
    if oxygen is None or oxygen.value < 100.0 * air_model("physical").oxygen:
        return False
    name = about.run.run.value
    words = "Oxygen at or above that of air: no combustion gas is left to balance."
    book.findings.append(Finding(about.run.key, words, (oxygen.key,)))
    book.trouble("impossible-balance", about.run.place, f"run {name}: oxygen {oxygen.value:.4g} %")
    return True


def _fuel(book: Book, about: RunBook, burned: list[FuelRow], share: dict[str, Entry]) -> str | None:
    stems = {row.fuel.value: enter_composition(book, row) for row in burned}
    known = {name: stem for name, stem in stems.items() if stem is not None}
    if len(known) != len(stems):
        return None
    if len(known) == 1:
        return next(iter(known.values()))
    chosen = {name: share[name] for name in known}
    return enter_blend(book, about.key("combustion.fuel"), known, chosen, _heats(book, about, known))


def _heats(book: Book, about: RunBook, known: dict[str, str]) -> dict[str, Entry | None]:
    """Gross heating value by mass of each fuel: as used in the run, as analysed, else of its composition."""
    wanted = book.unit("Btu/lb", "kJ/kg")
    found: dict[str, Entry | None] = {}
    for name, stem in known.items():
        keys = (about.key(f"fuel_use.{slug(name)}.heating_value"), f"fuel.{slug(name)}.gross_heating_value")
        entered = (book.ledger.get(key) for key in (*keys, f"{stem}.gross_heating_value"))
        found[name] = next((entry for entry in entered if entry is not None and entry.unit == wanted), None)
    return found


def _gas(book: Book, about: RunBook) -> FlueGas:
    measured = about.measured
    hydrocarbon = next((name for name in _HYDROCARBONS if name in measured), "")
    calculated = text_of(about.run.moisture_source) == "fuel calculation"
    return FlueGas(
        o2=measured.get("o2"),
        co2=measured.get("co2") if "o2" not in measured else None,
        co=measured.get("co"),
        no=measured.get("nox") or measured.get("no"),
        hydrocarbon=measured.get(hydrocarbon),
        hydrocarbon_formula=_HYDROCARBONS.get(hydrocarbon, "CH4"),
        moisture=None if calculated else about.moisture,
        air_moisture=book.ledger.get(about.key("moisture.ambient")),
    )


def _differences(book: Book, about: RunBook) -> None:
    """Measured less expected, for dry carbon dioxide and for moisture."""
    pairs = (
        ("co2_difference", about.dry.get("co2"), "co2_expected"),
        ("moisture_difference", about.moisture, "moisture_expected"),
    )
    for name, measured, expected in pairs:
        other = book.ledger.get(about.key(f"combustion.{expected}"))
        if measured is not None and other is not None:
            inputs = {"reading": measured, "other": other}
            book.apply(reading_difference, about.key(f"combustion.{name}"), inputs)


def _say(book: Book, about: RunBook, state: State, assumed: dict[str, Fuel]) -> None:
    ratio = book.ledger[about.key("combustion.equivalence_ratio")]
    if state.mixture:
        tell = ": tell the operator" if "rich" in state.mixture else ""
        words = f"Readings imply {state.mixture} combustion{tell}."
        book.findings.append(Finding(about.run.key, words, (ratio.key,)))
    doubts: dict[str, float] = {}
    for segment in ("o2", "co2"):
        u = reading_uncertainty(book, about, segment)
        reading = about.measured.get(segment)
        if u is not None and reading is not None:
            doubts[reading.key] = u.value
    if about.moisture is not None:
        doubts[about.moisture.key] = agreement_table()["moisture"]["tolerance"] / 2
    wide: dict[str, float] = {}
    for name, fuel in assumed.items():
        wide |= spreads(fuel, composition_key(name))
    for found in findings(state, doubts, spreads=wide):
        if found.kind is FindingKind.IMPOSSIBLE:
            book.trouble("impossible-balance", about.run.place, f"run {about.run.run.value}: {found.text()}")
            book.findings.append(Finding(about.run.key, found.text(), found.keys))
