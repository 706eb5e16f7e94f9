"""Links of table cells, anchors of rows and numbers of pages, put into the laid-out report.

Each element with an ``id`` has a style of its own, and so has everything in it: in a report with hundreds of
keys that is most of the time of the layout.  Elements carry ``data-key`` (an anchor) and ``data-to`` (a link)
instead; where they came to stand is read from the laid-out pages.

The number of the page of an anchor is known when all pages are laid out.  An element with ``data-page`` (that anchor)
keeps room for it by figure spaces at its end, so that no page is laid out a second and a third time for its numbers.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

#: One CSS pixel in points.
_POINT = 0.75

#: The room kept for one digit of the number of a page.
_DIGIT = "\u2007"

Rectangle = tuple[float, float, float, float]
#: Page number, key and rectangle of each linked cell.
CellLinks = list[tuple[int, str, Rectangle]]


def settle(document: Any, places: Mapping[str, str]) -> CellLinks:
    """Make every key an anchor of its page, write the numbers of pages, and tell where the linked cells are.

    Parameters
    ----------
    document
        The laid-out report.
    places
        The anchor of each key; keys that share a derivation row share its anchor.
    """
    sharing: dict[str, list[str]] = {}
    for key, anchor in places.items():
        sharing.setdefault(anchor, []).append(key)
    links: CellLinks = []
    for number, page in enumerate(document.pages):
        for element, rectangle in _carriers(page):
            anchor, target = element.get("data-key"), element.get("data-to")
            if anchor and anchor not in page.anchors:
                page.anchors.update(dict.fromkeys((anchor, *sharing.get(anchor, ())), rectangle))
            if target:
                links.append((number, target, rectangle))
    _number(document)
    return links


def _number(document: Any) -> None:
    """Write the numbers of pages into the room kept for them; the texts are set in type when they are painted."""
    pages = {anchor: number for number, page in enumerate(document.pages, start=1) for anchor in page.anchors}
    for page in document.pages:
        for box in page._page_box.descendants():
            layout = getattr(box, "pango_layout", None)
            if layout is None or not layout.text.endswith(_DIGIT):
                continue
            number = pages.get(box.element.get("data-page") or "")
            if number is not None:
                before = layout.text.rstrip(_DIGIT)
                layout.text = box.text = before + str(number).rjust(len(layout.text) - len(before), _DIGIT)


def _carriers(page: Any) -> Iterator[tuple[Any, Rectangle]]:
    """The elements of a page that carry a key, each with the rectangle of its outermost box."""
    seen: set[int] = set()
    for box in page._page_box.descendants():
        element = box.element
        if element is None or isinstance(element, str) or id(element) in seen:
            continue
        seen.add(id(element))
        if element.get("data-key") or element.get("data-to"):
            left, top, width, height = box.hit_area()
            yield element, (left, top, left + width, top + height)


def add_links(document: Any, pdf: Any, links: CellLinks) -> None:
    """A link annotation over each cell, printable as the variant of the file asks."""
    import pydyf

    numbers = pdf.pages["Kids"][::3]
    for number, key, (left, top, right, bottom) in links:
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
