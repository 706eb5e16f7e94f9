"""Make one defect file for each problem code: the valid gas boiler sample with one small change.

Run ``python sample_inputs/make_defects.py`` to write ``sample_inputs/defects/`` again.  What is changed for which
code stands in ``defects/changes.toml``; changes of the file itself are the functions below.
"""

from __future__ import annotations

import copy
import io
import re
import tomllib
import zipfile
from collections.abc import Callable, Mapping
from datetime import datetime, timedelta
from functools import cache
from pathlib import Path
from typing import Any

import make_samples

Row = dict[str, Any]
Sheets = dict[str, list[Row]]

DEFECTS = Path(__file__).resolve().parent / "defects"
BASE = "gas_boiler_us"
#: Sheets a defect does not need.
LEFT_OUT = {
    "day": ("Location", "Points", "Process", "Attachments"),
    "full": ("Location", "Points", "Process", "Attachments"),
    "short": ("Location", "Points", "Process", "Attachments", "Fuel", "Fuel use", "Moisture", "Limits", "Events"),
}
OLE = bytes.fromhex("d0cf11e0a1b11ae1")


@cache
def changes() -> Mapping[str, Any]:
    """What is changed for each code."""
    with (DEFECTS / "changes.toml").open("rb") as file:
        return tomllib.load(file)


@cache
def _whole() -> tuple[str, Sheets]:
    data = make_samples.scenario(BASE)
    return data["title"], make_samples.sheets.all_sheets(data)


def base(size: str) -> Sheets:
    """The sheets of the valid sample, smaller: "day" has each minute, "full" those of runs, "short" four of each."""
    sheets = copy.deepcopy({name: rows for name, rows in _whole()[1].items() if name not in LEFT_OUT[size]})
    if size == "day":
        return sheets
    kept = []
    for run in sheets["Runs"]:
        within = [row for row in sheets["Readings"] if run["Start"] < row["Time"] <= run["End"]]
        kept += within if size == "full" else within[:4]
    sheets["Readings"] = kept
    return sheets


def build(code: str) -> tuple[str, bytes]:
    """The name and the bytes of the defect file of a code."""
    change = changes()[code]
    sheets = base(change.get("base", "short"))
    _apply(sheets, change)
    content = make_samples.workbook.write(_whole()[0], sheets)
    if "file" in change:
        content = FILE_CHANGES[change["file"]](content)
    return f"{code}.json" if content.startswith(b"{") else f"{code}.xlsx", content


def _apply(sheets: Sheets, change: Mapping[str, Any]) -> None:
    for name in change.get("drop_sheets", ()):
        del sheets[name]
    for name, column in change.get("drop_columns", ()):
        for row in sheets[name]:
            row.pop(column, None)
    for name, old, new in change.get("rename", ()):
        sheets[name] = [{new if key == old else key: value for key, value in row.items()} for row in sheets[name]]
    for rule in change.get("remove", ()):
        chosen = _chosen(sheets, rule)
        sheets[rule["sheet"]] = [row for row in sheets[rule["sheet"]] if not any(row is c for c in chosen)]
    for rule in change.get("set", ()):
        for row in _chosen(sheets, rule):
            row[rule["column"]] = rule["value"]
    for name, minutes in change.get("later", {}).items():
        for row in sheets[name]:
            row["Time"] += timedelta(minutes=minutes)
    for name, rows in change.get("add", {}).items():
        sheets.setdefault(name, []).extend(copy.deepcopy(rows))


def _chosen(sheets: Sheets, rule: Mapping[str, Any]) -> list[Row]:
    """The rows a rule speaks of."""
    rows = sheets[rule["sheet"]]
    if "row" in rule:
        return [rows[rule["row"]]]
    if "item" in rule:
        return [row for row in rows if row["Item"] == rule["item"]]
    if "run" in rule:
        run = next(r for r in sheets["Runs"] if r["Run"] == rule["run"])
        within = [row for row in rows if run["Start"] < row["Time"] <= run["End"]]
        return [within[m] for m in rule["minutes"]] if "minutes" in rule else within
    where = rule.get("where", {})
    chosen = [row for row in rows if all(row.get(key) == value for key, value in where.items())]
    if "from" not in rule:
        return chosen
    return [row for row in chosen if rule["from"] <= row["Time"] <= rule.get("until", datetime.max)]


