"""Cases of one structure as a problem of the network engine."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from ingle.cases import Cases, Face, FaceKind, Structure
from ingle.conductivities import Conductivity
from ingle.currents import Amplitude, amplitude
from ingle.heat_sources import HeatSource, SideLoss, SourceLaw
from ingle.network_problem import NetworkFace, NetworkLayer, NetworkProblem, Supply
from ingle.shapes import Array
from ingle.sources import Conductor, Generation, Source
from ingle.surfaces import Surface, surface


class FaceLaw:
    """What leaves a face, as the network engine asks for it: temperatures in °C, told which cases they are of."""

    def __init__(self, law: Surface) -> None:
        self.law = law
        self.linear = law.kind == FaceKind.FILM
        self._every = np.arange(len(law.sink))

    def __call__(self, T: Array, rows: np.ndarray) -> tuple[Array, Array]:
        """Flux and derivative."""
        every = self._every
        law = self.law if len(rows) == len(every) and bool((rows == every).all()) else self.law.take(rows)
        phi, slope = law.leaving(T - law.sink)
        return phi, slope + np.zeros_like(phi)


def sinks(face: Face, kind: FaceKind) -> list[Array]:
    """The temperatures [°C] that heat can go to at a face; NaN where a case has not that one."""
    if kind == FaceKind.FLUX:
        return []
    if kind == FaceKind.HELD:
        return [] if face.held is None else [face.held]
    found = []
    if face.fluid is not None:
        active = True if face.film is None else face.film > 0.0
        found.append(np.where(active, face.fluid, np.nan))
    if face.emissivity is not None and face.surroundings is not None:
        around = face.surroundings if face.fluid is None else np.where(np.isnan(face.surroundings), face.fluid, face.surroundings)
        found.append(np.where(face.emissivity > 0.0, around, np.nan))
    return found


def coldest(cases: Cases, structure: Structure) -> Array:
    """The lowest temperature [°C] of anything that heat can go to; 0 where it can go nowhere."""
    found = [*sinks(cases.left, structure.left), *sinks(cases.right, structure.right)]
    if cases.bar is not None and cases.bar.side is not None:
        found += sinks(cases.bar.side, structure.side)
    low = np.full(len(cases), np.nan)
    for T in found:
        low = np.fmin(low, T)
    return np.where(np.isnan(low), 0.0, low)


def _face(face: Face, kind: FaceKind, zero: Array) -> NetworkFace:
    def filled(x: Array | None) -> Array | None:
        return None if x is None else np.where(np.isnan(x), 0.0, x)

    if kind == FaceKind.FLUX:
        return NetworkFace(flux=filled(face.flux))
    if kind == FaceKind.HELD:
        return NetworkFace(held=face.held, resistance=filled(face.resistance))
    return NetworkFace(law=FaceLaw(surface(face, kind, zero)), resistance=filled(face.resistance))


def _side(cases: Cases, structure: Structure, zero: Array) -> SideLoss | None:
    bar = cases.bar
    if bar is None or bar.side is None or structure.side == FaceKind.FLUX:
        return None
    if bar.perimeter is None:
        raise ValueError("a bar that loses heat from its sides needs its perimeter")
    ratio = bar.perimeter / bar.section
    if structure.side == FaceKind.FILM:
        return SideLoss(ratio, bar.side.film, bar.side.fluid)
    return SideLoss(ratio, law=FaceLaw(surface(bar.side, structure.side, zero)))


@dataclass(frozen=True)
class Driven:
    """The problem, with what turns its multiples back into currents: each conductor's amplitude, None elsewhere."""

    problem: NetworkProblem
    amplitudes: tuple[Amplitude | None, ...]


def network_of(cases: Cases, structure: Structure, sources: Sequence[Source], driven: Sequence[bool] | None = None) -> Driven:
    """The problem with these sources in its layers, those ``driven`` marked as scaling together. ValueError: see ``Bar``."""
    zero = coldest(cases, structure)
    supplies: list[Supply] = []
    layers: list[NetworkLayer] = []
    amplitudes: list[Amplitude | None] = []
    side = _side(cases, structure, zero)
    for number, (layer, source) in enumerate(zip(cases.layers, sources, strict=True)):
        moves = driven is not None and driven[number]
        k = layer.conductivity
        conductivity = k if isinstance(k, Conductivity) else Conductivity(k)
        made = amplitude(cases, number, source) if isinstance(source, Conductor) else None
        amplitudes.append(made)
        heat = replace(_heat_source(source, made, supplies, moves), driven=moves)
        joint = cases.joints[number] if number < len(cases.joints) else None
        layers.append(NetworkLayer(layer.thickness, conductivity, heat, side, joint))
    inner = None if structure.solid else cases.inner
    contacts = _contacts(cases, amplitudes[0])
    left = replace(_face(cases.left, structure.left, zero), contact=contacts[0])
    right = replace(_face(cases.right, structure.right, zero), contact=contacts[1])
    problem = NetworkProblem(structure.shape, tuple(layers), left, right, zero, inner, tuple(supplies))
    return Driven(problem, tuple(amplitudes))


def _contacts(cases: Cases, made: Amplitude | None) -> tuple[Array | None, Array | None]:
    """I²R of a bar's contacts over its section [W/m²], by the multiple of its source: I = J · section."""
    bar = cases.bar
    if bar is None or made is None:
        return None, None
    square = 1.0 if made.known is None else made.known * made.known
    left, right = (None if R is None else R * bar.section * square for R in (bar.left_contact, bar.right_contact))
    return left, right


def _heat_source(source: Source, made: Amplitude | None, supplies: list[Supply], driven: bool) -> HeatSource:
    """The source as the engine has it; a current that is fixed as a whole adds a supply."""
    if isinstance(source, Generation):
        if source.table is not None:
            return HeatSource(source.scale, SourceLaw.TABLE, table=source.table)
        return HeatSource(source.scale, SourceLaw.SLOPED, source.slope, source.reference)
    if not isinstance(source, Conductor):
        return HeatSource(source)
    assert made is not None
    rho = source.resistivity
    base = np.ones_like(made.heat) if rho.rho0 is None else rho.rho0
    inverse = made.inverse
    if rho.constant:
        law = SourceLaw.EVEN
    elif rho.table is not None:
        law = SourceLaw.PER_TABLE if inverse else SourceLaw.TABLE
    else:
        law = SourceLaw.PER_SLOPED if inverse else SourceLaw.SLOPED
    f = 1.0 / base if inverse else base
    if made.known is not None:
        return HeatSource(made.heat * f * (made.known * made.known), law, rho.slope, rho.reference, table=rho.table)
    assert made.total is not None
    supplies.append(Supply(made.total, driven))
    group = len(supplies) - 1
    return HeatSource(made.heat * f, law, rho.slope, rho.reference, table=rho.table, group=group, weight=f)
