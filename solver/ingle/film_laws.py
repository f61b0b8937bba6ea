"""Film coefficients by published laws, with their exact slope in the face's temperature.

h = Nu k/size. Properties are taken at the film temperature, halfway between face and fluid. The laws of natural convection
give Nu by the Rayleigh number Ra = g |β ΔT| size³ ρ² cp/(μ k) and the Prandtl number Pr = μ cp/k, those of forced convection
by the Reynolds number Re = ρ speed size/μ and Pr. What ``size`` is differs by law: the plate's height; the diameter of a
cylinder, a sphere or a tube's bore; for a horizontal face its area over its perimeter (a quarter of a square's side or a
disk's diameter, half the width of a long strip); the length of a plate along the flow.

Equal temperatures. Ra is 0 there and the natural laws give their limit, Nu 0.6806 (vertical plate), 0.36 (cylinder), 2
(sphere), 2/π (horizontal faces). h is continuous there but has a cusp, for it rises as a root of |ΔT|: its slope grows
without bound on either side, and the slope given at exactly equal temperatures is that of the conductivity alone. The heat
h ΔT has a plain derivative, h + ΔT dh/dT, there too.

Kinks, where the slope given is that of one side: hot face up at Ra 4.74e6, plate in flow at Re 5e5, tube flow at Re 2300 and
3000, any law where the film temperature leaves the fluid's range, and water where its expansion changes sign.

Heat h ΔT grows with the face's temperature under every law of natural convection in air. It may fall, with a doubt, in a tube
between laminar and turbulent and on a very hot plate just above its transition, where the flow turns laminar as it is heated,
and in water near its densest.

Outside a law's range the number is still given, with a doubt. The laws cite their papers. Their ranges are those of the papers
as the textbooks of heat transfer print them (Incropera and DeWitt; Holman for the least Ra of a cylinder; the handbook itself
for the sphere), standing: from memory, but for vertical plate, horizontal faces and sphere, seen in stored public copies. The
least Re of a plate, 1e3, is where the second term of its drag (Imai, J. Aeronaut. Sci. 24 (1957) 155) reaches 5 % of the first.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from enum import IntEnum, IntFlag
from math import inf, pi
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from ingle.fluids import DENSEST_WATER, KELVIN, RANGES, Curve, FluidKind, Properties, properties
from ingle.shapes import Array

__all__ = ["LIMITS", "NATURAL", "Doubt", "Film", "FilmLaw", "FluidKind", "Limits", "Nusselt", "coefficient", "film"]

GRAVITY = 9.80665  # m/s², standard


class FilmLaw(IntEnum):
    """The law of a film."""

    VERTICAL_PLATE = 0
    HORIZONTAL_CYLINDER = 1
    SPHERE = 2
    HOT_FACE_UP = 3
    HOT_FACE_DOWN = 4
    CYLINDER_IN_CROSS_FLOW = 5
    PLATE_IN_FLOW = 6
    TUBE_FLOW = 7


NATURAL = frozenset(law for law in FilmLaw if law < FilmLaw.CYLINDER_IN_CROSS_FLOW)


class Doubt(IntFlag):
    """Why a film coefficient may be off; 0 is none."""

    RAYLEIGH = 1  # the Rayleigh number is outside the law's range
    REYNOLDS = 2  # the Reynolds (cross flow: also the Péclet) number is outside the law's range
    PRANDTL = 4  # the Prandtl number is outside the law's range
    PROPERTIES = 8  # the film temperature is outside the fluid's range; properties are those at its end
    PHASE = 16  # water at the face or far from it is below freezing or above boiling at one atmosphere
    DENSEST = 32  # water is densest between face and fluid: natural convection then has no single direction
    TRANSITION = 64  # tube flow neither laminar nor turbulent: h is read off a straight line between the two
    BUOYANCY = 128  # forced, but natural convection alone would be as strong (Gr/Re² > 1)
    FAST = 256  # air faster than Mach 0.3: it heats itself, and the fluid's temperature is no longer what the face feels
    FALLING = 512  # a hotter face would lose less heat here (h + ΔT dh/dT < 0): its balance may have several solutions


@dataclass(frozen=True)
class Film:
    """h [W/(m²·K)], its slope dh/dT_face [W/(m²·K²)], doubts, and the Ra (natural) or Re (forced) that the law was put."""

    h: Array
    slope: Array
    doubt: NDArray[np.int64]
    number: Array


class Nusselt(NamedTuple):
    """Nu and its derivatives to the logarithms of the law's number (Ra or Re) and of Pr."""

    value: Array
    by_number: Array
    by_prandtl: Array


