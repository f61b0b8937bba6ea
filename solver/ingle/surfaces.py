"""The law of a face: the heat that leaves the outermost surface at a temperature, and how much more by the kelvin.

    φ(T) = h (T − T_fluid) + ε σ (T⁴ − T_surroundings⁴) − flux put in

Temperatures are carried as a rise over a sink's temperature, so that small differences keep their digits.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingle.cases import Face, FaceKind, Rows, take
from ingle.film_laws import FilmLaw, FluidKind, coefficient
from ingle.fluids import KELVIN
from ingle.heat_sources import STEFAN_BOLTZMANN
from ingle.shapes import Array


@dataclass(frozen=True)
class Surface:
    """One face of a group of cases, all of one kind; temperatures of fluid and surroundings as rises over ``sink``."""

    kind: FaceKind
    sink: Array  # what rises are counted from, °C
    held: Array | None
    film: Array | None
    fluid: Array | None
    flux: Array | None
    emissivity: Array | None
    surroundings: Array | None  # as a rise
    hot: Array | None  # surroundings in kelvin
    resistance: Array | None
    law: FilmLaw | None
    law_fluid: FluidKind
    size: Array | None
    speed: Array | None
    fluid_celsius: Array | None

    def take(self, rows: Rows) -> Surface:
        """The same face for some of the cases."""
        return take(self, rows)

    def leaving(self, rise: Array) -> tuple[Array, Array]:
        """φ and dφ/dT at the outermost surface."""
        phi, slope = np.zeros_like(rise), np.zeros_like(rise)
        if self.law is not None:
            assert self.fluid is not None
            assert self.size is not None
            assert self.fluid_celsius is not None
            h, h_slope = coefficient(self.law, self.law_fluid, self.size, self.speed, self.sink + rise, self.fluid_celsius)
            phi, slope = h * (rise - self.fluid), h + h_slope * (rise - self.fluid)
        elif self.film is not None:
            assert self.fluid is not None
            phi, slope = self.film * (rise - self.fluid), self.film
        if self.emissivity is not None:
            assert self.surroundings is not None
            assert self.hot is not None
            T, Ts = (self.sink + KELVIN) + rise, self.hot
            # (T − Ts)(T + Ts)(T² + Ts²), carried on below 0 K as T|T|³ so that trial steps see a rising law.
            above = T >= 0.0
            powers = np.where(above, (rise - self.surroundings) * (T + Ts) * (T * T + Ts * Ts), -(T * T * T * T + Ts * Ts * Ts * Ts))
            es = self.emissivity * STEFAN_BOLTZMANN
            phi = phi + es * powers
            slope = slope + 4.0 * es * np.abs(T * T * T)
        if self.flux is not None:
            phi = phi - self.flux
        return phi, slope


def surface(face: Face, kind: FaceKind, sink: Array) -> Surface:
    """The face of a group as a law over rises above ``sink``. NaN of what a case has not becomes nothing."""

    def none(x: Array | None) -> Array | None:
        return None if x is None else np.where(np.isnan(x), 0.0, x)

    def rise(x: Array | None) -> Array | None:
        return None if x is None else x - sink

    radiates = kind == FaceKind.SURFACE and face.emissivity is not None
    films = kind in (FaceKind.FILM, FaceKind.SURFACE)
    surroundings = face.surroundings
    if radiates and face.fluid is not None and surroundings is not None:
        surroundings = np.where(np.isnan(surroundings), face.fluid, surroundings)
    emissivity = none(face.emissivity) if radiates else None
    if emissivity is not None and surroundings is not None:
        surroundings = np.where(emissivity > 0.0, surroundings, sink)
    film_h = none(face.film) if films else None
    fluid = face.fluid
    if films and fluid is not None and film_h is not None:
        fluid = np.where(film_h > 0.0, fluid, sink)
    return Surface(
        kind, sink, rise(face.held) if kind == FaceKind.HELD else None,
        film_h, rise(fluid) if films else None, none(face.flux) if kind != FaceKind.HELD else None,
        emissivity, rise(surroundings) if radiates else None,
        surroundings + KELVIN if radiates and surroundings is not None else None,
        none(face.resistance),
        face.law if kind == FaceKind.SURFACE else None,
        face.law_fluid,
        face.size,
        face.speed,
        face.fluid,
    )  # fmt: skip


def sink_of(face: Face, kind: FaceKind) -> Array | None:
    """The temperature [°C] that heat goes to at a face: held, fluid, or surroundings; None where it has none."""
    if kind == FaceKind.HELD:
        return face.held
    if kind == FaceKind.FLUX:
        return None
    if kind == FaceKind.FILM or face.law is not None or face.surroundings is None:
        return face.fluid
    if face.fluid is None:
        return face.surroundings
    # Radiation beside a film in some cases only: whichever a case has.
    film = np.zeros_like(face.fluid) if face.film is None else face.film
    other = np.where(np.isnan(face.surroundings), face.fluid, face.surroundings)
    return np.where((film > 0.0) & ~np.isnan(face.fluid), face.fluid, other)
