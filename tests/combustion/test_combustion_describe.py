"""The figures of a fuel for the terminal."""

from __future__ import annotations

import pytest

from reporter.combustion.describe import describe_fuel
from reporter.combustion.fuel import nominal_names
from reporter.equation import System
from reporter.errors import RecordError


@pytest.mark.parametrize("system", list(System), ids=lambda system: system.value)
@pytest.mark.parametrize("name", nominal_names())
def test_every_published_fuel_has_its_figures(name: str, system: System) -> None:
    figures = describe_fuel(name, system)
    labels = [row.label for row in figures]
    for label in (
        "gross heating value",
        "net heating value",
        "F_d published",
        "F_d by composition",
        "F_c published",
        "stoichiometric dry air by mole",
        "stoichiometric dry air by mass",
        "combustion water by mole",
        "highest CO2, dry",
        "F_o by composition",
    ):
        assert label in labels
    assert all(row.source for row in figures)
    text = str(figures)
    assert "assumed" in text
    assert text.startswith(name)
    assert not any(line.endswith(" ") for line in text.splitlines())


def test_published_factors_are_converted_and_the_printed_metric_one_stands_beside() -> None:
    row = describe_fuel("natural gas", System.SI).row("F_c published")
    # Method 19, Table 19-2 prints 1,040 scf/MMBtu and 0.287e-7 scm/J, which is 2.8 % above its conversion.
    assert row.value == pytest.approx(2.791e-8, rel=1e-3)
    assert "+2.8 %" in row.note
    assert "2.87e-08" in row.note


def test_a_composition_has_no_published_factors() -> None:
    figures = describe_fuel("CH4 96, N2 4")
    assert not any("published" in row.label for row in figures)
    assert "assumed" not in str(figures)
    with pytest.raises(KeyError):
        figures.row("F_d published")


def test_an_analysis_without_heating_value_says_so() -> None:
    figures = describe_fuel("C 87 H 13")
    assert "No heating value" in str(figures)
    assert not any(row.label.startswith("F_d") for row in figures)
    # Without sulfur and oxygen: 87/12.011 + 13/(4 * 1.008) mol of oxygen per 100 g.
    assert figures.row("stoichiometric oxygen by mole").value == pytest.approx(
        10 * (87 / 12.011 + 13 / 4.032), rel=1e-12
    )


def test_text_that_is_no_fuel() -> None:
    with pytest.raises(RecordError):
        describe_fuel("peat")
