"""Plain text for a terminal: wrapped paragraphs, tables, sections, and what a poor encoding can show."""

from __future__ import annotations

import re
import textwrap
from collections.abc import Collection, Sequence

#: Characters of a line.
WIDTH = 100
# What could steer a terminal or turn the direction of the text; it comes from names and cells of others.
_STEERING = re.compile("[\x00-\x1f\x7f-\x9f\u061c\u200e\u200f\u202a-\u202e\u2066-\u2069]+")
_PLAIN = str.maketrans(
    {
        "−": "-", "–": "-", "—": "-", "·": "*", "×": "x", "≤": "<=", "≥": ">=", "±": "+/-", "°": " deg ", "µ": "u",
        "§": "section", "²": "2", "³": "3", "⁻": "-", "\u00a0": " ", "\u202f": " ", "…": "...",
        "‘": "'", "’": "'", "“": '"', "”": '"',
        **{lowered: str(digit) for digit, lowered in enumerate("₀₁₂₃₄₅₆₇₈₉")},
    }
)  # fmt: skip


def encodable(text: str, encoding: str) -> str:
    """The text with what an encoding cannot show put in plainer characters, and with nothing that steers a terminal.

    Parameters
    ----------
    text
        Any text, of several lines.
    encoding
        Of the stream it goes to.
    """
    text = "\n".join(map(_still, text.split("\n")))
    try:
        text.encode(encoding)
    except UnicodeEncodeError:
        return text.translate(_PLAIN).encode(encoding, "replace").decode(encoding)
    return text


def paragraph(text: str, *, indent: int = 2, hang: int = 4) -> str:
    """Text wrapped to the width, its later lines further in; words joined by a no-break space stay so."""
    lines = textwrap.fill(
        _still(text),
        WIDTH,
        initial_indent=" " * indent,
        subsequent_indent=" " * hang,
        break_long_words=False,
        break_on_hyphens=False,
    )
    return lines.replace("\u00a0", " ")


def _still(text: str) -> str:
    return _STEERING.sub(" ", text)


def section(title: str, parts: Sequence[str]) -> str:
    """A heading and what stands below it; nothing where there is nothing."""
    return "\n".join([title, *parts]) if parts else ""


def table(
    head: Sequence[str],
    rows: Sequence[Sequence[str]],
    *,
    numbers: Collection[int] = (),
    wrapped: int | None = None,
) -> str:
    """Columns two spaces apart, two spaces in.

    Parameters
    ----------
    head, rows
        Cells as text; a short row is filled up.
    numbers
        Columns set to the right.
    wrapped
        The column that is wrapped where a line would be too long.
    """
    filled = ([*map(_still, row), *[""] * (len(head) - len(row))] for row in rows)
    lines = [list(head), *filled]
    widths = [max(len(line[column]) for line in lines) for column in range(len(head))]
    if wrapped is not None:
        others = 2 + sum(width + 2 for column, width in enumerate(widths) if column != wrapped)
        widths[wrapped] = min(widths[wrapped], max(WIDTH - others, 20))
    return "\n".join(_line(line, widths, numbers, wrapped) for line in lines)


def _line(cells: Sequence[str], widths: Sequence[int], numbers: Collection[int], wrapped: int | None) -> str:
    """One row of a table, several lines high where its wrapped cell is."""
    columns = [
        textwrap.wrap(cell, widths[column], break_long_words=False) or [""] if column == wrapped else [cell]
        for column, cell in enumerate(cells)
    ]
    height = max(len(column) for column in columns)
    lines = []
    for row in range(height):
        texts = [column[row] if row < len(column) else "" for column in columns]
        set_out = [text.rjust(widths[i]) if i in numbers else text.ljust(widths[i]) for i, text in enumerate(texts)]
        lines.append(("  " + "  ".join(set_out)).rstrip())
    return "\n".join(lines)
