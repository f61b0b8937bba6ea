"""What must hold of every row, over tables drawn across the whole legal range of the headings.

Each test prints how many of its rows had no answer (`pytest -s`) and fails where that is more than a fifth of a table.
"""

from __future__ import annotations

import datetime
import re
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from drawn_tables import SHAPES, Table, Tally, all_answers, cases, mixed, rows_of, solve
from hypothesis import Phase, given, settings
from hypothesis import strategies as st
from ingle.steady import BLOCK
from ingle_addin import ask
from ingle_addin.batch import solve_calls
from ingle_addin.cells import CellError

SEEDS = st.integers(0, 2**32 - 1)
HEAT_UNITS = {"wall": "W/m²", "cylinder": "W/m", "sphere": "W"}
EPS = float(np.finfo(float).eps)

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


# Heat is conserved.


def heat_closes(draw: np.random.Generator, tally: Tally) -> None:
    table = cases(draw, 1500)
    shape = table["shape"]
    balance, left_face, right_face = solve("balance [%]; left face [°C]; right face [°C]", table)
    tally.count(np.isnan(balance))
    good = ~np.isnan(balance)
    out, flux = {}, {}
    for side in ("left", "right"):
        units = [solve(f"{side} heat out [{unit}]", table)[0] for unit in HEAT_UNITS.values()]
        # W/m² is of any face: each shape is read in the unit that is its own.
        out[side] = np.select([shape == word for word in HEAT_UNITS], units)
        flux[side] = np.nan_to_num(table[f"{side} flux in [W/m²]"]) * face_area(table, side)
    made = np.select([shape == word for word in HEAT_UNITS], [solve(f"heat made [{unit}]", table)[0] for unit in HEAT_UNITS.values()])
    solid = (shape != "wall") & np.isnan(table["inner radius [m]"])
    out["left"] = np.where(solid, 0.0, out["left"])
    for heat in (*out.values(), made):
        assert not np.isnan(heat[good]).any()
    largest = np.max(np.abs([out["left"], out["right"], made, flux["left"], flux["right"]]), axis=0)
    gap = np.abs(out["left"] + out["right"] - made)
    closed = gap <= 1e-12 * largest
    bad = np.flatnonzero(good & ~(closed & (balance <= 1e-10)))
    assert not len(bad), (
        f"{len(bad)} rows; gap {gap[bad[0]]}, largest {largest[bad[0]]}, {balance[bad[0]]} %: {report(table, bad[0])}"
    )
    tally.worst("gap of the answers", np.max(gap[good] / np.where(largest[good] > 0.0, largest[good], 1.0)))
    tally.worst("`balance`", np.max(balance[good]) / 100.0)
    hottest = np.fmax.reduce([np.abs(table[f"{side} {word} [°C]"]) for side in out for word in ("held", "fluid")])
    # The heat told to leave through a film is the one its temperatures make, as far as a degree's own digits go.
    for side, face in (("left", left_face), ("right", right_face)):
        film, fluid = table[f"{side} film [W/(m²·K)]"], table[f"{side} fluid [°C]"]
        rows = good & ~np.isnan(film) & ~(solid & (side == "left"))
        A = face_area(table, side)
        by_film = film * A * (face - fluid) - flux[side]
        digits = film * A * 4 * EPS * np.fmax(hottest, np.abs(face))
        off = rows & (np.abs(by_film - out[side]) > 1e-12 * largest + digits)
        assert not off.any(), f"{side} film against its heat: {report(table, int(np.flatnonzero(off)[0]))}"


def face_area(table: Table, side: str) -> np.ndarray:
    """Of a wall per m², of a cylinder per metre, of the whole sphere."""
    r = np.nan_to_num(table["inner radius [m]"]) + (table["thickness [m]"] if side == "right" else 0.0)
    return np.select([table["shape"] == word for word in HEAT_UNITS], [np.ones_like(r), 2 * np.pi * r, 4 * np.pi * r * r])


def test_heat_balance_closes() -> None:
    over_tables("heat balance", heat_closes, 20)


# A wall seen from behind.

