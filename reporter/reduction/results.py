"""Results of one run by plan: reference diluent, mass concentration, emission rate, mass rate."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, replace
from typing import Any

from reporter.basis import Moisture
from reporter.conversions import convert_entry
from reporter.equation import System
from reporter.errors import BasisError, EquationError
from reporter.ledger import Entry
from reporter.methods.averages import percent_difference
from reporter.methods.mass_concentration import mass_concentration
from reporter.methods.mass_rate import mass_factor, mass_rate_by_flow, mass_rate_by_heat_input, ppm_to_mass
from reporter.methods.method_19 import Diluent, Form, MoistureOf, select
from reporter.methods.tables import DEFAULT_TABLE, conversion
from reporter.record import MoistureBasis
from reporter.reduction import plans as kinds
from reporter.reduction.ambient import ambient_air
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book
from reporter.reduction.fuels import Factors, factors_lacking, run_factors
from reporter.reduction.output_rate import mass_per_output
from reporter.reduction.plans import Plan
from reporter.reduction.referenced import at_reference

#: Oxygen of dry air [%] in Method 19, always.
_AIR = 20.9
_FLOW_WORDS = (
    "Mass rates from flow rest on the stack flow as entered: no velocity traverse and no cyclonic-flow check is "
    "computed here. They use the factors of Method 19, Table 19-1, at its standard conditions; mass concentrations "
    "use molar masses and the ideal-gas law at the limit's own conditions, which differs in the fourth digit."
)
_ROUTES = {"heat input": "by_heat_input", "flow": "by_flow"}


@dataclass(frozen=True, slots=True)
class Missing:
    """Why a result was not made: problem code, words, and the run it belongs to by key segment."""

    code: str
    words: str
    run: str = ""


@dataclass(frozen=True, slots=True)
class Means:
    """What the rates of a run are made from."""

    shares: dict[str, Entry]
    heat_input: Entry | None
    flow: Entry | None


def result(book: Book, about: RunBook, means: Means, plan: Plan) -> Entry | Missing:
    """The entry of a plan in a run, key ``run.<run>.<gas>.<ending>``, or why there is none."""
    made = _made(book, about, means, plan)
    return replace(made, run=about.run.key) if isinstance(made, Missing) else made


def _made(book: Book, about: RunBook, means: Means, plan: Plan) -> Entry | Missing:
    if plan.problem is not None:
        return Missing(*plan.problem)
    key = about.key(f"{plan.lane.segment}.{plan.ending}")
    found = book.ledger.get(key)
    if found is not None:
        return found
    run = about.run.run.value
    if plan.lane.segment not in about.measured:
        return Missing("run-invalid", f"run {run}: {plan.lane.name} has no corrected mean")
    try:
        return _MAKERS[plan.quantity](book, about, means, plan, key)
    except BasisError as error:
        return Missing("basis-missing", f"run {run}: {error.message}")
    except EquationError as error:
        return Missing("factor-missing", f"run {run}: {error.message}")


def _on_moisture(about: RunBook, plan: Plan) -> Entry | Missing:
    source = about.wet if plan.moisture is MoistureBasis.WET else about.dry
    entry = source.get(plan.lane.segment)
    if entry is None:
        words = f"run {about.run.run.value}: {plan.lane.gas.label} {plan.moisture.value} needs moisture"
        return Missing("moisture-missing", words)
    return entry


def _concentration(book: Book, about: RunBook, means: Means, plan: Plan, key: str) -> Entry | Missing:
    value = _on_moisture(about, plan)
    if isinstance(value, Missing) or not plan.referenced:
        return value
    return _referenced(book, about, means, plan, value, key)


def _referenced(book: Book, about: RunBook, means: Means, plan: Plan, value: Entry, key: str) -> Entry | Missing:
    factors = run_factors(book, about, means.shares, plan.table) if plan.diluent == "CO2" else None
    made = at_reference(book, about, plan, value, key, factors)
    return made if isinstance(made, Entry) else Missing(*made)


def _mass_concentration(book: Book, about: RunBook, means: Means, plan: Plan, key: str) -> Entry | Missing:
    value = _on_moisture(about, plan)
    if isinstance(value, Missing):
        return value
    value = _in_ppm(book, value)
    gas, standard = plan.lane.gas, plan.standard
    name = f"gas.{gas.key}.molar_mass"
    assert standard.temperature_k is not None
    assert standard.pressure_kpa is not None
    label = f"limit.{plan.limit.key}" if plan.limit is not None else "standard"
    inputs = {
        "c": value,
        "molar_mass": book.table(name, gas.mass, "g/mol", gas.mass_citation, row=gas.expressed_as or gas.label),
        "temperature": _condition(book, plan, f"{label}.standard_temperature", standard.temperature_k, "K"),
        "pressure": _condition(book, plan, f"{label}.standard_pressure", standard.pressure_kpa, "kPa"),
    }
    basis = value.basis.but(standard=standard, expressed_as=gas.expressed_as)
    if not plan.referenced:
        return book.ledger.apply(mass_concentration, key, inputs, basis=basis)
    plain = about.key(f"{plan.lane.segment}.mass_concentration")
    made = book.ledger.get(plain)
    if made is not None and made.basis != basis and plan.limit is not None:
        plain = f"{plain}.for_limit_{plan.limit.key}"
        made = book.ledger.get(plain)
    if made is None:
        made = book.ledger.apply(mass_concentration, plain, inputs, basis=basis)
    return _referenced(book, about, means, plan, made, key)


def _in_ppm(book: Book, value: Entry) -> Entry:
    if value.unit == "ppm":
        return value
    key = f"{value.key}.in_ppm"
    return book.ledger.get(key) or convert_entry(book.ledger, key, value, "ppm")


def _condition(book: Book, plan: Plan, key: str, value: float, unit: str) -> Entry:
    """A standard temperature or pressure: from the limit's record where entered, else as stated."""
    limit = plan.limit
    entered = None
    if limit is not None:
        entered = limit.standard_temperature if unit == "K" else limit.standard_pressure
    if entered is not None:
        return book.given(key, entered, unit)
    return book.state(key, value, unit, f"standard conditions: {plan.standard.text()}")


