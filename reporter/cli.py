"""The command line: each command parses, makes one library call, prints, and gives an exit code.

Exit codes: 0 nothing bears on a result; 1 a run is not counted or a result withheld, for a reason said, or a
question is open; 2 the command is wrong; 3 an input cannot be read; 4 a file cannot be written.
"""

from __future__ import annotations

import argparse
import os
import sys

from reporter.version import VERSION

TYPE_CHECKING = False  # known to type checkers; what help does not need is not imported for it
if TYPE_CHECKING:
    from collections.abc import Callable, Sequence
    from pathlib import Path
    from typing import TextIO

    from reporter.output.renderer import PageRenderer
    from reporter.tasks import Task

OK, WITHHELD, USAGE, UNREADABLE, UNWRITTEN = 0, 1, 2, 3, 4
#: What a shell gives for a command stopped by the keyboard.
_STOPPED = 130

_EXIT_CODES = """exit codes:
  0  nothing bears on a result (notes may be said)
  1  a criterion is not met or a fact is missing: a run is not counted or a result withheld; a question of map is open
  2  the command is wrong
  3  an input cannot be read
  4  a file cannot be written
"""


_INPUT = "field workbook, JSON record, or a folder of one test with its logger files"
_MAPPING = "mapping to read the logger files of a folder by (default: those in the folder)"


def _path(text: str) -> Path:
    from pathlib import Path

    return Path(text)


def parser() -> argparse.ArgumentParser:
    """The whole command line."""
    top = argparse.ArgumentParser(
        prog="fluebook",
        description="Stack-test readings to a report a reviewer can recompute. It decides no compliance.",
        epilog=_EXIT_CODES,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )
    top.add_argument("--version", action="version", version=f"fluebook {VERSION}")
    commands = top.add_subparsers(dest="command", required=True, metavar="COMMAND")
    _report_parser(commands.add_parser("report", help="write PDF, workbook and JSON"))
    check = commands.add_parser("check", help="read, assess and print; write nothing")
    check.add_argument("inputs", nargs="+", type=_path, metavar="INPUT", help=_INPUT)
    check.add_argument("--mapping", type=_path, metavar="FILE", help=_MAPPING)
    _map_parser(commands.add_parser("map", help="look at a logger's file and make the mapping it is read by"))
    blank = commands.add_parser("blank", help="write an empty field workbook")
    blank.add_argument("file", type=_path, help="where to write it (.xlsx)")
    blank.add_argument("--gases", default="NOx,CO,O2,CO2", help="gases measured, by comma (default: %(default)s)")
    blank.add_argument("--runs", type=int, default=3, help="number of runs (default: %(default)s)")
    blank.add_argument("--units", choices=("US", "SI"), default="US", help="unit system (default: %(default)s)")
    fuel = commands.add_parser("fuel", help="heating value, F factors, air, fuel factor, maximum CO2 of a fuel")
    fuel.add_argument("fuel", nargs="+", help="a published fuel name, or a composition such as CH4 94, C2H6 4, N2 2")
    fuel.add_argument("--units", choices=("US", "SI"), default="US", help="unit system (default: %(default)s)")
    _rehearse_parser(commands.add_parser("rehearse", help="write a synthetic test of known truth"))
    schema = commands.add_parser("schema", help="print a JSON Schema")
    schema.add_argument(
        "which", nargs="?", choices=("record", "results"), default="record",
        help="of the record given as JSON, or of the results (default: %(default)s)",
    )  # fmt: skip
    return top


def _report_parser(command: argparse.ArgumentParser) -> None:
    command.add_argument("inputs", nargs="+", type=_path, metavar="INPUT", help=_INPUT)
    command.add_argument("--mapping", type=_path, metavar="FILE", help=_MAPPING)
    command.add_argument("--out", type=_path, required=True, metavar="DIR", help="folder for the results")
    command.add_argument("--templates", type=_path, metavar="DIR", help="letterhead, wording and style of a firm")
    command.add_argument("--issued", metavar="TIME", help="issue time, ISO 8601 (default: SOURCE_DATE_EPOCH, else now)")
    command.add_argument("--minute-data", action="store_true", help="print the logged readings too")


_PROFILES = ("steady", "ramp", "swing")
_GASES = "NOx,CO,O2,CO2"
_FAULTS = ("air-leak", "drifting-analyzer", "wrong-cylinder", "wet-called-dry", "wrong-fuel", "clock-shift")