SWAP = {"left": "right", "right": "left"}


def turned(table: Table) -> Table:
    return {" ".join([SWAP.get(word, word) for word in heading.split()]): column for heading, column in table.items()}


def mirrors(draw: np.random.Generator, tally: Tally) -> None:
    table = cases(draw, 2000, SHAPES[:1])
    table["probe [m]"] = table["thickness [m]"] * draw.choice([0.0, 0.25, 0.5, 0.75, 1.0], 2000)
    behind = turned(table)
    behind["probe [m]"] = table["thickness [m]"] - table["probe [m]"]
    temperatures = ["peak [°C]", "left face [°C]", "right face [°C]", "mean [°C]", "probe temperature [°C]"]
    heats = ["left heat out [W/m²]", "right heat out [W/m²]"]
    front = dict(zip(temperatures + heats, solve(temperatures + heats, table), strict=True))
    back = turned(dict(zip(temperatures + heats, solve(temperatures + heats, behind), strict=True)))
    # The whole rise: what sinks, source and fluxes each cause, so that causes which cancel do not count as none. Heat finds
    # its way through the wall and the easier of the two faces.
    sinks = np.array([table[f"{side} {word} [°C]"] for side in SWAP for word in ("held", "fluid")])
    through = [np.where(np.isnan(table[f"{s} held [°C]"]), 1.0 / table[f"{s} film [W/(m²·K)]"], 0.0) for s in SWAP]
    R = table["thickness [m]"] / table["conductivity [W/(m·K)]"] + np.fmin(*through)
    flux = sum(np.abs(np.nan_to_num(table[f"{side} flux in [W/m²]"])) for side in SWAP)
    heat = np.abs(table["generation [W/m³]"]) * table["thickness [m]"] + flux
    rise = np.fmax.reduce(sinks) - np.fmin.reduce(sinks) + heat * R
    refused = np.isnan(front["peak [°C]"])
    tally.count(refused)
    # A flux into a filmed face may be beyond all digits of what enters the wall; then absolute zero is a matter of rounding.
    odd = np.flatnonzero((refused != np.isnan(back["peak [°C]"])) & (4 * EPS * flux * R < 100.0))
    assert not len(odd), f"{len(odd)} rows are refused from one side only: {report(table, int(odd[0]))}"
    good = ~refused & ~np.isnan(back["peak [°C]"])
    for name, column in front.items():
        slack = 1e-12 * (heat + np.abs(column)) if name in heats else 1e-12 * rise + 1e-12 * (np.abs(column) + 273.15)
        gap = np.abs(column - back[name])
        off = np.flatnonzero(good & (gap > slack))
        assert not len(off), f"{name}: {column[off[0]]!r} and {back[name][off[0]]!r} of {report(table, int(off[0]))}"
        tally.worst(name, 1e-12 * np.max(gap[good] / np.maximum(slack[good], 1e-300), initial=0.0))


def test_a_wall_from_behind_is_the_same_wall() -> None:
    over_tables("mirrored wall, gap over rise and absolute temperature", mirrors, 20)


# A thin shell is a wall.


