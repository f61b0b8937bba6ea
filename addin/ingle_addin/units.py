"""Units of headings: which kind of quantity a unit text means, and how its values become base values.

Base units are SI, except that a temperature's base is °C; a temperature difference's is K, a percentage's is %.
Factors are exact ratios until the last step, so each is the double nearest to the definition: SI brochure (9th edition)
and NIST SP 811 appendix B. A BTU is that of the International Table, 1055.05585262 J. A calorie is the thermochemical
one, 4.184 J. `mil` is the length, 0.001 in.

Spelling is `unit_spelling`'s task; pint turns the names into factors and dimensions, but for the commonest, which
`unit_sizes` knows: importing it takes longer than most workbooks.
"""

from __future__ import annotations

import functools
import threading
from collections.abc import Mapping
from dataclasses import dataclass
from enum import Enum
from fractions import Fraction
from typing import TYPE_CHECKING, Any, TypeVar

from ingle_addin.unit_sizes import Dimension, size_of
from ingle_addin.unit_spelling import Spelling, SpellingError, read_spelling

if TYPE_CHECKING:
    import numpy as np
    import numpy.typing as npt

__all__ = ["Kind", "Unit", "UnitError", "read_unit"]

Value = TypeVar("Value", float, "npt.NDArray[np.float64]")


class Kind(Enum):
    """Kinds of quantity. The value is the words for messages, `unit` the base unit, `example` one that people use."""

    unit: str
    example: str

    def __new__(cls, words: str, unit: str, example: str = "") -> Kind:
        """Keep the words as the value and the units beside it."""
        kind = object.__new__(cls)
        kind._value_ = words
        kind.unit = unit
        kind.example = example or unit
        return kind

    LENGTH = "a length", "m", "mm"
    AREA = "an area", "m²", "mm²"
    TEMPERATURE = "a temperature", "°C"
    TEMPERATURE_DIFFERENCE = "a temperature difference", "K"
    CONDUCTIVITY = "a thermal conductivity", "W/(m·K)"
    FILM = "a heat transfer coefficient", "W/(m²·K)"
    AREA_RESISTANCE = "a thermal resistance of an area", "m²·K/W"
    GENERATION = "a heat generation by volume", "W/m³"
    SPECIFIC_GENERATION = "a heat generation by mass", "W/kg"
    POWER = "a power", "W"
    LINE_POWER = "a power by length", "W/m"
    HEAT_FLUX = "a heat flux", "W/m²"
    CURRENT = "a current", "A"
    CURRENT_DENSITY = "a current density", "A/m²", "A/mm²"
    VOLTAGE = "a voltage", "V"
    RESISTANCE = "an electrical resistance", "Ω", "mΩ"
    RESISTIVITY = "an electrical resistivity", "Ω·m", "µΩ·cm"
    PER_TEMPERATURE = "a change per degree", "1/K"
    MOLAR_ENERGY = "an energy by amount", "J/mol", "kJ/mol"
    ATTENUATION = "an absorption coefficient", "1/m", "1/mm"
    SPEED = "a speed", "m/s"
    DENSITY = "a density", "kg/m³"
    SPECIFIC_HEAT = "a specific heat", "J/(kg·K)"
    ENERGY_DENSITY = "an energy by volume", "J/m³", "MJ/m³"
    TIME = "a time", "s"
    RATIO = "a ratio", "-"
    PERCENT = "a percentage", "%"
    TEXT = "a text", ""


_TEMPERATURES = frozenset({Kind.TEMPERATURE, Kind.TEMPERATURE_DIFFERENCE})
_UNITLESS = frozenset({Kind.RATIO, Kind.PERCENT, Kind.TEXT})
_HOLDING_DEGREES = _TEMPERATURES | {
    Kind.CONDUCTIVITY,
    Kind.FILM,
    Kind.AREA_RESISTANCE,
    Kind.PER_TEMPERATURE,
    Kind.SPECIFIC_HEAT,
}

# What the degree of each letter is as a temperature: base [°C] = (x + shift) · factor.
_SCALES = {"C": (0.0, 1.0), "K": (-273.15, 1.0), "F": (-32.0, 5 / 9), "R": (-491.67, 5 / 9)}

