"""Method 7E: corrections, errors, criteria."""

from __future__ import annotations

import numpy as np
import pytest

from reporter.basis import DRY, WET, Moisture
from reporter.errors import BasisError, EquationError
from reporter.ledger import Ledger, Stated
from reporter.methods import criteria as held
from reporter.methods import method_7e as m7e
from reporter.methods.method_3b import fo_range, fuel_factor

# The expected numbers are those of the printed forms worked by hand; the corrected mean is the worked case of
# common practice (2.1 with zero 0.3 and 9.4 on a gas of 10 is 1.978).


def test_corrected_mean_with_a_zero_gas() -> None:
    assert m7e.corrected_zero(average=2.1, zero=0.3, upscale=9.4, certified=10.0) == pytest.approx(1.978, abs=5e-4)


def test_both_corrections_agree_where_the_low_gas_is_zero() -> None:
    zero = m7e.corrected_zero(average=44.1, zero=0.4, upscale=49.2, certified=50.3)
    low = m7e.corrected_low(average=44.1, low=0.4, upscale=49.2, certified=50.3, low_certified=0.0)
    assert low == pytest.approx(zero, rel=1e-12)


def test_the_correction_gives_each_certified_value_at_its_own_reading() -> None:
    given = {"low": 5.3, "upscale": 49.2, "certified": 50.3, "low_certified": 5.0}
    assert m7e.corrected_low(average=5.3, **given) == pytest.approx(5.0, rel=1e-12)
    assert m7e.corrected_low(average=49.2, **given) == pytest.approx(50.3, rel=1e-12)


def test_equal_zero_and_upscale_readings_have_no_correction() -> None:
    with pytest.raises(EquationError):
        m7e.corrected_zero(average=2.0, zero=5.0, upscale=5.0, certified=10.0)


def test_errors_are_shares_of_the_span_and_signed() -> None:
    assert m7e.calibration_error(direct=49.0, certified=50.0, span=100.0) == pytest.approx(-1.0)
    # Bias is against the direct reading: the certified value does not enter.
    assert m7e.system_bias(system=48.0, direct=49.0, span=100.0) == pytest.approx(-1.0)
    assert m7e.dilution_error(system=0.5, dilution_factor=100.0, certified=50.5, span=100.0) == pytest.approx(-0.5)
    assert m7e.drift(after=-1.0, before=0.5) == 1.5
    assert m7e.converter_efficiency(direct=46.5, certified=50.0) == pytest.approx(93.0)
    assert m7e.peak_decrease(peak=50.0, final=49.2) == pytest.approx(1.6)
    assert m7e.converter_corrected(no=40.0, nox=49.3, efficiency=93.0) == pytest.approx(50.0)
    assert m7e.no2_difference(nox=49.3, no=40.0) == pytest.approx(9.3)


def test_dry_and_wet_are_inverse_and_change_the_facet() -> None:
    ledger = Ledger()
    said = Stated("test value")
    wet = ledger.enter("wet", 84.0, "ppm", said, basis=WET.but(expressed_as="NO2"))
    bws = ledger.enter("bws", 0.16, "1", said)
    dry = ledger.apply(m7e.dry_from_wet, "dry", {"c": wet, "bws": bws})
    assert dry.value == pytest.approx(100.0, rel=1e-14)
    assert dry.basis == DRY.but(expressed_as="NO2")
    back = ledger.apply(m7e.wet_from_dry, "back", {"c": dry, "bws": bws})
    assert back.value == pytest.approx(84.0, rel=1e-14)
    assert back.basis.moisture is Moisture.WET
    with pytest.raises(BasisError, match="must be wet"):
        ledger.apply(m7e.dry_from_wet, "again", {"c": dry, "bws": bws})
    with pytest.raises(BasisError, match="must be dry"):
        ledger.apply(m7e.wet_from_dry, "again", {"c": wet, "bws": bws})


def test_a_corrected_mean_keeps_the_basis_of_the_run_mean() -> None:
    ledger = Ledger()
    said = Stated("test value")
    readings = ledger.enter("readings", [10.0, 12.0, 14.0], "ppm", said, basis=WET)
    average = ledger.apply(m7e.run_mean, "average", {"readings": readings})
    assert (average.value, average.unit, average.basis) == (12.0, "ppm", WET)
    for key, value in (("pre", 0.2), ("post", 0.4), ("up_pre", 19.8), ("up_post", 20.2), ("gas", 20.5)):
        ledger.enter(key, value, "ppm", said, basis=WET)
    zero = ledger.apply(m7e.mean_of_two, "zero", {"before": "pre", "after": "post"})
    upscale = ledger.apply(m7e.mean_of_two, "upscale", {"before": "up_pre", "after": "up_post"})
    inputs = {"average": average, "zero": zero, "upscale": upscale, "certified": "gas"}
    assert ledger.apply(m7e.corrected_zero, "corrected", inputs).basis == WET


