"""Currents in walls and cylinders: a uniform field in conductors, equal density in windings, against their closed forms.

Sizes and properties are chosen here. A manufactured case: temperatures are chosen, and the film and current that make them
follow from the closed form, so that nothing is solved for on this side.
"""

from __future__ import annotations

from typing import Any

import mpmath as mp
import numpy as np
import pytest
from exact_currents import DIGITS, ExactCoil, cylinder_of_uniform_field, slab_of_uniform_field
from ingle_addin import ask
from scipy.integrate import solve_ivp

WITHIN = 1e-9  # of the rise
RHO, SLOPE, K = "resistivity [Ω·m]", "resistivity slope [1/K]", "conductivity [W/(m·K)]"


def answers(names: str, case: dict[str, Any]) -> list[Any]:
    *found, verdict, why = ask(f"{names}; verdict; why", list(case), *case.values())
    assert verdict[0] in ("no limit", "ok"), why[0]
    return [column[0] for column in found]


def close(got: Any, want: Any, scale: Any) -> bool:
    return abs(mp.mpf(float(got)) - want) <= WITHIN * abs(scale)


@pytest.mark.parametrize("k", [2.0, 6.0])
@pytest.mark.parametrize("drop", [24.0, 150.0])
@pytest.mark.parametrize("way", ["current [A]", "voltage [V]", "current density [A/m²]"])
def test_a_poor_conductor_has_a_uniform_field(k: float, drop: float, way: str) -> None:
    """A slab whose centre is 24 K, or 150 K, above its faces; resistivity rises by 0.0025 a kelvin."""
    a, width, length, ac, fluid, face = 0.006, 0.05, 0.3, 1.25, 20.0, 120.0
    with mp.workdps(DIGITS):
        # c of the closed form counts the AC ratio: E here is √ac times the field that drives the current.
        wire = slab_of_uniform_field(*(mp.mpf(x) for x in (a, k, 1e-5, 0.0025, 20.0, face + drop, face)))
        E = wire.E / mp.sqrt(ac)
        heat = 2 * wire.flux  # by both faces, per area
        current = heat * width / (ac * E)
        given = {"current [A]": current, "voltage [V]": ac * E * length, "current density [A/m²]": current / (2 * a * width)}
        case = {
            "shape": "wall", "thickness [m]": 2 * a, "width [m]": width, "length [m]": length, K: k, RHO: 1e-5, SLOPE: 0.0025,
            "ac ratio": ac, way: float(given[way]), "both film [W/(m²·K)]": float(wire.flux / (face - fluid)),
            "both fluid [°C]": fluid,
        }  # fmt: skip
        names = "peak [°C]; right face [°C]; mean [°C]; voltage [V]; resistance [Ω]; heat made [W/m²]; balance [%]"
        peak, right, mean, voltage, resistance, made, balance = answers(names, case)
        assert close(peak, mp.mpf(face + drop), drop)
        assert close(right, mp.mpf(face), drop)
        assert close(mean, wire.mean, drop)
        assert close(voltage, ac * E * length, voltage)
        assert close(resistance, ac * E * length / current, resistance)
        assert close(made, heat, heat)
        assert balance <= 1e-9
    # The same current shared out evenly over the section, as through one turn, makes other temperatures.
    even = dict(case)
    for heading in given:
        even.pop(heading, None)
    (hottest,) = answers("peak [°C]", {**even, "current [A]": float(given["current [A]"]), "turns": 1.0})
    assert hottest - peak > (0.4 if drop == 24.0 else 10.0)


