"""Random mixed tables of the wider scope: layers, all faces, sources in temperature, currents, bars."""

from __future__ import annotations

import random

from . import draw, units, units2
from . import headings2 as h
from .build2 import Points, Value
from .case2 import Inputs, legal
from .draw import BLANK_SHARE, MISTAKE_SHARE, NOTES, Table
from .draw import _styled as styled
from .mistakes import Cells
from .mistakes2 import MISTAKES

ANSWERS = [
    *draw.ANSWERS,
    *("peak 1 [°C]", "peak 2 [°C]", "Peak 3 [K]", "peak 4 [°F]", "mean 2 [°C]", "mean 3 [K]", "mean 4 [°C]"),
    *("joint 1 left [°C]", "joint 1 right [K]", "joint 2 left [°F]", "joint 2 right [°C]", "joint 3 left [°C]"),
    *("joint 3 right [°C]", "side heat out [W]", "voltage [V]", "voltage [mV]", "resistance [Ω]", "resistance [mΩ]"),
    *("allowable current [A]", "allowable voltage [V]", "allowable current density [A/mm²]"),
    "allowable current density [A/m²]",
]
SPELLINGS: dict[str, tuple[str, ...]] = {
    **draw.SPELLINGS,
    "slope": ("1/K", "1/K", "K^-1", "1/°C"),
    "current": ("A", "A", "mA", "kA"),
    "voltage": ("V", "V", "mV", "kV"),
    "current density": ("A/m²", "A/mm²", "A/cm²", "A/m^2", "kA/m²"),
    "resistivity": ("Ω·m", "Ohm·m", "ohm*m", "µΩ·cm", "nΩ·m", "µΩ·m", "Ω·mm²/m"),
    "ohms": ("Ω", "ohm", "mΩ", "µΩ"),
    "joint": ("m²·K/W", "m2*K/W", "m²K/W", "cm²·K/W", "mm²·K/W", "m²·°C/W"),
    "ratio": ("", "", "-"),
}
KIND_SETS = (
    *(("generation",), ("generation",), ("specific generation",), ("power",), ("line power", "generation")),
    *(("current",), ("current",), ("voltage",), ("voltage", "generation"), ("current density",), ("current", "voltage")),
    *(("generation", "current"), ("generation", "power", "current", "voltage"), ("current", "current density", "power")),
)


def _kinds_of(name: str) -> tuple[str, ...]:
    stem, _, number = name.rpartition(" ")
    if name in h.PLAIN:
        return h.PLAIN[name]
    if name in h.LAYERED:
        return h.LAYERED[name]
    if number.isdigit():
        return ("temperature",) if stem == "limit" else h.LAYERED[stem]
    return h.FACED[name.partition(" ")[2]]


class Sheet:
    """The columns of a table as they come into being."""

    def __init__(self, rng: random.Random) -> None:
        self.rng = rng
        self.headings: list[str] = []
        self.by_name: dict[str, list[tuple[int, units.Unit, str]]] = {}

    def _add(self, name: str) -> None:
        rng = self.rng
        kind = rng.choice(_kinds_of(name))
        side, _, rest = name.partition(" ")
        text = f"{rng.choice(draw.SIDE_WORDS[side])} {rest}" if side in draw.SIDE_WORDS and rest in h.FACED else name
        bare = name.removesuffix(" 1")
        outside = bare in ("outer radius", "outer diameter")
        if name.endswith(" 1") and bare in h.LAYERED and not outside and rng.random() < 0.6:
            text = bare
        text = styled(rng, text)
        unit = (1.0, 0.0)
        if kind != "text":
            spelling = rng.choice(SPELLINGS[kind])
            unit = units2.KINDS[kind][spelling]
            text = f"{text} [{spelling}]" if spelling else text
        self.by_name.setdefault(name, []).append((len(self.headings), unit, kind))
        self.headings.append(text)

    def cells(self, inputs: Inputs) -> Cells:
        out: Cells = {}
        for name, value in inputs.items():
            known = self.by_name.get(name, [])
            if not known or (len(known) < 2 and self.rng.random() < 0.01):
                self._add(name)
            index, unit, kind = self.rng.choice(self.by_name[name])
            out[index] = self._cell(name, value, unit, kind)
        return out

    def _cell(self, name: str, value: Value, unit: units.Unit, kind: str) -> object:
        if isinstance(value, str):
            return value
        if isinstance(value, tuple):
            return self._text(value, unit)
        turned = kind == "film" and ("resistance" in name or name.startswith("joint"))
        return units.from_si(1.0 / value if turned and value else value, unit)

    def _text(self, points: Points, unit: units.Unit) -> str:
        """A text table, in degrees Celsius, or with a unit inside."""
        spelling = self.rng.choice(("", "", "", " K", " °C", "°C", " °F"))
        scale = units.TEMPERATURE[spelling.strip() or "°C"]
        gap = self.rng.choice(("; ", ";", " ; "))
        return gap.join(f"{units.from_si(t, scale):.8g}{spelling}:{units.from_si(v, unit):.12g}" for t, v in points)


def _table(rng: random.Random, count: int) -> Table:
    sheet = Sheet(rng)
    kinds = rng.choice(KIND_SETS)
    shapes = rng.choice((("wall",), ("cylinder",), ("bar",), *[("wall", "wall", "cylinder", "cylinder", "sphere", "bar", "bar")] * 5))
    if "line power" in kinds:
        shapes = ("cylinder",)
    drawn: list[Cells] = []
    for _ in range(count):
        if rng.random() < BLANK_SHARE:
            drawn.append({})
            continue
        inputs = legal(rng, shapes, kinds)
        word = str(inputs["shape"])
        wrong = rng.random() < MISTAKE_SHARE
        mistake = rng.choice(MISTAKES) if wrong else None
        if not wrong:
            inputs["shape"] = rng.choice((word, word, word.upper(), word.title(), f" {word}"))
        drawn.append(mistake.before(rng, inputs, sheet.cells) if mistake else sheet.cells(inputs))  # type: ignore[arg-type]
    width = len(sheet.headings)
    extras = [rng.choice(("note", "Notes", "# ref", "", "note [mm]")) for _ in range(rng.choice((0, 1, 2)))]
    order = list(range(width + len(extras)))
    rng.shuffle(order)
    texts = [*sheet.headings, *extras]
    rows: list[list[object]] = []
    for cells in drawn:
        blank = rng.choice((None, None, None, "", "  "))
        rows.append([cells.get(i, blank) if i < width else rng.choice(NOTES) for i in order])
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
