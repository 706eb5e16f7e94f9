"""The corpus: every case by name, its files on disk, and the README that shows them.

``python -m tests.corpus.corpus`` writes the README again; with a folder, also every file of the corpus.
"""

from __future__ import annotations

import sys
from pathlib import Path

from reporter.problems import catalogue
from tests.corpus import (
    cases_of_books,
    cases_of_cells,
    cases_of_clocks,
    cases_of_columns,
    cases_of_exports,
    cases_of_folders,
    cases_of_rows,
    cases_of_text,
)
from tests.corpus.case import END, Case

_MODULES = (
    cases_of_rows,
    cases_of_books,
    cases_of_text,
    cases_of_cells,
    cases_of_clocks,
    cases_of_columns,
    cases_of_exports,
)
GROUPS: dict[str, list[Case]] = {
    **{group: cases for module in _MODULES for group, cases in module.CASES.items()},
}
CASES: dict[str, Case] = {case.name: case for cases in GROUPS.values() for case in cases}
README = Path(__file__).parent / "README.md"

_HEAD = """\
# The corpus: one truth in many files

Three runs of twenty minutes with NOx, CO, O2 and CO2, once, are the truth (`truth.py`). Every file below is made from
it by `cases_of_*.py`. For every file the readings, times, units and bases equal the truth exactly, cell by cell, or the
file is stopped by the question or the problem named. `test_corpus.py` holds each case to that; `test_together.py` does
the same for three disturbances at once, `test_never_breaks.py` for damage. This page is written by
`python -m tests.corpus.corpus` and a test keeps it current; `python -m tests.corpus.corpus FOLDER` writes the
{count} files and {folders} folders, to try with `fluebook map` and `fluebook check`.

Where nothing else is said, the one question is `stamp`: whether a stamp is the start or the end of its interval. A
question is open until it is answered; the answers in the tables are those with which the truth comes out. *Stops* means
that no number is read until someone answers or corrects the file.
"""


def _done(case: Case) -> str:
    """What fluebook does, in a few words."""
    if case.stops:
        known = catalogue().get(case.stops)
        if known is not None:
            return f"stops: {known.title[0].lower()}{known.title[1:]} (`{case.stops}`)"
        return f"stops: asks `{case.stops}`"
    parts = []
    asked = [f"`{key}`: {answer}" for key, answer in case.answers.items() if key not in END]
    if asked:
        parts.append(f"asks {', '.join(asked)}")
    elif "stamp" not in case.answers:
        parts.append("asks nothing")
    parts.append(_comes(case))
    if case.notes:
        parts.append("notes " + ", ".join(f"`{code}`" for code in sorted(case.notes)))
    return "; ".join(parts)


def _comes(case: Case) -> str:
    kinds = {(kind, value) for kind, value in case.cells.values()}
    if len(case.cells) == 1:
        kind, value = next(iter(kinds))
        return "the truth, that cell " + (f"{value:g}" if kind == "number" else f"as {kind}")
    return f"the truth, those {len(case.cells)} cells as written" if case.cells else "the truth"


def _cell(text: str) -> str:
    return " ".join(text.split()).replace("|", "\\|")


def readme() -> str:
    """The README of the corpus."""
    parts = [_HEAD.format(count=len(CASES), folders=len(cases_of_folders.FOLDERS))]
    for group, cases in GROUPS.items():
        lines = [f"## {group}\n", "| Case | What arrives | What fluebook does |", "|---|---|---|"]
        lines += [f"| {_cell(c.name)} | {_cell(c.arrives)} | {_cell(_done(c))} |" for c in cases]
        parts.append("\n".join(lines) + "\n")
    parts.append(cases_of_folders.readme())
    return "\n".join(parts)


def write(folder: Path) -> None:
    """Every file and folder of the corpus, each in a folder of the name of its case."""
    files = {name: {case.file: case.content} for name, case in CASES.items()}
    for name, contents in (files | {f"folder {case.name}": case.files for case in cases_of_folders.FOLDERS}).items():
        place = folder / "".join(mark if mark.isalnum() or mark in "-. " else "_" for mark in name)
        place.mkdir(parents=True, exist_ok=True)
        for file, content in contents.items():
            (place / file).write_bytes(content)


if __name__ == "__main__":
    README.write_text(readme(), encoding="utf-8")
    if len(sys.argv) > 1:
        write(Path(sys.argv[1]))