def gas_per_volume(book: Book, about: RunBook, plan: Plan, dry: bool = False) -> Entry:
    """Mass per volume of a pollutant by Table 19-1, as measured, or dry."""
    segment = plan.lane.segment
    value = about.measured[segment]
    name = f"{segment}.mass_per_volume"
    if dry and value.basis.moisture is not Moisture.DRY:
        value, name = about.dry[segment], f"{name}.dry"
    return book.apply(ppm_to_mass, about.key(name), {"c": _in_ppm(book, value), "k": _mass_factor(book, plan)})


def _mass_factor(book: Book, plan: Plan) -> Entry:
    gas = plan.lane.gas
    key = f"gas.{gas.key}.conversion"
    found = book.ledger.get(key)
    if found is not None:
        return found
    row = conversion(gas.key)
    if row.molar_mass is None:
        unit = book.unit("lb/ft3/ppm", "ng/m3/ppm")
        book.table(key, row.value(book.system), unit, row.citation, row=gas.label)
        return book.ledger.set_basis(key, row.basis(book.system))
    unit = "lb/lbmol" if book.system is System.US else "g/mol"
    mass = book.table(f"gas.{gas.key}.method_molar_mass", row.molar_mass, unit, row.citation, row=gas.label)
    return book.ledger.apply(mass_factor, key, {"molar_mass": mass}, basis=row.basis(book.system))


def _emission_rate(book: Book, about: RunBook, means: Means, plan: Plan, key: str) -> Entry | Missing:
    run = about.run.run.value
    diluent = Diluent(plan.diluent)
    measured = about.measured.get(diluent.value.lower())
    if measured is None:
        return Missing("diluent-missing", f"run {run}: no corrected {diluent.value}")
    factors = run_factors(book, about, means.shares, plan.table)
    c = gas_per_volume(book, about, plan)
    form, extra = _form(book, about, c, diluent, measured, factors)
    if form is None:
        words = f"{plan.lane.gas.label} and {diluent.value} are on different bases, or wet without an F factor for it"
        return Missing("moisture-missing", f"run {run}: {words}: the moisture of the stack gas is needed")
    available: dict[str, Entry | None] = {
        "cd": c, "cw": c, "fd": factors.fd, "fw": factors.fw, "fc": factors.fc,
        "o2": measured, "co2": measured, **extra,
    }  # fmt: skip
    inputs = {name: available.get(name) for name in form.inputs}
    lacking = [name for name, entry in inputs.items() if entry is None]
    if lacking:
        code, words = factors_lacking(book, means.shares, lacking)
        return Missing(code, f"run {run}: {words}")
    given = {name: entry for name, entry in inputs.items() if entry is not None}
    nothing_left = _nothing_left(run, diluent, given)
    if nothing_left is not None:
        return nothing_left
    if plan.lane.gas.by_analogy:
        book.say(f"{plan.lane.gas.label} by Method 19 is by analogy: the method names PM, SO2 and NOx only.")
    if plan.table != DEFAULT_TABLE and plan.limit is not None:
        book.say(f"F factors of table {plan.table} are used for limit {plan.limit.limit_id.value}.")
    return book.ledger.apply(form.equation, key, given)


def _nothing_left(run: str, diluent: Diluent, given: Mapping[str, Entry]) -> Missing | None:
    """Why a diluent leaves nothing to divide by: oxygen of air or more, carbon dioxide of zero or less."""
    if diluent is Diluent.CO2:
        dioxide = given["co2"].value
        words = f"run {run}: carbon dioxide {dioxide:.4g} % is not above zero"
        return Missing("diluent-missing", words) if dioxide <= 0.0 else None
    oxygen, air = given["o2"].value, _AIR
    if "bwa" in given:
        air *= 1.0 - given["bwa"].value
    elif "bws" in given and given["o2"].basis.moisture is Moisture.WET:
        oxygen /= 1.0 - given["bws"].value
    return Missing("oxygen-at-or-above-air", f"run {run}: oxygen {oxygen:.4g} %") if oxygen >= air else None


