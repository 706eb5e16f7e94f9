"""Method 19: the nine forms on one gas, their bases and their selection; F factors; tables."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

import pytest

from reporter.basis import DRY, EPA_STANDARD, EPA_STANDARD_SI, NORMAL, WET, Basis, Moisture
from reporter.equation import Citation, System
from reporter.errors import BasisError, LedgerError, RecordError
from reporter.ledger import Entry, FromTable, Ledger, Stated
from reporter.methods import method_19 as m19
from reporter.methods.f_factors import eq_19_13, eq_19_14, eq_19_15, eq_19_16, eq_19_17, eq_19_18
from reporter.methods.mass_concentration import molar_volume
from reporter.methods.mass_rate import mass_rate_by_flow, mass_rate_by_heat_input, ppm_to_mass
from reporter.methods.method_3b import fo_range, fuel_factor_from_f, mixed_fuel_tolerance
from reporter.methods.tables import conversion, factor_tables, fuel_factors, fuel_names, unit_rows
from reporter.units import factor

PUBLISHED = Path(__file__).parents[1] / "published"


def _table(path: str) -> list[dict[str, Any]]:
    rows: list[dict[str, Any]] = json.loads((PUBLISHED / path).read_text(encoding="utf-8"))["table"]
    return rows


@pytest.mark.parametrize(("fd", "fw", "fc"), [(8710.0, 10610.0, 1040.0), (9780.0, 10640.0, 1800.0)])
@pytest.mark.parametrize("o2", [0.0, 3.0, 8.5, 15.0, 19.0])
def test_nine_forms_agree_on_one_gas(fd: float, fw: float, fc: float, o2: float) -> None:
    # One gas per million Btu: dry gas of the fuel, excess dry air, combustion water (F_w - F_d).
    dry = fd * 20.9 / (20.9 - o2)
    bws = (fw - fd) / (dry + fw - fd)
    co2 = 100.0 * fc / dry
    cd, cw = 1e-5, 1e-5 * (1.0 - bws)
    o2w, co2w = o2 * (1.0 - bws), co2 * (1.0 - bws)
    rate = cd * dry
    assert m19.eq_19_1(cd=cd, fd=fd, o2=o2) == pytest.approx(rate, rel=1e-12)
    # Eq. 19-2 is exact only for dry ambient air.
    assert m19.eq_19_2(cw=cw, fw=fw, bwa=0.0, o2=o2w) == pytest.approx(rate, rel=1e-12)
    assert m19.eq_19_3(cw=cw, fd=fd, bws=bws, o2=o2w) == pytest.approx(rate, rel=1e-12)
    assert m19.eq_19_4(cw=cw, fd=fd, bws=bws, o2=o2) == pytest.approx(rate, rel=1e-12)
    assert m19.eq_19_5(cd=cd, fd=fd, bws=bws, o2=o2w) == pytest.approx(rate, rel=1e-12)
    assert m19.eq_19_6(cd=cd, fc=fc, co2=co2) == pytest.approx(rate, rel=1e-12)
    assert m19.eq_19_7(cw=cw, fc=fc, co2=co2w) == pytest.approx(rate, rel=1e-12)
    assert m19.eq_19_8(cw=cw, fc=fc, bws=bws, co2=co2) == pytest.approx(rate, rel=1e-12)
    assert m19.eq_19_9(cd=cd, fc=fc, bws=bws, co2=co2w) == pytest.approx(rate, rel=1e-12)


STACK, AMBIENT, NONE = m19.MoistureOf.STACK, m19.MoistureOf.AMBIENT, m19.MoistureOf.NONE
O2, CO2 = m19.Diluent.O2, m19.Diluent.CO2


@pytest.mark.parametrize(
    ("c", "diluent", "d", "moisture", "number", "inputs"),
    [
        (DRY, O2, DRY, NONE, "Eq. 19-1", ("cd", "fd", "o2")),
        (WET, O2, WET, AMBIENT, "Eq. 19-2", ("cw", "fw", "bwa", "o2")),
        (WET, O2, WET, STACK, "Eq. 19-3", ("cw", "fd", "bws", "o2")),
        (WET, O2, DRY, STACK, "Eq. 19-4", ("cw", "fd", "bws", "o2")),
        (DRY, O2, WET, STACK, "Eq. 19-5", ("cd", "fd", "bws", "o2")),
        (DRY, CO2, DRY, NONE, "Eq. 19-6", ("cd", "fc", "co2")),
        (WET, CO2, WET, NONE, "Eq. 19-7", ("cw", "fc", "co2")),
        (WET, CO2, DRY, STACK, "Eq. 19-8", ("cw", "fc", "bws", "co2")),
        (DRY, CO2, WET, STACK, "Eq. 19-9", ("cd", "fc", "bws", "co2")),
    ],
)
def test_the_bases_choose_the_form(
    c: Basis,
    diluent: m19.Diluent,
    d: Basis,
    moisture: m19.MoistureOf,
    number: str,
    inputs: tuple[str, ...],
) -> None:
    form = m19.select(c, diluent, d, moisture)
    assert form.equation.citation.number == number
    assert form.inputs == inputs


@pytest.mark.parametrize("moisture", [AMBIENT, NONE])
def test_a_form_that_needs_stack_moisture_is_refused_without(moisture: m19.MoistureOf) -> None:
    with pytest.raises(BasisError, match="moisture of the stack gas"):
        m19.select(WET, O2, DRY, moisture)


def test_an_unknown_moisture_basis_chooses_no_form() -> None:
    with pytest.raises(BasisError, match="moisture basis unknown"):
        m19.select(Basis(moisture=Moisture.UNKNOWN), O2, DRY, STACK)


def _ledger() -> Ledger:
    ledger = Ledger()
    said = Stated("test value")
    ledger.enter("c_dry", 1.2e-5, "lb/ft3", said, basis=DRY.but(standard=EPA_STANDARD, expressed_as="NO2"))
    ledger.enter("c_wet", 1.0e-5, "lb/ft3", said, basis=WET.but(standard=EPA_STANDARD))
    ledger.enter("c_normal", 1.2e-5, "lb/ft3", said, basis=DRY.but(standard=NORMAL))
    ledger.enter("o2_dry", 3.0, "%", said, basis=DRY)
    ledger.enter("o2_wet", 2.5, "%", said, basis=WET)
    ledger.enter("fd", 8710.0, "ft3/MMBtu", FromTable(Citation("m19")), basis=m19.FD_BASIS)
    ledger.enter("fw", 10610.0, "ft3/MMBtu", FromTable(Citation("m19")), basis=m19.FW_BASIS)
    return ledger


def test_an_emission_rate_keeps_only_what_it_is_expressed_as() -> None:
    inputs = {"cd": "c_dry", "fd": "fd", "o2": "o2_dry"}
    assert _ledger().apply(m19.eq_19_1, "e", inputs).basis == Basis(expressed_as="NO2")


@pytest.mark.parametrize(
    "wrong",
    [{"cd": "c_wet"}, {"cd": "c_normal"}, {"o2": "o2_wet"}, {"fd": "fw"}],
    ids=["wet concentration", "0 degC volume", "wet oxygen", "wet F factor"],
)
def test_a_wrong_basis_is_refused(wrong: dict[str, str]) -> None:
    with pytest.raises(BasisError, match="must be"):
        _ledger().apply(m19.eq_19_1, "e", {"cd": "c_dry", "fd": "fd", "o2": "o2_dry"} | wrong)


def test_a_wrong_unit_is_refused() -> None:
    ledger = _ledger()
    ledger.enter("c_ppm", 50.0, "ppm", Stated("test value"), basis=DRY.but(standard=EPA_STANDARD))
    with pytest.raises(LedgerError, match="must be in lb/ft3"):
        ledger.apply(m19.eq_19_1, "e", {"cd": "c_ppm", "fd": "fd", "o2": "o2_dry"})


def test_ppm_becomes_mass_only_with_the_factor_of_its_own_gas() -> None:
    ledger = Ledger(System.SI)
    factor_no2 = conversion("nox")
    k = ledger.enter("k", factor_no2.si, "ng/m3/ppm", FromTable(Citation("m19")), basis=factor_no2.basis(System.SI))
    nox = ledger.enter("nox", 50.0, "ppm", Stated("test value"), basis=DRY.but(expressed_as="NO2"))
    mass = ledger.apply(ppm_to_mass, "mass", {"c": nox, "k": k})
    assert mass.basis == DRY.but(standard=EPA_STANDARD_SI, expressed_as="NO2")
    propane = ledger.enter("thc", 5.0, "ppm", Stated("test value"), basis=DRY.but(expressed_as="C3H8"))
    with pytest.raises(BasisError, match=r"C3H8.*NO2"):
        ledger.apply(ppm_to_mass, "wrong", {"c": propane, "k": k})


def _flow(ledger: Ledger, basis: Basis) -> Entry:
    return ledger.enter("flow", 1e6, "ft3/h", Stated("test value"), basis=basis)


def test_mass_rate_needs_flow_on_the_concentrations_basis() -> None:
    ledger = _ledger()
    flow = _flow(ledger, Basis(moisture=Moisture.DRY, standard=EPA_STANDARD))
    rate = ledger.apply(mass_rate_by_flow, "rate", {"c": "c_dry", "flow": flow})
    assert rate.value == pytest.approx(12.0, rel=1e-14)
    assert rate.basis == Basis(expressed_as="NO2")


@pytest.mark.parametrize(
    "basis",
    [Basis(moisture=Moisture.WET, standard=EPA_STANDARD), Basis(moisture=Moisture.DRY, standard=NORMAL)],
    ids=["wet flow", "0 degC flow"],
)
def test_mass_rate_refuses_another_flow(basis: Basis) -> None:
    ledger = _ledger()
    with pytest.raises(BasisError, match="but the flow is"):
        ledger.apply(mass_rate_by_flow, "rate", {"c": "c_dry", "flow": _flow(ledger, basis)})


def test_mass_rates_in_si_are_those_in_us_units() -> None:
    us = mass_rate_by_heat_input(e=0.05, heat_input=40.0) * factor("lb/h", "kg/h")
    si = mass_rate_by_heat_input.in_system(System.SI)(
        e=0.05 * factor("lb/MMBtu", "ng/J"), heat_input=40.0 * factor("MMBtu/h", "GJ/h")
    )
    assert si == pytest.approx(us, rel=1e-13)
    us = mass_rate_by_flow(c=1e-5, flow=1e6) * factor("lb/h", "kg/h")
    si = mass_rate_by_flow.in_system(System.SI)(c=1e-5 * factor("lb/ft3", "ng/m3"), flow=1e6 * factor("ft3/h", "m3/h"))
    assert si == pytest.approx(us, rel=1e-13)


# Stoichiometric values of the constants of Eqs. 19-13 to 19-15: one atom's dry (or wet) products per pound,
# air of 20.9 % oxygen, from CIAAW atomic weights and the molar volume at 68 °F and 29.92 inHg; the method's
# rounded constants are within 2.6 % (SI water) and the largest ones within 0.8 % of them.
CARBON, HYDROGEN, SULFUR = 12.011, 1.008, 32.06
NITROGEN_ATOM, OXYGEN = 14.007, 15.999
NITROGEN = 79.1 / 20.9


@pytest.mark.parametrize(
    ("name", "moles", "tolerance"),
    [
        ("k_c", (1 + NITROGEN) / CARBON, 0.004),
        ("k_hd", NITROGEN / (4 * HYDROGEN), 0.007),
        ("k_hw", (0.5 + NITROGEN / 4) / HYDROGEN, 0.008),
        ("k_s", (1 + NITROGEN) / SULFUR, 0.015),
        ("k_n", 0.5 / NITROGEN_ATOM, 0.02),
        ("k_o", NITROGEN / (2 * OXYGEN), 0.01),
        ("k_cc", 1 / CARBON, 0.002),
        ("k_w", 1 / (2 * HYDROGEN + OXYGEN), 0.027),
    ],
)
def test_printed_constants_against_stoichiometry(name: str, moles: float, tolerance: float) -> None:
    holders = (eq_19_13, eq_19_14, eq_19_15)
    printed = next(eq.parameters[name].constant for eq in holders if name in eq.parameters)
    assert printed is not None
    per_pound = molar_volume(temperature=527.67, pressure=29.92) * moles / 100.0
    per_kilogram = molar_volume.in_system(System.SI)(temperature=293.15, pressure=101.325) * moles
    assert printed.value(System.US) == pytest.approx(per_pound, rel=tolerance)
    assert printed.value(System.SI) == pytest.approx(per_kilogram, rel=tolerance)


@pytest.mark.parametrize("eq", [eq_19_13, eq_19_14, eq_19_15], ids=lambda eq: str(eq.name))
def test_f_factors_of_an_analysis_agree_in_both_systems(eq: Any) -> None:
    # The rounded constants of the two systems give factors within 0.4 % of one another.
    analysis = {"hydrogen": 5.0, "carbon": 75.0, "sulfur": 1.5, "nitrogen": 1.4, "oxygen": 7.0, "water": 5.0}
    given = {name: value for name, value in analysis.items() if name in eq.parameters}
    us = eq(**given, gcv=13000.0) * factor("ft3/MMBtu", "m3/J")
    si = eq.in_system(System.SI)(**given, gcv=13000.0 * 2.326)
    assert si == pytest.approx(us, rel=4e-3)


def test_mixed_fuels_need_factors_of_one_kind() -> None:
    ledger = _ledger()
    ledger.enter("fd_oil", 9190.0, "ft3/MMBtu", FromTable(Citation("m19")), basis=m19.FD_BASIS)
    ledger.enter("share.gas", 0.6, "1", Stated("test value"))
    ledger.enter("share.oil", 0.4, "1", Stated("test value"))
    mixed = ledger.apply(eq_19_16, "mixed", {"shares": ["share.gas", "share.oil"], "factors": ["fd", "fd_oil"]})
    assert mixed.value == pytest.approx(8902.0, rel=1e-14)
    assert mixed.basis == m19.FD_BASIS
    with pytest.raises(BasisError, match="one basis"):
        ledger.apply(eq_19_16, "wrong", {"shares": ["share.gas", "share.oil"], "factors": ["fd", "fw"]})
    for eq in (eq_19_17, eq_19_18):
        with pytest.raises(BasisError, match="must be"):
            ledger.apply(eq, "wrong", {"shares": ["share.gas", "share.oil"], "factors": ["fd", "fd_oil"]})


# Names of the published table's rows.
ROWS = {
    "anthracite": "anthracite",
    "bituminous and subbituminous coal": "bituminous coal",
    "lignite": "lignite",
    "oil": "distillate oil",
    "natural gas": "natural gas",
    "propane": "propane",
    "butane": "butane",
    "wood": "wood",
    "wood residue": "wood",
    "wood bark": "wood bark",
    "bark": "wood bark",
    "municipal solid waste": "municipal solid waste",
}


@pytest.mark.parametrize("row", _table("part_75/table_1_f_factors.json"), ids=lambda row: str(row["fuel"]))
def test_table_19_2_english_columns_are_part_75s(row: dict[str, Any]) -> None:
    factors = fuel_factors(ROWS[row["fuel"]])
    assert (factors.fd.us, factors.fc.us) == (row["f"], row["fc"])
    assert (factors.fd.status_us, factors.fc.status_us) == ("found", "found")


@pytest.mark.parametrize("row", _table("method_19/table_19_2_f_factors.json"), ids=lambda row: str(row["fuel"]))
def test_table_19_2_from_memory_is_the_published_file(row: dict[str, Any]) -> None:
    longest = max((theirs for theirs in ROWS if row["fuel"].startswith(theirs)), key=len)
    factors = fuel_factors(ROWS[longest])
    for column in ("fd", "fw", "fc"):
        cell = getattr(factors, column)
        if row.get(column) is None:
            assert cell is None
        else:
            assert (cell.us, cell.si) == (row[column], pytest.approx(row[f"{column}_metric"], rel=1e-12))


def test_the_two_oils_share_the_printed_row() -> None:
    assert fuel_factors("Distillate  oil").row == fuel_factors("residual oil").row
    assert fuel_factors("residual oil").fd == fuel_factors("distillate oil").fd


# Relative difference of the printed metric value from the exact conversion of the English one.
@pytest.mark.parametrize("fuel", fuel_names())
def test_metric_columns_differ_from_the_conversion_by_rounding_only(fuel: str) -> None:
    factors = fuel_factors(fuel)
    # Known from methods.md 1.4: in the natural gas row the printed metric F_d (a transposition) and F_c are off.
    known = {("natural gas", "fd"): 0.0395, ("natural gas", "fc"): 0.0282}
    for column in ("fd", "fw", "fc"):
        cell = getattr(factors, column)
        if cell is not None:
            expected = known.get((fuel, column), 0.0)
            assert cell.difference == pytest.approx(expected, abs=0.006 if expected == 0.0 else 0.0005)


@pytest.mark.parametrize("fuel", [f for f in fuel_names() if f != "municipal solid waste"])
def test_fuel_factor_of_the_table_is_inside_the_expected_range(fuel: str) -> None:
    factors, expected = fuel_factors(fuel), fo_range(fuel)
    assert expected is not None
    assert expected.low < fuel_factor_from_f(fd=factors.fd.us, fc=factors.fc.us) < expected.high


@pytest.mark.parametrize("row", _table("method_3b/table_3b_1_fo_ranges.json"), ids=lambda row: str(row["fuel"]))
def test_expected_ranges_are_the_published_file(row: dict[str, Any]) -> None:
    words = row["fuel"].split(", ")
    kind = words[-1]
    names = {
        "anthracite and lignite": ("anthracite", "lignite"),
        "bituminous": ("bituminous coal",),
        "distillate": ("distillate oil",),
        "residual": ("residual oil",),
        "natural": ("natural gas",),
    }.get(kind, (kind,))
    for name in names:
        found = fo_range(name)
        assert found is not None
        assert (found.low, found.high) == (row["fo_low"], row["fo_high"])


def test_blends_have_twelve_percent() -> None:
    assert mixed_fuel_tolerance() == 12.0
    assert fo_range("municipal solid waste") is None


@pytest.mark.parametrize("row", _table("part_75/conversion_constants.json"), ids=lambda row: str(row["pollutant"]))
def test_printed_factors_from_ppm(row: dict[str, Any]) -> None:
    key = {"SO2": "so2", "NOx as NO2": "nox"}[row["pollutant"]]
    assert conversion(key).us == row["k"]
    assert conversion(key).printed


def test_printed_factors_are_not_recomputed_from_molar_masses() -> None:
    # 64.07/385.3e6 is 1.6629e-7; the printed 1.660e-7 is 0.17 % lower and is what the method uses.
    so2 = conversion("so2").us
    assert 64.07 / 385.3e6 / so2 - 1.0 == pytest.approx(0.0017, abs=1e-4)
    assert conversion("nox").us == pytest.approx(46.01 / 385.3e6, rel=5e-4)


# CO 7.270e-8, C3H8 1.1446e-7, CH4 4.163e-8, HCl 9.463e-8, NH3 4.420e-8: M/385.3e6; CO 1.1644 mg/m3: M/24.055.
@pytest.mark.parametrize(
    ("key", "us"), [("co", 7.270e-8), ("thc", 1.1446e-7), ("ch4", 4.163e-8), ("hcl", 9.463e-8), ("nh3", 4.420e-8)]
)
def test_derived_factors_from_ppm(key: str, us: float) -> None:
    factor_of = conversion(key)
    assert factor_of.us == pytest.approx(us, rel=2e-4)
    assert not factor_of.printed
    assert factor_of.si == pytest.approx(factor_of.us * factor("lb/ft3", "ng/m3"), rel=3e-4)


def test_derived_carbon_monoxide_in_si() -> None:
    assert conversion("co").si == pytest.approx(1.1644e6, rel=5e-5)
    assert conversion("co").expressed_as == ""
    assert conversion("thc").expressed_as == "C3H8"


@pytest.mark.parametrize(
    "row", _table("method_19/k_constants.json"), ids=lambda row: f"{row['constant']} [{row['status']}]"
)
def test_constants_of_an_analysis_are_the_published_file(row: dict[str, Any]) -> None:
    name = row["constant"][0] + "_" + row["constant"][1:]
    holders = [eq for eq in (eq_19_13, eq_19_14, eq_19_15) if name in eq.parameters]
    assert holders
    for eq in holders:
        printed = eq.parameters[name].constant
        assert printed is not None
        assert (printed.value(System.US), printed.value(System.SI)) == (row["english"], row["metric"])


@pytest.mark.parametrize(
    "row",
    _table("method_19/table_19_1_conversion_factors.json"),
    ids=lambda row: f"{row['from']} to {row['to']} [{row['status']}]",
)
def test_rows_of_table_19_1_are_the_published_file(row: dict[str, Any]) -> None:
    units = {"g/scm": "g/m3", "mg/scm": "mg/m3", "lb/scf": "lb/ft3", "ng/scm": "ng/m3"}
    if row["from"].startswith("ppm"):
        key = {"ppm SO2": "so2", "ppm NOx": "nox"}[row["from"]]
        system = System.SI if row["to"] == "ng/scm" else System.US
        assert conversion(key).value(system) == row["factor"]
    else:
        pair = (units[row["from"]], units[row["to"]])
        assert {(r.source, r.target): r.printed for r in unit_rows()}[pair] == row["factor"]


def test_rows_of_table_19_1_that_change_a_unit() -> None:
    rows = unit_rows()
    assert len(rows) == 3
    for row in rows:
        assert row.printed == pytest.approx(factor(row.source, row.target), rel=1e-3)


def test_the_older_table_is_another_table() -> None:
    assert factor_tables() == ("19-2", "60.45(f)")
    old = fuel_factors("natural gas", "60.45(f)")
    assert (old.fd.us, old.fc.us, old.fw) == (8740.0, 1040.0, None)
    assert old.citation.document == "cfr60_45"
    assert old.fd.difference is None


def test_unknown_fuel_or_table() -> None:
    with pytest.raises(RecordError, match="natural gas"):
        fuel_factors("peat")
    with pytest.raises(RecordError, match="no table"):
        fuel_factors("natural gas", "19-9")
