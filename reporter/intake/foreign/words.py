"""The vocabulary of headers: which gas, which part of the time, which basis, corrected or not."""

from __future__ import annotations

import re
import tomllib
import unicodedata
from functools import cache, lru_cache
from typing import Any

from reporter.errors import UnitError
from reporter.gases import find_gas
from reporter.intake.table import clean
from reporter.resources import table_text
from reporter.units import ReadUnit, dimension, read_unit

_LOWERED = str.maketrans("₀₁₂₃₄₅₆₇₈₉ₓ", "0123456789x")
_GAP = re.compile(r"[\s_\-,;:.'’()\[\]{}|\"]+")
_CORRECTED = re.compile(
    r"(?:@|\bcorr\b|\bcorrected\b|\bkorr\b|\bbez\b|\bat\b|\bto\b|\bauf\b|\bref\b|\breference\b|\breferencia\b|\bbezug\b|\bal\b|\ba\b)\s*"
    r"(\d{1,2}(?:[.,]\d+)?)\s*(?:%|vol|pct)?\s*(?:o2|02|oxygen|oxigeno|oxygene|sauerstoff)?"
)
_GLUED = re.compile(r"\b(nox|no2|no|co2|co|so2|o2|02)(ppm\w*|ppb\w*|percent|pct|vol)\b", re.IGNORECASE)
_GLUED_BEHIND = re.compile(r"\b(ppm[vdw]{0,2}|ppb)(nox|no2|no|co2|co|so2)\b", re.IGNORECASE)
_SHORT = re.compile(r"^(?:[a-z0-9]|in|cc|cf|gr)$", re.IGNORECASE)
_LENGTH = re.compile(r"\b\d+ ?(?:min|minutes?|sec|s|h|hr|hours?)\b")
#: A reference oxygen in brackets behind a gas, as in ``NOx(3%)``.
_BRACKETED = re.compile(r"(?<=[A-Za-z0-9])\s*\(\s*(\d{1,2}(?:[.,]\d+)?)\s*%\s*(?:O2|02)?\s*\)")
#: Dimensions of what an analyzer may read.
READABLE = frozenset({"fraction", "mass_concentration"})


@cache
def _table() -> dict[str, Any]:
    return tomllib.loads(table_text("foreign_words.toml"))


@cache
def zone_letters() -> dict[str, float]:
    """Letters behind a time, such as MDT, with the hours they stand ahead of UTC."""
    return {str(letters): float(hours) for letters, hours in _table()["zones"].items()}


@lru_cache(4096)
def zone_in(text: str) -> str:
    """The zone of a clock that a header or title names, as hours from UTC such as ``UTC-06:00``; else empty."""
    if match := re.search(r"\b(?:UTC|GMT)\s*(?:([+\-−])\s*(\d{1,2})(?::?(\d{2}))?)?", text):
        return f"UTC{(match[1] or '+').replace('−', '-')}{int(match[2] or 0):02d}:{match[3] or '00'}"
    named = next((word for word in re.findall(r"\b[A-Z]{3,4}\b", text) if word in zone_letters()), "")
    return "" if not named else f"UTC{'-' if zone_letters()[named] < 0 else '+'}{abs(zone_letters()[named]):02.0f}:00"


@lru_cache(4096)
def signal_in(text: str) -> str:
    """The unit of an analyzer's output, such as mA or V, that a header names; empty where it names none."""
    return next((part for part in re.split(r"[^\w%.]+", clean(text)) if part in _table()["signal"]["units"]), "")


def parted(text: str) -> str:
    """A header with lowered digits made plain, and gas and unit parted where they are written as one word."""
    plain = _BRACKETED.sub(r" @\1% O2", clean(text).translate(_LOWERED))
    return _GLUED_BEHIND.sub(r"\1 \2", _GLUED.sub(r"\1 \2", plain))


def folded(text: str) -> str:
    """Text for comparison: lower case, no accents, one blank for any gap; ``%``, ``@``, ``/``, ``+`` stay."""
    plain = unicodedata.normalize("NFKD", parted(text))
    plain = "".join(mark for mark in plain if not unicodedata.combining(mark)).casefold()
    return _GAP.sub(" ", re.sub(r"\bno[\s_]x\b", "nox", plain)).strip()


