"""The sample field workbooks: the committed files are what the script makes; their numbers are physical."""

from __future__ import annotations

import zipfile
from datetime import date
from io import BytesIO

import pypdf
import pytest
from sample_book import FOLDER, Row, Sample, load_script

make_samples = load_script()
NAMES = sorted(make_samples.SAMPLES)

# Method 19, Table 19-2, dscf and wscf per million Btu (values as printed there, from memory for Fw).
NATURAL_GAS_FD, NATURAL_GAS_FW, DISTILLATE_FD, DISTILLATE_FW = 8710.0, 10610.0, 9190.0, 10320.0
WOOD_FD = 9240.0
# Method 3B, Table 3B-1, expected ranges of the fuel factor (from memory).
FUEL_FACTOR = {"natural gas": (1.600, 1.836), "wood": (1.000, 1.120), "distillate oil": (1.260, 1.413)}


@pytest.fixture(scope="module", params=NAMES)
def book(request: pytest.FixtureRequest) -> Sample:
    return Sample(request.param)


def test_the_committed_file_is_what_the_script_makes(book: Sample) -> None:
    """Part by part, so that another release of the compression library does not matter."""
    made, kept = make_samples.build(book.name), (FOLDER / "valid" / f"{book.name}.xlsx").read_bytes()
    with zipfile.ZipFile(BytesIO(made)) as new, zipfile.ZipFile(BytesIO(kept)) as old:
        assert new.namelist() == old.namelist()
        for part in new.namelist():
            assert new.read(part) == old.read(part), part


def test_the_same_bytes_each_time_and_small(book: Sample) -> None:
    made = make_samples.build(book.name)
    assert made == make_samples.build(book.name)
    assert len(made) < 120_000


def test_every_header_is_of_the_field_workbook(book: Sample) -> None:
    form = make_samples.sheets.field_sheets()
    for name, rows in book.tables.items():
        assert name in form
        if name in ("Readings", "Process"):
            continue
        words = [r["Item"] for r in rows] if "Item" in rows[0] else list(rows[0])
        known = {*form[name], "Item", "Entry", "Note", "Weather"}
        assert not [w for w in words if w.split(" [")[0] not in known]


def test_people_and_places_say_that_they_are_invented(book: Sample) -> None:
    for item in ("Facility", "Authority", "Testing firm"):
        assert "(invented)" in book.test[item]
    assert all("(invented)" in row["Authority"] for row in book.tables["Limits"])
    assert all("Invented" in row["Citation"] for row in book.tables["Limits"])
    assert all("(invented)" in row["Producer"] for row in book.tables["Cylinders"])


def test_gases_are_certified_and_unexpired(book: Sample) -> None:
    day: date = book.test["Test date"]
    for row in book.tables["Cylinders"]:
        assert row["Kind"] == "zero" or row["Expires"] > day
    for row in book.tables["Calibrations"]:
        gas = "NO2" if row["Level"] == "NO2" else book.channels[row["Channel"]]["Gas"]
        assert (row["Cylinder"], gas) in book.certified


def test_levels_span_and_converter(book: Sample) -> None:
    """Method 7E, 3.3 and 13.5: mid gas 40 to 60 percent of the span, converter at least 90 percent."""
    for channel, row in book.channels.items():
        high = max(c[1] for c in book.checks(channel, "direct"))
        assert row["Calibration span"] == high
        mid = {c[1] for c in book.checks(channel, "direct", "mid")}
        assert all(0.4 <= value / high <= 0.6 for value in mid)
        for run in book.runs:
            assert 0.2 <= book.corrected(channel, run) / high <= 1.0
    for row in book.tables["Calibrations"]:
        if row["Level"] == "NO2":
            assert 90 < 100 * row["Reading"] / book.certified[row["Cylinder"], "NO2"] < 100


def test_checks_bracket_every_run(book: Sample) -> None:
    """A three-point direct set before the first run; zero and upscale through the system around each run."""
    for channel in book.channels:
        first = book.moment(book.runs[0]["Start"])
        assert len({c[1] for c in book.checks(channel, "direct") if c[0] <= first}) == 3
        for run in book.runs:
            for upscale in (False, True):
                before, after = book.around(channel, run, upscale)
                assert before[0] < book.moment(run["Start"]) < book.moment(run["End"]) < after[0]
                assert before[1] == after[1]


