"""The march against the network engine, where both apply: sources that do not depend on temperature.

The two share the integrals over shells and the conductivities, and nothing else: one carries heat outward from one unknown, the
other eliminates layers and faces together. Bodies are drawn here, not taken from anywhere.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pytest
from ingle import Cases, Face, Layer, steady
from ingle.conductivities import Conductivity, Table
from ingle.heat_sources import HeatSource
from ingle.network import NetworkFace, NetworkLayer, NetworkProblem, NetworkState, Status, mean, peak, solve_network, temperature
from ingle.shapes import MEASURE, Shape
from network_drawn import Law

ROWS = 40


@dataclass
class Pair:
    """The same rows for both engines."""

    cases: Cases
    problem: NetworkProblem


def draw_k(draw: np.random.Generator, kind: str, n: int) -> Conductivity:
    k0 = 10.0 ** draw.uniform(-1.0, 2.0, n)
    if kind == "constant":
        return Conductivity(k0)
    if kind == "sloped":
        return Conductivity(k0, draw.uniform(-5e-4, 2e-3, n), draw.uniform(0.0, 50.0, n))
    T = np.cumsum(draw.uniform(30.0, 150.0, (n, 4)), axis=1) - 40.0
    return Conductivity(table=Table(T, k0[:, None] * 2.0 ** draw.uniform(-0.7, 0.7, (n, 4))))


def draw_pair(draw: np.random.Generator, shape: Shape, solid: bool, ks: list[str], left: str, right: str, n: int = ROWS) -> Pair:
    """Rises of a few kelvin to a few hundred; every other row with a resistance at its faces, every third without joints."""
    thickness = [10.0 ** draw.uniform(-3.0, -1.0, n) for _ in ks]
    whole = sum(thickness)
    assert isinstance(whole, np.ndarray)
    inner = None if solid or shape == Shape.WALL else whole * 10.0 ** draw.uniform(-1.5, 1.0, n)
    h, rise = 10.0 ** draw.uniform(0.5, 3.0, n), 10.0 ** draw.uniform(0.5, 2.3, n)
    layers, twins, joints = [], [], []
    for d, kind in zip(thickness, ks, strict=True):
        k = draw_k(draw, kind, n)
        q = rise / (whole * d / k.at(np.full(n, 50.0)) + whole / h) / len(ks) * draw.choice([0.0, 1.0, 1.0], n)
        joint = np.where(np.arange(n) % 3, draw.uniform(0.0, 0.3, n) / h, 0.0)
        layers.append(Layer(d, k, q))
        twins.append(NetworkLayer(d, k, HeatSource(q), joint=joint))
        joints.append(joint)
    faces, twin_faces, sinks = [], [], []
    for kind in (left, right):
        T, R = draw.uniform(0.0, 60.0, n), np.where(np.arange(n) % 2, 0.3 / h, 0.0)
        flux, zero = draw.uniform(-0.5, 3.0, n) * h, np.zeros(n)
        e, around = draw.uniform(0.1, 0.9, n), T + draw.uniform(0.0, 10.0, n)
        sinks.append(np.minimum(T, around) if kind in ("held", "film", "radiant") else zero + np.inf)
        if kind == "held":
            faces.append(Face(held=T, resistance=R))
            twin_faces.append(NetworkFace(held=T, resistance=R))
        elif kind == "film":
            faces.append(Face(film=h, fluid=T, flux=flux, resistance=R))
            twin_faces.append(NetworkFace(law=Law(h, T, zero, T, flux), resistance=R))
        elif kind == "radiant":
            faces.append(Face(film=h, fluid=T, emissivity=e, surroundings=around, resistance=R))
            twin_faces.append(NetworkFace(law=Law(h, T, e, around, zero), resistance=R))
        else:
            faces.append(Face(flux=flux if kind == "flux" else None))
            twin_faces.append(NetworkFace(flux=flux if kind == "flux" else None))
    bore = None if inner is None else inner
    coldest = np.minimum(sinks[0] if not solid else np.inf, sinks[1])
    cases = Cases(shape, tuple(layers), faces[0], faces[1], bore, joints=tuple(joints[:-1]))
    return Pair(cases, NetworkProblem(shape, tuple(twins), twin_faces[0], twin_faces[1], coldest, inner))


def far_apart(pair: Pair, within: float) -> list[str]:
    """What the engines differ in by more than ``within`` of a row's rise, or of its heat, or 1e-12 of a temperature in kelvin."""
    count = len(pair.cases.layers)
    temperatures = ["peak", "left_face", "right_face", "mean", *(f"layer_mean {i + 1}" for i in range(count))]
    temperatures += [f"layer_peak {i + 1}" for i in range(count)]
    temperatures += [f"joint_{side} {i + 1}" for i in range(count - 1) for side in ("left", "right")]
    probe = pair.cases.layers[0].thickness * 0.3
    start = 0.0 if pair.cases.inner is None else pair.cases.inner
    cases = Cases(**{**vars(pair.cases), "probe": start + probe})
    march = steady(cases, [*temperatures, "probe_temperature", "left_heat", "right_heat", "heat_made"])
    state = solve_network(pair.problem)
    good = (march.status == 0) & (state.status == Status.SOLVED)
    found = ["status"] if not good.all() else []
    twin = network_answers(state, count)
    twin["probe_temperature"] = temperature(state, 0, probe)
    rise = peak(state).T - state.lowest + np.abs(pair.problem.coldest - state.lowest)
    for name in (*temperatures, "probe_temperature"):
        off = np.abs(march.values[name] - twin[name]) - 1e-12 * (np.abs(twin[name]) + 273.15)
        if not (off <= within * rise)[good].all():
            found.append(f"{name} {np.nanmax((off / rise)[good]):.1e}")
    heat = MEASURE[pair.problem.shape] * np.maximum(np.abs(state.Q_left).max(axis=0), np.abs(state.Q_right).max(axis=0))
    # A heat is known to what the rounding of the temperatures that drive it leaves.
    noise = 1e-12 * 573.15 * driven_by_kelvin(pair) * MEASURE[pair.problem.shape]
    for name in ("left_heat", "right_heat", "heat_made"):
        off = np.abs(march.values[name] - twin[name])
        if not (off <= within * heat + noise)[good].all():
            found.append(f"{name} {np.nanmax((off / heat)[good]):.1e}")
    return found


