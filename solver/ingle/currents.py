"""Currents as heat per volume, and back: q = c · f(T) · a² of an amplitude a, the same in all of a conductor.

A solid conductor: a is the field E [V/m], f = 1/ρ, I = E ∫dA/ρ. A winding: a is the current density J [A/m²] of the
conductor itself, f = ρ, J = turns · I/(fill factor · section). A bar: a = J = I/section, f = ρ, one current through every
section. c is the AC to DC resistance ratio, times the fill factor of a winding. The resistance is the AC one, so that voltage times
current is the heat made.

Either a is known, or a ∫ f r^m dr is: then a depends on the temperatures. F stands for ∫ f r^m dr.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import pi

import numpy as np

from ingle.cases import Cases
from ingle.shapes import Array, Shape, solid_volume, volume
from ingle.sources import Conductor, Drive


@dataclass(frozen=True)
class Amplitude:
    """``heat`` c; the amplitude ``known``, or the ``total`` a F that fixes it (the other is None). All are 0 or more.

    ``inverse``: f is 1/ρ.
    """

    heat: Array
    known: Array | None
    total: Array | None
    inverse: bool = False


def layer_volume(cases: Cases, number: int) -> Array:
    """∫ r^m dr of a layer (numbered from 0) in which rows are all hollow or all solid."""
    place = cases.inner
    for before in cases.layers[:number]:
        place = before.thickness if place is None else place + before.thickness
    d = cases.layers[number].thickness
    if cases.shape == Shape.WALL:
        return d
    shape = Shape(int(np.ravel(cases.shape)[0]))
    if place is None or (number == 0 and not place.all()):
        return solid_volume(shape, d)
    return volume(shape, place, d)


def _of(x: Array | None, what: str) -> Array:
    if x is None:
        raise ValueError(f"a current there needs the {what}")
    return x


def _heat(conductor: Conductor, like: Array) -> Array:
    c = np.ones_like(like) if conductor.ac_ratio is None else conductor.ac_ratio
    return c * conductor.fill_factor if conductor.wound and conductor.fill_factor is not None else c


def amplitude(cases: Cases, number: int, conductor: Conductor) -> Amplitude:
    """What the given current, voltage or current density of a layer fixes."""
    given = np.abs(conductor.given)
    ac = np.ones_like(given) if conductor.ac_ratio is None else conductor.ac_ratio
    heat = _heat(conductor, given)
    V, d = layer_volume(cases, number), cases.layers[number].thickness
    drive = conductor.drive
    if cases.bar is not None:
        if drive == Drive.VOLTAGE:
            return Amplitude(heat, None, given / ac)
        return Amplitude(heat, given if drive == Drive.DENSITY else given / cases.bar.section, None)
    wall = cases.shape == Shape.WALL
    if conductor.wound:
        if drive == Drive.DENSITY:
            return Amplitude(heat, given, None)
        turns = _of(conductor.turns, "turns")
        if drive == Drive.VOLTAGE:
            turn = _of(cases.length, "length") if wall else 2.0 * pi
            return Amplitude(heat, None, given * d / (turns * turn * ac))
        across = _of(cases.width, "width") if wall else _of(cases.length, "length")
        fill = 1.0 if conductor.fill_factor is None else conductor.fill_factor
        return Amplitude(heat, turns * given / (fill * d * across), None)
    if drive == Drive.VOLTAGE:
        return Amplitude(heat, given / (ac * _of(cases.length, "length")), None, inverse=True)
    if drive == Drive.DENSITY:
        return Amplitude(heat, None, given * V, inverse=True)
    return Amplitude(heat, None, given / (_of(cases.width, "width") if wall else 2.0 * pi), inverse=True)


def even_sum(made: Amplitude, conductor: Conductor, V: Array) -> Array:
    """F of a resistivity that does not depend on temperature."""
    rho = conductor.resistivity.rho0
    assert rho is not None
    return V / rho if made.inverse else V * rho


def constant_heat(cases: Cases, number: int, conductor: Conductor) -> Array:
    """q [W/m³] where the resistivity does not depend on temperature."""
    made, V = amplitude(cases, number, conductor), layer_volume(cases, number)
    F = even_sum(made, conductor, V)
    a = even_amplitude(made, F)
    return made.heat * (F / V) * (a * a)


def even_amplitude(made: Amplitude, F: Array) -> Array:
    """The amplitude where F is known."""
    if made.known is not None:
        return made.known
    assert made.total is not None
    return made.total / F


def resistance(cases: Cases, number: int, conductor: Conductor, F: Array) -> Array:
    """R [Ω] along the length, or of all turns in series; NaN where a size it needs is not given."""
    ac = np.ones_like(F) if conductor.ac_ratio is None else conductor.ac_ratio
    d, length, width = cases.layers[number].thickness, cases.length, cases.width
    if cases.bar is not None:
        return ac * F / cases.bar.section
    wall = cases.shape == Shape.WALL
    if length is None or (wall and width is None):
        return np.full_like(F, np.nan)
    across = width if wall else length
    assert across is not None
    if not conductor.wound:
        return ac * length / (F * (across if wall else 2.0 * pi))
    if conductor.turns is None:
        return np.full_like(F, np.nan)
    fill = 1.0 if conductor.fill_factor is None else conductor.fill_factor
    turn = F / d * (length if wall else 2.0 * pi)
    return ac * conductor.turns * conductor.turns * turn / (fill * d * across)


def voltage(cases: Cases, number: int, conductor: Conductor, F: Array, a: Array) -> Array:
    """V [V] along the length, or of all turns in series, with the sign of what is given; NaN where a size is not given."""
    ac = np.ones_like(F) if conductor.ac_ratio is None else conductor.ac_ratio
    sign = np.where(conductor.given < 0.0, -1.0, 1.0)
    if cases.bar is not None:
        return sign * ac * a * F
    wall, none = cases.shape == Shape.WALL, np.full_like(F, np.nan)
    if not conductor.wound:
        return none if cases.length is None else sign * ac * a * cases.length
    turn = cases.length if wall else np.full_like(F, 2.0 * pi)
    if turn is None or conductor.turns is None:
        return none
    return sign * ac * a * conductor.turns * turn * F / cases.layers[number].thickness