@pytest.mark.parametrize("k", [2.0, 4.0, 6.0])
@pytest.mark.parametrize("way", ["current [A]", "voltage [V]", "current density [A/m²]"])
def test_a_round_poor_conductor_has_a_uniform_field(k: float, way: str) -> None:
    """Its centre at 144 °C; the field is such that its face is about 24 K colder whatever its conductivity."""
    R, length, fluid, centre = 0.008, 1.5, 20.0, 144.0
    with mp.workdps(DIGITS):
        E = mp.sqrt(24 * 4 * mp.mpf(k) * 1e-5 * mp.mpf("1.31")) / R
        wire = cylinder_of_uniform_field(*(mp.mpf(x) for x in (R, k, 1e-5, 0.0025, 20.0, centre)), E)
        assert 20 < centre - wire.face < 28
        current = 2 * mp.pi * R * wire.flux / E
        given = {"current [A]": current, "voltage [V]": E * length, "current density [A/m²]": current / (mp.pi * mp.mpf(R) ** 2)}
        case = {
            "shape": "cylinder", "radius [m]": R, "length [m]": length, K: k, RHO: 1e-5, SLOPE: 0.0025, way: float(given[way]),
            "right film [W/(m²·K)]": float(wire.flux / (wire.face - fluid)), "right fluid [°C]": fluid,
        }  # fmt: skip
        names = "peak [°C]; right face [°C]; mean [°C]; voltage [V]; resistance [Ω]; heat made [W]"
        peak, face, mean, voltage, resistance, made = answers(names, case)
        for got, want, scale in (
            (peak, mp.mpf(centre), 24), (face, wire.face, 24), (mean, wire.mean, 24), (voltage, E * length, voltage),
            (resistance, E * length / current, resistance), (made, E * length * current, made),
        ):  # fmt: skip
            assert close(got, want, scale)


def test_the_uniform_field_against_an_integrator() -> None:
    """A hollow cylinder of rising resistivity and conductivity, radiating: Runge-Kutta outward from the bore chosen.

    The film is the one that takes what the integrated heat leaves to it.
    """
    a, b, E, length, bore, e, fluid = 0.004, 0.012, 10.0, 0.8, 310.0, 0.3, 30.0

    def slopes(r: float, y: np.ndarray) -> list[float]:
        k, rho = 3.0 * (1.0 + 0.001 * (y[0] - 20.0)), 2e-5 * (1.0 + 0.0025 * (y[0] - 20.0))
        return [-y[1] / (k * r), r * E * E / rho]

    track = solve_ivp(slopes, (a, b), [bore, 0.0], "DOP853", rtol=1e-13, atol=1e-13, max_step=(b - a) / 50)
    face, Q = track.y[:, -1]
    radiated = e * 5.670374419e-8 * ((face + 273.15) ** 4 - (fluid + 273.15) ** 4)  # CODATA 2018
    h = (Q / b - radiated) / (face - fluid)
    assert h > 5.0
    assert bore - face > 15.0
    case = {
        "shape": "cylinder", "inner radius [m]": a, "outer radius [m]": b, "length [m]": length, K: 3.0,
        "conductivity slope [1/K]": 0.001, RHO: 2e-5, SLOPE: 0.0025, "voltage [V]": E * length, "right film [W/(m²·K)]": h,
        "right fluid [°C]": fluid, "right emissivity": e,
    }  # fmt: skip
    peak, right, heat, resistance = answers("peak [°C]; right face [°C]; right heat out [W/m]; resistance [Ω]", case)
    assert peak == pytest.approx(bore, abs=WITHIN * (bore - fluid))
    assert right == pytest.approx(face, abs=WITHIN * (bore - fluid))
    assert heat == pytest.approx(2.0 * np.pi * Q, rel=WITHIN)
    assert resistance == pytest.approx((E * length) ** 2 / (2.0 * np.pi * Q * length), rel=WITHIN)


COIL = {"shape": "cylinder", "radius [m]": 0.03, "length [m]": 0.1, K: 1.5, RHO: 1.72e-8, SLOPE: 0.00393, "turns": 500.0,
        "fill factor": 0.6, "ac ratio": 1.1, "right film [W/(m²·K)]": 12.0, "right fluid [°C]": 25.0}  # fmt: skip


