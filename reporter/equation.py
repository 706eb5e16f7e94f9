"""One published formula is one function; the decorator adds what the function's arithmetic does not say.

The body is ordinary arithmetic on keyword arguments plus the functions of `reporter.functions`.  Every
printed constant is a keyword with a `constant(...)` default, so that it carries value, unit, symbol and
citation and is lifted to whatever the caller computes with: floats, arrays, pint quantities, numbers with
uncertainty, or traced terms.  Pure numbers (the 2 of a square) may stand as literals.

Units are written in the canonical spellings of `reporter.units`; a pair is (US, SI); ``"*"`` followed by a
letter is a unit variable, bound by the first argument that has it (7E-5 serves ppm and percent alike).
"""

from __future__ import annotations

import inspect
import math
from collections.abc import Callable, Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from enum import Enum
from typing import Any, Generic, ParamSpec

import numpy as np

from reporter.basis import NO_BASIS, Basis, Need
from reporter.errors import EquationError, LedgerError, UnitError
from reporter.functions import is_quantity, stacked
from reporter.trace import Name, Number, Term, Terms, is_traced

P = ParamSpec("P")
#: What an equation computes with: float, array, pint quantity, number with uncertainty, traced term.
Value = Any


class System(Enum):
    """Unit system of a test."""

    US = "US"
    SI = "SI"


UnitSpec = str | tuple[str, str]


def unit_in(spec: UnitSpec, system: System) -> str:
    """The unit of a (US, SI) pair, or the one unit."""
    return spec if isinstance(spec, str) else spec[0 if system is System.US else 1]


@dataclass(frozen=True, slots=True)
class Citation:
    """Where a thing is printed: id in `tables/references.toml`, section, equation or table number."""

    document: str
    section: str = ""
    number: str = ""

    def text(self) -> str:
        """Short form for tables, e.g. ``Method 19, 12.2.1, Eq. 19-1``."""
        from reporter.references import short_name

        section = f"§ {self.section}" if self.section else ""
        return ", ".join(part for part in (short_name(self.document), section, self.number) if part)


@dataclass(frozen=True, slots=True)
class Constant:
    """A printed constant: value and unit per system, symbol, citation."""

    us: float
    unit: UnitSpec
    symbol: str = ""
    si: float | None = None
    citation: Citation | None = None

    def value(self, system: System) -> float:
        """The number printed for a unit system."""
        return self.us if system is System.US or self.si is None else self.si


def constant(
    us: float, unit: UnitSpec, symbol: str = "", *, si: float | None = None, cite: Citation | None = None
) -> Any:
    """A default for an equation's keyword: a printed constant (typed Any so that it may stand there)."""
    return Constant(us, unit, symbol, si, cite)


@dataclass(frozen=True, slots=True)
class Parameter:
    """One argument of an equation: its unit, symbol, printed constant (if any) and the basis it needs."""

    name: str
    unit: UnitSpec
    symbol: str
    constant: Constant | None = None
    need: Need | None = None
    series: bool = False


Gives = Callable[[Mapping[str, Basis], Mapping[str, Any]], Basis]


