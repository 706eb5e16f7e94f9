"""Which equation of the program answers each equation name of `tests/published`, and which names none answers.

A function takes a case's inputs and gives the result in the case's unit.  An inverse is the equation run for one
unit of what is asked.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from chemicals.iapws import iapws95_Psat

from reporter.combustion import balance, mixture, products
from reporter.combustion import stoichiometry as st
from reporter.combustion.air import rest_of_air
from reporter.combustion.components import atoms_of
from reporter.combustion.composition import mole_mean
from reporter.combustion.factors import fc_of_composition, fd_of_composition, fw_of_composition
from reporter.conversions import converted
from reporter.equation import System
from reporter.gases import gas, molar_mass
from reporter.methods import f_factors as ff
from reporter.methods import method_1 as m1
from reporter.methods import method_2 as m2
from reporter.methods import method_3 as m3
from reporter.methods import method_3b as m3b
from reporter.methods import method_4 as m4
from reporter.methods import method_7e as m7e
from reporter.methods import method_19 as m19
from reporter.methods import reference as ref
from reporter.methods.mass_concentration import mass_concentration, molar_volume
from reporter.methods.mass_rate import mass_factor, mass_rate_by_flow, ppm_to_mass
from reporter.methods.water_vapour import ambient_moisture, saturation_pressure, water_per_dry_air

Inputs = dict[str, Any]
Answer = Callable[[Inputs], float]
GAS_CONSTANT = 8.314462618
FT3, LB = 0.028316846592, 0.45359237


def _renamed(equation: Callable[..., Any], **names: str) -> Answer:
    """An equation under the names of the files: keyword is ours, value is theirs."""
    return lambda given: float(equation(**{ours: given[theirs] for ours, theirs in names.items()}))


def _mg_per_m3(given: Inputs) -> float:
    # 273.15 K and the pressure at which a mole has the volume given.
    pressure = GAS_CONSTANT * 273.15 / given["v_molar"]
    return float(mass_concentration(c=given["c"], molar_mass=given["m"], temperature=273.15, pressure=pressure))


def _mass_rate(given: Inputs) -> float:
    mass = ppm_to_mass(c=given["c"], k=given["k"])
    return float(mass_rate_by_flow(c=mass, flow=converted(given["q"], "ft3/min", "ft3/h")))


def _mass_rate_si(given: Inputs) -> float:
    mass = converted(given["c"], "mg/m3", "ng/m3")
    return float(mass_rate_by_flow.in_system(System.SI)(c=mass, flow=given["q"]))


def _metered(given: Inputs) -> float:
    pressure = m2.absolute_pressure(barometric=given["p_bar"], static=given["dh"])
    return float(
        m4.metered_volume(
            start=0.0, end=given["vm"], factor=given["y"], temperature=given["tm"] - 460.0, pressure=pressure
        )
    )


def _wet_from_composition(given: Inputs) -> float:
    bws = given["h2o"] / 100.0
    dry = {name: given[name] / (1.0 - bws) for name in ("co2", "o2", "n2")}
    return float(m3.wet_molecular_weight(md=m3.dry_molecular_weight(**dry, co=0.0), bws=bws))


def _water_volume(given: Inputs) -> float:
    condensed = m4.water_volume_from_volume(volume=given["v_water"], k=given["k1"])
    return float(condensed + m4.silica_gel_volume(mass=given["w_silica"], k=given["k3"]))


def _specific_humidity(given: Inputs) -> float:
    moles = water_per_dry_air(relative_humidity=100.0, vapour_pressure=given["p_w"], pressure=given["p"])
    return float(moles * gas("h2o").mass / 28.964)


def _saturated(given: Inputs) -> float:
    # The file's saturation pressure is IAPWS-95; ours lies 0.1 % below it (test_water_vapour.py).
    vapour = converted(iapws95_Psat(given["t"]), "Pa", "inHg")
    return float(m4.saturation_moisture(vapour_pressure=vapour, pressure=given["p"]))


def _molar_volume_of(unit: str) -> Answer:
    per = {"L/mol": 1.0, "scf/lbmol": LB / FT3, "scf/kg-mol": 1.0 / FT3}[unit]
    return lambda given: per * float(molar_volume.in_system(System.SI)(temperature=given["t"], pressure=given["p"]))


def _molar_volume_nmam(given: Inputs) -> float:
    # The table is printed with a gas constant of 62.36 L·mmHg/(mol·K).
    return float(
        molar_volume.in_system(System.SI)(
            temperature=given["t"] + 273.15,
            pressure=converted(given["p"], "mmHg", "kPa"),
            gas_constant=converted(62.36, "mmHg", "kPa"),
        )
    )


# Fuels of carbon and hydrogen, per mole.


def _oxygen(given: Inputs) -> float:
    return float(st.stoichiometric_oxygen(carbon=given["n_c"], hydrogen=given["n_h"], sulfur=0.0, oxygen=0.0))


def _air(given: Inputs) -> float:
    return float(st.stoichiometric_air(oxygen_needed=_oxygen(given), air_oxygen=given["o2_air"]))


def _from_fuel(given: Inputs) -> float:
    return float(st.fuel_products(carbon=given["n_c"], sulfur=0.0, nitrogen=0.0, inert=0.0))


def _dry_products(given: Inputs) -> float:
    nitrogen = rest_of_air(air_oxygen=given["o2_air"])
    return float(st.stoichiometric_dry_products(from_fuel=_from_fuel(given), air=_air(given), air_nitrogen=nitrogen))


def _balance(given: Inputs) -> tuple[float, float]:
    """Dry air and dry products from the oxygen measured, complete combustion."""
    per_air, per_product = given["o2_air"], given["o2d"] / 100.0
    rest = rest_of_air(air_oxygen=given["o2_air"])
    others = balance.rest_of_products(added=per_product)
    delta = balance.determinant(per_air=per_air, per_product=per_product, sum_per_air=rest, sum_per_product=others)
    fixed, sum_fixed = _oxygen(given), _from_fuel(given)
    air = balance.dry_air(
        fixed=fixed,
        sum_per_product=others,
        per_product=per_product,
        sum_fixed=sum_fixed,
        denominator=delta,
    )
    dry = balance.dry_products(per_air=per_air, sum_fixed=sum_fixed, sum_per_air=rest, fixed=fixed, denominator=delta)
    return float(air), float(dry)


def _excess_air(given: Inputs) -> float:
    return float(mixture.excess_air_of_balance(air=_balance(given)[0], stoichiometric=_air(given)))


def _co2(given: Inputs) -> float:
    return float(mixture.expected_percent(amount=given["n_c"], products=_balance(given)[1]))


def _f_factor(equation: Callable[..., Any], *names: str) -> Answer:
    def answer(given: Inputs) -> float:
        amounts = {
            "dry_products": _dry_products(given),
            "water": st.combustion_water(hydrogen=given["n_h"], water=0.0),
            "carbon": given["n_c"],
        }
        # A mole of fuel counted as a kilogram: the fuel's mass cancels.
        heat = converted(given["hhv"], "kJ/kg", "Btu/lb")
        inputs = {name: amounts[name] for name in names}
        return float(equation(**inputs, heat=heat, molar_volume=given["v_molar"]))

    return answer


def _net_oxygen(given: Inputs) -> float:
    atoms = {"C": 0.0, "H": 0.0, "O": 0.0}
    for formula, share in given.items():
        for element, count in atoms_of(formula.upper()).items():
            atoms[element] = atoms.get(element, 0.0) + count * share
    # Carbon dioxide of the fuel carries its own oxygen.
    return float(st.stoichiometric_oxygen(carbon=atoms["C"], hydrogen=atoms["H"], sulfur=0.0, oxygen=atoms["O"]))


def _mixture_mass(given: Inputs) -> float:
    # The textbooks count with whole molar masses.
    masses = [float(round(molar_mass(atoms_of(formula.upper())))) for formula in given]
    shares = [100.0 * share for share in given.values()]
    return float(mole_mean(shares=shares, values=masses, whole=100.0))


def _air_with_excess(given: Inputs) -> float:
    fraction = given["o2_air"] if "o2_air" in given else 1.0 / (1.0 + given["n2_per_o2"])
    air = st.stoichiometric_air(oxygen_needed=given["o2_net"], air_oxygen=fraction)
    return float(mixture.air_fuel_by_mole(stoichiometric=air, ratio=1.0 / (1.0 + given["excess"])))


def _with_textbook_air(given: Inputs) -> Inputs:
    return given | {"o2_air": 1.0 / (1.0 + given.get("n2_per_o2", 3.76))}


def _air_fuel_mass(given: Inputs) -> float:
    air = given.get("af_molar")
    if air is None:
        air = given["air_ratio"] * _air(_with_textbook_air(given))
    return float(st.air_by_mass_of_gas(air=air, air_mass=given["m_air"], fuel_mass=given["m_fuel"]))


def _air_fuel_mass_ch(given: Inputs) -> float:
    mass = given["o2_air"] * gas("o2").mass + (1.0 - given["o2_air"]) * gas("n2").mass
    return float(st.air_by_mass_of_gas(air=_air(given), air_mass=mass, fuel_mass=given["m_fuel"]))


def _air_fuel_mass_of_gas(given: Inputs) -> float:
    parts = {name: share for name, share in given.items() if name != "o2_air_mass"}
    oxygen = given["o2_air_mass"] * 28.9 / 32.0
    air = st.stoichiometric_air(oxygen_needed=_net_oxygen(parts), air_oxygen=oxygen)
    return float(st.air_by_mass_of_gas(air=air, air_mass=28.9, fuel_mass=_mixture_mass(parts)))


def _product(name: str) -> Answer:
    def answer(given: Inputs) -> float:
        air = given["air_ratio"] * _air(_with_textbook_air(given))
        oxygen = _with_textbook_air(given)["o2_air"]
        if name == "n2":
            return float(
                products.nitrogen_left(nitrogen=0.0, air=air, air_nitrogen=rest_of_air(air_oxygen=oxygen), no=0.0)
            )
        return float(
            products.oxygen_left(
                air=air,
                air_oxygen=oxygen,
                needed=_oxygen(given),
                co=0.0,
                no=0.0,
                hydrocarbon=0.0,
                carbon_atoms=1.0,
                hydrogen_atoms=4.0,
            )
        )

    return answer


ANSWERS: dict[str, Answer] = {
    # Method 19
    "eq_19_1": _renamed(m19.eq_19_1, cd="cd", fd="fd", o2="o2d"),
    "eq_19_2": _renamed(m19.eq_19_2, cw="cw", fw="fw", bwa="bwa", o2="o2w"),
    "eq_19_3": _renamed(m19.eq_19_3, cw="cw", fd="fd", bws="bws", o2="o2w"),
    "eq_19_4": _renamed(m19.eq_19_4, cw="cw", fd="fd", bws="bws", o2="o2d"),
    "eq_19_5": _renamed(m19.eq_19_5, cd="cd", fd="fd", bws="bws", o2="o2w"),
    "eq_19_6": _renamed(m19.eq_19_6, cd="cd", fc="fc", co2="co2d"),
    "eq_19_7": _renamed(m19.eq_19_7, cw="cw", fc="fc", co2="co2w"),
    "eq_19_8": _renamed(m19.eq_19_8, cw="cw", fc="fc", bws="bws", co2="co2d"),
    "eq_19_9": _renamed(m19.eq_19_9, cd="cd", fc="fc", bws="bws", co2="co2w"),
    "eq_19_13": _renamed(ff.eq_19_13, hydrogen="h", carbon="c", sulfur="s", nitrogen="n", oxygen="o", gcv="gcv"),
    "eq_19_16": _renamed(ff.eq_19_16, shares="x", factors="fd"),
    "eq_19_17": _renamed(ff.eq_19_17, shares="x", factors="fw"),
    "eq_19_18": _renamed(ff.eq_19_18, shares="x", factors="fc"),
    "ppm_from_emission_rate": lambda g: g["e"] / m19.eq_19_1(cd=g["k"], fd=g["fd"], o2=g["o2d"]),
    "ppm_to_lb_per_scf": lambda g: g["c"] * mass_factor(molar_mass=g["m"]),
    "ppm_to_ng_per_scm": lambda g: g["c"] * mass_factor.in_system(System.SI)(molar_mass=g["m"]),
    "mass_rate": _mass_rate,
    "mass_rate_si": _mass_rate_si,
    # Units
    "lb_per_mmbtu_to_ng_per_j": lambda g: converted(g["e"], "lb/MMBtu", "ng/J"),
    "lb_per_scf_to_ng_per_scm": lambda g: converted(g["c"], "lb/ft3", "ng/m3"),
    "scf_per_mmbtu_to_scm_per_j": lambda g: converted(g["f"], "ft3/MMBtu", "m3/J"),
    # Method 7E
    "eq_7e_1": _renamed(m7e.calibration_error, direct="c_dir", certified="c_v", span="cs_span"),
    "eq_7e_2": _renamed(m7e.system_bias, system="c_s", direct="c_dir", span="cs_span"),
    "eq_7e_3": _renamed(m7e.dilution_error, system="c_s", dilution_factor="df", certified="c_v", span="cs_span"),
    "eq_7e_4": _renamed(m7e.drift, after="sb_final", before="sb_initial"),
    "eq_7e_5a": _renamed(
        m7e.corrected_low, average="c_avg", low="c_o", upscale="c_m", certified="c_ma", low_certified="c_oa"
    ),
    "eq_7e_5b": _renamed(m7e.corrected_zero, average="c_avg", zero="c_o", upscale="c_m", certified="c_ma"),
    "eq_7e_7": _renamed(m7e.converter_efficiency, direct="c_dir", certified="c_v"),
    "eq_7e_8": _renamed(m7e.converter_corrected, no="c_no", nox="c_nox", efficiency="eff_no2"),
    "eq_7e_9": _renamed(m7e.peak_decrease, peak="nox_peak", final="nox_final"),
    "eq_7e_10": _renamed(m7e.dry_from_wet, c="c_w", bws="b_ws"),
    "dry_to_wet": _renamed(m7e.wet_from_dry, c="c", bws="b_ws"),
    # The page states drift as certified less read: the calibration error with the opposite sign.
    "drift_percent_of_span": lambda g: (
        -m7e.calibration_error(direct=g["c_read"], certified=g["c_certified"], span=g["span"])
    ),
    # Methods 1, 2, 3, 3B, 4
    "eq_1_1": _renamed(m1.equivalent_diameter, length="l", width="w"),
    "duct_diameters": _renamed(m1.in_diameters, distance="l", diameter="d"),
    "eq_3_1": _renamed(m3.dry_molecular_weight, co2="co2d", o2="o2d", n2="n2d", co="cod"),
    "molecular_weight_wet": _renamed(m3.wet_molecular_weight, md="m_d", bws="b_ws"),
    "molecular_weight_wet_from_composition": _wet_from_composition,
    "eq_3b_1": _renamed(m3b.excess_air, o2="o2d", co="cod", n2="n2d"),
    "eq_3b_2": _renamed(m3b.fuel_factor, o2="o2d", co2="co2d"),
    "eq_3b_5": _renamed(m3b.fuel_factor_from_f, fd="fd", fc="fc"),
    "eq_5_1": _metered,
    "water_vapour_volume": _water_volume,
    "moisture_fraction": lambda g: m4.moisture_fraction(water=g["vw_std"], silica=0.0, gas=g["vm_std"]),
    "moisture_saturated": _saturated,
    "stack_velocity": lambda g: m2.stack_velocity(
        pitot=g["cp"],
        velocity_pressures=[g["root_dp_mean"] ** 2],
        temperature=g["ts"],
        pressure=g["ps"],
        ms=g["ms"],
        kp=g["kp"],
    ),
    "flow_dry_standard": _renamed(
        m2.dry_standard_flow,
        velocity="vs",
        area="area",
        bws="b_ws",
        temperature="ts",
        pressure="ps",
        t_std="t_std",
        p_std="p_std",
    ),
    # Reference correction
    "correct_to_reference_oxygen": _renamed(ref.oxygen_reference, c="c", o2="o2d", reference="o2_ref", k="o2_air"),
    "oxygen_correction_factor": lambda g: ref.oxygen_reference(
        c=1.0, o2=g["o2d"], reference=g["o2_ref"], k=g["o2_air"]
    ),
    "oxygen_correction_sensitivity": lambda g: ref.correction_factor_uncertainty(u_o2=g["u_o2"], k=20.9, o2=g["o2d"]),
    "co2_correction_factor": lambda g: ref.co2_correction_factor(
        reference=20.9 - g["o2_span"], fo=m3b.fuel_factor_from_f(fd=g["fd"], fc=g["fc"]), k=20.9
    ),
    "ppm_to_mg_per_m3": _mg_per_m3,
    "mg_per_m3_to_ppm": lambda g: g["c"] / _mg_per_m3(g | {"c": 1.0}),
    "molar_volume [L/mol]": _molar_volume_of("L/mol"),
    "molar_volume [scf/lbmol]": _molar_volume_of("scf/lbmol"),
    "molar_volume_per_kgmol": _molar_volume_of("scf/kg-mol"),
    "molar_volume_nmam": _molar_volume_nmam,
    # Water
    "vapour_pressure_water_liquid": _renamed(saturation_pressure, temperature="t"),
    "water_mole_fraction_from_rh": _renamed(
        ambient_moisture, relative_humidity="rh", vapour_pressure="p_sat", pressure="p"
    ),
    "water_mole_fraction_from_dewpoint": _renamed(m4.saturation_moisture, vapour_pressure="p_sat", pressure="p"),
    "humidity_ratio": _specific_humidity,
    # Combustion
    "stoichiometric_oxygen": _net_oxygen,
    "stoichiometric_oxygen_ch": _oxygen,
    "co2_max_from_formula": lambda g: st.co2_max(carbon=g["n_c"], dry_products=_dry_products(g)),
    "co2_max_dry": _renamed(st.co2_max, carbon="fc", dry_products="fd"),
    "fo_from_formula": lambda g: st.fuel_factor_of_composition(
        dry_products=_dry_products(g), carbon=g["n_c"], air_oxygen=g["o2_air"]
    ),
    "excess_air_from_oxygen": _excess_air,
    "co2_from_oxygen": _co2,
    "f_factor_fd_from_formula": _f_factor(fd_of_composition, "dry_products"),
    "f_factor_fw_from_formula": _f_factor(fw_of_composition, "dry_products", "water"),
    "f_factor_fc_from_formula": _f_factor(fc_of_composition, "carbon"),
    "molar_mass_mixture": _mixture_mass,
    "air_requirement": lambda g: 1000.0 * _air_with_excess(g),
    "air_fuel_ratio_molar": _air_with_excess,
    "air_fuel_ratio_stoichiometric": lambda g: _air(_with_textbook_air(g)),
    "air_fuel_ratio_mass": _air_fuel_mass,
    "air_fuel_ratio_stoichiometric_ch": _air_fuel_mass_ch,
    "air_fuel_ratio_stoichiometric_mass": _air_fuel_mass_of_gas,
    "air_fuel_ratio_molar_from_mass": lambda g: (
        g["af"] / st.air_by_mass_of_gas(air=1.0, air_mass=g["m_air"], fuel_mass=g["m_fuel"])
    ),
    "excess_air_from_air_fuel_ratio": _renamed(mixture.excess_air_of_balance, air="af", stoichiometric="af_stoich"),
    "percent_theoretical_air": lambda g: (
        100.0 + mixture.excess_air_of_balance(air=g["af_molar"], stoichiometric=g["af_molar_stoich"])
    ),
    "product_moles_o2": _product("o2"),
    "product_moles_n2": _product("n2"),
}

_NITROGEN = "air from measured nitrogen is not computed: nitrogen is not measured"
_WORKSHEET = "the worksheet's own rounded air constants, up to 0.4 % from this program's air models"
_CONFORMITY = "conformity probability is not an equation of the program"
_T_TEST = "the test of an increase (appendix C) is not an equation of the program"
_TURBINE = "the ISO correction of gas turbines is not an equation of the program"
_ENGINE = "the humidity correction of engine tests is not an equation of the program"
_VAPOUR = "saturation pressure is computed by 40 CFR 1065.645(a) only; tests/methods/test_water_vapour.py compares"
_PHYSICS = "physics behind a printed constant; tests/methods/test_method_2_3_4.py holds the constants against it"

#: Names no equation answers, each with its reason; a case of such a name is a visible skip.
NOT_ANSWERED: dict[str, str] = {
    "air_fuel_ratio_molar_from_dry_products": _NITROGEN,
    "air_fuel_ratio_from_orsat": _NITROGEN,
    "stoichiometric_air_ultimate": _WORKSHEET,
    "stoichiometric_air_gas": _WORKSHEET,
    "fuel_per_mmbtu": "an intermediate step of the worksheet",
    "air_per_mmbtu": "an intermediate step of the worksheet",
    "hhv_fuel_oil_api": "heating values are entered, not estimated from density",
    "molar_heating_value_gross": "heating values are table data, not computed from heats of formation",
    "excess_air_from_oxygen_constant": "a handbook's approximation with one constant per fuel",
    "mass_percent": "mass percentages are not computed",
    "emission_factor_per_heat": "published emission factors are not used",
    "fc_from_co2_factor": "published carbon dioxide factors are not used",
    "ppm_per_rate_from_flue_gas": "the note's own route by the mass of the flue gas",
    "ppm_to_mg_per_m3_constant": "a page's own rounded constant",
    "acceptance_threshold": _CONFORMITY,
    "conformance_probability_interval": _CONFORMITY,
    "conformance_probability_lower": _CONFORMITY,
    "conformance_probability_upper": _CONFORMITY,
    "t_statistic": _T_TEST,
    "variance_about": _T_TEST,
    "pooled_standard_deviation": _T_TEST,
    "turbine_iso_factor": _TURBINE,
    "turbine_iso_nox": _TURBINE,
    "nox_humidity_ci": _ENGINE,
    "nox_humidity_si": _ENGINE,
    "vapour_pressure_ice": "saturation over ice is not an equation of the program",
    "vapour_pressure_water_iapws": _VAPOUR,
    "vapour_pressure_wexler_greenspan_1971": _VAPOUR,
    "meter_constant": _PHYSICS,
    "water_vapour_volume_per_gram": _PHYSICS,
    "water_vapour_volume_per_millilitre": _PHYSICS,
}

#: Files that hold a table instead of cases, and the test that reads each.
TABLES: dict[str, str] = {
    "combustion/iso_6976_molar_heating_values.json": "tests/test_published.py",
    "combustion/worksheet_air_constants.json": "tests/test_published.py",
    "method_19/table_19_2_f_factors.json": "tests/methods/test_method_19.py",
    "method_19/table_19_1_conversion_factors.json": "tests/methods/test_method_19.py",
    "method_19/k_constants.json": "tests/methods/test_method_19.py",
    "method_3b/table_3b_1_fo_ranges.json": "tests/methods/test_method_19.py",
    "method_4/constants.json": "tests/methods/test_method_2_3_4.py",
    "part_75/table_1_f_factors.json": "tests/methods/test_method_19.py",
    "part_75/conversion_constants.json": "tests/methods/test_method_19.py",
    "water/crc_vapour_pressure_table.json": "tests/methods/test_water_vapour.py",
}
#: Tables the program holds no counterpart of, each with its reason.
TABLES_NOT_HELD: dict[str, str] = {
    "reference/ap42_natural_gas_worksheet.json": "published emission factors are not used",
    "reference/cfr_98_table_c1.json": "default heating values are not used: they are entered",
}
