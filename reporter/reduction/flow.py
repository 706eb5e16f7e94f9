"""Stack flow as entered, brought to dry standard conditions of Method 19."""

from __future__ import annotations

from reporter.basis import ACTUAL, Basis, Moisture
from reporter.ledger import Entry
from reporter.methods.method_2 import dry_flow, flow_to_standard, restated_flow
from reporter.record import Real, text_of
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book
from reporter.reduction.equations import carried
from reporter.reduction.moisture import say_static, stack_pressure, stack_temperature
from reporter.reduction.standards import conditions, method_standard
from reporter.units import convert

_MOISTURES = {"dry standard": Moisture.DRY, "wet standard": Moisture.WET, "actual": Moisture.WET}


def dry_standard_flow(book: Book, about: RunBook) -> Entry | None:
    """Flow of a run on a dry basis at Method 19's standard conditions [ft3/h or m3/h]; None where not known."""
    run = about.run
    if run.stack_flow is None:
        return None
    basis = _basis(book, about, run.stack_flow)
    if basis is None:
        return None
    entered = book.given(about.key("flow.entered"), run.stack_flow, book.unit("ft3/h", "m3/h"), basis=basis)
    return _to_dry_standard(book, about, entered)


def _basis(book: Book, about: RunBook, flow: Real) -> Basis | None:
    """What the flow is stated on: by its basis column, else by the spelling of its unit; None where neither says."""
    run, unit, words = about.run, flow.unit, text_of(about.run.flow_basis)
    is_actual = unit is not None and unit.standard == ACTUAL
    if is_actual and words not in ("", "actual"):
        said = f"run {run.run.value}: the flow's unit says actual conditions, its basis {words}"
        book.trouble("basis-missing", flow.place, said, concerns=(about.key("flow"),))
        return None
    if is_actual or words == "actual":
        return Basis(moisture=Moisture.WET, standard=ACTUAL)
    moisture = _MOISTURES.get(words) or (unit.moisture if unit is not None else None)
    if moisture is None:
        said = f"run {run.run.value}: the flow's basis (dry standard, wet standard, actual) is not entered"
        book.trouble("basis-missing", flow.place, said, concerns=(about.key("flow"),))
        return None
    found = conditions(book, run.flow_standard_temperature, run.flow_standard_pressure, unit)
    if found.assumed:
        said = f"run {run.run.value}: standard flow without temperature and pressure; {found.assumed} taken"
        book.trouble("standard-conditions-assumed", flow.place, said)
    return Basis(moisture=moisture, standard=found.standard)


def _to_dry_standard(book: Book, about: RunBook, entered: Entry) -> Entry | None:
    flow = entered
    target = method_standard(book)
    if flow.basis.standard == ACTUAL:
        temperature, pressure = stack_temperature(book, about.run), stack_pressure(book, about.run)
        if temperature is None or pressure is None:
            said = f"run {about.run.run.value}: an actual flow needs stack temperature and pressures"
            book.trouble("flow-missing", about.run.place, said, concerns=(about.key("flow.dry_standard"),))
            return None
        say_static(book, about.run)
        inputs = {"flow": flow, "temperature": temperature, "pressure": pressure}
        made = book.attempt(flow_to_standard, about.key("flow.wet_standard"), inputs)
        if made is None or made.value < 0.0:
            said = f"run {about.run.run.value}: stack temperature and pressures give no volume"
            book.trouble("flow-missing", about.run.place, said, concerns=(about.key("flow.dry_standard"),))
            return None
        flow = made
    elif not flow.basis.standard.same(target):
        flow = _restated(book, about, flow)
    if flow.basis.moisture is Moisture.DRY:
        return book.apply(carried, about.key("flow.dry_standard"), {"value": flow})
    if about.moisture is None:
        said = f"run {about.run.run.value}: a wet flow needs moisture"
        book.trouble("moisture-missing", about.run.place, said, concerns=(about.key("flow.dry_standard"),))
        return None
    return book.apply(dry_flow, about.key("flow.dry_standard"), {"flow": flow, "bws": about.moisture})


def _restated(book: Book, about: RunBook, flow: Entry) -> Entry:
    """A standard flow at the conditions of Method 19."""
    run = about.run
    inputs = {
        "flow": flow,
        "temperature": _condition(
            book, about.key("flow.standard_temperature"), run.flow_standard_temperature, flow, book.unit("°F", "°C")
        ),
        "pressure": _condition(
            book, about.key("flow.standard_pressure"), run.flow_standard_pressure, flow, book.unit("inHg", "kPa")
        ),
    }
    return book.apply(restated_flow, about.key("flow.restated"), inputs)


def _condition(book: Book, key: str, entered: Real | None, flow: Entry, unit: str) -> Entry:
    """A temperature or pressure the flow is stated at: as entered, else what its unit's spelling says."""
    if entered is not None:
        return book.given(key, entered, unit)
    standard = flow.basis.standard
    is_pressure = unit in ("inHg", "kPa")
    value, of = (standard.pressure_kpa, "kPa") if is_pressure else (standard.temperature_k, "K")
    assert value is not None
    return book.state(key, convert(value, of, unit), unit, f"the flow is stated at {standard.text()}")
