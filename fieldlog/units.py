"""Quantities as typed by people: a decimal text and its unit, kept as entered.

The only place that knows bar, kPa, L/min, m and mm. Inside, everything is psi, gpm, ft, in and gpm/psi^0.5; the
exact conversion is a fraction, so that a comparison of two readings in different units never rests on rounding.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from fractions import Fraction
from functools import cache
from typing import Annotated, ClassVar, Literal, get_args, get_type_hints

import msgspec

# By definition: pound-force 4.4482216152605 N, inch 25.4 mm, US gallon 3.785411784 L, foot 0.3048 m.
_PSI_IN_KPA = Fraction("4.4482216152605") / Fraction("0.00064516") / 1000
_GALLON_IN_L = Fraction("3.785411784")
_FOOT_IN_M = Fraction("0.3048")
_SQUARE_FOOT_IN_M2 = _FOOT_IN_M**2

DecimalText = Annotated[
    str, msgspec.Meta(pattern=r"^-?(0|[1-9][0-9]{0,8})(\.[0-9]{1,9})?(?!\n)$", title="decimal number as text")
]


def _last_digit(text: str) -> Fraction:
    decimals = len(text.partition(".")[2])
    return Fraction(1, int(10**decimals))


@cache
def _units_of(quantity: type[Quantity]) -> tuple[str, ...]:
    return get_args(get_type_hints(quantity)["unit"])


class Quantity(msgspec.Struct, frozen=True, forbid_unknown_fields=True, omit_defaults=True, kw_only=True):
    """A value as entered, with its unit; each subclass names its units and their exact size."""

    value: DecimalText
    unit: str

    noun: ClassVar[str] = "quantity"
    sizes: ClassVar[Mapping[str, Fraction]] = {}

    @classmethod
    def units(cls) -> tuple[str, ...]:
        """Return the units this quantity may be entered in."""
        return _units_of(cls)

    def exact(self) -> Fraction:
        """Return the exact value in the inside unit of this quantity."""
        return Fraction(self.value) * self.sizes[self.unit]

    def resolution(self) -> Fraction:
        """Return the size of the last digit entered, in the inside unit."""
        return self.sizes[self.unit] * _last_digit(self.value)


class Pressure(Quantity, frozen=True, kw_only=True):
    """A pressure; inside: psi."""

    unit: Literal["psi", "bar", "kPa"]

    noun: ClassVar[str] = "pressure"
    sizes: ClassVar[Mapping[str, Fraction]] = {
        "psi": Fraction(1),
        "bar": 100 / _PSI_IN_KPA,
        "kPa": 1 / _PSI_IN_KPA,
    }

    @property
    def psi(self) -> float:
        """The pressure in psi."""
        return float(self.exact())


class Flow(Quantity, frozen=True, kw_only=True):
    """A volume flow; inside: US gallons a minute."""

    unit: Literal["gpm", "L/min"]

    noun: ClassVar[str] = "flow"
    sizes: ClassVar[Mapping[str, Fraction]] = {"gpm": Fraction(1), "L/min": 1 / _GALLON_IN_L}

    @property
    def gpm(self) -> float:
        """The flow in US gallons a minute."""
        return float(self.exact())


class Length(Quantity, frozen=True, kw_only=True):
    """A length or height; inside: ft."""

    unit: Literal["ft", "m"]

    noun: ClassVar[str] = "length"
    sizes: ClassVar[Mapping[str, Fraction]] = {"ft": Fraction(1), "m": 1 / _FOOT_IN_M}

    @property
    def ft(self) -> float:
        """The length in feet."""
        return float(self.exact())


class Diameter(Quantity, frozen=True, kw_only=True):
    """A pipe or outlet diameter; inside: in."""

    unit: Literal["in", "mm"]

    noun: ClassVar[str] = "diameter"
    sizes: ClassVar[Mapping[str, Fraction]] = {"in": Fraction(1), "mm": 1 / Fraction("25.4")}

    @property
    def inches(self) -> float:
        """The diameter in inches."""
        return float(self.exact())


class Area(Quantity, frozen=True, kw_only=True):
    """A floor area; inside: square feet."""

    unit: Literal["ft2", "m2"]

    noun: ClassVar[str] = "area"
    sizes: ClassVar[Mapping[str, Fraction]] = {"ft2": Fraction(1), "m2": 1 / _SQUARE_FOOT_IN_M2}

    @property
    def ft2(self) -> float:
        """The area in square feet."""
        return float(self.exact())


class Density(Quantity, frozen=True, kw_only=True):
    """A discharge density; inside: gpm per square foot."""

    unit: Literal["gpm/ft2", "mm/min"]

    noun: ClassVar[str] = "density"
    sizes: ClassVar[Mapping[str, Fraction]] = {
        "gpm/ft2": Fraction(1),
        "mm/min": _SQUARE_FOOT_IN_M2 / _GALLON_IN_L,
    }

    @property
    def gpm_per_ft2(self) -> float:
        """The density in gallons a minute and square foot."""
        return float(self.exact())


class Discharge(Quantity, frozen=True, kw_only=True):
    """A K-factor, flow over the root of pressure; inside: gpm/psi^0.5. Its metric size is irrational."""

    unit: Literal["gpm/psi^0.5", "L/min/bar^0.5"]

    noun: ClassVar[str] = "K-factor"

    def exact(self) -> Fraction:
        """Return the K-factor in gpm/psi^0.5, to double precision."""
        return Fraction(self.value) * Fraction(self._size())

    def resolution(self) -> Fraction:
        """Return the size of the last digit entered, in gpm/psi^0.5."""
        return Fraction(self._size()) * _last_digit(self.value)

    def _size(self) -> float:
        if self.unit == "gpm/psi^0.5":
            return 1.0
        return float(Flow.sizes["L/min"]) / math.sqrt(Pressure.sizes["bar"])

    @property
    def k(self) -> float:
        """The K-factor in gpm/psi^0.5."""
        return float(self.exact())


class Temperature(Quantity, frozen=True, kw_only=True):
    """A temperature; inside: degrees Fahrenheit."""

    unit: Literal["F", "C"]

    noun: ClassVar[str] = "temperature"

    def exact(self) -> Fraction:
        """Return the temperature in degrees Fahrenheit."""
        value = Fraction(self.value)
        return value if self.unit == "F" else value * Fraction(9, 5) + 32

    def resolution(self) -> Fraction:
        """Return the size of the last digit entered, in degrees Fahrenheit."""
        size = Fraction(1) if self.unit == "F" else Fraction(9, 5)
        return size * _last_digit(self.value)

    @property
    def fahrenheit(self) -> float:
        """The temperature in degrees Fahrenheit."""
        return float(self.exact())


class SiteUnits(msgspec.Struct, frozen=True, forbid_unknown_fields=True, kw_only=True):
    """The units a site's people read and write; diameters follow the length."""

    pressure: Literal["psi", "bar", "kPa"] = "psi"
    flow: Literal["gpm", "L/min"] = "gpm"
    length: Literal["ft", "m"] = "ft"


def pressure_in(psi: float, unit: str) -> float:
    """Return `psi` in the pressure unit `unit`."""
    return psi / float(Pressure.sizes[unit])


def flow_in(gpm: float, unit: str) -> float:
    """Return `gpm` in the flow unit `unit`."""
    return gpm / float(Flow.sizes[unit])


def length_in(ft: float, unit: str) -> float:
    """Return `ft` in the length unit `unit`."""
    return ft / float(Length.sizes[unit])
