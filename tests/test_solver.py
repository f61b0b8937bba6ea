"""Whole solutions against the general integral at 60 digits, against a boundary-value solver, and in their limits.

Sizes, films and sources are drawn or chosen here; what is compared comes from `exact`, or from the printed relation that a
test names.
"""

from __future__ import annotations

from typing import Any

import mpmath as mp
import numpy as np
import pytest
from exact import DIGITS, MEASURE, ROWS, SOLID, TWO_FACES, Exact, draw_cases, exact, span
from ingle import Cases, Face, FaceKind, Layer, Shape, Status, profile, steady
from scipy.integrate import solve_bvp

WANTED = ("peak", "peak_place", "left_face", "right_face", "mean", "probe_temperature", "left_flux", "right_flux")
HEATS = ("left_heat", "right_heat", "heat_made")
STRUCTURES = pytest.mark.parametrize(
    ("shape", "bored", "left", "right"),
    TWO_FACES + SOLID,
    ids=lambda part: {True: "two faces", False: "solid"}[part] if isinstance(part, bool) else part.name.lower(),
)


@STRUCTURES
def test_solutions_are_exact_to_1e_12_of_the_rise(shape: Shape, bored: bool, left: FaceKind, right: FaceKind) -> None:
    """The rise is what source, sinks and fluxes each cause, added up; a degree printed keeps 4e-16 of itself besides."""
    cases = draw_cases(1, shape, bored, left, right)
    answers = steady(cases, WANTED + HEATS)
    worst = dict.fromkeys((*WANTED, *HEATS), 0.0)
    solved = 0
    with mp.workdps(DIGITS):
        for row in range(ROWS):
            e = exact(cases, row)
            if e.lowest() < -273.15:  # absolute zero, by the definition of the degree Celsius
                assert answers.status[row] == Status.BELOW_ABSOLUTE_ZERO
                assert all(np.isnan(answers.values[name][row]) for name in worst)
                continue
            assert answers.status[row] == Status.SOLVED
            solved += 1
            got = {name: mp.mpf(float(answers.values[name][row])) for name in worst}
            causes = [exact(cases, row, only) for only in ("source", "sinks", "flux")]
            rise = sum(span(cause) for cause in causes)
            heat = sum(max(abs(cause.Q(cause.a)), abs(cause.Q(cause.b))) for cause in causes) * MEASURE[shape]
            for name, T in temperatures(e, cases, row).items():
                slip = max(abs(got[name] - T) - mp.mpf(4e-16) * abs(T), mp.mpf(0)) / rise
                worst[name] = max(worst[name], float(slip))
            worst["peak_place"] = max(worst["peak_place"], float(e.short_of_peak(got["peak_place"]) / rise))
            for name, (Q, area) in heats(e, bored).items():
                worst[name] = max(worst[name], float(abs(got[name] * area - Q) / heat))
    print(f"{solved} of {ROWS} rows; largest error over the rise (temperatures) or the heat: {worst}")
    assert solved >= 0.8 * ROWS
    assert max(worst.values()) <= 1e-12, worst


def temperatures(e: Exact, cases: Cases, row: int) -> dict[str, Any]:
    probe = min(max(mp.mpf(float(cases.probe[row])), e.a), e.b)
    return {
        "peak": e.peak(),
        "left_face": e.T(e.a),
        "right_face": e.T(e.b),
        "mean": e.mean(),
        "probe_temperature": e.T(probe),
    }


def heats(e: Exact, bored: bool) -> dict[str, tuple[Any, Any]]:
    """Each heat leaving or made, and the area that turns its answer into that heat."""
    out = {"left": -e.Q(e.a) * MEASURE[e.m], "right": e.Q(e.b) * MEASURE[e.m]}
    inside = MEASURE[e.m] * e.a**e.m if bored else mp.mpf(1)
    return {
        "left_flux": (out["left"], inside),
        "right_flux": (out["right"], MEASURE[e.m] * e.b**e.m),
        "left_heat": (out["left"], 1),
        "right_heat": (out["right"], 1),
        "heat_made": (out["left"] + out["right"], 1),
    }


