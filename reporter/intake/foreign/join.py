"""The readings of several logger files as one series, by the channels of the field workbook."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from reporter.intake.foreign.apply import ForeignReadings
from reporter.intake.foreign.mapping import AS_ENTERED, MappedColumn
from reporter.intake.foreign.merge import merged
from reporter.intake.foreign.times import zone_of
from reporter.intake.rows import Filled
from reporter.intake.sheets import fold
from reporter.problems import Place, Problem, problem
from reporter.record import Given, Readings


def join(
    files: Sequence[ForeignReadings], channels: Sequence[Filled], test: dict[str, Any]
) -> tuple[Readings | None, list[Problem]]:
    """One series of all files, in time order.

    Parameters
    ----------
    files
        What each logger file gave.
    channels
        The rows of the sheet Channels; what they and a mapping say differently is a problem.
    test
        The items of the sheet Test; the stamp of the mappings is added where the sheet names none.

    Returns
    -------
    Readings or None, and the problems found.
    """
    problems: list[Problem] = []
    names = [channel.text("channel") for channel in channels]
    if not files:
        return None, problems
    taken = [_match(found, channels, problems) for found in files]
    for name in names:
        if not any(name in own.values() for own in taken):
            words = f"no column for the channel {name!r}"
            problems.append(problem("mapping-against-channels", files[0].readings.place, words))
    _stamps(files, test, problems)
    rows, clashes = merged([(found.readings, own) for found, own in zip(files, taken, strict=True)], names)
    for number, clash in clashes.items():
        words = f"{clash.count} readings, the first at {clash.first:%Y-%m-%d %H:%M:%S}"
        problems.append(problem("readings-contradict", Place(files[number].report.file), words))
    letters: dict[str, str] = {}
    for found, own in zip(files, taken, strict=True):
        letters |= {name: found.readings.columns[i] for i, name in own.items() if found.readings.columns}
    file = ", ".join(found.report.file for found in files)
    place = Place(file, files[0].readings.place.sheet)
    return Readings(tuple(names), tuple(letters.get(name, "") for name in names), rows, place), problems


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
    """Hold stamps and zones of the mappings against the sheet Test."""
    entered = test.get("reading_stamp")
    for found in files:
        place = Place(found.report.file)
        if found.time.stamp not in ("", AS_ENTERED):
            if entered is None:
                entered = test["reading_stamp"] = Given(found.time.stamp, place, found.time.stamp)
            elif entered.value != found.time.stamp:
                words = f"{found.time.stamp} in the mapping, {entered.value} on the sheet Test"
                problems.append(problem("mapping-against-channels", place, words))
        zone = test.get("time_zone")
        if found.time.zone and zone is not None and len(found.readings.times):
            moment = found.readings.times[0].item()
            try:
                same = zone_of(zone.value).utcoffset(moment) == zone_of(found.time.zone).utcoffset(moment)
            except ValueError:
                same = zone.value == found.time.zone
            if not same:
                words = f"times converted to {found.time.zone} by the mapping, {zone.value} on the sheet Test"
                problems.append(problem("mapping-against-channels", place, words))
