"""The published figures within reach of today's physics, asked by headings, and what the others wait for."""

from __future__ import annotations

import math
from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from ingle_addin import ask
from ingle_addin.batch import solve_calls
from ingle_addin.cells import CellError
from published import CHECKS, Check, Number

Pair = tuple[Number, Any]  # what is printed, and what is answered


def answered(answers: str, case: dict[str, Any]) -> list[Any]:
    """Answers of one case, each as a number or text; a case without an answer fails with its reason."""
    *found, why = ask(f"{answers}; why", list(case), *case.values())
    assert why[0] == "ok", why[0]
    return [column[0] for column in found]


def tpla300(c: Check) -> list[Pair]:
    """The radii of the three probes are in the number's name: 1.25, 2.5 and 3.75 m."""
    case = {
        "shape": "cylinder",
        "radius [m]": c.given("radius"),
        "conductivity [W/(m·K)]": c.given("k"),
        "generation [W/m³]": c.given("q"),
        "outer held [°C]": c.given("outer face"),
    }
    centre, place = answered("peak [°C]; peak place [m]", case)
    assert place == 0.0
    probed = [answered("probe temperature [°C]", {**case, "probe [m]": r})[0] for r in (1.25, 2.5, 3.75)]
    return [(c.number("T centre"), centre), (c.number("T at r"), probed)]


def tpll01(c: Check) -> list[Pair]:
    """A flux leaving is a negative flux in."""
    film, fluid = c.given("side 1")
    case = {
        "shape": "wall",
        "thickness [m]": c.given("thickness"),
        "conductivity [W/(m·K)]": c.given("k"),
        "generation [W/m³]": 0.0,
        "left film [W/(m²·K)]": film,
        "left fluid [°C]": fluid,
        "right flux in [W/m²]": -c.given("side 2"),
        "probe [m]": c.given("thickness") / 2.0,
    }
    answers = "left face [°C]; right face [°C]; probe temperature [°C]; left heat out [W/m²]; right heat out [W/m²]"
    left, right, middle, out_left, out_right = answered(answers, case)
    assert (out_left, out_right) == pytest.approx((-c.given("side 2"), c.given("side 2")), rel=1e-12)
    return [(c.number("T side 1"), left), (c.number("T side 2"), right), (c.number("mid-plane"), middle)]


def tpla01(c: Check) -> list[Pair]:
    """The flux at the inner face enters the body, so as heat leaving it is negative."""
    film, fluid = c.given("outer h")
    case = {
        "shape": "cylinder",
        "inner radius [m]": c.given("inner radius"),
        "outer radius [m]": c.given("outer radius"),
        "conductivity [W/(m·K)]": c.given("k"),
        "generation [W/m³]": 0.0,
        "inner held [°C]": c.given("inner face"),
        "outer film [W/(m²·K)]": film,
        "outer fluid [°C]": fluid,
        "probe [m]": 0.32,
    }
    outer, probed, flux = answered("outer face [°C]; probe temperature [°C]; inner heat out [W/m²]", case)
    return [(c.number("T outer"), outer), (c.number("T at r"), probed), (c.number("flux"), -flux)]


def mean_to_peak(c: Check) -> list[Pair]:
    """Ratios of a half thickness or radius a; the sizes are chosen, the ratios do not depend on them."""
    a, k, q, face = 0.02, 1.6, 4e5, 35.0
    sizes = {
        "slab": ("wall", "thickness [m]", 2 * a),
        "cylinder": ("cylinder", "radius [m]", a),
        "sphere": ("sphere", "radius [m]", a),
    }
    peaks: list[Pair] = []
    means: list[Pair] = []
    for name, (shape, heading, size) in sizes.items():
        case = {"shape": shape, heading: size, "conductivity [W/(m·K)]": k, "generation [W/m³]": q, "both held [°C]": face}
        peak, mean = answered("peak [°C]; mean [°C]", case)
        printed = c.number("slab peak rise / (q a^2/k)") if name == "slab" else c.number(name)
        peaks.append((printed, (peak - face) / (q * a * a / k)))
        means.append((c.number(f"{name} mean/peak"), (mean - face) / (peak - face)))
    return peaks + means


def radial_rise(c: Check) -> list[Pair]:
    """The core carries no heat, so its temperature is that of the annulus's inner face; the outside is held at any level."""
    outer, core = c.given("outer, core")
    case = {
        "shape": "cylinder",
        "outer diameter [m]": outer,
        "conductivity [W/(m·K)]": c.given("effective"),
        "line power [W/m]": c.given("heat"),
        "outer held [°C]": 0.0,
    }
    hollow = answered("inner face [°C]", {**case, "inner diameter [m]": core})
    solid = answered("peak [°C]", case)
    return [(c.number("core minus surface"), hollow[0]), (c.number("solid limit"), solid[0])]


