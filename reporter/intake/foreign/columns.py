"""What each column of a table is, with the evidence; what can be two things is asked."""

from __future__ import annotations

import re
from collections import Counter
from collections.abc import Sequence
from dataclasses import dataclass, replace

from reporter.gases import all_gases, gas
from reporter.intake.foreign.aside import (
    multiple_in,
    output_in_titles,
    rate_in,
    reference_oxygen,
    rivals,
)
from reporter.intake.foreign.corrected import corrected_words
from reporter.intake.foreign.grid import Grid, letters
from reporter.intake.foreign.mapping import AS_ENTERED, MappedColumn
from reporter.intake.foreign.model import Desk, Option
from reporter.intake.foreign.numbers import FRACTION_BELOW, NumberStyle, number
from reporter.intake.foreign.tables import Table, blank, is_numberlike
from reporter.intake.foreign.words import (
    basis_of,
    basis_words_clash,
    folded,
    gases_in,
    lost_letters,
    other_words,
    signal_in,
    statistic_in,
    units_in,
    without_correction,
)
from reporter.intake.sheets import sentinels
from reporter.intake.table import Raw, clean, show
from reporter.problems import Place

_SUFFIX = re.compile(r"^[<>]?\s*+[+\-−]?(?:[.,' ]*+\d)++\s*+([^\d\s.,].*)$")
#: Units asked about where a header names none.
_UNITS = ("ppm", "%", "mg/m3", "ppb")
#: A column of a status has no more different cells.
FLAGS = 12
#: Words of a column of remarks that are said one by one.
WORDS = 5


@dataclass(frozen=True, slots=True)
class Lane:
    """A column of readings on its way: its column of the page, header, cells, and what is known of it."""

    column: int
    header: str
    cells: tuple[Raw, ...]
    gas: str = ""
    unit: str = ""
    basis: str = ""
    correction: float | None = None
    corrected: bool = False
    why: str = ""

    @property
    def name(self) -> str:
        """The column as people name it."""
        return f"column {letters(self.column)} ({self.header!r})"


