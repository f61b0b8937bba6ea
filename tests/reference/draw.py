"""Random mixed tables: most rows legal, some with one deliberate mistake. The seed decides everything."""

from __future__ import annotations

import random
from dataclasses import dataclass, field

from . import units
from .case import FACES, Inputs, legal
from .headings import LAYERED, PLAIN
from .mistakes import MISTAKES, Cells

MISTAKE_SHARE = 0.15
BLANK_SHARE = 0.02
Table = tuple[list[str], list[list[object]]]

ANSWERS = [
    *("peak [°C]", "peak [K]", "Peak 1 [°F]", "peak place [mm]", "peak place [in]", "peak layer"),
    *("left face [°C]", "right face [degC]", "inner face [K]", "outer  face [°F]", "mean [°C]", "mean 1 [K]"),
    *("probe temperature [°C]", "left heat out [W/m²]", "left heat out [W/m]", "left heat out [W]"),
    *("right heat out [kW/m²]", "outer heat out [W/m]", "right heat out [W]", "inner heat out [BTU/hr]"),
    *("heat made [W/m²]", "heat made [W/m]", "heat made [W]", "left share [%]", "balance [%]"),
    *("allowable generation [W/m³]", "allowable generation [MW/m³]", "allowable specific generation [W/kg]"),
    *("allowable power [W]", "allowable line power [W/m]", "limited by", "headroom [K]", "headroom [°C]"),
    *("headroom [°F]", "utilisation [%]", "verdict"),
]

# Spellings drawn for input headings, by kind of unit.
SPELLINGS: dict[str, tuple[str, ...]] = {
    "length": ("m", "mm", "cm", "µm", "um", "μm", "in", "inch", "ft", "mil"),
    "area": ("m²", "m2", "m^2", "mm²", "mm2", "cm²", "cm2", "in²", "ft²", "ft2"),
    "conductivity": (
        *("W/(m·K)", "W/(m*K)", "W/m/K", "W/m·K", "W/mK", "W/m-K", "W/(m K)", "W/(m·°C)", "mW/(m·K)", "kW/(m·K)"),
        *("W/(cm·K)", "W m^-1 K^-1", "BTU/hr-ft-F", "BTU/(hr·ft·°F)", "Btu/(hr*ft*F)"),
    ),
    "film": (
        *("W/(m²·K)", "W/(m2*K)", "W/m²K", "W/m2K", "W/m²/K", "W/m^2/K", "W/(m^2 K)", "W/m²·K", "kW/(m²·K)"),
        *("W/(cm²·K)", "W/(m²·°C)", "W m^-2 K^-1", "BTU/(hr·ft²·°F)", "Btu/(hr*ft2*F)"),
    ),
    "flux": ("W/m²", "W/m2", "W/m^2", "kW/m²", "W/cm²", "W/cm2", "MW/m²", "mW/mm²", "W/in²", "BTU/(hr·ft²)"),
    "generation": ("W/m³", "W/m3", "W/m^3", "kW/m³", "MW/m³", "GW/m³", "W/cm³", "W/cm3", "mW/mm³", "W/L", "W/in³"),
    "specific generation": ("W/kg", "W/g", "mW/g", "kW/kg", "mW/kg", "W/lb"),
    "density": ("kg/m³", "kg/m3", "g/cm³", "g/cm3", "kg/L", "lb/ft³", "lb/in³"),
    "power": ("W", "mW", "kW", "MW", "BTU/hr"),
    "line power": ("W/m", "kW/m", "W/cm", "W/mm", "W/ft", "W/in"),
    "temperature": ("°C", "degC", "C", "K", "°F", "degF", "F"),
}
SIDE_WORDS = {"left": ("left", "left", "inner"), "right": ("right", "right", "outer"), "both": ("both",)}


def _kind(name: str) -> str:
    side, _, rest = name.partition(" ")
    if side in SIDE_WORDS and rest in FACES:
        return FACES[rest]
    return {**LAYERED, **PLAIN, "limit": "temperature", "limit 1": "temperature"}[name]


