"""Layers, joints and faces as one chain of linear relations, swept once from left to right and back.

Between two layers everything to the left is one relation P Q + B δT = E, with Q the heat rightward and δT the move of the
next face. Each column of E is for one cause: the residual first, then each unknown multiple μ. All pivots are positive
exactly where the state is stable at fixed multiples; their negative ones are counted.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from ingle.collocation import CollocatedPort
from ingle.heat_sources import SourceLaw, SurfaceLaw
from ingle.network_problem import NetworkFace, NetworkLayer, NetworkProblem
from ingle.ports import EvenPort, PlanePort, Port, PortModel
from ingle.shapes import Array, Shape, area


@dataclass(frozen=True)
class Element:
    """A layer, or a slice of one. ``joint``: r^−m times the area resistance before it, None in the middle of a layer.

    ``offset`` [m]: of its left face from its layer's left face.
    """

    port: Port
    layer: int
    offset: Array
    joint: Array | None

    def take(self, rows: np.ndarray) -> Element:
        """The element of some of the cases."""
        joint = None if self.joint is None else self.joint[rows]
        return Element(self.port.take(rows), self.layer, self.offset[rows], joint)


@dataclass(frozen=True)
class End:
    """A face of the body: ``held`` as a rise, or the law, or ``flux`` put in; R = resistance/r^m; ``measure`` = r^m."""

    measure: Array
    R: Array
    held: Array | None
    law: SurfaceLaw | None
    flux: Array
    zero: Array
    numbers: np.ndarray

    def relation(self, T: Array, surface: Array) -> tuple[Array, Array, Array]:
        """P, B, A with P L = B δT + A for the heat L leaving and the move δT of the body's face.

        ``surface``: rise of the outermost surface, beyond R, where the law acts.
        """
        one = np.ones_like(T)
        if self.held is not None:
            return self.R, one, T - self.held
        if self.law is not None:
            flux, slope = self.law(surface + self.zero, self.numbers)
            flux, slope = self.measure * flux, self.measure * slope
            return 1.0 + slope * self.R, slope, flux + slope * (T - surface)
        return one, np.zeros_like(T), -self.flux

    def take(self, rows: np.ndarray) -> End:
        """The end of some of the cases."""
        held = None if self.held is None else self.held[rows]
        return End(
            self.measure[rows], self.R[rows], held, self.law, self.flux[rows], self.zero[rows], self.numbers[rows]
        )  # fmt: skip


@dataclass(frozen=True)
class Network:
    """A problem made ready: temperatures are rises over ``zero`` [°C]. ``left`` is None where the body is solid."""

    elements: tuple[Element, ...]
    left: End | None
    right: End
    zero: Array

    def take(self, rows: np.ndarray) -> Network:
        """The network of some of the cases."""
        left = None if self.left is None else self.left.take(rows)
        return Network(tuple(e.take(rows) for e in self.elements), left, self.right.take(rows), self.zero[rows])


def collocated(shape: Shape, layer: NetworkLayer, by_nodes: bool) -> bool:
    """Whether a layer needs collocation; ``by_nodes``: whenever its source depends on temperature."""
    law, side = layer.source.law, layer.side
    if law == SourceLaw.EVEN and side is None:
        return False
    linear = law in (SourceLaw.EVEN, SourceLaw.SLOPED) and (side is None or side.linear)
    return by_nodes or not (shape == Shape.WALL and layer.conductivity.constant and linear)


def build(problem: NetworkProblem, N: int, cuts: tuple[Array, ...], by_nodes: bool) -> Network:
    """The network, with N nodes in each collocated slice. ``cuts``: for each layer c × n distances from its left face."""
    n, zero, shape = len(problem), problem.coldest, problem.shape
    numbers = np.arange(n) if problem.numbers is None else problem.numbers
    inner = np.zeros(n) if problem.inner is None else problem.inner
    r, joint, elements = inner, None, []
    for index, layer in enumerate(problem.layers):
        solid = problem.solid and index == 0
        places = [np.zeros(n), *cuts[index], layer.thickness]
        for piece, (start, end) in enumerate(pairwise(places)):
            port = _port(shape, layer, zero, numbers, r + start, end - start, solid and piece == 0, N, by_nodes)
            elements.append(Element(port, index, start, joint if piece == 0 else None))
        r = r + layer.thickness
        joint = np.zeros(n) if layer.joint is None else layer.joint / area(shape, r)
    left = None if problem.solid else _end(problem.left, shape, inner, zero, numbers)
    return Network(tuple(elements), left, _end(problem.right, shape, r, zero, numbers), zero)


def _end(face: NetworkFace, shape: Shape, r: Array, zero: Array, numbers: np.ndarray) -> End:
    none = np.zeros_like(zero)
    measure = none + area(shape, r)
    R = none if face.resistance is None else face.resistance / measure
    flux = none if face.flux is None else face.flux * measure
    return End(measure, R, None if face.held is None else face.held - zero, face.law, flux, zero, numbers)


def _port(
    shape: Shape, layer: NetworkLayer, zero: Array, numbers: np.ndarray, a: Array, d: Array, solid: bool, N: int, by_nodes: bool
) -> Port:  # fmt: skip
    k, source = layer.conductivity.shifted(zero), layer.source.shifted(zero)
    side = None if layer.side is None else layer.side.shifted(zero, numbers)
    if collocated(shape, layer, by_nodes):
        return CollocatedPort(shape, a, d, k, source, side, solid, N)
    if source.law == SourceLaw.EVEN and side is None:
        return EvenPort(shape, a, d, k, source, solid)
    assert k.k0 is not None
    conductance = None if side is None else side.conductance() + np.zeros_like(d)
    fluid = None if side is None else (np.zeros_like(d) if side.fluid is None else side.fluid)
    return PlanePort(d, k.k0, source, fluid, conductance)


@dataclass(frozen=True)
class Sweep:
    """Moves of every element's faces: ``a[e][c]`` and ``b[e][c]`` for element e and cause c.

    ``negatives``: how many pivots and inner modes lie below zero.
    """

    a: list[list[Array]]
    b: list[list[Array]]
    negatives: np.ndarray


def sweep(
    network: Network, models: list[PortModel], borders: list[int | None], count: int, Ta: list[Array], Tb: list[Array],
    ends: tuple[tuple[Array, Array, Array] | None, tuple[Array, Array, Array]],
) -> Sweep:  # fmt: skip
    """Eliminate from left to right and substitute back. ``borders[e]``: which of ``count`` unknown multiples element e has."""
    elements = network.elements
    last = len(elements) - 1
    zero = np.zeros_like(Tb[0])
    negatives = np.zeros(len(zero), dtype=np.intp)
    rhs: list[list[Array] | None] = []
    pivots: list[Array | None] = []
    Ps: list[Array | float] = []
    P: Array | float = zero
    B = zero
    E: list[Array] = [zero] * (count + 1)
    if ends[0] is not None:
        P, B, A = ends[0]
        E = [-A] + [zero] * count
    H: list[Array] = []
    for e, model in enumerate(models):
        negatives = negatives + model.negatives
        border = borders[e]
        if elements[e].port.solid:
            rhs.append(None)
            pivots.append(None)
            Ps.append(0.0)
            H = [model.Qb] + [zero] * count
            slope = model.bb
        else:
            pivot = B + P * model.aa
            negatives = negatives + ~(pivot > 0.0)
            right = [E[0] - P * model.Qa, *E[1:]]
            if border is not None and model.al is not None:
                right[border + 1] = right[border + 1] - P * model.al
            through = model.ba / pivot
            H = [through * x for x in right]
            H[0] = H[0] + model.Qb
            slope = model.bb - through * P * model.ab
            rhs.append(right)
            pivots.append(pivot)
            Ps.append(P)
        if border is not None and model.bl is not None:
            H[border + 1] = H[border + 1] + model.bl
        B = -slope
        if e < last:
            joint = elements[e + 1].joint
            E = [H[0] - B * (Ta[e + 1] - Tb[e]), *H[1:]]
            P = 1.0
            if joint is not None:
                P = 1.0 + B * joint
                negatives = negatives + ~(P > 0.0)
    P_end, B_end, A_end = ends[1]
    pivot = B_end + P_end * B
    negatives = negatives + ~(pivot > 0.0)
    b = [[(P_end * H[0] - A_end) / pivot] + [P_end * x / pivot for x in H[1:]]]
    a: list[list[Array]] = []
    for e in range(last, -1, -1):
        model, right_side, here = models[e], rhs[e], pivots[e]
        db = b[-1]
        if right_side is None or here is None:
            a.append([zero] * (count + 1))
            continue
        da = [(x - Ps[e] * model.ab * y) / here for x, y in zip(right_side, db, strict=True)]
        a.append(da)
        if e > 0:
            joint = elements[e].joint
            before = [da[0] + (Ta[e] - Tb[e - 1]), *da[1:]]
            if joint is not None:
                Q = [model.aa * x + model.ab * y for x, y in zip(da, db, strict=True)]
                Q[0] = Q[0] + model.Qa
                border = borders[e]
                if border is not None and model.al is not None:
                    Q[border + 1] = Q[border + 1] + model.al
                before = [x + joint * y for x, y in zip(before, Q, strict=True)]
            b.append(before)
    return Sweep(a[::-1], b[::-1], negatives)
