"""The solver's entrance: arrays of cases in, arrays of answers out, grouped by structure and worked through in blocks."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass

import numpy as np

from ingle import field
from ingle.cases import Cases, Structure, decode, structure_codes
from ingle.film_laws import Film
from ingle.shapes import Array
from ingle.solution import Solution, Status

# A block's arrays stay in the processor's cache; measured five times quicker than one pass over 200,000 cases.
BLOCK = 8192


def _of_law(solution: Solution, found: Film | None, part: str) -> Array:
    """A part of what a film law gave, NaN where the face has none."""
    n = len(solution.cases)
    return np.full(n, np.nan) if found is None else np.zeros(n) + getattr(found, part)


QUANTITIES: dict[str, Callable[[Solution], Array]] = {
    "peak": lambda s: s.state.sink + s.extremes.peak,
    "peak_place": lambda s: s.extremes.place,
    "peak_layer": lambda s: s.extremes.layer,
    "left_face": lambda s: s.state.sink + s.state.rise_left,
    "right_face": lambda s: s.state.sink + s.state.rise_right,
    "mean": lambda s: s.state.sink + field.mean_rise(s.state),
    "probe_temperature": lambda s: s.probe,
    "left_flux": lambda s: field.left_flux(s.state),
    "right_flux": lambda s: field.right_flux(s.state),
    "left_heat": lambda s: field.left_heat(s.state),
    "right_heat": lambda s: field.right_heat(s.state),
    "heat_made": lambda s: field.heat_made(s.state),
    "left_share": lambda s: field.left_share(s.state),
    "balance": lambda s: field.balance(s.state),
    "left_film": lambda s: _of_law(s, s.left_film, "h"),
    "right_film": lambda s: _of_law(s, s.right_film, "h"),
    "left_doubt": lambda s: _of_law(s, s.left_film, "doubt"),
    "right_doubt": lambda s: _of_law(s, s.right_film, "doubt"),
    "headroom": lambda s: s.headroom,
    "allowable_multiple": lambda s: s.allowable.multiple,
    "allowable_generation": lambda s: s.allowable.multiple * s.pattern[0],
    "governs": lambda s: s.governs.astype(np.float64),
    "least_room": lambda s: np.min(s.rooms, axis=0),
    "worst_limit": lambda s: np.argmin(s.rooms, axis=0) + 1.0,
    "cold_broken": lambda s: s.cold_broken.astype(np.float64),
    "first_broken": lambda s: np.where(s.allowable.lacking == 2, s.allowable.governs, 0).astype(np.float64),
    "lacking": lambda s: s.allowable.lacking.astype(np.float64),
}

# Of layer n, asked as "layer_peak 2"; "joint_left 1" and "joint_right 1" are the sides of the joint beyond layer n.
LAYER_QUANTITIES: dict[str, Callable[[Solution, int], Array]] = {
    "layer_peak": lambda s, n: s.state.sink + s.extremes.by_layer[n - 1],
    "layer_low": lambda s, n: s.state.sink + s.extremes.lows[n - 1],
    "layer_mean": lambda s, n: s.state.sink + field.layer_mean(s.state, n - 1),
    "joint_left": lambda s, n: s.state.sink + s.state.ends[n - 1].T1,
    "joint_right": lambda s, n: s.state.sink + s.state.ends[n].T0,
}


def quantity(name: str) -> Callable[[Solution], Array]:
    """The quantity of that name; KeyError if there is none."""
    base, _, number = name.partition(" ")
    if not number:
        return QUANTITIES[name]
    of_layer, n = LAYER_QUANTITIES[base], int(number)
    return lambda solution: of_layer(solution, n)


@dataclass(frozen=True)
class Answers:
    """``values[name]`` for each quantity asked, NaN where ``status`` is not SOLVED or the quantity has no value."""

    values: dict[str, Array]
    status: np.ndarray


def steady(cases: Cases, wanted: Iterable[str]) -> Answers:
    """Steady temperatures and heats of bodies with uniform generation, one case an element.

    ``wanted`` names of ``QUANTITIES``, or of ``LAYER_QUANTITIES`` with a layer's number: temperatures in °C (``peak``,
    ``left_face``, ``right_face``, ``mean``, ``probe_temperature``, ``layer_peak 2``, ``joint_left 1`` …), ``peak_place`` [m]
    from the left face or as a radius, ``peak_layer`` from 1, ``left_flux`` and ``right_flux`` [W/m² of that face],
    ``left_heat``, ``right_heat`` and ``heat_made`` [W/m² of wall, W/m of cylinder, W of sphere], ``left_share`` and ``balance``
    [1], ``left_film`` and ``right_film`` [W/(m²·K)] with the doubts of their laws, ``headroom`` [K] before the limit that
    ``governs`` (1 ``limit``, 2 ``left_limit``, 3 ``right_limit``, 3 + n that of layer n, 0 none), ``least_room`` [K] before any
    limit, that of ``worst_limit`` (infinite where there is none), ``cold_broken`` the limit passed without the scaled sources,
    ``allowable_multiple`` of the pattern and ``allowable_generation`` [W/m³] of the first layer, NaN where ``lacking`` (1 no
    limit, 2 ``first_broken`` passed with no source, 3 never reached, 4 no state there). Raises KeyError for another name.
    Source: Fourier's law and conservation of heat, integrated by layers with the Kirchhoff integral of k(T).
    """
    wanted = tuple(wanted)
    for name in wanted:
        quantity(name)
    n = len(cases)
    if n <= BLOCK:
        return _block(cases, wanted)
    values = {name: np.empty(n) for name in wanted}
    status = np.empty(n, dtype=np.int8)
    for start in range(0, n, BLOCK):
        rows = slice(start, start + BLOCK)
        part = _block(cases.take(rows), wanted)
        status[rows] = part.status
        for name in wanted:
            values[name][rows] = part.values[name]
    return Answers(values, status)


def _block(cases: Cases, wanted: tuple[str, ...]) -> Answers:
    codes = structure_codes(cases)
    with np.errstate(all="ignore"):  # overflow and 0/0 are looked for in the results and given a status
        if isinstance(codes, Structure):
            return _group(cases, codes, wanted)
        values = {name: np.empty(len(cases)) for name in wanted}
        status = np.empty(len(cases), dtype=np.int8)
        for code in np.unique(codes):
            rows = np.flatnonzero(codes == code)
            part = _group(cases.take(rows), decode(int(code)), wanted)
            status[rows] = part.status
            for name in wanted:
                values[name][rows] = part.values[name]
    return Answers(values, status)


def _group(cases: Cases, structure: Structure, wanted: tuple[str, ...]) -> Answers:
    solution = Solution(cases, structure)
    status = solution.status
    failed = status != Status.SOLVED
    values = {name: quantity(name)(solution) for name in wanted}
    if failed.any():
        values = {name: np.where(failed, np.nan, value) for name, value in values.items()}
    return Answers(values, status)


def profile(cases: Cases, points: int) -> tuple[Array, Array, np.ndarray]:
    """Places [m] and temperatures [°C] at ``points`` of each case: arrays of n × points.

    Each layer has its two ends, so that a joint's place appears twice, and the rest are shared out by thickness (the first
    case's), evenly spread within a layer. ``points`` is at least twice the layers (ValueError). The third array is each
    case's ``Status``; its row is NaN where that is not SOLVED.
    """
    n, counts = len(cases), _points_by_layer(cases, points)
    place, T, status = np.full((n, points), np.nan), np.full((n, points), np.nan), np.empty(n, np.int8)
    codes = structure_codes(cases)
    with np.errstate(all="ignore"):
        groups = [(codes, np.arange(n))] if isinstance(codes, Structure) else [
            (decode(int(code)), np.flatnonzero(codes == code)) for code in np.unique(codes)
        ]  # fmt: skip
        for structure, rows in groups:
            solution = Solution(cases.take(rows), structure)
            status[rows] = solution.status
            solved, column = solution.status == Status.SOLVED, 0
            for number, (layer, count) in enumerate(zip(solution.problem.layers, counts, strict=True)):
                s = np.linspace(0.0, 1.0, count)[:, None] * layer.d
                rise = field.layer_rise(solution.state, number, s)
                rise[0], rise[-1] = solution.state.ends[number].T0, solution.state.ends[number].T1
                here = slice(column, column + count)
                place[rows, here] = np.where(solved[:, None], (layer.a + s).T, np.nan)
                T[rows, here] = np.where(solved[:, None], (solution.state.sink + rise).T, np.nan)
                column += count
    return place, T, status


def _points_by_layer(cases: Cases, points: int) -> list[int]:
    thickness = np.array([layer.thickness[0] for layer in cases.layers])
    if points < 2 * len(thickness):
        raise ValueError(f"a profile through {len(thickness)} layers needs at least {2 * len(thickness)} points")
    # Ends first; each further point goes to the layer whose points are then furthest apart.
    counts = np.full(len(thickness), 2)
    for _ in range(points - 2 * len(thickness)):
        counts[np.argmax(thickness / (counts - 1))] += 1
    return counts.tolist()