@dataclass(frozen=True)
class Equation(Generic[P]):
    """A published formula with its symbol, unit, basis rule and citation; call it like the function it is."""

    name: str
    body: Callable[P, Any]
    symbol: str
    unit: UnitSpec
    citation: Citation
    parameters: Mapping[str, Parameter]
    gives: Gives
    summary: str
    indicator: bool = False
    difference: bool = False
    system: System = System.US
    __doc__: str | None = field(default=None, compare=False)

    def __call__(self, *args: P.args, **kwargs: P.kwargs) -> Any:
        """The value on bare numbers, arrays, quantities, uncertain numbers or traced terms.

        Raises
        ------
        EquationError
            Where the result is not a finite real number.
        """
        if args:
            raise TypeError(f"{self.name} takes keyword arguments only")
        return self.evaluate(kwargs, self.system)

    def in_system(self, system: System) -> Equation[P]:
        """The same equation with the constants printed for a unit system."""
        return Equation(**{**self.__dict__, "system": system})

    def evaluate(self, values: Mapping[str, Any], system: System) -> Any:
        """The value for arguments by name; constants not given are the printed ones of `system`.

        Raises
        ------
        EquationError
            The result is not a finite real number.
        UnitError
            Quantities of these units do not give the equation's unit.
        """
        self._check_names(values)
        arguments = _aligned(self.parameters, {name: stacked(value) for name, value in values.items()})
        lift = _lifter(arguments.values())
        for name, parameter in self.parameters.items():
            if name not in arguments and parameter.constant is not None:
                arguments[name] = lift(parameter.constant, system)
        try:
            with np.errstate(divide="raise", over="raise", invalid="raise", under="ignore"):
                result = self.body(**arguments)  # type: ignore[call-arg]
                if any(map(is_quantity, arguments.values())):
                    result = _in_unit(result, self, arguments, system)
        except (ArithmeticError, ValueError) as error:
            raise EquationError(f"{self.name} has no value: {error}", _shown(values)) from error
        except TypeError as error:
            if hasattr(error, "units1"):
                raise UnitError(f"{self.name}: {error}", _shown(values)) from error
            if "complex" in str(error):
                raise EquationError(f"{self.name} has no real value", _shown(values)) from error
            raise
        return _finite(result, self.name, values)

    def _check_names(self, given: Iterable[str]) -> None:
        unknown = set(given) - set(self.parameters)
        missing = {n for n, p in self.parameters.items() if p.constant is None} - set(given)
        if unknown or missing:
            raise TypeError(f"{self.name}: unknown {sorted(unknown)}, missing {sorted(missing)}")

    def trace(self, terms: Mapping[str, Term | Terms], system: System) -> Term:
        """The expression tree of the body for named terms."""
        result = self.evaluate(terms, system)
        if not isinstance(result, Term):
            raise EquationError(f"{self.name} cannot be traced")
        return result

    def symbols(self) -> Term:
        """The expression tree in the equation's own symbols."""
        terms: dict[str, Term | Terms] = {}
        for name, parameter in self.parameters.items():
            if parameter.constant is None:
                terms[name] = Name(name, parameter.symbol, parameter.series)
            elif parameter.symbol:
                terms[name] = Name(name, parameter.symbol)
        return self.trace(terms, self.system)

    def units_of(self, units: Mapping[str, str], system: System) -> str:
        """Check the units of the inputs and give the unit of the result.

        Raises
        ------
        LedgerError
            An input is not in the unit the equation is printed for.
        """
        self._check_names(units)
        bound: dict[str, str] = {}
        for name, unit in units.items():
            wanted = unit_in(self.parameters[name].unit, system)
            if wanted.startswith("*"):
                wanted = bound.setdefault(wanted, unit)
            if unit != wanted:
                raise LedgerError(f"{self.name}: {name} must be in {wanted or '1'}, but is in {unit or '1'}")
        result = unit_in(self.unit, system)
        return bound[result] if result.startswith("*") else result

    def basis_of(self, bases: Mapping[str, Basis], values: Mapping[str, Any]) -> Basis:
        """Check the bases of the inputs and give the basis of the result (`BasisError`: they do not fit)."""
        for name, basis in bases.items():
            need = self.parameters[name].need
            if need is not None:
                need.check(basis, f"{self.name}: {name}")
        return self.gives(bases, values)


