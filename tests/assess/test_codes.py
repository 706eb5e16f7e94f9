"""Every code of the catalogue that is no matter of reading a file is found in a record made for it, with its place."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from datetime import date, datetime, timedelta
from pathlib import Path
from typing import Any

import pytest

import reporter
from reporter.outcome import Outcome
from reporter.problems import Grade, Problem, catalogue
from reporter.record import Given, Location, Record
from tests.record_factory import (
    HERE,
    added,
    assess,
    assessed,
    at,
    calibration,
    calibrations,
    channel,
    codes,
    cylinders,
    event,
    fuel,
    identity,
    in_run,
    limit,
    number,
    readings,
    recalibrated,
    record,
    rerun,
    runs,
    without_calibrations,
)

AT_3 = {"reference_oxygen": number(3.0, "%"), "oxygen_constant": number(20.9, "%")}
FLOW = {"stack_flow": number(600_000.0, "ft3/h"), "flow_basis": "dry standard"}


def _values(**changed: Any) -> Any:
    return readings({"NOx": 40.0, "CO": 10.0, "O2": 5.0, "CO2": 9.0} | changed)


def _expired() -> Outcome:
    bottles = tuple(
        replace(c, expires=Given(date(2025, 3, 1), HERE)) if c.cylinder.value == "NOx-mid" else c for c in cylinders()
    )
    return assessed(cylinders=bottles)


def _typed() -> Outcome:
    rows = tuple(
        replace(row, certified_value=number(49.0)) if row.time.value == at("07:01") else row for row in calibrations()
    )
    return assessed(calibrations=rows)


def _late() -> Outcome:
    made = without_calibrations(record(), "NOx", "10:40", "10:42")
    return assess(
        added(
            made,
            calibration("13:00", "NOx", "system", "zero", 0.0),
            calibration("13:02", "NOx", "system", "mid", 50.0),
        )
    )


def _check_moved(clock: str, *gone: str) -> Outcome:
    rows = (calibration(clock, "NOx", "system", level, 50.0 * (level == "mid")) for level in ("zero", "mid"))
    return assess(added(without_calibrations(record(), "NOx", *gone), *rows))


def _alone(*names: str) -> Outcome:
    values = {"NOx": 40.0, "CO": 10.0, "O2": 5.0, "CO2": 9.0}
    return assessed(
        channels=tuple(channel(name) for name in names), readings=readings({name: values[name] for name in names})
    )


def _zero_gas(time: datetime) -> float:
    return 0.0 if at("08:13") < time <= at("08:15") else 40.0


def _logged_day(behind: int) -> Record:
    """Each gas stands in the log up to so many minutes before it is entered."""
    made = record()
    gases = {(row.time.value, row.channel.value): row.reading.value for row in made.calibrations}

    def logged(name: str, usual: float) -> Callable[[datetime], float]:
        def value(time: datetime) -> float:
            entered = [(time + timedelta(minutes=behind + ahead), name) for ahead in (0, 1)]
            return next((gases[one] for one in entered if one in gases), usual)

        return value

    usual = {"NOx": 41.0, "CO": 11.0, "O2": 5.5, "CO2": 8.0}
    rows = readings({name: logged(name, number) for name, number in usual.items()}, start="06:40", marked=False)
    return replace(made, readings=rows)


MADE: dict[str, Callable[[], Outcome]] = {
    "calibration-missing": lambda: assess(without_calibrations(record(), "NOx", "10:40", "10:42")),
    "calibration-late": lambda: _check_moved("08:05", "07:50", "07:52"),
    "closing-check-misplaced": lambda: _check_moved("10:25", "10:40", "10:42"),
    "span-missing": lambda: assess(without_calibrations(record(), "NOx", "07:02")),
    "certificate-missing": lambda: assessed(cylinders=tuple(c for c in cylinders() if c.cylinder.value != "NOx-mid")),
    "cylinder-expired": _expired,
    "certificate-differs": _typed,
    "over-range-in-run": lambda: assessed(readings=_values(NOx=lambda t: "OVER" if t == at("08:05") else 40.0)),
    "undecided-not-detected": lambda: assessed(readings=_values(CO=lambda t: "ND" if t == at("08:05") else 3.0)),
    "oxygen-at-or-above-air": lambda: assessed(readings=_values(O2=20.95), limits=(limit(**AT_3),)),
    "moisture-missing": lambda: assessed(
        channels=tuple(channel(name, wet=name == "NOx") for name in ("NOx", "CO", "O2", "CO2"))
    ),
    "too-few-valid-runs": lambda: assess(rerun(record(limits=(limit(),)), "3", excluded_because="trip")),
    "run-invalid": lambda: assess(recalibrated(record(), "08:42", "NOx", 60.0)),
    "adjustment-before-check": lambda: assessed(events=(event("08:35", "NOx analyzer adjusted"),)),
    "basis-missing": lambda: assessed(limits=(limit(moisture_basis=None),)),
    "flow-missing": lambda: assessed(limits=(limit(unit="lb/h", mass_rate_route="flow"),)),
    "heat-input-missing": lambda: assessed(fuels=(fuel(),), limits=(limit(unit="lb/h", mass_rate_route="heat input"),)),
    "fuel-missing": lambda: assessed(limits=(limit(unit="lb/MMBtu"),)),
    "factor-missing": lambda: assessed(fuels=(fuel("mill gas"),), limits=(limit(unit="lb/MMBtu"),)),
    "diluent-missing": lambda: _alone("NOx", "CO"),
    "pollutant-missing": lambda: _alone("O2", "CO2"),
    "run-mean-above-span": lambda: assessed(readings=_values(NOx=101.0)),
    "no-citation": lambda: assessed(limits=(limit(citation=None),)),
    "limit-not-in-force": lambda: assessed(limits=(limit(in_force_until=date(2024, 1, 1)),)),
    "rounding-rule-unknown": lambda: assessed(limits=(limit(rounding="as usual"),)),
    "no-criteria-held": lambda: assessed(
        channels=(channel("NOx", method="EN 14792"), *(channel(name) for name in ("CO", "O2", "CO2")))
    ),
    "clock-differs": lambda: assess(_logged_day(behind=9)),
    "calibration-not-logged": lambda: assess(added(record(), calibration("08:50", "NOx", "system", "zero", 0.0))),
    "calibration-gas-in-run": lambda: assess(
        added(record(readings=_values(NOx=_zero_gas)), calibration("08:15", "NOx", "system", "zero", 0.0))
    ),
    "synthetic-test": lambda: assessed(test=identity(synthetic="yes, a rehearsal")),
    "span-differs": lambda: assessed(
        channels=(channel("NOx", calibration_span=number(90.0)), *(channel(name) for name in ("CO", "O2", "CO2")))
    ),
    "impossible-balance": lambda: assessed(readings=_values(O2=21.6, CO2=2.0), fuels=(fuel(),)),
    "coverage-low": lambda: assessed(readings=_values(NOx=lambda t: "" if t == at("08:05") else 40.0)),
    "oxygen-reading-implausible": lambda: assessed(readings=_values(O2=lambda t: 21.3 if t == at("08:05") else 5.0)),
    "moisture-below-combustion": lambda: assessed(fuels=(fuel(),), runs=runs(moisture=number(5.0, "%"))),
    "moisture-above-combustion": lambda: assessed(fuels=(fuel(),), runs=runs(moisture=number(25.0, "%"))),
    "co2-against-fuel": lambda: assessed(readings=_values(CO2=10.2), fuels=(fuel(),)),
    "converter-missing": assessed,
    "response-time-missing": lambda: assessed(
        channels=(channel("NOx", response_time_up=None), *(channel(name) for name in ("CO", "O2", "CO2")))
    ),
    "effective-date-missing": lambda: assessed(limits=(limit(in_force_from=None),)),
    "routes-disagree": lambda: assessed(
        fuels=(fuel(),), runs=runs(**FLOW, heat_input=number(20.0, "MMBtu/h")), limits=(limit(unit="lb/h"),)
    ),
    "sequence-late": _late,
    "standard-conditions-assumed": lambda: assessed(runs=runs(**FLOW)),
    "near-oxygen-constant": lambda: assessed(readings=_values(O2=19.5, CO2=0.8), limits=(limit(**AT_3),)),
    "order-of-averaging": lambda: assessed(
        readings=_values(O2=in_run((3.0, 5.0, 12.0)), CO2=in_run((10.2, 9.0, 5.0))), limits=(limit(**AT_3),)
    ),
    "barometer-at-sea-level": lambda: assessed(
        location=Location(elevation=number(5280.0, "ft")), runs=runs(barometric_pressure=number(29.95, "inHg"))
    ),
    "fuel-factor-out-of-range": lambda: assessed(readings=_values(CO2=12.0), fuels=(fuel(),)),
}


def _of_assessment() -> list[str]:
    """The codes of the catalogue from the first of the assessment on: it is ordered so."""
    names = list(catalogue())
    return names[names.index("calibration-missing") :]


def test_every_code_of_the_assessment_has_a_record() -> None:
    assert set(_of_assessment()) == set(MADE)


@pytest.mark.parametrize("code", MADE)
def test_the_code_is_found_and_complete(code: str) -> None:
    outcome = MADE[code]()
    found = [problem for problem in outcome.problems if problem.code == code]
    assert found
    clean = assessed(test=identity()) if code != "converter-missing" else None
    if clean is not None:
        assert code not in codes(clean)
    for problem in found:
        _complete(problem)
    if catalogue()[code].grade is Grade.BLOCKS:
        assert outcome.worst is Grade.BLOCKS


def _complete(problem: Problem) -> None:
    assert problem.found
    assert problem.expected
    assert problem.remedy
    assert problem.place.sheet or problem.place.file
    text = problem.text()
    assert "None" not in text
    assert "nan" not in text.lower().split()


def test_every_code_of_the_catalogue_is_raised_somewhere() -> None:
    sources = "\n".join(path.read_text(encoding="utf-8") for path in Path(reporter.__file__).parent.rglob("*.py"))
    assert [code for code in catalogue() if f'"{code}"' not in sources] == []


FORBIDDEN = ("pass", "passed", "fail", "failed", "compliant", "compliance", "violation", "verdict")


@pytest.mark.parametrize("code", MADE)
def test_no_forbidden_word_reaches_the_reader(code: str) -> None:
    outcome = MADE[code]()
    texts = [problem.text() for problem in outcome.problems]
    texts += [*outcome.stated, *(check.title for check in outcome.checks), *(c.reason for c in outcome.comparisons)]
    texts += [check.consequence for check in outcome.checks]
    for words in texts:
        assert not set(FORBIDDEN) & {word.strip(".,;:()").lower() for word in words.split()}
