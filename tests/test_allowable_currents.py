"""Allowable currents, voltages and current densities: put back they give the limit, and they never lie beyond runaway.

Bodies are drawn or chosen here; the currents that run away are first eigenvalues with roots of their own.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from drawn_currents import Row, draw_bar, draw_body, table_of
from ingle_addin import ask
from scipy.optimize import brentq
from scipy.special import j0, j1

RHO, SLOPE, K = "resistivity [Ω·m]", "resistivity slope [1/K]", "conductivity [W/(m·K)]"
UNITS = {"current": "A", "voltage": "V", "current density": "A/m²", "generation": "W/m³"}
GONE = ("The source in this row runs away: it grows with temperature faster than the body can shed it, so there is no steady state; "
        "lower the source or cool the body more")  # fmt: skip
LIMITS = ("limit", "left limit", "right limit", "limit 1")
READ = {"limit": "peak", "left limit": "left face", "right limit": "right face", "limit 1": "peak 1"}


def answers(names: str, case: dict[str, Any]) -> list[Any]:
    return [column[0] for column in ask(names, list(case), *case.values())]


def source_of(row: Row) -> str:
    """The heading of the row's source in layer 1."""
    return next(heading for heading in row if heading.split(" [")[0] in UNITS)


def scaled(row: Row, value: float) -> Row:
    """The row with its source of that value; a source of the same kind in layer 2 scales along."""
    heading = source_of(row)
    changed = {**row, heading: value}
    second = heading.replace(" [", " 2 [")
    if second in row:
        changed[second] = row[second] * value / row[heading]
    return changed


def limited_rows(seed: int, n: int) -> list[tuple[Row, float]]:
    """Rows with limits and their coldest sink; a generation in a table is not one value, and has no allowable."""
    draw = np.random.default_rng([47, seed])
    rows: list[tuple[Row, float]] = []
    while len(rows) < n:
        drawn = draw_bar(draw) if draw.random() < 0.35 else draw_body(draw)
        row, T = drawn.row, drawn.bulk.coldest
        if any(isinstance(row.get(heading), str) for heading in ("generation [W/m³]", "generation 2 [W/m³]")):
            continue
        solid = row["shape"] in ("cylinder", "sphere") and "inner radius [m]" not in row
        for name in LIMITS:
            free = "left" not in name or not (solid or "left held [°C]" in row)
            free &= "right" not in name or "right held [°C]" not in row
            if free and (name == "limit" or draw.random() < 0.3):
                row[f"{name} [°C]"] = T + 10.0 ** float(draw.uniform(1.0, 2.3))
        rows.append((row, T))
    return rows


@pytest.mark.parametrize(("seed", "n"), [(0, 14), *(pytest.param(seed, 40, marks=pytest.mark.long) for seed in range(1, 25))])
def test_an_allowable_source_put_back_gives_the_limit(seed: int, n: int) -> None:
    """The limit that governs is met to 1e-9 of the rise, and no other is passed; where it is runaway, the state is gone beyond."""
    given = limited_rows(seed, n)
    rows = [row for row, _ in given]
    table = table_of(rows)
    names = [f"allowable {source} [{unit}]" for source, unit in UNITS.items()]
    *allowed, governs, used, why = ask([*names, "limited by", "utilisation [%]", "why"], list(table), *table.values())
    put_back, refused, beyond = [], 0, []
    for i, (row, T) in enumerate(given):
        heading = source_of(row)
        source = heading.split(" [")[0]
        value = float(allowed[list(UNITS).index(source)][i])
        if math.isnan(value) or value == 0.0:
            refused += 1
            continue
        assert used[i] == pytest.approx(100.0 * row[heading] / value, rel=1e-12), row
        if governs[i] == "runaway":
            beyond.append((scaled(row, 0.999 * value), scaled(row, 1.002 * value)))
        else:
            put_back.append((scaled(row, value), T, governs[i]))
    print(f"seed {seed}: {refused} of {len(rows)} rows have no allowable source, {len(beyond)} run away first")
    assert refused <= 0.2 * len(rows), [words for words in why if words != "ok"]
    table = table_of([row for row, _, _ in put_back])
    temperatures = [f"{name} [°C]" for name in READ.values()]
    *read, verdict, room = ask([*temperatures, "verdict", "headroom [K]"], list(table), *table.values())
    found = dict(zip(READ, read, strict=True))
    for i, (row, T, by) in enumerate(put_back):
        limit = row[f"{by} [°C]"]
        within = 1e-9 * max(float(found["limit"][i]) - T, abs(limit - T)) + 1e-12
        assert abs(float(found[by][i]) - limit) <= within, (by, found[by][i], row)
        assert abs(room[i]) <= within, row
        assert verdict[i] in ("ok", "caution"), row
        for name in LIMITS:
            if f"{name} [°C]" in row:
                assert float(found[name][i]) <= row[f"{name} [°C]"] + within, (name, row)
    for below, above in beyond:
        assert answers("verdict", below)[0] in ("ok", "caution"), below
        assert answers("verdict", above)[0] == "runaway", above


