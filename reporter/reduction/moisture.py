"""Moisture of the stack gas: from the train, or as entered; the lower of measured and saturation."""

from __future__ import annotations

from reporter.conversions import convert_entry, converted
from reporter.equation import System
from reporter.ledger import Entry
from reporter.methods.method_2 import absolute_pressure, absolute_pressure_metric
from reporter.methods.method_4 import (
    lower_moisture,
    metered_volume,
    moisture_fraction,
    saturation_moisture,
    silica_gel_volume,
    water_volume_from_mass,
    water_volume_from_volume,
)
from reporter.methods.water_vapour import saturation_pressure
from reporter.record import MoistureTrain, Run, text_of
from reporter.reduction.book import Book
from reporter.reduction.equations import carried
from reporter.units import dimension

#: Moistures entered and measured that differ by more than this fraction are said to differ.
_APART = 0.005


def stack_temperature(book: Book, run: Run) -> Entry | None:
    """Stack temperature of a run [°F or °C], where entered."""
    if run.stack_temperature is None:
        return None
    return book.given(f"run.{run.key}.stack_temperature", run.stack_temperature, book.unit("°F", "°C"))


def stack_pressure(book: Book, run: Run) -> Entry | None:
    """Absolute pressure in the stack [inHg or kPa], from barometer and static pressure."""
    if run.barometric_pressure is None:
        return None
    barometer = book.given(f"run.{run.key}.barometric_pressure", run.barometric_pressure, book.unit("inHg", "kPa"))
    if run.static_pressure is None:
        return barometer
    static = book.given(f"run.{run.key}.static_pressure", run.static_pressure, book.unit("inH2O", "kPa"))
    inputs = {"barometric": barometer, "static": static}
    eq = absolute_pressure if book.system is System.US else absolute_pressure_metric
    return book.apply(eq, f"run.{run.key}.stack_pressure", inputs)


def say_static(book: Book, run: Run) -> None:
    """Say that a stack pressure rests on the barometer alone, where it does."""
    if run.static_pressure is None:
        book.say(f"Run {run.run.value}: no static pressure was entered; the stack is taken at barometric pressure.")


def moisture(book: Book, run: Run) -> Entry | None:
    """The moisture fraction a run is computed with, key ``run.<run>.moisture``; None where none is known (yet).

    A train wins over a value entered; `settle_calculated` follows where the fuel calculation is to give it.
    """
    measured = _measured(book, run)
    if run.moisture is not None:
        entered = book.given(f"run.{run.key}.moisture.entered", run.moisture, "%")
        if measured is None:
            measured = convert_entry(book.ledger, f"run.{run.key}.moisture.measured", entered, "1")
            _say_source(book, run)
        elif abs(measured.value - converted(entered.value, "%", "1")) > _APART:
            book.say(
                f"Run {run.run.value}: the moisture entered, {entered.value:g} %, differs from that of the train, "
                f"{100 * measured.value:.2f} %; that of the train is used."
            )
    return _settled(book, run, measured)


def is_calculated(run: Run) -> bool:
    """Whether the moisture of a run is to come from the combustion balance."""
    return run.moisture is None and text_of(run.moisture_source) == "fuel calculation"


def settle_calculated(book: Book, run: Run) -> Entry | None:
    """The moisture of a run from its combustion balance, where the record says so and the balance has it."""
    expected = book.ledger.get(f"run.{run.key}.combustion.moisture_expected")
    if expected is None or not is_calculated(run):
        return None
    book.say(f"Run {run.run.value}: the moisture is calculated from the fuel and the readings, not measured.")
    return _settled(book, run, expected)


def _measured(book: Book, run: Run) -> Entry | None:
    trains = [train for train in book.record.moisture if train.run.value == run.run.value]
    if len(trains) > 1:
        book.say(f"Run {run.run.value}: {len(trains)} condenser trains are entered; the first complete one is used.")
    for train in trains:
        if _is_complete(train):
            return _from_train(book, run, train)
    if trains:
        said = f"run {run.run.value}: the train's row is not complete"
        if run.moisture is None:
            book.trouble("moisture-missing", trains[0].place, said, concerns=(f"run.{run.key}.moisture",))
        else:
            book.say(f"R{said[1:]}; the moisture entered is used.")
    return None


