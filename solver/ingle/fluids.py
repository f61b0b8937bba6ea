"""Dry air and liquid water at one atmosphere: the properties that film laws need, each with its slope in temperature.

Air. Density and specific heat: the ideal part and the second virial coefficient of the equation of state of Lemmon,
Jacobsen, Penoncello and Friend, J. Phys. Chem. Ref. Data 29 (2000) 331, equations 23-25 and tables 12-13. Viscosity and
conductivity: Lemmon and Jacobsen, Int. J. Thermophys. 25 (2004) 21, the dilute gas and the terms linear in density.
Expansion: 1/T, the ideal gas, as film laws for gases are printed with.

Water. IAPWS SR6-08(2011), Liquid Water at 0.1 MPa, equations 1-3, 7 and 8 (Pátek, Hrubý, Klomfar, Součková and Harvey,
J. Phys. Chem. Ref. Data 38 (2009) 21). From 0.1 MPa to an atmosphere the density changes by 6e-7 of itself. Expansion: by
the derivative of the density; it is negative below 4 °C, where water expands on cooling.

Against a reference property library (the tests hold its figures), over the whole ranges below: air within 0.0005 % in
density, 0.003 % in viscosity, 0.005 % in conductivity, 0.007 % in specific heat, and in expansion within 1.3 % (at −100 °C;
0.3 % at 20 °C); water within 0.0001 % in density, 0.004 % in viscosity, conductivity and specific heat, 2e-8 per kelvin in
expansion. Beyond its range a property keeps the value at the end of it, with no slope. Everything is elementwise: a case
alone has the bits it has among many.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from enum import IntEnum
from functools import cache
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from ingle.shapes import Array

KELVIN = 273.15
ATMOSPHERE = 101325.0


class FluidKind(IntEnum):
    """A fluid at one atmosphere."""

    AIR = 0
    WATER = 1


# Temperatures [°C] between which properties are given. The fits reach further (air 60 to 2000 K, water −20 to 110 °C,
# supercooled and superheated); here they end where water freezes and boils.
RANGES: dict[FluidKind, tuple[float, float]] = {FluidKind.AIR: (-100.0, 1500.0), FluidKind.WATER: (0.0, 100.0)}

# Water at 0.1 MPa is densest here, °C: the zero of its expansion by the fit above.
DENSEST_WATER = 3.979


class Curve(NamedTuple):
    """A property and its derivative in temperature, per kelvin."""

    value: Array
    slope: Array


# In the order of the fields of Properties.
Found = tuple[Curve, Curve, Curve, Curve, Curve]


@dataclass(frozen=True)
class Properties:
    """Properties in SI units; ``outside`` is true where the temperature lies beyond the fluid's range."""

    density: Curve  # kg/m³
    viscosity: Curve  # Pa·s
    conductivity: Curve  # W/(m·K)
    specific_heat: Curve  # J/(kg·K)
    expansion: Curve  # 1/K
    outside: NDArray[np.bool_]

    @property
    def prandtl(self) -> Curve:
        """μ cp/k."""
        mu, cp, k = self.viscosity, self.specific_heat, self.conductivity
        value = mu.value * cp.value / k.value
        return Curve(value, value * (mu.slope / mu.value + cp.slope / cp.value - k.slope / k.value))


def properties(kind: FluidKind, temperature: Array) -> Properties:
    """Properties of a fluid at temperatures in °C."""
    low, high = RANGES[kind]
    step, table = _STEP[kind], _table(kind)
    last = table.shape[1] - 1
    outside = (temperature < low) | (temperature > high)
    place = (np.minimum(np.maximum(temperature, low), high) - low) / step
    interval = np.fmin(np.fmax(place, 0.0), last).astype(np.intp)
    t = place - interval
    c0, c1, c2, c3 = table.take(interval, axis=1).reshape(4, 5, *np.shape(temperature))
    values = ((c3 * t + c2) * t + c1) * t + c0
    slopes = ((3.0 * c3 * t + 2.0 * c2) * t + c1) * (np.where(outside, 0.0, 1.0) / step)
    density, viscosity, conductivity, heat, expansion = (Curve(value, slope) for value, slope in zip(values, slopes, strict=True))
    return Properties(density, viscosity, conductivity, heat, expansion, outside)


