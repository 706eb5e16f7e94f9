"""A dry run before the crew leaves: a complete synthetic test of known truth, in the form of the field workbook.

order       what is asked for, and the faults there are
timetable   the day: calibrations, checks, runs
stack       load, fuel, air, and the flue gas of the combustion balance
analyzers   cylinders, analyzers, and what the logger stores
sheets, identity, book   the field workbook
shape                    the same in a firm's own shape: field workbook, logger file, mapping
budget, truth            what the readings should give, and how near
"""

from __future__ import annotations

import json
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from reporter.errors import OutputError, RecordError
from reporter.intake.foreign.mapping import ENDING, Mapping, load
from reporter.output.files import write_all
from reporter.rehearse import identity, sheets
from reporter.rehearse.analyzers import Logger, analyzers, cylinders, high_gases, upscale_levels
from reporter.rehearse.book import written
from reporter.rehearse.order import Fault, Order, Profile, settings
from reporter.rehearse.shape import ending, logger_file, ordered_in_shape
from reporter.rehearse.stack import Stack
from reporter.rehearse.timetable import timetable
from reporter.rehearse.truth import truth
from reporter.synthetic import STAMP

__all__ = ["Fault", "Order", "Parts", "Profile", "Rehearsal", "in_shape", "parts", "rehearse", "write_rehearsal"]


@dataclass(frozen=True, slots=True)
class Rehearsal:
    """A rehearsal made: the field workbook as bytes, and its truth as data."""

    workbook: bytes
    truth: dict[str, Any]


@dataclass(frozen=True, slots=True)
class Parts:
    """A rehearsal as the rows of its sheets, with the decimals each channel stores, and its truth."""

    tables: dict[str, sheets.Rows]
    decimals: dict[str, int]
    truth: dict[str, Any]


def rehearse(order: Order) -> Rehearsal:
    """Make the synthetic test of an order as one field workbook.

    Raises
    ------
    RecordError
        The day does not hold the runs, or the fault has no form with this fuel.
    """
    made = parts(order)
    return Rehearsal(written(made.tables), made.truth)


def parts(order: Order) -> Parts:
    """Make the rows of the synthetic test of an order.

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
        "Channels": sheets.channels(order, made),
        "Cylinders": sheets.cylinders(order, held),
        "Calibrations": sheets.calibrations(logger),
        "Readings": sheets.readings(logger),
        "Runs": sheets.runs(order, stack),
        "Moisture": sheets.moisture(order, stack),
        "Process": sheets.process(order, stack),
        "Limits": identity.limits(order, stack),
        "Events": identity.events(stack),
    }
    decimals = {one.gas.label: one.decimals for one in made}
    return Parts(tables, decimals, truth(order, stack, held=held, made=made, upscale=upscale))


def in_shape(order: Order, mapping: Mapping, mapping_file: tuple[str, bytes]) -> tuple[dict[str, bytes], Parts]:
    """The synthetic test as a folder in the shape of a firm's mapping: each file by name, and what it was made from.

    Parameters
    ----------
    order
        What is asked for; gases, basis, stamp and zone become those of the mapping.
    mapping
        The firm's mapping.
    mapping_file
        Its name and its bytes: it lies beside the readings as it is.

    Raises
    ------
    RecordError
        As `rehearse`; or the mapping has what a rehearsal cannot write.
    """
    made = parts(ordered_in_shape(order, mapping))
    fixed = {name: rows for name, rows in made.tables.items() if name != "Readings"}
    logger = f"{STAMP} logger{ending(mapping)}"
    name, content = mapping_file
    files = {
        f"{STAMP} field.xlsx": written(fixed),
        logger: logger_file(made.tables["Readings"], made.decimals, mapping, logger),
        name if name.endswith(ENDING) else f"{name}{ENDING}": content,
        f"{STAMP}.md": settings()["words"]["folder"].encode(),
    }
    return files, made


def write_rehearsal(
    order: Order, path: str | Path, truth_path: str | Path | None = None, *, shape: str | Path | None = None
) -> Rehearsal:
    """Make a rehearsal and write its workbook, or its folder in the shape of a mapping, and its truth as JSON.

    Parameters
    ----------
    order
        What is asked for.
    path
        The workbook; with a shape, the folder.
    truth_path
        Where the truth goes; it is not written where absent.
    shape
        A mapping of the firm's logger.

    Raises
    ------
    RecordError
        As `rehearse` and `in_shape`; or the workbook's name does not end in .xlsx, or the mapping cannot be read.
    OutputError
        A file cannot be written, or one of its name is there.
    """
    target = Path(path)
    if shape is None and target.suffix.lower() != ".xlsx":
        raise RecordError(f"the name {target.name!r} does not end in .xlsx")
    wanted = [target, *([Path(truth_path)] if truth_path is not None else [])]
    if len(set(wanted)) < len(wanted):
        raise RecordError("the workbook and its truth need names of their own")
    for one in wanted:
        if one.exists() or one.is_symlink():
            raise OutputError("a file of this name is there; choose another name", one.name)
    if shape is None:
        made = rehearse(order)
        files = {target: made.workbook}
    else:
        file = Path(shape)
        named, whole = in_shape(order, load(file), (file.name, file.read_bytes()))
        made = Rehearsal(named[f"{STAMP} field.xlsx"], whole.truth)
        files = {target / name: content for name, content in named.items()}
    if truth_path is not None:
        files[Path(truth_path)] = (json.dumps(made.truth, indent=2, ensure_ascii=False) + "\n").encode()
    write_all(files)
    return made
