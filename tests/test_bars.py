"""Bars between terminals against the linear equation's own solution at 40 digits, and by the laws of their sides.

Sizes, films and currents are drawn or chosen here.
"""

from __future__ import annotations

import math
from itertools import pairwise, product
from typing import Any

import mpmath as mp
import numpy as np
import pytest
from exact_currents import DIGITS, End, ExactBar
from ingle.film_laws import FilmLaw, FluidKind, film
from ingle_addin import ask
from ingle_addin.batch import solve_calls

WITHIN = 1e-9
NAMES = (
    "peak [°C]; left face [°C]; right face [°C]; mean [°C]; voltage [V]; resistance [Ω]; heat made [W]; left heat out [W]; "
    "right heat out [W]; side heat out [W]; left heat out [W/m²]; side heat out [W/m²]; left share [%]; balance [%]"
)
ENDS = ("held", "insulated", "film")


def answers(names: str, case: dict[str, Any]) -> list[Any]:
    *found, verdict, why = ask(f"{names}; verdict; why", list(case), *case.values())
    assert verdict[0] in ("no limit", "ok", "caution"), why[0]
    return [column[0] for column in found]


def drawn(seed: int, left: str, right: str, cooled: bool, slope: float) -> tuple[dict[str, Any], Any]:
    """A bar and what makes its closed form at a current, as functions of J."""
    draw = np.random.default_rng([43, seed, len(left), len(right), cooled])
    length, across, thin = (10.0 ** float(draw.uniform(*span)) for span in ((-1.0, 0.3), (-2.0, -1.3), (-2.7, -2.2)))
    k, rho0 = float(draw.uniform(15, 400)), 10.0 ** float(draw.uniform(-7.8, -5.5))
    ac, reference = 1.0 + draw.integers(2) * 0.21, 20.0
    section, perimeter = across * thin, 2.0 * (across + thin)
    h = float(draw.uniform(3, 60)) if cooled else 0.0
    fluid, cold = float(draw.uniform(10, 50)), float(draw.uniform(20, 60))
    row: dict[str, Any] = {
        "shape": "bar", "length [m]": length, "width [m]": across, "thickness [m]": thin, "conductivity [W/(m·K)]": k,
        "resistivity [Ω·m]": rho0, "resistivity slope [1/K]": slope, "ac ratio": ac,
    }  # fmt: skip
    if cooled:
        row |= {"side film [W/(m²·K)]": h, "side fluid [°C]": fluid}
    ends = []
    for side, kind in (("left", left), ("right", right)):
        contact = 0.02 * rho0 * length / section * float(draw.integers(3))
        row[f"{side} contact [Ω]"] = contact
        if kind == "held":
            row[f"{side} held [°C]"] = cold + 5.0 * len(ends)
            ends.append(End(held=mp.mpf(row[f"{side} held [°C]"]), contact=mp.mpf(contact)))
        elif kind == "film":
            film_end = k / length * float(draw.uniform(0.5, 5))
            row |= {f"{side} film [W/(m²·K)]": film_end, f"{side} fluid [°C]": cold}
            ends.append(End(film=mp.mpf(film_end), fluid=mp.mpf(cold), contact=mp.mpf(contact)))
        else:
            ends.append(End(contact=mp.mpf(contact)))
    rise = float(draw.uniform(5, 90))
    cooling = h * perimeter / section + k / length**2 * (("held" in (left, right)) + 0.3 * ("film" in (left, right)))
    J = mp.sqrt(rise * cooling / (ac * rho0 * (1 + 60 * abs(slope))))
    numbers = (mp.mpf(float(x)) for x in (length, section, perimeter, k, rho0, slope, reference, ac))
    return row, ExactBar(*numbers, J, mp.mpf(h), mp.mpf(fluid), *ends)


# A bare bar of constant resistivity is a parabola (``test_a_bare_bar_is_a_wall``), one insulated at both ends keeps its heat.
SOLVED = [
    (left, right, cooled, slope)
    for left, right, cooled, slope in product(ENDS, ENDS, (True, False), (0.0, 0.0039, -0.0004))
    if cooled or (slope != 0.0 and not left == right == "insulated")
]


