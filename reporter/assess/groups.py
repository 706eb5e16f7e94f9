"""Runs of different groups are never averaged together: which of them a limit is about."""

from __future__ import annotations

import re
from collections.abc import Sequence

from reporter.ledger import slug
from reporter.record import Limit, text_of
from reporter.reduction.bases import RunBook


def groups(runs: Sequence[RunBook]) -> dict[str, tuple[RunBook, ...]]:
    """The runs by group, in time order; runs without a group are one of their own."""
    found: dict[str, list[RunBook]] = {}
    for about in runs:
        found.setdefault(text_of(about.run.group).strip(), []).append(about)
    return {name: tuple(members) for name, members in found.items()}


def suffix_of(runs: Sequence[RunBook], chosen: Sequence[RunBook]) -> str:
    """What is appended to the key of an average over one of several groups; nothing where there is one."""
    if len(groups(runs)) < 2 or not chosen:
        return ""
    return f".group_{slug(text_of(chosen[0].run.group))}"


def runs_of(limit: Limit, runs: Sequence[RunBook]) -> tuple[RunBook, ...]:
    """The runs a limit is about: all, or those of the one group that Applies when names; none where it names none."""
    by_name = groups(runs)
    if len(by_name) < 2:
        return tuple(runs)
    words = text_of(limit.applies_when)
    named = [name for name in by_name if name and re.search(rf"(?<!\w){re.escape(name)}(?!\w)", words, re.IGNORECASE)]
    return by_name[named[0]] if len(named) == 1 else ()
