"""Air and water against a reference property library, the release's own check values and the published checks."""

from __future__ import annotations

import numpy as np
import pytest
from ingle.fluids import DENSEST_WATER, RANGES, FluidKind, properties, published
from ingle.shapes import Array

NAMES = ("density", "viscosity", "conductivity", "specific_heat", "expansion")

# CoolProp 8.0.0, PropsSI at 101325 Pa, fluids Air and Water: °C, kg/m³, Pa·s, W/(m·K), J/(kg·K), 1/K.
REFERENCE = {
    FluidKind.AIR: (
        (-100.0, 2.0466512, 1.1780545e-05, 0.016205407, 1008.8043, 0.0058500244),
        (-60.0, 1.6591868, 1.4067175e-05, 0.019596973, 1006.2301, 0.0047254775),
        (-20.0, 1.3956451, 1.6201235e-05, 0.022811731, 1005.5366, 0.0039677263),
        (0.0, 1.2930656, 1.7218406e-05, 0.024360475, 1005.6844, 0.0036739613),
        (20.0, 1.2045752, 1.8205675e-05, 0.025873828, 1006.144, 0.0034209875),
        (60.0, 1.0596267, 2.0099059e-05, 0.028804069, 1008.0231, 0.0030073868),
        (100.0, 0.94586903, 2.1896473e-05, 0.031619889, 1011.2331, 0.0026833664),
        (200.0, 0.74580962, 2.6046119e-05, 0.038248617, 1024.9655, 0.0021145274),
        (400.0, 0.52418858, 3.32839e-05, 0.050240325, 1068.5109, 0.001485497),
        (700.0, 0.36261146, 4.2517116e-05, 0.06631259, 1135.8296, 0.001027389),
        (1000.0, 0.27718258, 5.0634832e-05, 0.081099056, 1184.7179, 0.00078528833),
        (1300.0, 0.22433351, 5.8101701e-05, 0.095162939, 1218.0824, 0.00063554245),
        (1500.0, 0.19903466, 6.2845e-05, 0.10429027, 1234.7565, 0.0005638642),
    ),
    FluidKind.WATER: (
        (0.01, 999.84376, 0.001791132, 0.55567528, 4219.4102, -6.7577322e-05),
        (2.0, 999.943, 0.0016735154, 0.5606624, 4213.0246, -3.2571123e-05),
        (4.0, 999.97487, 0.0015672918, 0.56546542, 4207.5026, 3.4883148e-07),
        (10.0, 999.70247, 0.0013058997, 0.5787774, 4195.1589, 8.7933738e-05),
        (20.0, 998.20715, 0.0010015961, 0.59801236, 4184.0509, 0.00020680621),
        (30.0, 995.64945, 0.0007972218, 0.6143922, 4179.8197, 0.00030337679),
        (45.0, 990.2129, 0.00059576931, 0.63478345, 4180.1419, 0.0004226377),
        (60.0, 983.19582, 0.00046603508, 0.65100028, 4184.9533, 0.00052325252),
        (75.0, 974.84286, 0.0003774158, 0.66356119, 4193.2034, 0.00061299467),
        (90.0, 965.30959, 0.00031417528, 0.67278859, 4205.2056, 0.00069661209),
        (99.9, 958.42092, 0.00028187779, 0.67717283, 4215.5583, 0.00075008286),
    ),
}

# As the module promises, relative; the expansion of water in 1/K, since it passes through 0. That of air is an ideal gas's.
WITHIN = {
    FluidKind.AIR: {"density": 5e-6, "viscosity": 3e-5, "conductivity": 5e-5, "specific_heat": 7e-5, "expansion": 1.3e-2},
    FluidKind.WATER: {"density": 1e-6, "viscosity": 4e-5, "conductivity": 4e-5, "specific_heat": 4e-5, "expansion": 2e-8},
}

KINDS = pytest.mark.parametrize("kind", list(FluidKind), ids=lambda kind: kind.name.lower())


@KINDS
@pytest.mark.parametrize("name", NAMES)
def test_properties_agree_with_a_reference_library(kind: FluidKind, name: str) -> None:
    rows = np.array(REFERENCE[kind])
    found, wanted = getattr(properties(kind, rows[:, 0]), name).value, rows[:, 1 + NAMES.index(name)]
    absolute = kind == FluidKind.WATER and name == "expansion"
    slips = np.abs(found - wanted) / (1.0 if absolute else np.abs(wanted))
    assert slips.max() < WITHIN[kind][name], dict(zip(rows[:, 0], slips, strict=True))


def test_the_table_of_the_reference_library_spans_the_ranges() -> None:
    for kind, rows in REFERENCE.items():
        assert rows[0][0] == pytest.approx(RANGES[kind][0], abs=0.01)
        assert rows[-1][0] == pytest.approx(RANGES[kind][1], abs=0.1)


def test_published_check_air_properties() -> None:
    """Check air-properties: Lemmon et al. (2000), Lemmon and Jacobsen (2004). Standing: from memory, recomputed."""
    air = properties(FluidKind.AIR, np.array([300.0, 350.0, 400.0]) - 273.15)
    assert air.conductivity.value == pytest.approx([0.026384465709828872, 0.030003280154256667, 0.033453200644640045], abs=1e-4)
    assert air.viscosity.value == pytest.approx([1.853734050902612e-05, 2.086714953999417e-05, 2.305542271163637e-05], abs=1e-8)
    assert air.density.value == pytest.approx([1.1769955883877592, 1.008525501363059, 0.8823072512969409], abs=1e-4)
    assert air.prandtl.value == pytest.approx([0.7070636188330713, 0.7019015343518005, 0.6989322193210088], abs=1e-4)


