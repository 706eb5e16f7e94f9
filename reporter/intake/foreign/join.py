"""The readings of several logger files as one series, by the channels of the field workbook."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from datetime import datetime
from typing import Any

from reporter.intake.foreign.apply import ForeignReadings
from reporter.intake.foreign.common import RULE, File, length, needed_step, on_common_intervals
from reporter.intake.foreign.lags import lags_between_files
from reporter.intake.foreign.mapping import AS_ENTERED, MappedColumn
from reporter.intake.foreign.merge import Clash, merged
from reporter.intake.foreign.times import zone_of
from reporter.intake.rows import Filled
from reporter.intake.sheets import fold
from reporter.logged import LoggedRows
from reporter.problems import Place, Problem, problem
from reporter.record import Given, Readings
from reporter.units import convert, read_unit


@dataclass(frozen=True, slots=True)
class Joined:
    """The series of all files (None without a file), the problems found, what was done to the readings in words."""

    readings: Readings | None
    problems: list[Problem]
    done: tuple[str, ...] = ()


def join(files: Sequence[ForeignReadings], channels: Sequence[Filled], test: dict[str, Any]) -> Joined:
    """One series of all files, in time order.

    Parameters
    ----------
    files
        What each logger file gave.
    channels
        The rows of the sheet Channels; what they and a mapping say differently is a problem.
    test
        The items of the sheet Test; stamp and interval of the files are added where the sheet names none.

    Returns
    -------
    Joined
        Files of different intervals, or whose stamps do not fall together, are averaged to one (`common`).
    """
    problems: list[Problem] = []
    names = [channel.text("channel") for channel in channels]
    if not files:
        return Joined(None, problems)
    taken = [_match(found, channels, problems) for found in files]
    for name in names:
        if not any(name in own.values() for own in taken):
            words = f"no column for the channel {name!r}"
            problems.append(problem("mapping-against-channels", files[0].readings.place, words))
    _stamps(files, test, problems)
    parts = [
        File(found.report.file, found.readings, own, _at_start(found, test))
        for found, own in zip(files, taken, strict=True)
    ]
    problems += [problem("loggers-differ", Place(file), words) for file, words in lags_between_files(parts)]
    step = needed_step(parts, _entered_interval(test)) if all(len(part.readings.times) for part in parts) else None
    if step is not None:
        return _averaged(files, parts, names, step=step, test=test, problems=problems)
    rows, clashes = merged([(part.readings, part.own) for part in parts], names)
    problems += [_contradiction_of(parts[number], clash) for number, clash in clashes.items()]
    return Joined(_named(files, parts, names, rows), problems)


def _averaged(
    files: Sequence[ForeignReadings],
    parts: Sequence[File],
    names: Sequence[str],
    *,
    step: float,
    test: dict[str, Any],
    problems: list[Problem],
) -> Joined:
    """The series on intervals of one length; stamps and interval of the sheet Test are those of the result."""
    place = Place(", ".join(part.name for part in parts))
    at_start = all(part.at_start for part in parts)
    made = on_common_intervals(parts, names, step, at_start=at_start)
    problems += [problem("interval-blank", Place(file), words) for file, words in made.blank]
    problems += [_contradiction_of(parts[number], clash) for number, clash in made.clashes.items()]
    stamp = "interval start" if at_start else "interval end"
    test["reading_stamp"] = Given(stamp, place, stamp)
    test.setdefault("logging_interval", Given(step, place, length(step), read_unit("s")))
    readings = replace(_named(files, parts, names, made.rows), made=f"means over {length(step)}")
    return Joined(readings, problems, (*made.words, f"averages over {length(step)}: {RULE}"))


def _named(files: Sequence[ForeignReadings], parts: Sequence[File], names: Sequence[str], rows: LoggedRows) -> Readings:
    """Rows with the letters of their columns and the files they came from."""
    letters: dict[str, str] = {}
    for part in parts:
        letters |= {name: part.readings.columns[i] for i, name in part.own.items() if part.readings.columns}
    place = Place(", ".join(part.name for part in parts), files[0].readings.place.sheet)
    return Readings(tuple(names), tuple(letters.get(name, "") for name in names), rows, place)


def _contradiction_of(part: File, clash: Clash) -> Problem:
    words = f"{clash.count} readings, the first at {clash.first:%Y-%m-%d %H:%M:%S}"
    return problem("readings-contradict", Place(part.name), words)


def _at_start(found: ForeignReadings, test: dict[str, Any]) -> bool:
    """Whether the stamps of a file name the start of their intervals."""
    own = found.time.stamp
    if own in ("", AS_ENTERED):
        entered = test.get("reading_stamp")
        own = "" if entered is None else entered.value
    return bool(own == "interval start")


def _entered_interval(test: dict[str, Any]) -> float | None:
    """The logging interval entered on the sheet Test [s]."""
    given = test.get("logging_interval")
    return None if given is None else convert(given.value, "min" if given.unit is None else given.unit.unit, "s")


def _match(found: ForeignReadings, channels: Sequence[Filled], problems: list[Problem]) -> dict[int, str]:
    """The channel of each column of readings: by its name, else by its gas where one channel alone has it."""
    by_name = {fold(channel.text("channel")): channel for channel in channels}
    matched: dict[int, str] = {}
    for index, column in enumerate(found.columns):
        channel = by_name.get(fold(column.channel))
        if channel is None:
            same = [one for one in channels if one.text("gas") == column.gas]
            channel = same[0] if len(same) == 1 else None
        place = Place(found.report.file, found.readings.place.sheet, "", column.header)
        if channel is None:
            words = f"the channel {column.channel!r}, which the sheet Channels has not"
            problems.append(problem("mapping-against-channels", place, words))
            continue
        words = _contradiction(column, channel)
        if words:
            problems.append(problem("mapping-against-channels", place, words))
        if channel.text("channel") in matched.values():
            words = f"two columns for the channel {channel.text('channel')!r}"
            problems.append(problem("mapping-against-channels", place, words))
        matched[index] = channel.text("channel")
    return matched


def _contradiction(column: MappedColumn, channel: Filled) -> str:
    """What mapping and channel say differently; empty where they agree."""
    if channel.text("gas") and channel.text("gas") != column.gas:
        return f"{column.gas} in the mapping, {channel.text('gas')} on the sheet Channels"
    unit = channel.values.get("unit")
    if unit is not None and unit.value.unit != column.unit:
        return f"{column.unit} in the mapping, {unit.value.unit} on the sheet Channels"
    basis = channel.values.get("moisture_basis")
    if basis is not None and column.basis not in (AS_ENTERED, basis.value.value):
        return f"{column.basis} in the mapping, {basis.value.value} on the sheet Channels"
    return ""


def _stamps(files: Sequence[ForeignReadings], test: dict[str, Any], problems: list[Problem]) -> None:
    """Hold stamps and zones of the mappings against the sheet Test; files may differ where the sheet names no stamp."""
    entered = test.get("reading_stamp")
    on_sheet = entered is not None
    for found in files:
        place = Place(found.report.file)
        if found.time.stamp not in ("", AS_ENTERED):
            if entered is None:
                entered = test["reading_stamp"] = Given(found.time.stamp, place, found.time.stamp)
            elif on_sheet and entered.value != found.time.stamp:
                words = f"{found.time.stamp} in the mapping, {entered.value} on the sheet Test"
                problems.append(problem("mapping-against-channels", place, words))
        if len(found.readings.times):
            words = zone_words(found.time.zone, found.readings.times[0].item(), test)
            problems += [problem("mapping-against-channels", place, words)] if words else []


def zone_words(own: str, moment: datetime, test: dict[str, Any]) -> str:
    """That times were converted to another zone than that of the sheet Test, in words; empty where they were not."""
    zone = test.get("time_zone")
    if not own or zone is None:
        return ""
    try:
        same = zone_of(zone.value).utcoffset(moment) == zone_of(own).utcoffset(moment)
    except ValueError:
        same = zone.value == own
    return "" if same else f"times converted to {own} by the mapping, {zone.value} on the sheet Test"