FACES = {"both film [W/(m²·K)]": 80.0, "both fluid [°C]": 20.0}
EVEN: dict[str, dict[str, Any]] = {
    "conductor in a wall": {"shape": "wall", "thickness [m]": 0.02, "width [m]": 0.1, "length [m]": 0.5, K: 5.0, RHO: 1e-5, **FACES},
    "winding in a cylinder": {"shape": "cylinder", "radius [m]": 0.02, "length [m]": 0.5, K: 5.0, RHO: 1e-8, "turns": 90.0, **FACES},
    "bar": {"shape": "bar", "length [m]": 0.5, "diameter [m]": 0.01, K: 60.0, RHO: 1e-7, **FACES, "side film [W/(m²·K)]": 6.0,
            "side fluid [°C]": 20.0, "left contact [Ω]": 1e-5},
}  # fmt: skip


@pytest.mark.parametrize("case", EVEN.values(), ids=EVEN)
def test_the_rise_of_a_constant_resistivity_goes_as_the_square(case: dict[str, Any]) -> None:
    """Also across the ways to give it: the allowable voltage is the allowable current's."""
    row = {**case, "current [A]": 10.0}
    peak, voltage = answers("peak [°C]; voltage [V]", row)
    for limit in (21.0, 50.0, 300.0):
        ratio = math.sqrt((limit - 20.0) / (peak - 20.0))
        (amps,) = answers("allowable current [A]", {**row, "limit [°C]": limit})
        assert amps == pytest.approx(10.0 * ratio, rel=1e-11)
        by_volts = {**case, "voltage [V]": None, "limit [°C]": limit}
        assert answers("allowable voltage [V]", by_volts)[0] == pytest.approx(voltage * ratio, rel=1e-11)
        # A blank current in the only source column is asked for as well.
        assert answers("allowable current [A]", {**case, "current [A]": None, "limit [°C]": limit})[0] == pytest.approx(
            amps, rel=1e-12
        )


# The first roots of transient conduction's textbooks: ζ tan ζ, and ζ J₁/J₀, are Bi.
BIOT: dict[str, tuple[Callable[[float], float], float]] = {
    "wall": (lambda z: z * math.tan(z), math.pi / 2.0),
    "cylinder": (lambda z: z * j1(z) / j0(z), 2.404825557695773),  # the first zero of J₀, Abramowitz & Stegun table 9.5
}


def runaway_of(names: str, case: dict[str, Any], slope: float, reference: float) -> float:
    """What the allowable tends to as its limit rises: its square is a series in u = 1/[1 + slope (limit − reference)]."""
    limits = np.array([2500.0, 5000.0, 10_000.0])
    row = {**case, "limit [°C]": limits}
    allowed, by = ask(f"{names}; limited by", list(row), *row.values())
    assert (by == "limit").all()
    u = 1.0 / (1.0 + slope * (limits - reference))
    return math.sqrt(np.polynomial.polynomial.polyfit(u, allowed**2, 2)[0])


@pytest.mark.parametrize("shape", BIOT)
@pytest.mark.parametrize("biot", [0.05, 1.0, 40.0])
def test_a_winding_runs_away_at_its_first_eigenvalue(shape: str, biot: float) -> None:
    """J² = ζ² k/(a² c ρ₀ α), c the AC ratio times the fill factor: no fluid temperature or reference changes it."""
    a, k, rho, slope, fill, ac, turns, length, width = 0.02, 1.2, 1.72e-8, 0.05, 0.55, 1.15, 120.0, 0.3, 0.08
    law, most = BIOT[shape]
    zeta = brentq(lambda z: law(z) - biot, 1e-9, most - 1e-12, xtol=1e-15)
    J = zeta / a * math.sqrt(k / (ac * fill * rho * slope))
    section = 2 * a * width if shape == "wall" else a * length
    size = {"thickness [m]": 2 * a, "width [m]": width} if shape == "wall" else {"radius [m]": a}
    case: dict[str, Any] = {
        "shape": shape, **size, "length [m]": length, K: k, RHO: rho, SLOPE: slope, "resistivity reference [°C]": 35.0,
        "turns": turns, "fill factor": fill, "ac ratio": ac, "both film [W/(m²·K)]": biot * k / a, "both fluid [°C]": 28.0,
    }  # fmt: skip
    critical = {"current": J * fill * section / turns, "current density": J}
    for source, exact in critical.items():
        heading = f"{source} [{UNITS[source]}]"
        row = {**case, heading: 0.3 * exact}
        assert runaway_of(f"allowable {heading}", row, slope, 35.0) == pytest.approx(exact, rel=1e-6)
        assert answers("verdict", row) == ["no limit"]
        assert answers("verdict; why", {**row, heading: 1.00001 * exact}) == ["runaway", GONE]
        assert answers("verdict; why", {**row, heading: 12.0 * exact}) == ["runaway", GONE]