@pytest.mark.parametrize(
    ("kelvin", "density", "heat", "volume_1", "volume_2", "viscosity", "conductivity"),
    [
        (260.0, 997.068360, 4300.17472, -3.86550941e-7, 3.27442503e-8, 3058.36075e-6, 0.515628010),
        (298.15, 997.047013, 4181.44618, 2.58054178e-7, 0.97202076e-8, 889.996774e-6, 0.606502308),
        (375.0, 957.009710, 4217.74697, 7.94706623e-7, 0.62024104e-8, 276.207245e-6, 0.677913788),
    ],
)
def test_water_gives_the_check_values_of_its_release(
    kelvin: float, density: float, heat: float, volume_1: float, volume_2: float, viscosity: float, conductivity: float
) -> None:
    """IAPWS SR6-08(2011), table 8, with the derivatives of the volume. Standing: seen in a stored public copy."""
    rho, mu, k, cp, beta = published(FluidKind.WATER, np.array([kelvin - 273.15]))
    expansion = volume_1 * density
    assert rho.value[0] == pytest.approx(density, rel=1e-9)
    assert cp.value[0] == pytest.approx(heat, rel=2e-9)
    assert mu.value[0] == pytest.approx(viscosity, rel=2e-9)
    assert k.value[0] == pytest.approx(conductivity, rel=2e-9)
    assert beta.value[0] == pytest.approx(expansion, rel=1e-8)
    assert beta.slope[0] == pytest.approx(volume_2 * density - expansion * expansion, rel=1e-8)


def inside(kind: FluidKind, rows: int) -> Array:
    """Temperatures drawn within the range, a little off its ends."""
    low, high = RANGES[kind]
    return np.random.default_rng(3).uniform(low + 0.1, high - 0.1, rows)


@KINDS
def test_the_table_between_nodes_is_the_published_fit(kind: FluidKind) -> None:
    """Reached: values to 1.5e-10 (water's viscosity), the rest to 5e-12; slopes to 7e-8 of the steepest."""
    T = inside(kind, 100_000)
    found = properties(kind, T)
    for name, curve in zip(NAMES, published(kind, T), strict=True):
        at = getattr(found, name)
        scale = np.abs(curve.value).max() if name == "expansion" else np.abs(curve.value)
        assert np.max(np.abs(at.value - curve.value) / scale) < 2e-10, name
        assert np.max(np.abs(at.slope - curve.slope)) < 1e-7 * np.max(np.abs(curve.slope)), name


@KINDS
@pytest.mark.parametrize("name", [*NAMES, "prandtl"])
def test_slopes_are_those_of_the_values(kind: FluidKind, name: str) -> None:
    """A central difference of sixth order over ±0.03 K; what it leaves is the rounding of the values."""
    T, d = inside(kind, 2000), 0.01

    def value(shift: int) -> Array:
        found: Array = getattr(properties(kind, T + shift * d), name).value
        return found

    wanted = (45.0 * (value(1) - value(-1)) - 9.0 * (value(2) - value(-2)) + (value(3) - value(-3))) / (60.0 * d)
    found = getattr(properties(kind, T), name).slope
    assert np.max(np.abs(found - wanted)) < 1e-9 * np.max(np.abs(found))


@KINDS
def test_beyond_the_range_a_property_is_held(kind: FluidKind) -> None:
    low, high = RANGES[kind]
    T = np.array([-1e6, low - 50.0, low - 1e-9, low, high, high + 1e-9, high + 50.0, 1e6])
    found = properties(kind, T)
    assert found.outside.tolist() == [True, True, True, False, False, True, True, True]
    for name in (*NAMES, "prandtl"):
        curve = getattr(found, name)
        assert (curve.value[:3] == curve.value[3]).all()
        assert (curve.value[5:] == curve.value[4]).all()
        assert (curve.slope[found.outside] == 0.0).all()
        assert (curve.slope[~found.outside] != 0.0).all()


def test_water_is_densest_where_its_expansion_is_nought() -> None:
    T = np.array([DENSEST_WATER - 0.001, DENSEST_WATER + 0.001])
    below, above = properties(FluidKind.WATER, T).expansion.value
    assert below < 0.0 < above


@KINDS
def test_a_temperature_alone_has_the_bits_it_has_among_many(kind: FluidKind) -> None:
    T = np.concatenate([inside(kind, 301), [-500.0, 5000.0, np.nan]])
    among = properties(kind, T)
    strided = properties(kind, np.repeat(T, 3)[::3])
    for row in range(len(T)):
        alone = properties(kind, T[row : row + 1])
        for name in (*NAMES, "prandtl"):
            for part in ("value", "slope"):
                many = getattr(getattr(among, name), part)
                assert getattr(getattr(alone, name), part).tobytes() == many[row : row + 1].tobytes()
                assert getattr(getattr(strided, name), part)[row : row + 1].tobytes() == many[row : row + 1].tobytes()
    assert np.isnan(among.density.value[-1])
