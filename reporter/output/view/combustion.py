"""Combustion: the O2-CO2 diagram, what the balance gives, measured against expected, findings."""

from __future__ import annotations

from collections.abc import Sequence

from reporter.ledger import Entry
from reporter.outcome import RunResult
from reporter.output.charts import DiagramPoint, FactorBand, FuelLine, OxygenDiagram, oxygen_diagram
from reporter.output.finding_words import finding_words
from reporter.output.numbers import capital, formulas
from reporter.output.view.desk import Desk
from reporter.output.view.model import Block, Column, Picture, Row, Table
from reporter.output.view.runs import layout, rows_table, unit_and_basis
from reporter.output.view.standing import DAGGER, dagger
from reporter.output.view.tabular import aligned, side_by_side

#: Percent oxygen of dry air: in physics, and as the methods print it (the fuel factor's range).
_OXYGEN_OF_AIR, _OXYGEN_PRINTED = 20.95, 20.9


def combustion(desk: Desk) -> tuple[Block, ...]:
    """The parts of the page; those without numbers are left out."""
    runs = desk.outcome.runs
    blocks = [_diagram(desk)]
    tables = rows_table(desk, runs, layout().combustion)
    if tables:
        blocks.append(Block(title="Air, fuel and products", tables=tables, notes=_air(desk)))
    blocks.append(_balance(desk))
    blocks.append(Block(title="Findings", notes=_findings(desk) or (desk.words("lead.no_findings"),)))
    return tuple(block for block in blocks if block.tables or block.pictures or block.notes)


def _air(desk: Desk) -> tuple[str, ...]:
    """The dry air the balance is made with."""
    ledger = desk.outcome.ledger
    oxygen, mass = ledger.get("air.physical.oxygen"), ledger.get("air.physical.molar_mass")
    if oxygen is None or mass is None:
        return ()
    texts = {name: desk.number_text(entry.key) for name, entry in (("oxygen", oxygen), ("mass", mass))}
    source = desk.origin_kind(oxygen).partition(", ")[0]
    return (formulas(desk.words("lead.air", source=source, **texts)),)


def _findings(desk: Desk) -> tuple[str, ...]:
    """Findings in words, those of several runs once."""
    said = finding_words(desk.outcome.findings, desk.phrases)
    return tuple(formulas(f"{capital(desk.run_names(runs))}: {words}" if runs else words) for runs, words in said)


def _balance(desk: Desk) -> Block:
    """Measured, expected and their difference below each other, a column per run."""
    tables = [made for runs in side_by_side(desk.outcome.runs) if (made := _differences(desk, runs)) is not None]
    recalled = any(DAGGER in str(row.cells[1]) for made in tables for row in made.rows)
    notes = (desk.words("criterion.recalled"),) if recalled else ()
    return Block(title="Measured against expected", tables=tuple(tables), notes=notes)


def _differences(desk: Desk, runs: Sequence[RunResult]) -> Table | None:
    columns = [Column("", width=1.4), Column("", width=2.2), Column("Unit and basis", width=1.8)]
    columns += [Column(f"Run {run.run.run.value}", number=True) for run in runs]
    rows = []
    for label, tails in layout().balance:
        name = formulas(label)
        for tail, word in zip(tails, ("measured", "expected", "difference"), strict=False):
            entries = [_of(desk, run, tail) for run in runs]
            found = next((entry for entry in entries if entry is not None), None)
            if found is not None:
                word = "expected; not measured" if word == "expected" and name else word
                words = f"{word}{_range(desk, found.key) if tail.endswith('fuel_factor') else ''}"
                rows.append(Row((name, words, unit_and_basis(found), *desk.row(entries))))
                name = ""
    return aligned(Table(tuple(columns), tuple(rows))) if rows else None


def _range(desk: Desk, key: str) -> str:
    """The range a measured fuel factor was checked against, with a dagger where it is recalled."""
    checks = [check for check in desk.outcome.checks if check.value == key]
    if not checks:
        return ""
    ends = " to ".join(f"{desk.number_text(check.bound)}{dagger(desk, (check.bound,))}" for check in checks)
    return f"; expected range {ends}"


def _of(desk: Desk, run: RunResult, tail: str) -> Entry | None:
    return desk.outcome.ledger.get(f"run.{run.key}.{tail}")


def _diagram(desk: Desk) -> Block:
    """The diagram, where a run has dry O2 and CO2."""
    points = [point for run in desk.outcome.runs if (point := _point(desk, run)) is not None]
    if not points:
        return Block()
    fuels = ", ".join(dict.fromkeys(fuel.fuel.value for fuel in desk.outcome.record.fuels)) or "fuel"
    bars = desk.words("lead.diagram_bars") if any(point.oxygen_half for point in points) else ""
    diagram = OxygenDiagram(_line(desk, fuels, points), tuple(points), _band(desk), bars)
    title = f"Dry oxygen and carbon dioxide of {len(points)} runs beside the line of {fuels}."
    return Block(text=(desk.words("lead.diagram"),), pictures=(Picture(oxygen_diagram(diagram, title=title)),))


def _point(desk: Desk, run: RunResult) -> DiagramPoint | None:
    oxygen, dioxide = _of(desk, run, "o2.dry"), _of(desk, run, "co2.dry")
    if oxygen is None or dioxide is None:
        return None
    expected = _of(desk, run, "combustion.co2_expected")
    halves = [_of(desk, run, f"{gas}.uncertainty") for gas in ("o2", "co2")]
    half = [0.0 if entry is None else 2 * float(entry.value) for entry in halves]
    return DiagramPoint(
        label=f"run {run.run.run.value}",
        oxygen=float(oxygen.value),
        carbon_dioxide=float(dioxide.value),
        oxygen_half=half[0],
        carbon_dioxide_half=half[1],
        expected=None if expected is None else float(expected.value),
    )


def _line(desk: Desk, fuels: str, points: Sequence[DiagramPoint]) -> FuelLine | None:
    """The line of complete combustion through the CO2 expected at a run's oxygen."""
    for point in points:
        if point.expected is not None and point.oxygen < _OXYGEN_OF_AIR:
            most = point.expected * _OXYGEN_OF_AIR / (_OXYGEN_OF_AIR - point.oxygen)
            return FuelLine(fuels, most, _OXYGEN_OF_AIR)
    return None


def _band(desk: Desk) -> FactorBand | None:
    """The range of the fuel factor as the checks of this test used it."""
    ends: dict[str, float] = {}
    for check in desk.outcome.checks:
        if check.value.endswith("combustion.fuel_factor"):
            ends.setdefault(check.relation, float(desk.outcome.ledger[check.bound].value))
    if "at least" not in ends or "at most" not in ends:
        return None
    return FactorBand("range of the fuel factor", ends["at least"], ends["at most"], _OXYGEN_PRINTED)
