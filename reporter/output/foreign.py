"""Objects of a foreign PDF copied into the report: read by one library, written by the other."""

from __future__ import annotations

from collections.abc import Collection
from typing import Any

#: Ties to the foreign document that a copied object must not keep.
_LEFT_BEHIND = ("/Parent", "/StructParent", "/StructParents")
#: What a stream may say of files elsewhere, of actions, and of the program that made it.
_LEFT_BEHIND_OF_STREAMS = (
    *_LEFT_BEHIND,
    *("/F", "/FFilter", "/FDecodeParms", "/Ref", "/OPI", "/Alternates"),
    *("/A", "/AA", "/OpenAction", "/JS", "/Metadata", "/PieceInfo", "/AF"),
)
#: How deep objects may lie in each other: no drawn page needs more.
MAX_DEPTH = 100


class Copier:
    """Copies objects of one foreign document, each once.

    Only what a drawn page needs is ever asked for: resources and appearance streams.  The data of a stream
    are copied as they are packed.
    """

    def __init__(self, pdf: Any) -> None:
        self.pdf = pdf
        self.done: dict[int, Any] = {}
        self.depth = 0

    def copied(self, value: Any) -> Any:
        """A value as it stands inside another object: a reference where the foreign file has one.

        Raises
        ------
        ValueError
            The object holds others deeper than `MAX_DEPTH`.
        """
        from pypdf.generic import IndirectObject

        self.depth += 1
        if self.depth > MAX_DEPTH:
            raise ValueError(f"objects more than {MAX_DEPTH} deep in each other")
        try:
            if not isinstance(value, IndirectObject):
                return self.direct(value)
            if value.idnum not in self.done:
                self._copy(value.idnum, value.get_object())
            return self.done[value.idnum]
        finally:
            self.depth -= 1

    def _copy(self, number: int, value: Any) -> None:
        """Copy an object that has a number; it is known before its content, which may lead back to it."""
        import pydyf
        from pypdf.generic import ArrayObject, DictionaryObject, StreamObject

        if isinstance(value, StreamObject):
            stream = pydyf.Stream([value._data])
            self._register(number, stream)
            stream.extra.update(self._entries(value, _LEFT_BEHIND_OF_STREAMS))
        elif isinstance(value, DictionaryObject):
            table = pydyf.Dictionary()
            self._register(number, table)
            table.update(self._entries(value))
        elif isinstance(value, ArrayObject):
            array = pydyf.Array()
            self._register(number, array)
            array.extend(self.copied(item) for item in list.__iter__(value))
        else:
            self.done[number] = _written(value)

    def _register(self, number: int, made: Any) -> None:
        self.pdf.add_object(made)
        self.done[number] = made.reference

    def direct(self, value: Any) -> Any:
        """A value without a number of its own, for a new object."""
        import pydyf
        from pypdf.generic import ArrayObject, DictionaryObject, IndirectObject

        if isinstance(value, IndirectObject):
            value = value.get_object()
        if isinstance(value, DictionaryObject):
            return pydyf.Dictionary(self._entries(value))
        if isinstance(value, ArrayObject):
            return pydyf.Array([self.copied(item) for item in list.__iter__(value)])
        return _written(value)

    def _entries(self, value: Any, left_behind: Collection[str] = _LEFT_BEHIND) -> dict[str, Any]:
        return {
            _written(key).decode("latin-1")[1:]: self.copied(value.raw_get(key))
            for key in value
            if key not in left_behind and key != "/Length"
        }


def _written(value: Any) -> bytes:
    """A name, number, string, truth value or nothing, as the foreign file writes it; what is not there is nothing."""
    from io import BytesIO

    if value is None:
        return b"null"

    stream = BytesIO()
    value.write_to_stream(stream)
    return stream.getvalue()
