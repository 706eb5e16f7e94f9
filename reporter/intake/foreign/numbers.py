"""Numbers as a file writes them: one decimal mark and one thousands mark for the whole file, never by the cell."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass
from itertools import islice

from reporter.intake.foreign.model import Desk, Option
from reporter.intake.table import Raw, clean

_MARKED = re.compile(r"^[<>]?\s*[+\-−]?(\d[\d.,'’\u2019 ]*+|[.,]\d+)(?:[eE][+\-]?\d{1,3})?\s*(?:%|[^\W\d_].*)?$")
_GROUPS = re.compile(r"(?<=\d)[ '’](?=\d{3}(?!\d))")
#: Texts looked at before the marks are decided.
ENOUGH = 20_000
#: A percentage of oxygen or carbon dioxide below this everywhere may be a fraction.
FRACTION_BELOW = 0.3


@dataclass(frozen=True, slots=True)
class NumberStyle:
    """How numbers are written: the decimal mark, and whether the other mark groups thousands."""

    decimal: str = "."
    grouped: bool = False

    def plain(self, text: str) -> str:
        """A cell's text with a point as decimal mark and no groups; what does not fit the style stays as it is.

        A text that holds the other mark where none is expected keeps it, so that its reader refuses it.
        """
        text = _GROUPS.sub("", unquoted(text))
        if not _MARKED.match(text):
            return text
        other = "," if self.decimal == "." else "."
        if other in text:
            if not self.grouped or not _grouped_well(text, other, self.decimal):
                return text.replace(other, "'") if self.decimal == "," else text
            text = text.replace(other, "")
        return text.replace(self.decimal, ".")


def _grouped_well(text: str, group: str, decimal: str) -> bool:
    whole = text.lstrip("<>+-− ").split(decimal)[0]
    match = re.match(r"^[\d.,]+", whole)
    parts = (match[0] if match else whole).split(group)
    return len(parts[0]) in (1, 2, 3) and all(re.match(r"^\d{3}$", part) for part in parts[1:])


@dataclass(slots=True)
class _Counts:
    """How often each mark can only be a decimal mark, or only a thousands mark, or either."""

    decimal: int = 0
    grouping: int = 0
    either: int = 0
    example: str = ""


def unquoted(text: str) -> str:
    """A cell's text without the apostrophe that keeps a number from being one in a spreadsheet program."""
    plain = clean(text)
    return plain[1:] if plain[:1] in ("'", "’") and _MARKED.match(plain[1:]) else plain


def hundredfold(value: float) -> float:
    """The percentage of a cell that is shown as one: 15 digits, as it was typed."""
    return float(f"{value * 100.0:.15g}")


def number(cell: Raw, style: NumberStyle) -> float | None:
    """A cell's plain number; None for a word or nothing."""
    if isinstance(cell, float):
        return cell
    if not isinstance(cell, str):
        return None
    try:
        value = float(style.plain(cell))
    except ValueError:
        return None
    return value if abs(value) < float("inf") else None


def style_of(texts: Iterable[str], percents: Iterable[str], desk: Desk) -> NumberStyle:
    """The style of a file from the texts of its number columns; asked where both readings are possible.

    Parameters
    ----------
    texts
        Cells of the columns of readings.
    percents
        Those among them that are percentages: no reading of theirs is above 100.
    desk
        Takes evidence and the question ``decimal-mark``.
    """
    counts = {".": _Counts(), ",": _Counts()}
    for text in dict.fromkeys(islice(texts, ENOUGH)):
        _count(text, counts)
    for text in dict.fromkeys(islice(percents, ENOUGH)):
        _bound(text, counts)
    point, comma = counts["."], counts[","]
    if (point.decimal and comma.decimal) or (point.grouping and comma.grouping):
        found = f"{(point.example or '.')!r} and {(comma.example or ',')!r} in one file"
        return _asked(desk, found, grouped=False)
    for mark, own, other in ((".", point, comma), (",", comma, point)):
        if own.decimal or other.grouping:
            doubtful = other.either and not other.grouping
            if other.decimal or own.grouping or doubtful:
                return _asked(desk, f"{(own.example or other.example)!r}", grouped=True)
            desk.say(f"decimal mark {mark!r}: {(own.example or other.example)!r}")
            return NumberStyle(mark, bool(other.grouping))
    if point.either or comma.either:
        return _asked(desk, f"{(comma.example or point.example)!r}, and no number that decides", grouped=True)
    return NumberStyle()


def _asked(desk: Desk, found: str, *, grouped: bool) -> NumberStyle:
    options = (Option("point", "12.5 is twelve and a half"), Option("comma", "12,5 is twelve and a half"))
    answer = desk.ask("decimal-mark", "Which mark is the decimal mark of this file?", found, options)
    return NumberStyle("," if answer == "comma" else ".", grouped)


def _count(text: str, counts: dict[str, _Counts]) -> None:
    plain = unquoted(text)
    if not _MARKED.match(plain):
        return
    digits = re.sub(r"[^\d.,].*$", "", _GROUPS.sub("", plain).lstrip("<>+-− "))
    marks = [mark for mark in digits if mark in ".,"]
    if not marks:
        return
    kinds = set(marks)
    if len(kinds) == 2:
        last = marks[-1]
        counts[last].decimal += 1
        counts[last].example = plain
        counts["," if last == "." else "."].grouping += 1
        return
    mark = marks[0]
    own = counts[mark]
    parts = digits.split(mark)
    if len(marks) > 1:
        if all(len(part) == 3 for part in parts[1:]):
            own.grouping += 1
            own.example = own.example or plain
    elif len(parts[1]) != 3 or not 1 <= len(parts[0]) <= 3 or parts[0].startswith("0"):
        if not own.decimal:
            own.example = plain
        own.decimal += 1
    else:
        own.either += 1
        own.example = own.example or plain


def _bound(text: str, counts: dict[str, _Counts]) -> None:
    """A percentage that would be above 100 if its mark grouped thousands: the mark is a decimal mark."""
    plain = unquoted(text).lstrip("+-− ")
    match = re.match(r"^(\d{1,3})([.,])(\d{3})(?!\d)", plain)
    if match and int(match[1] + match[3]) > 100:
        counts[match[2]].decimal += 1
        counts[match[2]].example = plain
