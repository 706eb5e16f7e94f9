"""Pages of other PDF documents placed on pages of the report.

The report holds one page for each page to bind in, with its own number and footer; the foreign page is drawn
below the line that names it, as one picture marked as an artifact.  Its links and scripts stay behind, what
its stamps and filled fields look like comes along.
"""

from __future__ import annotations

import logging
from collections.abc import Iterator, Mapping
from contextlib import contextmanager
from io import BytesIO
from typing import Any

from reporter.output.foreign import Copier

#: The frame of a foreign page on the page of the report [pt]: margins at the sides, below and above.
_SIDE, _BELOW, _ABOVE = 51.0, 57.0, 92.0
#: Bit of an annotation's flags: hidden.  Links and pop-up notes have no look of their own on paper.
_HIDDEN = 0b10
_NOT_DRAWN = ("/Link", "/Popup")
#: A document of more pages is not bound in; a page's side is at most this long [pt].
MAX_PAGES, MAX_SIDE = 500, 20_000.0


def page_count(content: bytes) -> int:
    """The number of pages of a PDF; 0 where it is encrypted, too long, or a page cannot be bound in.

    Each page is put into a document that is thrown away, so that binding the pages cannot meet a surprise.
    """
    import pydyf
    from pypdf import PdfReader

    with _quiet():
        try:
            reader = PdfReader(BytesIO(content))
            if reader.is_encrypted or len(reader.pages) > MAX_PAGES:
                return 0
            pdf = pydyf.PDF()
            copier = Copier(pdf)
            for page in reader.pages:
                _form(pdf, copier, page, _box(page))
            return len(reader.pages)
        except Exception:  # whatever a damaged or hostile document raises means one thing
            return 0


@contextmanager
def _quiet() -> Iterator[None]:
    """The reader of PDF files tells its doubts to nobody: the remark in the report says what matters."""
    log = logging.getLogger("pypdf")
    level = log.level
    log.setLevel(logging.CRITICAL + 1)
    try:
        yield
    finally:
        log.setLevel(level)


def bind(document: Any, pdf: Any, contents: Mapping[str, tuple[bytes, int]]) -> None:
    """Draw foreign pages on the pages that carry their anchors.

    Parameters
    ----------
    document
        The rendered report, whose pages know their anchors.
    pdf
        The PDF being written.
    contents
        Bytes and page count of each document, by the anchor of its first page.
    """
    from pypdf import PdfReader

    places = {name: at for at, page in enumerate(document.pages) for name in page.anchors}
    numbers = pdf.pages["Kids"][::3]
    with _quiet():
        for anchor, (content, count) in contents.items():
            copier = Copier(pdf)
            for at, page in enumerate(PdfReader(BytesIO(content)).pages[:count], 1):
                name = anchor if at == 1 else f"{anchor}-{at}"
                own = pdf.objects[numbers[places[name]]]
                _place(pdf, own, copier, page, f"Bound-{name}")


def _place(pdf: Any, own: Any, copier: Copier, page: Any, name: str) -> None:
    """One foreign page as a form on one page of the report, scaled to the frame."""
    import pydyf

    left, bottom, right, top = _box(page)
    width, height = right - left, top - bottom
    turn = _turn(page)
    shown_width, shown_height = (height, width) if turn in (90, 270) else (width, height)
    media = own["MediaBox"]
    frame_width, frame_height = media[2] - 2 * _SIDE, media[3] - _BELOW - _ABOVE
    scale = min(frame_width / shown_width, frame_height / shown_height, 1.0)
    x = (media[2] - scale * shown_width) / 2
    y = _BELOW + frame_height - scale * shown_height
    form = _form(pdf, copier, page, (left, bottom, right, top))
    resources = next(one for one in pdf.objects if one.number and one.reference == own["Resources"])
    resources["XObject"][name] = form.reference
    a, b, c, d, e, f = _turned(turn, left, bottom, width, height)
    numbers = (scale * a, scale * b, scale * c, scale * d, scale * e + x, scale * f + y)
    matrix = " ".join(f"{value:.5f}" for value in numbers)
    before, after = pydyf.Stream([b"q"]), pydyf.Stream([f"Q /Artifact BMC q {matrix} cm /{name} Do Q EMC".encode()])
    pdf.add_object(before)
    pdf.add_object(after)
    own["Contents"] = pydyf.Array([before.reference, own["Contents"], after.reference])