_LETTERS = {
    "C": "could be a coulomb or a degree Celsius",
    "F": "could be a farad or a degree Fahrenheit",
    "R": "could be the gas constant or a degree Rankine",
}

# Kinds that no heading has, to name what was written instead.
_OTHER_KINDS = {
    "J": "an energy",
    "kg": "a mass",
    "m³": "a volume",
    "mol": "an amount of substance",
    "1/s": "a rate",
    "A·s": "an electric charge",
    "A/m": "a current by length",
    "Ω/m": "an electrical resistance by length",
    "W/K": "a thermal conductance of a whole part",
    "K/W": "a thermal resistance of a whole part",
    "m·K/W": "a thermal resistivity",
    "J/kg": "an energy by mass",
    "J/K": "a heat capacity",
    "S": "an electrical conductance",
    "S/m": "an electrical conductivity",
    "V/m": "an electric field",
    "K/m": "a temperature gradient",
    "K/s": "a heating rate",
    "kg/s": "a mass flow",
    "m²/s": "a diffusivity",
}
_SI_BASE = {
    "[mass]": "kg",
    "[length]": "m",
    "[time]": "s",
    "[current]": "A",
    "[temperature]": "K",
    "[substance]": "mol",
}

_RAISED_DIGITS = str.maketrans("0123456789", "⁰¹²³⁴⁵⁶⁷⁸⁹")

_pint_lock = threading.Lock()


class UnitError(ValueError):
    """Says what is wrong with a unit and what to write instead, without the name of the heading."""


@dataclass(frozen=True, slots=True)
class Unit:
    """A unit of one kind: base = (x + shift) · factor, with x a number in this unit."""

    kind: Kind
    factor: float
    shift: float = 0.0

    def to_base(self, x: Value) -> Value:
        """Turn numbers in this unit into numbers in the kind's base unit; in the base unit itself they keep their bits."""
        if self.shift != 0:
            x = x + self.shift
        if self.factor == 1:
            return x
        divisor = _whole_inverse(self.factor)
        return x / divisor if divisor else x * self.factor

    def from_base(self, x: Value) -> Value:
        """Turn numbers in the kind's base unit into numbers in this unit."""
        if self.factor != 1:
            divisor = _whole_inverse(self.factor)
            x = x * divisor if divisor else x / self.factor
        return x - self.shift if self.shift != 0 else x


def _whole_inverse(factor: float) -> float:
    """The whole number whose reciprocal `factor` is, else 0: 12.7/1000 rounds once where 12.7·0.001 rounds twice."""
    inverse = float(round(1 / factor)) if factor < 1 else 0.0
    return inverse if 0 < inverse <= 2.0**53 and 1 / inverse == factor else 0.0


def read_unit(text: str | None, *kinds: Kind) -> Unit:
    """Return what the text between a heading's brackets means as one of `kinds`; None or blank is no unit.

    A dimensionless kind takes none, but where several kinds are allowed a missing unit is accepted only if the first is
    dimensionless. Raise UnitError with the remedy in the message.
    """
    answer = _read((text or "").strip(), kinds)
    if isinstance(answer, str):
        raise UnitError(answer)
    return answer