def _rehearse_parser(command: argparse.ArgumentParser) -> None:
    command.add_argument("file", type=_path, metavar="OUT", help="the field workbook to write; with --shape the folder")
    command.add_argument("--fuel", default="natural gas", help="a published fuel name or a composition (%(default)s)")
    command.add_argument("--gases", help="of NOx, CO, SO2, O2, CO2, by comma (NOx,CO,O2,CO2; with --shape its own)")
    command.add_argument("--shape", type=_path, metavar="MAPPING", help="write a folder in the shape of this mapping")
    command.add_argument("--runs", type=int, default=3, help="number of runs (%(default)s)")
    command.add_argument("--run-minutes", type=int, default=60, metavar="MIN", help="length of a run (%(default)s)")
    command.add_argument("--units", choices=("US", "SI"), default="US", help="unit system (%(default)s)")
    command.add_argument("--oxygen", type=float, default=4.0, metavar="PERCENT", help="dry oxygen (%(default)s)")
    command.add_argument("--load-profile", choices=_PROFILES, default="steady", help="load over the day (%(default)s)")
    command.add_argument("--interval", type=int, default=60, metavar="SECONDS", help="logging interval (%(default)s)")
    command.add_argument("--fault", choices=_FAULTS, help="the one thing that is wrong (default: nothing)")
    command.add_argument("--seed", type=int, default=1, metavar="N", help="the same seed, the same test (%(default)s)")
    command.add_argument("--truth", type=_path, metavar="TRUTH.json", help="write what is true, and the fault's signs")


def _map_parser(command: argparse.ArgumentParser) -> None:
    command.add_argument("file", type=_path, metavar="FILE", help="text table or workbook of a logger")
    command.add_argument("--save", type=_path, metavar="MAPPING", help="where to write the mapping (NAME.map.toml)")
    command.add_argument("--questions", type=_path, metavar="TOML", help="where to write the open questions")
    command.add_argument("--answers", type=_path, metavar="TOML", help="that file with its answers filled in")
    command.add_argument("--against", type=_path, metavar="OLD", help="the file as sent before: say what changed")
    command.add_argument("--name", default="", metavar="TEXT", help="name of the mapping: the firm, client or logger")


def main(arguments: Sequence[str] | None = None, out: TextIO | None = None, err: TextIO | None = None) -> int:
    """Run one command; streams can be given."""
    given = parser().parse_args(arguments)
    commands: dict[str, Callable[[argparse.Namespace, TextIO, TextIO], int]] = {
        "report": _report,
        "check": _check,
        "map": _map,
        "blank": _blank,
        "fuel": _fuel,
        "rehearse": _rehearse,
        "schema": _schema,
    }
    return commands[given.command](given, out or sys.stdout, err or sys.stderr)


def entry_point() -> None:
    """The installed command; a reader that closes the pipe early is no fault, nor is a person who stops it."""
    try:
        code = main()
        sys.stdout.flush()
        sys.exit(code)
    except KeyboardInterrupt:
        print("fluebook: stopped; an unfinished report leaves no file", file=sys.stderr)
        sys.exit(_STOPPED)
    except BrokenPipeError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        sys.exit(OK)
    except OSError as error:  # files are said where they are opened: what is left is the output itself
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        print(f"fluebook: the output cannot be written: {error.strerror}", file=sys.stderr)
        sys.exit(UNWRITTEN)


def _check(given: argparse.Namespace, out: TextIO, err: TextIO) -> int:
    from reporter.tasks import check_input

    return _each(given.inputs, lambda path: check_input(path, given.mapping), out, err)


def _map(given: argparse.Namespace, out: TextIO, err: TextIO) -> int:
    from reporter.map_task import map_file

    task = map_file(
        given.file, given.name,
        save=given.save, questions=given.questions, answers=given.answers, against=given.against,
    )  # fmt: skip
    stream = err if task.code in {USAGE, UNREADABLE, UNWRITTEN} else out
    print(_encodable(task.text, stream), file=stream)
    return task.code


def _report(given: argparse.Namespace, out: TextIO, err: TextIO) -> int:
    from reporter.output.renderer_process import renderer_beside

    if given.templates is not None and not given.templates.is_dir():
        print(f"fluebook: --templates: there is no folder {given.templates}", file=err)
        return USAGE
    with renderer_beside() as renderer:
        return _reported(given, renderer, out, err)


