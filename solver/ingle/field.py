"""Quantities of a solved state: the peak and its place, faces, means, heats, temperature anywhere, heat balance."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingle.conductivities import Conductivity
from ingle.march import LayerSteps, State
from ingle.shapes import (
    Array,
    depth_of_volume,
    path,
    solid_source_square,
    source_path,
    source_square,
)
from ingle.volume_nodes import nodes


@dataclass(frozen=True)
class Extremes:
    """Highest and lowest rise over the sink, the place of the highest (from the left face, or a radius) and its layer."""

    peak: Array
    place: Array
    lowest: Array
    layer: Array
    by_layer: tuple[Array, ...]
    places: tuple[Array, ...]
    lows: tuple[Array, ...]


def extremes(state: State) -> Extremes:
    """Peaks and lowest rise. Where two places are equally hot the left one is named."""
    found = [_layer_extremes(state, number) for number in range(len(state.ends))]
    peak, place, lowest = found[0]
    layer = np.ones_like(peak)
    for number, (T, s, low) in enumerate(found[1:], 2):
        hotter = peak < T
        peak, place = np.where(hotter, T, peak), np.where(hotter, s, place)
        layer = np.where(hotter, float(number), layer)
        lowest = np.minimum(lowest, low)
    by_layer, places, lows = (tuple(each) for each in zip(*found, strict=True))
    return Extremes(peak, place, lowest, layer, by_layer, places, lows)


def _layer_extremes(state: State, number: int) -> tuple[Array, Array, Array]:
    layer, ends, q = state.problem.layers[number], state.ends[number], state.q[number]
    hot_left = ends.T0 >= ends.T1
    peak = np.where(hot_left, ends.T0, ends.T1)
    place = np.where(hot_left, layer.a, layer.b)
    lowest = np.where(hot_left, ends.T1, ends.T0)
    if layer.W is None:
        return peak, place, lowest  # no heat crosses the centre, so the rise is monotone from there
    # Heat turns where Q₀ + qV(r) = 0; there ∫k dT from the left is −(Q₀W + qD) = q(VW − D).
    turning = ends.Q0 * ends.Q1 < 0.0
    if not turning.any():
        return peak, place, lowest
    V = np.where(turning, -ends.Q0 / np.where(turning, q, 1.0), 0.0)
    shape = state.problem.structure.shape
    s = np.minimum(depth_of_volume(shape, layer.a, V), layer.d)
    turn = _after(layer, state.sink, ends.T0, q * (V * path(shape, layer.a, s) - source_path(shape, layer.a, s)))
    higher = turning & (q > 0.0) & (turn >= peak)
    return (
        np.where(higher, turn, peak),
        np.where(higher, layer.a + s, place),
        np.where(turning & (q < 0.0), np.minimum(turn, lowest), lowest),
    )


def _after(layer: LayerSteps, sink: Array, T: Array, integral: Array) -> Array:
    """The rise after ∫k dT of that size from T."""
    if isinstance(layer.k, Conductivity):
        start = sink + T
        return T + (layer.k.end(start, integral) - start)
    return T + integral / layer.k


def layer_rise(state: State, number: int, s: Array) -> Array:
    """Rise over the sink in a layer at a distance s from its left face, or from the centre of a solid body (0 ≤ s ≤ d)."""
    layer, ends, q = state.problem.layers[number], state.ends[number], state.q[number]
    shape = state.problem.structure.shape
    if layer.W is None:
        return _after(layer, state.sink, ends.T0, -(q * (s * s) / (2.0 * (shape + 1.0))))
    return _after(layer, state.sink, ends.T0, -(ends.Q0 * path(shape, layer.a, s) + q * source_path(shape, layer.a, s)))


def rise_at(state: State, place: Array) -> Array:
    """Rise over the sink at a place within the body; at a joint, its left side."""
    rise = layer_rise(state, 0, np.minimum(place - state.problem.layers[0].a, state.problem.layers[0].d))
    for number in range(1, len(state.ends)):
        layer = state.problem.layers[number]
        here = place > layer.a
        s = np.clip(place - layer.a, 0.0, layer.d)
        rise = np.where(here, layer_rise(state, number, s), rise)
    return rise


def layer_mean(state: State, number: int) -> Array:
    """Mean rise over a layer's volume.

    With constant k, T̄ = T₀ − [Q₀ ∫W dV + q (V₁D₁ − U)]/(k V₁), where ∫W dV = V₁W₁ − D₁. With k(T) the
    rise is integrated over the volume at Gauss-Legendre nodes, apart at the corners of a table.
    """
    layer, ends, q = state.problem.layers[number], state.ends[number], state.q[number]
    shape = state.problem.structure.shape
    if isinstance(layer.k, Conductivity):
        total = np.zeros_like(ends.T0)
        T0, solid = state.sink + ends.T0, layer.W is None
        for s, dV in nodes(shape, layer.a, layer.d, solid, layer.k, T0, ends.Q0, q):
            total = total + (dV / layer.V) * (layer_rise(state, number, s) - ends.T0)
        return ends.T0 + total
    if layer.W is None:
        U = solid_source_square(shape, layer.d)
        return ends.T0 - q * (layer.D - U / layer.V) / layer.k
    U = source_square(shape, layer.a, layer.d)
    conducted = ends.Q0 * (layer.V * layer.W - layer.D)
    return ends.T0 - (conducted + q * (layer.V * layer.D - U)) / (layer.k * layer.V)


def mean_rise(state: State) -> Array:
    """Mean rise over the volume of the body."""
    if len(state.ends) == 1:
        return layer_mean(state, 0)
    total, V = np.zeros_like(state.sink), np.zeros_like(state.sink)
    for number, layer in enumerate(state.problem.layers):
        total = total + layer_mean(state, number) * layer.V
        V = V + layer.V
    return total / V


def made(state: State) -> Array:
    """Heat generated in the body, in the measure of Q."""
    total = state.q[0] * state.problem.layers[0].V
    for q, layer in zip(state.q[1:], state.problem.layers[1:], strict=True):
        total = total + q * layer.V
    return total


def short(state: State) -> Array:
    """What the heats are out of balance by, in the measure of Q (a self-check)."""
    # Q₁ − Q₀ = made by the march itself; what can be wrong is the far face's law, and the sum in floating point.
    return np.abs(state.imbalance) + np.abs(state.Q_right - state.Q_left - made(state))


def largest_heat(state: State) -> Array:
    """Largest of heat made, put in, and crossing a layer's face, in the measure of Q."""
    scale = np.abs(made(state))
    for ends in state.ends:
        scale = np.maximum(scale, np.maximum(np.abs(ends.Q0), np.abs(ends.Q1)))
    for side, A in ((state.problem.left, state.problem.area_left), (state.problem.right, state.problem.area_right)):
        if side.flux is not None:
            scale = np.maximum(scale, np.abs(side.flux * A))
    return scale