def rezipped(content: bytes, change: Callable[[str, bytes], bytes], more: Mapping[str, bytes] | None = None) -> bytes:
    """The container with its parts changed, and with parts added; the same bytes each time."""
    buffer = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(content)) as old, zipfile.ZipFile(buffer, "w", zipfile.ZIP_DEFLATED) as new:
        parts = [(info.filename, change(info.filename, old.read(info))) for info in old.infolist()]
        for name, data in [*parts, *(more or {}).items()]:
            info = zipfile.ZipInfo(name, (1980, 1, 1, 0, 0, 0))
            info.compress_type = zipfile.ZIP_DEFLATED
            new.writestr(info, data)
    return buffer.getvalue()


def _in_runs(content: bytes, pattern: bytes, replacement: bytes) -> bytes:
    """The container with one place of the sheet Runs changed."""
    with zipfile.ZipFile(io.BytesIO(content)) as archive:
        names = re.findall(rb'<sheet name="([^"]+)"', archive.read("xl/workbook.xml"))
    part = f"xl/worksheets/sheet{names.index(b'Runs') + 1}.xml"

    def change(name: str, data: bytes) -> bytes:
        return re.sub(pattern, replacement, data, count=1) if name == part else data

    return rezipped(content, change)


def _with_dtd(content: bytes) -> bytes:
    def change(name: str, data: bytes) -> bytes:
        return (
            data.replace(b"<workbook ", b'<!DOCTYPE workbook [<!ENTITY a "b">]>\n<workbook ', 1)
            if name == "xl/workbook.xml"
            else data
        )

    return rezipped(content, change)


def _bomb(content: bytes) -> bytes:
    return rezipped(content, lambda name, data: data, {"xl/media/nothing.xml": b"<a>" + b" " * (8 << 20) + b"</a>"})


FILE_CHANGES: dict[str, Callable[[bytes], bytes]] = {
    "comma separated text": lambda content: b"Time,NOx,O2\r\n2026-04-14 09:01,24.1,4.2\r\n",
    "old binary container": lambda content: OLE + bytes(504) + "Workbook".encode("utf-16-le") + bytes(496),
    "encrypted container": lambda content: OLE + bytes(504) + "EncryptedPackage".encode("utf-16-le") + bytes(480),
    "first half": lambda content: content[: len(content) // 2],
    "eight megabytes of nothing": _bomb,
    "document type declaration": _with_dtd,
    "stray cell": lambda content: _in_runs(
        content, rb"</sheetData>", rb'<row r="200000"><c r="XFD200000"><v>1</v></c></row></sheetData>'
    ),
    "macro part": lambda content: rezipped(content, lambda n, d: d, {"xl/vbaProject.bin": b"no macro is in here"}),
    "broken json": lambda content: b'{"Test": {"Facility": "Alder Creek Works (invented)",}}\n',
    "hidden row": lambda content: _in_runs(content, rb'<row r="5"', rb'<row r="5" hidden="1"'),
    "formula never calculated": lambda content: _in_runs(content, rb"<v>46\.4</v>", rb"<f>48*0.967</f>"),
}


def build_folder(code: str) -> dict[str, bytes]:
    """The files of the defect folder of a code, by name."""
    from making import broken_folders

    made = base("day" if code in broken_folders.WHOLE_DAY else "short")
    readings = made.pop("Readings")
    files = broken_folders.whole(make_samples.workbook.write(_whole()[0], made), readings)
    return broken_folders.CHANGES[code](files, readings)


def folder_codes() -> list[str]:
    """The codes whose sample is a folder."""
    from making import broken_folders

    return list(broken_folders.CHANGES)


def main() -> None:
    """Write every defect file and every defect folder."""
    made = dict(build(code) for code in changes())
    for old in (*DEFECTS.glob("*.xlsx"), *DEFECTS.glob("*.json")):
        old.unlink()
    for name, content in made.items():
        (DEFECTS / name).write_bytes(content)
    for code in folder_codes():
        folder = DEFECTS / code
        folder.mkdir(exist_ok=True)
        for old in folder.iterdir():
            old.unlink()
        for name, content in build_folder(code).items():
            (folder / name).write_bytes(content)


if __name__ == "__main__":
    main()