def test_criteria_are_met_but_for_the_one_run(book: Sample) -> None:
    """Method 7E, 13.1 to 13.3, with the 0.5 ppm or 0.5 percent alternative (Method 3A, 6C and 10 alike)."""
    biased, drifted, by_alternative = set(), set(), set()
    for channel, row in book.channels.items():
        span = row["Calibration span"]
        direct = book.checks(channel, "direct")
        for _, certified, reading in direct:
            assert abs(reading - certified) <= max(0.02 * span, 0.5)
        for run in book.runs:
            for upscale in (False, True):
                pair = book.around(channel, run, upscale)
                bias = []
                for moment, certified, reading in pair:
                    reference = [c for c in direct if c[1] == certified and c[0] <= moment][-1][2]
                    bias.append(reading - reference)
                    if abs(bias[-1]) > max(0.05 * span, 0.5):
                        biased.add((channel, run["Run"]))
                drift = abs(bias[1] - bias[0])
                if drift > max(0.03 * span, 0.5):
                    drifted.add((channel, run["Run"]))
                elif drift > 0.03 * span:
                    by_alternative.add(channel)
    expected = {("NOx", "2")} if book.name == "bias_invalid_run" else set()
    assert biased == expected
    assert drifted == expected
    assert ("NOx" in by_alternative) == (book.name == "gas_turbine")


def test_the_invalid_run_is_followed_by_a_direct_set_and_a_new_check() -> None:
    book = Sample("bias_invalid_run")
    second, third = book.moment(book.run("2")["End"]), book.moment(book.run("3")["Start"])
    between = [c for c in book.checks("NOx", "direct") if second < c[0] < third]
    assert len({c[1] for c in between}) == 3
    assert [c for c in book.checks("NOx", "system") if between[-1][0] < c[0] < third]
    assert len(book.runs) == 4


def test_fuel_factor_is_in_its_range(book: Sample) -> None:
    for run in book.runs:
        oxygen, carbon_dioxide = book.corrected("O2", run), book.corrected("CO2", run)
        factor = (20.9 - oxygen) / carbon_dioxide
        shares = book.shares(run)
        low, high = (sum(s * FUEL_FACTOR[f][i] for f, s in shares.items()) for i in (0, 1))
        assert low < factor < high


def test_heat_input_and_flow_agree(book: Sample) -> None:
    """Dry standard flow from the heat input by the F factor (Method 19, Eq. 19-1 turned around)."""
    for run in book.runs:
        if "Stack flow [ft3/min]" in run:
            wet = run["Flow basis"] == "wet standard"
            flow = run["Stack flow [ft3/min]"] * 60 * (1 - run["Moisture [%]"] / 100 if wet else 1)
            shares = book.shares(run)
            fd = shares.get("natural gas", 0) * NATURAL_GAS_FD + shares.get("distillate oil", 0) * DISTILLATE_FD
            used = [r for r in book.tables["Fuel use"] if r["Run"] == run["Run"]]
            heat = run.get("Heat input [MMBtu/h]") or sum(
                r["Rate [lb/h]"] * r["Heating value [Btu/lb]"] / 1e6 for r in used
            )
        elif "Stack flow [m3/h]" in run:
            flow = run["Stack flow [m3/h]"] * 35.3147 * 293.15 / 273.15
            fd, heat = WOOD_FD, run["Heat input [MW]"] * 3.412142
        else:
            continue
        expected = heat * fd * 20.9 / (20.9 - book.corrected("O2", run))
        assert flow == pytest.approx(expected, rel=0.035)


def test_fuel_meter_and_heat_input_agree() -> None:
    book = Sample("gas_boiler_us")
    for run, used in zip(book.runs, book.tables["Fuel use"], strict=True):
        hours = (run["End"] - run["Start"]).total_seconds() / 3600
        volume = used["Meter end [ft3]"] - used["Meter start [ft3]"]
        heat = volume * used["Heating value [Btu/ft3]"] / hours / 1e6
        assert heat == pytest.approx(run["Heat input [MMBtu/h]"], rel=0.001)


