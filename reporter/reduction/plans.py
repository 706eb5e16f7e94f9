"""What is to be computed for each pollutant: one plan per limit, and the plain results where no limit asks.

A plan is fixed by the limit's record before any result is seen.  Plans with the same parameters share one
ledger key; the first of a quantity has the plain key, others have ``.limit_<id>`` appended.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from reporter.basis import NO_VOLUME, Standard
from reporter.gases import find_gas
from reporter.methods.tables import DEFAULT_TABLE, factor_tables
from reporter.record import Limit, MoistureBasis, text_of
from reporter.reduction.book import Book, Lane
from reporter.reduction.standards import conditions
from reporter.units import dimension

CONCENTRATION, MASS_CONCENTRATION = "concentration", "mass_concentration"
EMISSION_RATE, MASS_RATE, OUTPUT_RATE = "emission_rate", "mass_rate", "output_rate"
_PER_OUTPUT = ("lb/MWh", "g/kWh", "mg/kWh")
_QUANTITIES = {
    "mass_concentration": MASS_CONCENTRATION,
    "mass_by_energy": EMISSION_RATE,
    "mass_flow": MASS_RATE,
}


@dataclass(frozen=True, slots=True)
class Plan:
    """How one result is made: quantity, key ending, and the parameters the limit fixes.

    `ending` is the part of the key after the gas, e.g. ``at_reference.limit_2``; `problem` says why nothing
    can be computed, as (code, words).
    """

    lane: Lane
    quantity: str
    ending: str
    limit: Limit | None = None
    moisture: MoistureBasis = MoistureBasis.DRY
    diluent: str = "O2"
    referenced: bool = False
    standard: Standard = NO_VOLUME
    table: str = DEFAULT_TABLE
    route: str = ""
    rate_ending: str = ""
    problem: tuple[str, str] | None = None

    @property
    def parameters(self) -> tuple[object, ...]:
        """What decides the result; plans with the same parameters are one result."""
        limit = self.limit
        reference = k = None
        if self.referenced and limit is not None:
            reference = (
                limit.reference_oxygen.value if limit.reference_oxygen is not None else None,
                limit.reference_carbon_dioxide.value if limit.reference_carbon_dioxide is not None else None,
            )
            k = limit.oxygen_constant.value if limit.oxygen_constant is not None else None
        conditions = (self.standard.temperature_k, self.standard.pressure_kpa)
        return (
            self.lane.segment,
            self.quantity,
            self.moisture,
            self.diluent,
            reference,
            k,
            conditions,
            self.table,
            self.route,
        )


def plans(book: Book, lanes: Sequence[Lane]) -> list[Plan]:
    """The plans of all limits in order, then the plain results that no limit asks for."""
    made: list[Plan] = []
    seen: dict[tuple[object, ...], str] = {}
    taken: set[str] = set()
    for limit in book.record.limits:
        lane = _lane_of(book, lanes, limit)
        if lane is None:
            said = f"limit {limit.limit_id.value}: no channel measures {limit.pollutant.value}"
            book.trouble("pollutant-missing", limit.place, said, concerns=(f"comparison.{limit.key}",))
            continue
        plan = _of_limit(book, lane, limit, _usual_diluent(lanes))
        ending = seen.get(plan.parameters)
        if ending is None:
            ending = _ending(plan)
            if f"{lane.segment}.{ending}" in taken:
                ending = f"{ending}.limit_{limit.key}"
            taken.add(f"{lane.segment}.{ending}")
            seen[plan.parameters] = ending
        made.append(_with(plan, ending))
    everything = made + _plain(book, lanes, taken)
    return [_with_rate(plan, everything) for plan in everything]


def _lane_of(book: Book, lanes: Sequence[Lane], limit: Limit) -> Lane | None:
    """The channel of a limit's pollutant: the first, and said so, where several measure it."""
    pollutant = find_gas(limit.pollutant.value)
    found = [lane for lane in lanes if pollutant is not None and lane.gas.key == pollutant.key]
    if len(found) > 1:
        names = ", ".join(lane.name for lane in found)
        book.say(f"Limit {limit.limit_id.value}: {names} measure {found[0].gas.label}; {found[0].name} is compared.")
    return found[0] if found else None


def _usual_diluent(lanes: Sequence[Lane]) -> str:
    """The diluent of emission rates where a limit names none: O2, or CO2 where that alone is measured."""
    measured = {lane.gas.key for lane in lanes}
    return "CO2" if "co2" in measured and "o2" not in measured else "O2"


def _with_rate(plan: Plan, all_plans: Sequence[Plan]) -> Plan:
    """A mass rate with the emission rate it rests on: one with its table and diluent, or one of its own."""
    if plan.quantity not in {MASS_RATE, OUTPUT_RATE}:
        return plan
    same = (plan.lane.segment, plan.table, plan.diluent)
    for other in all_plans:
        if other.quantity == EMISSION_RATE and (other.lane.segment, other.table, other.diluent) == same:
            return replace(plan, rate_ending=other.ending)
    return replace(plan, rate_ending=f"emission_rate.for_{plan.ending.replace('.', '_')}")


