"""Rehearsals made once, and what the program makes of their workbooks."""

from __future__ import annotations

import tempfile
from functools import cache
from pathlib import Path
from typing import Any

from reporter.api import opened
from reporter.equation import System
from reporter.outcome import Outcome
from reporter.rehearse import Fault, Order, Rehearsal, rehearse

#: An invented gas fuel by mole and an invented wood by weight.
GAS = "CH4 94, C2H6 4, N2 2"
WOOD = "C 33.5 H 4.0 N 0.15 S 0.02 O 28.3 water 33 ash 1.03 HHV 13.4 MJ/kg"


@cache
def made(order: Order) -> tuple[Rehearsal, Outcome]:
    """A rehearsal and the outcome of its workbook."""
    rehearsal = rehearse(order)
    return rehearsal, outcome_of(rehearsal.workbook)


def outcome_of(workbook: bytes) -> Outcome:
    """The outcome of a workbook given as bytes."""
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "rehearsal.xlsx"
        path.write_bytes(workbook)
        return opened(path)


def faulty(fault: Fault, **more: Any) -> tuple[Rehearsal, Outcome]:
    """A rehearsal with a fault on natural gas, US units."""
    return made(Order(fault=fault, **more))


def value(outcome: Outcome, run: int, key: str) -> float:
    """The value of an entry of a run."""
    return float(outcome.ledger[f"run.{run}.{key}"].value)


def codes(outcome: Outcome) -> set[str]:
    """The codes of the problems, apart from those every rehearsal has."""
    return {problem.code for problem in outcome.problems} - {"negative-reading", "synthetic-test"}


def not_met(outcome: Outcome) -> list[str]:
    """Titles of the criteria that are not met, each with its gas."""
    return [f"{check.gas} {check.title}".strip() for check in outcome.checks if not check.met]


def hints(outcome: Outcome) -> set[tuple[str, str]]:
    """What the readings are said to look like: run (empty for all) and name of the phrase."""
    return {(found.run, found.phrase.removeprefix("hint.")) for found in outcome.findings if found.phrase}


SYSTEMS = (System.US, System.SI)
