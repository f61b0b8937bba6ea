"""What must hold of every row, over tables drawn across the whole legal range of the headings.

Each test prints how many of its rows had no answer (`pytest -s`) and fails where that is more than a fifth of a table.
"""

from __future__ import annotations

import numpy as np
import pytest
from drawn_tables import SHAPES, Table, Tally, all_answers, as_built, cases, mixed, over_tables, report, rows_of, same_bits, solve
from ingle.steady import BLOCK

HEAT_UNITS = {"wall": "W/m²", "cylinder": "W/m", "sphere": "W"}
EPS = float(np.finfo(float).eps)
SWAP = {"left": "right", "right": "left"}

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


def layers_close(draw: np.random.Generator, tally: Tally) -> None:
    """Layers, joints, radiation, resistances, conductivities that change: each face's heat is also the one its own law makes."""
    n = 160
    table = as_built(draw, n)
    shape = table["shape"]
    heats = [f"{name} [{unit}]" for name in ("left heat out", "right heat out", "heat made") for unit in HEAT_UNITS.values()]
    balance, *temperatures = solve(["balance [%]", "left face [K]", "right face [K]", "peak [K]", *heats], table)
    good = ~np.isnan(balance)
    tally.count(~good)
    faces, peak = dict(zip(SWAP, temperatures, strict=False)), temperatures[2]
    left, right, made = (np.select([shape == word for word in HEAT_UNITS], temperatures[i : i + 3]) for i in (3, 6, 9))
    solid = (shape != "wall") & np.isnan(table["inner radius [m]"])
    out = {"left": np.where(solid, 0.0, left), "right": right}
    outside = sum((np.nan_to_num(table[f"thickness{number} [m]"]) for number in ("", " 2", " 3")), np.zeros(n))
    outside += np.nan_to_num(table["inner radius [m]"])
    flux = {}
    for side, r in (("left", np.nan_to_num(table["inner radius [m]"])), ("right", outside)):
        area = np.select([shape == word for word in HEAT_UNITS], [np.ones(n), 2 * np.pi * r, 4 * np.pi * r * r])
        held, film, fluid, put_in, emissivity, surroundings, R = (
            table[f"{side} {name}"] for name in ("held [°C]", "film [W/(m²·K)]", "fluid [°C]", "flux in [W/m²]", "emissivity",
                                                 "surroundings [°C]", "resistance [m²·K/W]"))  # fmt: skip
        flux[side] = np.nan_to_num(put_in) * area
        through = out[side] / np.where(area > 0.0, area, 1.0)
        surface = faces[side] - np.nan_to_num(R) * through
        hot = np.where(np.isnan(surroundings), fluid, surroundings) + 273.15
        es = np.nan_to_num(emissivity) * 5.670374419e-8  # CODATA 2018
        film = np.nan_to_num(film)
        by_law = film * np.nan_to_num(surface - fluid - 273.15) + es * np.nan_to_num(surface**4 - hot**4) - np.nan_to_num(put_in)
        # What a degree's own digits make of it, here and where the face lies behind a resistance.
        hottest = np.fmax(peak, np.nan_to_num(hot)) + np.nan_to_num(R) * np.abs(through)
        digits = (film + 4 * es * np.fmax(surface, hot) ** 3) * 8 * EPS * hottest
        lawful = good & np.isnan(held) & ~(solid & (side == "left"))
        passing = np.abs(made) / np.where(area > 0.0, area, 1.0) + np.abs(through) + np.abs(np.nan_to_num(put_in))
        off = lawful & (np.abs(by_law - through) > 1e-10 * passing + 4 * digits)
        assert not off.any(), (
            f"{side} law: {by_law[off][0]!r} for {through[off][0]!r} of {report(table, int(np.flatnonzero(off)[0]))}"
        )
        off = good & ~np.isnan(held) & (np.abs(surface - held - 273.15) > 1e-12 * (peak + np.nan_to_num(R) * np.abs(through)))
        assert not off.any(), f"{side} held: {report(table, int(np.flatnonzero(off)[0]))}"
    largest = np.max(np.abs([out["left"], out["right"], made, *flux.values()]), axis=0)
    gap = np.abs(out["left"] + out["right"] - made)
    off = np.flatnonzero(good & ~((gap <= 1e-12 * largest) & (balance <= 1e-8)))
    assert not len(off), f"{len(off)} rows; gap {gap[off[0]]} of {largest[off[0]]}, {balance[off[0]]} %: {report(table, int(off[0]))}"
    tally.worst("gap of the answers", np.max(gap[good] / np.where(largest[good] > 0.0, largest[good], 1.0)))
    tally.worst("`balance`", np.max(balance[good]) / 100.0)


def test_heat_balance_closes_through_layers_joints_and_radiation() -> None:
    over_tables("heat balance of layers", layers_close, 6)


# A wall seen from behind.


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
    assert asked >= 37

    def rows(draw: np.random.Generator, tally: Tally) -> None:
        n = 110
        table = mixed(draw, n)
        whole = solve(answers, table)
        tally.count(np.isnan(whole[answers.index("peak [°C]")]))
        alone = [solve(answers, rows_of(table, slice(row, row + 1))) for row in range(n)]
        for j, answer in enumerate(answers):
            column = np.concatenate([answered[j] for answered in alone])
            if answer == "why":
                column = np.array([text.replace("this row", f"row {i + 1} of the values").replace("This row", f"Row {i + 1} of the "
                                   "values") for i, text in enumerate(column)], dtype=object)  # fmt: skip
            off = np.flatnonzero(~same_bits(whole[j], column))
            assert not len(off), f"{answer}: {whole[j][off[0]]!r}, alone {column[off[0]]!r}; {report(table, int(off[0]))}"
            given = whole[j] != None if whole[j].dtype == object else ~np.isnan(whole[j])  # noqa: E711
            tally.notes[answer] = tally.notes.get(answer, 0.0) + float(np.sum(given))

    tallies: list[Tally] = []

    def kept(draw: np.random.Generator, tally: Tally) -> None:
        tallies[:] = [tally]
        rows(draw, tally)

    over_tables("rows alone, and answers given", kept, 2)
    assert len(tallies[0].notes) == asked
    none = {answer for answer, count in tallies[0].notes.items() if not count}
    assert all(answer.startswith(OF_CURRENTS) for answer in none), "an answer that no drawn row has is not tested"


# Tables of walls, cylinders and spheres with generations; those with currents and bars are drawn elsewhere.
OF_CURRENTS = ("voltage", "resistance", "side heat out", "allowable current", "allowable voltage")
POOL = 30  # rows that differ in what they fill are solved apart


@pytest.mark.parametrize("n", [BLOCK - 1, BLOCK, BLOCK + 1, pytest.param(20_000, marks=pytest.mark.long)])
def test_block_boundaries_do_not_show(n: int) -> None:
    """The same rows in a longer table, shifted in a table, and alone where blocks meet, have the same bits."""
    draw = np.random.default_rng(n)
    pool = mixed(draw, POOL)
    which = draw.integers(0, POOL, n)
    table = rows_of(pool, which)
    answers = [answer for answer in all_answers() if answer != "why"]
    whole, few = solve(answers, table), solve(answers, pool)
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
