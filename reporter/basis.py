"""The basis of a number, as a type.

Dry and wet ppm have one dimension, so do standard and actual cubic feet; units cannot tell them apart.
Every concentration, flow and rate therefore carries a `Basis` of four facets.  A facet is known, unknown
(an error as soon as it is needed) or does not apply.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from enum import Enum

from reporter.errors import BasisError


class Moisture(Enum):
    """Moisture facet of a basis."""

    DRY = "dry"
    WET = "wet"
    UNKNOWN = "moisture basis unknown"
    NONE = ""

    def __repr__(self) -> str:
        return f"Moisture.{self.name}"


class OxygenKind(Enum):
    """How a concentration stands to the diluent."""

    AS_MEASURED = "as measured"
    CORRECTED = "corrected"
    UNKNOWN = "oxygen basis unknown"
    NONE = ""


@dataclass(frozen=True, slots=True)
class Oxygen:
    """Oxygen facet: as measured, or corrected to a reference percentage of a diluent.

    `constant` is the percent oxygen taken for dry air (20.9 or 21); it is None for a CO2 reference.
    """

    kind: OxygenKind
    reference: float | None = None
    constant: float | None = None
    diluent: str = "O2"

    def text(self) -> str:
        """Words for a heading."""
        if self.kind is not OxygenKind.CORRECTED:
            return str(self.kind.value)
        words: str = f"at {self.reference:g} % {self.diluent}"
        return words if self.constant is None else f"{words} (k = {self.constant:g})"


AS_MEASURED = Oxygen(OxygenKind.AS_MEASURED)
OXYGEN_UNKNOWN = Oxygen(OxygenKind.UNKNOWN)
OXYGEN_NONE = Oxygen(OxygenKind.NONE)


@dataclass(frozen=True, slots=True)
class Standard:
    """Temperature [K] and pressure [kPa] a volume is stated at; `actual` for stack conditions."""

    temperature_k: float | None = None
    pressure_kpa: float | None = None
    words: str = ""

    def text(self) -> str:
        """Words for a heading."""
        return self.words

    def same(self, other: Standard) -> bool:
        """Whether two conditions are one condition, within rounding of their unit (0.01 K, 0.01 kPa)."""
        if None in (self.temperature_k, other.temperature_k, self.pressure_kpa, other.pressure_kpa):
            return self == other
        assert self.temperature_k is not None
        assert other.temperature_k is not None
        assert self.pressure_kpa is not None
        assert other.pressure_kpa is not None
        return (
            abs(self.temperature_k - other.temperature_k) <= 0.01
            and abs(self.pressure_kpa - other.pressure_kpa) <= 0.01
        )


NO_VOLUME = Standard(words="")
ACTUAL = Standard(words="actual conditions")
STANDARD_UNKNOWN = Standard(words="standard conditions unknown")
#: 68 °F and 29.92 inHg, the standard conditions of 40 CFR part 60 (§ 60.2 and Method 19).
EPA_STANDARD = Standard(293.15, 101.32, "68 °F, 29.92 inHg")
#: 20 °C and 760 mmHg: the same condition in the metric columns of the methods.
EPA_STANDARD_SI = Standard(293.15, 101.325, "20 °C, 101.325 kPa")
#: 273.15 K and 101.325 kPa ("normal" conditions of European reference methods).
NORMAL = Standard(273.15, 101.325, "273.15 K, 101.325 kPa")


@dataclass(frozen=True, slots=True)
class Basis:
    """What a value is stated on: moisture, oxygen correction, standard conditions, expressed-as."""

    moisture: Moisture = Moisture.NONE
    oxygen: Oxygen = OXYGEN_NONE
    standard: Standard = NO_VOLUME
    expressed_as: str = ""

    def but(
        self,
        *,
        moisture: Moisture | None = None,
        oxygen: Oxygen | None = None,
        standard: Standard | None = None,
        expressed_as: str | None = None,
    ) -> Basis:
        """The same basis with some facets replaced."""
        return replace(
            self,
            moisture=self.moisture if moisture is None else moisture,
            oxygen=self.oxygen if oxygen is None else oxygen,
            standard=self.standard if standard is None else standard,
            expressed_as=self.expressed_as if expressed_as is None else expressed_as,
        )

    def text(self) -> str:
        """All facets in words, for a heading; empty when none applies."""
        parts = [
            self.moisture.value,
            self.oxygen.text() if self.oxygen.kind is not OxygenKind.AS_MEASURED else "",
            self.standard.text(),
            f"as {self.expressed_as}" if self.expressed_as else "",
        ]
        return ", ".join(part for part in parts if part)

    def as_dict(self) -> dict[str, object]:
        """The facets as plain data, for JSON."""
        return {
            "moisture": self.moisture.value or None,
            "oxygen": self.oxygen.text() or None,
            "oxygen_reference": self.oxygen.reference,
            "oxygen_constant": self.oxygen.constant,
            "standard": self.standard.text() or None,
            "standard_temperature_k": self.standard.temperature_k,
            "standard_pressure_kpa": self.standard.pressure_kpa,
            "expressed_as": self.expressed_as or None,
        }


#: No facet applies: a count, a temperature, a share.
NO_BASIS = Basis()
#: Dry concentration as measured.
DRY = Basis(moisture=Moisture.DRY, oxygen=AS_MEASURED)
#: Wet concentration as measured.
WET = Basis(moisture=Moisture.WET, oxygen=AS_MEASURED)


@dataclass(frozen=True, slots=True)
class Need:
    """What an equation asks of one input's basis; None asks nothing of that facet."""

    moisture: Moisture | None = None
    oxygen: OxygenKind | None = None
    standard: Standard | None = None

    def check(self, basis: Basis, what: str) -> None:
        """Raise `BasisError` naming both sides unless `basis` has the facets asked for."""
        wrong: list[tuple[str, str]] = []
        if self.moisture is not None and basis.moisture is not self.moisture:
            wrong.append((self.moisture.value, basis.moisture.value or "no moisture basis"))
        if self.oxygen is not None and basis.oxygen.kind is not self.oxygen:
            wrong.append((self.oxygen.value, basis.oxygen.text() or "no oxygen basis"))
        if self.standard is not None and not basis.standard.same(self.standard):
            wrong.append((self.standard.text(), basis.standard.text() or "no standard conditions"))
        if wrong:
            needed = ", ".join(pair[0] for pair in wrong)
            found = ", ".join(pair[1] for pair in wrong)
            raise BasisError(f"{what} must be {needed}, but is {found}")


NEED_DRY = Need(moisture=Moisture.DRY, oxygen=OxygenKind.AS_MEASURED)
NEED_WET = Need(moisture=Moisture.WET, oxygen=OxygenKind.AS_MEASURED)
