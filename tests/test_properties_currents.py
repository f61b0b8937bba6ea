"""What must hold of every row with a current, a winding, a bar or a source in temperature, over drawn tables.

Each test prints how many of its rows had no answer (`pytest -s`) and fails where that is more than a fifth: sources are drawn
up to rises of thousands of kelvin, and some of those that grow with temperature run away.
"""

from __future__ import annotations

import numpy as np
import pytest
from drawn_tables import SHAPES, Table, Tally, over_tables, report, rows_of, same_bits, solve

EPS = float(np.finfo(float).eps)
KINDS = np.array(["conductor", "winding", "bar", "generation"], dtype=object)
BLOCKS = 2048  # rows that are collocated together
SWAP = {"left": "right", "right": "left"}
ANSWERS = [
    "peak [°C]", "left face [°C]", "right face [°C]", "mean [°C]", "left heat out [W]", "right heat out [W]", "side heat out [W]",
    "heat made [W]", "voltage [V]", "resistance [Ω]", "allowable current [A]", "allowable voltage [V]", "allowable generation [W/m³]",
    "allowable current density [A/m²]", "utilisation [%]", "headroom [K]", "left share [%]", "balance [%]", "peak place [m]",
]  # fmt: skip


def only(where: np.ndarray, values: np.ndarray | float) -> np.ndarray:
    """The values there, blanks elsewhere."""
    return np.where(where, values, np.nan)


def logs(draw: np.random.Generator, n: int, low: float, high: float) -> np.ndarray:
    return 10.0 ** draw.uniform(low, high, n)


def drawn(draw: np.random.Generator, n: int, kinds: np.ndarray = KINDS, shapes: np.ndarray = SHAPES, most: float = 3.3) -> Table:
    """Complete rows, with rises up to 10^most kelvin. Faces are held, filmed or insulated, and at least one lets heat out."""
    kind = draw.choice(kinds, n)
    bar = kind == "bar"
    shape = np.where(bar, "bar", draw.choice(shapes, n)).astype(object)
    electric = kind != "generation"
    shape = np.where(electric & (shape == "sphere"), "wall", shape).astype(object)
    wall, round_body = shape == "wall", (shape == "cylinder") | (shape == "sphere")
    d, length = logs(draw, n, -3.0, -0.7), logs(draw, n, -1.0, 0.5)
    k = logs(draw, n, -0.5, 2.5)
    solid = round_body & (draw.random(n) < 0.5)
    across = np.where(bar, length, d)
    h = k / across * logs(draw, n, -1.5, 2.0)
    T, slope = draw.uniform(0.0, 90.0, n), draw.choice([0.0, 1e-4, 0.004, -2e-4], n)
    D = logs(draw, n, -2.7, -1.0)
    cooled = bar & (draw.random(n) < 0.7)
    side = np.minimum(logs(draw, n, 0.0, 2.5), 100.0 * k * D / length**2)
    rise = np.minimum(logs(draw, n, -3.0, most), 0.5 / np.maximum(slope, 1e-9))
    q = rise / (across * across / (2.0 * k) + across / h)
    rho, ac, fill = logs(draw, n, -8.0, -4.0), 1.0 + 0.3 * draw.integers(0, 2, n), draw.uniform(0.4, 1.0, n)
    wound = kind == "winding"
    turns, width = draw.integers(1, 500, n).astype(float), logs(draw, n, -2.0, 0.0)
    c = ac * np.where(wound, fill, 1.0)
    J = np.sqrt(q / (c * rho)) * draw.choice([1.0, 1.0, -1.0], n)
    section = np.where(bar, np.pi * D * D / 4.0, d * np.where(wound & ~wall, length, width))
    I = J * np.where(wound, fill * section / turns, np.where(wall | bar, section, np.pi * d * d))  # noqa: E741 - as in print
    V = ac * np.where(wound, turns, 1.0) * rho * J * np.where(wound & ~wall, np.pi * d, length)
    way = np.where(electric, draw.choice(np.array(["current", "voltage", "density"], dtype=object), n), "none")
    left = draw.integers(0, 3, n)  # held, film, insulated
    left = np.where(solid, 2, left)
    right = np.where(left == 2, draw.integers(0, 2, n), draw.integers(0, 3, n))
    table: Table = {
        "shape": shape,
        "thickness [m]": only(~bar, d),
        "diameter [m]": only(bar, D),
        "inner radius [m]": only(round_body & ~solid, d * logs(draw, n, -0.5, 1.0)),
        "length [m]": only(shape != "sphere", length),
        "width [m]": only(wall, width),
        "area [m²]": only(wall, length * width),
        "conductivity [W/(m·K)]": k,
        "conductivity slope [1/K]": only(draw.random(n) < 0.3, draw.choice([2e-4, -1e-4], n)),
        "generation [W/m³]": only(~electric, q),
        "generation slope [1/K]": only(~electric, slope),
        "generation reference [°C]": only(~electric & (draw.random(n) < 0.5), T),
        "current [A]": only(way == "current", I),
        "voltage [V]": only(way == "voltage", V),
        "current density [A/m²]": only(way == "density", J),
        "resistivity [Ω·m]": only(electric, rho),
        "resistivity slope [1/K]": only(electric, slope),
        "ac ratio": only(electric & (ac > 1.0), ac),
        "turns": only(wound, turns),
        "fill factor": only(wound, fill),
        "side film [W/(m²·K)]": only(cooled, side),
        "side fluid [°C]": only(cooled, T),
        "side emissivity": only(cooled & (draw.random(n) < 0.4), 0.7),
        "left contact [Ω]": only(bar & electric & (draw.random(n) < 0.4), 0.01 * rho * length / section),
        "limit [°C]": T + rise * draw.uniform(0.3, 3.0, n),
    }
    for name, face in (("left", left), ("right", right)):
        sink = T + draw.uniform(0.0, 0.2, n) * np.minimum(rise, 50.0)
        table[f"{name} held [°C]"] = only(face == 0, sink)
        table[f"{name} film [W/(m²·K)]"] = only(face == 1, h)
        table[f"{name} fluid [°C]"] = only(face == 1, sink)
    return table