@pytest.mark.parametrize("shape", [Shape.CYLINDER, Shape.SPHERE], ids=["cylinder", "sphere"])
def test_peak_and_mean_keep_their_digits_however_small_the_bore(shape: Shape) -> None:
    """A cold bore of a thousandth to a million-millionth of the outside, the peak between it and the outside."""
    ratio = 10.0 ** np.arange(3.0, 13.0)
    n = len(ratio)
    cases = Cases(
        shape,
        (Layer(np.full(n, 0.1), np.full(n, 2.0), np.full(n, 1e5)),),
        Face(held=np.full(n, 20.0)),
        Face(film=np.full(n, 30.0), fluid=np.full(n, 20.0)),
        0.1 / ratio,
    )
    answers = steady(cases, ("peak", "mean", "peak_place")).values
    slips: dict[float, tuple[float, float]] = {}
    with mp.workdps(DIGITS):
        for row in range(n):
            e = exact(cases, row)
            peak = e.peak()
            assert e.a < answers["peak_place"][row] < e.b
            found = (abs(answers["peak"][row] - peak), abs(answers["mean"][row] - e.mean()))
            slips[float(ratio[row])] = (float(found[0] / (peak - 20)), float(found[1] / (peak - 20)))
    assert all(max(slip) <= 1e-12 for slip in slips.values()), slips


@STRUCTURES
def test_solutions_agree_with_a_boundary_value_solver(shape: Shape, bored: bool, left: FaceKind, right: FaceKind) -> None:
    """scipy's collocation on k(T″ + m T′/r) = −q, to its own 1e-9 of the rise, in one case of each kind of body."""
    one = np.ones(1)
    a, d, k, q = 0.6, 1.0, 1.7, 240.0
    laws = {
        FaceKind.HELD: lambda T: Face(held=T * one),
        FaceKind.FILM: lambda T: Face(film=3.0 * one, fluid=T * one, flux=25.0 * one),
        FaceKind.FLUX: lambda T: Face(flux=(0.0 if not bored else T) * one),
    }
    solid = not bored
    inner = None if solid or shape == Shape.WALL else a * one
    start = 0.0 if inner is None else a
    faces = laws[left](40.0), laws[right](-10.0)
    cases = Cases(shape, (Layer(d * one, k * one, q * one),), *faces, inner)
    places, T, status = profile(cases, 21)
    assert status[0] == Status.SOLVED

    def field(r: np.ndarray, y: np.ndarray) -> np.ndarray:
        return np.vstack([y[1], -q / k - (0.0 * r if solid or not shape else shape * y[1] / r)])

    def short(kind: FaceKind, T: float, out: float, level: float) -> float:
        if kind == FaceKind.HELD:
            return T - level
        return out - (3.0 * (T - level) - 25.0 if kind == FaceKind.FILM else -level)

    def ends(ya: np.ndarray, yb: np.ndarray) -> np.ndarray:
        at_left = ya[1] if solid else short(left, ya[0], k * ya[1], 40.0)
        return np.array([at_left, short(right, yb[0], -k * yb[1], -10.0)])

    S = np.array([[0.0, 0.0], [0.0, -float(shape)]]) if solid else None
    r = np.linspace(start, start + d, 41)
    found = solve_bvp(field, ends, r, np.zeros((2, len(r))), S=S, tol=1e-9, max_nodes=20_000)
    assert found.success
    assert np.max(np.abs(found.sol(places[0])[0] - T[0])) <= 1e-9 * np.ptp(T[0])


def like(h: np.ndarray, x: float) -> np.ndarray:
    return np.full_like(h, x)


def test_a_strong_film_becomes_a_held_face_at_first_order() -> None:
    """The filmed peak lies above the held one by q L/h."""
    h = np.array([1e6, 1e7, 1e8])
    layer = Layer(like(h, 0.02), like(h, 1.5), like(h, 3e5))
    filmed = steady(Cases(Shape.WALL, (layer,), Face(), Face(film=h, fluid=like(h, 20.0))), ("peak",)).values["peak"]
    held = steady(Cases(Shape.WALL, (layer,), Face(), Face(held=like(h, 20.0))), ("peak",)).values["peak"]
    assert filmed - held == pytest.approx(3e5 * 0.02 / h, rel=1e-6)


@pytest.mark.parametrize("shape", list(Shape), ids=lambda shape: shape.name.lower())
def test_a_perfect_conductor_is_at_one_temperature(shape: Shape) -> None:
    """Then the heat made leaves through the film alone: T = fluid + q (size/(m + 1))/h."""
    h = np.array([0.15, 15.0, 1500.0])
    layer = Layer(like(h, 0.03), like(h, 1e12), like(h, 2e3))
    found = steady(Cases(shape, (layer,), Face(), Face(film=h, fluid=like(h, 20.0))), ("peak", "right_face", "mean")).values
    for name, temperature in found.items():
        assert temperature == pytest.approx(20.0 + 2e3 * 0.03 / (shape + 1) / h, rel=1e-12), name


