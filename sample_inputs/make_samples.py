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


def main() -> None:
    """Write every sample and every attachment."""
    from making import papers

    VALID.mkdir(exist_ok=True)
    for name in SAMPLES:
        (VALID / f"{name}.xlsx").write_bytes(build(name))
    papers.write_all(VALID / "attachments")


if __name__ == "__main__":
    main()
