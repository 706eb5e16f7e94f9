"""The combustion balance of a run for the fuel, or the mixture of fuels, that burned."""

from __future__ import annotations

from reporter.ledger import Entry
from reporter.reduction.bases import RunBook
from reporter.reduction.book import Book


def balance(book: Book, about: RunBook, share: dict[str, Entry]) -> None:
    """Placeholder until the balance is joined."""