@cache
def _spellings() -> tuple[tuple[str, str, re.Pattern[str]], ...]:
    """Each spelling of a gas as a pattern of whole words, the longest first."""
    found = [(spelling, key) for key, names in _table()["gases"].items() for spelling in names]
    found.sort(key=lambda pair: -len(pair[0]))
    return tuple((s, key, re.compile(rf"(?<![a-z0-9]){re.escape(s)}(?![a-z0-9])")) for s, key in found)


def without_correction(text: str) -> tuple[str, float | None, bool]:
    """A folded header without what it says of a correction; the reference in percent; whether it says one."""
    dotted = re.sub(r"(?<=\d) (?=\d% ?o2)", ".", text)
    words = any(re.search(rf"\b{re.escape(word)}\b", dotted) for word in _table()["corrected"]["words"])
    words = words or "@" in dotted or re.search(r"\b(?:o2|02) ?ref|\bref ?(?:o2|02)\b", dotted) is not None
    match = next(
        (m for m in _CORRECTED.finditer(dotted) if words or m[0].startswith("@") or re.search(r"o2|02|ox|sau", m[0])),
        None,
    )
    if match is None:
        return dotted, None, words
    return (dotted[: match.start()] + " " + dotted[match.end() :]).strip(), float(match[1].replace(",", ".")), True


@lru_cache(4096)
def gases_in(text: str) -> tuple[str, ...]:
    """The keys of the gases a header names, each once."""
    rest, _, _ = without_correction(folded(text))
    rest = re.sub(r"(?<=[a-z0-9])(?=%)|(?<=%)(?=[a-z0-9])", " ", rest)
    found: list[str] = []
    for _, key, pattern in _spellings():
        rest, count = pattern.subn(" ", rest)
        if count:
            found.append(key)
    if not found and (whole := find_gas(text)) is not None:
        found.append(whole.key)
    return tuple(dict.fromkeys(found))


@lru_cache(4096)
def time_part(text: str) -> str:
    """Which part of the time a header names: ``both``, ``date``, ``time``, or empty."""
    words = folded(text)
    table = _table()["time"]
    if not words or any(re.search(rf"\b{re.escape(word)}\b", words) for word in table["never"]) or gases_in(text):
        return ""
    named = {
        part: any(re.search(rf"(?<![a-z]){re.escape(word)}(?![a-z])", words) for word in table[part])
        for part in ("both", "date", "time")
    }
    named["date"] = named["date"] or words in table["date_alone"]
    if named["both"] or (named["date"] and named["time"]):
        return "both"
    return "date" if named["date"] else "time" if named["time"] else ""


def stamp_of(text: str) -> str:
    """Whether a time header says start or end of the interval; empty where it says neither, or both."""
    words = set(folded(text).replace("/", " ").split())
    said = [stamp for stamp, names in _table()["stamp"].items() if words & set(names)]
    return said[0] if len(said) == 1 else ""


def basis_of(text: str) -> str:
    """``dry`` or ``wet`` as a header says it; empty where it says neither, or both."""
    plain = re.sub(r"(?<!\d)\d++ ?sec\b", " ", folded(without_correction(folded(text))[0]))
    words = re.sub(r"[/%]", " ", plain).split()
    said = {basis for basis, names in _table()["basis"].items() for name in names if name in words}
    said |= {unit.moisture.value for unit in units_in(text) if unit.moisture is not None}
    return said.pop() if len(said) == 1 else ""


def basis_words_clash(text: str) -> bool:
    """Whether a header says both dry and wet."""
    words = folded(text).replace("/", " ").split()
    return all(any(name in words for name in names) for names in _table()["basis"].values())