def thins(draw: np.random.Generator, tally: Tally) -> None:
    n = 300
    wall = cases(draw, n, SHAPES[:1])
    d = 10.0 ** draw.uniform(-9.0, -6.0, n)  # so that a million-million times it is still a radius
    k = 10.0 ** draw.uniform(-2.0, 3.0, n)
    films = {f"{side} film [W/(m²·K)]": np.where(np.isnan(wall[f"{side} film [W/(m²·K)]"]), np.nan,
             k / d * 10.0 ** draw.uniform(-2.0, 2.0, n)) for side in SWAP}  # fmt: skip
    q = 10.0 ** draw.uniform(1.0, 3.0, n) * k / d**2
    fluxes = {f"{side} flux in [W/m²]": np.where(np.isnan(wall[f"{side} flux in [W/m²]"]), np.nan, q * d) for side in SWAP}
    wall |= {"thickness [m]": d, "conductivity [W/(m·K)]": k, "generation [W/m³]": q, **films, **fluxes}
    answers = ["peak [°C]", "left face [°C]", "right face [°C]", "mean [°C]"]
    flat = np.array(solve(answers, wall))
    tally.count(np.isnan(flat[0]))
    sinks = np.array([wall[f"{side} {word} [°C]"] for side in SWAP for word in ("held", "fluid")])
    rise = np.nanmax(np.abs(flat - np.fmin.reduce(sinks)), axis=0) + np.fmax.reduce(sinks) - np.fmin.reduce(sinks)
    good = ~np.isnan(rise)
    for shape in ("cylinder", "sphere"):
        gaps = []
        for share in (1e-2, 1e-3, 1e-4, 1e-12):
            shell = {**wall, "shape": np.full(n, shape, dtype=object), "inner radius [m]": d / share}
            gaps.append(np.max(np.abs(np.array(solve(answers, shell)) - flat), axis=0)[good] / rise[good])
            assert (gaps[-1] <= 10.0 * share + 1e-12).all(), (shape, share, gaps[-1].max())
        # First order in thickness over radius: a tenth of it, a tenth of the gap (where the first-order part is not nil).
        order = np.log10(gaps[1] / gaps[2])[gaps[1] > 1e-6]
        assert len(order) > 0.7 * n
        assert 0.99 <= np.median(order) <= 1.01
        assert (np.abs(order - 1.0) < 0.2).mean() > 0.97
        tally.worst(f"{shape} at 1e-12 of its radius", gaps[3].max())
        tally.worst(f"order of the {shape}, median", np.median(order))


def test_thin_shells_approach_the_wall_at_first_order() -> None:
    over_tables("thin shells, gap over rise", thins, 10)


# A table is its rows.


def test_a_table_is_its_rows_to_the_last_bit() -> None:
    """Every answer there is, in every unit it may be asked in; a lone row says `this row` where a table says its number."""
    answers = all_answers()
    asked = len(answers)
    assert asked >= 25

    def rows(draw: np.random.Generator, tally: Tally) -> None:
        n = 120
        table = mixed(draw, n)
        whole = solve(answers, table)
        tally.count(np.isnan(whole[answers.index("peak [°C]")]))
        alone = [solve(answers, rows_of(table, slice(row, row + 1))) for row in range(n)]
        for j, answer in enumerate(answers):
            column = np.concatenate([answered[j] for answered in alone])
            if answer == "why":
                column = np.array([text.replace("this row", f"row {i + 1}").replace("This row", f"Row {i + 1}")
                                   for i, text in enumerate(column)], dtype=object)  # fmt: skip
            off = np.flatnonzero(~same_bits(whole[j], column))
            assert not len(off), f"{answer}: {whole[j][off[0]]!r}, alone {column[off[0]]!r}; {report(table, int(off[0]))}"
            given = whole[j] != None if whole[j].dtype == object else ~np.isnan(whole[j])  # noqa: E711
            tally.notes[answer] = tally.notes.get(answer, 0.0) + float(np.sum(given))

    tallies: list[Tally] = []

    def kept(draw: np.random.Generator, tally: Tally) -> None:
        tallies[:] = [tally]
        rows(draw, tally)

    over_tables("rows alone, and answers given", kept, 4)
    assert len(tallies[0].notes) == asked
    assert all(count > 0 for count in tallies[0].notes.values()), "an answer that no drawn row has is not tested"


@pytest.mark.parametrize("n", [BLOCK - 1, BLOCK, BLOCK + 1, 20_000])
def test_block_boundaries_do_not_show(n: int) -> None:
    """The same rows in a longer table, shifted in a table, and alone where blocks meet, have the same bits."""
    draw = np.random.default_rng(n)
    pool = mixed(draw, 200)
    table = rows_of(pool, draw.integers(0, 200, n))
    answers = [answer for answer in all_answers() if answer != "why"]
    whole, few = solve(answers, table), solve(answers, pool)
    draw = np.random.default_rng(n)
    mixed(draw, 200)
    which = draw.integers(0, 200, n)
    shifted = solve(answers, rows_of(table, slice(1, None)))
    near = [row for row in (0, 1, BLOCK - 2, BLOCK - 1, BLOCK, BLOCK + 1, 2 * BLOCK - 1, 2 * BLOCK, n - 1) if row < n]
    alone = [solve(answers, rows_of(table, slice(row, row + 1))) for row in near]
    for j, answer in enumerate(answers):
        assert len(whole[j]) == n
        assert same_bits(whole[j], few[j][which]).all(), answer
        assert same_bits(whole[j][1:], shifted[j]).all(), answer
        assert same_bits(whole[j][near], np.concatenate([answered[j] for answered in alone])).all(), answer
    refused = np.isnan(whole[0]).mean()
    print(f"blocks, {n} rows: {100 * refused:.1f} % refused")
    assert refused <= 0.2