def _styled(rng: random.Random, text: str) -> str:
    """Letter case and blanks of a name, as people type them."""
    style = rng.random()
    text = text.upper() if style < 0.07 else text.title() if style < 0.15 else text
    if " " in text and rng.random() < 0.1:
        text = text.replace(" ", rng.choice(("  ", "\n", "\u00a0", " \n")), 1)
    return f" {text}" if rng.random() < 0.03 else text


@dataclass
class Sheet:
    """The columns of a table as they come into being."""

    rng: random.Random
    headings: list[str] = field(default_factory=list)
    by_name: dict[str, list[tuple[int, units.Unit]]] = field(default_factory=dict)

    def _add(self, name: str) -> None:
        rng, kind = self.rng, _kind(name)
        side, _, rest = name.partition(" ")
        text = f"{rng.choice(SIDE_WORDS[side])} {rest}" if side in SIDE_WORDS and rest in FACES else name
        if name in LAYERED and rng.random() < 0.3:
            text = f"{name} 1"
        text = _styled(rng, text)
        unit = (1.0, 0.0)
        if kind != "text":
            spelling = rng.choice(SPELLINGS[kind])
            unit = units.KINDS[kind][spelling]
            text = f"{text} [{spelling}]" if rng.random() < 0.95 else f"{text}[{spelling}]"
        self.by_name.setdefault(name, []).append((len(self.headings), unit))
        self.headings.append(text)

    def column(self, name: str) -> tuple[int, units.Unit]:
        """A column of this name; now and then a second one in another unit comes into being."""
        known = self.by_name.get(name, [])
        if not known or (len(known) < 2 and self.rng.random() < 0.02):
            self._add(name)
        return self.rng.choice(self.by_name[name])

    def cells(self, inputs: Inputs) -> Cells:
        out: Cells = {}
        for name, value in inputs.items():
            index, unit = self.column(name)
            out[index] = value if isinstance(value, str) else units.from_si(value, unit)
        return out


NOTES = ("hot spot", "see drawing", "42", 17.5, True, "#DIV/0!", None, "")


def _table(rng: random.Random, count: int) -> Table:
    sheet = Sheet(rng)
    kinds = rng.sample(("generation", "specific generation", "power", "line power"), rng.choice((1, 1, 2, 3, 4)))
    shapes = rng.choice((("wall",), ("cylinder",), ("sphere",), *[("wall", "cylinder", "sphere")] * 5))
    if kinds == ["line power"]:
        shapes = ("cylinder",)
    drawn: list[Cells] = []
    for _ in range(count):
        if rng.random() < BLANK_SHARE:
            drawn.append({})
            continue
        inputs = legal(rng, shapes, kinds)
        wrong = rng.random() < MISTAKE_SHARE
        mistake = rng.choice(MISTAKES) if wrong else None
        cells = mistake.before(rng, inputs, sheet.cells) if mistake else sheet.cells(inputs)
        drawn.append(cells)
    width = len(sheet.headings)
    extras = [rng.choice(("note", "Notes", "# ref", "#", "", "  ", "note [mm]")) for _ in range(rng.choice((0, 1, 2)))]
    order = list(range(width + len(extras)))
    rng.shuffle(order)
    texts = [*sheet.headings, *extras]
    rows: list[list[object]] = []
    for cells in drawn:
        blank = rng.choice((None, None, None, "", "  "))
        line = [cells.get(i, blank) if i < width else rng.choice(NOTES) for i in order]
        rows.append(line)
    return [texts[i] for i in order], rows


def tables(seed: int, rows: int) -> list[Table]:
    """Tables of 20 to 60 rows, `rows` in all, the same for the same seed."""
    rng = random.Random(seed)
    out: list[Table] = []
    left = rows
    while left > 0:
        count = min(left, rng.randint(20, 60))
        out.append(_table(rng, count))
        left -= count
    return out