def allowable(c: Check) -> list[Pair]:
    """A slab of twice the half thickness, cooled on both faces; the limit holds at the centre."""
    a = c.given("half thickness")
    case = {
        "shape": ["wall", "cylinder", "sphere"],
        "thickness [m]": [2 * a, a, a],
        "conductivity [W/(m·K)]": c.given("k"),
        "generation [W/m³]": None,
        "both film [W/(m²·K)]": c.given("h"),
        "both fluid [°C]": c.given("fluid"),
        "limit [°C]": c.given("centre limit"),
    }
    (found,) = ask("allowable generation [W/m³]", list(case), *case.values())
    return [(c.number("q slab, cylinder, sphere"), found)]


def insulation(c: Check) -> list[Pair]:
    """A layer's resistance for a metre of cable: the temperature across it over the heat through it."""
    inside = c.given("conductor diameter")
    case = {
        "shape": "cylinder",
        "inner diameter [mm]": 1e3 * inside,
        "thickness [mm]": 1e3 * c.given("insulation thickness"),
        "conductivity [W/(m·K)]": 1.0 / c.given("insulation thermal resistivity"),
        "generation [W/m³]": 0.0,
        "inner held [°C]": 90.0,
        "outer held [°C]": 20.0,
    }
    (heat,) = answered("outer heat out [W/m]", case)
    return [(c.number("T1"), (90.0 - 20.0) / heat)]


REACHED: dict[str, Callable[[Check], list[Pair]]] = {
    "aster-tpla300": tpla300,
    "aster-tpll01": tpll01,
    "aster-tpla01": tpla01,
    "mean-to-peak-ratios": mean_to_peak,
    "conductor-radial-rise": radial_rise,
    "allowable-generation": allowable,
    "iec60287-T1": insulation,
}

# What each of the others cannot be asked without: an input heading, an answer heading or a function.
_ARRHENIUS, _LINEAR = "activation energy [J/mol]", "generation slope [1/K]"
WAITING = {
    "fk-slab-critical": _ARRHENIUS,
    "fk-cylinder-critical": _ARRHENIUS,
    "fk-sphere-critical": _ARRHENIUS,
    "bratu-critical": _ARRHENIUS,
    "bratu-lambda1": _ARRHENIUS,
    "fk-subcritical": _ARRHENIUS,
    "fk-slab-convective-critical": _ARRHENIUS,
    "fk-cylinder-convective-critical": _ARRHENIUS,
    "semenov-critical": _ARRHENIUS,
    "arrhenius-finite-eps-critical": _ARRHENIUS,
    "arrhenius-transition": _ARRHENIUS,
    "fk-dimensional-critical-temperature": _ARRHENIUS,
    "linear-source-critical-fixed-faces": _LINEAR,
    "linear-source-critical-convective": _LINEAR,
    "linear-source-temperature": _LINEAR,
    "nafems-t2": "right emissivity",
    "slab-convection-radiation": "both emissivity",
    "layered-cylinder-contact": "joint 1 [W/(m²·K)]",
    "kirchhoff-linear-k-slab": "conductivity slope [1/K]",
    "linear-k-mean-rule": "conductivity slope [1/K]",
    "uo2-conductivity": "material",
    "nist-304-conductivity": "material",
    "nbs-copper-conductivity": "material",
    "manufactured-solution": "conductivity slope [1/K]",
    "lorenz-number": "resistivity [Ω·m]",
    "copper-iacs": "resistivity [Ω·m]",
    "iec60228-resistance": "resistivity slope [1/K]",
    "thin-wire-runaway": "resistivity slope [1/K]",
    "cda-busbar-ampacity": "current [A]",
    "churchill-chu-plate": "left film law",
    "churchill-chu-cylinder": "outer film law",
    "churchill-sphere": "outer film law",
    "ostrach-similarity": "left film law",
    "cigre207-natural-convection": "outer film law",
    "ieee738-natural-convection": "outer film law",
    "air-properties": "left fluid kind",
    "gum-H2": "± thickness [mm]",
    "gum-H1": "± thickness [mm]",
    "jcgm101-9.2.2-normal": "sd thickness [mm]",
    "jcgm101-9.2.3-rectangular": "± thickness [mm]",
    "jcgm101-9.2.4-dominant": "± thickness [mm]",
    "nist-tn1900-E13": "sd thickness [mm]",
    "nist-num-stefan-boltzmann": "sd thickness [mm]",
    "npl-log-uniform": "± thickness [mm]",
}


@pytest.mark.parametrize("name", REACHED)
def test_the_published_figure(name: str) -> None:
    check = CHECKS[name]
    pairs = REACHED[name](check)
    # Every expected number of the check is compared, each once.
    assert [printed.name for printed, _ in pairs] == [number.name for number in check.expected]
    for printed, got in pairs:
        want, have = np.atleast_1d(printed.value), np.atleast_1d(got)
        assert have.shape == want.shape
        slip = np.abs(have - want)
        assert (slip <= printed.tolerance).all(), f"{name}, {printed.name}: {have} for {want} {printed.unit} of {check.source}"


