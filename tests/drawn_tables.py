"""Random tables of headings and columns over the whole range that the heading table allows, for the property tests.

Quantities are drawn evenly in their logarithm, up to the heading's own highest value and down to where nothing physical is
left (its lowest is 0, which no logarithm reaches). Nothing here is taken from a publication.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np
from hypothesis import Phase, given, settings
from hypothesis import strategies as st
from ingle_addin import ask
from ingle_addin.headings import ANSWERS, INPUTS, Where
from ingle_addin.units import Kind

Table = dict[str, np.ndarray]
SEEDS = st.integers(0, 2**32 - 1)
SHAPES = np.array(["wall", "cylinder", "sphere"], dtype=object)
_ITEMS = {item.name: item for item in INPUTS}
# Exponent of the least value drawn; the greatest is the heading's.
_LEAST = {"thickness": -15, "inner radius": -15, "conductivity": -12, "generation": -15, "film": -15, "flux in": -12, "density": -6,
          "power": -15, "line power": -15, "specific generation": -15, "length": -9, "area": -12, "emissivity": -3, "joint": -15,
          "resistance": -15}  # fmt: skip


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

    def worst(self, name: str, value: float) -> None:
        self.notes[name] = max(self.notes.get(name, 0.0), float(value))

    def report(self) -> None:
        share = 100.0 * self.refused / self.drawn
        assert share <= 20.0, f"{self.name}: {share:.1f} % of {self.drawn} rows have no answer"
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


def as_built(draw: np.random.Generator, n: int) -> Table:
    """Cases with everything `grown` adds, sizes and properties from far below to far above anything built."""
    table = cases(draw, n)
    solid = (table["shape"] != "wall") & np.isnan(table["inner radius [m]"])
    d = 10.0 ** draw.uniform(-5.0, 0.5, n)
    k = 10.0 ** draw.uniform(-2.0, 3.0, n)
    q = np.sign(table["generation [W/m³]"]) * 10.0 ** draw.uniform(-2.0, 2.5, n) * k / d**2
    table |= {"thickness [m]": d, "conductivity [W/(m·K)]": k, "generation [W/m³]": q}
    bored = ~solid & (table["shape"] != "wall")
    table["inner radius [m]"] = np.where(bored, d * 10.0 ** draw.uniform(-2.0, 4.0, n), np.nan)
    for side in ("left", "right"):
        for name, value in (("film [W/(m²·K)]", k / d), ("flux in [W/m²]", np.abs(q) * d)):
            given = ~np.isnan(table[f"{side} {name}"])
            table[f"{side} {name}"] = np.where(given, value * 10.0 ** draw.uniform(-2.0, 2.0, n), np.nan)
    table = grown(draw, table)
    for number in (2, 3):
        there = ~np.isnan(table[f"thickness {number} [m]"])
        scale = {"thickness": d, "conductivity": k, "generation": np.abs(q), "joint": d / k}
        for name, base in scale.items():
            heading = next(h for h in table if h.startswith(f"{name} {number - (name == 'joint')} ["))
            value = base * 10.0 ** draw.uniform(-2.0, 1.0, n)
            given = there & ~np.isnan(table[heading])
            table[heading] = np.where(given, value, np.nan)
    for side in ("left", "right"):
        heading = f"{side} resistance [m²·K/W]"
        table[heading] = np.where(np.isnan(table[heading]), np.nan, d / k * 10.0 ** draw.uniform(-3.0, 1.0, n))
    return table


def grown(draw: np.random.Generator, table: Table) -> Table:
    """The cases with up to three layers and joints, conductivities that change, radiation and resistances at the faces."""
    n = len(table["shape"])
    layers = draw.integers(1, 4, n)
    more: Table = {}
    outside = np.nan_to_num(table["inner radius [m]"]) + table["thickness [m]"]
    for number in (2, 3):
        d = logarithmic(draw, "thickness", n)
        # A layer is seen beside the ones within it: thinner than their last digit it would not be there.
        d = np.maximum(d, 1e-12 * outside)
        layers = np.where(outside + d > 1e6, np.minimum(layers, number - 1), layers)
        there = layers >= number
        outside = np.where(there, outside + d, outside)
        more[f"thickness {number} [m]"] = np.where(there, d, np.nan)
        more[f"conductivity {number} [W/(m·K)]"] = np.where(there, logarithmic(draw, "conductivity", n), np.nan)
        q = np.where(draw.random(n) < 0.5, 0.0, logarithmic(draw, "generation", n))
        more[f"generation {number} [W/m³]"] = np.where(there & (draw.random(n) < 0.5), q, np.nan)
        joint = some(draw, logarithmic(draw, "joint", n), 0.7)
        more[f"joint {number - 1} [m²·K/W]"] = np.where(there, joint, np.nan)
    for side in ("left", "right"):
        free = np.isnan(table[f"{side} held [°C]"]) & ~(
            (side == "left") & (table["shape"] != "wall") & np.isnan(table["inner radius [m]"])
        )
        radiates = free & (draw.random(n) < 0.3)
        emissivity = np.minimum(logarithmic(draw, "emissivity", n), 1.0)
        more[f"{side} emissivity"] = np.where(radiates, emissivity, np.nan)
        blank = ~np.isnan(table[f"{side} fluid [°C]"]) & (draw.random(n) < 0.5)
        more[f"{side} surroundings [°C]"] = np.where(radiates & ~blank, temperature(draw, n), np.nan)
        sink = ~np.isnan(table[f"{side} held [°C]"]) | ~np.isnan(table[f"{side} fluid [°C]"]) | radiates
        more[f"{side} resistance [m²·K/W]"] = np.where(sink & (draw.random(n) < 0.3), logarithmic(draw, "resistance", n), np.nan)
    more["conductivity slope [1/K]"] = np.where(draw.random(n) < 0.2, 10.0 ** draw.uniform(-9.0, -4.0, n), np.nan)
    sloped = (layers >= 2) & (draw.random(n) < 0.3)
    more["conductivity slope 2 [1/K]"] = np.where(sloped, 10.0 ** draw.uniform(-9.0, -4.0, n), np.nan)
    more["conductivity reference 2 [°C]"] = np.where(sloped & (draw.random(n) < 0.5), 25.0, np.nan)
    k = table["conductivity [W/(m·K)]"]
    text = (draw.random(n) < 0.15) & np.isnan(more["conductivity slope [1/K]"])
    factors = 10.0 ** draw.uniform(-0.5, 0.5, (n, 2))
    words = [f"20:{x:.17g}; 100:{x * f:.17g}; 800:{x * g:.17g}" for x, (f, g) in zip(np.minimum(k, 1e5), factors, strict=True)]
    column = np.where(text, np.array(words, dtype=object), k)
    return {**table, "conductivity [W/(m·K)]": column, **more}


def mixed(draw: np.random.Generator, n: int) -> Table:
    """Cases with layers, limits, probes, and their sources given in any of four ways, in the units people use."""
    table = grown(draw, cases(draw, n))
    shape, way = table["shape"], draw.integers(0, 6, n) % 4
    way = np.where((way == 3) & (shape != "cylinder"), 0, way)  # line power belongs to a cylinder
    q = table.pop("generation [W/m³]")
    d, a = table["thickness [m]"], np.nan_to_num(table["inner radius [m]"])
    for number in (2, 3):  # what all scales together is of one kind; other kinds beside it are drawn with the rest
        heading = f"generation {number} [W/m³]"
        table[heading] = np.where(way == 3, np.nan, table[heading])
    outer = (draw.random(n) < 0.5) & np.isnan(table["thickness 2 [m]"])
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
        **film_laws(draw, table),
        "length [mm]": np.where(shape == "sphere", np.nan, logarithmic(draw, "length", n) * 1e3),
        "area [m²]": np.where(shape == "wall", logarithmic(draw, "area", n), np.nan),
        "limit [°C]": some(draw, temperature(draw, n), 0.6),
        "right limit [°C]": some(draw, temperature(draw, n), 0.3),
        "limit 2 [°C]": np.where(np.isnan(table["thickness 2 [m]"]), np.nan, some(draw, temperature(draw, n), 0.5)),
        "probe [m]": some(draw, np.minimum(a + d * draw.random(n), 1e6), 0.7),
    }


def film_laws(draw: np.random.Generator, table: Table) -> Table:
    """Some of the films of walls by a law of a plate instead, in air at room temperature."""
    found: Table = {}
    for side in ("left", "right"):
        film, fluid = f"{side} film [W/(m²·K)]", f"{side} fluid [°C]"
        law = (table["shape"] == "wall") & ~np.isnan(table[film]) & (draw.random(len(table[film])) < 0.3)
        found[film] = np.where(law, np.nan, table[film])
        found[fluid] = np.where(law, 20.0, table[fluid])
        found[f"{side} film law"] = np.where(law, "vertical plate", None)
        found[f"{side} size [m]"] = np.where(law, 0.3, np.nan)
    return found


def solve(answers: list[str] | str, table: Table) -> list[np.ndarray]:
    return ask(answers, list(table), *table.values())


def rows_of(table: Table, rows: np.ndarray | slice) -> Table:
    return {heading: column[rows] for heading, column in table.items()}


def all_answers() -> list[str]:
    """Every answer there is, on both faces and in each kind of unit it may be asked in."""
    texts = []
    for item in ANSWERS:
        if item.available:
            names = {
                Where.FACE: [f"{side} {item.name}" for side in ("left", "right")],
                Where.LAYER: [item.name, *(f"{item.name} {number}" for number in (1, 2, 3))],
                Where.JOINT: [item.name.replace("joint", f"joint {number}") for number in (1, 2)],
            }.get(item.where, [item.name])
            units = ["" if kind is Kind.TEXT else f" [{kind.example}]" for kind in item.kinds]
            texts += [name + unit for name in names for unit in units]
    return texts


Property = Callable[[np.random.Generator, Tally], None]


def over_tables(name: str, holds: Property, examples: int) -> None:
    """Run a property over drawn tables, the same ones every time, and report what was refused."""
    tally = Tally(name)

    @settings(max_examples=examples, derandomize=True, database=None, deadline=None, phases=(Phase.explicit, Phase.generate))
    @given(seed=SEEDS)
    def run(seed: int) -> None:
        holds(np.random.default_rng(seed), tally)

    run()
    tally.report()


def report(table: Table, row: int) -> str:
    return "; ".join(f"{heading} {column[row]!r}" for heading, column in table.items())


def same_bits(one: np.ndarray, other: np.ndarray) -> np.ndarray:
    """Which elements are the same text, the same float to the last bit, or no number both."""
    if one.dtype == object:
        return np.array([x == y for x, y in zip(one, other, strict=True)], dtype=bool)
    return (one.view(np.int64) == other.view(np.int64)) | (np.isnan(one) & np.isnan(other))