@pytest.mark.parametrize(("left", "right", "cooled", "slope"), SOLVED)
def test_a_bar_is_its_closed_form(left: str, right: str, cooled: bool, slope: float) -> None:
    """A fin with a source: cosh where its sides shed more of a kelvin than its resistivity makes of it, cos where they do not."""
    for seed in range(2):
        with mp.workdps(DIGITS):
            row, bar = drawn(seed, left, right, cooled, slope)
            current, resistance = bar.J * bar.section, bar.resistance
            made, length = resistance * current**2, bar.length
            sinks = [bar.fluid if cooled else bar.T(0), bar.T(0)]
            rise = max(abs(bar.T(x * length / 8) - sink) for x in range(9) for sink in sinks)
            out = [-bar.rightward(0), bar.rightward(length), bar.side]
            heats = max(abs(x) for x in (made, *out))
            # A heat driven by temperatures is known to their own last digits.
            digits = 3e-13 * bar.k * bar.section / length
            want = [(T, WITHIN * rise + 1e-12) for T in (bar.peak, bar.T(0), bar.T(length), bar.mean)]
            want += [(current * resistance, WITHIN * current * resistance), (resistance, WITHIN * resistance)]
            want += [(heat, WITHIN * heats + digits) for heat in (made, *out)]
            want += [(out[0] / bar.section, (WITHIN * heats + digits) / bar.section)]
            given = {"current [A]": current, "current density [A/m²]": bar.J, "voltage [V]": current * resistance}
            for heading, value in given.items():
                *numbers, side_flux, share, balance = answers(NAMES, {**row, heading: float(value)})
                for name, number, (exact, within) in zip(NAMES.split("; "), numbers, want, strict=False):
                    assert abs(mp.mpf(float(number)) - exact) <= within, (name, heading, number, exact, row)
                sides = float(bar.perimeter * length)
                assert side_flux == pytest.approx(numbers[9] / sides, rel=1e-12)
                leaving = [max(x, 0.0) for x in numbers[7:10]]
                assert share == pytest.approx(100.0 * leaving[0] / sum(leaving), abs=1e-9)
                # What is made leaves by ends and sides; a contact's heat enters at its end, which the end's own heat is net of.
                assert abs(sum(numbers[7:10]) - numbers[6]) <= 1e-11 * heats + 3 * digits
                assert balance <= 1e-8


def test_contact_heat_enters_at_its_end() -> None:
    """Seen at the terminal, I²R more leaves than without the contact, where the terminal is held; nothing else changes."""
    case = {
        "shape": "bar", "length [m]": 0.4, "diameter [m]": 0.01, "conductivity [W/(m·K)]": 390.0, "resistivity [Ω·m]": 1.75e-8,
        "current [A]": 300.0, "left held [°C]": 40.0, "right film [W/(m²·K)]": 2000.0, "right fluid [°C]": 40.0,
    }  # fmt: skip
    names = "peak [°C]; right face [°C]; left heat out [W]; right heat out [W]; heat made [W]; voltage [V]"
    plain = answers(names, case)
    held = answers(names, {**case, "left contact [mΩ]": 0.2})
    assert held == pytest.approx(plain, rel=1e-12)
    freed = 300.0**2 * 0.2e-3
    filmed = answers(names, {**case, "right contact [mΩ]": 0.2})
    section, made = math.pi * 1e-4 / 4, plain[4]
    # A rod, its far end held and this one filmed: Δ = (made/2 + freed)/(kA/L + hA) at this end.
    rise = (made / 2.0 + freed) / (390.0 * section / 0.4 + 2000.0 * section)
    assert filmed[1] == pytest.approx(40.0 + rise, rel=1e-12)
    # By the film leave the end's own heat and the contact's.
    assert filmed[3] + freed == pytest.approx(2000.0 * section * rise, rel=1e-11)
    assert filmed[4:] == pytest.approx(plain[4:], rel=1e-12)


@pytest.mark.parametrize("slope", [0.0, 0.004])
def test_a_bare_bar_is_a_wall(slope: float) -> None:
    """Without sides heat flows as through a wall whose thickness is its length; the one-turn winding has the bar's density."""
    faces = {"left film [W/(m²·K)]": 300.0, "left fluid [°C]": 30.0, "right held [°C]": 45.0}
    both = {"conductivity [W/(m·K)]": 20.0, **faces}
    names = "peak [°C]; peak place [m]; left face [°C]; mean [°C]; left heat out [W/m²]; right heat out [W/m²]"
    sources: list[dict[str, Any]] = [
        {"current density [A/m²]": 1.5e6, "resistivity [Ω·m]": 5e-7, "resistivity slope [1/K]": slope},
        {"generation [W/m³]": 1e6, "generation slope [1/K]": slope},
    ]
    for source in sources:
        bar = answers(names, {"shape": "bar", "length [m]": 0.05, "section [m²]": 3e-4, **both, **source})
        wound = {} if "generation [W/m³]" in source else {"fill factor": 1.0}
        wall = answers(names, {"shape": "wall", "thickness [m]": 0.05, **both, **source, **wound})
        assert bar == pytest.approx(wall, rel=1e-13)


def test_a_bar_from_behind_is_the_same_bar() -> None:
    case = {
        "shape": "bar", "length [m]": 0.5, "section [m²]": 1e-4, "perimeter [m]": 0.05, "conductivity [W/(m·K)]": "20:380; 200:370",
        "resistivity [Ω·m]": 1.8e-8, "resistivity slope [1/K]": 0.0039, "voltage [V]": 0.04, "left held [°C]": 35.0,
        "right film [W/(m²·K)]": 500.0, "right fluid [°C]": 20.0, "right contact [Ω]": 3e-6, "side emissivity": 0.8,
        "side surroundings [°C]": 22.0,
    }  # fmt: skip
    swap = {"left": "right", "right": "left"}
    turned = {" ".join(swap.get(word, word) for word in heading.split()): value for heading, value in case.items()}
    there = answers("peak [°C]; peak place [m]; left face [°C]; left heat out [W]; side heat out [W]; resistance [Ω]", case)
    back = answers("peak [°C]; peak place [m]; right face [°C]; right heat out [W]; side heat out [W]; resistance [Ω]", turned)
    back[1] = 0.5 - back[1]
    assert back == pytest.approx(there, rel=1e-10)


