"""The command line as a user meets it: files, words, exit codes, and nothing half written."""

from __future__ import annotations

import io
import json
import re
import subprocess
import sys
from pathlib import Path

import pytest

from reporter import cli
from reporter.cli import OK, UNREADABLE, UNWRITTEN, USAGE, WITHHELD, main, parser

ROOT = Path(__file__).resolve().parents[1]
VALID = ROOT / "sample_inputs" / "valid"


def run(*arguments: str | Path) -> tuple[int, str, str]:
    out, err = io.StringIO(), io.StringIO()
    code = main([str(a) for a in arguments], out, err)
    return code, out.getvalue(), err.getvalue()


def test_check_writes_nothing(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)
    code, out, err = run("check", VALID / "gas_boiler_us.xlsx")
    assert code == OK
    assert not err
    assert "at or below the limit as entered" in out
    assert list(tmp_path.iterdir()) == []


def test_a_withheld_result_has_its_own_exit_code() -> None:
    code, out, _ = run("check", VALID / "bias_invalid_run.xlsx")
    assert code == WITHHELD
    assert "System bias" in out


def test_one_bad_file_does_not_stop_the_others(tmp_path: Path) -> None:
    bad = tmp_path / "bad.xlsx"
    bad.write_bytes(b"this is no workbook")
    code, out, err = run("check", bad, VALID / "gas_boiler_us.xlsx")
    assert code == UNREADABLE
    assert "not a workbook" in err
    assert "at or below the limit as entered" in out
    assert "bad.xlsx" in out.splitlines()[-2] + out.splitlines()[-1] + out.splitlines()[-3]


def test_an_input_that_is_not_there_is_said() -> None:
    code, _, err = run("check", "nowhere.xlsx")
    assert code == UNREADABLE
    assert "nowhere.xlsx" in err
    assert "Traceback" not in err


def test_report_writes_three_files_with_the_same_bytes_twice(tmp_path: Path) -> None:
    issued = "2026-05-01T12:00:00+00:00"
    for folder in ("a", "b"):
        code, out, _ = run("report", VALID / "gas_turbine.xlsx", "--out", tmp_path / folder, "--issued", issued)
        assert code in {OK, WITHHELD}
        assert "Written: gas_turbine.json, gas_turbine.xlsx, gas_turbine.pdf" in out
    for suffix in ("json", "xlsx", "pdf"):
        first, second = ((tmp_path / f / f"gas_turbine.{suffix}").read_bytes() for f in "ab")
        assert first == second, suffix


def test_report_never_overwrites_its_input(tmp_path: Path) -> None:
    copy = tmp_path / "gas_turbine.xlsx"
    copy.write_bytes((VALID / "gas_turbine.xlsx").read_bytes())
    code, _, err = run("report", copy, "--out", tmp_path)
    assert code == UNWRITTEN
    assert "overwrite" in err
    assert copy.read_bytes() == (VALID / "gas_turbine.xlsx").read_bytes()
    assert [p.name for p in tmp_path.iterdir()] == ["gas_turbine.xlsx"]


def test_two_inputs_of_one_name_are_refused(tmp_path: Path) -> None:
    code, _, err = run("report", "a/test.xlsx", "b/test.xlsx", "--out", tmp_path)
    assert code == USAGE
    assert "test" in err


@pytest.mark.parametrize("arguments", [("--issued", "yesterday"), ("--templates", "no_such_folder")])
def test_wrong_options_are_usage_errors(tmp_path: Path, arguments: tuple[str, str]) -> None:
    code, _, err = run("report", VALID / "gas_turbine.xlsx", "--out", tmp_path, *arguments)
    assert code == USAGE
    assert arguments[0] in err


def test_blank_and_its_faults(tmp_path: Path) -> None:
    code, out, _ = run("blank", tmp_path / "field.xlsx", "--gases", "NOx,CO,O2,CO2", "--runs", "3", "--units", "US")
    assert code == OK
    assert "field.xlsx" in out
    code, _, err = run("blank", tmp_path / "other.xlsx", "--gases", "NOx,unobtainium")
    assert code == USAGE
    assert "unobtainium" in err
    assert not (tmp_path / "other.xlsx").exists()


def test_fuel_by_name_by_composition_and_unknown() -> None:
    code, out, _ = run("fuel", "natural gas")
    assert code == OK
    assert "8710" in out.replace(",", "")
    assert "assumed" in out
    code, out, _ = run("fuel", "CH4 94, C2H6 4, N2 2", "--units", "SI")
    assert code == OK
    assert "m3/J" in out
    code, _, err = run("fuel", "unicorn")
    assert code == USAGE
    assert "unicorn" in err


@pytest.mark.parametrize("which", ["record", "results"])
def test_schema_is_json(which: str) -> None:
    code, out, _ = run("schema", which)
    assert code == OK
    assert json.loads(out)["$schema"].startswith("https://json-schema.org/draft/2020-12")


def test_every_command_option_and_exit_code_is_in_the_readme() -> None:
    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    actions = next(a for a in parser()._actions if hasattr(a, "choices") and a.choices)
    assert actions.choices is not None
    for name, command in actions.choices.items():  # type: ignore[attr-defined]
        assert f"fluebook {name}" in readme, name
        for action in command._actions:
            for option in action.option_strings:
                if option not in {"-h", "--help"}:
                    assert option in readme, f"{name} {option}"
    for code in (OK, WITHHELD, USAGE, UNREADABLE, UNWRITTEN):
        assert re.search(rf"^\| {code} \|", readme, re.MULTILINE), code
        assert re.search(rf"^  {code}  ", cli._EXIT_CODES, re.MULTILINE), code


@pytest.mark.parametrize(
    ("arguments", "absent"),
    [
        (["--help"], {"pandas", "weasyprint", "pint", "openpyxl", "numpy", "jinja2", "xlsxwriter"}),
        (["check", str(VALID / "gas_turbine.xlsx")], {"pandas", "weasyprint", "pint", "jinja2", "xlsxwriter"}),
    ],
)
def test_heavy_libraries_are_imported_where_used(arguments: list[str], absent: set[str]) -> None:
    code = (
        "import sys\nfrom reporter.cli import main\n"
        f"try:\n    main({arguments!r})\nexcept SystemExit:\n    pass\n"
        "print('LOADED', ' '.join(sorted({m.split('.')[0] for m in sys.modules})))"
    )
    done = subprocess.run([sys.executable, "-c", code], cwd=ROOT, capture_output=True, text=True, check=True)
    loaded = set(done.stdout.split("LOADED ")[1].split())
    assert not loaded & absent


def test_a_person_who_stops_a_command_meets_one_line() -> None:
    code = "import reporter.cli as cli\ndef stopped(): raise KeyboardInterrupt\ncli.main = stopped\ncli.entry_point()\n"
    made = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=False)
    assert made.returncode == 130
    assert made.stderr.splitlines() == ["fluebook: stopped; an unfinished report leaves no file"]


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="a device that is always full is needed")
@pytest.mark.parametrize("at_once", ["", "1"])
def test_an_output_that_is_full_is_said_without_a_traceback(at_once: str, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setenv("PYTHONUNBUFFERED", at_once)
    with Path("/dev/full").open("w") as full:
        command = [sys.executable, "-m", "reporter", "fuel", "natural gas"]
        done = subprocess.run(command, stdout=full, stderr=subprocess.PIPE, text=True)
    assert done.returncode == 4
    assert done.stderr == "fluebook: the output cannot be written: No space left on device\n"