class Limits(NamedTuple):
    """Where a law holds: least and greatest Ra (natural) or Re (forced), least and greatest Pr."""

    number: tuple[float, float]
    prandtl: tuple[float, float]


# The least Pr of the sphere is printed as 0.7, which means gases: air, at 0.698 in places, is meant to be inside.
LIMITS: dict[FilmLaw, Limits] = {
    FilmLaw.VERTICAL_PLATE: Limits((0.1, 1e12), (0.0, inf)),
    FilmLaw.HORIZONTAL_CYLINDER: Limits((1e-5, 1e12), (0.0, inf)),
    FilmLaw.SPHERE: Limits((0.0, 1e13), (0.69, inf)),
    FilmLaw.HOT_FACE_UP: Limits((1e4, 1e11), (0.69, inf)),
    FilmLaw.HOT_FACE_DOWN: Limits((1e5, 1e10), (0.69, inf)),
    FilmLaw.CYLINDER_IN_CROSS_FLOW: Limits((0.0, 1e7), (0.0, inf)),
    FilmLaw.PLATE_IN_FLOW: Limits((1e3, 1e8), (0.6, 60.0)),
    FilmLaw.TUBE_FLOW: Limits((0.0, 5e6), (0.5, 2000.0)),
}
LEAST_PECLET = 0.2  # Re Pr of a cylinder in cross flow
TRANSITION_OF_PLATE = 5e5
LAMINAR_TUBE, TURBULENT_TUBE = 2300.0, 3000.0
STILL_NUSSELT = 2.0 / pi  # one side of an isothermal disk in still fluid, on its area over its perimeter: 4 k R ΔT of heat
FAST_MACH = 0.3

# Numbers as small as this count as 0; it keeps their logarithm finite.
_TINY = 1e-290


def _power(x: Array, exponent: float) -> Array:
    found: Array = np.exp(exponent * np.log(x))
    return found


def _churchill_chu(still: float, split: float, Ra: Array, Pr: Array) -> Nusselt:
    """{still + 0.387 Ra^(1/6)/[1 + (split/Pr)^(9/16)]^(8/27)}²."""
    u = _power(split / Pr, 9.0 / 16.0)
    flow = 0.387 * np.exp(np.log(Ra) / 6.0 - 8.0 / 27.0 * np.log1p(u))
    root = still + flow
    by_Ra = root * flow / 3.0
    return Nusselt(root * root, by_Ra, by_Ra * u / (1.0 + u))


def vertical_plate(Ra: Array, Pr: Array) -> Nusselt:
    """Churchill and Chu, Int. J. Heat Mass Transfer 18 (1975) 1323, equation 9: the form for all Ra.

    Their laminar form, for Ra below 1e9, is not used. In air this one lies within 7 % of it from Ra 100 to 1e7, from there on
    above it: 17 % at Ra 1e8, 33 % at 1e9.
    """
    return _churchill_chu(0.825, 0.492, Ra, Pr)


def horizontal_cylinder(Ra: Array, Pr: Array) -> Nusselt:
    """Churchill and Chu, Int. J. Heat Mass Transfer 18 (1975) 1049: the form for all Ra."""
    return _churchill_chu(0.60, 0.559, Ra, Pr)


def sphere(Ra: Array, Pr: Array) -> Nusselt:
    """Churchill, Free convection around immersed bodies, Heat Exchanger Design Handbook (1983) 2.5.7: the full form.

    Nu = 2 + 0.589 Ra^(1/4)/F^(4/9) · [1 + 7.44e-8 Ra/F^(16/9)]^(1/12), F = 1 + (0.469/Pr)^(9/16). The last factor is the
    turbulent tail; most handbooks print the law without it, which at Ra 1e9 is a quarter less.
    """
    u = _power(0.469 / Pr, 9.0 / 16.0)
    log_Ra, log_F = np.log(Ra), np.log1p(u)
    w = 7.44e-8 * np.exp(log_Ra - 16.0 / 9.0 * log_F)
    flow = 0.589 * np.exp(0.25 * log_Ra - 4.0 / 9.0 * log_F + np.log1p(w) / 12.0)
    by_Ra = flow * (0.25 + w / (12.0 * (1.0 + w)))
    return Nusselt(2.0 + flow, by_Ra, by_Ra * u / (1.0 + u))