def equation(
    symbol: str,
    unit: UnitSpec,
    units: Mapping[str, UnitSpec],
    cite: Citation,
    *,
    symbols: Mapping[str, str] | None = None,
    needs: Mapping[str, Need] | None = None,
    gives: Gives | Basis | str = NO_BASIS,
    series: Sequence[str] = (),
    indicator: bool = False,
    difference: bool = False,
) -> Callable[[Callable[P, Any]], Equation[P]]:
    """Make a plain function an `Equation`.

    Parameters
    ----------
    symbol, unit
        Of the result.
    units
        Unit of each argument that is not a printed constant.
    cite
        Where the equation is printed.
    symbols
        Symbol of each argument; its name where absent.
    needs
        What is asked of the basis of an argument.
    gives
        The basis of the result: a fixed one, the name of the argument it is taken from, or a function
        of the input bases and values.
    series
        Arguments that are a series (readings, or one value per run).
    indicator
        The result is 1 or 0.
    difference
        The result is a small difference of large terms; a recalculation is compared with its largest term.
    """

    def decorate(body: Callable[P, Any]) -> Equation[P]:
        parameters: dict[str, Parameter] = {}
        for name, argument in inspect.signature(body).parameters.items():
            printed = argument.default if isinstance(argument.default, Constant) else None
            if printed is None and name not in units:
                raise TypeError(f"{body.__name__}: no unit stated for {name}")
            parameters[name] = Parameter(
                name=name,
                unit=printed.unit if printed is not None else units[name],
                symbol=(symbols or {}).get(name, printed.symbol if printed is not None else name),
                constant=printed,
                need=(needs or {}).get(name),
                series=name in series,
            )
        doc = inspect.getdoc(body) or body.__name__
        return Equation(
            name=body.__name__,
            body=body,
            symbol=symbol,
            unit=unit,
            citation=cite,
            parameters=parameters,
            gives=_gives(gives),
            summary=doc.split("\n\n")[0].replace("\n", " ").rstrip("."),
            indicator=indicator,
            difference=difference,
            __doc__=doc,
        )

    return decorate


def _gives(rule: Gives | Basis | str) -> Gives:
    if isinstance(rule, Basis):
        return lambda bases, values: rule
    if isinstance(rule, str):
        return lambda bases, values: bases[rule]
    return rule


def _aligned(parameters: Mapping[str, Parameter], arguments: dict[str, Any]) -> dict[str, Any]:
    """Where some argument carries draws (its last axis), a series of plain numbers gets that axis too."""
    arrays = {name: value for name, value in arguments.items() if isinstance(value, np.ndarray)}
    if any(value.ndim == (2 if parameters[name].series else 1) for name, value in arrays.items()):
        for name, value in arrays.items():
            if parameters[name].series and value.ndim == 1:
                arguments[name] = value[:, np.newaxis]
    return arguments


def _lifter(values: Iterable[Any]) -> Callable[[Constant, System], Any]:
    for value in values:
        if is_traced(value):
            return lambda c, system: Number(c.value(system), c.symbol, unit_in(c.unit, system))
        if is_quantity(value):
            from reporter.units import quantity

            return lambda c, system: quantity(c.value(system), unit_in(c.unit, system))
    return lambda c, system: c.value(system)


def _in_unit(result: Any, eq: Equation[Any], arguments: Mapping[str, Any], system: System) -> Any:
    """The result of quantities in the equation's unit; a bare number is one without dimension."""
    from reporter.units import quantity

    unit = _pint_unit(eq, arguments, system)
    return (result if is_quantity(result) else quantity(result, "1")).to(unit)


def _pint_unit(eq: Equation[Any], arguments: Mapping[str, Any], system: System) -> Any:
    from reporter.units import pint_unit

    wanted = unit_in(eq.unit, system)
    if not wanted.startswith("*"):
        return pint_unit(wanted)
    for name, parameter in eq.parameters.items():
        if unit_in(parameter.unit, system) == wanted:
            return arguments[name].units
    raise LedgerError(f"{eq.name}: no argument has the unit of the result")


def _finite(result: Any, name: str, values: Mapping[str, Any]) -> Any:
    """The result, if each of its numbers is finite and real."""
    if isinstance(result, Term):
        return result
    number = getattr(result, "magnitude", result)
    if isinstance(number, np.ndarray):
        numbers = [getattr(n, "nominal_value", n) for n in number.ravel()] if number.dtype == object else number
        if np.iscomplexobj(numbers) or not np.all(np.isfinite(numbers)):
            raise EquationError(f"{name} has no finite real value", _shown(values))
        return float(result) if result is number and number.ndim == 0 else result
    nominal = getattr(number, "nominal_value", number)
    if isinstance(nominal, complex) or not math.isfinite(nominal):
        raise EquationError(f"{name} has no finite real value", _shown(values))
    return float(result) if isinstance(result, (int, float, np.floating, np.integer)) else result


def _shown(values: Mapping[str, Any]) -> str:
    return ", ".join(f"{name} = {value}" for name, value in values.items() if np.ndim(value) == 0)