def _with(plan: Plan, ending: str) -> Plan:
    return replace(plan, ending=ending)


def _ending(plan: Plan) -> str:
    if plan.quantity == CONCENTRATION:
        return "at_reference" if plan.referenced else plan.moisture.value
    if plan.quantity == MASS_CONCENTRATION:
        return "mass_concentration.at_reference" if plan.referenced else MASS_CONCENTRATION
    return plan.quantity


def _of_limit(book: Book, lane: Lane, limit: Limit, usual: str) -> Plan:
    unit = limit.unit.value.unit
    kind = dimension(unit)
    quantity = OUTPUT_RATE if unit in _PER_OUTPUT else _QUANTITIES.get(kind, CONCENTRATION)
    referenced = limit.reference_oxygen is not None or limit.reference_carbon_dioxide is not None
    hinted = limit.unit.value.moisture
    moisture = limit.moisture_basis.value if limit.moisture_basis is not None else None
    if moisture is None and hinted is not None:
        moisture = MoistureBasis(hinted.value)
    problem: tuple[str, str] | None = None
    concentration = quantity in {CONCENTRATION, MASS_CONCENTRATION}
    if kind not in {"fraction", *_QUANTITIES}:
        problem = ("basis-missing", f"limit {limit.limit_id.value}: no result is computed in {unit}")
    elif concentration and moisture is None and not referenced:
        problem = ("basis-missing", f"limit {limit.limit_id.value}: dry or wet is not entered")
    elif concentration and referenced and moisture is MoistureBasis.WET:
        problem = (
            "basis-missing",
            f"limit {limit.limit_id.value}: a reference diluent goes with a dry basis",
        )
    referenced = referenced and concentration
    by_rate = not concentration
    if concentration and referenced and moisture is None:
        book.say(f"Limit {limit.limit_id.value}: dry or wet is not entered; the reference correction makes it dry.")
    diluent = text_of(limit.diluent).upper()
    if not diluent:
        diluent = "CO2" if referenced and limit.reference_oxygen is None else usual if by_rate else "O2"
    uses_factors = by_rate or (referenced and diluent == "CO2")
    return Plan(
        lane=lane,
        quantity=quantity,
        ending="",
        limit=limit,
        moisture=(moisture or MoistureBasis.DRY) if concentration else MoistureBasis.DRY,
        diluent=diluent if by_rate or referenced else "O2",
        referenced=referenced,
        standard=_standard(book, limit) if quantity == MASS_CONCENTRATION else NO_VOLUME,
        table=_table(text_of(limit.factor_table)) if uses_factors else DEFAULT_TABLE,
        route=text_of(limit.mass_rate_route) if quantity in {MASS_RATE, OUTPUT_RATE} else "",
        problem=problem or (_contradiction(limit, diluent) if referenced else None),
    )


def _contradiction(limit: Limit, diluent: str) -> tuple[str, str] | None:
    """What of a reference contradicts itself: its diluent has no reference, or it lies at or above air."""
    name = f"limit {limit.limit_id.value}"
    if diluent == "O2" and limit.reference_oxygen is None:
        return "basis-missing", f"{name}: the diluent is O2, but the reference is a carbon dioxide"
    if limit.reference_carbon_dioxide is not None and limit.reference_oxygen is not None:
        return "basis-missing", f"{name}: both a reference oxygen and a reference carbon dioxide are entered"
    k = limit.oxygen_constant.value if limit.oxygen_constant is not None else 20.9
    if limit.reference_oxygen is not None and limit.reference_oxygen.value >= k:
        return "basis-missing", f"{name}: the reference oxygen is not below the {k:g} % of dry air"
    return None


def _table(text: str) -> str:
    """The table of F factors a limit names; the text as it stands where no known table is in it."""
    if not text.strip():
        return DEFAULT_TABLE
    return next((name for name in factor_tables() if name in text), text.strip())


def _standard(book: Book, limit: Limit) -> Standard:
    """Standard conditions of a mass concentration: entered, by the unit's spelling, else the unit system's."""
    found = conditions(book, limit.standard_temperature, limit.standard_pressure, limit.unit.value)
    if found.assumed:
        said = f"limit {limit.limit_id.value}: no standard temperature and pressure; {found.assumed} taken"
        book.trouble("standard-conditions-assumed", limit.place, said)
    return found.standard


def _plain(book: Book, lanes: Sequence[Lane], taken: set[str]) -> list[Plan]:
    """Emission rate and mass rate of each pollutant that no limit asks for."""
    made: list[Plan] = []
    diluent = _usual_diluent(lanes)
    for lane in lanes:
        if lane.gas.is_diluent or lane.gas.unit != "ppm":
            continue
        for quantity in (EMISSION_RATE, MASS_RATE):
            if f"{lane.segment}.{quantity}" not in taken:
                made.append(Plan(lane=lane, quantity=quantity, ending=quantity, diluent=diluent))
    return made