def across_of(table: Table) -> np.ndarray:
    return np.where(table["shape"] == "bar", table["length [m]"], table["thickness [m]"])


def conducted(table: Table) -> np.ndarray:
    """Watts that the last digits of a temperature in kelvin drive through the body, its films and its sides."""
    d, D = across_of(table), np.nan_to_num(table["diameter [m]"])
    r = np.nan_to_num(table["inner radius [m]"]) + d
    area = np.nan_to_num(table["area [m²]"]) + np.pi / 4.0 * D * D
    area = np.where(table["shape"] == "cylinder", 2.0 * np.pi * r * table["length [m]"], area)
    area = np.where(table["shape"] == "sphere", 4.0 * np.pi * r * r, area)
    films = [np.nan_to_num(table[f"{side} film [W/(m²·K)]"]) for side in SWAP]
    radiated = 10.0 * np.nan_to_num(table["side emissivity"])  # at 100 °C it is 8 W/(m²·K) of a black side
    sides = np.pi * D * d * (np.nan_to_num(table["side film [W/(m²·K)]"]) + radiated)
    return 500.0 * EPS * ((table["conductivity [W/(m·K)]"] / d + np.maximum(*films)) * area + sides)


def closes(draw: np.random.Generator, tally: Tally) -> None:
    table = drawn(draw, 300)
    heats = ["left heat out [W]", "right heat out [W]", "side heat out [W]", "heat made [W]"]
    balance, peak, voltage, resistance, *found = solve(["balance [%]", "peak [°C]", "voltage [V]", "resistance [Ω]", *heats], table)
    refused = np.isnan(peak)
    tally.count(refused)
    good = ~refused
    left, right, side, made = (np.nan_to_num(heat) for heat in found)
    # What an answer has no meaning for: a solid body's inside, the sides of all but bars.
    assert not np.isnan(found[1][good]).any()
    assert not np.isnan(found[3][good]).any()
    assert (np.isnan(found[2][good]) == (table["shape"] != "bar")[good]).all()
    largest = np.max(np.abs([left, right, side, made]), axis=0)
    gap = np.abs(left + right + side - made)
    off = np.flatnonzero(good & ~(gap <= 1e-11 * largest + 8.0 * conducted(table)))
    assert not len(off), f"{len(off)} rows; gap {gap[off[0]]} of {largest[off[0]]}: {report(table, int(off[0]))}"
    passing = good & (largest > 0.0)
    assert (balance[passing] <= 1e-7 + 800.0 * conducted(table)[passing] / largest[passing]).all()
    current = voltage / resistance
    electric = good & ~np.isnan(table["resistivity [Ω·m]"])
    by_current = np.abs(voltage * current - made)
    assert not np.isnan(voltage[electric]).any()
    assert (by_current <= 1e-9 * made)[electric].all(), report(table, int(np.flatnonzero(electric & (by_current > 1e-9 * made))[0]))
    tally.worst("gap over heat", np.max((gap / np.where(largest > 0.0, largest, 1.0))[good]))
    tally.worst("V · I and heat made", np.max((by_current / made)[electric]))


