"""The wider scope of the reference against closed forms: layers, laws in temperature, radiation, currents, bars."""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
import pytest
import reference
from reference.model import SIGMA
from scipy.integrate import solve_ivp
from scipy.optimize import brentq
from scipy.special import iv, jv, kv

ZERO = 273.15


def ask(answers: list[str], text: str, *cells: object) -> list[object]:
    return reference.answers(answers, text.split(";"), [list(cells)])[0]


def one(answer: str, text: str, *cells: object) -> object:
    return ask([answer], text, *cells)[0]


def close(value: object, exact: float, scale: float) -> None:
    """Within 1e-6 of a scale."""
    assert isinstance(value, float), value
    assert abs(value - exact) < 1e-6 * scale, (value, exact)


# --- layers ---


def test_layered_cylinder_with_contact() -> None:
    """A solid core that makes heat, a contact, a sheath, a film: 1/(2πk) ln, R/(2πr), 1/(2πrh)."""
    text = (
        "shape;outer radius 1 [mm];thickness 2 [mm];conductivity [W/mK];conductivity 2 [W/mK];generation 1 [W/m³];"
        "joint 1 [m²·K/W];outer film [W/(m²·K)];outer fluid [°C];length [m]"
    )
    q, a, b = 2e6, 0.005, 0.008
    names = ["joint 1 left [°C]", "joint 1 right [°C]", "peak [°C]", "peak 2 [°C]", "right face [°C]", "heat made [W]"]
    names += ["mean 1 [°C]", "mean 2 [°C]", "peak layer", "right heat out [W/m]"]
    got = ask(names, text, "cylinder", 5.0, 3.0, 20.0, 0.3, q, 2e-4, 60.0, 25.0, 2.0)
    line = q * math.pi * a * a
    face = 25.0 + line / (2 * math.pi * b * 60.0)
    right = face + line / (2 * math.pi * 0.3) * math.log(b / a)
    left = right + line / (2 * math.pi * a) * 2e-4
    peak = left + q * a * a / (4 * 20.0)
    log_mean = (b * b * math.log(b / a) / 2 - (b * b - a * a) / 4) / ((b * b - a * a) / 2)  # of ln(b/r) is ln(b/a) less this
    mean2 = face + line / (2 * math.pi * 0.3) * (math.log(b / a) - log_mean)
    exact = [left, right, peak, right, face, 2 * line, left + q * a * a / (8 * 20.0), mean2]
    for value, number in zip(got[:5] + got[6:8], exact[:5] + exact[6:8], strict=True):
        close(value, number, peak - 25.0)
    assert got[5] == pytest.approx(2 * line, rel=1e-9)
    assert got[8] == 1
    assert got[9] == pytest.approx(line, rel=1e-9)


def test_joint_as_conductance_and_three_wall_layers() -> None:
    text = "shape;thickness [mm];thickness 2 [mm];thickness 3 [mm];conductivity 1 [W/mK];conductivity 2 [W/mK];"
    text += "conductivity 3 [W/mK];joint 2 [W/(m²·K)];generation 2 [MW/m³];left held [°C];"
    text += "right resistance [m²K/W];right held [°C]"
    heat = 1e6 * 0.02  # W/m², in the middle layer
    left, right, joint, out, peak = ask(
        ["left heat out [W/m²]", "right heat out [W/m²]", "joint 2 left [°C]", "right face [°C]", "peak 2 [°C]"],
        text,
        *("wall", 10.0, 20.0, 30.0, 1.0, 10.0, 2.0, 500.0, 1.0, 10.0, 0.01, 30.0),
    )
    ra, rb = 0.01 / 1.0, 0.03 / 2.0 + 1 / 500.0 + 0.01  # outside the middle layer
    # flux to the left and r to the right add up to q; middle layer: T1 − T2 = (r − back)·t/2k
    r = (10.0 - 30.0 + heat * ra + heat * 0.02 / 20.0) / (ra + rb + 0.02 / 10.0)
    back = heat - r
    t1, t2 = 10.0 + back * ra, 30.0 + r * rb
    assert [left, right] == pytest.approx([back, r], rel=1e-9)
    close(joint, t2, t1 - 10.0)
    close(out, 30.0 + r * 0.01, t1 - 10.0)
    place = back / 1e6
    close(peak, t1 + back * place / (2 * 10.0), t1 - 10.0)


