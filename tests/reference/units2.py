"""Further kinds of quantity: slopes, currents, resistances. Same form as the first unit table."""

from __future__ import annotations

from . import units
from .units import INCH, LENGTHS, Table, Unit

OHMS = {"Ω": 1.0, "Ohm": 1.0, "ohm": 1.0}
AREAS = {text: size**2 for name, size in LENGTHS.items() for text in (f"{name}²", f"{name}2", f"{name}^2")}


def _plain(table: dict[str, float]) -> Table:
    return {spelling: (factor, 0.0) for spelling, factor in table.items()}


def _resistivity() -> Table:
    table: dict[str, float] = {}
    for prefix, size in (("", 1.0), ("m", 1e-3), ("µ", 1e-6), ("u", 1e-6), ("n", 1e-9)):
        for ohm in OHMS:
            for dot in ("·", "*"):
                table[f"{prefix}{ohm}{dot}m"] = size
                table[f"{prefix}{ohm}{dot}cm"] = size * 1e-2
    for ohm in OHMS:
        table.update({f"{ohm}·mm²/m": 1e-6, f"{ohm}*mm2/m": 1e-6})
    return _plain(table)


def _ohms() -> Table:
    prefixes = (("", 1.0), ("m", 1e-3), ("µ", 1e-6), ("u", 1e-6), ("k", 1e3))
    return _plain({f"{prefix}{ohm}": size for prefix, size in prefixes for ohm in OHMS})


def _joint() -> Table:
    table: dict[str, float] = {}
    for area, size in AREAS.items():
        for kelvin in ("K", "°C"):
            for watt, watts in (("W", 1.0), ("mW", 1e-3), ("kW", 1e3)):
                for dot in ("·", "*", " "):
                    table[f"{area}{dot}{kelvin}/{watt}"] = size / watts
    table.update({"m²K/W": 1.0, "m2K/W": 1.0})
    return _plain(table)


KINDS: dict[str, Table] = {
    **units.KINDS,
    "slope": _plain({"1/K": 1.0, "K^-1": 1.0, "1/°C": 1.0, "1/degC": 1.0, "%/K": 0.01, "1/°F": 1.8}),
    "current": _plain({"A": 1.0, "mA": 1e-3, "kA": 1e3}),
    "voltage": _plain({"V": 1.0, "mV": 1e-3, "kV": 1e3}),
    "current density": _plain({f"{a}/{text}": f / s for a, f in (("A", 1.0), ("kA", 1e3)) for text, s in AREAS.items()}),
    "resistivity": _resistivity(),
    "ohms": _ohms(),
    "joint": _joint(),
    "ratio": _plain({"": 1.0, "-": 1.0, "%": 0.01}),
}
KINDS["area"] = {**units.KINDS["area"], "mil²": ((INCH / 1000.0) ** 2, 0.0)}


def find(spelling: str, kinds: tuple[str, ...]) -> tuple[str, Unit] | None:
    """The first of the kinds that knows the spelling, with its factor and offset; None if none does."""
    text = " ".join(spelling.split())
    for kind in kinds:
        if text in KINDS[kind]:
            return kind, KINDS[kind][text]
    return None