def _form(
    book: Book, about: RunBook, c: Entry, diluent: Diluent, measured: Entry, factors: Factors
) -> tuple[Form | None, dict[str, Entry | None]]:
    """The form of Method 19 for the bases at hand (None without the moisture it needs), and the moisture entries."""
    ambient: Entry | None = None
    moisture = MoistureOf.STACK if about.moisture is not None else MoistureOf.NONE
    is_wet_pair = c.basis.moisture is Moisture.WET and measured.basis.moisture is Moisture.WET
    if moisture is MoistureOf.NONE and is_wet_pair and diluent is Diluent.O2 and factors.fw is not None:
        ambient, moisture = _ambient(book, about), MoistureOf.AMBIENT
    try:
        form = select(c.basis, diluent, measured.basis, moisture)
    except BasisError:
        if moisture is not MoistureOf.NONE:
            raise
        return None, {}
    return form, {"bws": about.moisture, "bwa": ambient}


def _ambient(book: Book, about: RunBook) -> Entry:
    known = ambient_air(book, about.run)
    if known is not None:
        return known
    words = "ambient moisture not entered: 0.027, which Method 19 (12.2.2.1) allows anywhere at any time"
    book.say(f"Run {about.run.run.value}: {words}.")
    return book.state(about.key("moisture.ambient"), 0.027, "1", words)


def _mass_rate(book: Book, about: RunBook, means: Means, plan: Plan, key: str) -> Entry | Missing:
    """Mass rate by the limit's route; the other route, where it can be made, is a cross-check."""
    order = ["heat input", "flow"]
    if plan.route:
        order.sort(key=lambda name: name != plan.route)
    tried = {name: _route(book, about, means, plan, name) for name in order}
    if isinstance(tried[order[0]], Missing) and not plan.route and not isinstance(tried[order[1]], Missing):
        order.reverse()
    first = tried[order[0]]
    if isinstance(first, Missing):
        return first
    primary = book.ledger.apply(first[0], key, first[1], note=f"from {order[0]}")
    second = tried[order[1]]
    if not isinstance(second, Missing):
        _cross_check(book, about, plan, key, primary, second, order[1])
    return primary


def _cross_check(book: Book, about: RunBook, plan: Plan, key: str, primary: Entry, second: Any, name: str) -> None:
    cross = book.ledger.apply(second[0], f"{key}.{_ROUTES[name]}", second[1], note=f"from {name}")
    inputs = {"value": cross, "reference": primary}
    difference = book.attempt(percent_difference, f"{key}.route_difference", inputs)
    if difference is not None and abs(difference.value) > 10.0:
        said = (
            f"run {about.run.run.value}, {plan.lane.gas.label}: mass rate from {name} differs by "
            f"{difference.value:+.1f} % from the limit's route"
        )
        book.trouble("routes-disagree", about.run.place, said)


def _route(book: Book, about: RunBook, means: Means, plan: Plan, name: str) -> Any:
    run = about.run.run.value
    if name == "flow":
        if means.flow is None:
            return Missing("flow-missing", f"run {run}: no dry standard flow")
        if plan.lane.segment not in about.dry:
            return Missing("moisture-missing", f"run {run}: a dry concentration needs moisture")
        c = gas_per_volume(book, about, plan, dry=True)
        book.say(_FLOW_WORDS)
        return mass_rate_by_flow, {"c": c, "flow": means.flow}
    if means.heat_input is None:
        return Missing("heat-input-missing", f"run {run}: no heat input")
    rate = _rate_for_route(book, about, means, plan)
    return rate if isinstance(rate, Missing) else (mass_rate_by_heat_input, {"e": rate, "heat_input": means.heat_input})


def _rate_for_route(book: Book, about: RunBook, means: Means, plan: Plan) -> Entry | Missing:
    """The emission rate a mass rate rests on: one already made with the same table and diluent, or new."""
    wanted = replace(plan, quantity=kinds.EMISSION_RATE, ending=plan.rate_ending, route="")
    return result(book, about, means, wanted)


def _output_rate(book: Book, about: RunBook, means: Means, plan: Plan, key: str) -> Entry | Missing:
    if about.run.output is None:
        return Missing("basis-missing", f"run {about.run.run.value}: a limit per output needs the run's output")
    if about.run.output.value <= 0.0:
        return Missing("basis-missing", f"run {about.run.run.value}: the output is not above zero")
    base = f"mass_rate.for_{plan.ending.replace('.', '_')}"
    rate = result(book, about, means, replace(plan, quantity=kinds.MASS_RATE, ending=base))
    if isinstance(rate, Missing):
        return rate
    output = book.given(about.key("output"), about.run.output, "MW")
    return book.ledger.apply(mass_per_output, key, {"rate": rate, "output": output})


_MAKERS: Mapping[str, Callable[[Book, RunBook, Means, Plan, str], Entry | Missing]] = {
    kinds.CONCENTRATION: _concentration,
    kinds.MASS_CONCENTRATION: _mass_concentration,
    kinds.EMISSION_RATE: _emission_rate,
    kinds.MASS_RATE: _mass_rate,
    kinds.OUTPUT_RATE: _output_rate,
}