def driven_by_kelvin(pair: Pair) -> np.ndarray:
    """r^m over the resistance from one face's sink to the other's, at least: what a kelvin between them drives at most."""
    R = np.zeros(len(pair.cases))
    r = np.zeros(len(pair.cases)) if pair.cases.inner is None else pair.cases.inner
    m = int(pair.problem.shape)
    for layer in pair.cases.layers:
        after = r + layer.thickness
        R = R + layer.thickness / after**m / layer.conductivity.at(np.full(len(R), 50.0))
        r = after
    return 1.0 / R


def network_answers(state: NetworkState, count: int) -> dict[str, np.ndarray]:
    measure = MEASURE[state.problem.shape]
    answers = {"peak": peak(state).T, "left_face": state.left[0], "right_face": state.right[-1], "mean": mean(state)}
    answers["left_heat"], answers["right_heat"] = -state.Q_left[0] * measure, state.Q_right[-1] * measure
    answers["heat_made"] = state.made.sum(axis=0) * measure
    for i in range(count):
        answers[f"layer_mean {i + 1}"], answers[f"layer_peak {i + 1}"] = mean(state, i), peak(state, i).T
        if i + 1 < count:
            answers[f"joint_left {i + 1}"], answers[f"joint_right {i + 1}"] = state.right[i], state.left[i + 1]
    return answers


FACES = ("held", "film", "radiant", "flux", "insulated")


@pytest.mark.parametrize("seed", range(6))
@pytest.mark.parametrize("shape", Shape)
def test_both_engines_agree(shape: Shape, seed: int) -> None:
    """Forty rows of one drawn structure, 720 in all: 1e-9 of the rise."""
    draw = np.random.default_rng([29, shape, seed])
    solid = shape != Shape.WALL and seed % 2 == 0
    ks = draw.choice(["constant", "sloped", "table"], 1 + seed % 3).tolist()
    left = "insulated" if solid else str(draw.choice(FACES))
    right = str(draw.choice(FACES[:3] if left in ("flux", "insulated") else FACES))
    assert far_apart(draw_pair(draw, shape, solid, ks, left, right), 1e-9) == []
