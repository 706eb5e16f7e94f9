"""Criteria as they are printed: what repeats with the same values stands once, with the runs it applies to."""

from __future__ import annotations

import re
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

from reporter.outcome import Check, Outcome
from reporter.output.numbers import runs_text

#: The run at the end of a check's title, and on which side of it the check stands.
_RUN = re.compile(r"(?:^|, )(?P<side>before |after )?run [^,]*$")
#: The end of a range a bound is, which the bound itself says too.
_END = re.compile(r"(?:^|, )(?:lower|upper) end(?: of the range expected)?(?=,|$)")


@dataclass(frozen=True, slots=True)
class Applied:
    """One or several checks printed as one: criterion, what it was applied to, and the checks."""

    criterion: str
    about: str
    checks: tuple[Check, ...]

    @property
    def check(self) -> Check:
        """The check whose numbers stand for all."""
        return self.checks[0]

    @property
    def title(self) -> str:
        """Criterion and what it was applied to."""
        return ", ".join(part for part in (self.criterion, self.about) if part)


def applied(outcome: Outcome, checks: Iterable[Check]) -> list[Applied]:
    """The checks in their order, each printed line once.

    One reading that closes a run and opens the next is one line; so is what has the same numbers in every run,
    and both ends of a range where both are met.
    """
    checks = tuple(checks)
    missed = {check.value for check in checks if not check.met}
    alike: dict[tuple[str, str, str], list[Check]] = {}
    for check in checks:
        words = _particulars(check, ends=check.value in missed)
        alike.setdefault((_criterion(check), check.gas, words), []).append(check)
    return [line for (_, _, words), some in alike.items() for line in _lines(outcome, some, words)]


def _criterion(check: Check) -> str:
    return check.title.partition(",")[0]


def _particulars(check: Check, *, ends: bool) -> str:
    """What a check is of, without its run; with the end of the range where a value misses one end."""
    words = _RUN.sub("", check.title.partition(",")[2].strip())
    return words if ends else _END.sub("", words).removeprefix(", ")


def _lines(outcome: Outcome, checks: Sequence[Check], words: str) -> list[Applied]:
    ledger = outcome.ledger
    bounds: dict[str, set[float]] = {}
    for check in checks:
        bounds.setdefault(check.value, set()).add(float(ledger[check.bound].value))
    numbers = {(float(ledger[key].value), *sorted(of_key)) for key, of_key in bounds.items()}
    same = len(numbers) == 1 and len({check.met for check in checks}) == 1
    groups: dict[tuple[str, str, bool], list[Check]] = {}
    for check in checks:
        name = "" if same else check.value
        end = "" if check.met else check.bound
        groups.setdefault((name, end, check.met), []).append(check)
    return [_line(outcome, some, words) for some in groups.values()]


def _line(outcome: Outcome, checks: Sequence[Check], words: str) -> Applied:
    """Several checks as one, with the runs of all."""
    first = checks[0]
    runs = tuple(dict.fromkeys(run for check in checks for run in check.runs))
    parts = [words, _run_words(outcome, checks, runs)]
    about = ", ".join(part for part in parts if part)
    return Applied(_criterion(first), about, tuple(checks))


def _run_words(outcome: Outcome, checks: Sequence[Check], runs: Sequence[str]) -> str:
    """The runs of a line: nothing where a check of no run in particular applies to all of them."""
    found = [_RUN.search(check.title) for check in checks]
    named = [match for match in found if match is not None]
    names = [outcome.run(run).run.run.value for run in runs]
    if not named:
        return runs_text(names) if 0 < len(runs) < len(outcome.runs) else ""
    sides = {match["side"] or "" for match in named}
    if len(runs) > 1 and len({check.value for check in checks}) == 1 and "" not in sides:
        return f"between runs {'–'.join(names)}"
    side = sides.pop() if len(sides) == 1 else ""
    return f"{side}{runs_text(names)}" if names else named[0].group().removeprefix(", ")