# One bad row spoils nothing but itself.

HEADINGS = (
    "shape", "thickness [mm]", "inner radius [mm]", "outer radius [mm]", "conductivity [W/(m·K)]", "generation [W/m³]", "power [W]",
    "left held [°C]", "left film [W/(m²·K)]", "left fluid [°C]", "right held [°C]", "right film [W/(m²·K)]", "right fluid [°C]",
    "limit [°C]", "probe [mm]", "left emissivity", "note by hand",
)  # fmt: skip
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
    if draw.random() < 0.5:
        row |= {"limit [°C]": draw.uniform(500.0, 900.0)}
    return row


def number_heading(draw: np.random.Generator) -> str:
    return str(draw.choice([h for h in HEADINGS if h not in ("shape", "note by hand", "left emissivity")]))


Slip = Row | Callable[[np.random.Generator], Row]
# What a slip of the hand leaves in a row, and the error its cells must show.
SLIPS: dict[str, tuple[CellError, Slip]] = {
    "no conductivity": (CellError.NA, lambda draw: {"conductivity [W/(m·K)]": draw.choice(np.array([None, "", "  "], object))}),
    "no size": (CellError.NA, {"thickness [mm]": None}),
    "no shape": (CellError.NA, {"shape": None}),
    "unknown shape": (CellError.VALUE, lambda draw: {"shape": "".join(draw.choice(list("qxyz=+'\n"), draw.integers(1, 400)))}),
    "number as shape": (CellError.VALUE, lambda draw: {"shape": float(draw.integers(0, 9))}),
    "bar": (CellError.NA, {"shape": "bar"}),
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
                                                                  "outer radius [mm]": 9.0}),
    "two sources": (CellError.VALUE, {"power [W]": 5.0}),
    "held in a fluid": (CellError.VALUE, {"right film [W/(m²·K)]": 8.0, "right fluid [°C]": 20.0}),
    "no fluid": (CellError.NA, {"right held [°C]": None, "right film [W/(m²·K)]": 9.0}),
    "no film": (CellError.NA, {"right held [°C]": None, "right fluid [°C]": 9.0}),
    "nowhere to go": (CellError.NUM, {"right held [°C]": None, "left film [W/(m²·K)]": None, "left fluid [°C]": None}),
    "not there yet": (CellError.NA, {"left emissivity": 0.9}),
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
    assert (clean[-1] == "ok").all()
    assert (found[-1][keep] == "ok").all()
    (outcome,) = solve_calls("INGLE.ASK", [((tuple(ASKED),), (HEADINGS,), cells)])
    for place, name in bad.items():
        error, _ = SLIPS[name]
        for answer, column in zip(ASKED[:-2], found, strict=False):
            assert np.isnan(column[place]), (name, answer, column[place], table[place])
        assert found[-2][place] == "no answer"
        why = found[-1][place]
        assert 20 < len(why) <= 255, (name, why)
        assert re.search(rf"\brow {place + 1}\b", why, re.IGNORECASE), (name, why)
        assert why.isprintable(), (name, why)
        assert list(outcome.grid[place][:-2]) == [error] * (len(ASKED) - 2), (name, why)
        assert outcome.grid[place][-1] == outcome.reasons[place] == why


def test_a_bad_row_has_its_error_and_leaves_its_neighbours_alone() -> None:
    over_tables("rows beside bad ones", spoils, 12)