def test_kirchhoff_slab_and_a_table_of_two_points_is_a_straight_line() -> None:
    """k = k0 (1 + b (T − Tr)), faces held: k0 (u + b u²/2) from the face is q L²/8."""
    k0, b, q, long = 4.0, 2e-3, 4e5, 0.06
    text = "shape;thickness [m];conductivity [W/mK];conductivity slope [1/K];"
    text += "conductivity reference [°C];generation [W/m³];both held [°C]"
    peak = one("peak [°C]", text, "wall", long, k0, b, 20.0, q, 20.0)
    theta = q * long**2 / 8
    rise = (-1 + math.sqrt(1 + 2 * b * theta / k0)) / b
    close(peak, 20.0 + rise, rise)
    table = "shape;thickness [m];conductivity [W/mK];generation [W/m³];both held [°C]"
    cell = f"0:{k0 * (1 - 20 * b)!r}; 1000 °C:{k0 * (1 + 980 * b)!r}".replace("0:", "0 °C:", 1)
    close(one("peak [°C]", table, "wall", long, cell, q, 20.0), 20.0 + rise, rise)
    assert one("verdict", table, "wall", long, f"0:{k0}; 30:5", q, 20.0) == "caution"
    # negative slope: no state beyond k = 0
    assert ask(["peak [°C]", "verdict"], text, "wall", long, k0, -5e-3, 20.0, 1e6, 20.0) == ["#NUM!", "runaway"]
    exact = 8 * k0 / (2 * 5e-3) / long**2
    allowed, by = ask(
        ["allowable generation [W/m³]", "limited by"], text + ";limit [°C]", "wall", long, k0, -5e-3, 20.0, q, 20.0, 900.0
    )
    assert allowed == pytest.approx(exact, rel=1e-6)
    assert by == "runaway"


# --- sources in temperature ---


@pytest.mark.parametrize("slope", [0.02, -0.02, -1.0])
@pytest.mark.parametrize("shape", ["wall", "cylinder", "sphere"])
def test_linear_sources_of_either_sign(slope: float, shape: str) -> None:
    """k ∇²u + q (1 + b u) = 0 in a solid body, face held at the reference: cos, J0, sin/r; cosh, I0, sinh/r."""
    k, q, half = 12.0, 2.0e5, 0.02
    m = math.sqrt(q * abs(slope) / k)
    hollow: dict[str, Callable[[float], float]] = {
        "wall": math.cos if slope > 0 else math.cosh,
        "cylinder": (lambda x: float(jv(0, x))) if slope > 0 else (lambda x: float(iv(0, x))),
        "sphere": (lambda x: math.sin(x) / x) if slope > 0 else (lambda x: math.sinh(x) / x),
    }
    ratio = 1.0 / hollow[shape](m * half)
    size = "thickness [m]" if shape == "wall" else "radius [m]"
    text = f"shape;{size};conductivity [W/mK];generation [W/m³];generation slope [1/K];generation reference [K];both held [K]"
    peak = one("peak [K]", text, shape, half * (2 if shape == "wall" else 1), k, q, slope, 300.0, 300.0)
    rise = (ratio - 1.0) / slope
    close(peak, 300.0 + rise, rise)
    if slope > 0:
        critical = {"wall": math.pi / 2, "cylinder": 2.404825557695773, "sphere": math.pi}[shape]
        exact = (critical / half) ** 2 * k / slope
        cells = (shape, half * (2 if shape == "wall" else 1), k, 1.5 * exact, slope, 300.0, 300.0, 1e9)
        names = ["peak [K]", "verdict", "allowable generation [W/m³]", "utilisation [%]"]
        got = ask(names, text + ";limit [K]", *cells)
        assert got[:2] == ["#NUM!", "runaway"]
        assert got[2] == pytest.approx(exact, rel=2e-5)
        assert got[3] == pytest.approx(150.0, rel=2e-5)


