"""Which runs count: valid by every channel a result rests on, not excluded, long enough for the limit."""

from __future__ import annotations

from reporter.ledger import Entry, FromCells
from reporter.methods.criteria import all_met
from reporter.record import Limit, text_of
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book
from reporter.reduction.coverage import long_enough


def included(book: Book, about: RunBook) -> Entry | None:
    """0 where the user excluded the run, with the reason's cell; None where it was not excluded."""
    why = about.run.excluded_because
    if why is None or not text_of(why).strip():
        return None
    key = about.key("included")
    found = book.ledger.get(key)
    return found or book.ledger.enter(key, 0.0, "1", FromCells(why.place, why.value))


def channels_behind(book: Book, about: RunBook, entry: Entry) -> list[str]:
    """The channels a result of a run rests on, by key segment."""
    behind = book.ledger.roots([entry.key], everything=True)
    return [
        segment
        for segment in about.corrected
        if about.key(f"{segment}.corrected") in behind or about.key(f"{segment}.mean") in behind
    ]


def counts(book: Book, about: RunBook, entry: Entry, limit: Limit | None, *, whatever_excluded: bool = False) -> Entry:
    """The indicator that a result counts, made of the validity of its channels and the run's own state.

    A result that rests on no analyzer (heat input, load, flow) counts where every channel of the run does.
    """
    segments = channels_behind(book, about, entry)
    flags = [about.corrected[segment].valid for segment in segments]
    name = "_".join(segments) or "all"
    shut = None if whatever_excluded else included(book, about)
    if shut is not None:
        flags.append(shut)
        name += ".included"
    if limit is not None and limit.minimum_run_length is not None:
        lanes_behind = [about.corrected[segment].lane for segment in segments]
        flags += [long_enough(book, about.run, lane, limit) for lane in lanes_behind or (None,)]
        name += f".limit_{limit.key}"
    if not segments:
        flags += [corrected.valid for corrected in about.corrected.values()]
    if not flags:
        return book.state(about.key("valid.all"), 1.0, "1", "no analyzer in this run")
    return book.apply(all_met, about.key(f"valid.{name}"), {"flags": flags})
