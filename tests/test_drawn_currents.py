"""Rows of every kind of current, winding, bar and source in temperature, together in one table, against Gauss collocation."""

from __future__ import annotations

import math
from collections import Counter

import numpy as np
import pytest
from drawn_currents import Drawn, M, draw_bar, draw_body, table_of
from gauss_bodies import Found, solve_bulk
from ingle_addin import ask

MEASURE = (1.0, 2.0 * math.pi, 4.0 * math.pi)
WITHIN = 1e-9  # of the rise, and of the largest heat
UNITS = ("W/m²", "W/m", "W")  # of the heats of a wall, a cylinder, a sphere


def drawn_rows(seed: int, n: int) -> list[Drawn]:
    draw = np.random.default_rng([41, seed])
    return [draw_bar(draw) if draw.random() < 0.35 else draw_body(draw) for _ in range(n)]


def electrical(case: Drawn, found: Found) -> tuple[float, float]:
    """Voltage and resistance, as the definitions have them: the AC resistance, times the current the voltage."""
    assert case.conductor is not None
    layer, row = case.bulk.layers[case.conductor], case.row
    a, F, ac = found.amplitude[case.conductor], found.F[case.conductor], case.ac
    if row["shape"] == "bar":
        return ac * a * F, ac * F / case.section
    wall = row["shape"] == "wall"
    if "turns" not in row:
        length = row["length [m]"]
        return ac * a * length, ac * length / (F * (row["width [m]"] if wall else 2.0 * math.pi))
    turn = row["length [m]"] if wall else 2.0 * math.pi
    mean_field = a * F / layer.d  # ∫ρJ over the winding's thickness, times r in a cylinder
    voltage = ac * case.turns * turn * mean_field
    current = a * case.fill * layer.d * case.section / case.turns
    return voltage, voltage / current


def compared(cases: list[Drawn]) -> tuple[Counter[str], float]:
    """Every answer of every row; how many of each kind, and the largest gap over what is allowed."""
    names = ["peak [°C]", "left face [°C]", "right face [°C]", "mean [°C]", "mean 1 [°C]", "voltage [V]", "resistance [Ω]", "why"]
    names += [f"{name} [{unit}]" for name in ("left heat out", "right heat out", "heat made", "side heat out") for unit in UNITS]
    names += ["balance [%]", "verdict"]
    table = table_of([case.row for case in cases])
    answers = dict(zip(names, ask(names, list(table), *table.values()), strict=True))
    kinds: Counter[str] = Counter()
    worst = 0.0
    for i, case in enumerate(cases):
        got = {name: column[i] for name, column in answers.items()}
        story = f"row {i}, {case.row}: {got['why']}"
        found = solve_bulk(case.bulk)
        if got["verdict"] == "runaway":
            assert found is None, story
            kinds["none"] += 1
            continue
        assert got["verdict"] in ("no limit", "caution"), story
        assert found is not None, story
        m, shape = case.bulk.m, case.row["shape"]
        rise = max(np.max(np.abs(found.T - case.bulk.coldest)), found.peak - case.bulk.coldest)
        slack = WITHIN * rise + 1e-12
        volumes = _volumes(case)
        want = {
            "peak [°C]": (found.peak, slack),
            "right face [°C]": (found.right, slack),
            "mean 1 [°C]": (found.means[0], slack),
            "mean [°C]": (float(np.dot(found.means, volumes) / sum(volumes)), slack),
        }
        if not (m and not case.bulk.a):
            want["left face [°C]"] = (found.left, slack)
        unit = "W" if shape == "bar" else UNITS[m]
        size = case.section if shape == "bar" else MEASURE[m]
        heats = {"right heat out": found.heat_right, "heat made": found.made}
        if "left face [°C]" in want:
            heats["left heat out"] = found.heat_left
        if shape == "bar":
            heats["side heat out"] = found.side
        largest = max(abs(x) for x in heats.values())
        # A heat is known to what the temperatures' own last digits drive.
        noise = 1e-12 * max(float(case.bulk.layers[0].k(np.array([found.peak]))[0][0]), 0.0) / case.bulk.layers[0].d
        place = max(case.bulk.a, case.bulk.layers[0].d) ** m
        for name, heat in heats.items():
            want[f"{name} [{unit}]"] = (size * heat, size * (WITHIN * largest + noise * place))
        if case.conductor is not None:
            voltage, resistance = electrical(case, found)
            want["voltage [V]"] = (case.sign * voltage, WITHIN * voltage)
            want["resistance [Ω]"] = (resistance, WITHIN * resistance)
        for name, (value, allowed) in want.items():
            gap = abs(float(got[name]) - value) / allowed
            assert gap <= 1.0, f"{name}: {got[name]!r} for {value!r}, {gap:.3g} times what is allowed; {story}"
            worst = max(worst, gap)
        assert got["balance [%]"] <= 1e-8, story
        kinds[case.kind] += 1
    return kinds, worst


def _volumes(case: Drawn) -> list[float]:
    m, place, found = case.bulk.m, case.bulk.a, []
    for layer in case.bulk.layers:
        found.append(((place + layer.d) ** (m + 1) - place ** (m + 1)) / (m + 1))
        place += layer.d
    return found


@pytest.mark.parametrize(("seed", "n"), [(0, 40), *(pytest.param(seed, 90, marks=pytest.mark.long) for seed in range(1, 40))])
def test_every_kind_against_gauss_collocation(seed: int, n: int) -> None:
    kinds, worst = compared(drawn_rows(seed, n))
    gone = kinds.pop("none", 0)
    print(
        f"seed {seed}: {gone} rows run away, {kinds.total()} of {len(kinds)} kinds do not; largest gap {worst:.2g} of what is allowed"
    )
    assert gone <= 0.1 * kinds.total()
    shapes = {kind.split(",")[0] for kind in kinds}
    assert shapes == set(M)
    assert len(kinds) >= 15