def test_hollow_cylinder_with_a_source_falling_in_temperature() -> None:
    """Bore insulated, outside held: A I0 + B K0."""
    k, q, b, a, c = 3.0, 1e6, 0.01, 0.01, 0.03
    m = math.sqrt(q * b / k)
    matrix = [[iv(1, m * a), -kv(1, m * a)], [iv(0, m * c), kv(0, m * c)]]
    one_, two = np.linalg.solve(matrix, [0.0, -1.0 / b])
    rise = 1.0 / b + one_ * iv(0, m * a) + two * kv(0, m * a)
    text = "shape;inner radius [m];outer radius [m];conductivity [W/mK];generation [W/m³];"
    text += "generation slope [1/K];outer held [°C]"
    close(one("left face [°C]", text, "cylinder", a, c, k, q, -b, 20.0), 20.0 + rise, rise)


def test_generation_table_is_a_straight_law_between_its_points() -> None:
    text = "shape;thickness [m];conductivity [W/mK];generation [kW/m³];both held [K]"
    k, q, b, half = 12.0, 2e5, 0.01, 0.02
    rise = (1 / math.cos(math.sqrt(q * b / k) * half) - 1) / b
    cell = f"300 K:{q / 1000!r}; 500 K:{q * (1 + 200 * b) / 1000!r}"
    close(one("peak [K]", text, "wall", 2 * half, k, cell, 300.0), 300.0 + rise, rise)
    held = one("peak [K]", text, "wall", 2 * half, k, f"250 K:{q / 2000}; 260 K:{q / 1000}", 300.0)
    close(held, 300.0 + q * half**2 / (2 * k), q * half**2 / (2 * k))


# --- faces ---


def test_slab_with_film_radiation_and_flux_behind_a_resistance() -> None:
    text = "shape;thickness [m];conductivity [W/mK];generation [W/m³];right film [W/m²K];"
    text += "right fluid [K];right emissivity;"
    text += "right surroundings [K];right flux in [W/m²];right resistance [m²K/W];left flux in [W/m²]"
    q, long, k = 5e4, 0.05, 1.5
    through = q * long + 700.0
    names = ["right face [K]", "left face [K]", "right heat out [W/m²]", "left heat out [W/m²]", "balance [%]"]

    def outer(around: float) -> float:
        def miss(t: float) -> float:
            return 8.0 * (t - 310.0) + 0.7 * SIGMA * (t**4 - around**4) - 300.0 - through

        return float(brentq(miss, 200.0, 5000.0, xtol=1e-12))

    for cell, around in ((250.0, 250.0), (None, 310.0)):
        right, left, out, put, balance = ask(names, text, "wall", long, k, q, 8.0, 310.0, 0.7, cell, 300.0, 0.02, 700.0)
        face = outer(around) + through * 0.02
        close(right, face, 500.0)
        close(left, face + 700.0 * long / k + q * long**2 / (2 * k), 500.0)
        assert out == pytest.approx(through, rel=1e-7)
        assert put == pytest.approx(-700.0, rel=1e-9)
        assert balance < 1e-4


def test_resistance_to_a_fluid_alone_is_the_path() -> None:
    text = "shape;thickness [m];conductivity [W/mK];generation [W/m³];right fluid [K];right resistance [W/(m²·K)]"
    assert one("right face [K]", text, "wall", 0.1, 2.0, 1e4, 300.0, 50.0) == pytest.approx(300.0 + 1e3 / 50.0, rel=1e-9)


def test_radiation_of_a_solid_sphere_through_its_sheath() -> None:
    text = "shape;outer diameter 1 [m];outer radius 2 [m];conductivity [W/mK];conductivity 2 [W/mK];power [W];"
    text += "outer emissivity;outer surroundings [°C]"
    a, b, p = 0.01, 0.014, 3.0
    face = (p / (4 * math.pi * b * b * 0.9 * SIGMA) + 300.0**4) ** 0.25
    inside = face + p / (4 * math.pi * 0.2) * (1 / a - 1 / b)
    peak = inside + p / (4 / 3 * math.pi * a**3) * a * a / 6 / 5.0
    close(one("peak [K]", text, "sphere", 2 * a, b, 5.0, 0.2, p, 0.9, 300.0 - ZERO), peak, peak - 300.0)


