"""Sizes of the units that most headings use, so that these need no library of units, whose loading takes longer than most
workbooks. A test holds every entry against pint, which reads all others.

Definitions: SI brochure, 9th edition (prefixes, table 7; units, tables 2, 4 and 8); NIST SP 811, appendix B (inch, foot, mil,
degree Fahrenheit, British thermal unit of the International Table).
"""

from __future__ import annotations

from collections.abc import Mapping
from fractions import Fraction

Dimension = frozenset[tuple[str, Fraction]]

_PREFIXES = {
    "": Fraction(1),
    "nano": Fraction(1, 10**9),
    "micro": Fraction(1, 10**6),
    "milli": Fraction(1, 1000),
    "centi": Fraction(1, 100),
    "kilo": Fraction(1000),
    "mega": Fraction(10**6),
    "giga": Fraction(10**9),
}
# Size in kg, m, s, A, K, mol, and their powers in the dimension.
_PREFIXED: Mapping[str, tuple[Fraction, dict[str, int]]] = {
    "gram": (Fraction(1, 1000), {"mass": 1}),
    "meter": (Fraction(1), {"length": 1}),
    "second": (Fraction(1), {"time": 1}),
    "ampere": (Fraction(1), {"current": 1}),
    "kelvin": (Fraction(1), {"temperature": 1}),
    "mole": (Fraction(1), {"substance": 1}),
    "joule": (Fraction(1), {"mass": 1, "length": 2, "time": -2}),
    "watt": (Fraction(1), {"mass": 1, "length": 2, "time": -3}),
    "volt": (Fraction(1), {"mass": 1, "length": 2, "time": -3, "current": -1}),
    "ohm": (Fraction(1), {"mass": 1, "length": 2, "time": -3, "current": -2}),
}
_PLAIN: Mapping[str, tuple[Fraction, dict[str, int]]] = {
    "minute": (Fraction(60), {"time": 1}),
    "hour": (Fraction(3600), {"time": 1}),
    "inch": (Fraction(254, 10_000), {"length": 1}),
    "foot": (Fraction(3048, 10_000), {"length": 1}),
    "thou": (Fraction(254, 10_000_000), {"length": 1}),
    "delta_degree_Fahrenheit": (Fraction(5, 9), {"temperature": 1}),
    "international_british_thermal_unit": (Fraction("1055.05585262"), {"mass": 1, "length": 2, "time": -2}),
}
SIZES: Mapping[str, tuple[Fraction, Mapping[str, int]]] = {
    **_PLAIN,
    **{prefix + name: (factor * size, powers) for name, (size, powers) in _PREFIXED.items() for prefix, factor in _PREFIXES.items()},
}


def size_of(powers: Mapping[str, int]) -> tuple[Fraction, Dimension] | None:
    """Exact factor to SI and dimension of a product of powers of named units; None if one of them is not in the table."""
    factor = Fraction(1)
    total: dict[str, int] = {}
    for name, power in powers.items():
        known = SIZES.get(name)
        if known is None:
            return None
        factor *= known[0] ** power
        for base, each in known[1].items():
            total[base] = total.get(base, 0) + each * power
    return factor, frozenset((f"[{base}]", Fraction(power)) for base, power in total.items() if power)