def hot_face_up(Ra: Array, Pr: Array) -> Nusselt:
    """McAdams, Heat Transmission (1954) 180, on area over perimeter after Lloyd and Moran, J. Heat Transfer 96 (1974) 443.

    Nu = 0.54 Ra^(1/4) from 1e4 to 1e7 and 0.15 Ra^(1/3) from 1e7 to 1e11. At 1e7 the printed pair jumps by 6 %; the larger of
    both is taken, which is continuous (they meet at 4.74e6). Not below 2/π, conduction into still fluid.
    """
    return _steepest(Ra, Pr, ((0.54, 0.25), (0.15, 1.0 / 3.0)))


def hot_face_down(Ra: Array, Pr: Array) -> Nusselt:
    """McAdams (as ``hot_face_up``): Nu = 0.27 Ra^(1/4) from 1e5 to 1e10. Not below 2/π, conduction into still fluid."""
    return _steepest(Ra, Pr, ((0.27, 0.25),))


def _steepest(Ra: Array, Pr: Array, branches: tuple[tuple[float, float], ...]) -> Nusselt:
    log = np.log(Ra)
    Nu, by_Ra = np.full_like(Ra, STILL_NUSSELT), np.zeros_like(Ra)
    for factor, exponent in branches:
        branch = factor * np.exp(exponent * log)
        by_Ra = np.where(branch > Nu, exponent * branch, by_Ra)
        Nu = np.maximum(Nu, branch)
    return Nusselt(Nu, by_Ra, np.zeros_like(Pr))


def cylinder_in_cross_flow(Re: Array, Pr: Array) -> Nusselt:
    """Churchill and Bernstein, J. Heat Transfer 99 (1977) 300, the form for all Re.

    Nu = 0.3 + 0.62 Re^(1/2) Pr^(1/3)/[1 + (0.4/Pr)^(2/3)]^(1/4) · [1 + (Re/282000)^(5/8)]^(4/5).
    """
    log_Re = np.log(Re)
    u = _power(0.4 / Pr, 2.0 / 3.0)
    z = np.exp(0.625 * (log_Re - np.log(282000.0)))
    flow = 0.62 * np.exp(0.5 * log_Re - 0.25 * np.log1p(u) + 0.8 * np.log1p(z)) * np.cbrt(Pr)
    return Nusselt(0.3 + flow, flow * (0.5 + 0.5 * z / (1.0 + z)), flow * (1.0 / 3.0 + u / (6.0 * (1.0 + u))))


def plate_in_flow(Re: Array, Pr: Array) -> Nusselt:
    """The mean over a plate from its leading edge on: Pohlhausen (1921) laminar, then mixed, as Incropera and DeWitt print them.

    Nu = 0.664 Re^(1/2) Pr^(1/3) to Re 5e5, (0.037 Re^(4/5) − A) Pr^(1/3) from there on. A is printed as 871; here it is
    0.037 · 5e5^(4/5) − 0.664 · 5e5^(1/2) = 871.3, which makes the two meet. Below Re 1e3 the boundary layer is no longer thin.
    """
    log_Re = np.log(Re)
    laminar, turbulent = 0.664 * np.exp(0.5 * log_Re), 0.037 * np.exp(0.8 * log_Re)
    mixed = Re > TRANSITION_OF_PLATE
    spread = np.cbrt(Pr)
    Nu = np.where(mixed, turbulent - _MIXED, laminar) * spread
    return Nusselt(Nu, np.where(mixed, 0.8 * turbulent, 0.5 * laminar) * spread, Nu / 3.0)


_MIXED = float(0.037 * np.exp(0.8 * np.log(TRANSITION_OF_PLATE)) - 0.664 * np.sqrt(TRANSITION_OF_PLATE))
_LAMINAR_NUSSELT = 3.66  # Graetz (1885), constant wall temperature


