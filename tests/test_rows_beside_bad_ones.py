"""What a slip of the hand leaves in a row is that row's alone, over drawn tables of good rows and bad ones."""

from __future__ import annotations

import datetime
import re
from collections.abc import Callable
from typing import Any

import numpy as np
from drawn_tables import SHAPES, Tally, over_tables, same_bits
from ingle_addin import ask
from ingle_addin.batch import solve_calls
from ingle_addin.cells import CellError

WHERE = re.compile(r"row \d+ of the values")
HEADINGS = (
    "shape", "thickness [mm]", "inner radius [mm]", "outer radius [mm]", "conductivity [W/(m·K)]", "generation [W/m³]", "power [W]",
    "left held [°C]", "left film [W/(m²·K)]", "left fluid [°C]", "right held [°C]", "right film [W/(m²·K)]", "right fluid [°C]",
    "limit [°C]", "probe [mm]", "left emissivity", "thickness 2 [mm]", "conductivity 2 [W/(m·K)]", "joint 1 [m²·K/W]",
    "conductivity slope [1/K]", "material", "note by hand",
)  # fmt: skip
SECOND = ("thickness 2 [mm]", "conductivity 2 [W/(m·K)]", "joint 1 [m²·K/W]")
Row = dict[str, Any]


def good_row(draw: np.random.Generator) -> Row:
    shape = str(draw.choice(SHAPES))
    row: Row = dict.fromkeys(HEADINGS)
    row |= {"shape": shape, "thickness [mm]": draw.uniform(1.0, 80.0), "conductivity [W/(m·K)]": 10.0 ** draw.uniform(-1, 2)}
    row |= {"generation [W/m³]": 10.0 ** draw.uniform(2, 6), "right held [°C]": draw.uniform(0.0, 90.0), "note by hand": "seen"}
    if shape == "wall":
        row |= {"left film [W/(m²·K)]": draw.uniform(1.0, 99.0), "left fluid [°C]": draw.uniform(0.0, 90.0)}
    elif draw.random() < 0.5:
        row |= {"inner radius [mm]": draw.uniform(1.0, 50.0)}
    if draw.random() < 0.15:
        row |= {"thickness 2 [mm]": draw.uniform(1.0, 9.0), "conductivity 2 [W/(m·K)]": "20:0.2; 90:0.3; 2000:0.9"}
        row |= {"joint 1 [m²·K/W]": draw.uniform(0.0, 1e-3)}
    if draw.random() < 0.3:
        row |= {"conductivity slope [1/K]": draw.uniform(1e-5, 1e-3)}
    if draw.random() < 0.5:
        row |= {"limit [°C]": draw.uniform(500.0, 900.0)}
    return row


def number_heading(draw: np.random.Generator) -> str:
    return str(draw.choice([h for h in HEADINGS if h not in ("shape", "note by hand", "left emissivity", "material")]))


