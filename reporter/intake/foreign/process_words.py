"""Words of a plant's own log: which quantity a header names, and in which unit."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Mapping
from functools import cache, lru_cache
from typing import Any

from reporter.errors import UnitError
from reporter.intake.foreign.words import folded, gases_in
from reporter.resources import table_text
from reporter.units import read_unit


@cache
def quantities() -> Mapping[str, Any]:
    """The quantities by key, with their words and units."""
    return dict(tomllib.loads(table_text("foreign_words.toml"))["process"])


@lru_cache(4096)
def process_in(text: str) -> str:
    """The key of the process quantity a header names; empty where it names a gas, or none."""
    words = folded(text)
    if gases_in(text):
        return ""
    best = ("", "")
    for key, row in quantities().items():
        for word in row["words"]:
            if re.search(rf"(?<![a-z]){re.escape(word)}(?![a-z])", words) and len(word) > len(best[1]):
                best = (key, word)
    return best[0]


def split_name(header: str) -> tuple[str, str]:
    """Name and unit of a header of a process column; the unit is empty where it names none that is known."""
    plain = " ".join(header.split())
    found = re.search(r"[\[(]([^\[\]()]*)[\])]", plain)
    tries = [(found[1], plain[: found.start()] + plain[found.end() :])] if found else []
    parts = [part.strip() for part in re.split(r"[|,;]", plain)]
    tries += [(part, " ".join(p for i, p in enumerate(parts) if i != k)) for k, part in enumerate(parts) if k]
    words = plain.split()
    tries += [(" ".join(words[k:]), " ".join(words[:k])) for k in range(max(1, len(words) - 2), len(words))]
    for text, rest in tries:
        try:
            return " ".join(rest.replace("|", " ").split()) or plain, read_unit(text).unit
        except UnitError:
            continue
    return " ".join(plain.replace("|", " ").split()), ""