class Columns:
    """The columns of one table being read."""

    def __init__(self, grid: Grid, table: Table, rows: Sequence[int], desk: Desk) -> None:
        self.grid, self.table, self.rows, self.desk = grid, table, rows, desk

    def place(self, column: int) -> Place:
        """The place of a header."""
        return self.grid.place(self.table.page, self.table.header_rows[0], column)

    def lanes(self, times: Sequence[int]) -> tuple[list[Lane], dict[int, str]]:
        """The columns of readings, and why each other column is none."""
        lanes: list[Lane] = []
        ignored: dict[int, str] = {}
        every = self.table.page.columns(self.table.columns, self.rows)
        for column, header, cells in zip(self.table.columns, self.table.headers, every, strict=True):
            if column in times:
                continue
            lane = Lane(column, header, tuple(cells))
            why, key = self._gas(lane)
            if key:
                _, correction, corrected = without_correction(folded(header))
                lanes.append(replace(lane, gas=key, correction=correction, corrected=corrected))
            else:
                ignored[column] = why
        return lanes, ignored

    def _gas(self, lane: Lane) -> tuple[str, str]:
        """Why a column is no reading, or the gas it reads; both empty while that is open."""
        filled = [cell for cell in dict.fromkeys(lane.cells) if not blank(cell)]
        numbers = any(is_numberlike(cell) or _suffixed(cell) for cell in filled)
        named = () if lost_letters(lane.header) else gases_in(lane.header)
        if not filled:
            return "nothing stands in it", ""
        if not numbers and not named:
            self._say_words(lane)
            return "words only", ""
        unitless = named and not units_in(lane.header) and not rate_in(lane.header) and not any(map(_suffixed, filled))
        if unitless and (signal := signal_in(lane.header) or output_in_titles(self.table)):
            return self._signal(lane, signal), ""
        if reference_oxygen(lane.header, filled):
            return "a reference oxygen, the same in every row", ""
        if named and (aside := self._aside(lane, named, len(filled))) is not None:
            return aside
        gasless = not named and lane.header and not lost_letters(lane.header)
        if gasless and (not units_in(lane.header) or other_words(lane.header)):
            return "no gas in its header", ""
        if not lane.header and self.table.page.lines and lane.column > self._last_named():
            found = f"{filled[0]!r}, right of the last header"
            asks = "Is the delimiter the decimal mark too? Export the file with another delimiter"
            self.desk.ask("cells-without-header", asks, found, (), self.place(lane.column))
            return "right of the last header", ""
        reasons = f"the header {lane.header!r}" if lane.header else f"no header, and numbers such as {filled[0]!r}"
        options = [Option("ignore", "it is no reading of a gas")]
        options += [Option(found.label) for found in all_gases() if not named or found.key in named]
        answer = self.desk.ask(
            f"column.{letters(lane.column)}.gas", "Which gas does this column read?", reasons, options,
            self.place(lane.column),
        )  # fmt: skip
        found = next((g.key for g in all_gases() if g.label == answer), "")
        return ("as answered" if answer == "ignore" else ""), found

    def _aside(self, lane: Lane, named: Sequence[str], different: int) -> tuple[str, str] | None:
        """The same of a column whose header names a gas; None where that is to be asked."""
        if rate := rate_in(lane.header):
            return f"a rate in {rate}, no concentration", ""
        if multiple := multiple_in(lane.header):
            asks = "Are these numbers multiples of the unit? Export the column without a factor, or leave it out"
            options = [Option("ignore", "leave the column out"), Option("as written", f"{multiple} is no factor")]
            key = f"column.{letters(lane.column)}.multiple"
            answer = self.desk.ask(key, asks, f"{multiple!r} in {lane.header!r}", options, self.place(lane.column))
            if answer != "as written":
                return "multiples of a unit, as answered" if answer else "", ""
        others = rivals(self.table, lane.column, named[0])
        if "" in others and different <= FLAGS and other_words(lane.header, "flags") and not units_in(lane.header):
            self._say_words(lane)
            return f"a status beside a column of {gas(named[0]).label}; it changes no reading", ""
        if len(named) > 1 or other_words(lane.header):
            return None
        statistic = statistic_in(lane.header)
        if statistic in ("lowest", "highest", "spread") and others & {"", "mean"}:
            return f"the {statistic} of each interval, beside another column of {gas(named[0]).label}", ""
        if statistic not in ("", "mean") or (statistic and "" in others):
            return None
        self.desk.say(f"{lane.name}: {gas(named[0]).label}, by its header")
        return "", named[0]

    def _signal(self, lane: Lane, signal: str) -> str:
        """Why a column of an analyzer's output is left out; empty while that is open."""
        asks = "An output is no concentration: export this column in the unit of its gas, or leave it out"
        options = [Option("ignore", "leave the column out")]
        key = f"column.{letters(lane.column)}.signal"
        answer = self.desk.ask(key, asks, f"{signal} in {lane.header!r}", options, self.place(lane.column))
        return "an analyzer's output, as answered" if answer else ""

    def _say_words(self, lane: Lane) -> None:
        """Say what a column of words holds, such as a change of port, each with its cell."""
        page, firsts, counts = self.table.page, dict[str, str](), Counter[str]()
        for row, cell in zip(self.rows, lane.cells, strict=True):
            if not blank(cell):
                text = show(cell)[:60]
                counts[text] += 1
                firsts.setdefault(text, page.address(row, lane.column))
        said = [
            f"{text!r} in {counts[text]} rows, first in {place}" if counts[text] > 1 else f"{text!r} in {place}"
            for text, place in firsts.items()
        ]
        more = f" and {len(said) - WORDS} more" if len(said) > WORDS else ""
        self.desk.say(f"{lane.name} holds {', '.join(said[:WORDS])}{more}")

    def _last_named(self) -> int:
        pairs = zip(self.table.columns, self.table.headers, strict=True)
        return max((column for column, header in pairs if header), default=-1)

    def with_units(self, lane: Lane, style: NumberStyle) -> Lane:
        """The lane with its unit: of the header, else of its cells, else asked."""
        units = [unit.unit for unit in units_in(lane.header)]
        texts = {cell for cell in lane.cells if isinstance(cell, str)}
        inside = {match[1].strip() for cell in texts if (match := _suffix(cell))}
        own = {unit.unit for text in inside for unit in units_in(text)}
        found = list(dict.fromkeys([*units, *sorted(own)]))
        if len(found) == 1:
            self.desk.say(f"{lane.name}: {found[0]}, by {'its header' if units else 'its cells'}")
        elif not found and lane.gas in ("o2", "co2") and self._like_percent(lane, style):
            found = ["%"]
            self.desk.say(f"{lane.name}: %, for its readings lie between 1 and 25 and no other unit of {lane.gas} does")
        elif len(found) != 1:
            what = f"{' and '.join(found)} in one column" if found else f"no unit in {lane.header!r}"
            options = [Option(unit) for unit in (found or _UNITS)]
            key = f"column.{letters(lane.column)}.unit"
            found = [self.desk.ask(key, "In which unit are the readings?", what, options, self.place(lane.column))]
        return self._fraction(replace(lane, unit=found[0]), style)

    def _like_percent(self, lane: Lane, style: NumberStyle) -> bool:
        values = [v for cell in lane.cells if (v := number(cell, style)) is not None and v not in sentinels()]
        middle = sorted(values)[len(values) // 2] if values else 0.0
        return 1.0 <= middle <= 25.0

    def _fraction(self, lane: Lane, style: NumberStyle) -> Lane:
        """A percentage so small everywhere that it may be a fraction is asked about."""
        each = dict.fromkeys(lane.cells)
        values = [v for cell in each if (v := number(cell, style)) is not None and v not in sentinels()]
        shown_percent = any((row, lane.column) in self.table.page.percent for row in self.rows)
        if lane.unit != "%" or lane.gas not in ("o2", "co2") or shown_percent or not values:
            return lane
        if not 0.0 < max(values) < FRACTION_BELOW:
            return lane
        options = (Option("%", f"{max(values):g} %"), Option("1", f"{max(values):g} of the gas, {max(values):.0%}"))
        key = f"column.{letters(lane.column)}.fraction"
        found = f"no reading above {max(values):g} in a column of percent"
        unit = self.desk.ask(key, "Percent, or a fraction?", found, options, self.place(lane.column))
        return replace(lane, unit=unit, why="percent, as answered" if unit == "%" else "")

    def with_basis(self, lane: Lane) -> Lane:
        """The lane with its moisture basis, by its header or asked."""
        basis = basis_of(lane.header)
        if basis:
            self.desk.say(f"{lane.name}: {basis}, by its header")
            return replace(lane, basis=basis)
        what = "both dry and wet" if basis_words_clash(lane.header) else "neither dry nor wet"
        options = (Option("dry"), Option("wet"), Option(AS_ENTERED, "the sheet Channels decides"))
        answer = self.desk.ask(
            f"column.{letters(lane.column)}.basis", "Is the reading of the dry or of the wet gas?",
            f"{lane.header!r} says {what}", options, self.place(lane.column),
        )  # fmt: skip
        return replace(lane, basis=answer)

    def uncorrected(self, lanes: Sequence[Lane], style: NumberStyle) -> tuple[list[Lane], dict[int, str]]:
        """The lanes as measured: columns already corrected and second columns of a gas go, or are asked about."""
        ignored: dict[int, str] = {}
        kept, open_ = list(lanes), list[Lane]()
        for lane in lanes:
            if lane.corrected:
                why, answer = self._corrected(lane, lanes, style)
                if why:
                    ignored[lane.column] = why
                    kept.remove(lane)
                elif not answer:
                    open_.append(lane)
        for key in dict.fromkeys(lane.gas for lane in kept):
            same = [lane for lane in kept if lane.gas == key and lane not in open_]
            if len(same) > 1:
                chosen = self._choose(same, lanes, style)
                for lane in same:
                    if lane not in chosen:
                        ignored[lane.column] = "another column of this gas is read, as answered"
                        kept.remove(lane)
        return kept, ignored

    def _corrected(self, lane: Lane, lanes: Sequence[Lane], style: NumberStyle) -> tuple[str, str]:
        """Why a column with words of correction is left out, if it is, and the answer, if it was asked and given."""
        raw = [other for other in lanes if other.gas == lane.gas and not other.corrected]
        oxygen = [other for other in lanes if other.gas == "o2" and not other.corrected]
        words = corrected_words(lane, raw[0], oxygen[0], style) if len(raw) == 1 and len(oxygen) == 1 else ""
        if words:
            return f"already corrected: {words}", ""
        found = f"{lane.header!r}" + (", and its ratio to the other column does not bear it out" if raw else "")
        options = [Option("corrected", "leave it out; readings are needed as measured"), Option("as measured")]
        key = f"column.{letters(lane.column)}.corrected"
        asks = "Is this column already corrected, to a reference oxygen or for drift?"
        answer = self.desk.ask(key, asks, found, options, self.place(lane.column))
        return ("already corrected, as answered" if answer == "corrected" else ""), answer

    def _choose(self, same: Sequence[Lane], lanes: Sequence[Lane], style: NumberStyle) -> list[Lane]:
        """Which of several columns of one gas are read: always asked, with what the numbers say."""
        facts = []
        oxygen = [lane for lane in lanes if lane.gas == "o2"]
        for lane in same:
            values = [v for cell in lane.cells if (v := number(cell, style)) is not None]
            mean = f", mean {sum(values) / len(values):.4g}" if values else ""
            ratio = [
                words
                for other in same
                if other is not lane and len(oxygen) == 1 and (words := corrected_words(lane, other, oxygen[0], style))
            ]
            facts.append(f"{lane.name}{mean}{', ' + ratio[0] if ratio else ''}")
        options = [Option(letters(lane.column), f"read {lane.name} alone") for lane in same]
        options.append(Option("all", "read each as a channel of its own"))
        asks = f"Several columns read {gas(same[0].gas).label}: which are the readings?"
        answer = self.desk.ask(
            f"gas.{same[0].gas}.columns", asks, "; ".join(facts), options, self.place(same[0].column)
        )
        return [lane for lane in same if answer in ("all", letters(lane.column))] if answer else list(same)


def _suffix(cell: str) -> re.Match[str] | None:
    return _SUFFIX.match(clean(cell))


def _suffixed(cell: Raw) -> bool:
    return isinstance(cell, str) and (match := _suffix(cell)) is not None and bool(units_in(match[1]))


def mapped(lane: Lane, lanes: Sequence[Lane]) -> MappedColumn:
    """The lane as a column of a mapping; its channel is the gas, or the header where several read it."""
    alone = sum(1 for other in lanes if other.gas == lane.gas) == 1
    channel = gas(lane.gas).label if alone else " ".join(lane.header.replace("|", " ").split())
    return MappedColumn(lane.header, "reading", channel, lane.gas, lane.unit, lane.basis, lane.why)