def _reported(given: argparse.Namespace, renderer: PageRenderer | None, out: TextIO, err: TextIO) -> int:
    from reporter.api import issue_time, name_of
    from reporter.tasks import ReportOptions, report_input

    try:
        issued = issue_time(given.issued)
    except ValueError as error:
        print(f"fluebook: {'' if given.issued is None else '--issued '}{error}", file=err)
        return USAGE
    names = [name_of(path).lower() for path in given.inputs]
    twice = sorted({name for name in names if names.count(name) > 1})
    if twice:
        print(f"fluebook: two inputs of one name would overwrite each other: {', '.join(twice)}", file=err)
        return USAGE
    options = ReportOptions(given.templates, given.minute_data, given.mapping, renderer)
    return _each(given.inputs, lambda path: report_input(path, given.out, issued, options), out, err)


def _each(inputs: Sequence[Path], work: Callable[[Path], Task], out: TextIO, err: TextIO) -> int:
    """Every input as its own task; an overview closes a run of several."""
    from reporter.tasks import overview_of

    done: list[Task] = []
    for path in inputs:
        task = work(path)
        done.append(task)
        stream = err if task.code in {UNREADABLE, UNWRITTEN} else out
        print(_encodable(task.text, stream), file=stream)
    if len(done) > 1:
        print(_encodable(overview_of(done), out), file=out)
    return max(task.code for task in done)


def _encodable(text: str, stream: TextIO) -> str:
    """The text with what the terminal cannot show replaced."""
    from reporter.terminal_text import encodable

    return encodable(text, getattr(stream, "encoding", None) or "utf-8")


def _blank(given: argparse.Namespace, out: TextIO, err: TextIO) -> int:
    from reporter.equation import System
    from reporter.errors import FluebookError, OutputError
    from reporter.intake.blank import write_blank

    gases = [name.strip() for name in given.gases.split(",") if name.strip()]
    try:
        write_blank(given.file, gases, given.runs, System(given.units))
    except OutputError as error:
        print(f"fluebook: {error}", file=err)
        return UNWRITTEN
    except FluebookError as error:
        print(f"fluebook: {error}", file=err)
        return USAGE
    print(f"{given.file.name}: field workbook for {', '.join(gases)}, {given.runs} runs, {given.units} units", file=out)
    return OK


def _fuel(given: argparse.Namespace, out: TextIO, err: TextIO) -> int:
    from reporter.combustion.describe import describe_fuel
    from reporter.equation import System
    from reporter.errors import FluebookError

    try:
        figures = describe_fuel(" ".join(given.fuel), System(given.units))
        print(_encodable(str(figures), out), file=out)
    except FluebookError as error:
        print(f"fluebook: {error}", file=err)
        return USAGE
    return OK


def _rehearse(given: argparse.Namespace, out: TextIO, err: TextIO) -> int:
    from reporter.equation import System
    from reporter.errors import FluebookError, OutputError
    from reporter.rehearse import Fault, Order, Profile, write_rehearsal

    if given.shape is not None and given.gases is not None:
        print("fluebook: with --shape the gases are those of the mapping; leave --gases out", file=err)
        return USAGE
    try:
        order = Order(
            fuel=given.fuel,
            gases=tuple(name.strip() for name in (given.gases or _GASES).split(",") if name.strip()),
            runs=given.runs,
            run_minutes=given.run_minutes,
            system=System(given.units),
            oxygen=given.oxygen,
            profile=Profile(given.load_profile),
            interval=given.interval,
            fault=None if given.fault is None else Fault(given.fault),
            seed=given.seed,
        )
        write_rehearsal(order, given.file, given.truth, shape=given.shape)
    except OutputError as error:
        print(f"fluebook: {error}", file=err)
        return UNWRITTEN
    except FluebookError as error:
        print(f"fluebook: {error}", file=err)
        return USAGE
    fault = given.fault or "no fault"
    said = f"{given.file.name}: SYNTHETIC test of {given.runs} runs on {given.fuel}, {fault}, seed {given.seed}"
    print(_encodable(said, out), file=out)
    return OK


def _schema(given: argparse.Namespace, out: TextIO, err: TextIO) -> int:
    import json

    if given.which == "results":
        from reporter.output.results_schema import results_schema as make
    else:
        from reporter.intake.schema import input_schema as make
    print(json.dumps(make(), indent=2, ensure_ascii=False), file=out)
    return OK


if __name__ == "__main__":
    entry_point()
