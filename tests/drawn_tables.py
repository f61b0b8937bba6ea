"""Random tables of headings and columns over the whole range that the heading table allows, for the property tests.

Quantities are drawn evenly in their logarithm, up to the heading's own highest value and down to where nothing physical is
left (its lowest is 0, which no logarithm reaches). Nothing here is taken from a publication.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from ingle_addin import ask
from ingle_addin.headings import ANSWERS, INPUTS, Where
from ingle_addin.units import Kind

Table = dict[str, np.ndarray]
SHAPES = np.array(["wall", "cylinder", "sphere"], dtype=object)
_ITEMS = {item.name: item for item in INPUTS}
# Exponent of the least value drawn; the greatest is the heading's.
_LEAST = {"thickness": -15, "inner radius": -15, "conductivity": -12, "generation": -15, "film": -15, "flux in": -12, "density": -6,
          "power": -15, "line power": -15, "specific generation": -15, "length": -9, "area": -12}  # fmt: skip


@dataclass
class Tally:
    """Rows drawn and refused over a test's examples."""

    name: str
    drawn: int = 0
    refused: int = 0
    most: float = 0.0
    notes: dict[str, float] = field(default_factory=dict)  # what else the test reports: the largest gap of each kind

    def count(self, refused: np.ndarray) -> None:
        self.drawn += len(refused)
        self.refused += int(refused.sum())
        self.most = max(self.most, float(refused.mean()))
        assert self.most <= 0.2, f"{self.name}: {100 * self.most:.1f} % of one table has no answer"

    def worst(self, name: str, value: float) -> None:
        self.notes[name] = max(self.notes.get(name, 0.0), float(value))

    def report(self) -> None:
        share = 100.0 * self.refused / self.drawn
        notes = "; ".join(f"{name} {value:.2g}" for name, value in self.notes.items())
        print(f"{self.name}: {self.drawn} rows, {share:.1f} % refused (most in one table {100 * self.most:.1f} %); {notes}")


def logarithmic(draw: np.random.Generator, name: str, n: int, least: float | None = None) -> np.ndarray:
    """Values of an input over its range, in base units."""
    low = _LEAST[name] if least is None else least
    return np.minimum(10.0 ** draw.uniform(low, np.log10(_ITEMS[name].highest), n), _ITEMS[name].highest)


def temperature(draw: np.random.Generator, n: int) -> np.ndarray:
    """Mostly of things built; some from absolute zero to the highest allowed."""
    usual = draw.uniform(-60.0, 900.0, n)
    kelvin = 10.0 ** draw.uniform(-3.0, 5.0, n)
    return np.where(draw.random(n) < 0.8, usual, np.minimum(kelvin - 273.15, 1e5))


def some(draw: np.random.Generator, values: np.ndarray, share: float) -> np.ndarray:
    """A share of the values, the rest blank."""
    return np.where(draw.random(len(values)) < share, values, np.nan)


def body(draw: np.random.Generator, n: int, shape: np.ndarray) -> Table:
    """Shape, sizes, conductivity and source; a fifth of the round bodies are thin shells, a third solid."""
    round_body = shape != "wall"
    d = logarithmic(draw, "thickness", n)
    thin = round_body & (draw.random(n) < 0.2)
    a = np.where(thin, np.minimum(d * 10.0 ** draw.uniform(1.0, 12.0, n), 1e6), logarithmic(draw, "inner radius", n))
    bored = round_body & (thin | (draw.random(n) < 0.6))
    q = logarithmic(draw, "generation", n) * np.where(draw.random(n) < 0.04, -1.0, 1.0)
    q[draw.random(n) < 0.05] = 0.0
    return {
        "shape": shape,
        "thickness [m]": d,
        "inner radius [m]": np.where(bored, a, np.nan),
        "conductivity [W/(m·K)]": logarithmic(draw, "conductivity", n),
        "generation [W/m³]": q,
    }


