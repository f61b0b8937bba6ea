"""Bodies of several layers with joints, radiation and resistances: exact solutions, and what must hold of every one.

Sizes, films and sources are drawn or chosen here; what is compared comes from ``exact_layers``, or from a relation that a
test prints.
"""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest
from drawn_tables import all_answers, mixed, rows_of, solve
from exact import MEASURE
from exact_layers import FACES, SINKS, draw_layers, exact_body
from ingle import Cases, Face, Layer, Shape, Status, profile, steady
from ingle_addin import ask
from ingle_addin.batch import solve_calls

DIGITS = 40
BODIES = [(Shape.WALL, True), (Shape.CYLINDER, True), (Shape.SPHERE, True), (Shape.CYLINDER, False), (Shape.SPHERE, False)]
# Each pair of faces of which one lets heat out, dealt out over the bodies; a solid body has an outside alone.
PAIRS = [(left, right) for left in FACES for right in FACES if left in SINKS or right in SINKS]
ALL = [
    (shape, bored, left, right)
    for i, (shape, bored) in enumerate(BODIES)
    for j, (left, right) in enumerate(PAIRS if bored else [("flux", right) for right in SINKS])
    if not bored or (i + j) % 3 == 0
]
TWICE = 2  # rows of each
PER_LAYER = ("layer_peak", "layer_mean")
WHOLE = ("peak", "peak_place", "left_face", "right_face", "mean", "probe_temperature", "left_heat", "right_heat", "heat_made")
NAMES = (
    *WHOLE, *(f"{name} {i}" for name in PER_LAYER for i in (1, 2, 3)), *(f"joint_{s} {i}" for s in ("left", "right") for i in (1, 2)),
)  # fmt: skip


@pytest.mark.parametrize(("shape", "bored"), BODIES, ids=lambda part: part.name.lower() if isinstance(part, Shape) else str(part))
def test_three_layers_are_exact_to_1e_12_of_the_rise(shape: Shape, bored: bool) -> None:
    """Every kind of face on either side; with radiation also to a few digits of the absolute temperature it works on."""
    worst: dict[str, float] = {}
    rows = solved = 0
    for of_shape, of_bore, left, right in ALL:
        if (of_shape, of_bore) != (shape, bored):
            continue
        cases = draw_layers(1, shape, bored, left, right, TWICE)
        found = steady(cases, (*NAMES, "peak_layer"))
        for row in range(TWICE):
            rows += 1
            with mp.workdps(DIGITS):
                solved += compared(cases, row, {name: found.values[name][row] for name in found.values}, found.status[row], worst)
    print(f"{solved} of {rows} rows; largest error over the rise (temperatures) or the heat: {worst}")
    assert solved >= 0.9 * rows
    assert max(worst.values()) <= 1e-12, worst


def compared(cases: Cases, row: int, got: dict[str, float], status: int, worst: dict[str, float]) -> bool:
    """Whether a row is solved, its slips added to the worst."""
    body, rise, heat = exact_body(cases, row)
    layers = body.layers
    if min(layer.lowest() for layer in layers) < -mp.mpf("273.15"):
        assert status == Status.BELOW_ABSOLUTE_ZERO
        return False
    assert status == Status.SOLVED
    volumes = [layer.b ** (layer.m + 1) - layer.a ** (layer.m + 1) for layer in layers]
    place = mp.mpf(float(cases.probe[row]))  # type: ignore[index]
    at = next(layer for layer in layers if place <= layer.b or layer is layers[-1])
    want = {
        "peak": max(layer.peak() for layer in layers),
        "left_face": layers[0].T(layers[0].a),
        "right_face": layers[-1].T(layers[-1].b),
        "mean": sum(layer.mean() * V for layer, V in zip(layers, volumes, strict=True)) / sum(volumes),
        "probe_temperature": at.T(min(place, at.b)),
        **{f"layer_peak {i}": layer.peak() for i, layer in enumerate(layers, 1)},
        **{f"layer_mean {i}": layer.mean() for i, layer in enumerate(layers, 1)},
        **{f"joint_left {i}": layer.T(layer.b) for i, layer in enumerate(layers[:-1], 1)},
        **{f"joint_right {i}": layer.T(layer.a) for i, layer in enumerate(layers[1:], 1)},
    }
    radiates = any(face.emissivity is not None for face in (cases.left, cases.right))
    for name, T in want.items():
        digits = mp.mpf(4e-16) * abs(T) + (mp.mpf(2e-15) * (T + mp.mpf("273.15")) if radiates else 0)
        worst[name] = max(worst.get(name, 0.0), float(max(abs(mp.mpf(float(got[name])) - T) - digits, mp.mpf(0)) / rise))
    # The place is right where it is as hot as the peak: places may be as hot as each other.
    hottest = layers[int(got["peak_layer"]) - 1]
    short = want["peak"] - hottest.peak() + hottest.short_of_peak(mp.mpf(float(got["peak_place"])))
    worst["peak_place"] = max(worst.get("peak_place", 0.0), float(max(short - mp.mpf(4e-16) * abs(want["peak"]), mp.mpf(0)) / rise))
    measure = mp.mpf(MEASURE[int(cases.shape)])
    out = {"left_heat": -layers[0].Q(layers[0].a) * measure, "right_heat": layers[-1].Q(layers[-1].b) * measure}
    out["heat_made"] = sum(out.values())
    for name, Q in out.items():
        worst[name] = max(worst.get(name, 0.0), float(abs(mp.mpf(float(got[name])) - Q) / (heat * measure)))
    return True


