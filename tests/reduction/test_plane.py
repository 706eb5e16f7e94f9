"""The sampling plane: diameters by Method 1, and its standing to 8 and 2, 2 and 0.5 diameters (read in a copy)."""

from __future__ import annotations

from datetime import UTC, datetime
from typing import Any

import pytest
from hypothesis import given
from hypothesis import strategies as st

from reporter.methods.method_1 import equivalent_diameter
from reporter.outcome import Outcome
from reporter.output.view.build import build_view
from reporter.record import Location
from tests.record_factory import assessed, number, text, value

SIDE = st.floats(0.1, 50.0)
UP, DOWN = "location.disturbance_upstream.diameters", "location.disturbance_downstream.diameters"


def _placed(**fields: Any) -> Outcome:
    return assessed(location=Location(**fields))


def _section(outcome: Outcome) -> tuple[dict[str, str], tuple[str, ...]]:
    view = build_view(outcome, datetime(2026, 1, 1, tzinfo=UTC), "0.1.0")
    block = view.sections["location"][0]
    return {item.label: item.text for item in block.facts}, block.notes


@given(SIDE, SIDE)
def test_the_equivalent_diameter_is_four_areas_over_the_perimeter(length: float, width: float) -> None:
    """Definition of the hydraulic diameter, common practice."""
    assert equivalent_diameter(length=length, width=width) == pytest.approx(
        4 * length * width / (2 * length + 2 * width), rel=1e-12
    )


def test_a_round_duct_with_units_mixed() -> None:
    """340 in and 8 ft behind and before a duct of 42 in: 8.095 and 2.286 diameters."""
    outcome = _placed(
        duct_shape=text("circular"),
        diameter=number(42.0, "in"),
        disturbance_upstream=number(340.0, "in"),
        disturbance_downstream=number(8.0, "ft"),
    )
    assert value(outcome, UP) == pytest.approx(340 / 42, rel=1e-12)
    assert value(outcome, DOWN) == pytest.approx(96 / 42, rel=1e-12)
    facts, notes = _section(outcome)
    assert facts["Disturbance upstream"] == "340 in, 8.1 diameters"
    assert facts["Disturbance downstream"] == "8 ft, 2.3 diameters"
    assert (
        "at or beyond the distances Method 1 aims at: 8 diameters behind the last disturbance and 2 before" in notes[0]
    )
    assert notes[0].endswith("(Method 1, § 11.1.1).")


def test_a_rectangular_duct_has_its_equivalent_diameter() -> None:
    """2 · 54 · 48 / 102 = 50.82 in."""
    outcome = _placed(
        duct_shape=text("rectangular"),
        width=number(54.0, "in"),
        depth=number(48.0, "in"),
        disturbance_upstream=number(420.0, "in"),
    )
    assert value(outcome, "location.equivalent_diameter") == pytest.approx(50.8235, abs=1e-4)
    assert value(outcome, UP) == pytest.approx(8.264, abs=1e-3)
    facts, notes = _section(outcome)
    assert facts["Equivalent diameter"] == "50.82\u00a0in"
    assert notes == ()  # one distance says nothing of the plane


@pytest.mark.parametrize(
    ("upstream", "downstream", "words"),
    [
        (8.0, 2.0, "aims at: 8 diameters"),
        (7.99, 2.0, "more traverse points"),
        (8.0, 1.99, "more traverse points"),
        (2.0, 0.5, "more traverse points"),
        (1.99, 0.5, "the authority decides"),
        (8.0, 0.49, "the authority decides"),
    ],
)
def test_the_plane_against_the_distances_of_the_method(upstream: float, downstream: float, words: str) -> None:
    outcome = _placed(
        diameter=number(1.0, "m"),
        disturbance_upstream=number(upstream, "m"),
        disturbance_downstream=number(downstream, "m"),
    )
    assert words in _section(outcome)[1][0]


def test_without_a_diameter_nothing_is_computed() -> None:
    for fields in ({}, {"diameter": number(0.0, "m")}, {"width": number(1.0, "m")}):
        outcome = _placed(disturbance_upstream=number(8.0, "m"), **fields)
        assert UP not in outcome.ledger
