"""The readings of a test day as another logger would write them: semicolons, decimal commas, two header rows."""

from __future__ import annotations

from collections.abc import Mapping
from datetime import datetime
from typing import Any

from making.day import Rows

#: Sheet "Readings" to the columns of the logger: header, unit, decimals lost nowhere.
COLUMNS = {
    "NOx": ("Stickoxide NOx", "ppm tr."),
    "CO": ("Kohlenmonoxid CO", "ppm tr."),
    "SO2": ("SO2", "ppm tr."),
    "O2": ("Sauerstoff", "Vol% tr."),
    "CO2": ("CO2", "Vol% tr."),
}
OXYGEN_OF_AIR, REFERENCE = 21.0, 6.0


def text_of(value: Any) -> str:
    """A value with a decimal comma; words stay words."""
    if value is None:
        return ""
    return value if isinstance(value, str) else f"{value!r}".replace(".", ",")


def corrected(row: Mapping[str, Any]) -> str:
    """The NOx column that this logger corrects to its reference oxygen by itself."""
    nox, oxygen = row["NOx"], row["O2"]
    if isinstance(nox, str) or isinstance(oxygen, str) or oxygen > 19.0:
        return ""
    return f"{nox * (OXYGEN_OF_AIR - REFERENCE) / (OXYGEN_OF_AIR - oxygen):.1f}".replace(".", ",")


def write(readings: Rows) -> bytes:
    """The logger's file: a title block, two header rows, the readings, their mean at the foot."""
    lines = [
        "Messdatenexport;Kessel 1 (erfunden)",
        "Logger;DL-0000",
        "",
        ";".join(["Datum", "Uhrzeit", *(name for name, _ in COLUMNS.values()), "NOx bez. auf 6% O2", "Bemerkung"]),
        ";".join(["", "hh:mm:ss", *(unit for _, unit in COLUMNS.values()), "ppm tr.", ""]),
    ]
    for row in readings:
        moment: datetime = row["Time"]
        cells = [f"{moment:%d.%m.%Y}", f"{moment:%H:%M:%S}", *(text_of(row[name]) for name in COLUMNS)]
        lines.append(";".join([*cells, corrected(row), ""]))
    means = []
    for name in COLUMNS:
        values = [row[name] for row in readings if not isinstance(row[name], str) and row[name] is not None]
        means.append(f"{sum(values) / len(values):.2f}".replace(".", ","))
    lines.append(";".join(["Mittelwert", "", *means, "", ""]))
    return ("\r\n".join(lines) + "\r\n").encode("cp1252")
