"""Quantities of a solved state: the peak and its place, faces, mean, heats, temperature anywhere, heat balance."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ingle.march import State
from ingle.shapes import (
    MEASURE,
    Array,
    Shape,
    area,
    depth_of_volume,
    path,
    solid_source_square,
    source_path,
    source_square,
)


@dataclass(frozen=True)
class Extremes:
    """Highest and lowest rise over the sink, and the place of the highest as a distance d from the left face or centre."""

    peak: Array
    place: Array
    lowest: Array


def extremes(state: State) -> Extremes:
    """Peak and lowest rise. Where two places are equally hot the left one is named."""
    steps, q, Q0 = state.steps, state.q, state.Q_left
    hot_left = state.rise_left >= state.rise_right
    peak = np.where(hot_left, state.rise_left, state.rise_right)
    place = np.where(hot_left, 0.0, steps.d)
    lowest = np.where(hot_left, state.rise_right, state.rise_left)
    if steps.W is None:
        return Extremes(peak, place, lowest)  # no heat crosses the centre, so the rise is monotone from there
    # Heat turns where Q₀ + qV(r) = 0; marching back from there, T(r) = T₀ + q D(r → left)/k.
    turning = Q0 * state.Q_right < 0.0
    if not turning.any():
        return Extremes(peak, place, lowest)
    V = np.where(turning, -Q0 / np.where(turning, q, 1.0), 0.0)
    s = np.minimum(depth_of_volume(state.structure.shape, steps.a, V), steps.d)
    turn = state.rise_left + q * source_path(state.structure.shape, steps.a + s, -s) / steps.k
    higher = turning & (q > 0.0) & (turn >= peak)
    return Extremes(
        np.where(higher, turn, peak),
        np.where(higher, s, place),
        np.where(turning & (q < 0.0), np.minimum(turn, lowest), lowest),
    )


def rise_at(state: State, s: Array) -> Array:
    """Rise over the sink at a distance s from the left face, or from the centre of a solid body (0 ≤ s ≤ d)."""
    steps, shape = state.steps, state.structure.shape
    if steps.W is None:
        return state.rise_left - state.q * (s * s) / (2.0 * (shape + 1.0)) / steps.k
    fall = state.Q_left * path(shape, steps.a, s) + state.q * source_path(shape, steps.a, s)
    return state.rise_left - fall / steps.k


def mean_rise(state: State) -> Array:
    """Mean over the volume: T̄ = T₀ − [Q₀ ∫W dV + q (V₁D₁ − U)]/(k V₁), where ∫W dV = D from the right face inward."""
    steps, shape = state.steps, state.structure.shape
    if steps.W is None:
        U = solid_source_square(shape, steps.d)
        return state.rise_left - state.q * (steps.D - U / steps.V) / steps.k
    U = source_square(shape, steps.a, steps.d)
    conducted = state.Q_left * source_path(shape, steps.b, -steps.d)
    return state.rise_left - (conducted + state.q * (steps.V * steps.D - U)) / (steps.k * steps.V)


def left_flux(state: State) -> Array:
    """Net heat leaving through the left face, W/m² of that face; 0 at the centre of a solid body."""
    if state.steps.W is None:
        return np.zeros_like(state.Q_left)
    return (0.0 - state.Q_left) / area(state.structure.shape, state.steps.a)


def right_flux(state: State) -> Array:
    """Net heat leaving through the right face, W/m² of that face."""
    return state.Q_right / area(state.structure.shape, state.steps.b)


def left_heat(state: State) -> Array:
    """Net heat leaving on the left: W/m² of a wall, W/m of a cylinder, W of a sphere."""
    return (0.0 - state.Q_left) * MEASURE[state.structure.shape]


def right_heat(state: State) -> Array:
    """Net heat leaving on the right, measured as ``left_heat``."""
    return state.Q_right * MEASURE[state.structure.shape]


def heat_made(state: State) -> Array:
    """Heat generated in the body, measured as ``left_heat``."""
    return state.q * state.steps.V * MEASURE[state.structure.shape]


def left_share(state: State) -> Array:
    """Share of all heat that leaves which leaves on the left, 0 to 1; NaN where none leaves beyond rounding."""
    left, right = np.maximum(-state.Q_left, 0.0), np.maximum(state.Q_right, 0.0)
    total = left + right
    leaves = total > 1e-13 * _largest_heat(state)
    return np.where(leaves, left / np.where(leaves, total, 1.0), np.nan)


def balance(state: State) -> Array:
    """What the heats are out of balance by, over the largest of heat made, taken in and passing through (a self-check)."""
    made = state.q * state.steps.V
    # Q₁ − Q₀ = made by the march itself; what can be wrong is the far face's law, and the sum in floating point.
    short = np.abs(state.imbalance) + np.abs(state.Q_right - state.Q_left - made)
    scale = _largest_heat(state)
    return np.where(scale > 0.0, short / np.where(scale > 0.0, scale, 1.0), short)


def _largest_heat(state: State) -> Array:
    scale = np.abs(state.q * state.steps.V)
    for heat in (state.Q_left, state.Q_right, state.F_left, state.F_right):
        scale = np.maximum(scale, np.abs(heat))
    return scale


def origin(state: State) -> Array | float:
    """The coordinate at s = 0: 0 for a wall and a solid body, the bore radius of a hollow one."""
    return 0.0 if state.structure.shape == Shape.WALL else state.steps.a
