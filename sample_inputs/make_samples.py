"""Make the sample field workbooks and their attachments: invented people, places, permits and numbers.

Run ``python sample_inputs/make_samples.py`` to write ``sample_inputs/valid/`` again; the same scenario files
give the same bytes.  Other code may import `SAMPLES` and `build`.
"""

from __future__ import annotations

import sys
import tomllib
from pathlib import Path
from typing import Any

HERE = Path(__file__).resolve().parent
if str(HERE) not in sys.path:
    sys.path.insert(0, str(HERE))

from making import sheets, workbook  # noqa: E402

VALID = HERE / "valid"
SAMPLES = {
    "gas_boiler_us": "gas-fired package boiler, US units, three limits",
    "wood_boiler_si": "wood-chip boiler, SI units, mg/m3 at a reference oxygen with constant 21",
    "gas_turbine": "gas turbine at 15 % oxygen with low readings",
    "two_fuel_furnace": "natural gas and distillate oil together, wet NOx analyzer",
    "bias_invalid_run": "a run made invalid by bias, and what follows from it",
}


def scenario(name: str) -> dict[str, Any]:
    """The scenario file of a sample as data."""
    with (HERE / "making" / "scenarios" / f"{name}.toml").open("rb") as file:
        return tomllib.load(file)


def build(name: str) -> bytes:
    """The field workbook of a sample as the bytes of an ``.xlsx`` file."""
    data = scenario(name)
    return workbook.write(data["title"], sheets.all_sheets(data))


def logger_day() -> dict[str, bytes]:
    """The wood boiler's test as a folder: field workbook without readings, logger file, answers and mapping."""
    from making import logger

    data = scenario("wood_boiler_si")
    made = sheets.all_sheets(data)
    readings = made.pop("Readings")
    kept = {name: (HERE / "making" / name).read_bytes() for name in ("logger.map.toml", "answers.toml")}
    return {"field.xlsx": workbook.write(data["title"], made), "logger.csv": logger.write(readings), **kept}


def main() -> None:
    """Write every sample and every attachment."""
    from making import papers

    VALID.mkdir(exist_ok=True)
    for name in SAMPLES:
        (VALID / f"{name}.xlsx").write_bytes(build(name))
    (VALID / "logger_day").mkdir(exist_ok=True)
    for name, content in logger_day().items():
        (VALID / "logger_day" / name).write_bytes(content)
    papers.write_all(VALID / "attachments")


if __name__ == "__main__":
    main()