# The published fits take a hundred array operations, a table of cubics twenty. Value and slope are theirs at every node
# and pass smoothly through it; between nodes they are off by less than 2e-10 of the value (a test has the figures).
_STEP: dict[FluidKind, float] = {FluidKind.AIR: 0.5, FluidKind.WATER: 0.25}  # K


@cache
def _table(kind: FluidKind) -> Array:
    """Cubic coefficients over each step, lowest power first and by five properties each: 20 rows, a column a step."""
    low, high = RANGES[kind]
    step = _STEP[kind]
    found = published(kind, low + step * np.arange(round((high - low) / step) + 1.0))
    f = np.array([curve.value for curve in found])
    df = step * np.array([curve.slope for curve in found])
    rise, d0, d1 = f[:, 1:] - f[:, :-1], df[:, :-1], df[:, 1:]
    table = np.concatenate([f[:, :-1], d0, 3.0 * rise - 2.0 * d0 - d1, d0 + d1 - 2.0 * rise])
    table.flags.writeable = False
    return table


def published(kind: FluidKind, temperature: Array) -> Found:
    """Density, viscosity, conductivity, specific heat and expansion by the published fits, at temperatures in °C."""
    return _air(temperature + KELVIN) if kind == FluidKind.AIR else _water(temperature + KELVIN)


Terms = Sequence[tuple[float, float]]  # coefficient and exponent


def _powers(log: Array, terms: Terms, moments: int) -> list[Array]:
    """Σ c e^(t·log), Σ c t e^(t·log), Σ c t² e^(t·log) …: the sum and its derivatives along the logarithm."""
    sums: list[Array] = []
    for c, t in terms:
        part = c * np.exp(t * log)
        for order in range(moments):
            if len(sums) == order:
                sums.append(part)
            else:
                sums[order] = sums[order] + part
            if order + 1 < moments:
                part = part * t
    return sums


def _polynomial(x: Array, coefficients: Sequence[float], derivatives: int) -> list[Array]:
    """A polynomial, lowest power first, and its first derivatives, by Horner's rule."""
    rows = [np.full_like(x, coefficients[-1])] + [np.zeros_like(x) for _ in range(derivatives)]
    for c in reversed(coefficients[:-1]):
        for order in range(derivatives, 0, -1):
            rows[order] = rows[order] * x + order * rows[order - 1]
        rows[0] = rows[0] * x + c
    return rows


# Air. The letters are those of the papers: τ = 132.6312 K/T, δ = ρ/(10.4477 mol/dm³).

_R = 8.31451  # J/(mol·K), the paper's
_M = 0.0289586  # kg/mol, the papers'
# kg/mol, of dry air by CIPM-2007: Picard, Davis, Gläser and Fujii, Metrologia 45 (2008) 149. The papers fit molar data.
_M_DRY_AIR = 0.02896546
_T_REDUCING = 132.6312  # K
_RHO_REDUCING = 10447.7  # mol/m³

