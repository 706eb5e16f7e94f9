"""Criteria held for the methods of a test that were not applied to it, each with the reason."""

from __future__ import annotations

from collections.abc import Sequence

from reporter.methods.criteria import Criterion, criteria, not_held_reason
from reporter.output.numbers import formulas
from reporter.output.view.desk import Desk, gas_name, said
from reporter.record import Channel


def not_applied(desk: Desk) -> tuple[str, ...]:
    """A sentence per criterion with the gases it was not applied to; criteria the record cannot hold among them."""
    labels: dict[tuple[str, str], dict[str, None]] = {}
    gases: dict[tuple[str, str], dict[str, None]] = {}
    reasons: dict[str, dict[str, None]] = {}
    for channel in desk.outcome.record.channels:
        method, gas = said(channel.method), gas_name(channel.gas.value)
        held = criteria(method)
        if held is None:
            reasons.setdefault(not_held_reason(method), {})[gas] = None
            continue
        applied = _applied(desk, channel)
        for name, criterion in held.items():
            if name not in applied and not _stands_for_another(name, applied):
                key = (_paragraph(criterion), _reason(desk, name))
                labels.setdefault(key, {})[criterion.label] = None
                gases.setdefault(key, {})[gas] = None
    made = [
        f"{formulas(_joined(list(labels[paragraph, words])))} ({paragraph}), {', '.join(names)}: {words}."
        for (paragraph, words), names in gases.items()
    ]
    return (*made, *(formulas(f"{', '.join(names)}: {reason}.") for reason, names in reasons.items()))


def _joined(labels: Sequence[str]) -> str:
    """Labels of one reason, what they begin with once."""
    heads = {label.rpartition(", ")[0] for label in labels}
    if len(labels) == 1 or len(heads) > 1:
        return "; ".join(labels)
    return f"{heads.pop()}, {' and '.join(label.rpartition(', ')[2] for label in labels)}"


def _applied(desk: Desk, channel: Channel) -> set[str]:
    """Names of the criteria that stand behind the checks of a channel's gas."""
    mine = [check for check in desk.outcome.checks if gas_name(check.gas) == gas_name(channel.gas.value)]
    names = {check.bound.split(".")[2] for check in mine if check.bound.startswith("criterion.")}
    if any(check.key.endswith(".within_span") for check in mine):
        names.add("run_mean_share")
    return names


def _stands_for_another(name: str, applied: set[str]) -> bool:
    """The alternative converter test is not asked for where the other one was made."""
    return name == "peak_decrease" and "converter_efficiency" in applied


def _reason(desk: Desk, name: str) -> str:
    known = desk.phrases.all("not_applied")
    return known.get(name, known["other"])


def _paragraph(criterion: Criterion) -> str:
    return criterion.citation.text().partition(", as adopted")[0]