def units_in(text: str) -> tuple[ReadUnit, ...]:
    """The units of a reading that a header names, each once: in brackets, in a part of its own, or as its words."""
    plain = re.sub(r"(?<=[A-Za-z0-9])-(?=[A-Za-z%])", " ", " ".join(parted(text).split()))
    inside = [a or b for a, b in re.findall(r"\[([^\[\]]*)\]|\(([^()]*)\)", plain)]
    pieces = [part.strip() for piece in inside for part in re.split(r"[,;]", piece)]
    pieces += [part.strip() for part in re.split(r"[|,;]", re.sub(r"\[[^\[\]]*\]|\([^()]*\)", "|", plain))]
    pieces += [part for piece in pieces for gas, _, part in [piece.partition("/")] if gases_in(gas)]
    found: dict[str, ReadUnit] = {}
    for piece in pieces:
        for unit in _units_of(piece):
            known = found.get(unit.unit)
            if known is None or known.moisture is None:
                found[unit.unit] = unit
    return tuple(found.values())


def _units_of(piece: str) -> list[ReadUnit]:
    rest = re.sub(r"@\s*\d+(?:[.,]\d+)?\s*%?\s*(?:O2|02)?", " ", piece, flags=re.IGNORECASE)
    rest = re.sub(r"(?<![A-Za-z0-9])(?!02)\d+(?:[.,]\d+)?\s*%\s*(?:O2|02|oxygen)?", " ", rest, flags=re.IGNORECASE)
    rest = re.sub(r"%(?=(?:db|wb|dry|wet)\b)", "% ", rest, flags=re.IGNORECASE)
    words = re.sub(r"(?<=[A-Za-z0-9])%", " %", rest).replace("_", " ").split()
    found = []
    for length in (3, 2, 1):
        at = 0
        while at + length <= len(words):
            unit = _reading_unit(" ".join(words[at : at + length]))
            if unit is not None:
                found.append(unit)
                del words[at : at + length]
            else:
                at += 1
    return found


@cache
def _reading_unit(text: str) -> ReadUnit | None:
    """The unit a text is, if an analyzer can read in it; one letter alone, or a blank, is none."""
    if not text or (_SHORT.match(text) and text != "%") or text in ("-", "1") or folded(text) in ("dry", "wet"):
        return None
    try:
        unit = read_unit(text)
    except UnitError:
        return None
    return unit if dimension(unit.unit) in READABLE and unit.unit != "1" else None


@lru_cache(4096)
def lost_letters(text: str) -> bool:
    """Whether a letter of a header was lost in an export, as in ``NO?`` for NOₓ or ``CO?`` for CO₂."""
    return re.search(r"(?<![A-Za-z])[A-Za-z]{1,3}[?\ufffd]", text) is not None


@lru_cache(4096)
def is_foot(text: str) -> bool:
    """Whether a text is the first words of a row of averages, totals or the like."""
    words = folded(text)
    return any(words == name or (len(name) > 2 and words.startswith(f"{name} ")) for name in _table()["foot"]["words"])


@lru_cache(4096)
def statistic_of(text: str) -> str:
    """Which statistic the label of a row at the foot names: ``mean``, ``sum``, ``highest``, ``lowest``, or empty."""
    words = set(folded(text).split())
    said = [name for name, labels in _table()["foot"]["statistics"].items() if words & set(labels)]
    return said[0] if len(said) == 1 else ""


@lru_cache(4096)
def statistic_in(header: str) -> str:
    """Which statistic of each interval a header names: ``mean``, ``lowest``, ``highest``, ``spread``; else empty.

    ``several`` where it names more than one.
    """
    words = f" {_LENGTH.sub(' ', folded(header))} "
    table = _table()["column_statistics"]
    said = [name for name, labels in table.items() if any(f" {label} " in words for label in labels)]
    return said[0] if len(said) == 1 else "several" if said else ""


@lru_cache(4096)
def title_kind(text: str) -> str:
    """What a label above a table names: ``unit``, ``facility``, or empty."""
    words = folded(text)
    return next((kind for kind, labels in _table()["titles"].items() if words in labels), "")


def other_words(text: str, kind: str = "words") -> bool:
    """Whether a header has words of something that is no reading, such as a status or a range.

    `kind` is ``words``, or ``flags`` for those of a status of each reading alone.
    """
    rest = folded(text)
    return any(re.search(rf"\b{re.escape(word)}\b", rest) for word in _table()["other"][kind])
