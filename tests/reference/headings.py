"""Reads heading texts, of inputs and of answers, into what the row reader needs."""

from __future__ import annotations

import re
from dataclasses import dataclass

from . import units

# name -> kind of unit; these names may carry the layer's number
LAYERED: dict[str, str] = {
    "thickness": "length",
    "outer radius": "length",
    "outer diameter": "length",
    "conductivity": "conductivity",
    "generation": "generation",
    "specific generation": "specific generation",
    "power": "power",
    "line power": "line power",
    "density": "density",
}
PLAIN: dict[str, str] = {
    "shape": "text",
    "inner radius": "length",
    "inner diameter": "length",
    "radius": "length",
    "diameter": "length",
    "length": "length",
    "width": "length",
    "area": "area",
    "probe": "length",
}
FACED: dict[str, str] = {
    "held": "temperature",
    "flux in": "flux",
    "film": "film",
    "fluid": "temperature",
    "limit": "temperature",
}
SOURCES = ("generation", "specific generation", "power", "line power")
LATER_SOURCES = ("current", "voltage", "current density", "beam flux")

# Names of the design outside the present scope.
LATER_LAYERED = {
    *("conductivity slope", "conductivity reference", "material", "current", "voltage", "current density", "turns"),
    *("fill factor", "resistivity", "resistivity slope", "resistivity reference", "ac ratio", "generation slope"),
    *("generation reference", "activation energy", "absorption coefficient", "specific heat", "heat available"),
    "joint",
}
LATER_PLAIN = {
    *("section", "perimeter", "side film", "side fluid", "side emissivity", "side surroundings", "side film law"),
    *("side size", "side speed", "side fluid kind", "beam flux", "beam enters", "overload", "start"),
}
LATER_FACED = {"contact", "emissivity", "surroundings", "resistance", "film law", "size", "speed", "fluid kind"}

ANSWERS: dict[str, tuple[str, ...]] = {
    "peak": ("temperature",),
    "peak 1": ("temperature",),
    "peak place": ("length",),
    "peak layer": ("text",),
    "left face": ("temperature",),
    "right face": ("temperature",),
    "mean": ("temperature",),
    "mean 1": ("temperature",),
    "probe temperature": ("temperature",),
    "left heat out": ("flux", "line power", "power"),
    "right heat out": ("flux", "line power", "power"),
    "heat made": ("flux", "line power", "power"),
    "left share": ("percent",),
    "balance": ("percent",),
    "allowable generation": ("generation",),
    "allowable specific generation": ("specific generation",),
    "allowable power": ("power",),
    "allowable line power": ("line power",),
    "limited by": ("text",),
    "headroom": ("difference",),
    "utilisation": ("percent",),
    "verdict": ("text",),
}
LATER_ANSWERS = {
    *("side heat out", "left film used", "right film used", "voltage", "resistance", "allowable current"),
    *("allowable current density", "allowable voltage", "runaway generation", "runaway specific generation"),
    *("runaway power", "runaway line power", "runaway current", "runaway current density", "runaway voltage"),
    *("runaway utilisation", "runaway margin", "peak low", "peak high", "peak sd", "chance over limit"),
    *("main doubt", "doubt share", "allowable low", "settling time", "overload time", "why"),
}
NUMBERED_LATER_ANSWER = re.compile(r"(peak|mean) \d+|joint \d+ (left|right)")
# `voltage` and `resistance` are answers too, but `voltage` is an input as well and must not be refused there.
ANSWER_NAMES_REFUSED = (set(ANSWERS) | LATER_ANSWERS) - {"voltage"}

SIDES = {"left": ("left",), "inner": ("left",), "right": ("right",), "outer": ("right",), "both": ("left", "right")}


@dataclass(frozen=True)
class Column:
    """One input heading. `what` is "skip", "bad", "later" or "use"; `inputs` are the inputs its cell fills."""

    what: str
    inputs: tuple[str, ...] = ()
    kind: str = ""
    unit: units.Unit = (1.0, 0.0)
    source: bool = False
    both: bool = False


@dataclass(frozen=True)
class Asked:
    """One answer heading. `what` is "bad", "later" or "use"."""

    what: str
    name: str = ""
    kind: str = ""
    unit: units.Unit = (1.0, 0.0)


SKIP, BAD = Column("skip"), Column("bad")


def split(heading: str) -> tuple[str, str]:
    """Name (lower case, single blanks) and unit text ("" if none)."""
    text = heading.strip()
    unit = ""
    if text.endswith("]") and "[" in text:
        text, _, unit = text[:-1].rpartition("[")
    return " ".join(text.split()).lower(), " ".join(unit.split())


def _layer(name: str) -> tuple[str, int | None]:
    found = re.fullmatch(r"(.*\S) (\d+)", name)
    return (found[1], int(found[2])) if found else (name, None)


def _used(inputs: tuple[str, ...], kind: str, unit: str, *, source: bool = False, both: bool = False) -> Column:
    found = units.find(unit, (kind,))
    return BAD if found is None else Column("use", inputs, kind, found[1], source, both)


def _is_later(name: str) -> bool:
    stem, number = _layer(name)
    side, _, rest = name.partition(" ")
    if name in LATER_PLAIN or stem in LATER_LAYERED or (side in SIDES and rest in LATER_FACED):
        return True
    return number is not None and number > 1 and (stem in LAYERED or stem == "limit")


def column(heading: object) -> Column:
    """Reads one input heading."""
    if heading is None or not str(heading).strip():
        return SKIP
    name, unit = split(str(heading))
    if name.startswith(("#", "note")):
        return SKIP
    if len(str(heading)) > 200:
        return BAD
    for prefix in ("± ", "+/- ", "sd "):
        if name.startswith(prefix):
            rest = name.removeprefix(prefix)
            known = _is_later(rest) or column(f"{rest} [{unit}]").what != "bad" or unit == "%"
            return Column("later") if known else BAD
    stem, number = _layer(name)
    side, _, rest = name.partition(" ")
    if name in PLAIN:
        return _used((name,), PLAIN[name], unit)
    if stem in LAYERED and number in (None, 1):
        return _used((stem,), LAYERED[stem], unit, source=stem in SOURCES)
    if name in ("limit", "limit 1"):
        return _used((name,), "temperature", unit)
    if side in SIDES and rest in FACED:
        inputs = tuple(f"{one} {rest}" for one in SIDES[side])
        return _used(inputs, FACED[rest], unit, both=side == "both")
    if _is_later(name):
        return Column("later", source=stem in SOURCES or stem in LATER_SOURCES)
    return BAD


def asked(heading: str) -> Asked:
    """Reads one answer heading."""
    name, unit = split(heading)
    side, _, rest = name.partition(" ")
    if side in ("inner", "outer"):
        name = f"{SIDES[side][0]} {rest}"
    if name in ANSWERS:
        found = units.find(unit, ANSWERS[name])
        return Asked("bad") if found is None else Asked("use", name, *found)
    if name in LATER_ANSWERS or NUMBERED_LATER_ANSWER.fullmatch(name):
        return Asked("later", name)
    return Asked("bad")
