"""The solver's entrance: arrays of cases in, arrays of answers out, grouped by structure and worked through in blocks."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass

import numpy as np

from ingle.cases import Cases, Structure, decode, structure_codes
from ingle.shapes import Array
from ingle.solution import Solution, Status
from ingle.solutions import solution_of

# A block's arrays stay in the processor's cache; measured five times quicker than one pass over 200,000 cases.
BLOCK = 8192


QUANTITIES: dict[str, Callable[[Solution], Array]] = {
    "peak": lambda s: s.peak()[0],
    "peak_place": lambda s: s.peak()[1],
    "peak_layer": lambda s: s.peak()[2],
    "left_face": lambda s: s.layer_ends(1)[0],
    "right_face": lambda s: s.layer_ends(len(s.cases.layers))[1],
    "mean": lambda s: s.mean(),
    "probe_temperature": lambda s: s.probe,
    "left_flux": lambda s: s.left_flux(),
    "right_flux": lambda s: s.right_flux(),
    "left_heat": lambda s: s.heats().left,
    "right_heat": lambda s: s.heats().right,
    "side_heat": lambda s: s.heats().side,
    "heat_made": lambda s: s.heats().made,
    "left_share": lambda s: s.left_share(),
    "balance": lambda s: s.balance(),
    "left_film": lambda s: s.film("left", "h"),
    "right_film": lambda s: s.film("right", "h"),
    "left_doubt": lambda s: s.film("left", "doubt"),
    "right_doubt": lambda s: s.film("right", "doubt"),
    "side_doubt": lambda s: s.film("side", "doubt"),
    "headroom": lambda s: s.headroom,
    "allowable_multiple": lambda s: s.allowable.multiple,
    "governs": lambda s: s.governs.astype(np.float64),
    "least_room": lambda s: np.min(s.rooms, axis=0),
    "worst_limit": lambda s: np.argmin(s.rooms, axis=0) + 1.0,
    "cold_broken": lambda s: s.cold_broken.astype(np.float64),
    "first_broken": lambda s: np.where(s.allowable.lacking == 2, s.allowable.governs, 0).astype(np.float64),
    "lacking": lambda s: s.allowable.lacking.astype(np.float64),
}

# Those of the allowable source, which a case has though its own source be too much for any steady state.
OF_ALLOWABLE = frozenset({"allowable_multiple", "governs", "cold_broken", "first_broken", "lacking"})

# The states of which only the source is too much.
GONE = (Status.RUNAWAY, Status.TOO_HOT, Status.NO_CONDUCTIVITY)

# The states of which only the source is too much.
GONE = (Status.RUNAWAY, Status.TOO_HOT, Status.NO_CONDUCTIVITY)

# Those that depend on which sources scale.
OF_SCALING = OF_ALLOWABLE | {"headroom"}

# Of layer n, asked as "layer_peak 2"; "joint_left 1" and "joint_right 1" are the sides of the joint beyond layer n.
LAYER_QUANTITIES: dict[str, Callable[[Solution, int], Array]] = {
    "layer_peak": lambda s, n: s.layer_range(n)[1],
    "layer_low": lambda s, n: s.layer_range(n)[0],
    "layer_mean": lambda s, n: s.layer_mean(n),
    "joint_left": lambda s, n: s.layer_ends(n)[1],
    "joint_right": lambda s, n: s.layer_ends(n + 1)[0],
    "voltage": lambda s, n: s.voltage(n),
    "resistance": lambda s, n: s.resistance(n),
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
    """Steady temperatures and heats of bodies that make heat inside, one case an element.

    ``wanted`` names of ``QUANTITIES``, or of ``LAYER_QUANTITIES`` with a layer's number: temperatures in °C (``peak``,
    ``left_face``, ``right_face``, ``mean``, ``probe_temperature``, ``layer_peak 2``, ``joint_left 1`` …), ``peak_place`` [m]
    from the left face or as a radius, ``peak_layer`` from 1, ``left_flux`` and ``right_flux`` [W/m² of that face],
    ``left_heat``, ``right_heat`` and ``heat_made`` [W/m² of wall, W/m of cylinder, W of sphere], ``left_share`` and ``balance``
    [1], ``side_heat`` through a bar's sides, ``left_film`` and ``right_film`` [W/(m²·K)] with the doubts of their laws, ``voltage
    1`` [V] and ``resistance 1`` [Ω] of a layer's current, ``headroom`` [K] before the limit that ``governs`` (1 ``limit``, 2
    ``left_limit``, 3 ``right_limit``, 3 + n that of layer n, 0 none, −1 runaway comes first), ``least_room`` [K] before any
    limit, that of ``worst_limit`` (infinite where there is none), ``cold_broken`` the limit passed without the scaled sources,
    ``allowable_multiple`` of the pattern's heat, never beyond runaway and NaN where ``lacking`` (1 no limit, 2 ``first_broken``
    passed with no source, 3 never reached, 4 no state there, 5 not found). Those of the allowable have values also where the
    status is one of ``GONE``. Raises KeyError for another name.
    Source: Fourier's law and conservation of heat, by layers with the Kirchhoff integral of k(T).
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
    solution = solution_of(cases, structure)
    status = solution.status
    failed = status != Status.SOLVED
    values = {name: quantity(name)(solution) for name in wanted}
    if failed.any():
        beyond = failed & ~np.isin(status, GONE)
        values = {name: np.where(beyond if name in OF_ALLOWABLE else failed, np.nan, value) for name, value in values.items()}
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
            solution = solution_of(cases.take(rows), structure)
            status[rows] = solution.status
            solved, column = solution.status == Status.SOLVED, 0
            for n, (layer, origin, count) in enumerate(zip(solution.cases.layers, solution.origins, counts, strict=True), 1):
                s = np.linspace(0.0, 1.0, count)[:, None] * layer.thickness
                within = solution.layer_at(n, s)
                within[0], within[-1] = solution.layer_ends(n)
                here = slice(column, column + count)
                place[rows, here] = np.where(solved[:, None], (origin + s).T, np.nan)
                T[rows, here] = np.where(solved[:, None], within.T, np.nan)
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
