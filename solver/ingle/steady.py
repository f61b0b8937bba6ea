"""The solver's entrance: arrays of cases in, arrays of answers out, grouped by structure and worked through in blocks."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from enum import IntEnum
from functools import cached_property

import numpy as np

from ingle import field
from ingle.allowable import Allowable, allowable
from ingle.cases import Cases, Structure, decode, structure_codes
from ingle.march import State, Steps, layer_steps, solve
from ingle.shapes import Array

# A block's arrays stay in the processor's cache; measured five times quicker than one pass over 200,000 cases.
BLOCK = 8192
ABSOLUTE_ZERO = -273.15


class Status(IntEnum):
    """Why a case has no answer."""

    SOLVED = 0
    NO_OUTLET = 1  # no face lets heat out, so there is no steady state
    BELOW_ABSOLUTE_ZERO = 2
    OVERFLOW = 3  # beyond the range of floating-point numbers


class Solution:
    """The solved cases of one structure; each quantity is worked out when first asked for. Arrays, one case an element."""

    def __init__(self, cases: Cases, structure: Structure) -> None:
        self.cases, self.structure = cases, structure

    @cached_property
    def steps(self) -> Steps:
        """Integrals over the layers."""
        return layer_steps(self.cases, self.structure)

    @cached_property
    def state(self) -> State:
        """The march's result at the cases' own sources."""
        return solve(self.cases, self.structure, self.steps, self.cases.layers[0].generation)

    @cached_property
    def extremes(self) -> field.Extremes:
        """Peak, its place, and the lowest temperature."""
        return field.extremes(self.state)

    @cached_property
    def status(self) -> np.ndarray:
        """A ``Status`` for each case."""
        if not self.state.settled:
            return np.full(len(self.cases), Status.NO_OUTLET, dtype=np.int8)
        ends = self.extremes
        cold = self.state.sink + ends.lowest < ABSOLUTE_ZERO
        finite = np.isfinite(ends.peak) & np.isfinite(ends.lowest) & np.isfinite(self.state.Q_left)
        finite &= np.isfinite(self.state.Q_right)
        return np.where(~finite, Status.OVERFLOW, np.where(cold, Status.BELOW_ABSOLUTE_ZERO, Status.SOLVED)).astype(np.int8)

    @cached_property
    def allowable(self) -> Allowable:
        """The source at which the first limit is reached."""
        if not self.state.settled:
            none = np.zeros(len(self.cases), dtype=np.int8)
            return Allowable(np.full(len(self.cases), np.nan), none, none)
        return allowable(self.cases, self.structure, self.steps)

    @cached_property
    def rooms(self) -> Array:
        """Kelvin left before each limit, by its number less 1: peak, left face, right face; infinite where there is none."""
        state, cases = self.state, self.cases
        rooms = np.full((3, len(cases)), np.inf)
        for room, limit, rise in zip(
            rooms,
            (cases.limit, cases.left_limit, cases.right_limit),
            (self.extremes.peak, state.rise_left, state.rise_right),
            strict=True,
        ):
            if limit is not None:
                room[:] = np.where(np.isnan(limit), np.inf, (limit - state.sink) - rise)
        return rooms

    @cached_property
    def governs(self) -> np.ndarray:
        """The limit that the source would reach first; where no source can be allowed, the one now nearest or most passed."""
        nearest = np.argmin(self.rooms, axis=0) + 1
        has_limit = np.isfinite(self.rooms).any(axis=0)
        return np.where(self.allowable.lacking == 0, self.allowable.governs, np.where(has_limit, nearest, 0))

    @cached_property
    def headroom(self) -> Array:
        """Kelvin left before the governing limit, negative where it is passed; NaN where there is no limit."""
        room = np.choose(np.maximum(self.governs - 1, 0), self.rooms)
        return np.where(self.governs > 0, room, np.nan)

    @cached_property
    def probe(self) -> Array:
        """Temperature at ``cases.probe`` [°C]; NaN outside the body or where there is no probe."""
        if self.cases.probe is None:
            return np.full(len(self.cases), np.nan)
        return self.at(self.cases.probe)

    def at(self, place: Array) -> Array:
        """Temperature [°C] at a place: from the left face of a wall, else a radius. NaN outside the body."""
        s = place - field.origin(self.state)
        d = self.steps.d
        # A place typed as the body's own size may miss it by rounding in the unit.
        slack = 1e-9 * (d + np.abs(place))
        inside = (s >= -slack) & (s <= d + slack)
        s = np.where(inside, np.clip(s, 0.0, d), 0.0)
        return np.where(inside, self.state.sink + field.rise_at(self.state, s), np.nan)


QUANTITIES: dict[str, Callable[[Solution], Array]] = {
    "peak": lambda s: s.state.sink + s.extremes.peak,
    "peak_place": lambda s: field.origin(s.state) + s.extremes.place,
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
    "headroom": lambda s: s.headroom,
    "allowable_generation": lambda s: s.allowable.generation,
    "governs": lambda s: s.governs.astype(np.float64),
    "least_room": lambda s: np.min(s.rooms, axis=0),
    "first_broken": lambda s: np.where(s.allowable.lacking == 2, s.allowable.governs, 0).astype(np.float64),
    "lacking": lambda s: s.allowable.lacking.astype(np.float64),
}


@dataclass(frozen=True)
class Answers:
    """``values[name]`` for each quantity asked, NaN where ``status`` is not SOLVED or the quantity has no value."""

    values: dict[str, Array]
    status: np.ndarray


def steady(cases: Cases, wanted: Iterable[str]) -> Answers:
    """Steady temperatures and heats of bodies with uniform generation, one case an element.

    ``wanted`` names of ``QUANTITIES``: temperatures in °C (``peak``, ``left_face``, ``right_face``, ``mean``,
    ``probe_temperature``), ``peak_place`` [m] from the left face or as a radius, ``left_flux`` and ``right_flux`` [W/m² of
    that face], ``left_heat``, ``right_heat`` and ``heat_made`` [W/m² of wall, W/m of cylinder, W of sphere],
    ``left_share`` and ``balance`` [1], ``headroom`` [K] before the limit that ``governs`` (1 ``limit``, 2 ``left_limit``,
    3 ``right_limit``, 0 none), ``allowable_generation`` [W/m³] and ``lacking`` (1 no limit, 2 a limit broken with no source, which
    ``first_broken`` names, 3 never reached), and ``least_room`` [K] before any limit, infinite where there is none.
    Raises KeyError for another name. Source: Fourier's law and conservation of heat, integrated in closed form.
    """
    wanted = tuple(wanted)
    for name in wanted:
        QUANTITIES[name]
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
    values = {name: QUANTITIES[name](solution) for name in wanted}
    if failed.any():
        values = {name: np.where(failed, np.nan, value) for name, value in values.items()}
    return Answers(values, status)


def profile(cases: Cases, points: int) -> tuple[Array, Array, np.ndarray]:
    """Places [m] and temperatures [°C] at evenly spread ``points`` (2 or more) of each case: arrays of n × points.

    The third array is each case's ``Status``; its row is NaN where that is not SOLVED.
    """
    n = len(cases)
    share = np.arange(points) / (points - 1.0)
    rows = np.repeat(np.arange(n), points)
    each = cases.take(rows)
    d = cases.layers[0].thickness
    inner = np.zeros(n) if cases.inner is None else np.where(np.equal(cases.shape, 0), 0.0, cases.inner)
    place = inner[:, None] + d[:, None] * share
    place[:, -1] = inner + d
    answer = steady(
        Cases(each.shape, each.layers, each.left, each.right, each.inner, probe=place.reshape(-1)),
        ("probe_temperature",),
    )
    T = answer.values["probe_temperature"].reshape(n, points)
    return np.where(np.isnan(T), np.nan, place), T, answer.status[::points]