@functools.lru_cache(maxsize=4096)
def _read(text: str, kinds: tuple[Kind, ...]) -> Unit | str:
    """The unit, or the words of the error: both are cached."""
    examples = _listed([f"[{kind.example}]" for kind in kinds if kind.example])
    remedy = f"write for example {examples}"
    if not text:
        return Unit(kinds[0], 1.0) if kinds[0] in _UNITLESS else f"needs its unit, for example {examples}"
    try:
        spelling = read_spelling(text)
    except SpellingError as error:
        if kinds == (Kind.TEXT,):
            return f"takes no unit; leave out [{text}]"
        return f"{error.problem}; {error.remedy or remedy}"
    if Kind.TEXT in kinds and not spelling.powers:
        return Unit(Kind.TEXT, 1.0)
    if kinds == (Kind.TEXT,):
        return f"takes no unit; leave out [{text}]"
    if spelling.letter and not _HOLDING_DEGREES.intersection(kinds):
        return f"'{spelling.letter}' {_LETTERS[spelling.letter]}, and neither belongs here; {remedy}"
    for kind in kinds:
        if spelling.degree and kind in _TEMPERATURES:
            shift, factor = _SCALES[spelling.degree]
            return Unit(kind, factor, shift if kind is Kind.TEMPERATURE else 0.0)
    with _pint_lock:
        if size_of(spelling.powers) is None:
            _registry()  # here, so that a missing or broken pint is not blamed on the unit
        try:
            return _measured(text, spelling, kinds, remedy)
        except Exception as error:  # pint has raised AssertionError, TypeError, RecursionError, … for what it cannot read
            # Raised rather than returned: what failed once may have been a full stack, and must not stay in the cache.
            raise UnitError(f"'{text}' cannot be read as a unit; {remedy}") from error


def _measured(text: str, spelling: Spelling, kinds: tuple[Kind, ...], remedy: str) -> Unit | str:
    factor, dimension = _size(spelling.powers)
    wanted = {_dimension(kind): kind for kind in reversed(kinds) if kind not in _TEMPERATURES}
    if spelling.strict != spelling.powers and _size(spelling.strict)[1] in wanted:
        return f"'{text}' does not say where the division ends; use brackets, or {remedy}"
    if dimension in wanted:
        kind = wanted[dimension]
        return Unit(kind, float(factor * 100 if kind is Kind.PERCENT else factor))
    if kinds[0] in _TEMPERATURES and spelling.powers:
        if not dimension:
            return f"'{text}' of a temperature has no meaning; {remedy}"
        if dimension == _dimension(Kind.TEMPERATURE):
            return f"'{text}' is more than the unit of a temperature; {remedy}"
    belongs = _listed([kind.value for kind in kinds])
    return f"'{text}' {_words(dimension)}, but {belongs} belongs here; {remedy}"


def _listed(words: list[str]) -> str:
    return " or ".join([", ".join(words[:-1]), words[-1]] if len(words) > 1 else words)


def _words(dimension: Dimension) -> str:
    """Say what a unit of this dimension measures, or its base units where there is no word."""
    if not dimension:
        return "is a plain number"
    for kind in Kind:
        if kind not in _UNITLESS and dimension == _dimension(kind):
            return f"is {kind.value}"
    for unit, words in _OTHER_KINDS.items():
        if dimension == _size(read_spelling(unit).powers)[1]:
            return f"is {words}"
    powers = dict(dimension)
    above = [_power(name, powers[key]) for key, name in _SI_BASE.items() if powers.get(key, 0) > 0]
    below = [_power(name, -powers[key]) for key, name in _SI_BASE.items() if powers.get(key, 0) < 0]
    under = "·".join(below) if len(below) < 2 else f"({'·'.join(below)})"
    return "has the dimension " + ("·".join(above) or "1") + (f"/{under}" if under else "")


def _power(name: str, power: Fraction) -> str:
    return name if power == 1 else name + str(power).translate(_RAISED_DIGITS)


@functools.cache
def _dimension(kind: Kind) -> Dimension:
    return _size(read_spelling(kind.unit).powers if kind.unit not in {"", "%"} else {})[1]


def _size(powers: Mapping[str, int]) -> tuple[Fraction, Dimension]:
    """Exact factor to SI, and the dimension. Only with the lock held: pint's own caches are not made for threads."""
    known = size_of(powers)
    if known is not None:
        return known
    registry = _registry()
    unit = registry.parse_units(" * ".join(f"{name} ** {power}" for name, power in sorted(powers.items())))
    factor, _ = registry.get_base_units(unit)
    return Fraction(factor), frozenset((name, Fraction(power)) for name, power in unit.dimensionality.items())


@functools.cache
def _registry() -> Any:
    import pint

    # Ratios instead of doubles: a factor is rounded once, at the end.
    return pint.UnitRegistry(non_int_type=Fraction, cache_folder=None)
