"""Each quality criterion with the numbers it rests on."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from itertools import zip_longest

from reporter.ledger import Entry, FromEquation
from reporter.outcome import Check
from reporter.output.applied import Applied, applied
from reporter.output.numbers import FIGURE_SPACE, FRACTION, capital, formulas, unit_text
from reporter.output.view.desk import Desk, gas_name
from reporter.output.view.model import Block, Cell, Column, Row, Table
from reporter.output.view.standing import dagger

#: The citation of an equation that is no more than the criterion it serves.
_CRITERION = "criterion"


def criteria(desk: Desk) -> tuple[Block, ...]:
    """One table for each criterion, grouped by the equation its value is computed by."""
    groups: dict[str, list[Applied]] = {}
    for line in applied(desk.outcome, desk.outcome.checks):
        groups.setdefault(line.criterion, []).append(line)
    whole: dict[str, list[Check]] = {}
    for check in desk.outcome.checks:
        whole.setdefault(check.title.partition(",")[0], []).append(check)
    blocks = [_block(desk, title, whole[title], lines) for title, lines in groups.items()]
    if any(dagger(desk, (check.bound, check.alternative)) for check in desk.outcome.checks):
        blocks.insert(0, Block(text=(desk.words("criterion.recalled"),)))
    return tuple(blocks)


def _block(desk: Desk, title: str, checks: Sequence[Check], lines: Sequence[Applied]) -> Block:
    """Value and answer of each application, two beside each other; bound and equation stand above."""
    values = [desk.outcome.ledger[check.value] for check in checks]
    common, shared = _common_bounds(desk, checks), _share_bounds(desk, checks)
    bounds = [key for check in checks for key in (check.bound, check.alternative) if key and desk.is_read(key)]
    cells = _cells(desk, lines, bound=not shared)
    half = -(-len(cells) // 2)
    pairs = zip_longest(cells[:half], cells[half:], fillvalue="")
    words = f"{common}{_value_words(desk, values)}{_bound_source(desk, checks)}"
    table = Table((Column(""), Column("")), tuple(Row(pair) for pair in pairs))
    return Block(title=formulas(title), anchor=desk.place(bounds), text=(words,), tables=(table,))


def _cells(desk: Desk, lines: Sequence[Applied], *, bound: bool) -> list[Cell]:
    """One cell per line: what was checked, its value, whether it is met; below, a difference that decides."""
    texts = []
    for line in lines:
        check = line.check
        name = formulas(", ".join(part for part in (gas_name(check.gas), line.about) if part))
        if bound:
            name += f", {_bounds_in_words(desk, line.checks)}"
        more = ""
        if needs_alternative(desk, check):
            more = f"\n{desk.words('criterion.difference')} {desk.number_text(check.difference)}"
        texts.append((name, desk.number_text(check.value, unit=False), check, more))
    widest = max(len(value) for _, value, *_ in texts)
    return [
        Cell(
            f"{name}\t{value.rjust(widest, FIGURE_SPACE)}\u2002"
            f"{desk.words('criterion.met' if check.met else 'criterion.not_met')}{more}",
            to=check.value,
            strong=not check.met,
        )
        for name, value, check, more in texts
    ]


def needs_alternative(desk: Desk, check: Check) -> bool:
    """Whether a share beyond its bound makes the difference decide."""
    ledger = desk.outcome.ledger
    return bool(check.alternative) and abs(float(ledger[check.value].value)) > float(ledger[check.bound].value)


def _common_bounds(desk: Desk, checks: Sequence[Check]) -> str:
    """The criterion in a sentence; its paragraph alone where the bounds stand beside the values."""
    source = f"{cited(checks)}{_adopted_by(desk, checks)}"
    if not _share_bounds(desk, checks):
        return f"{capital(source)}. "
    words = _bounds_in_words(desk, checks)
    others = dict.fromkeys(desk.number_text(check.alternative) for check in checks if check.alternative)
    if others:
        words += f", {desk.words('criterion.alternative')} {' / '.join(others)}"
    return f"{words[:1].upper()}{words[1:]} ({source}). "


def _bounds_in_words(desk: Desk, checks: Sequence[Check]) -> str:
    bounds = dict.fromkeys(bound_words(desk, check) for check in checks)
    return f" {desk.words('criterion.and')} ".join(bounds)


def _adopted_by(desk: Desk, checks: Sequence[Check]) -> str:
    """The methods that adopt a criterion, each with a dagger where its number is recalled."""
    marks: dict[str, str] = {}
    for check in checks:
        words = check.citation.number if adopts(check) else ""
        marks[words] = marks.get(words, "") or dagger(desk, (check.bound, check.alternative))
    own = marks.pop("", "")
    stem = "as adopted by "
    methods = ", ".join(f"{words.removeprefix(stem)}{mark}" for words, mark in marks.items())
    return f"{own}; {stem}{methods}" if methods else own


def _share_bounds(desk: Desk, checks: Sequence[Check]) -> bool:
    """Whether the bounds, as printed, stand once above the table: a single one, or one for each end of a range."""
    bounds = {(check.relation, bound_words(desk, check)) for check in checks}
    return len(bounds) == len({relation for relation, _ in bounds})


def _value_words(desk: Desk, values: Sequence[Entry]) -> str:
    """The equation of the values, with their unit."""
    origin = values[0].origin
    if not isinstance(origin, FromEquation):
        return ""
    units = {_unit_words(value) for value in values}
    unit = f" [{units.pop()}]" if len(units) == 1 and units != {""} else ""
    equation = origin.equation
    source = f" ({equation.citation.text()})" if equation.citation.document != _CRITERION else ""
    return f"{desk.words('criterion.value_by')}{unit} {desk.equation_line(equation)}{source}."


def _bound_source(desk: Desk, checks: Sequence[Check]) -> str:
    """What a computed bound is made of, for bounds that have words of their own."""
    said = desk.phrases.all("bound")
    origins = [desk.outcome.ledger[check.bound].origin for check in checks]
    names = dict.fromkeys(origin.equation.name for origin in origins if isinstance(origin, FromEquation))
    return "".join(f" {formulas(said[name])}" for name in names if name in said)


def _unit_words(entry: Entry) -> str:
    """The unit of a value; a fraction by volume says so."""
    return unit_text(entry.unit) or (FRACTION if "moisture" in entry.key else "")


def cited(checks: Sequence[Check]) -> str:
    """Where a criterion is printed, once, without the methods that adopt it."""
    texts = [replace(check.citation, number="") if adopts(check) else check.citation for check in checks]
    return " and ".join(dict.fromkeys(formulas(citation.text()) for citation in texts))


def adopts(check: Check) -> bool:
    """Whether a criterion is one of Method 7E that another method adopts."""
    return check.citation.number.startswith("as adopted")


def bound_words(desk: Desk, check: Check) -> str:
    """How a value has to stand to its bound, in words; of a share of span the magnitude counts."""
    bound = desk.number_text(check.bound)
    if check.difference or check.relation == "within":
        return desk.words("criterion.within", bound=bound)
    name = f"criterion.{check.relation.replace(' ', '_')}"
    return f"{desk.words(name)} {bound}"