# --- currents ---


def test_uniform_field_in_a_cylinder_by_fine_integration() -> None:
    """A solid conductor whose resistivity rises: shot from the middle, the field set by the current."""
    k, rho, b, radius, field, middle = 15.0, 7e-7, 4e-3, 0.012, 1.6, 480.0

    def slopes(r: float, y: list[float]) -> list[float]:
        carried = 1.0 / (rho * (1 + b * (y[0] - 293.15)))
        return [-y[1] / (max(r, 1e-12) * k), field**2 * carried * r, carried * r]

    got = solve_ivp(slopes, (0.0, radius), [middle, 0.0, 0.0], method="DOP853", rtol=1e-12, atol=1e-14)
    face, heat, share = (float(y[-1]) for y in got.y)
    amps, h = 2 * math.pi * share * field, heat / radius / (face - 300.0)
    assert middle - face > 5.0
    text = "shape;diameter [m];conductivity [W/mK];resistivity [Ω·m];"
    text += "resistivity slope [1/K];current [A];outer film [W/m²K];outer fluid [K];length [m]"
    names = ["peak [K]", "right face [K]", "voltage [V]", "resistance [mΩ]", "heat made [W]"]
    peak, right, volt, ohm, made = ask(names, text, "cylinder", 2 * radius, k, rho, b, amps, h, 300.0, 2.5)
    close(peak, middle, middle - 300.0)
    close(right, face, middle - 300.0)
    assert volt == pytest.approx(2.5 * field, rel=2e-6)
    assert ohm == pytest.approx(2500.0 * field / amps, rel=2e-6)
    assert made == pytest.approx(2.5 * field * amps, rel=2e-6)
    again = text.replace("current [A]", "voltage [V]")
    close(one("peak [K]", again, "cylinder", 2 * radius, k, rho, b, 2.5 * field, h, 300.0, 2.5), middle, middle - 300.0)
    dense = text.replace("current [A]", "current density [A/mm²]")
    density = amps / (math.pi * radius**2) / 1e6
    close(one("peak [K]", dense, "cylinder", 2 * radius, k, rho, b, density, h, 300.0, 2.5), middle, middle - 300.0)


def test_allowable_current_of_a_wire_at_one_temperature_and_where_it_runs_away() -> None:
    """A thin, well conducting wire: I² ρ(T)/A = h P (T − Tf)."""
    text = "shape;radius [mm];conductivity [W/mK];resistivity [Ω·m];resistivity slope [1/K];"
    text += "current [A];outer film [W/m²K];outer fluid [°C];limit [°C]"
    names = ["allowable current [A]", "limited by", "utilisation [%]", "verdict"]
    rho, b, r, h = 1.7e-8, 3.9e-3, 5e-4, 20.0
    heat = h * 2 * math.pi * r * math.pi * r * r / rho
    exact = math.sqrt(heat * 70.0 / (1 + b * 70.0))
    got = ask(names, text, "cylinder", 0.5, 4e8, rho, b, 10.0, h, 20.0, 90.0)
    assert got[0] == pytest.approx(exact, rel=1e-7)
    assert got[1:] == ["limit", pytest.approx(1000.0 / exact, rel=1e-7), "ok"]
    worst = math.sqrt(heat / b)
    assert ask(names, text, "cylinder", 0.5, 4e8, rho, b, 1.01 * worst, h, 20.0, 90.0)[3] == "runaway"
    assert ask(names, text, "cylinder", 0.5, 4e8, rho, b, 0.99 * worst, h, 20.0, 90.0)[3] == "over limit"
    blank = ask(names, text, "cylinder", 0.5, 4e8, rho, b, None, h, 20.0, 90.0)
    assert blank[0] == pytest.approx(exact, rel=1e-7)
    assert blank[1:] == ["limit", "#N/A", "no answer"]


