"""A small unit table of the reference's own: spelling -> (factor, offset) to SI, one dict a kind of quantity.

value in SI = value * factor + offset. Only the spellings listed are legal here; unit letters keep their case.
"""

from __future__ import annotations

Unit = tuple[float, float]
Table = dict[str, Unit]

INCH = 0.0254
FOOT = 0.3048
POUND = 0.45359237
BTU = 1055.05585262
HOUR = 3600.0
DEG_F = 5.0 / 9.0
BTU_PER_HOUR = BTU / HOUR

LENGTHS: dict[str, float] = {"m": 1.0, "cm": 1e-2, "mm": 1e-3, "µm": 1e-6, "in": INCH, "ft": FOOT}
POWERS: dict[str, float] = {"W": 1.0, "mW": 1e-3, "kW": 1e3, "MW": 1e6}
DOTS = ("·", "*", " ")


def _scaled(table: dict[str, float]) -> Table:
    return {spelling: (factor, 0.0) for spelling, factor in table.items()}


def _powered(length: str, power: int) -> tuple[str, ...]:
    """Spellings of a length raised to a power, for a denominator or alone."""
    small = {2: "²", 3: "³"}[power]
    return f"{length}{small}", f"{length}{power}", f"{length}^{power}"


def _length() -> Table:
    table = dict(LENGTHS)
    table.update({"um": 1e-6, "μm": 1e-6, "micron": 1e-6, "micrometer": 1e-6, "nm": 1e-9, "dm": 0.1, "km": 1e3})
    table.update({"metre": 1.0, "meter": 1.0, "millimeter": 1e-3, "millimetre": 1e-3, "inch": INCH, "foot": FOOT})
    table.update({"mil": INCH / 1000.0, "yd": 0.9144})
    return _scaled(table)


def _area() -> Table:
    return _scaled({text: size**2 for name, size in LENGTHS.items() for text in _powered(name, 2)})


def _per_power_of_length(power: int) -> Table:
    """W/m² or W/m³ and their relatives."""
    table = {}
    for watt, watts in POWERS.items():
        for name, size in LENGTHS.items():
            for text in _powered(name, power):
                table[f"{watt}/{text}"] = watts / size**power
    for dot in DOTS:
        for text in _powered("ft", power):
            for btu in ("BTU", "Btu"):
                table[f"{btu}/(hr{dot}{text})"] = BTU_PER_HOUR / FOOT**power
    return _scaled(table)


def _generation() -> Table:
    table = _per_power_of_length(3)
    table.update(_scaled({"GW/m³": 1e9, "GW/m3": 1e9, "W/L": 1e3, "kW/L": 1e6, "W/liter": 1e3, "µW/mm³": 1e3}))
    return table


def _specific_generation() -> Table:
    masses = {"kg": 1.0, "g": 1e-3, "lb": POUND}
    return _scaled({f"{watt}/{name}": watts / mass for watt, watts in POWERS.items() for name, mass in masses.items()})


def _density() -> Table:
    table: dict[str, float] = {"kg/L": 1e3, "g/mL": 1e3}
    for mass, kilograms in {"kg": 1.0, "g": 1e-3, "lb": POUND}.items():
        for name, size in LENGTHS.items():
            for text in _powered(name, 3):
                table[f"{mass}/{text}"] = kilograms / size**3
    return _scaled(table)


def _power() -> Table:
    return _scaled({**POWERS, "watt": 1.0, "BTU/hr": BTU_PER_HOUR, "Btu/hr": BTU_PER_HOUR, "BTU/h": BTU_PER_HOUR})


def _line_power() -> Table:
    table = {f"{w}/{name}": watts / size for w, watts in POWERS.items() for name, size in LENGTHS.items()}
    table.update({f"{btu}/(hr{dot}ft)": BTU_PER_HOUR / FOOT for dot in DOTS for btu in ("BTU", "Btu")})
    return _scaled(table)


def _per_kelvin(power: int) -> Table:
    """W/(m·K) for power 1, W/(m²·K) for power 2, and the spellings engineers use for them."""
    table: dict[str, float] = {}
    for watt, watts in POWERS.items():
        for name, size in LENGTHS.items():
            factor = watts / size**power
            for text in (name,) if power == 1 else _powered(name, power):
                for kelvin, step in (("K", 1.0), ("°C", 1.0), ("°F", DEG_F)):
                    for dot in DOTS:
                        table[f"{watt}/({text}{dot}{kelvin})"] = factor / step
                    table[f"{watt}/{text}/{kelvin}"] = factor / step
                table[f"{watt} {name}^-{power} K^-1"] = factor
    for text in ("m",) if power == 1 else ("m²", "m2"):
        table.update({f"W/{text}·K": 1.0, f"W/{text}K": 1.0, f"W/{text}-K": 1.0})
    imperial = BTU_PER_HOUR / FOOT**power / DEG_F
    for foot in ("ft",) if power == 1 else _powered("ft", 2):
        for btu in ("BTU", "Btu"):
            table[f"{btu}/hr-{foot}-F"] = imperial
            for degree in ("°F", "F"):
                table.update({f"{btu}/(hr{dot}{foot}{dot}{degree})": imperial for dot in DOTS})
    return _scaled(table)


CELSIUS: Unit = (1.0, 273.15)
FAHRENHEIT: Unit = (DEG_F, 459.67 * DEG_F)
TEMPERATURE: Table = {
    **dict.fromkeys(("°C", "degC", "C", "ºC", "deg C", "℃", "celsius"), CELSIUS),
    **dict.fromkeys(("°F", "degF", "F", "ºF", "deg F", "℉", "fahrenheit"), FAHRENHEIT),
    **dict.fromkeys(("K", "kelvin"), (1.0, 0.0)),
    **dict.fromkeys(("°R", "degR"), (DEG_F, 0.0)),
}
DIFFERENCE: Table = {spelling: (factor, 0.0) for spelling, (factor, _) in TEMPERATURE.items()}

KINDS: dict[str, Table] = {
    "length": _length(),
    "area": _area(),
    "conductivity": _per_kelvin(1),
    "film": _per_kelvin(2),
    "flux": _per_power_of_length(2),
    "generation": _generation(),
    "specific generation": _specific_generation(),
    "density": _density(),
    "power": _power(),
    "line power": _line_power(),
    "temperature": TEMPERATURE,
    "difference": DIFFERENCE,
    "percent": {"": (0.01, 0.0), "%": (0.01, 0.0), "-": (1.0, 0.0)},
    "text": {"": (1.0, 0.0), "-": (1.0, 0.0)},
}


def find(spelling: str, kinds: tuple[str, ...]) -> tuple[str, Unit] | None:
    """The first of the kinds that knows the spelling, with its factor and offset; None if none does."""
    text = " ".join(spelling.split())
    for kind in kinds:
        if text in KINDS[kind]:
            return kind, KINDS[kind][text]
    return None


def to_si(value: float, unit: Unit) -> float:
    return value * unit[0] + unit[1]


def from_si(value: float, unit: Unit) -> float:
    return (value - unit[1]) / unit[0]