def faces(draw: np.random.Generator, n: int, solid: np.ndarray) -> Table:
    """Held, filmed, filmed with a flux, flux alone, insulated; at least one face lets heat out."""
    table: Table = {}
    leaves = np.zeros(n, bool)
    for side in ("right", "left"):
        kind = draw.integers(0, 5, n)  # held, film, film and flux, flux, insulated
        if side == "right":
            kind = np.where(solid, kind % 3, kind)
        else:
            kind = np.where(~leaves, kind % 3, kind)
            kind = np.where(solid, 4, kind)
        leaves |= kind < 3
        flux = logarithmic(draw, "flux in", n) * np.where(draw.random(n) < 0.04, -1.0, 1.0)
        table[f"{side} held [°C]"] = np.where(kind == 0, temperature(draw, n), np.nan)
        filmed = (kind == 1) | (kind == 2)
        table[f"{side} film [W/(m²·K)]"] = np.where(filmed, logarithmic(draw, "film", n), np.nan)
        table[f"{side} fluid [°C]"] = np.where(filmed, temperature(draw, n), np.nan)
        table[f"{side} flux in [W/m²]"] = np.where((kind == 2) | (kind == 3), flux, np.nan)
    return table


def cases(draw: np.random.Generator, n: int, shapes: np.ndarray = SHAPES) -> Table:
    """n cases, every one complete."""
    shape = draw.choice(shapes, n)
    table = body(draw, n, shape)
    solid = (shape != "wall") & np.isnan(table["inner radius [m]"])
    return {**table, **faces(draw, n, solid)}


def mixed(draw: np.random.Generator, n: int) -> Table:
    """Cases with limits, probes, and their sources given in any of four ways, in the units people use."""
    table = cases(draw, n)
    shape, way = table["shape"], draw.integers(0, 4, n)
    way = np.where((way == 3) & (shape != "cylinder"), 0, way)  # line power belongs to a cylinder
    q = table.pop("generation [W/m³]")
    d, a = table["thickness [m]"], np.nan_to_num(table["inner radius [m]"])
    outer = draw.random(n) < 0.5
    outer &= (shape != "wall") & (a + d - a > 0.0) & (a + d <= 1e6)
    return {
        **table,
        "thickness [m]": np.where(outer, np.nan, d),
        "outer diameter [m]": np.where(outer, 2.0 * (a + d), np.nan),
        "generation [kW/m³]": np.where(way == 0, q * 1e-3, np.nan),
        "specific generation [W/kg]": np.where(way == 1, logarithmic(draw, "specific generation", n), np.nan),
        "density [kg/m³]": np.where((way == 1) | (draw.random(n) < 0.5), logarithmic(draw, "density", n), np.nan),
        "power [kW]": np.where(way == 2, logarithmic(draw, "power", n) * 1e-3, np.nan),
        "line power [W/m]": np.where(way == 3, logarithmic(draw, "line power", n), np.nan),
        "length [mm]": np.where(shape == "sphere", np.nan, logarithmic(draw, "length", n) * 1e3),
        "area [m²]": np.where(shape == "wall", logarithmic(draw, "area", n), np.nan),
        "limit [°C]": some(draw, temperature(draw, n), 0.5),
        "right limit [°C]": some(draw, temperature(draw, n), 0.3),
        "probe [m]": some(draw, np.minimum(a + d * draw.random(n), 1e6), 0.7),
    }


def solve(answers: list[str] | str, table: Table) -> list[np.ndarray]:
    return ask(answers, list(table), *table.values())


def rows_of(table: Table, rows: np.ndarray | slice) -> Table:
    return {heading: column[rows] for heading, column in table.items()}


def all_answers() -> list[str]:
    """Every answer there is, on both faces and in each kind of unit it may be asked in."""
    texts = []
    for item in ANSWERS:
        if item.available:
            names = [f"{side} {item.name}" for side in ("left", "right")] if item.where is Where.FACE else [item.name]
            units = ["" if kind is Kind.TEXT else f" [{kind.example}]" for kind in item.kinds]
            texts += [name + unit for name in names for unit in units]
    return texts