LAWS = [("vertical plate", None, "air"), ("horizontal cylinder", None, "air"), ("hot face up", None, "water"),
        ("cylinder in cross flow", 3.0, "air"), ("plate in flow", 0.5, "water")]  # fmt: skip


@pytest.mark.parametrize(("law", "speed", "kind"), LAWS)
def test_the_sides_lose_what_the_law_takes_at_each_place(law: str, speed: float | None, kind: str) -> None:
    """The film law at the temperature of each place of INGLE.PROFILE, by Romberg's rule, is the side's heat; and so is radiation."""
    length, diameter, fluid, size, e = 0.6, 0.012, 20.0, 0.06, 0.6
    # Neither end is as cold as the fluid, where a law of natural convection is not smooth.
    case: dict[str, Any] = {
        "shape": "bar", "length [m]": length, "diameter [m]": diameter, "conductivity [W/(m·K)]": 60.0, "resistivity [Ω·m]": 1e-6,
        "resistivity slope [1/K]": 0.001, "current [A]": 90.0 if kind == "air" else 250.0, "left held [°C]": 45.0,
        "right held [°C]": 30.0, "side film law": law, "side size [m]": size, "side fluid [°C]": fluid, "side fluid kind": kind,
        "side emissivity": e,
    }  # fmt: skip
    if speed is not None:
        case["side speed [m/s]"] = speed
    heat, peak = answers("side heat out [W]; peak [°C]", case)
    assert 45.0 <= peak < 400.0
    if kind == "water":
        assert peak < 95.0
    (grid,) = solve_calls("INGLE.PROFILE", [(((1025.0,),), (tuple(case),), (tuple(case.values()),))])
    x, T = np.array([[float(cell) for cell in row] for row in grid.grid]).T  # type: ignore[arg-type]
    assert x == pytest.approx(np.linspace(0.0, 1e3 * length, 1025))
    flow = None if speed is None else np.full_like(T, speed)
    h = film(
        FilmLaw[law.upper().replace(" ", "_")], FluidKind[kind.upper()], np.full_like(T, size), flow, T, np.full_like(T, fluid)
    ).h
    flux = h * (T - fluid) + e * 5.670374419e-8 * ((T + 273.15) ** 4 - (fluid + 273.15) ** 4)  # CODATA 2018
    assert heat == pytest.approx(math.pi * diameter * romberg(flux, length), rel=WITHIN)


def romberg(y: np.ndarray, length: float) -> float:
    """∫ of values at even places, a power of two and one of them."""
    columns, step = [], len(y) - 1
    while step >= 1:
        part = y[::step]
        columns.append(length * step / (len(y) - 1) * float(part.sum() - (part[0] + part[-1]) / 2.0))
        step //= 2
    power = 4.0
    while len(columns) > 1:
        columns = [(power * b - a) / (power - 1.0) for a, b in pairwise(columns)]
        power *= 4.0
    return columns[0]


@pytest.mark.parametrize("side", ["left", "right"])
@pytest.mark.parametrize("name", [law.name.lower().replace("_", " ") for law in FilmLaw])
@pytest.mark.parametrize("kind", ["air", "water"])
def test_face_temperature_and_film_belong_together(side: str, name: str, kind: str) -> None:
    """The law at the face's temperature is the film answered, and film times rise the heat: 1e-9, with a current inside."""
    T_in, size = 20.0, 0.05
    case: dict[str, Any] = {
        "shape": "wall", "thickness [m]": 0.004, "width [m]": 0.05, "conductivity [W/(m·K)]": 3.0, "resistivity [Ω·m]": 1e-5,
        "resistivity slope [1/K]": 0.002, "current [A]": 4.0 if kind == "air" else 20.0, f"{side} film law": name,
        f"{side} size [m]": size, f"{side} fluid [°C]": T_in, f"{side} fluid kind": kind,
    }  # fmt: skip
    flow = FilmLaw[name.upper().replace(" ", "_")] in (FilmLaw.CYLINDER_IN_CROSS_FLOW, FilmLaw.PLATE_IN_FLOW, FilmLaw.TUBE_FLOW)
    if flow:
        case[f"{side} speed [m/s]"] = 2.0
    face, used, flux = answers(f"{side} face [°C]; {side} film used [W/(m²·K)]; {side} heat out [W/m²]", case)
    assert face > T_in + 0.05
    speed = np.array([2.0]) if flow else None
    law = FilmLaw[name.upper().replace(" ", "_")]
    own = film(law, FluidKind[kind.upper()], np.array([size]), speed, np.array([face]), np.array([T_in])).h[0]
    assert used == pytest.approx(own, rel=WITHIN)
    assert flux == pytest.approx(used * (face - T_in), rel=WITHIN)
