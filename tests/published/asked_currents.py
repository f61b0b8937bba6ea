"""The published figures of currents and of sources linear in temperature, asked by headings."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np
from ingle_addin import ask

from published.asking import answered
from published.check import Check, Number

Pair = tuple[Number, Any]  # what is printed, and what is answered

FOOT, INCH = 0.3048, 0.0254
_SHAPES = ("slab", "cylinder", "sphere")


def _body(shape: str, a: float) -> dict[str, Any]:
    """Of half thickness or radius a."""
    return {"shape": "wall", "thickness [m]": 2.0 * a} if shape == "slab" else {"shape": shape, "radius [m]": a}


def _critical(answer: str, case: dict[str, Any], slope: float, reference: float) -> float:
    """What the square of an allowable, or a generation, tends to as the limit rises without end.

    u = 1/[1 + slope (limit − reference)]: the source is a power series in u, of which two limits give the first two terms.
    """
    limits = np.array([4000.0, 8000.0])
    given = {**case, "limit [°C]": limits}
    found, why = ask(f"{answer}; why", list(given), *given.values())
    assert (why == "ok").all(), why[0]
    source = found if "generation" in answer else found * found
    u = 1.0 / (1.0 + slope * (limits - reference))
    return float((source[1] * u[0] - source[0] * u[1]) / (u[0] - u[1]))


def critical_fixed_faces(c: Check) -> list[Pair]:
    """Sizes, k and β are chosen; the answer does not depend on them."""
    a, k, slope, level = 0.02, 1.6, 1000.0, 30.0
    pairs = []
    for shape in _SHAPES:
        case = {
            **_body(shape, a),
            "conductivity [W/(m·K)]": k,
            "generation [W/m³]": 1e-3,
            "generation slope [1/K]": slope,
            "generation reference [°C]": level,
            "both held [°C]": level,
        }
        q = _critical("allowable generation [W/m³]", case, slope, level)
        pairs.append((c.number(shape), slope * q * a * a / k))
    return pairs


def critical_convective(c: Check) -> list[Pair]:
    """ζ₁ is the root of β q a²/k at runaway."""
    a, k, slope, level = 0.02, 1.6, 1000.0, 30.0
    pairs = []
    for shape in _SHAPES:
        roots = []
        for biot in c.given("Bi"):
            case = {
                **_body(shape, a),
                "conductivity [W/(m·K)]": k,
                "generation [W/m³]": 1e-6,
                "generation slope [1/K]": slope,
                "generation reference [°C]": level,
                "both film [W/(m²·K)]": biot * k / a,
                "both fluid [°C]": level,
            }
            q = _critical("allowable generation [W/m³]", case, slope, level)
            roots.append(math.sqrt(slope * q * a * a / k))
        pairs.append((c.number(f"{shape} zeta1"), roots))
    return pairs


def linear_source(c: Check) -> list[Pair]:
    """Two sources q = q₀[1 + β (T − T_s)] with a √(β q₀/k) = m; sizes, k and β are chosen."""
    a, k, slope, level = 0.03, 2.0, 0.008, 45.0
    q0 = c.given("m =") ** 2 * k / (slope * a * a)
    peaks, fluxes = {}, {}
    for shape in _SHAPES:
        case = {
            **_body(shape, a),
            "conductivity [W/(m·K)]": k,
            "generation [W/m³]": q0,
            "generation slope [1/K]": slope,
            "generation reference [°C]": level,
            "both held [°C]": level,
        }
        peak, flux = answered("peak [°C]; right heat out [W/m²]", case)
        peaks[shape], fluxes[shape] = slope * (peak - level), flux / (q0 * a)
    return [
        (c.number("slab beta"), peaks["slab"]),
        (c.number("cylinder 1/J0"), peaks["cylinder"]),
        (c.number("sphere m/sin m"), peaks["sphere"]),
        (c.number("slab heat out"), fluxes["slab"]),
        (c.number("cylinder face flux"), fluxes["cylinder"]),
    ]


def lorenz(c: Check) -> list[Pair]:
    """Where k ρ = L₀ T, the voltage over a bar of equal ends and bare of side losses is U² = 4 L₀ (T_max² − T_end²).

    The relation is Kohlrausch's (1900), whatever the bar's size and k; T in kelvin.
    """
    boltzmann, charge = c.given("k_B")
    number = math.pi**2 / 3.0 * (boltzmann / charge) ** 2
    k, end = 380.0, 300.0
    case = {
        "shape": "bar",
        "length [m]": 0.2,
        "diameter [mm]": 4.0,
        "conductivity [W/(m·K)]": k,
        "resistivity [Ω·m]": number * 293.15 / k,
        "resistivity slope [1/K]": 1.0 / 293.15,
        "voltage [V]": 0.1,
        "both held [K]": end,
    }
    (hottest,) = answered("peak [K]", case)
    return [(c.number("L0"), 0.1**2 / (4.0 * (hottest**2 - end**2)))]


def cable(c: Check) -> list[Pair]:
    """A kilometre of round wire held at the temperature: the resistance of a current too small to warm it."""
    areas = {"630": (630e-6, c.given("copper class 2")), "10": (10e-6, c.given("10 mm2"))}

    def resistance(size: str, slope: float, T: float) -> float:
        area, cold = areas[size]
        case = {
            "shape": "cylinder",
            "diameter [m]": 2.0 * math.sqrt(area / math.pi),
            "length [km]": 1.0,
            "conductivity [W/(m·K)]": 390.0,
            "current [A]": 1e-3,
            "resistivity [Ω·m]": cold * area / 1e3,
            "resistivity slope [1/K]": slope,
            "right held [°C]": T,
        }
        return float(answered("resistance [Ω]", case)[0])

    alpha = c.given("alpha20")
    rounded = 0.004  # what the standard's own table is of: see the check's note
    return [
        (c.number("R at 90"), resistance("630", alpha, 90.0)),
        (c.number("R at 70"), resistance("10", alpha, 70.0)),
        (c.number("correction factor"), [areas["10"][1] / resistance("10", rounded, T) for T in (35.0, 70.0, 90.0)]),
    ]


def thin_wire(c: Check) -> list[Pair]:
    """A wire of no temperature difference within: the best conductor that can be typed."""
    diameter, ambient, slope = c.given("wire diameter"), c.given("ambient"), c.given("alpha20")
    case = {
        "shape": "cylinder",
        "diameter [m]": diameter,
        "conductivity [W/(m·K)]": 1e6,
        "current [A]": 1.0,
        "resistivity [Ω·m]": c.given("rho20"),
        "resistivity slope [1/K]": slope,
        "right film [W/(m²·K)]": c.given("h"),
        "right fluid [°C]": ambient,
    }
    critical = math.sqrt(_critical("allowable current [A]", case, slope, ambient))
    (T,) = answered("peak [°C]", {**case, "current [A]": c.number("runaway current").value / 2.0})
    return [(c.number("runaway current"), critical), (c.number("temperature at half"), T)]


def busbar(c: Check) -> list[Pair]:
    """The bar on edge: 2 in high sides, one in length as another; its narrow edges lose heat as its sides do."""
    thickness, height = 0.25 * INCH, 2.0 * INCH
    ambient = c.given("ambient")
    case = {
        "shape": "bar",
        "length [m]": 1.0,
        "thickness [m]": thickness,
        "width [m]": height,
        "conductivity [W/(m·K)]": 390.0,
        "current [A]": 100.0,
        "resistivity [Ω·m]": c.given("R20") * 1e-6 / FOOT * thickness * height,
        "resistivity slope [1/K]": 0.00393,  # IEC 60028
        "ac ratio": c.given("skin ratio"),
        "side film law": "vertical plate",
        "side size [m]": height,
        "side fluid [°C]": ambient,
        "side emissivity": c.given("emissivity"),
        "limit [°C]": ambient + np.array([30.0, 50.0, 65.0]),
    }
    found, why = ask("allowable current [A]; why", list(case), *case.values())
    assert (why == "ok").all(), why[0]
    return [(c.number("60 Hz ampacity"), found)]


REACHED: dict[str, Callable[[Check], list[Pair]]] = {
    "linear-source-critical-fixed-faces": critical_fixed_faces,
    "linear-source-critical-convective": critical_convective,
    "linear-source-temperature": linear_source,
    "lorenz-number": lorenz,
    "iec60228-resistance": cable,
    "thin-wire-runaway": thin_wire,
    "cda-busbar-ampacity": busbar,
}
