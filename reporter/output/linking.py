"""Links of table cells, and the anchors of keys that share a row.

A cell that is a link as a whole needs no box of its own for it: the cell carries a name, its rectangle is
known once the page is laid out, and the link is put there when the file is written.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from itertools import count
from typing import Any

_MARK = "~"
_TO = re.compile(r' data-to="#([^"]+)"')
#: One CSS pixel in points.
_POINT = 0.75

CellLinks = list[tuple[int, str, tuple[float, float, float, float]]]


def named_cells(text: str) -> str:
    """The HTML with a name of its own for each linked cell, which holds the key it leads to."""
    number = count(1)
    return _TO.sub(lambda match: f' id="{_MARK}{next(number)}{_MARK}{match.group(1)}"', text)


def take_cells(document: Any) -> CellLinks:
    """Page number, key and rectangle of each linked cell; their names are no anchors any more."""
    found: CellLinks = []
    for number, page in enumerate(document.pages):
        for name in [name for name in page.anchors if name.startswith(_MARK)]:
            found.append((number, name.split(_MARK)[2], page.anchors.pop(name)))
    return found


def add_aliases(document: Any, places: Mapping[str, str]) -> None:
    """An anchor for each key that shares its derivation row with another."""
    by_anchor: dict[str, list[str]] = {}
    for key, anchor in places.items():
        if key != anchor:
            by_anchor.setdefault(anchor, []).append(key)
    for page in document.pages:
        for anchor in [anchor for anchor in page.anchors if anchor in by_anchor]:
            page.anchors.update(dict.fromkeys(by_anchor[anchor], page.anchors[anchor]))


def add_links(document: Any, pdf: Any, cells: CellLinks) -> None:
    """A link annotation over each cell, printable as the variant of the file asks."""
    import pydyf

    numbers = pdf.pages["Kids"][::3]
    for number, key, (left, top, right, bottom) in cells:
        height = document.pages[number].height
        corners = (left, height - bottom, right, height - top)
        link = pydyf.Dictionary(
            {
                "Type": "/Annot",
                "Subtype": "/Link",
                "Rect": pydyf.Array([round(_POINT * corner, 2) for corner in corners]),
                "BS": pydyf.Dictionary({"W": 0}),
                "F": 4,
                "Contents": pydyf.String(key),
                "Dest": pydyf.String(key),
            }
        )
        pdf.add_object(link)
        pdf.objects[numbers[number]].setdefault("Annots", pydyf.Array()).append(link.reference)