Slip = Row | Callable[[np.random.Generator], Row]
# What a slip of the hand leaves in a row, and the error its cells must show.
SLIPS: dict[str, tuple[CellError, Slip]] = {
    "no conductivity": (CellError.NA, lambda draw: {"conductivity [W/(m·K)]": draw.choice(np.array([None, "", "  "], object))}),
    "no size": (CellError.NA, {"thickness [mm]": None}),
    "no shape": (CellError.NA, {"shape": None}),
    "unknown shape": (CellError.VALUE, lambda draw: {"shape": "".join(draw.choice(list("qxyz=+'\n"), draw.integers(1, 400)))}),
    "number as shape": (CellError.VALUE, lambda draw: {"shape": float(draw.integers(0, 9))}),
    "bar": (CellError.VALUE, {"shape": "bar"}),
    "text": (CellError.VALUE, lambda draw: {number_heading(draw): "about " + "five " * int(draw.integers(1, 99))}),
    "number as text": (CellError.VALUE, lambda draw: {number_heading(draw): f"{draw.uniform(1, 9):.3f}"}),
    "decimal comma": (CellError.VALUE, lambda draw: {number_heading(draw): "4,75"}),
    "boolean": (CellError.VALUE, lambda draw: {number_heading(draw): bool(draw.integers(0, 2))}),
    "date": (CellError.VALUE, lambda draw: {number_heading(draw): datetime.date(2024, 2, 29)}),
    "error": (CellError.DIV0, lambda draw: {number_heading(draw): CellError.DIV0}),
    "error as shape": (CellError.REF, {"shape": CellError.REF}),
    "negative conductivity": (CellError.NUM, lambda draw: {"conductivity [W/(m·K)]": -(10.0 ** draw.uniform(-300, 300))}),
    "size of nothing": (CellError.NUM, {"thickness [mm]": 0.0}),
    "huge": (CellError.NUM, lambda draw: {"generation [W/m³]": draw.choice([1e26, 1e300, np.inf, -np.inf])}),
    "a whole number beyond the floats": (CellError.NUM, {"generation [W/m³]": 10**400}),
    "below absolute zero": (CellError.NUM, {"right held [°C]": -273.16}),
    "two sizes": (CellError.VALUE, {"shape": "sphere", "outer radius [mm]": 90.0, "left film [W/(m²·K)]": None,
                                                      "left fluid [°C]": None}),
    "a wall's radius": (CellError.VALUE, {"shape": "wall", "inner radius [mm]": 5.0}),
    "bore beyond the outside": (CellError.NUM, {"shape": "cylinder", "thickness [mm]": None, "inner radius [mm]": 9.0,
                                                                  "outer radius [mm]": 9.0, **dict.fromkeys(SECOND)}),
    "two sources": (CellError.VALUE, {"power [W]": 5.0}),
    "held in a fluid": (CellError.VALUE, {"right film [W/(m²·K)]": 8.0, "right fluid [°C]": 20.0}),
    "no fluid": (CellError.NA, {"right held [°C]": None, "right film [W/(m²·K)]": 9.0}),
    "no film": (CellError.NA, {"right held [°C]": None, "right fluid [°C]": 9.0}),
    "nowhere to go": (CellError.NUM, {"right held [°C]": None, "left film [W/(m²·K)]": None, "left fluid [°C]": None}),
    "not there yet": (CellError.NA, {"material": "copper"}),
    "no surroundings": (CellError.NA, {"left film [W/(m²·K)]": None, "left fluid [°C]": None, "left emissivity": 0.9, "shape": "wall",
                                       "inner radius [mm]": None}),
    "no second layer": (CellError.NA, {**dict.fromkeys(SECOND), "joint 1 [m²·K/W]": 1e-4}),
    "conductivity falls to zero": (CellError.NUM, {"conductivity slope [1/K]": -0.5, "conductivity [W/(m·K)]": 1.0}),
    "table that falls back": (CellError.NUM, {"conductivity [W/(m·K)]": "90:1; 20:2", "conductivity slope [1/K]": None}),
    "two laws of conductivity": (CellError.VALUE, {"conductivity [W/(m·K)]": "20:1; 90:2", "conductivity slope [1/K]": 1e-3}),
    "probe outside": (CellError.NUM, {"probe [mm]": 1e5}),
    "colder than cold": (CellError.NUM, {"generation [W/m³]": -1e12}),
}  # fmt: skip
ASKED = ["peak [°C]", "peak place [mm]", "right face [°C]", "mean [°C]", "right heat out [W/m²]", "balance [%]", "verdict", "why"]


def spoils(draw: np.random.Generator, tally: Tally) -> None:
    n = 60
    rows = [good_row(draw) for _ in range(n)]
    names = [str(name) for name in draw.permutation(list(SLIPS))]
    # At most one bad row in six, so that what is refused by mistake can be told from what is refused on purpose.
    bad = {int(place): names[i % len(names)] for i, place in enumerate(np.sort(draw.choice(6 * n // 5, n // 5, replace=False)))}
    healthy = iter(rows)
    table: list[Row] = []
    for place in range(6 * n // 5):
        row = good_row(draw) if place in bad else dict(next(healthy))
        if place in bad:
            slip = SLIPS[bad[place]][1]
            row |= slip(draw) if callable(slip) else slip
        table.append(row)
    cells = [list(row.values()) for row in table]
    found = ask(ASKED, HEADINGS, cells)
    clean = ask(ASKED, HEADINGS, [list(row.values()) for row in rows])
    keep = np.array([place not in bad for place in range(len(table))])
    for answer, column, alone in zip(ASKED[:-1], found, clean, strict=False):
        assert same_bits(column[keep], alone).all(), answer
    tally.count(np.isnan(clean[0]))
    # A good row may be above its limit, which is told, by its number here and there.
    told = [np.array([WHERE.sub("row", text) for text in texts]) for texts in (clean[-1], found[-1][keep])]
    assert (told[0] == told[1]).all()
    causes = {"over limit": "Limit [°C] in row is ", "caution": "Conductivity 2 [W/(m·K)] in row has a table that does not reach"}
    assert all(text.startswith(causes.get(verdict, "ok")) for text, verdict in zip(told[0], clean[-2], strict=True))
    (outcome,) = solve_calls("INGLE.ASK", [((tuple(ASKED),), (HEADINGS,), cells)])
    for place, name in bad.items():
        error, _ = SLIPS[name]
        for answer, column in zip(ASKED[:-2], found, strict=False):
            assert np.isnan(column[place]), (name, answer, column[place], table[place])
        assert found[-2][place] == "no answer"
        why = found[-1][place]
        assert 20 < len(why) <= 255, (name, why)
        assert re.search(rf"\brow {place + 1} of the values\b", why, re.IGNORECASE), (name, why)
        assert why.isprintable(), (name, why)
        assert list(outcome.grid[place][:-2]) == [error] * (len(ASKED) - 2), (name, why)
        assert outcome.grid[place][-1] == outcome.reasons[place] == why


def test_a_bad_row_has_its_error_and_leaves_its_neighbours_alone() -> None:
    over_tables("rows beside bad ones", spoils, 4)