@pytest.mark.parametrize("share", [0.02, 0.3, 0.9, 0.97])
@pytest.mark.parametrize("way", ["current [A]", "voltage [V]", "current density [A/m²]"])
def test_a_winding_carries_one_density(share: float, way: str) -> None:
    """At shares of the current that runs away: J = turns · I/(fill · section); the voltage is that of all turns in series."""
    R, length, turns, fill, ac = 0.03, 0.1, 500, 0.6, 1.1
    with mp.workdps(DIGITS):
        biot = mp.mpf(12) * R / mp.mpf(1.5)
        zeta = mp.findroot(lambda z: z * mp.besselj(1, z) - biot * mp.besselj(0, z), 0.7)
        heat = mp.mpf(ac) * mp.mpf(fill)
        most = zeta / R * mp.sqrt(mp.mpf(1.5) / (heat * mp.mpf(1.72e-8) * mp.mpf(0.00393)))
        J = share * most
        coil = ExactCoil(*(mp.mpf(x) for x in (R, 1.5, 1.72e-8, 0.00393, 20.0)), heat, J, mp.mpf(12), mp.mpf(25))
        current = J * fill * R * length / turns
        # Each turn has turns⁻¹ of the conductor's section fill · R · length, and is 2πr long: ∫2πr ρ dr/R = πR ρ(mean).
        rho = mp.mpf(1.72e-8) * (1 + mp.mpf(0.00393) * (coil.mean - 20))
        resistance = ac * turns * mp.pi * R * rho * turns / (mp.mpf(fill) * R * length)
        volume = mp.pi * mp.mpf(R) ** 2 * length
        given = {"current [A]": current, "voltage [V]": current * resistance, "current density [A/m²]": J}
        case = {**COIL, way: float(given[way])}
        names = "peak [°C]; right face [°C]; mean [°C]; voltage [V]; resistance [Ω]; heat made [W]"
        peak, face, mean, voltage, ohms, made = answers(names, case)
        # Near runaway a last digit of the current moves everything: by 1/(1 − share²) of it.
        rise = (coil.T(0) - 25) / (1 - share**2)
        for got, want, scale in (
            (peak, coil.T(mp.mpf(0)), rise), (face, coil.T(mp.mpf(R)), rise), (mean, coil.mean, rise),
            (voltage, current * resistance, voltage / (1 - share**2)), (ohms, resistance, ohms / (1 - share**2)),
            (made, heat * rho * J**2 * volume, made / (1 - share**2)),
        ):  # fmt: skip
            assert close(got, want, scale)
        assert close(made, mp.mpf(float(voltage)) * mp.mpf(float(voltage)) / mp.mpf(float(ohms)), made)


def test_a_hollow_winding_of_even_resistivity() -> None:
    """R = ρ turns² π (b² − a²)/(fill d² length), to the last digits; through a wall each turn is as long as the wall."""
    a, b, length, turns, fill, ac, amps = 0.02, 0.05, 0.12, 240.0, 0.55, 1.3, 3.0
    case = {
        "shape": "cylinder", "inner radius [m]": a, "outer radius [m]": b, "length [m]": length, K: 0.9, RHO: 2.9e-8, "turns": turns,
        "fill factor": fill, "ac ratio": ac, "current [A]": amps, "right held [°C]": 30.0,
    }  # fmt: skip
    voltage, resistance, made = answers("voltage [V]; resistance [Ω]; heat made [W]", case)
    want = ac * 2.9e-8 * turns**2 * np.pi * (b * b - a * a) / (fill * (b - a) ** 2 * length)
    assert resistance == pytest.approx(want, rel=1e-13)
    assert (voltage, made) == pytest.approx((amps * want, amps * amps * want), rel=1e-13)
    wall = {
        "shape": "wall", "thickness [m]": 0.03, "width [m]": 0.2, "length [m]": 0.4, "area [m²]": 0.08, K: 0.9, RHO: 2.9e-8,
        "turns": turns, "fill factor": fill, "ac ratio": ac, "current [A]": amps, "right held [°C]": 30.0,
    }  # fmt: skip
    voltage, resistance, made = answers("voltage [V]; resistance [Ω]; heat made [W]", wall)
    want = ac * 2.9e-8 * turns**2 * 0.4 / (fill * 0.03 * 0.2)
    assert (resistance, voltage, made) == pytest.approx((want, amps * want, amps * amps * want), rel=1e-13)


