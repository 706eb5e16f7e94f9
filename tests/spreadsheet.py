"""A spreadsheet program as the outside check of the results workbook: recalculate, read the values back.

LibreOffice keeps the value stored beside a formula when it opens a workbook of another program; only a
profile with `OOXMLRecalcMode` 0 ("always") makes it calculate.  Every recalculation here uses such a
profile, in a folder of its own.
"""

from __future__ import annotations

import os
import shutil
import subprocess
from collections.abc import Callable, Mapping
from io import BytesIO
from pathlib import Path
from typing import Any

import openpyxl
import pytest

from reporter.ledger import Entry, FromEquation, Ledger
from reporter.trace import Call, Name, Negation, Number, Operation, Term

PROGRAM = shutil.which("soffice") or shutil.which("libreoffice")
_PROFILE = """<?xml version="1.0" encoding="UTF-8"?>
<oor:items xmlns:oor="http://openoffice.org/2001/registry"
  xmlns:xs="http://www.w3.org/2001/XMLSchema" xmlns:xsi="http://www.w3.org/2001/XMLSchema-instance">
<item oor:path="/org.openoffice.Office.Calc/Formula/Load">
<prop oor:name="OOXMLRecalcMode" oor:op="fuse"><value>0</value></prop></item>
</oor:items>
"""


def need_office() -> None:
    """Skip where no spreadsheet program is installed, except in continuous integration."""
    if PROGRAM is None and not os.environ.get("CI"):
        pytest.skip("no LibreOffice on this machine")


def converted(files: Mapping[str, bytes], folder: Path, kind: str) -> dict[str, bytes]:
    """Workbooks by name, recalculated and saved as another kind of file."""
    assert PROGRAM is not None, "LibreOffice is needed: install libreoffice-calc"
    profile, source, target = folder / "profile", folder / "in", folder / "out"
    (profile / "user").mkdir(parents=True, exist_ok=True)
    (profile / "user" / "registrymodifications.xcu").write_text(_PROFILE, encoding="utf-8")
    source.mkdir(exist_ok=True)
    for name, content in files.items():
        (source / f"{name}.xlsx").write_bytes(content)
    command = [PROGRAM, f"-env:UserInstallation={profile.as_uri()}", "--headless", "--convert-to", kind]
    command += ["--outdir", str(target), *(str(source / f"{name}.xlsx") for name in files)]
    subprocess.run(command, check=True, capture_output=True, timeout=300)
    suffix = kind.partition(":")[0]
    return {name: (target / f"{name}.{suffix}").read_bytes() for name in files}


def recalculated(files: Mapping[str, bytes], folder: Path) -> dict[str, Any]:
    """Workbooks by name, every formula calculated afresh, as openpyxl workbooks of values."""
    made = converted(files, folder, "xlsx:Calc MS Excel 2007 XML")
    return {name: openpyxl.load_workbook(BytesIO(content), data_only=True) for name, content in made.items()}


def agrees(found: Any, expected: Any, largest: float = 0.0) -> bool:
    """Whether a recalculated value is the expected one: |a - b| <= 1e-9 max(|a|, |b|), or for a difference
    1e-12 of its largest term; texts are equal."""
    if isinstance(expected, str) or isinstance(found, str) or found is None:
        return bool(found == expected)
    return abs(found - expected) <= max(1e-9 * max(abs(found), abs(expected)), 1e-12 * largest)


def largest_term(ledger: Ledger, entry: Entry) -> float:
    """For an entry marked as a difference, the size of the terms it is the difference of; else 0."""
    if not (isinstance(entry.origin, FromEquation) and entry.origin.equation.difference):
        return 0.0
    return _magnitude(ledger.trace(entry))


_MAGNITUDES: dict[str, Callable[[float, float], float]] = {
    "+": lambda a, b: a + b,
    "-": max,
    "*": lambda a, b: a * b,
    "/": lambda a, b: a / b if b else 0.0,
    "^": lambda a, b: a**b,
}


def _magnitude(term: Term) -> float:
    """The value of a tree with the larger operand taken for every difference."""
    match term:
        case Name(value=value):
            return max(map(abs, value)) if isinstance(value, tuple) else abs(value)
        case Number(value=value):
            return abs(value)
        case Negation(operand=operand):
            return _magnitude(operand)
        case Operation(operator=operator, left=left, right=right):
            return _MAGNITUDES[operator](_magnitude(left), _magnitude(right))
        case Call(arguments=arguments):
            return max(_magnitude(argument) for argument in arguments)
    raise TypeError(type(term).__name__)