@pytest.mark.parametrize("shape", [Shape.CYLINDER, Shape.SPHERE], ids=["cylinder", "sphere"])
def test_a_small_insulated_bore_approaches_the_solid_body(shape: Shape) -> None:
    """The gap closes as the bore's share of the volume, (a/R)^(m+1), times at most ln(R/a)."""
    a = np.array([1e-2, 1e-3, 1e-4]) * 0.05
    face = Face(held=like(a, 20.0))
    bored = Cases(shape, (Layer(0.05 - a, like(a, 2.0), like(a, 1e5)),), Face(), face, a)
    solid = Cases(shape, (Layer(like(a, 0.05), like(a, 2.0), like(a, 1e5)),), Face(), face)
    gap = steady(solid, ("peak",)).values["peak"] - steady(bored, ("peak",)).values["peak"]
    rise = 1e5 * 0.05**2 / (2 * (shape + 1) * 2.0)
    assert (gap > 0.0).all()
    assert (gap <= 4.0 * rise * (a / 0.05) ** 2 * np.log(0.05 / a)).all()


@pytest.mark.parametrize("points", [2, 3, 50])
def test_a_profile_begins_and_ends_at_the_faces(points: int) -> None:
    """Over every kind of body; its places run from the left face, the centre or the bore to the outside."""
    for shape, bored, left, right in TWO_FACES + SOLID:
        cases = draw_cases(2, shape, bored, left, right)
        places, T, status = profile(cases, points)
        answers = steady(cases, ("left_face", "right_face", "peak"))
        assert places.shape == T.shape == (ROWS, points)
        assert np.array_equal(status, answers.status)
        good = status == Status.SOLVED
        assert np.isnan(T[~good]).all()
        assert np.isnan(places[~good]).all()
        start = np.zeros(ROWS) if cases.inner is None else cases.inner
        end = start + cases.layers[0].thickness
        assert np.array_equal(places[good][:, [0, -1]], np.column_stack([start, end])[good])
        step = np.diff(places[good], axis=1) - cases.layers[0].thickness[good, None] / (points - 1)
        assert (np.abs(step) <= 1e-15 * end[good, None]).all()
        for column, face in ((0, "left_face"), (-1, "right_face")):
            ptp = np.ptp(T[good], axis=1) + np.abs(answers.values["peak"][good])
            assert (np.abs(T[good, column] - answers.values[face][good]) <= 1e-12 * ptp).all()
        assert (T[good] <= answers.values["peak"][good, None] * (1.0 + 1e-14) + 1e-12).all()


def test_a_probe_answers_inside_the_body_only() -> None:
    place = np.array([-0.001, 0.0, 0.015, 0.03, 0.031])
    cases = Cases(
        Shape.WALL, (Layer(like(place, 0.03), like(place, 2.0), like(place, 1e5)),), Face(), Face(held=like(place, 20.0)), probe=place
    )
    inside = 20.0 + 1e5 / (2 * 2.0) * (0.03**2 - place[1:4] ** 2)
    found = steady(cases, ("probe_temperature",)).values["probe_temperature"]
    assert np.isnan(found[[0, 4]]).all()
    assert found[1:4] == pytest.approx(inside, rel=1e-14)


@STRUCTURES
def test_the_allowable_source_brings_the_body_to_its_limit(shape: Shape, bored: bool, left: FaceKind, right: FaceKind) -> None:
    """To 1e-9 of the rise that source makes, at the limit that governs, with no other limit passed."""
    cases = draw_cases(3, shape, bored, left, right)
    draw = np.random.default_rng([4, shape, bored, left, right])
    cold = steady(replaced(cases, cases.layers[0].generation * 0.0), ("peak",)).values["peak"]
    limits = [cold + 10.0 ** draw.uniform(-1.0, 3.0, ROWS) for _ in range(3)]
    limits[0][::3] = np.nan
    limits[1][::2] = np.nan
    limits[2][1::2] = np.nan
    limited = replaced(cases, cases.layers[0].generation, *limits)
    found = steady(limited, ("allowable_multiple", "governs", "lacking")).values
    q = found["allowable_multiple"]
    good = ~np.isnan(q)
    assert good.sum() >= 0.6 * ROWS
    assert (found["lacking"][good] == 0).all()
    there = steady(replaced(limited, np.where(good, q, 0.0), *limits), ("peak", "left_face", "right_face", "headroom")).values
    rooms = np.array([limit - there[name] for limit, name in zip(limits, ("peak", "left_face", "right_face"), strict=True)])
    governs = np.nan_to_num(found["governs"]).astype(int)
    with mp.workdps(DIGITS):
        for row in np.flatnonzero(good):
            by_source = float(span(exact(replaced(cases, q), row, "source"))) / 2.0
            slack = 1e-9 * by_source + 4e-16 * abs(there["peak"][row])
            assert abs(rooms[governs[row] - 1, row]) <= slack
            assert np.nanmin(rooms[:, row]) >= -slack
            assert abs(there["headroom"][row]) <= slack