# A limit in each layer.


def two_layer_wall(**more: object) -> dict[str, object]:
    """Insulated left; layer 1 makes q, layer 2 nothing; held right: the joint's sides and both peaks by hand."""
    return {
        "shape": "wall", "thickness 1 [m]": 0.02, "thickness 2 [m]": 0.03, "conductivity 1 [W/(m·K)]": 4.0,
        "conductivity 2 [W/(m·K)]": 1.5, "generation 1 [W/m³]": 1e5, "joint 1 [m²·K/W]": 2e-3, "right held [°C]": 20.0, **more,
    }  # fmt: skip


@pytest.mark.parametrize(
    ("limits", "allowable", "by"),
    [
        # Per W/m³: layer 2 rises L₁L₂/k₂, layer 1 that and L₁R + L₁²/2k₁.
        ({"limit 2 [°C]": 60.0}, 40.0 / (0.02 * 0.03 / 1.5), "limit 2"),
        ({"limit 1 [°C]": 120.0}, 100.0 / (0.02 * 0.03 / 1.5 + 0.02 * 2e-3 + 0.02**2 / 8.0), "limit 1"),
        ({"limit 1 [°C]": 500.0, "limit 2 [°C]": 60.0}, 40.0 / (0.02 * 0.03 / 1.5), "limit 2"),
        ({"limit [°C]": 120.0, "limit 2 [°C]": 400.0}, 100.0 / (0.02 * 0.03 / 1.5 + 0.02 * 2e-3 + 0.02**2 / 8.0), "limit"),
    ],
)
def test_the_limit_of_each_layer(limits: dict[str, float], allowable: float, by: str) -> None:
    case = two_layer_wall(**limits)
    found = ask("allowable generation [W/m³]; limited by; utilisation [%]; headroom [K]", list(case), *case.values())
    assert found[0][0] == pytest.approx(allowable, rel=1e-14)
    assert found[1][0] == by
    assert found[2][0] == pytest.approx(100.0 * 1e5 / allowable, rel=1e-14)
    peaks = {"1": "peak 1 [°C]", "2": "peak 2 [°C]"}
    (at_limit,) = ask(peaks.get(by[-1], "peak [°C]"), list(case), *{**case, "generation 1 [W/m³]": allowable}.values())
    assert at_limit[0] == pytest.approx(limits[f"{by} [°C]"], rel=1e-14)
    (now,) = ask(peaks.get(by[-1], "peak [°C]"), list(case), *case.values())
    assert found[3][0] == pytest.approx(limits[f"{by} [°C]"] - now[0], abs=1e-12)