def _box(page: Any) -> tuple[float, float, float, float]:
    """Left, bottom, right and top of what a page shows; a ValueError where that is no area of a page's size."""
    box = page.cropbox
    across = sorted((float(box.left), float(box.right)))
    up = sorted((float(box.bottom), float(box.top)))
    if not all(0.0 < high - low <= MAX_SIDE and abs(low) <= MAX_SIDE for low, high in (across, up)):
        raise ValueError("the page has no area of a page's size")
    return across[0], up[0], across[1], up[1]


def _held(page: Any, key: str) -> Any:
    """What a page holds under a key, itself or by reference; None where there is nothing."""
    given = page.get(key)
    return None if given is None else given.get_object()


def _turn(page: Any) -> int:
    """How far a page is turned clockwise, in degrees; 0 where that is no number."""
    given = _held(page, "/Rotate")
    return int(given) % 360 if isinstance(given, (int, float)) else 0


def _turned(
    turn: int, left: float, bottom: float, width: float, height: float
) -> tuple[float, float, float, float, float, float]:
    """The matrix that brings a page's box to the origin, turned clockwise as the page asks."""
    if turn == 90:
        return 0.0, -1.0, 1.0, 0.0, -bottom, left + width
    if turn == 180:
        return -1.0, 0.0, 0.0, -1.0, left + width, bottom + height
    if turn == 270:
        return 0.0, 1.0, -1.0, 0.0, bottom + height, -left
    return 1.0, 0.0, 0.0, 1.0, -left, -bottom


def _form(pdf: Any, copier: Copier, page: Any, box: tuple[float, float, float, float]) -> Any:
    """A foreign page as one form: its content, and the appearance of its stamps and filled fields."""
    import pydyf
    from pypdf.generic import DictionaryObject

    content = page.get_contents()
    drawn = [b"q", content.get_data() if content is not None else b"", b"Q"]
    own = _held(page, "/Resources")
    resources = copier.direct(own if isinstance(own, DictionaryObject) else DictionaryObject())
    forms: Any = resources.setdefault("XObject", pydyf.Dictionary())
    if isinstance(forms, bytes):
        forms = resources["XObject"] = copier.direct(own["/XObject"].get_object())
    for at, (annotation, look) in enumerate(_looks(page)):
        forms[f"Look{at}"] = copier.copied(look)
        matrix = _onto(annotation["/Rect"], look.get_object())
        drawn.append(f"q {matrix} cm /Look{at} Do Q".encode())
    extra = {"Type": "/XObject", "Subtype": "/Form", "BBox": pydyf.Array(box), "Resources": resources}
    if isinstance(_held(page, "/Group"), DictionaryObject):
        extra["Group"] = copier.copied(page.get("/Group"))
    form = pydyf.Stream(drawn, extra, compress=True)
    pdf.add_object(form)
    return form


def _looks(page: Any) -> Iterator[tuple[Any, Any]]:
    """Annotations that show something on paper, with the stream that draws it."""
    from pypdf.generic import DictionaryObject

    for reference in _held(page, "/Annots") or ():
        annotation = reference.get_object()
        if not isinstance(annotation, DictionaryObject):
            continue
        if annotation.get("/Subtype") in _NOT_DRAWN or int(annotation.get("/F", 0)) & _HIDDEN:
            continue
        normal = annotation.get("/AP", {}).get_object().get("/N") if "/AP" in annotation else None
        if normal is not None and not hasattr(normal.get_object(), "get_data"):
            normal = normal.get_object().get(annotation.get("/AS"))
        if normal is not None and hasattr(normal.get_object(), "get_data"):
            yield annotation, normal


def _onto(rectangle: Any, look: Any) -> str:
    """The matrix that puts an appearance's box on its annotation's rectangle (turned looks keep their box)."""
    x0, y0, x1, y1 = (float(v) for v in rectangle)
    left, bottom, right, top = (float(v) for v in look.get("/BBox", (0, 0, 1, 1)))
    across = (x1 - x0) / ((right - left) or 1.0)
    up = (y1 - y0) / ((top - bottom) or 1.0)
    return f"{across:.5f} 0 0 {up:.5f} {x0 - across * left:.5f} {y0 - up * bottom:.5f}"
