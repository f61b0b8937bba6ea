"""Finite volumes on one grid: a chain of nodes from the left to the right, solved by Newton's method.

Between nodes of a layer heat flows by the exact integral of k(T) times the geometry's conductance; joints and faces'
resistances are links of their own. Sources are summed over control volumes. The unknowns beside the temperatures are
the squared amplitudes of those currents whose field hangs on the temperatures, and, where a node's temperature is
pinned, the size of the scaled sources.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.typing import NDArray
from scipy.linalg import lapack

from .finite_volume import CYLINDER, WALL
from .laws import Array, Bound, Inverse
from .model import BAR, SIGMA, SOLID_CURRENT, Model, Skin, Source

ROUNDS = 30
HOTTEST = 1e12


@dataclass(frozen=True)
class State:
    """Kelvin above the zero, squared amplitudes (all electric sources), and the factors the heat was scaled by."""

    u: Array
    squares: Array
    size: float  # of the scaled group
    rest: float  # of all other sources
    drive: float  # of the faces' temperatures and fluxes


@dataclass(frozen=True)
class Span:
    """A layer's nodes first..last and its things on them."""

    first: int
    last: int
    law: Bound
    links: Array
    volumes: Array
    places: Array
    source: Source | None
    heat: Bound | None
    electric: int  # number among the electric sources, -1 if none
    group: bool


class StuckError(Exception):
    """Newton found no (stable) state."""


def _log_even(inner: float, start: float, end: float, ticks: Array) -> Array:
    a, b = inner + start, inner + end
    places = start + a * np.expm1(math.log1p((b - a) / a) * ticks)
    places[-1] = end
    return places