# Table 12: the terms N τ^i of the ideal Helmholtz energy that the specific heat feels, its logarithm, and its three
# oscillators (amplitude, frequency over 132.6312 K, what is added to the exponential).
_IDEAL: Terms = (
    (0.605719400e-7, -3.0),
    (-0.210274769e-4, -2.0),
    (-0.158860716e-3, -1.0),
    (-0.195363420e-3, 1.5),
)
_LOGARITHM = 2.490888032
_OSCILLATORS = ((0.791309509, 25.36365, -1.0), (0.212236768, 16.90741, -1.0), (0.197938904, 87.31279, 2.0 / 3.0))
# Table 13: the terms linear in δ as δ → 0, N τ^j; together they are the second virial coefficient.
_VIRIAL: Terms = (
    (0.118160747229, 0.0),
    (0.713116392079, 0.33),
    (-0.161824192067e1, 1.01),
    (-0.101365037912, 1.6),
    (-0.146629609713, 3.6),
    (0.148287891978e-1, 3.5),
)
# Lemmon and Jacobsen: collision integral of equation 3 (ε/k, σ, table II) and the first terms of tables III and IV.
_EPSILON, _SIGMA = 103.3, 0.360  # K, nm
_COLLISION = (0.431, -0.4623, 0.08406, 0.005341, -0.00331)
_VISCOSITY_BY_DENSITY: Terms = ((10.72e-6, 0.2), (-8.876e-6, 0.6))  # Pa·s
_CONDUCTIVITY_BY_VISCOSITY = 1308.0  # W/(m·K) a Pa·s
_CONDUCTIVITY_DILUTE: Terms = ((1.405e-3, -1.1), (-1.036e-3, -0.3))  # W/(m·K)
_CONDUCTIVITY_BY_DENSITY: Terms = ((8.743e-3, 0.1),)  # W/(m·K)


def _air(T: Array) -> Found:
    """Density ρ = p/(RTZ), Z = 1 + B p/(RT); cp by the ideal gas less T p d²B/dT²; transport by dilute gas and density."""
    log = np.log(_T_REDUCING / T)
    ideal = ATMOSPHERE / (_RHO_REDUCING * _R) / T  # δ of an ideal gas
    b0, b1, b2, b3 = _powers(log, _VIRIAL, 4)
    Z = 1.0 + b0 * ideal
    dZ = -(b1 + b0) * ideal / T  # τ d/dτ = −T d/dT, and δ falls as 1/T
    delta = ideal / Z
    ddelta = -delta * (1.0 / T + dZ / Z)
    density = Curve(_RHO_REDUCING * _M_DRY_AIR * delta, _RHO_REDUCING * _M_DRY_AIR * ddelta)

    cp, dcp = _ideal_specific_heat(T, log)
    cp = cp - (b2 + b1) * ideal
    dcp = dcp + (b3 + 2.0 * b2 + b1) * ideal / T
    heat = Curve(_R / _M_DRY_AIR * cp, _R / _M_DRY_AIR * dcp)

    dilute = _dilute_viscosity(T)
    more, dmore = _powers(log, _VISCOSITY_BY_DENSITY, 2)
    viscosity = Curve(dilute.value + delta * more, dilute.slope + ddelta * more - delta * dmore / T)

    base, dbase = _powers(log, _CONDUCTIVITY_DILUTE, 2)
    more, dmore = _powers(log, _CONDUCTIVITY_BY_DENSITY, 2)
    conductivity = Curve(
        _CONDUCTIVITY_BY_VISCOSITY * dilute.value + base + delta * more,
        _CONDUCTIVITY_BY_VISCOSITY * dilute.slope - dbase / T + ddelta * more - delta * dmore / T,
    )
    beta = 1.0 / T
    return density, viscosity, conductivity, heat, Curve(beta, -beta * beta)


def _ideal_specific_heat(T: Array, log: Array) -> tuple[Array, Array]:
    """cp/R of the ideal gas, −τ² d²α°/dτ² + 1, and its slope."""
    total, slope = np.full_like(T, _LOGARITHM + 1.0), np.zeros_like(T)
    for N, i in _IDEAL:
        part = -N * i * (i - 1.0) * np.exp(i * log)
        total, slope = total + part, slope - i * part / T
    for N, frequency, added in _OSCILLATORS:
        x = frequency * _T_REDUCING / T
        fall = np.exp(-x)
        over = 1.0 + added * fall
        part = N * np.abs(added) * x * x * fall / (over * over)
        total = total + part
        slope = slope + part * (x - 2.0 - 2.0 * x * added * fall / over) / T
    return total, slope