@pytest.mark.parametrize(
    ("share", "difference", "met"),
    [(5.0, 9.0, 1.0), (-5.0, 9.0, 1.0), (5.1, 0.5, 1.0), (5.1, -0.5, 1.0), (-5.1, 0.51, 0.0)],
)
def test_a_criterion_is_met_by_its_share_or_by_its_alternative(share: float, difference: float, met: float) -> None:
    assert held.criterion_met(share=share, bound=5.0, difference=difference, alternative=0.5) == met


def test_indicators_at_their_bounds() -> None:
    assert held.share_within(value=-2.0, bound=2.0) == 1.0
    assert held.at_or_below(value=100.0, bound=100.0) == 1.0
    assert held.at_or_below(value=-3.0, bound=2.0) == 1.0
    assert held.at_or_above(value=89.9, bound=90.0) == 0.0
    assert held.below(value=20.0, bound=20.0) == 0.0
    assert held.all_met(flags=[1.0, 1.0, 0.0]) == 0.0
    assert held.any_met(flags=[1.0, 0.0, 0.0]) == 1.0


def test_indicators_on_draws() -> None:
    shares = np.array([1.0, 6.0, -6.0])
    met = held.criterion_met(share=shares, bound=5.0, difference=np.array([9.0, 0.1, 9.0]), alternative=0.5)
    assert list(met) == [1.0, 1.0, 0.0]


@pytest.mark.parametrize(
    ("written", "family"),
    [("7E", "7E"), ("EPA Method 7e", "7E"), ("40 CFR 60 Method 10", "10"), ("3A", "3A"), ("ASTM", ""), ("100", "")],
)
def test_methods_as_people_write_them(written: str, family: str) -> None:
    assert held.method_family(written) == family


# 40 CFR 60 App. A-4, Method 7E, 13.1 to 13.5 and 16.2.2; Method 3A has 0.5 % in place of 0.5 ppm.
@pytest.mark.parametrize(
    ("method", "name", "bound", "alternative", "unit", "paragraph"),
    [
        ("7E", "calibration_error", 2.0, 0.5, "ppm", "13.1"),
        ("7E", "system_bias", 5.0, 0.5, "ppm", "13.2"),
        ("7E", "drift", 3.0, 0.5, "ppm", "13.3"),
        ("7E", "interference", 2.5, None, "", "13.4"),
        ("7E", "converter_efficiency", 90.0, None, "", "13.5"),
        ("7E", "peak_decrease", 2.0, None, "", "16.2.2"),
        ("6C", "system_bias", 5.0, 0.5, "ppm", "13.2"),
        ("10", "drift", 3.0, 0.5, "ppm", "13.3"),
        ("3A", "system_bias", 5.0, 0.5, "%", "13.2"),
    ],
)
def test_criteria_of_the_method_families(
    method: str, name: str, bound: float, alternative: float | None, unit: str, paragraph: str
) -> None:
    table = held.criteria(method)
    assert table is not None
    row = table[name]
    assert (row.bound, row.alternative, row.alternative_unit) == (bound, alternative, unit)
    assert row.paragraph == paragraph


def test_only_nox_has_a_converter() -> None:
    tables = {method: held.criteria(method) or {} for method in ("7E", "6C", "10", "3A")}
    assert [method for method, table in tables.items() if "converter_efficiency" in table] == ["7E"]


def test_a_method_without_held_criteria_says_so() -> None:
    assert held.criteria("25A") is None
    assert "25A" in held.not_held_reason("Method 25A")
    assert held.criteria("Method 320") is None
    assert held.not_held_reason("Method 320") == "no criteria are held for Method 320"
    assert held.not_held_reason("7E") == ""


def test_limits_of_the_counterparts_are_marked_as_recalled() -> None:
    table = held.criteria("3A")
    assert table is not None
    assert {row.status for row in table.values()} == {"memory"}


# Common practice: O2 3 %, CO2 10 % is 1.79, CO2 9 % is 1.989 (outside), CO2 11 % is 1.627 for natural gas.
@pytest.mark.parametrize(("co2", "fo", "inside"), [(10.0, 1.79, True), (9.0, 1.989, False), (11.0, 1.627, True)])
def test_fuel_factor_against_the_range_of_natural_gas(co2: float, fo: float, inside: bool) -> None:
    found = fuel_factor(o2=3.0, co2=co2)
    expected = fo_range("Natural gas")
    assert expected is not None
    assert found == pytest.approx(fo, abs=5e-4)
    assert (expected.low <= found <= expected.high) is inside