def test_every_published_value_is_reached_or_named_as_waiting() -> None:
    assert len(CHECKS) == 51
    assert not REACHED.keys() & WAITING.keys()
    assert REACHED.keys() | WAITING.keys() == CHECKS.keys()


@pytest.mark.parametrize("heading", sorted(set(WAITING.values())))
def test_what_a_waiting_value_waits_for_is_not_there_yet(heading: str) -> None:
    """Fails when the heading becomes available: its values then belong among those reached."""
    word = heading.split(" [")[0].removeprefix("left ").removeprefix("outer ")
    texts = {"film law": "sphere", "fluid kind": "air", "material": "copper"}
    case = {"shape": "wall", "thickness [mm]": 10.0, "conductivity [W/(m·K)]": 1.0, heading: texts.get(word, 0.5)}
    (found,) = solve_calls("INGLE.PEAK", [((tuple(case),), (tuple(case.values()),))])
    reason = f"{heading} in this row is not available yet; leave it blank or wait for a later version"
    assert [list(row) for row in found.grid] == [[CellError.NA]]
    assert list(found.reasons) == [reason[:1].upper() + reason[1:]]


# Facts of the trade. Sizes and temperatures below are chosen.


def test_a_current_heats_by_its_square_times_the_resistance() -> None:
    """I²R watts, and per volume that over the volume (common practice, no source). R at 20 °C: IEC 60228:2004 Table 2."""
    per_km = CHECKS["iec60228-resistance"].given("copper class 2, 630 mm2, R20")
    current, section, k = 1000.0, 630e-6, 390.0
    watts = current**2 * per_km / 1e3  # of each metre
    radius = math.sqrt(section / math.pi)
    case = {
        "shape": "cylinder",
        "radius [mm]": 1e3 * radius,
        "length [m]": 2.5,
        "conductivity [W/(m·K)]": k,
        "outer film [W/(m²·K)]": 10.0,
        "outer fluid [°C]": 40.0,
    }
    answers = "peak [°C]; outer face [°C]; heat made [W]; heat made [W/m]"
    by_length = answered(answers, {**case, "line power [W/m]": watts})
    by_body = answered(answers, {**case, "power [W]": 2.5 * watts})
    by_volume = answered(answers, {**case, "generation [W/m³]": watts / section})
    assert by_length == pytest.approx(by_volume, rel=1e-13)
    assert by_body == pytest.approx(by_volume, rel=1e-13)
    assert by_volume[2:] == pytest.approx([2.5 * watts, watts], rel=1e-13)
    assert by_volume[1] == pytest.approx(40.0 + watts / (10.0 * 2 * math.pi * radius), rel=1e-13)


def test_equal_cooling_puts_the_peak_at_mid_plane_and_half_the_wall_insulated_says_the_same() -> None:
    """No heat crosses the mid-plane of an equally cooled wall, so it may be cut and insulated there (common practice, no
    source)."""
    case = {"shape": "wall", "conductivity [W/(m·K)]": 0.8, "generation [W/m³]": 5e4}
    whole = {**case, "thickness [mm]": 60.0, "both film [W/(m²·K)]": 12.0, "both fluid [°C]": 25.0}
    half = {**case, "thickness [mm]": 30.0, "right film [W/(m²·K)]": 12.0, "right fluid [°C]": 25.0}
    peak, place, left, right, share = answered("peak [°C]; peak place [mm]; left face [°C]; right face [°C]; left share [%]", whole)
    assert place == pytest.approx(30.0, rel=1e-14)
    assert (left, share) == pytest.approx((right, 50.0), rel=1e-14)
    insulated, outside, crossing = answered("left face [°C]; right face [°C]; left heat out [W/m²]", half)
    assert (peak, right, crossing) == pytest.approx((insulated, outside, 0.0), rel=1e-14)
    for depth in (35.0, 42.0, 58.0):
        (in_whole,) = answered("probe temperature [°C]", {**whole, "probe [mm]": depth})
        (in_half,) = answered("probe temperature [°C]", {**half, "probe [mm]": depth - 30.0})
        assert in_whole == pytest.approx(in_half, rel=1e-14)


def test_stronger_cooling_on_the_right_cools_that_face_and_moves_the_peak_left() -> None:
    """Common practice, no source."""
    films = np.array([1.0, 3.0, 12.0, 50.0, 400.0, 1e4])
    case = {
        "shape": "wall",
        "thickness [mm]": 60.0,
        "conductivity [W/(m·K)]": 0.8,
        "generation [W/m³]": 5e4,
        "left film [W/(m²·K)]": 12.0,
        "right film [W/(m²·K)]": films,
        "both fluid [°C]": 25.0,
    }
    right, place, peak, share = ask("right face [°C]; peak place [mm]; peak [°C]; left share [%]", list(case), *case.values())
    for column in (right, peak, share):
        assert (np.diff(column) < 0.0).all()
    assert (np.diff(place) < 0.0).all()
    assert place[2] == pytest.approx(30.0, rel=1e-14)  # both films 12
    assert place[1] > 30.0 > place[3]