@pytest.mark.parametrize(("shape", "bored"), BODIES, ids=lambda part: part.name.lower() if isinstance(part, Shape) else str(part))
def test_the_allowable_multiple_put_back_reaches_its_limit(shape: Shape, bored: bool) -> None:
    """All layers' sources scale together; also beside radiation: the limit to 1e-9 of the rise, and no other one passed."""
    n = checked = 0
    by: set[int] = set()
    for of_shape, of_bore, left, right in ALL:
        if (of_shape, of_bore) != (shape, bored):
            continue
        cases = limited(draw_layers(3, shape, bored, left, right, 8))
        found = steady(cases, ("allowable_multiple", "governs", "lacking")).values
        multiple = found["allowable_multiple"]
        good = (found["lacking"] == 0) & (multiple > 0.0)
        n += 8
        checked += int(good.sum())
        by |= set(found["governs"][good].astype(int))
        with_it = scaled(cases, np.where(good, multiple, 0.0))
        there = steady(with_it, ("peak", "layer_peak 1", "layer_peak 2", "layer_peak 3", "headroom", "least_room")).values
        cold = steady(scaled(cases, np.zeros(8)), ("peak",)).values["peak"]
        rise = np.abs(there["peak"] - cold) + np.ptp([there[f"layer_peak {i}"] for i in (1, 2, 3)], axis=0)
        slack = (1e-9 * rise + 1e-13 * (there["peak"] + 273.15))[good]
        assert (np.abs(there["headroom"][good]) <= slack).all(), (left, right)
        assert (there["least_room"][good] >= -slack).all(), (left, right)
        limits = np.array([cases.limit, *cases.layer_limits[1:]])
        rooms = limits - np.array([there["peak"], there["layer_peak 2"], there["layer_peak 3"]])
        named = rooms[np.array([0, 0, 0, 0, 0, 1, 2])[found["governs"][good].astype(int)], np.flatnonzero(good)]
        assert (np.abs(named) <= slack).all(), (left, right)
        above = steady(scaled(cases, np.where(good, multiple * 1.001, 0.0)), ("least_room",)).values["least_room"][good]
        assert (above < 0.0).all(), (left, right)
    print(f"{checked} of {n} rows have an allowable; limits {sorted(map(int, by))}")
    assert checked >= 0.7 * n
    # Anywhere, in layer 2, in layer 3; the outer layers of a solid body are never hotter than those within.
    assert by == ({1, 5, 6} if bored else {1, 5})


def limited(cases: Cases) -> Cases:
    """Sources of both signs made positive, and limits above the body without them."""
    draw = np.random.default_rng(5)
    n = len(cases)
    layers = tuple(Layer(layer.thickness, layer.conductivity, np.abs(layer.generation)) for layer in cases.layers)
    pattern = tuple(layer.generation for layer in layers)
    pattern = (np.where(sum(pattern) == 0.0, 1.0, pattern[0]), *pattern[1:])
    cold = steady(scaled(cases, np.zeros(n)), ("peak", "layer_peak 2", "layer_peak 3")).values
    room = 10.0 ** draw.uniform(0.0, 2.5, (3, n))
    limits = (None, cold["layer_peak 2"] + room[1], np.where(np.arange(n) % 2, np.nan, cold["layer_peak 3"] + room[2]))
    return Cases(
        cases.shape, layers, cases.left, cases.right, cases.inner, cold["peak"] + room[0], joints=cases.joints, layer_limits=limits,
        pattern=pattern,
    )  # fmt: skip


def scaled(cases: Cases, multiple: np.ndarray) -> Cases:
    """The cases with that multiple of their pattern as sources."""
    pattern = cases.pattern or tuple(layer.generation for layer in cases.layers)
    layers = tuple(Layer(layer.thickness, layer.conductivity, multiple * p) for layer, p in zip(cases.layers, pattern, strict=True))
    return Cases(
        cases.shape, layers, cases.left, cases.right, cases.inner, cases.limit, joints=cases.joints, layer_limits=cases.layer_limits,
        pattern=pattern,
    )  # fmt: skip


# Radiation and resistances by hand.

SIGMA = 5.670374419e-8  # CODATA 2018


@pytest.mark.parametrize("shape", list(Shape), ids=lambda shape: shape.name.lower())
def test_radiation_alone_takes_all_the_heat(shape: Shape) -> None:
    """εσ(T⁴ − T_s⁴) = q size/(m + 1) − flux out, whatever stands between; the surface is R times the flux below the face."""
    q, size, flux = np.array([1e3, 1e5, 1e7]), 0.02, 300.0
    one = np.ones(3)
    face = Face(emissivity=0.8 * one, surroundings=25.0 * one, flux=flux * one, resistance=1e-3 * one)
    found = steady(Cases(shape, (Layer(size * one, 5.0 * one, q),), Face(), face), ("right_face", "peak", "right_flux")).values
    out = q * size / (shape + 1)
    surface = ((out + flux) / (0.8 * SIGMA) + 298.15**4) ** 0.25 - 273.15
    assert found["right_flux"] == pytest.approx(out, rel=1e-13)
    assert found["right_face"] == pytest.approx(surface + 1e-3 * out, rel=1e-12)
    assert found["peak"] == pytest.approx(surface + 1e-3 * out + q * size**2 / (2 * (shape + 1) * 5.0), rel=1e-12)