class Grid:
    def __init__(self, model: Model, cells: int, zero: float, group: frozenset[int]) -> None:
        self.model, self.zero, self.cells = model, zero, cells
        self.spans: list[Span] = []
        links: list[float] = []  # linear links by edge; nan inside layers
        count = 0
        self.lead = self._outer_node(model.left)
        if self.lead:
            links.append(model.area(0.0) / float(model.left.resistance or 0.0))
            count = 1
        electric = 0
        for i, layer in enumerate(model.layers):
            if i and model.joints[i - 1] > 0.0:
                links.append(model.area(layer.start) / model.joints[i - 1])
                count += 1
            places = self._places(layer.start, layer.thickness, cells)
            source = layer.source
            heat = None
            number = -1
            if source is not None:
                heat = source.law.bound(zero)
                if source.electric:
                    number, electric = electric, electric + 1
                    heat = Inverse(heat) if source.electric == SOLID_CURRENT else heat
            span = Span(
                *(count, count + cells, layer.conductivity.bound(zero), self._links(places), self._volumes(places)),
                *(places, source, heat, number, i in group),
            )
            self.spans.append(span)
            links += [math.nan] * cells
            count += cells
        self.body = (self.spans[0].first, self.spans[-1].last)
        self.tail = self._outer_node(model.right)
        if self.tail:
            links.append(model.area(model.thickness) / float(model.right.resistance or 0.0))
            count += 1
        self.n = count + 1
        self.edges = np.array(links)
        self.linear = [i for i, link in enumerate(links) if not math.isnan(link)]
        tables = [one.source.law.table for one in self.spans if one.source is not None and one.source.law.table]
        gaps = [b[0] - a[0] for table in tables for a, b in pairwise(table)]
        self.stride = 0.5 * min(gaps) if gaps else math.inf  # longest step along the branch that misses no turn
        self.electric = [span for span in self.spans if span.electric >= 0]
        self.side = np.zeros(self.n)
        if model.shape == BAR and model.side.cools:
            self.side = np.zeros(self.n)
            span = self.spans[0]
            self.side[span.first : span.last + 1] = span.volumes / model.section * model.perimeter

    @staticmethod
    def _outer_node(skin: Skin) -> bool:
        return skin.resistance is not None and skin.resistance > 0.0 and skin.cools

    def _places(self, start: float, thickness: float, cells: int) -> Array:
        ticks = np.arange(cells + 1) / cells
        if self.model.shape == BAR:
            return thickness * np.sin(0.5 * np.pi * ticks) ** 2
        if self.model.shape == WALL or self.model.inner + start == 0.0:
            return start + thickness * ticks
        return _log_even(self.model.inner, start, start + thickness, ticks)

    def _links(self, places: Array) -> Array:
        step, a, b = np.diff(places), self.model.inner + places[:-1], self.model.inner + places[1:]
        if self.model.shape in (WALL, BAR):
            return self.model.area(0.0) / step
        if a[0] == 0.0:  # only what is made inside flows: area half way
            middle = (a + b) / 2
            return (2 * np.pi * middle if self.model.shape == CYLINDER else 4 * np.pi * middle**2) / step
        if self.model.shape == CYLINDER:
            return 2 * np.pi / np.log1p(step / a)
        return 4 * np.pi * a * b / step

    def _volumes(self, places: Array) -> Array:
        bounds = np.concatenate((places[:1], (places[1:] + places[:-1]) / 2, places[-1:]))
        a, b, step = self.model.inner + bounds[:-1], self.model.inner + bounds[1:], np.diff(bounds)
        if self.model.shape in (WALL, BAR):
            return step * self.model.area(0.0)
        return np.pi * step * (a + b) if self.model.shape == CYLINDER else 4 / 3 * np.pi * step * (a * a + a * b + b * b)

    # --- the faces ---

    def loss(self, skin: Skin, u: float | Array, drive: float) -> tuple[float | Array, float | Array]:
        """W/m² leaving by film and radiation, less the flux put in, and its slope."""
        out, slope = u * 0.0 - drive * skin.flux_in, u * 0.0
        if skin.film > 0.0 and skin.fluid is not None:
            out, slope = out + skin.film * (u - drive * (skin.fluid - self.zero)), slope + skin.film
        if skin.emissivity > 0.0 and skin.surroundings is not None:
            # T⁴ − S⁴ with its small differences kept; odd below absolute zero so that it always rises
            e, s, hot = skin.emissivity * SIGMA, drive * (skin.surroundings - self.zero), u + self.zero
            cold = s + self.zero
            if np.min(hot) > 0.0:
                out = out + e * (u - s) * (hot + cold) * (hot * hot + cold * cold)
            else:
                out = out + e * (hot * np.abs(hot) ** 3 - cold**4)
            slope = slope + 4 * e * np.abs(hot) ** 3
        return out, slope

    # --- one evaluation ---

    def _factor(self, span: Span, state: State) -> float:
        return state.size if span.group else state.rest

    def flows(self, u: Array) -> Array:
        """Heat flowing to the right through every edge."""
        out = np.empty(self.n - 1)
        for span in self.spans:
            whole = span.law.integral(u[span.first : span.last + 1])
            out[span.first : span.last] = span.links * (whole[:-1] - whole[1:])
        for edge in self.linear:
            out[edge] = self.edges[edge] * (u[edge] - u[edge + 1])
        return out

    def heat_per_volume(self, span: Span, state: State) -> Array | None:
        """W/m³ at the nodes of a layer; None without a source."""
        if span.source is None or span.heat is None:
            return None
        f = span.heat.value(state.u[span.first : span.last + 1])
        if span.electric < 0:
            return f * (self._factor(span, state) * span.source.size)
        return f * (float(state.squares[span.electric]) * span.source.ac * span.source.fill)

    def _contact_heat(self, skin: Skin, state: State) -> float:
        return skin.contact * self.model.section**2 * float(state.squares[0]) if skin.contact else 0.0

    def _system(self, state: State) -> tuple[Array, list[Array], Array, Array, Array, Array]:
        """Residual, three diagonals of its derivative, its derivatives by the squares and by the size, by groups."""
        u, n, model = state.u, self.n, self.model
        flow = self.flows(u)
        left, right = np.empty(n - 1), np.empty(n - 1)  # −dflow/du of the two ends, both made positive
        for edge in self.linear:
            left[edge] = right[edge] = self.edges[edge]
        residual, diagonal = np.zeros(n), np.zeros(n)
        by_square, by_size = np.zeros((len(self.electric), n)), np.zeros(n)
        for span in self.spans:
            at = slice(span.first, span.last + 1)
            k = span.law.value(u[at])
            left[span.first : span.last] = span.links * k[:-1]
            right[span.first : span.last] = span.links * k[1:]
            if span.source is None or span.heat is None:
                continue
            f, slope = span.heat.value(u[at]) * span.volumes, span.heat.slope(u[at]) * span.volumes
            if span.electric < 0:
                factor = self._factor(span, state) * span.source.size
                if span.group:
                    by_size[at] += span.source.size * f
            else:
                per_square = span.source.ac * span.source.fill
                factor = float(state.squares[span.electric]) * per_square
                by_square[span.electric, at] += per_square * f
            residual[at] += factor * f
            diagonal[at] += factor * slope
        residual[:-1] -= flow
        residual[1:] += flow
        diagonal[:-1] -= left
        diagonal[1:] -= right
        for node, skin in ((self.body[0], model.left), (self.body[1], model.right)):
            if skin.contact and self.electric:
                residual[node] += self._contact_heat(skin, state)
                by_square[0, node] += skin.contact * model.section**2
        if model.side.cools and model.shape == BAR:
            out, rise = self.loss(model.side, u, state.drive)
            residual -= self.side * out
            diagonal -= self.side * rise
        upper, lower = right.copy(), left.copy()  # d residual[i]/du[i+1], d residual[i+1]/du[i]
        for node, skin, place in ((0, model.left, 0.0), (n - 1, model.right, model.thickness)):
            if skin.held is None:
                out, rise = self.loss(skin, float(u[node]), state.drive)
                residual[node] -= model.area(place) * out
                diagonal[node] -= model.area(place) * rise
            else:
                self._fix(node, residual, diagonal, upper, lower, by_square, by_size)
                residual[node] = float(u[node]) - state.drive * (skin.held - self.zero)
        return residual, [lower, diagonal, upper], by_square, by_size, left, right

    @staticmethod
    def _fix(node: int, residual: Array, diagonal: Array, upper: Array, lower: Array, squares: Array, size: Array) -> None:
        """Makes a node's equation temperature = given (the residual is filled in by the caller)."""
        diagonal[node] = 1.0
        residual[node] = 0.0
        if node < len(upper):
            upper[node] = 0.0
        if node > 0:
            lower[node - 1] = 0.0
        squares[:, node] = 0.0
        size[node] = 0.0

    def _borders(self, state: State) -> tuple[Array, Array, Array, Array]:
        """Equations of the squares: residual, by temperature, by the square itself, by size."""
        count = len(self.electric)
        residual, by_u = np.zeros(count), np.zeros((count, self.n))
        by_own, by_size = np.ones(count), np.zeros(count)
        for j, span in enumerate(self.electric):
            source = span.source
            if source is None or span.heat is None:
                continue
            factor = self._factor(span, state)
            own = float(state.squares[j])
            if not source.whole:
                residual[j] = own / source.size**2 - factor if source.size else own
                by_own[j] = 1.0 / source.size**2 if source.size else 1.0
            else:
                at = slice(span.first, span.last + 1)
                total = float(span.heat.value(state.u[at]) @ span.volumes) / source.size if source.size else 1.0
                residual[j] = own * total**2 - factor if source.size else own
                by_own[j] = total**2
                if source.size:
                    by_u[j, at] = 2 * own * total / source.size * span.heat.slope(state.u[at]) * span.volumes
            by_size[j] = -1.0 if span.group and source.size else 0.0
        return residual, by_u, by_own, by_size

    @np.errstate(all="ignore")  # what is not finite is refused below
    def step(self, state: State, pin: int | None, target: float) -> tuple[Array, Array, float, Array]:
        """Newton's step (du, dsquares, dsize) and the tangent du/dp or du/dsize."""
        residual, (lower, diagonal, upper), by_square, by_size, _, _ = self._system(state)
        border, border_u, border_own, border_size = self._borders(state)
        count = len(border)
        pinned = pin is not None
        wide = count + 1 if pinned else count
        right = np.zeros((self.n, 2 + count))
        kept: tuple[float, Array, Array, float] | None = None
        if pin is not None:
            row = np.zeros(self.n)
            row[pin] = diagonal[pin]
            if pin > 0:
                row[pin - 1] = lower[pin - 1]
            if pin < self.n - 1:
                row[pin + 1] = upper[pin]
            kept = (float(residual[pin]), row, by_square[:, pin].copy(), float(by_size[pin]))
            self._fix(pin, residual, diagonal, upper, lower, by_square, by_size)
            residual[pin] = float(state.u[pin]) - target
        right[:, 0] = -residual
        right[:, 1] = -by_size
        if count:
            right[:, 2:] = -by_square.T
        extra = np.zeros((self.n, 1))
        if pin is not None:
            extra[pin, 0] = 1.0
        *_, solved, info = lapack.dgtsv(lower, diagonal, upper, np.hstack((right, extra)))
        if info != 0 or not np.all(np.isfinite(solved)):
            raise StuckError
        base, per_size, per_square, per_pin = solved[:, 0], solved[:, 1], solved[:, 2 : 2 + count], solved[:, 2 + count]
        # border unknowns: squares, then the size if pinned
        matrix, known = np.zeros((wide, wide)), np.zeros((wide, 2))
        for j in range(count):
            matrix[j, :count] = border_u[j] @ per_square
            matrix[j, j] += border_own[j]
            known[j, 0] = -border[j] - border_u[j] @ base
            if pinned:
                matrix[j, count] = border_size[j] + border_u[j] @ per_size
                known[j, 1] = -border_u[j] @ per_pin
            else:
                known[j, 1] = -border_size[j] - border_u[j] @ per_size
        if kept is not None:
            pin_residual, row, pin_square, pin_size = kept
            matrix[count, :count] = row @ per_square + pin_square
            matrix[count, count] = row @ per_size + pin_size
            known[count, 0] = -pin_residual - row @ base
            known[count, 1] = -row @ per_pin
        found: Array = np.zeros((wide, 2))
        if wide:
            try:
                found[:] = np.linalg.solve(matrix, known)
            except np.linalg.LinAlgError as error:
                raise StuckError from error
        size_step = float(found[count, 0]) if pinned else 0.0
        du = base + per_square @ found[:count, 0] + (per_size * size_step if pinned else 0.0)
        if pinned:
            tangent = np.append(per_pin + per_square @ found[:count, 1] + per_size * found[count, 1], found[count, 1])
        else:
            tangent = np.append(per_size + per_square @ found[:count, 1], 1.0)
        return du, found[:count, 0], size_step, tangent

    @np.errstate(all="ignore")
    def stable(self, state: State) -> bool:
        """Whether the state is the one that heating from cold leads to: no turn has been passed."""
        _, (lower, diagonal, upper), by_square, _, _, _ = self._system(state)
        product = lower * upper
        if np.any(product < 0.0) or any(np.any(span.law.value(state.u[span.first : span.last + 1]) <= 0) for span in self.spans):
            return False
        fixed = [node for node, skin in ((0, self.model.left), (self.n - 1, self.model.right)) if skin.held is not None]
        main = -diagonal
        for node in fixed:
            main[node] = 1.0
        *_, info = lapack.dpttrf(main, np.sqrt(product))
        loose = any(span.source is not None and span.source.whole for span in self.electric)
        if not loose:
            return bool(info == 0)
        sign, pivot = 1, float(main[0])
        for i in range(1, self.n):
            sign = sign if pivot > 0 else -sign
            pivot = float(main[i]) - float(product[i - 1]) / pivot if pivot else math.inf
        sign = sign if pivot > 0 else -sign
        _, border_u, border_own, _ = self._borders(state)
        *_, solved, bad = lapack.dgtsv(lower, diagonal, upper, -by_square.T)
        if bad != 0:
            return False
        schur = border_u @ solved + np.diag(border_own)
        return bool(sign * np.sign(np.linalg.det(schur)) > 0)

    def newton(self, state: State, pin: int | None = None, target: float = 0.0) -> tuple[State, Array]:
        """The state near a guess at its factors, or with a node's temperature pinned; and the tangent."""
        last = math.inf
        close = False
        for round_ in range(ROUNDS):
            du, dsquares, dsize, tangent = self.step(state, pin, target)
            most = float(np.max(np.abs(du)))
            state = State(state.u + du, state.squares + dsquares, state.size + dsize, state.rest, state.drive)
            if not math.isfinite(most) or float(np.max(np.abs(state.u))) > HOTTEST:
                raise StuckError
            if close or most == 0.0:
                return state, tangent
            bound = 1e-8 * float(np.max(np.abs(state.u))) + 1e-12
            settled = not dsize or abs(dsize) <= 1e-8 * abs(state.size)
            close = most <= bound and settled
            if round_ > 5 and most > 0.3 * last and most <= 1e3 * bound:
                return state, tangent  # no nearer: what is left is rounding
            if round_ > 6 and most > 2 * last and not close:
                raise StuckError
            last = most
        raise StuckError


def nodes(array: Array, span: Span) -> NDArray[np.float64]:
    return array[span.first : span.last + 1]
