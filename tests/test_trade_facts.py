"""Facts of the trade, asked by headings. Sizes and temperatures are chosen."""

from __future__ import annotations

import math

import numpy as np
import pytest
from ingle_addin import ask
from published import CHECKS
from published.asking import answered


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