def tube_flow(Re: Array, Pr: Array) -> Nusselt:
    """Fully developed flow in a smooth round tube: 3.66 to Re 2300, Gnielinski from 3000 on, a straight line in Re between.

    Gnielinski, Int. Chem. Eng. 16 (1976) 359: Nu = (f/8)(Re − 1000) Pr/[1 + 12.7 √(f/8) (Pr^(2/3) − 1)], with the friction
    of Petukhov (1970), f = (0.790 ln Re − 1.64)^−2. The line is after Gnielinski, Int. J. Heat Mass Transfer 63 (2013) 134, who
    draws it to Re 4000; here it ends where the printed range of the turbulent law begins. No entrance length, no wall
    correction: a short tube has more.
    """
    at = np.maximum(Re, TURBULENT_TUBE)
    friction = 0.790 * np.log(at) - 1.64
    root = 1.0 / (np.sqrt(8.0) * friction)  # √(f/8)
    square = np.cbrt(Pr) * np.cbrt(Pr)
    below = 1.0 + 12.7 * root * (square - 1.0)
    Nu = root * root * (at - 1000.0) * Pr / below
    # ln √(f/8) falls by 0.790/friction as ln Re grows by one.
    by_Re = Nu * (at / (at - 1000.0) - 0.790 / friction * (2.0 - (below - 1.0) / below))
    by_Pr = Nu * (1.0 - 12.7 * root * square * 2.0 / 3.0 / below)
    # 0 laminar, 1 turbulent; beyond 3000 Nu is at Re itself, between it is at 3000.
    way = np.minimum(np.maximum((Re - LAMINAR_TUBE) / (TURBULENT_TUBE - LAMINAR_TUBE), 0.0), 1.0)
    between = (way > 0.0) & (way < 1.0)
    line = np.where(between, (Nu - _LAMINAR_NUSSELT) * Re / (TURBULENT_TUBE - LAMINAR_TUBE), way * by_Re)
    return Nusselt(np.where(way < 1.0, _LAMINAR_NUSSELT + way * (Nu - _LAMINAR_NUSSELT), Nu), line, way * by_Pr)


_HORIZONTAL = (FilmLaw.HOT_FACE_UP, FilmLaw.HOT_FACE_DOWN)
_LAWS: dict[FilmLaw, Callable[[Array, Array], Nusselt]] = {
    FilmLaw.VERTICAL_PLATE: vertical_plate,
    FilmLaw.HORIZONTAL_CYLINDER: horizontal_cylinder,
    FilmLaw.SPHERE: sphere,
    FilmLaw.CYLINDER_IN_CROSS_FLOW: cylinder_in_cross_flow,
    FilmLaw.PLATE_IN_FLOW: plate_in_flow,
    FilmLaw.TUBE_FLOW: tube_flow,
}


@dataclass(frozen=True)
class _Evaluated:
    of: Properties
    Pr: Curve
    lift: Array  # g |β ΔT| size
    number: Array
    upward: NDArray[np.bool_]  # whether a horizontal face lets its fluid rise from it
    h: Array
    slope: Array


def film(law: FilmLaw, fluid_kind: FluidKind, size: Array, speed: Array | None, T_face: Array, T_fluid: Array) -> Film:
    """The film coefficient of one law and fluid, cases along the last axis: metres, m/s, °C.

    ``speed`` is that of the undisturbed fluid, in a tube its mean over the section; its sign is ignored, and a law of natural
    convection needs none. h is not negative, and h and slope are finite, for any size from 1e-9 to 1e3 m and any temperatures an
    iteration may try, to ±1e6 °C; a plate in a flow of speed 0 has h 0. A case with a NaN has a NaN.
    """
    at = _evaluate(law, fluid_kind, size, speed, T_face, T_fluid)
    doubt = _outside(law, at) | _doubt_of_fluid(law, fluid_kind, at.of, T_face, T_fluid)
    doubt = doubt | _flags(at.h + (T_face - T_fluid) * at.slope < 0.0, Doubt.FALLING)
    if law not in NATURAL:
        assert speed is not None
        doubt = doubt | _doubt_of_flow(law, fluid_kind, at, speed, T_fluid)
    return Film(at.h, at.slope, doubt, at.number)


def coefficient(
    law: FilmLaw, fluid_kind: FluidKind, size: Array, speed: Array | None, T_face: Array, T_fluid: Array
) -> tuple[Array, Array]:
    """h and dh/dT_face of ``film``, to the bit, without its doubts: what an iteration needs."""
    at = _evaluate(law, fluid_kind, size, speed, T_face, T_fluid)
    return at.h, at.slope


