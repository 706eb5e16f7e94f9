"""Every fixed phrase of the outputs, from `templates/phrases.toml`, overlaid by a firm's own file.

The report, the workbook and the terminal take their words here, so that one thing has one wording.
"""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from pathlib import Path

from reporter.errors import OutputError
from reporter.resources import templates_folder

FILE = "phrases.toml"


@dataclass(frozen=True, slots=True)
class Phrases:
    """The phrases by dotted name, e.g. ``limit.at_most_met``."""

    words: Mapping[str, str]

    def __call__(self, name: str, **values: object) -> str:
        """The phrase of a name with its braces filled in.

        Raises
        ------
        OutputError
            There is no such phrase, or a brace has no value.
        """
        try:
            return self.words[name].format_map(values)
        except (KeyError, ValueError, IndexError) as error:
            raise OutputError(f"the phrase {name!r} cannot be worded: {error}", FILE) from None

    def all(self, table: str) -> dict[str, str]:
        """All phrases of one table, in the order of the file, by their name in it."""
        return {name.split(".", 1)[1]: words for name, words in self.words.items() if name.startswith(table + ".")}


def load_phrases(overlay: Path | None = None) -> Phrases:
    """The shipped phrases; entries of ``phrases.toml`` in an overlay folder replace those of the same name.

    Raises
    ------
    OutputError
        The overlay's file cannot be read, or holds a name that is not in the shipped file.
    """
    shipped = _shipped()
    if overlay is None or not (overlay / FILE).is_file():
        return Phrases(shipped)
    own = _read(overlay / FILE)
    unknown = sorted(set(own) - set(shipped))
    if unknown:
        raise OutputError(f"no phrase has the name {', '.join(unknown)}", FILE)
    return Phrases({**shipped, **own})


@cache
def _shipped() -> dict[str, str]:
    return _read(templates_folder() / FILE)


def _read(path: Path) -> dict[str, str]:
    try:
        tables = tomllib.loads(path.read_text(encoding="utf-8"))
    except (OSError, UnicodeDecodeError, tomllib.TOMLDecodeError) as error:
        raise OutputError(f"the phrases cannot be read: {error}", path.name) from None
    return {f"{table}.{name}": str(words) for table, entries in tables.items() for name, words in entries.items()}
