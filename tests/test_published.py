"""Every published worked example against the program's equations, at the digits printed.

`published_map` says which equation answers a name of the files, and which names none answers.  A case from memory
runs and says so in its id; an example that is inconsistent in itself, or of a name without an answer, is a skip with
its reason.
"""

from __future__ import annotations

import json
from dataclasses import dataclass
from decimal import Decimal
from pathlib import Path
from typing import Any

import pytest
from published_map import ANSWERS, NOT_ANSWERED, TABLES, TABLES_NOT_HELD

from reporter.combustion.components import atoms_of, find_component
from reporter.combustion.stoichiometry import air_by_mass_of_gas, stoichiometric_air, stoichiometric_oxygen
from reporter.gases import molar_mass

ELEMENTS = {"carbon": "C", "hydrogen": "H", "sulfur": "S", "oxygen": "O"}
ROOT = Path(__file__).parent / "published"
FILES = {
    path.relative_to(ROOT).as_posix(): json.loads(path.read_text("utf-8")) for path in sorted(ROOT.rglob("*.json"))
}


@dataclass(frozen=True)
class Case:
    """One worked example: its file, the equation's name, what goes in and what is printed."""

    file: str
    status: str
    note: str
    name: str
    equation: str
    inputs: dict[str, Any]
    expected: float
    digits: str

    @property
    def answer(self) -> str:
        """The key of the equation that answers it."""
        unit = next((key for key in ANSWERS if key == f"{self.equation} [{_unit_of(self)}]"), "")
        return unit or self.equation


def _unit_of(case: Case) -> str:
    rows = FILES[case.file]["cases"]
    return str(next(row["expected_unit"] for row in rows if row["name"] == case.name))


CASES = [
    Case(
        file=file,
        status=content["status"],
        note=content["note"],
        name=row["name"],
        equation=row["equation"],
        inputs=row["inputs"],
        expected=float(row["expected"]),
        digits=row["digits"],
    )
    for file, content in FILES.items()
    for row in content.get("cases", [])
]


def _id(case: Case) -> str:
    return f"{case.file}: {case.name}" + (f" [{case.status}]" if case.status != "found" else "")


def _half_unit(digits: str) -> float:
    """Half a unit of the last printed digit."""
    exponent = Decimal(digits).as_tuple().exponent
    assert isinstance(exponent, int)
    return float(Decimal(5).scaleb(exponent - 1))


@pytest.mark.parametrize("case", CASES, ids=_id)
def test_published_example(case: Case) -> None:
    if case.equation in NOT_ANSWERED:
        pytest.skip(f"{case.equation}: {NOT_ANSWERED[case.equation]}")
    if case.status == "inconsistent":
        pytest.skip(f"inconsistent in itself: {case.note}")
    found = ANSWERS[case.answer](case.inputs)
    # The last term is the rounding of the arithmetic itself, for results that fall on the half.
    assert found == pytest.approx(case.expected, rel=0, abs=_half_unit(case.digits) + 1e-9 * abs(case.expected))


def test_every_name_has_an_answer_or_a_reason() -> None:
    names = {case.answer for case in CASES}
    assert names - set(ANSWERS) - set(NOT_ANSWERED) == set()
    assert set(ANSWERS) & set(NOT_ANSWERED) == set()


def test_no_answer_and_no_reason_stands_for_nothing() -> None:
    names = {case.answer for case in CASES}
    assert set(ANSWERS) - names == set()
    assert set(NOT_ANSWERED) - names == set()


def test_every_table_is_read_by_a_test_or_not_held() -> None:
    tables = {file for file, content in FILES.items() if "table" in content}
    assert tables == set(TABLES) | set(TABLES_NOT_HELD)
    for file, reader in TABLES.items():
        assert Path(file).name in (ROOT.parent.parent / reader).read_text("utf-8")


@pytest.mark.parametrize(
    "row", FILES["combustion/iso_6976_molar_heating_values.json"]["table"], ids=lambda row: str(row["gas"])
)
def test_molar_heating_values_are_the_standards(row: dict[str, Any]) -> None:
    found = find_component(row["gas"])
    assert found is not None
    assert found.heat == (row["hhv_2016"] or row["hhv_1995"])


# Classical constants of a worksheet, with oxygen 23.15 % by mass; the file notes up to 0.6 % for other air models.
@pytest.mark.parametrize(
    "row", FILES["combustion/worksheet_air_constants.json"]["table"], ids=lambda row: str(row["fuel"])
)
def test_air_by_mass_against_the_classical_constants(row: dict[str, Any]) -> None:
    atoms = atoms_of(row["fuel"])
    counts = {name: float(atoms.get(element, 0)) for name, element in ELEMENTS.items()}
    air = stoichiometric_air(oxygen_needed=stoichiometric_oxygen(**counts), air_oxygen=0.2095)
    found = air_by_mass_of_gas(air=air, air_mass=28.964, fuel_mass=molar_mass(atoms))
    assert found == pytest.approx(row["air"], rel=6e-3)


def test_printed_digits_are_those_of_the_expected_value() -> None:
    for case in CASES:
        assert float(Decimal(case.digits)) == pytest.approx(case.expected, rel=1e-12), _id(case)


def test_half_a_unit_of_the_last_digit() -> None:
    assert _half_unit("0.13") == 0.005
    assert _half_unit("8991") == 0.5
    assert _half_unit("1.194e-7") == pytest.approx(5e-11, rel=1e-12)
