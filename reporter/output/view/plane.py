"""The sampling plane in words: its distances in diameters, beside those of Method 1."""

from __future__ import annotations

from reporter.methods.method_1 import DISTANCES
from reporter.output.view.desk import Desk

_SIDES = ("upstream", "downstream")


def with_diameters(desk: Desk, side: str, text: str) -> str:
    """A distance as it was entered, and in diameters of the duct where these are known."""
    key = f"location.disturbance_{side}.diameters"
    if not text or key not in desk.outcome.ledger:
        return text
    return desk.words("plane.diameters", text=text, count=desk.number_text(key))


def plane_words(desk: Desk) -> tuple[str, ...]:
    """How the two distances stand to those of Method 1, with the paragraph; nothing where one of them is not known."""
    if not all(f"location.disturbance_{side}.diameters" in desk.outcome.ledger for side in _SIDES):
        return ()
    state = "ideal" if _is_at_least(desk, "ideal") else "between" if _is_at_least(desk, "least") else "below"
    words = {name: _distances(desk, name) for name in ("ideal", "least")}
    return (desk.words(f"plane.{state}", **words, paragraph=DISTANCES.text()),)


def _is_at_least(desk: Desk, name: str) -> bool:
    """Whether both distances are as long as the method's."""
    ledger = desk.outcome.ledger
    pairs = [(f"location.disturbance_{side}.diameters", f"location.criterion.{side}.{name}") for side in _SIDES]
    return all(float(ledger[found].value) >= float(ledger[bound].value) for found, bound in pairs)


def _distances(desk: Desk, name: str) -> str:
    counts = {side: desk.number_text(f"location.criterion.{side}.{name}") for side in _SIDES}
    return desk.words("plane.distances", **counts)