CONDUCTOR = {"shape": "wall", "thickness [m]": 0.02, "width [m]": 0.1, "length [m]": 0.5, "area [m²]": 0.05, K: 5.0, RHO: 1e-5,
             SLOPE: 0.0025, "both film [W/(m²·K)]": 80.0, "both fluid [°C]": 20.0}  # fmt: skip
BAR = {"shape": "bar", "length [m]": 0.4, "section [m²]": 2e-4, "perimeter [m]": 0.09, K: 300.0, RHO: 2e-8, SLOPE: 0.0039,
       "left held [°C]": 40.0, "right held [°C]": 55.0, "side film [W/(m²·K)]": 9.0, "side fluid [°C]": 25.0}  # fmt: skip
EVERY = {
    "conductor in a wall": (CONDUCTOR, 40.0),
    "conductor in a cylinder": (
        {"shape": "cylinder", "radius [m]": 0.01, "length [m]": 0.5, K: 5.0, RHO: 1e-5, SLOPE: 0.0025, "right film [W/(m²·K)]": 80.0,
         "right fluid [°C]": 20.0}, 30.0),
    "winding in a wall": ({**CONDUCTOR, RHO: 2e-8, "turns": 30.0, "fill factor": 0.7}, 40.0),
    "winding in a cylinder": (COIL, 4.0),
    "bar": (BAR, 300.0),
}  # fmt: skip
EACH = pytest.mark.parametrize("case", EVERY.values(), ids=EVERY)


@EACH
@pytest.mark.parametrize("ac", [1.0, 1.37])
def test_a_voltage_is_the_current_that_it_drives(case: tuple[dict[str, Any], float], ac: float) -> None:
    """V = I · R, heat = V · I whatever the AC ratio, and the voltage answered put back instead gives the same temperatures."""
    row, amps = case
    row = {**row, "ac ratio": ac}
    names = "voltage [V]; resistance [Ω]; heat made [W]; peak [°C]; mean [°C]; right face [°C]"
    voltage, resistance, made, *temperatures = answers(names, {**row, "current [A]": amps})
    assert voltage == pytest.approx(amps * resistance, rel=1e-13)
    assert made == pytest.approx(voltage * amps, rel=1e-12)
    again = answers(names, {**row, "voltage [V]": voltage})
    assert again[:3] == pytest.approx([voltage, resistance, made], rel=1e-11)
    assert again[3:] == pytest.approx(temperatures, abs=1e-11 * (temperatures[0] - 20.0))
    # The AC ratio is heat: the square root of it less current makes the same temperatures.
    if ac > 1.0:
        (plain,) = answers("peak [°C]", {**row, "ac ratio": 1.0, "current [A]": amps * ac**0.5})
        assert plain == pytest.approx(temperatures[0], abs=1e-11 * (plain - 20.0))


@EACH
def test_the_sign_of_a_current_turns_the_voltage_alone(case: tuple[dict[str, Any], float]) -> None:
    row, amps = {**case[0], "limit [°C]": 400.0}, case[1]
    names = "voltage [V]; utilisation [%]; resistance [Ω]; heat made [W]; peak [°C]; mean [°C]; allowable current [A]; headroom [K]"
    there, back = (answers(names, {**row, "current [A]": sign * amps}) for sign in (1.0, -1.0))
    assert back == [-there[0], -there[1], *there[2:]]
    assert there[1] == pytest.approx(100.0 * amps / there[6], rel=1e-13)


@EACH
def test_no_slope_is_a_constant_resistivity(case: tuple[dict[str, Any], float]) -> None:
    row, amps = {**case[0], "current [A]": case[1]}, case[1]
    names = "peak [°C]; mean [°C]; voltage [V]; heat made [W]; resistance [Ω]"
    sloped = answers(names, {**row, SLOPE: 0.0})
    del row[SLOPE]
    flat = answers(names, row)
    table = answers(names, {**row, RHO: f"0:{row[RHO]}; 5000:{row[RHO]}"})
    assert sloped == pytest.approx(flat, rel=1e-13)
    assert table == pytest.approx(flat, rel=1e-12)
    assert amps * flat[2] == pytest.approx(flat[3], rel=1e-13)