def _moisture_of_train(row: Row) -> float:
    """Method 4: water of 0.04716 ft3/g against meter volume at 17.64 °R/inHg, as a fraction."""
    volume = row["Meter volume end [ft3]"] - row["Meter volume start [ft3]"]
    rankine = row["Meter temperature [°F]"] + 460
    dry = 17.64 * row["Meter factor"] * volume * row["Meter pressure [inHg]"] / rankine
    water = 0.04716 * (row["Water collected [g]"] + row["Silica gel gain [g]"])
    return float(water / (water + dry))


def test_moisture_fits_the_combustion_water(book: Sample) -> None:
    """Water per million Btu is Fw - Fd of Table 19-2, or from the wood's analysis; humid air adds to it."""
    trains = {row["Run"]: row for row in book.tables.get("Moisture", [])}
    for run in book.runs:
        if run["Run"] in trains:
            measured = _moisture_of_train(trains[run["Run"]])
        elif run.get("Moisture [%]"):
            measured = run["Moisture [%]"] / 100
        else:
            continue
        shares = book.shares(run)
        if "wood" in shares:
            fuel = book.tables["Fuel"][0]
            moles = fuel["Hydrogen [%]"] * 10 / 1.008 / 2 + fuel["Water [%]"] * 10 / 18.015
            water = moles * 0.0240548 / (fuel["Gross heating value [kJ/kg]"] * 1e3) / 2.6839e-11
            fd = WOOD_FD
        else:
            gas, oil = shares["natural gas"], shares.get("distillate oil", 0.0)
            fd = gas * NATURAL_GAS_FD + oil * DISTILLATE_FD
            water = gas * (NATURAL_GAS_FW - NATURAL_GAS_FD) + oil * (DISTILLATE_FW - DISTILLATE_FD)
        oxygen = book.corrected("O2", run)
        dry = fd * 20.9 / (20.9 - oxygen)
        combustion = water / (water + dry)
        assert combustion * 0.98 < measured < combustion + 0.025


def test_excluded_minutes_show_the_air_that_came_in() -> None:
    book = Sample("gas_boiler_us")
    run = book.run("2")
    kept = book.minutes("O2", run)
    assert len(kept) == 60
    readings = [r for r in book.tables["Readings"] if r["Time"].strftime("%H:%M") in ("10:53", "10:54", "10:55")]
    assert all(r["O2"] > 5.2 for r in readings)
    assert max(v for v in kept if v is not None) < 5


def test_a_gap_is_blank_and_a_word_marks_calibration() -> None:
    assert sum(v is None for v in Sample("gas_turbine").minutes("CO", Sample("gas_turbine").run("2"))) == 2
    words = {r["NOx"] for r in Sample("wood_boiler_si").tables["Readings"] if isinstance(r["NOx"], str)}
    assert words == {"CAL"}


def test_attachments_are_one_page_papers_marked_as_invented() -> None:
    rows = Sample("gas_boiler_us").tables["Attachments"]
    assert {row["What"] for row in rows} == {"certificate", "field sheet", "permit page"}
    for row in rows:
        reader = pypdf.PdfReader(FOLDER / "valid" / row["File"])
        assert len(reader.pages) == 1
        assert "Invented example" in reader.pages[0].extract_text()


def test_the_permit_page_bound_in_says_what_the_limits_say() -> None:
    """Each limit's number and when it applies stand under its condition on the page, as the committed PDF has it."""
    book = Sample("gas_boiler_us")
    page = pypdf.PdfReader(FOLDER / "valid" / "attachments" / "permit_page.pdf").pages[0].extract_text()
    words = " ".join(page.split())
    for limit in book.tables["Limits"]:
        condition = limit["Citation"].rpartition("condition ")[2]
        said = words.partition(f"{condition} ")[2].partition(". ")[0]
        assert f" {float(limit['Limit']):g}" in said
        for part in limit["Applies when"].replace("%", "percent").removeprefix("firing ").split(", "):
            assert part in said, (condition, said)
        assert ("load" in said) == ("load" in limit["Applies when"])


def test_the_readme_names_every_sample() -> None:
    text = (FOLDER / "README.md").read_text(encoding="utf-8")
    assert not [name for name in NAMES if f"`{name}.xlsx`" not in text]
