"""fluebook: stack-test readings to a report that a reviewer can recompute.

The names below are the public interface; each is loaded when it is first used, so that importing the
package costs next to nothing.

>>> import reporter
>>> reporter.gas("nox").expressed_as
'NO2'
"""

from __future__ import annotations

from importlib import import_module

from reporter.version import VERSION

TYPE_CHECKING = False  # known to type checkers; importing `typing` would cost a tenth of `fluebook --help`
if TYPE_CHECKING:
    from typing import Any

    from reporter.api import Report as Report
    from reporter.api import assess as assess
    from reporter.api import problems_of as problems_of
    from reporter.api import read as read
    from reporter.api import report as report
    from reporter.api import report_files as report_files
    from reporter.basis import Basis as Basis
    from reporter.combustion.describe import describe_fuel as describe_fuel
    from reporter.equation import System as System
    from reporter.errors import BasisError as BasisError
    from reporter.errors import FluebookError as FluebookError
    from reporter.gases import gas as gas
    from reporter.intake.blank import write_blank as write_blank
    from reporter.ledger import Ledger as Ledger
    from reporter.outcome import Outcome as Outcome
    from reporter.problems import Problem as Problem
    from reporter.record import Record as Record
    from reporter.units import quantity as quantity

#: The version of the package.
__version__ = VERSION

_HOMES = {
    "Report": "api",
    "assess": "api",
    "problems_of": "api",
    "report": "api",
    "report_files": "api",
    "Basis": "basis",
    "describe_fuel": "combustion.describe",
    "System": "equation",
    "BasisError": "errors",
    "FluebookError": "errors",
    "gas": "gases",
    "read": "api",
    "write_blank": "intake.blank",
    "Ledger": "ledger",
    "Outcome": "outcome",
    "Problem": "problems",
    "Record": "record",
    "quantity": "units",
}

__all__ = ["__version__", *sorted(_HOMES)]


def __getattr__(name: str) -> Any:
    if name not in _HOMES:
        raise AttributeError(f"module 'reporter' has no attribute {name!r}")
    return getattr(import_module(f"reporter.{_HOMES[name]}"), name)


def __dir__() -> list[str]:
    return __all__