def _settled(book: Book, run: Run, measured: Entry | None) -> Entry | None:
    """The lower of measured and saturation where both are known; nothing that is no share of a gas."""
    saturated = _at_saturation(book, run)
    if measured is None and text_of(run.moisture_source) != "saturation":
        return None
    candidates = [entry for entry in (measured, saturated) if entry is not None]
    if not candidates:
        return None
    if not 0.0 <= min(entry.value for entry in candidates) < 1.0:
        said = f"run {run.run.value}: a moisture of {100 * candidates[0].value:.4g} % is not possible"
        book.trouble("moisture-missing", run.place, said, concerns=(f"run.{run.key}.moisture",))
        return None
    if measured is None or saturated is None:
        return book.apply(carried, f"run.{run.key}.moisture", {"value": candidates[0]})
    if saturated.value < measured.value:
        book.say(
            f"Run {run.run.value}: the measured moisture is above saturation at stack temperature; "
            "the lower of the two is used."
        )
    inputs = {"measured": measured, "saturation": saturated}
    return book.apply(lower_moisture, f"run.{run.key}.moisture", inputs)


def _say_source(book: Book, run: Run) -> None:
    source = text_of(run.moisture_source)
    if not source:
        book.say(f"Run {run.run.value}: the source of the moisture was not entered.")
    elif source == "assumed":
        book.say(f"Run {run.run.value}: the moisture is assumed, not measured.")


def _at_saturation(book: Book, run: Run) -> Entry | None:
    temperature, pressure = stack_temperature(book, run), stack_pressure(book, run)
    if temperature is None or pressure is None:
        return None
    stem = f"run.{run.key}"
    found = book.ledger.get(f"{stem}.moisture.saturation")
    if found is not None or f"{stem}.stack_temperature.kelvin" in book.ledger:
        return found
    kelvin = convert_entry(book.ledger, f"{stem}.stack_temperature.kelvin", temperature, "K")
    if not 273.15 <= kelvin.value <= 373.15:
        return None
    say_static(book, run)
    vapour = book.apply(saturation_pressure, f"{stem}.moisture.saturation_pressure", {"temperature": kelvin})
    absolute = (
        pressure
        if pressure.unit == "kPa"
        else convert_entry(book.ledger, f"{stem}.stack_pressure.kilopascal", pressure, "kPa")
    )
    inputs = {"vapour_pressure": vapour, "pressure": absolute}
    return book.attempt(saturation_moisture, f"{stem}.moisture.saturation", inputs)


def _is_complete(train: MoistureTrain) -> bool:
    needed = (train.meter_volume_end, train.meter_temperature, train.meter_pressure, train.water_collected)
    return all(value is not None for value in needed)


def _from_train(book: Book, run: Run, train: MoistureTrain) -> Entry | None:
    """Method 4: dry gas metered, water condensed and held by silica gel, all at standard conditions."""
    stem = f"run.{run.key}.moisture"
    assert train.meter_volume_end is not None
    assert train.meter_temperature is not None
    assert train.meter_pressure is not None
    volume_unit = book.unit("ft3", "m3")
    end = book.given(f"{stem}.meter_end", train.meter_volume_end, volume_unit)
    start = (
        book.given(f"{stem}.meter_start", train.meter_volume_start, volume_unit)
        if train.meter_volume_start is not None
        else book.state(f"{stem}.meter_start", 0.0, volume_unit, "meter start not entered: the end is a volume")
    )
    factor = (
        book.given(f"{stem}.meter_factor", train.meter_factor, "1")
        if train.meter_factor is not None
        else book.state(f"{stem}.meter_factor", 1.0, "1", "meter factor not entered: 1 is taken")
    )
    inputs = {
        "end": end,
        "start": start,
        "factor": factor,
        "temperature": book.given(f"{stem}.meter_temperature", train.meter_temperature, book.unit("°F", "°C")),
        "pressure": book.given(f"{stem}.meter_pressure", train.meter_pressure, book.unit("inHg", "kPa")),
    }
    gas = book.attempt(metered_volume, f"{stem}.meter_volume_standard", inputs)
    water = _water(book, stem, train)
    if gas is None:
        return None
    silica = (
        book.apply(
            silica_gel_volume,
            f"{stem}.silica_volume",
            {"mass": book.given(f"{stem}.silica_gain", train.silica_gel_gain, "g")},
        )
        if train.silica_gel_gain is not None
        else book.state(f"{stem}.silica_volume", 0.0, volume_unit, "silica gel gain not entered: none")
    )
    volumes = {"water": water, "silica": silica, "gas": gas}
    return book.attempt(moisture_fraction, f"{stem}.measured", volumes)


def _water(book: Book, stem: str, train: MoistureTrain) -> Entry:
    collected = train.water_collected
    assert collected is not None
    by_volume = collected.unit is not None and dimension(collected.unit.unit) == "volume"
    if by_volume:
        amount = book.given(f"{stem}.water_collected", collected, "mL")
        return book.apply(water_volume_from_volume, f"{stem}.water_volume", {"volume": amount})
    amount = book.given(f"{stem}.water_collected", collected, "g")
    return book.apply(water_volume_from_mass, f"{stem}.water_volume", {"mass": amount})