def _dilute_viscosity(T: Array) -> Curve:
    """η° = 0.0266958 √(M T)/(σ² Ω) in μPa·s with M in g/mol, ln Ω a polynomial in ln(T k/ε)."""
    log_omega, along = _polynomial(np.log(T / _EPSILON), _COLLISION, 1)
    value = 0.0266958e-6 / (_SIGMA * _SIGMA) * np.sqrt(1e3 * _M * T) * np.exp(-log_omega)
    return Curve(value, value * (0.5 - along) / T)


# Water. α = 10 K/(593 K − T), β = 10 K/(T − 232 K), tables 1 and 2 of the release; powers without a term are 0.

_R_WATER = 461.51805  # J/(kg·K)
_P_WATER = 1e5  # Pa
_HEAT_CONSTANT = -8.983025854
_HEAT_ALPHA = ((-1.661470539e5, 4), (2.708781640e6, 5), (-1.557191544e8, 7))
_HEAT_BETA = ((-8.237426256e-1, 2), (1.908956353, 3), (-2.017597384, 4), (8.546361348e-1, 5))
_VOLUME_ALPHA = (1.93763157e-2, 0.0, 0.0, 0.0, 6.74458446e3, -2.22521604e5, 0.0, 1.00231247e8, -1.63552118e9, 8.32299658e9)
_VOLUME_BETA = (0.0, 5.78545292e-3, -1.53195665e-2, 3.11337859e-2, -4.23546241e-2, 3.38713507e-2, -1.19946761e-2)
_VISCOSITY_WATER: Terms = ((280.68e-6, -1.9), (511.45e-6, -7.7), (61.131e-6, -19.6), (0.45903e-6, -40.0))
_CONDUCTIVITY_WATER: Terms = ((1.6630, -1.15), (-1.7781, -3.4), (1.1567, -6.0), (-0.432115, -7.6))


def _curvature(terms: Sequence[tuple[float, int]]) -> tuple[float, ...]:
    """Coefficients of Σ c n(n + 1) x^(n + 2), lowest power first."""
    row = [0.0] * (terms[-1][1] + 3)
    for c, n in terms:
        row[n + 2] = c * n * (n + 1)
    return tuple(row)


_CURVE_ALPHA, _CURVE_BETA = _curvature(_HEAT_ALPHA), _curvature(_HEAT_BETA)


def _water(T: Array) -> Found:
    """Equations 1-3 and 7-8 of the release, at 0.1 MPa."""
    alpha, beta, tau = 10.0 / (593.0 - T), 10.0 / (T - 232.0), T / 10.0
    dalpha, dbeta = alpha * alpha / 10.0, -beta * beta / 10.0
    a0, a1, a2 = _polynomial(alpha, _VOLUME_ALPHA, 2)
    b0, b1, b2 = _polynomial(beta, _VOLUME_BETA, 2)
    v = a0 + b0
    dv = a1 * dalpha + b1 * dbeta
    # α″ = 2α′²/α, and the same for β.
    d2v = a2 * dalpha * dalpha + a1 * alpha * dalpha / 5.0 + b2 * dbeta * dbeta - b1 * beta * dbeta / 5.0
    expansion = dv / v
    rho = _P_WATER / (10.0 * _R_WATER) / v
    density = Curve(rho, -rho * expansion)

    a0, a1 = _polynomial(alpha, _CURVE_ALPHA, 1)
    b0, b1 = _polynomial(beta, _CURVE_BETA, 1)
    bend = a0 + b0
    heat = Curve(-_R_WATER * (_HEAT_CONSTANT + tau * bend), -_R_WATER * (bend / 10.0 + tau * (a1 * dalpha + b1 * dbeta)))
    log = np.log(T / 300.0)
    mu, dmu = _powers(log, _VISCOSITY_WATER, 2)
    k, dk = _powers(log, _CONDUCTIVITY_WATER, 2)
    beta_slope = d2v / v - expansion * expansion
    return density, Curve(mu, dmu / T), Curve(k, dk / T), heat, Curve(expansion, beta_slope)