def test_falling_resistivity_under_a_voltage_turns() -> None:
    """q = E²/(ρ0 (1 − b u)) against h u: u (1 − b u) is greatest at u = 1/2b."""
    text = "shape;radius [mm];conductivity [W/mK];resistivity [Ω·m];resistivity slope [1/K];resistivity reference [°C];"
    text += "voltage [V];outer film [W/m²K];outer fluid [°C];limit [°C];length [m]"
    rho, b, r, h, long = 1e-4, 5e-3, 5e-3, 30.0, 0.7
    exact = long * math.sqrt(2 * h / r * rho / (4 * b))
    got = ask(["allowable voltage [V]", "limited by"], text, "cylinder", 5.0, 4e8, rho, -b, 20.0, 1.0, h, 20.0, 500.0, long)
    assert got == [pytest.approx(exact, rel=1e-6), "runaway"]
    limit = ask(["allowable voltage [V]", "limited by"], text, "cylinder", 5.0, 4e8, rho, -b, 20.0, 1.0, h, 20.0, 80.0, long)
    assert limit == [pytest.approx(long * math.sqrt(2 * h / r * rho * 60 * (1 - b * 60)), rel=1e-7), "limit"]


def test_windings() -> None:
    """q = ac · fill · ρ J² with J = turns I/(fill section); ohms of all turns."""
    text = "shape;inner radius [m];outer radius [m];conductivity [W/mK];resistivity [Ω·m];"
    text += "current [A];turns;fill factor;"
    text += "ac ratio [-];length [m];both held [°C]"
    a, b, rho, amps, turns, fill, long = 0.02, 0.05, 2e-8, 3.0, 400.0, 0.6, 0.1
    section = (b - a) * long
    made, ohm, volt = ask(
        ["heat made [W]", "resistance [Ω]", "voltage [V]"],
        *(text, "cylinder", a, b, 1.0, rho, amps, turns, fill, 1.2, long, 20.0),
    )
    ohms = 1.2 * turns * rho * math.pi * (a + b) / (fill * section / turns)  # of alternating current
    assert ohm == pytest.approx(ohms, rel=1e-9)
    assert volt == pytest.approx(ohms * amps, rel=1e-9)
    assert made == pytest.approx(ohms * amps**2, rel=1e-9)


def test_current_in_one_layer_of_a_wall() -> None:
    text = "shape;thickness [mm];thickness 2 [mm];conductivity [W/mK];conductivity 2 [W/mK];"
    text += "current 2 [A];resistivity 2 [µΩ·cm];"
    text += "width [mm];length [m];left film [W/m²K];left fluid [°C]"
    heat, ohm, peak = ask(
        ["heat made [W/m²]", "resistance [Ω]", "peak layer"], text, "wall", 1.0, 2.0, 0.3, 390.0, 50.0, 2.0, 30.0, 0.4, 20.0, 25.0
    )
    exact = 2e-8 * 0.4 / (0.03 * 0.002)
    assert ohm == pytest.approx(exact, rel=1e-9)
    assert heat == pytest.approx(2500.0 * exact / (0.03 * 0.4), rel=1e-9)
    assert peak == 2


# --- bars ---


@pytest.mark.parametrize("stiff", [0.3, 3.0, 30.0, 300.0])
def test_fins(stiff: float) -> None:
    """One end held, the other insulated, heat from the sides: cosh; the heat through the root is √(hPkA) tanh mL."""
    k, d, long = 50.0, 0.01, 0.4
    h = k * d / 4 * (stiff / long) ** 2
    text = "shape;diameter [mm];length [m];conductivity [W/mK];generation [W/m³];"
    text += "side film [W/m²K];side fluid [°C];left held [°C];probe [m]"
    names = ["right face [°C]", "left heat out [W]", "side heat out [W]", "mean [°C]", "probe temperature [°C]"]
    right, left, side, mean, probe = ask(names, text, "bar", 10.0, long, k, 0.0, h, 20.0, 120.0, 0.1)
    close(right, 20.0 + 100.0 / math.cosh(stiff), 100.0)
    root = math.sqrt(h * math.pi * d * k * math.pi * d * d / 4) * 100.0 * math.tanh(stiff)
    assert side == pytest.approx(root, rel=1e-6)
    assert left == pytest.approx(-root, rel=1e-6)
    close(mean, 20.0 + 100.0 * math.tanh(stiff) / stiff, 100.0)
    close(probe, 20.0 + 100.0 * math.cosh(stiff * 0.75) / math.cosh(stiff), 100.0)


