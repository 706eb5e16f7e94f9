"""Clock minutes in words: what follows without a gap stands as a range."""

from __future__ import annotations

from collections.abc import Sequence
from datetime import datetime, timedelta

_MINUTE = timedelta(minutes=1)


def minutes_text(minutes: Sequence[datetime]) -> str:
    """Minutes in order, each named by its beginning, as ranges with their number.

    Examples
    --------
    >>> minutes_text([datetime(2026, 4, 14, 10, minute) for minute in (52, 53, 54)])
    '10:52 to 10:54, 3 minutes'
    >>> minutes_text([datetime(2026, 4, 14, 10, minute) for minute in (2, 52, 53)])
    '10:02, 10:52 to 10:53, together 3 minutes'
    """
    spans: list[tuple[datetime, datetime]] = []
    for minute in minutes:
        if spans and minute - spans[-1][1] == _MINUTE:
            spans[-1] = (spans[-1][0], minute)
        else:
            spans.append((minute, minute))
    texts = [f"{a:%H:%M}" if a == b else f"{a:%H:%M} to {b:%H:%M}" for a, b in spans]
    count = f"{'together ' if len(spans) > 1 else ''}{len(minutes)} minute{'' if len(minutes) == 1 else 's'}"
    return ", ".join([*texts, count])
