"""Pages of other PDF documents placed on pages of the report.

The report holds one page for each page to bind in, with its own number and footer; the foreign page is drawn
below the line that names it, as one picture marked as an artifact.  Its links and scripts stay behind, what
its stamps and filled fields look like comes along.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from io import BytesIO
from typing import Any

from reporter.output.foreign import Copier

#: The frame of a foreign page on the page of the report [pt]: margins at the sides, below and above.
_SIDE, _BELOW, _ABOVE = 51.0, 57.0, 92.0
#: Bit of an annotation's flags: hidden.  Links and pop-up notes have no look of their own on paper.
_HIDDEN = 0b10
_NOT_DRAWN = ("/Link", "/Popup")


def page_count(content: bytes) -> int:
    """The number of pages of a PDF; 0 where it is encrypted or cannot be read."""
    from pypdf import PdfReader
    from pypdf.errors import PyPdfError

    try:
        reader = PdfReader(BytesIO(content))
        return 0 if reader.is_encrypted else len(reader.pages)
    except (PyPdfError, ValueError, KeyError, TypeError, AttributeError, RecursionError):
        return 0


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
    for anchor, (content, count) in contents.items():
        copier = Copier(pdf)
        for at, page in enumerate(PdfReader(BytesIO(content)).pages[:count], 1):
            name = anchor if at == 1 else f"{anchor}-{at}"
            own = pdf.objects[numbers[places[name]]]
            _place(pdf, own, copier, page, f"Bound-{name}")


def _place(pdf: Any, own: Any, copier: Copier, page: Any, name: str) -> None:
    """One foreign page as a form on one page of the report, scaled to the frame."""
    import pydyf

    box = page.cropbox
    left, bottom, width, height = (float(v) for v in (box.left, box.bottom, box.width, box.height))
    turn = int(page.get("/Rotate", 0)) % 360
    shown_width, shown_height = (height, width) if turn in (90, 270) else (width, height)
    media = own["MediaBox"]
    frame_width, frame_height = media[2] - 2 * _SIDE, media[3] - _BELOW - _ABOVE
    scale = min(frame_width / shown_width, frame_height / shown_height, 1.0)
    x = (media[2] - scale * shown_width) / 2
    y = _BELOW + frame_height - scale * shown_height
    form = _form(pdf, copier, page, (left, bottom, left + width, bottom + height))
    resources = next(one for one in pdf.objects if one.number and one.reference == own["Resources"])
    resources["XObject"][name] = form.reference
    a, b, c, d, e, f = _turned(turn, left, bottom, width, height)
    numbers = (scale * a, scale * b, scale * c, scale * d, scale * e + x, scale * f + y)
    matrix = " ".join(f"{value:.5f}" for value in numbers)
    before, after = pydyf.Stream([b"q"]), pydyf.Stream([f"Q /Artifact BMC q {matrix} cm /{name} Do Q EMC".encode()])
    pdf.add_object(before)
    pdf.add_object(after)
    own["Contents"] = pydyf.Array([before.reference, own["Contents"], after.reference])


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

    content = page.get_contents()
    drawn = [b"q", content.get_data() if content is not None else b"", b"Q"]
    resources = copier.direct(page.get("/Resources", {}))
    forms: Any = resources.setdefault("XObject", pydyf.Dictionary())
    if isinstance(forms, bytes):
        forms = resources["XObject"] = copier.direct(page["/Resources"]["/XObject"].get_object())
    for at, (annotation, look) in enumerate(_looks(page)):
        forms[f"Look{at}"] = copier.copied(look)
        matrix = _onto(annotation["/Rect"], look.get_object())
        drawn.append(f"q {matrix} cm /Look{at} Do Q".encode())
    extra = {"Type": "/XObject", "Subtype": "/Form", "BBox": pydyf.Array(box), "Resources": resources}
    if "/Group" in page:
        extra["Group"] = copier.copied(page["/Group"])
    form = pydyf.Stream(drawn, extra, compress=True)
    pdf.add_object(form)
    return form


def _looks(page: Any) -> Iterator[tuple[Any, Any]]:
    """Annotations that show something on paper, with the stream that draws it."""
    for reference in page.get("/Annots") or ():
        annotation = reference.get_object()
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
