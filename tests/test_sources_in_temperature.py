"""Sources that are tables in temperature, by their first integral; and what becomes of shapes where they meet.

Steady conduction through a plate, multiplied by k T′ and integrated once: (k T′)²/2 = ∫ k q dT from T to the peak. Sizes and
tables are chosen here; a plate is as thick as its own temperatures make it, so that nothing is solved for on this side.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise
from typing import Any

import numpy as np
import pytest
from ingle_addin import ask

WITHIN = 1e-9
NAMES = "peak [°C]; right face [°C]; mean [°C]; right heat out [W/m²]"
K, RHO, Q = "conductivity [W/(m·K)]", "resistivity [Ω·m]", "generation [W/m³]"


def answers(names: str, case: dict[str, Any]) -> list[Any]:
    *found, verdict, why = ask(f"{names}; verdict; why", list(case), *case.values())
    assert verdict[0] in ("no limit", "caution"), why[0]
    return [column[0] for column in found]


Points = tuple[tuple[float, float], ...]


def text(points: Points) -> str:
    return "; ".join(f"{T!r}:{y!r}" for T, y in points)


@dataclass(frozen=True)
class Plate:
    """Half thickness, heat out of each face, the mean temperature, and ∫ρ or ∫1/ρ over the half thickness."""

    half: float
    flux: float
    mean: float
    sum: float


def plate(k: Points, f: Points, inverse: bool, square: float, peak: float, face: float) -> Plate:
    """q = square · f, or square/f. In s = √(peak − T) the place has no singular end: dx = 2 k s ds/√(2 ∫kq dT)."""
    x, w = (column / 2.0 for column in np.polynomial.legendre.leggauss(24))
    x = x + 0.5

    def of(points: Points, s: np.ndarray) -> np.ndarray:
        T, y = np.array(points).T
        return np.asarray(np.interp(peak - s * s, T, y))

    def q(s: np.ndarray) -> np.ndarray:
        return square / of(f, s) if inverse else square * of(f, s)

    corners = [T for T, _ in (*k, *f) if face < T < peak]
    ends = np.sqrt(peak - np.array(sorted({peak, face, *corners}, reverse=True)))
    half = total = mean = integral = 0.0
    for a, b in pairwise(ends.tolist()):
        s = a + (b - a) * x
        # ∫kq dT from each of these places up to the peak, and from the piece's end.
        upto = [(t - a) * w @ (2.0 * u * of(k, u) * q(u)) for t in (*s, b) for u in (a + (t - a) * x,)]
        dx = (b - a) * w * 2.0 * s * of(k, s) / np.sqrt(2.0 * (total + np.array(upto[:-1])))
        half += float(dx.sum())
        mean += float(dx @ (peak - s * s))
        integral += float(dx @ (1.0 / of(f, s) if inverse else of(f, s)))
        total += float(upto[-1])
    return Plate(half, math.sqrt(2.0 * total), mean / half, integral)


CONDUCTIVITIES: dict[str, Points] = {
    "constant": ((20.0, 3.0),),
    "table": ((20.0, 2.5), (70.0, 3.4), (104.0, 3.1), (200.0, 3.3)),
}
RISING: Points = ((20.0, 1.0), (60.0, 1.2), (95.0, 1.25), (121.0, 1.6), (300.0, 1.9))


@pytest.mark.parametrize("conductivity", CONDUCTIVITIES.values(), ids=CONDUCTIVITIES)
@pytest.mark.parametrize("way", ["generation", "winding", "conductor"])
def test_a_table_with_corners_is_its_first_integral(conductivity: Points, way: str) -> None:
    """Peak at 130 °C, faces at 50 °C: three corners of the source lie between, and two of the conductivity."""
    peak, face, fluid, width, length = 130.0, 50.0, 30.0, 0.1, 0.4
    rho = tuple((T, 1e-5 * y) for T, y in RISING)
    made = tuple((T, 4e5 * y) for T, y in RISING)
    square = {"generation": 1.0, "winding": 2e5**2, "conductor": 2.2**2}[way]
    found = plate(conductivity, made if way == "generation" else rho, way == "conductor", square, peak, face)
    case: dict[str, Any] = {
        "shape": "wall", "thickness [m]": 2.0 * found.half, "width [m]": width, "length [m]": length,
        K: text(conductivity) if len(conductivity) > 1 else conductivity[0][1],
        "both film [W/(m²·K)]": found.flux / (face - fluid), "both fluid [°C]": fluid,
    }  # fmt: skip
    sources: list[dict[str, Any]] = [{Q: text(made)}]
    voltage = 0.0
    if way != "generation":
        a = math.sqrt(square)
        current = a * 2.0 * width * (found.half if way == "winding" else found.sum)
        voltage = a * length * (found.sum / found.half if way == "winding" else 1.0)
        resistivity = {RHO: text(rho), **({"turns": 1.0} if way == "winding" else {})}
        sources = [{**resistivity, "current [A]": current}, {**resistivity, "voltage [V]": voltage}]
    for source in sources:
        row = {**case, **source}
        hottest, right, mean, heat, *volts = answers(NAMES + ("; voltage [V]" if voltage else ""), row)
        assert (hottest, right, mean) == pytest.approx((peak, face, found.mean), abs=WITHIN * (peak - fluid))
        assert heat == pytest.approx(found.flux, rel=WITHIN)
        assert volts == pytest.approx([voltage] if voltage else [], rel=WITHIN)


BODIES: dict[str, dict[str, Any]] = {
    "wall": {"shape": "wall", "thickness [m]": 0.05},
    "cylinder": {"shape": "cylinder", "radius [m]": 0.03},
    "hollow cylinder": {"shape": "cylinder", "inner radius [m]": 0.01, "outer radius [m]": 0.04},
    "sphere": {"shape": "sphere", "radius [m]": 0.03},
    "hollow sphere": {"shape": "sphere", "inner radius [m]": 0.01, "outer radius [m]": 0.04},
    "bar": {"shape": "bar", "length [m]": 0.3, "diameter [m]": 0.01, "side film [W/(m²·K)]": 20.0, "side fluid [°C]": 24.0},
}
EACH_BODY = pytest.mark.parametrize("body", BODIES.values(), ids=BODIES)


@EACH_BODY
@pytest.mark.parametrize("slope", [0.006, -0.002])
def test_a_table_of_one_segment_is_a_slope(body: dict[str, Any], slope: float) -> None:
    case = {**body, K: 2.0, "right film [W/(m²·K)]": 60.0, "right fluid [°C]": 22.0}
    q = 4e4
    segment = f"-50:{q * (1 - 70 * slope)!r}; 330:{q * (1 + 310 * slope)!r}"
    sloped = answers(NAMES, {**case, Q: q, "generation slope [1/K]": slope})
    assert 26.0 < sloped[0] < 330.0
    assert answers(NAMES, {**case, Q: segment}) == pytest.approx(sloped, rel=1e-11)
    # The same line counted from another temperature.
    turned = {Q: q * (1 + 45 * slope), "generation slope [1/K]": slope / (1 + 45 * slope), "generation reference [°C]": 65.0}
    assert answers(NAMES, {**case, **turned}) == pytest.approx(sloped, rel=1e-11)
    weighed = {"specific generation [W/kg]": q / 800.0, "density [kg/m³]": 800.0, "generation slope [1/K]": slope}
    assert answers(NAMES, {**case, **weighed}) == pytest.approx(sloped, rel=1e-12)


@EACH_BODY
def test_no_slope_is_an_even_source(body: dict[str, Any]) -> None:
    case = {**body, K: 2.0, "right film [W/(m²·K)]": 60.0, "right fluid [°C]": 22.0, Q: 1.2e5}
    even = answers(NAMES, case)
    assert answers(NAMES, {**case, "generation slope [1/K]": 0.0}) == pytest.approx(even, rel=1e-12)
    assert answers(NAMES, {**case, Q: "0:1.2e5; 900:1.2e5"}) == pytest.approx(even, rel=1e-11)
    # A slope this small moves nothing but the last digits, through the formulas near z = 0.
    assert answers(NAMES, {**case, "generation slope [1/K]": 1e-13}) == pytest.approx(even, rel=1e-10)


THIN: dict[str, dict[str, Any]] = {
    "generation": {Q: 3e6, "generation slope [1/K]": 0.006},
    "winding": {RHO: 2e-8, "resistivity slope [1/K]": 0.004, "current density [A/m²]": 1.2e7, "fill factor": 0.8},
    "conductor": {RHO: 3e-6, "resistivity slope [1/K]": 0.004, "current density [A/m²]": 9e5},
}


@pytest.mark.parametrize("source", THIN.values(), ids=THIN)
def test_a_thin_walled_cylinder_approaches_the_wall_at_first_order(source: dict[str, Any]) -> None:
    """A tenth of the curvature, a tenth of the gap."""
    d = 0.01
    faces = {"left held [°C]": 30.0, "right film [W/(m²·K)]": 250.0, "right fluid [°C]": 22.0, K: 3.0}
    flat = answers("peak [°C]; mean [°C]; right face [°C]", {"shape": "wall", "thickness [m]": d, **faces, **source})
    gaps = []
    for radius in (10.0 * d, 100.0 * d, 1000.0 * d, 1e7 * d):
        shell = {"shape": "cylinder", "inner radius [m]": radius, "thickness [m]": d, **faces, **source}
        gaps.append(np.abs(np.array(answers("peak [°C]; mean [°C]; right face [°C]", shell)) - flat))
    rise = flat[0] - 22.0
    assert rise > 10.0
    assert (gaps[0] > 1e-3 * rise).all()
    assert np.log10(gaps[1] / gaps[2]) == pytest.approx(np.ones(3), abs=0.02)
    assert (gaps[3] < 1e-6 * rise).all()