@pytest.mark.parametrize("cooled", [True, False])
def test_a_bar_runs_away_at_its_first_eigenvalue(cooled: bool) -> None:
    """Ends held: c ρ₀ J² α = k π²/L² + hP/A."""
    L, k, rho, slope, D, ac, h = 0.7, 45.0, 3e-7, 0.05, 0.008, 1.1, 12.0 if cooled else 0.0
    J = math.sqrt((k * math.pi**2 / L**2 + h * 4.0 / D) / (ac * rho * slope))
    case: dict[str, Any] = {
        "shape": "bar", "length [m]": L, "diameter [m]": D, K: k, RHO: rho, SLOPE: slope, "ac ratio": ac, "left held [°C]": 25.0,
        "right held [°C]": 32.0, "current [A]": 0.4 * J * math.pi * D * D / 4.0,
    }  # fmt: skip
    if cooled:
        case |= {"side film [W/(m²·K)]": h, "side fluid [°C]": 21.0}
    exact = J * math.pi * D * D / 4.0
    assert runaway_of("allowable current [A]", case, slope, 20.0) == pytest.approx(exact, rel=1e-6)
    assert answers("verdict; why", {**case, "current [A]": 1.00001 * exact}) == ["runaway", GONE]
    assert answers("verdict", {**case, "current [A]": 3.0 * exact}) == ["runaway"]


@pytest.mark.parametrize("slope", [-0.004, -0.02])
def test_a_falling_resistivity_at_a_voltage_turns_back(slope: float) -> None:
    """A plate of one temperature, E² = 2hρ₀/d · θ (1 + αθ), greatest at θ = −1/(2α): there the state from cold ends."""
    d, h, rho, length, width, fluid = 0.002, 10.0, 1e-5, 0.1, 0.05, 20.0
    exact = length * math.sqrt(2.0 * h * rho / d / (4.0 * -slope))
    turn = fluid - 0.5 / slope
    case: dict[str, Any] = {
        "shape": "wall", "thickness [m]": d, "length [m]": length, "width [m]": width, K: 1e6, RHO: rho, SLOPE: slope,
        "voltage [V]": 0.5 * exact, "both film [W/(m²·K)]": h, "both fluid [°C]": fluid,
    }  # fmt: skip
    names = "allowable voltage [V]; limited by; verdict"
    allowed, by, verdict = answers(names, {**case, "limit [°C]": turn + 30.0})
    assert (by, verdict) == ("runaway", "ok")
    assert allowed == pytest.approx(exact, rel=1e-6)
    limit = fluid + 0.6 * (turn - fluid)
    theta = limit - fluid
    allowed, by, verdict = answers(names, {**case, "limit [°C]": limit})
    assert (by, verdict) == ("limit", "ok")
    # Within hd/(8k) ≈ 2e-9 of the rise the plate is of one temperature.
    assert allowed == pytest.approx(length * math.sqrt(2.0 * h * rho / d * theta * (1.0 + slope * theta)), rel=1e-8)
    beyond = {**case, "voltage [V]": 1.0001 * exact, "limit [°C]": turn + 30.0}
    assert answers("verdict; limited by; why", beyond) == ["runaway", "runaway", GONE]
    assert answers("utilisation [%]", beyond)[0] == pytest.approx(100.01, abs=1e-3)
    # The same current given in amperes makes less heat as the plate warms: it never runs away.
    amps = {**case, "current [A]": 1.0, "limit [°C]": fluid + 1.6 * (turn - fluid)}
    del amps["voltage [V]"]
    assert answers("limited by; verdict", amps) == ["limit", "ok"]


def test_faces_held_alike_do_not_hide_the_rise_inside() -> None:
    """A source linear in temperature between equal faces, T = T_s + (sec m − 1)/β: the limit inverts it."""
    for shape, size in (("wall", {"thickness [m]": 0.04}), ("bar", {"length [m]": 0.04, "section [m²]": 1e-4})):
        for slope in (1e-4, 0.004, 0.1):
            case = {
                "shape": shape, **size, K: 1.6, "generation [W/m³]": 1e3, "generation slope [1/K]": slope,
                "generation reference [°C]": 30.0, "both held [°C]": 30.0, "limit [°C]": 100.0,
            }  # fmt: skip
            m = math.acos(1.0 / (1.0 + slope * 70.0))
            q = m * m * 1.6 / (slope * 0.02**2)
            assert answers("allowable generation [W/m³]", case)[0] == pytest.approx(q, rel=1e-10)