def test_heat_balance_closes() -> None:
    over_tables("heat balance of currents", closes, 2)


@pytest.mark.long
def test_heat_balance_closes_over_many_tables() -> None:
    over_tables("heat balance of currents", closes, 60)


def mirrors(draw: np.random.Generator, tally: Tally) -> None:
    table = drawn(draw, 200, shapes=SHAPES[:1])
    behind = {" ".join(SWAP.get(word, word) for word in heading.split()): column for heading, column in table.items()}
    names = ["peak [°C]", "mean [°C]", "left face [°C]", "right face [°C]", "voltage [V]", "allowable current [A]"]
    turned = [" ".join(SWAP.get(word, word) for word in name.split()) for name in names]
    front, back = solve(names, table), solve(turned, behind)
    refused = np.isnan(front[0])
    tally.count(refused)
    assert (refused == np.isnan(back[0])).all()
    # What each row's temperatures rise at most, sinks and source together; near runaway it is what the source makes of it.
    sinks = np.array([table[f"{side} {word} [°C]"] for side in ("left", "right") for word in ("held", "fluid")])
    rise = np.fmax.reduce([*front[:4], np.fmax.reduce(sinks)]) - np.fmin.reduce([*front[:4], np.fmin.reduce(sinks)])
    for name, here, there in zip(names, front, back, strict=True):
        both = ~np.isnan(here) & ~np.isnan(there)
        assert (np.isnan(here) == np.isnan(there)).all(), name
        slack = 1e-9 * rise + 1e-11 if "°C" in name else 1e-9 * np.abs(here)
        off = np.flatnonzero(both & (np.abs(here - there) > slack))
        assert not len(off), f"{name}: {here[off[0]]!r} and {there[off[0]]!r} of {report(table, int(off[0]))}"
        tally.worst(name, np.max(1e-9 * (np.abs(here - there) / np.maximum(slack, 1e-300))[both], initial=0.0))


def test_walls_and_bars_from_behind_are_the_same() -> None:
    over_tables("mirrored walls and bars", mirrors, 1)


@pytest.mark.long
def test_walls_and_bars_from_behind_are_the_same_over_many_tables() -> None:
    over_tables("mirrored walls and bars", mirrors, 40)


def alone(draw: np.random.Generator, tally: Tally) -> None:
    n = 30
    table = drawn(draw, n)
    whole = solve(ANSWERS, table)
    tally.count(np.isnan(whole[0]))
    rows = [solve(ANSWERS, rows_of(table, slice(row, row + 1))) for row in range(n)]
    for j, name in enumerate(ANSWERS):
        column = np.concatenate([row[j] for row in rows])
        off = np.flatnonzero(~same_bits(whole[j], column))
        assert not len(off), f"{name}: {whole[j][off[0]]!r}, alone {column[off[0]]!r}; {report(table, int(off[0]))}"


def test_a_table_is_its_rows_to_the_last_bit() -> None:
    over_tables("rows of currents alone", alone, 1)


@pytest.mark.long
def test_many_tables_are_their_rows_to_the_last_bit() -> None:
    over_tables("rows of currents alone", alone, 40)


POOL = 24


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("n", [BLOCKS - 1, BLOCKS, BLOCKS + 1, pytest.param(9000, marks=pytest.mark.long)])
def test_block_boundaries_do_not_show(n: int, kind: str) -> None:
    """Rows repeated up to a table's length: most land in groups of less, those of one structure fill the blocks."""
    draw = np.random.default_rng([n, len(kind)])
    pool = drawn(draw, POOL, np.array([kind], dtype=object), SHAPES[:1], 1.0)
    # One structure: everything that only some of the rows fill is taken from the first.
    first = rows_of(pool, np.zeros(POOL, dtype=np.intp))
    for heading, column in pool.items():
        mixed = column.dtype != object and np.isnan(column).any()
        pool[heading] = first[heading] if mixed else column
    which = draw.integers(0, POOL, n)
    names = [*ANSWERS[:10], *ANSWERS[-3:]]
    if kind != "conductor" or n > BLOCKS + 1:  # of conductors it takes many steps; the rows alone have it too
        names += ["utilisation [%]", "headroom [K]", "allowable current [A]"]
    few, many = solve(names, pool), solve(names, rows_of(pool, which))
    refused = np.isnan(few[0]).mean()
    print(f"blocks of {kind}, {n} rows: {100 * refused:.1f} % refused")
    assert refused <= 0.2
    for name, one, table in zip(names, few, many, strict=True):
        assert len(table) == n
        assert same_bits(table, one[which]).all(), name
