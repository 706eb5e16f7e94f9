"""A dry run before the crew leaves: a complete synthetic test of known truth, in the form of the field workbook.

order       what is asked for, and the faults there are
timetable   the day: calibrations, checks, runs
stack       load, fuel, air, and the flue gas of the combustion balance
analyzers   cylinders, analyzers, and what the logger stores
sheets, identity, book   the field workbook
budget, truth            what the readings should give, and how near
"""

from __future__ import annotations

import json
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from reporter.errors import OutputError, RecordError
from reporter.output.files import write_all
from reporter.rehearse import identity, sheets
from reporter.rehearse.analyzers import Logger, analyzers, cylinders, high_gases, upscale_levels
from reporter.rehearse.book import written
from reporter.rehearse.order import Fault, Order, Profile
from reporter.rehearse.stack import Stack
from reporter.rehearse.timetable import timetable
from reporter.rehearse.truth import truth

__all__ = ["Fault", "Order", "Profile", "Rehearsal", "rehearse", "write_rehearsal"]


@dataclass(frozen=True, slots=True)
class Rehearsal:
    """A rehearsal made: the field workbook as bytes, and its truth as data."""

    workbook: bytes
    truth: dict[str, Any]


def rehearse(order: Order) -> Rehearsal:
    """Make the synthetic test of an order.

    Raises
    ------
    RecordError
        The day does not hold the runs, or the fault has no form with this fuel.
    """
    plan = timetable(order, {gas.label: "mid" for gas in order.measured})
    planned = Stack(order, plan).expected().dry
    high = high_gases(order, planned)
    upscale = upscale_levels(high, planned)
    stack = Stack(order, timetable(order, upscale))
    held = cylinders(order, high)
    made = analyzers(order, held)
    logger = Logger(order, stack, held, made)
    tables = {
        "Test": identity.test(order),
        "Fuel": identity.fuel(order),
        "Fuel gas": identity.fuel_gas(order),
        "Fuel use": sheets.fuel_use(order, stack),
        "Channels": sheets.channels(made),
        "Cylinders": sheets.cylinders(order, held),
        "Calibrations": sheets.calibrations(logger),
        "Readings": sheets.readings(logger),
        "Runs": sheets.runs(order, stack),
        "Moisture": sheets.moisture(order, stack),
        "Process": sheets.process(order, stack),
        "Limits": identity.limits(order, stack),
        "Events": identity.events(stack),
    }
    return Rehearsal(written(tables), truth(order, stack, held=held, made=made, upscale=upscale))


def write_rehearsal(order: Order, path: str | Path, truth_path: str | Path | None = None) -> Rehearsal:
    """Make a rehearsal and write its workbook, and its truth as JSON where a path is given.

    Raises
    ------
    RecordError
        As `rehearse`; or the workbook's name does not end in .xlsx.
    OutputError
        A file cannot be written, or one of its name is there.
    """
    target = Path(path)
    if target.suffix.lower() != ".xlsx":
        raise RecordError(f"the name {target.name!r} does not end in .xlsx")
    wanted = [target, *([Path(truth_path)] if truth_path is not None else [])]
    if len(set(wanted)) < len(wanted):
        raise RecordError("the workbook and its truth need names of their own")
    for one in wanted:
        if one.exists() or one.is_symlink():
            raise OutputError("a file of this name is there; choose another name", one.name)
    made = rehearse(order)
    files = {target: made.workbook}
    if truth_path is not None:
        files[Path(truth_path)] = (json.dumps(made.truth, indent=2, ensure_ascii=False) + "\n").encode()
    write_all(files)
    return made
