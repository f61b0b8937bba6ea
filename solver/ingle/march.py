"""The march: outward from the left face or the centre, layer by layer, until the right face's law is met.

Carried outward are the temperature, as a rise over one sink's temperature so that small rises keep their digits, and the
heat Q = r^m q″, with the derivative of each to the one unknown. The unknown is the rise of the left surface (film, flux,
centre) or the heat entering there (held). The residual of the right face's law is monotone in it, so its root is unique;
with constant conductivity it is linear and one Newton step from zero is exact.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingle.cases import Cases, Face, FaceKind, Structure
from ingle.shapes import (
    Array,
    area,
    path,
    solid_source_path,
    solid_volume,
    source_path,
    volume,
)


@dataclass(frozen=True)
class Steps:
    """The integrals of each layer of a group: V, W and D of ``ingle.shapes``, from its inner face; W is None where solid."""

    a: Array
    d: Array
    b: Array
    k: Array
    V: Array
    W: Array | None
    D: Array


@dataclass(frozen=True)
class State:
    """The steady state of a group: temperatures are ``sink`` + rise [°C], heats are r^m q″ outward.

    ``imbalance`` is what the right face's law is short of, as heat in the same measure; ``F_left`` and ``F_right`` are the
    fluxes put in at the faces; ``settled`` is False where no heat can leave the body.
    """

    structure: Structure
    steps: Steps
    q: Array
    sink: Array
    rise_left: Array
    rise_right: Array
    Q_left: Array
    Q_right: Array
    imbalance: Array
    F_left: Array
    F_right: Array
    settled: bool


def layer_steps(cases: Cases, structure: Structure) -> Steps:
    """Integrals over the layer, which depend on its geometry alone."""
    layer = cases.layers[0]
    shape, d = structure.shape, layer.thickness
    if structure.solid:
        zero = np.zeros_like(d)
        return Steps(zero, d, d, layer.conductivity, solid_volume(shape, d), None, solid_source_path(shape, d))
    a = np.zeros_like(d) if cases.inner is None else cases.inner
    return Steps(a, d, a + d, layer.conductivity, volume(shape, a, d), path(shape, a, d), source_path(shape, a, d))


def _through(steps: Steps, rise: Array, Q: Array, q: Array) -> tuple[Array, Array]:
    """T₁ = T₀ − (Q₀W + qD)/k and Q₁ = Q₀ + qV across a layer."""
    fall = q * steps.D if steps.W is None else Q * steps.W + q * steps.D
    return rise - fall / steps.k, Q + q * steps.V


def solve(cases: Cases, structure: Structure, steps: Steps, q: Array) -> State:
    """The steady state of one structure's cases for sources q [W/m³]."""
    left, right = structure.left, structure.right
    zero = np.zeros_like(q)
    F_left, G_left = _port(cases.left, left, structure, steps.a, zero)
    F_right, G_right = _port(cases.right, right, structure, steps.b, zero)
    sink_left, sink_right = _sink(cases.left, left), _sink(cases.right, right)
    sink = sink_left if sink_left is not None else (sink_right if sink_right is not None else zero)
    offset = sink_right - sink if sink_right is not None and sink_left is not None else zero

    def residual(rise: Array, Q: Array) -> Array:
        if right == FaceKind.HELD:
            return rise - offset
        if right == FaceKind.FLUX:
            return Q + F_right
        return Q + F_right - G_right * (rise - offset)

    # At the unknown u = 0: the left surface at its sink (film, flux, centre) or no heat entering (held).
    Q_start = zero if left == FaceKind.HELD else F_left
    rise, Q = _through(steps, zero, Q_start, q)
    r = residual(rise, Q)

    # The tangent: (dT₀, dQ₀) = (1, −G) film, (1, 0) flux and centre, (0, 1) held; dT₁ = dT₀ − dQ₀ W/k, dQ₁ = dQ₀.
    dQ = -G_left if left == FaceKind.FILM else (zero + 1.0 if left == FaceKind.HELD else zero)
    dT = zero if left == FaceKind.HELD else zero + 1.0
    if steps.W is not None:
        dT = dT - dQ * steps.W / steps.k
    if right == FaceKind.HELD:
        slope = dT
    elif right == FaceKind.FLUX:
        slope = dQ
    else:
        slope = dQ - G_right * dT

    # A residual that does not change as the body warms: no heat can leave.
    settled = not (left == FaceKind.FLUX and right == FaceKind.FLUX)
    u = -r / slope if settled else zero

    rise_left = zero if left == FaceKind.HELD else u
    Q_left = u if left == FaceKind.HELD else (F_left - G_left * u if left == FaceKind.FILM else F_left)
    rise_right, Q_right = _through(steps, rise_left, Q_left, q)
    short = residual(rise_right, Q_right)
    if right != FaceKind.FLUX:
        # A temperature the far face is short of, over the resistances on the way, is heat.
        R = (steps.D / steps.V if steps.W is None else steps.W) / steps.k
        if left == FaceKind.FILM:
            R = R + 1.0 / G_left
        short = short / R if right == FaceKind.HELD else short / (1.0 + G_right * R)
    if right == FaceKind.HELD:
        rise_right = offset
    return State(structure, steps, q, sink, rise_left, rise_right, Q_left, Q_right, short, F_left, F_right, settled)


def _port(face: Face, kind: FaceKind, structure: Structure, r: Array, zero: Array) -> tuple[Array, Array]:
    """F = r^m f, the heat put in at the surface, and G = r^m h, the heat a kelvin takes out through the film."""
    measure = area(structure.shape, r)
    F = zero if face.flux is None or kind == FaceKind.HELD else np.where(np.isnan(face.flux), 0.0, face.flux) * measure
    G = zero if face.film is None or kind != FaceKind.FILM else face.film * measure
    return F, G


def _sink(face: Face, kind: FaceKind) -> Array | None:
    """The temperature heat goes to, if the face has one."""
    if kind == FaceKind.HELD:
        return face.held
    return face.fluid if kind == FaceKind.FILM else None