def _evaluate(law: FilmLaw, fluid_kind: FluidKind, size: Array, speed: Array | None, T_face: Array, T_fluid: Array) -> _Evaluated:
    of = properties(fluid_kind, (T_face + T_fluid) / 2.0)
    Pr, k = of.prandtl, of.conductivity
    difference = T_face - T_fluid
    kinematic = of.density.value / of.viscosity.value
    # Properties change by half a degree as the face does by one.
    dkinematic = of.density.slope / of.density.value - of.viscosity.slope / of.viscosity.value
    dPr = 0.5 * Pr.slope / Pr.value
    lift = GRAVITY * np.abs(of.expansion.value * difference) * size
    if law in NATURAL:
        number = lift * size * size * kinematic * kinematic * Pr.value
        dnumber = _log_slope_of_lift(of.expansion, difference) + dkinematic + dPr
    elif speed is None:
        raise ValueError(f"the law {law.name} needs a speed")
    else:
        number = np.abs(speed) * size * kinematic
        dnumber = 0.5 * dkinematic
    put = np.maximum(number, _TINY)
    upward = (of.expansion.value * difference >= 0.0) == (law == FilmLaw.HOT_FACE_UP)
    if law in _HORIZONTAL:
        up, down = hot_face_up(put, Pr.value), hot_face_down(put, Pr.value)
        Nu = Nusselt(*(np.where(upward, a, b) for a, b in zip(up, down, strict=True)))
    else:
        Nu = _LAWS[law](put, Pr.value)
    dNu = Nu.by_number * dnumber + Nu.by_prandtl * dPr
    return _Evaluated(of, Pr, lift, number, upward, Nu.value * k.value / size, (dNu * k.value + Nu.value * 0.5 * k.slope) / size)


def _log_slope_of_lift(beta: Curve, difference: Array) -> Array:
    """d ln|β ΔT|/dT_face, without what is infinite where a factor is 0: the law's own derivative is multiplied by it."""
    apart, moving = np.abs(difference) > _TINY, beta.value != 0.0
    by_difference = np.where(apart, 1.0 / np.where(apart, difference, 1.0), 0.0)
    return by_difference + np.where(moving, 0.5 * beta.slope / np.where(moving, beta.value, 1.0), 0.0)


def _flags(where: NDArray[np.bool_], doubt: Doubt) -> NDArray[np.int64]:
    return np.where(where, int(doubt), 0)


def _outside(law: FilmLaw, at: _Evaluated) -> NDArray[np.int64]:
    """Doubts about the numbers that the law was put; a horizontal face has the limits of the law it follows."""
    flag = Doubt.RAYLEIGH if law in NATURAL else Doubt.REYNOLDS

    def against(limits: Limits) -> NDArray[np.int64]:
        (low, high), (least, most) = limits
        Pr = at.Pr.value
        return _flags((at.number < low) | (at.number > high), flag) | _flags((Pr < least) | (Pr > most), Doubt.PRANDTL)

    if law in _HORIZONTAL:
        return np.where(at.upward, against(LIMITS[FilmLaw.HOT_FACE_UP]), against(LIMITS[FilmLaw.HOT_FACE_DOWN]))
    return against(LIMITS[law])


def _doubt_of_fluid(law: FilmLaw, kind: FluidKind, of: Properties, T_face: Array, T_fluid: Array) -> NDArray[np.int64]:
    doubt = _flags(of.outside, Doubt.PROPERTIES)
    if kind == FluidKind.WATER:
        low, high = np.minimum(T_face, T_fluid), np.maximum(T_face, T_fluid)
        freezing, boiling = RANGES[kind]
        doubt = doubt | _flags((low < freezing) | (high > boiling), Doubt.PHASE)
        if law in NATURAL:
            doubt = doubt | _flags((low < DENSEST_WATER) & (high > DENSEST_WATER), Doubt.DENSEST)
    return doubt


def _doubt_of_flow(law: FilmLaw, kind: FluidKind, at: _Evaluated, speed: Array, T_fluid: Array) -> NDArray[np.int64]:
    Re = at.number
    doubt = _flags(at.lift > speed * speed, Doubt.BUOYANCY)  # Gr/Re² = lift/speed²
    if law == FilmLaw.CYLINDER_IN_CROSS_FLOW:
        doubt = doubt | _flags(Re * at.Pr.value < LEAST_PECLET, Doubt.REYNOLDS)
    if law == FilmLaw.TUBE_FLOW:
        doubt = doubt | _flags((Re > LAMINAR_TUBE) & (Re < TURBULENT_TUBE), Doubt.TRANSITION)
    if kind == FluidKind.AIR:
        squared_sound = 1.4 * 287.05 * np.maximum(T_fluid + KELVIN, 0.0)  # ratio of specific heats, gas constant
        doubt = doubt | _flags(speed * speed > FAST_MACH * FAST_MACH * squared_sound, Doubt.FAST)
    return doubt
