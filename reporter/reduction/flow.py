"""Stack flow as entered, brought to dry standard conditions of Method 19."""

from __future__ import annotations

from reporter.basis import ACTUAL, EPA_STANDARD, EPA_STANDARD_SI, Basis, Moisture, Standard
from reporter.equation import System
from reporter.ledger import Entry
from reporter.methods.method_2 import dry_flow, flow_to_standard, restated_flow
from reporter.record import Real, text_of
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book
from reporter.reduction.equations import carried
from reporter.reduction.moisture import stack_pressure, stack_temperature
from reporter.units import convert


def method_standard(book: Book) -> Standard:
    """Method 19's standard conditions as the unit system words them."""
    return EPA_STANDARD if book.system is System.US else EPA_STANDARD_SI


def entered_standard(temperature: Real | None, pressure: Real | None) -> Standard | None:
    """Standard conditions from an entered temperature and pressure; None unless both are there."""
    if temperature is None or pressure is None:
        return None
    t_unit = temperature.unit.unit if temperature.unit is not None else "K"
    p_unit = pressure.unit.unit if pressure.unit is not None else "kPa"
    words = f"{temperature.value:g} {t_unit}, {pressure.value:g} {p_unit}"
    return Standard(convert(temperature.value, t_unit, "K"), convert(pressure.value, p_unit, "kPa"), words)


def dry_standard_flow(book: Book, about: RunBook) -> Entry | None:
    """Flow of a run on a dry basis at Method 19's standard conditions [ft3/h or m3/h]; None where not known."""
    run = about.run
    if run.stack_flow is None:
        return None
    unit = book.unit("ft3/h", "m3/h")
    hint = run.stack_flow.unit
    words = text_of(run.flow_basis)
    standard = entered_standard(run.flow_standard_temperature, run.flow_standard_pressure)
    if words == "actual":
        basis = Basis(moisture=Moisture.WET, standard=ACTUAL)
    else:
        moisture = {"dry standard": Moisture.DRY, "wet standard": Moisture.WET}.get(words)
        if moisture is None and hint is not None:
            moisture = hint.moisture
        if moisture is None:
            said = (
                f"run {run.run.value}: the flow's basis (dry standard, wet standard, actual) is not entered"
            )
            book.trouble("basis-missing", run.stack_flow.place, said, concerns=(about.key("flow"),))
            return None
        if standard is None:
            standard = method_standard(book)
            said = f"run {run.run.value}: standard flow without temperature and pressure; {standard.text()} taken"
            book.trouble("standard-conditions-assumed", run.stack_flow.place, said)
        basis = Basis(moisture=moisture, standard=standard)
    entered = book.given(about.key("flow.entered"), run.stack_flow, unit, basis=basis)
    return _to_dry_standard(book, about, entered)


def _to_dry_standard(book: Book, about: RunBook, entered: Entry) -> Entry | None:
    flow = entered
    target = method_standard(book)
    if flow.basis.standard == ACTUAL:
        temperature, pressure = stack_temperature(book, about.run), stack_pressure(book, about.run)
        if temperature is None or pressure is None:
            said = f"run {about.run.run.value}: an actual flow needs stack temperature and pressures"
            book.trouble("flow-missing", about.run.place, said, concerns=(about.key("flow.dry_standard"),))
            return None
        inputs = {"flow": flow, "temperature": temperature, "pressure": pressure}
        flow = book.apply(flow_to_standard, about.key("flow.wet_standard"), inputs)
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
    run = about.run
    assert run.flow_standard_temperature is not None
    assert run.flow_standard_pressure is not None
    temperature = book.given(
        about.key("flow.standard_temperature"), run.flow_standard_temperature, book.unit("°F", "°C")
    )
    pressure = book.given(
        about.key("flow.standard_pressure"), run.flow_standard_pressure, book.unit("inHg", "kPa")
    )
    inputs = {"flow": flow, "temperature": temperature, "pressure": pressure}
    return book.apply(restated_flow, about.key("flow.restated"), inputs)