def test_bar_with_current_between_terminals_and_contacts() -> None:
    """Ends held at one temperature, sides insulated, ρ rising: cos; contacts heat a film-cooled end."""
    k, rho, b, long, amps = 380.0, 1.8e-8, 3.9e-3, 0.5, 900.0
    area = 0.03 * 0.005
    density = amps / area
    m = math.sqrt(density**2 * rho * b / k)
    rise = (1 / math.cos(m * long / 2) - 1) / b
    text = "shape;width [mm];thickness [mm];length [m];conductivity [W/mK];current [A];"
    text += "resistivity [Ω·m];resistivity slope [1/K];both held [°C]"
    peak, volt = ask(["peak [°C]", "voltage [V]"], text, "bar", 30.0, 5.0, long, k, amps, rho, b, 20.0)
    close(peak, 20.0 + rise, rise)
    mean = math.tan(m * long / 2) / (m * long / 2)
    assert volt == pytest.approx(amps * rho * long / area * mean, rel=2e-6)
    same = text.replace("current [A]", "voltage [V]")
    close(one("peak [°C]", same, "bar", 30.0, 5.0, long, k, volt, rho, b, 20.0), 20.0 + rise, rise)
    ends = "shape;section [mm²];length [m];conductivity [W/mK];current [A];"
    ends += "resistivity [Ω·m];right contact [µΩ];right film [W/m²K];right fluid [°C]"
    right, out = ask(["right face [°C]", "right heat out [W]"], ends, "bar", 150.0, long, k, amps, rho, 10.0, 5e3, 20.0)
    made = amps**2 * rho * long / area
    assert right == pytest.approx(20.0 + (made + amps**2 * 1e-5) / (5e3 * area), rel=1e-9)
    assert out == pytest.approx(made, rel=1e-6)


def test_bar_radiating_from_its_sides_at_one_temperature() -> None:
    text = "shape;diameter [mm];length [m];conductivity [W/mK];power [W];side emissivity;side surroundings [K]"
    face = (40.0 / (math.pi * 0.02 * 0.5 * 0.8 * SIGMA) + 290.0**4) ** 0.25
    assert one("peak [K]", text, "bar", 20.0, 0.5, 100.0, 40.0, 0.8, 290.0) == pytest.approx(face, rel=1e-9)


# --- allowables of several sources ---


def test_sources_of_one_kind_scale_together_and_others_stay() -> None:
    text = "shape;thickness [m];thickness 2 [m];conductivity [W/mK];conductivity 2 [W/mK];"
    text += "generation [W/m³];generation 2 [W/m³];"
    text += "power 2 [W];area [m²];right held [°C];limit [°C]"
    names = ["allowable generation [W/m³]", "allowable power [W]", "utilisation [%]", "peak [°C]"]
    got = ask(names, text, "wall", 0.1, 0.1, 2.0, 2.0, 1000.0, 3000.0, None, 1.0, 20.0, 100.0)
    rise = 1000.0 * 0.1 * 0.1 / 2 + 1000.0 * 0.01 / 4 + 3000.0 * 0.01 / 4
    assert got[3] == pytest.approx(20.0 + rise, rel=1e-9)
    assert got[0] == pytest.approx(1000.0 * 80.0 / rise, rel=1e-7)
    assert got[1] == "#N/A"
    assert got[2] == pytest.approx(rise / 80.0 * 100.0, rel=1e-7)
    mixed = ask(names, text, "wall", 0.1, 0.1, 2.0, 2.0, 1000.0, None, 300.0, 1.0, 20.0, 100.0)
    by_power = 300.0 / 0.1 * 0.01 / 4
    assert mixed[0] == pytest.approx(1000.0 * (80.0 - by_power) / 7.5, rel=1e-7)
    assert mixed[1] == pytest.approx(300.0 * (80.0 - 7.5) / by_power, rel=1e-7)
