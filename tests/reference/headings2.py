"""Headings of the wider scope: layers, faces with radiation and resistance, sources in temperature, currents, bars."""

from __future__ import annotations

import re
from dataclasses import dataclass

from . import headings as old
from . import units, units2
from .headings import SIDES

MOST_LAYERS = 4
LAYERED: dict[str, tuple[str, ...]] = {
    **{name: (kind,) for name, kind in old.LAYERED.items()},
    "conductivity slope": ("slope",),
    "conductivity reference": ("temperature",),
    "generation slope": ("slope",),
    "generation reference": ("temperature",),
    "current": ("current",),
    "voltage": ("voltage",),
    "current density": ("current density",),
    "turns": ("ratio",),
    "fill factor": ("ratio",),
    "ac ratio": ("ratio",),
    "resistivity": ("resistivity",),
    "resistivity slope": ("slope",),
    "resistivity reference": ("temperature",),
    "joint": ("joint", "film"),
}
PLAIN: dict[str, tuple[str, ...]] = {
    **{name: (kind,) for name, kind in old.PLAIN.items()},
    "limit": ("temperature",),
    "section": ("area",),
    "perimeter": ("length",),
    "side film": ("film",),
    "side fluid": ("temperature",),
    "side emissivity": ("ratio",),
    "side surroundings": ("temperature",),
}
FACED: dict[str, tuple[str, ...]] = {
    **{name: (kind,) for name, kind in old.FACED.items()},
    "emissivity": ("ratio",),
    "surroundings": ("temperature",),
    "resistance": ("joint", "film"),
    "contact": ("ohms",),
}
CURRENTS = ("current", "voltage", "current density")
SOURCES = (*old.SOURCES, *CURRENTS)
ANSWERS: dict[str, tuple[str, ...]] = {
    **old.ANSWERS,
    **{f"{name} {n}": ("temperature",) for name in ("peak", "mean") for n in range(2, MOST_LAYERS + 1)},
    **{f"joint {n} {side}": ("temperature",) for n in range(1, MOST_LAYERS) for side in ("left", "right")},
    "side heat out": ("flux", "line power", "power"),
    "voltage": ("voltage",),
    "resistance": ("ohms",),
    **{f"allowable {name}": (name,) for name in CURRENTS},
}


@dataclass(frozen=True)
class Column:
    """One input heading. `what` is "skip", "bad", "later" or "use"; `new` tells the wider scope's headings."""

    what: str
    inputs: tuple[str, ...] = ()
    kind: str = ""
    unit: units.Unit = (1.0, 0.0)
    source: bool = False
    both: bool = False
    numbered: bool = True
    new: bool = False


@dataclass(frozen=True)
class Asked:
    what: str
    name: str = ""
    kind: str = ""
    unit: units.Unit = (1.0, 0.0)


def _used(inputs: tuple[str, ...], kinds: tuple[str, ...], unit: str, **more: bool) -> Column:
    found = units2.find(unit, kinds)
    if found is None:
        return Column("bad", new=True)
    return Column("use", inputs, found[0], found[1], **more)


def column(heading: object) -> Column:
    """Reads one input heading. Layered inputs get their number, `thickness 1` for `thickness`."""
    first = old.column(heading)
    if first.what == "skip":
        return Column("skip")
    text = str(heading)
    name, unit = old.split(text)
    if len(text) > 200 or name.startswith(("± ", "+/- ", "sd ")):
        return Column(first.what)
    known = first.what == "use"  # a heading of the first scope
    found = re.fullmatch(r"(.*\S) ([1-9]\d*)", name)
    stem, number = (found[1], int(found[2])) if found else (name, None)
    side, _, rest = name.partition(" ")
    if name in PLAIN:
        return _used((name,), PLAIN[name], unit, new=not known)
    if stem == "limit" and number is not None and number <= MOST_LAYERS:
        return _used((name,), ("temperature",), unit, new=not known)
    if stem in LAYERED and (number or 1) <= MOST_LAYERS:
        source, numbered = stem in SOURCES, number is not None
        return _used((f"{stem} {number or 1}",), LAYERED[stem], unit, source=source, numbered=numbered, new=not known)
    if side in SIDES and rest in FACED:
        inputs = tuple(f"{one} {rest}" for one in SIDES[side])
        return _used(inputs, FACED[rest], unit, both=side == "both", new=not known)
    return Column(first.what, source=first.source)


def asked(heading: str) -> Asked:
    """Reads one answer heading."""
    name, unit = old.split(heading)
    side, _, rest = name.partition(" ")
    if side in ("inner", "outer"):
        name = f"{SIDES[side][0]} {rest}"
    if name in ANSWERS:
        found = units2.find(unit, ANSWERS[name])
        return Asked("bad") if found is None else Asked("use", name, *found)
    first = old.asked(heading)
    return Asked(first.what, first.name, first.kind, first.unit)