def test_a_resistance_to_a_held_temperature_and_to_a_fluid_alone_are_the_same() -> None:
    """With a fluid and nothing else the resistance alone is the path; a conductance is one over it."""
    case = {"shape": "wall", "thickness [m]": 0.02, "conductivity [W/(m·K)]": 3.0, "generation [W/m³]": 2e5}
    ways = [
        {"right resistance [m²·K/W]": 4e-3, "right held [°C]": 30.0}, {"right resistance [m²·K/W]": 4e-3, "right fluid [°C]": 30.0},
        {"right resistance [W/(m²·K)]": 250.0, "right fluid [°C]": 30.0}, {"right film [W/(m²·K)]": 250.0, "right fluid [°C]": 30.0},
        {"right resistance [m²·K/W]": 3e-3, "right film [W/(m²·K)]": 1000.0, "right fluid [°C]": 30.0},
    ]  # fmt: skip
    for way in ways:
        face, peak = ask("right face [°C]; peak [°C]", [*case, *way], *case.values(), *way.values())
        assert face[0] == pytest.approx(30.0 + 2e5 * 0.02 * 4e-3, rel=1e-14), way
        assert peak[0] == pytest.approx(30.0 + 2e5 * 0.02 * (4e-3 + 0.02 / 6.0), rel=1e-14), way


# A profile, and tables beside their rows.


def test_a_profile_has_both_sides_of_each_joint() -> None:
    for shape, bored in BODIES:
        cases = draw_layers(6, shape, bored, "both" if bored else "flux", "film behind", 1)
        places, T, status = profile(cases, 30)
        assert status.tolist() == [Status.SOLVED]
        found = steady(cases, tuple(f"joint_{side} {i}" for i in (1, 2) for side in ("left", "right"))).values
        d = np.array([layer.thickness[0] for layer in cases.layers])
        start = 0.0 if cases.inner is None else cases.inner[0]
        joints = start + np.cumsum(d)[:2]
        twice = np.flatnonzero(np.diff(places[0]) == 0.0)
        assert places[0][twice] == pytest.approx(joints, rel=1e-15)
        assert places[0][[0, -1]] == pytest.approx([start, start + d.sum()], rel=1e-15)
        for i, at in enumerate(twice, 1):
            assert T[0, at] == found[f"joint_left {i}"][0]
            assert T[0, at + 1] == found[f"joint_right {i}"][0]
        with pytest.raises(ValueError, match=r"^a profile through 3 layers needs at least 6 points$"):
            profile(cases, 5)
        least, _, _ = profile(cases, 6)
        assert least[0] == pytest.approx(np.repeat([start, *joints, start + d.sum()], 2)[1:-1], rel=1e-15)


def test_the_profile_function_shows_the_jump_of_a_joint() -> None:
    case = two_layer_wall()
    (outcome,) = solve_calls("INGLE.PROFILE", [(((8.0,),), (tuple(case),), (tuple(case.values()),))])
    rows = [list(row) for row in outcome.grid]
    at = [T for place, T in rows if place == pytest.approx(20.0, rel=1e-14)]  # millimetres
    assert at == pytest.approx([20.0 + 2000.0 * (0.02 + 2e-3), 20.0 + 2000.0 * 0.02], rel=1e-13)
    assert (rows[0][1], rows[-1]) == (pytest.approx(20.0 + 2000.0 * 0.022 + 1e5 * 0.02**2 / 8.0, rel=1e-13), [50.0, 20.0])


def test_rows_with_layers_have_the_same_bits_alone_and_in_a_table() -> None:
    """Only of rows with several layers, a text table, a slope, radiation or a resistance."""
    table = mixed(np.random.default_rng(8), 400)
    text = np.array([isinstance(k, str) for k in table["conductivity [W/(m·K)]"]])
    given = [
        ~np.isnan(table[h]) for h in ("thickness 2 [m]", "conductivity slope [1/K]", "right emissivity", "right resistance [m²·K/W]")
    ]
    assert all(8 < mask.sum() < 400 for mask in (text, *given))
    rows = np.flatnonzero(text | np.logical_or.reduce(given))[:30]
    answers = [answer for answer in all_answers() if answer != "why"]
    whole = solve(answers, rows_of(table, rows))
    for i, row in enumerate(rows):
        for answer, column, alone in zip(answers, whole, solve(answers, rows_of(table, slice(row, row + 1))), strict=True):
            same = column[i] == alone[0] or (column[i] != column[i] and alone[0] != alone[0])
            assert same, (answer, column[i], alone[0])