def replaced(cases: Cases, q: np.ndarray, *limits: np.ndarray) -> Cases:
    """The cases with another source, and with limits."""
    layer = cases.layers[0]
    body = (Layer(layer.thickness, layer.conductivity, q),)
    return Cases(cases.shape, body, cases.left, cases.right, cases.inner, *limits)


def test_why_there_is_no_allowable_source() -> None:
    """No limit; one broken with no source; one at a face held below it; and a wall in closed form, q = 2 k rise/L²."""
    limit = np.array([np.nan, 40.0, np.nan, 80.0])
    right = np.array([np.nan, np.nan, 60.0, np.nan])
    held = Face(held=like(limit, 50.0))
    layer = Layer(like(limit, 0.1), like(limit, 3.0), like(limit, 0.0))
    cases = Cases(Shape.WALL, (layer,), Face(), held, limit=limit, right_limit=right)
    found = steady(cases, ("lacking", "governs", "allowable_multiple", "first_broken")).values
    assert found["lacking"].tolist() == [1, 2, 3, 0]
    assert found["first_broken"].tolist() == [0, 1, 0, 0]
    assert np.isnan(found["allowable_multiple"][:3]).all()
    assert found["allowable_multiple"][3] == pytest.approx(2 * 3.0 * 30.0 / 0.1**2, rel=1e-14)
    assert found["governs"][3] == 1


# What the entrance says where there is no answer.


def test_bodies_from_which_no_heat_can_leave_have_a_status() -> None:
    """Insulated on both faces, by no heading or by a film of 0; a film of 0 with a held face beside it is a solved wall."""
    three = np.array([0.0, 0.0, 5.0])
    layer = Layer(like(three, 0.01), like(three, 1.0), like(three, 1e3))
    film = Face(film=three, fluid=like(three, 20.0))
    answers = steady(Cases(Shape.WALL, (layer,), film, Face(held=np.array([np.nan, 30.0, np.nan]))), ("peak", "left_heat"))
    assert answers.status.tolist() == [Status.NO_OUTLET, Status.SOLVED, Status.SOLVED]
    assert answers.values["peak"] == pytest.approx(
        [np.nan, 30.0 + 1e3 * 1e-4 / 2.0, 20.0 + 1e3 * 0.01 / 5.0 + 1e3 * 1e-4 / 2.0], nan_ok=True
    )
    assert answers.values["left_heat"][1:] == pytest.approx([0.0, 10.0])


def test_answers_below_absolute_zero_and_beyond_the_numbers_have_a_status() -> None:
    q = np.array([-1e6, -5e5, 1e308])
    cases = Cases(Shape.WALL, (Layer(like(q, 0.1), like(q, 10.0), q),), Face(), Face(film=like(q, 1e-3), fluid=like(q, 20.0)))
    answers = steady(cases, ("peak",))
    assert answers.status.tolist() == [Status.BELOW_ABSOLUTE_ZERO, Status.BELOW_ABSOLUTE_ZERO, Status.OVERFLOW]
    assert np.isnan(answers.values["peak"]).all()


def test_misuse_is_refused_with_its_reason() -> None:
    one = np.ones(1)
    layer = Layer(one, one, one)
    with pytest.raises(ValueError, match=r"^a film needs its fluid temperature, and a fluid temperature its film$"):
        Face(film=one)
    several = r"^there is a joint between each two layers and a limit for each layer$"
    for layers, joints, limits in ((2, 2, 0), (3, 1, 0), (1, 1, 0), (2, 1, 1), (2, 0, 3)):
        with pytest.raises(ValueError, match=several):
            Cases(Shape.WALL, (layer,) * layers, Face(), Face(held=one), joints=(one,) * joints, layer_limits=(one,) * limits)
    assert len(Cases(Shape.WALL, (layer,) * 3, Face(), Face(held=one), joints=(one, None), layer_limits=(None, one, one))) == 1
    with pytest.raises(ValueError, match=r"^a body has at least one layer$"):
        Cases(Shape.WALL, (), Face(), Face(held=one))
    with pytest.raises(ValueError, match=r"^radiation needs its surroundings$"):
        Face(emissivity=one)
    with pytest.raises(KeyError, match=r"^'warmth'$"):
        steady(Cases(Shape.WALL, (layer,), Face(), Face(held=one)), ("peak", "warmth"))


@pytest.mark.parametrize("other", ["film", "flux"])
def test_a_held_face_takes_neither_film_nor_flux(other: str) -> None:
    """As the docstring of Face promises."""
    one = np.ones(1)
    faces = {"film": {"film": one, "fluid": one}, "flux": {"flux": one}}
    with pytest.raises(ValueError, match="held"):
        Face(held=one, **faces[other])
