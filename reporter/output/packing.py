"""The objects of a finished PDF packed once: the writer would pack each of them twice, at the slowest level."""

from __future__ import annotations

import zlib
from typing import Any

#: Level of compression: nearly as small as the highest, in a fraction of its time.
_LEVEL = 6


def pack(pdf: Any) -> None:
    """Compress the streams of a PDF about to be written and put every object in its written form.

    Nothing may be changed in the PDF afterwards.
    """
    import pydyf

    class Written(pydyf.Object):  # type: ignore[misc]
        """A dictionary or array as its bytes."""

        data = b""

    for at, item in enumerate(pdf.objects):
        if item.free == "f":
            continue
        if isinstance(item, pydyf.Stream):
            _pack_stream(item)
        else:
            written = Written()
            written.number, written.data = item.number, item.data
            pdf.objects[at] = written


def _pack_stream(stream: Any) -> None:
    if not stream.compress:
        return
    plain = b"\n".join(_bytes(item) for item in stream.stream)
    stream.stream = [zlib.compress(plain, _LEVEL)]
    stream.extra = {**stream.extra, "Filter": "/FlateDecode"}
    stream.compress = False


def _bytes(item: Any) -> bytes:
    """An item of a stream as the writer gives it."""
    if isinstance(item, bytes):
        return item
    if isinstance(item, str):
        return item.encode("ascii")
    return bytes(item.data)
