"""Layers, joints and faces as one chain of linear relations, swept once from left to right and back.

Between two layers everything to the left is one relation P Q + B δT = E, with Q the heat rightward and δT the move of the
next face. Each column of E is for one cause: the residual first, then each unknown multiple μ. All pivots are positive
exactly where the state is stable at fixed multiples; their negative ones are counted.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from ingle.collocation import CollocatedPort
from ingle.even_port import EvenPort
from ingle.heat_sources import SourceLaw, SurfaceLaw
from ingle.kirchhoff import kirchhoff
from ingle.network_problem import NetworkFace, NetworkLayer, NetworkProblem
from ingle.plane_port import PlanePort
from ingle.ports import Port, PortModel
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


# P, B and A of P L = B δT + A for the heat L leaving and the move δT of the body's face; P may be 1 for every case.
Relation = tuple[Array | float, Array | float, Array]


@dataclass(frozen=True)
class End:
    """A face of the body: ``held`` as a rise, or the law, or ``flux`` put in, or nothing of these.

    R = resistance/r^m, None where no case has any; ``measure`` = r^m, None of a wall.
    """

    measure: Array | None
    R: Array | None
    held: Array | None
    law: SurfaceLaw | None
    flux: Array | None
    zero: Array
    numbers: np.ndarray

    def outermost(self, T: Array, surface: Array) -> Array:
        """The rise of the outermost surface: ``surface`` beyond R, and T where a case has none, alone or among others."""
        if self.R is None:
            return T
        bare = self.R == 0.0
        return np.where(bare, T, surface) if np.count_nonzero(bare) else surface

    def relation(self, T: Array, surface: Array) -> Relation:
        """P, B and A. ``surface``: rise of the outermost surface, beyond R, where the law acts."""
        if self.held is not None:
            return (0.0 if self.R is None else self.R), 1.0, T - self.held
        if self.law is None:
            return 1.0, 0.0, 0.0 * T if self.flux is None else -self.flux
        if self.R is None:
            flux, slope = self.law(self.zero + T, self.numbers)
            return (1.0, slope, flux) if self.measure is None else (1.0, self.measure * slope, self.measure * flux)
        at = self.outermost(T, surface)
        flux, slope = self.law(self.zero + at, self.numbers)
        if self.measure is not None:
            flux, slope = self.measure * flux, self.measure * slope
        return 1.0 + slope * self.R, slope, flux + slope * (T - at)

    def take(self, rows: np.ndarray) -> End:
        """The end of some of the cases."""
        measure, R, held, flux = (None if x is None else x[rows] for x in (self.measure, self.R, self.held, self.flux))
        return End(measure, R, held, self.law, flux, self.zero[rows], self.numbers[rows])


@dataclass(frozen=True)
class Network:
    """A problem made ready: temperatures are rises over ``zero`` [°C]. ``left`` is None where the body is solid.

    ``contacts``: heat set free at the body's left and right face, r^m q″, by the multiple of the element there.
    """

    elements: tuple[Element, ...]
    left: End | None
    right: End
    zero: Array
    contacts: tuple[Array | None, Array | None] = (None, None)

    def take(self, rows: np.ndarray) -> Network:
        """The network of some of the cases."""
        left = None if self.left is None else self.left.take(rows)
        first, last = (None if x is None else x[rows] for x in self.contacts)
        return Network(tuple(e.take(rows) for e in self.elements), left, self.right.take(rows), self.zero[rows], (first, last))

    def contact_heats(self, multiples: list[Array]) -> tuple[Array | None, Array | None]:
        """The contacts' heats."""
        first, last = self.contacts
        return None if first is None else first * multiples[0], None if last is None else last * multiples[-1]

    def seen_from_outside(self, models: list[PortModel], multiples: list[Array], owners: list[int | None]) -> list[PortModel]:
        """The end elements' models with what their contacts set free: seen from outside it is heat of their own."""
        first, last = self.contacts
        if first is None and last is None:
            return models
        models = list(models)
        if first is not None:
            model = models[0]
            al = None if owners[0] is None or model.al is None else model.al - first
            models[0] = model._replace(Qa=model.Qa - first * multiples[0], al=al)
        if last is not None:
            model = models[-1]
            bl = None if owners[-1] is None or model.bl is None else model.bl + last
            models[-1] = model._replace(Qb=model.Qb + last * multiples[-1], bl=bl)
        return models


def collocated(shape: Shape, layer: NetworkLayer, by_nodes: bool) -> bool:
    """Whether a layer needs collocation; ``by_nodes``: whenever its source depends on temperature."""
    law, side = layer.source.law, layer.side
    if law == SourceLaw.EVEN and side is None:
        return False
    linear = law in (SourceLaw.EVEN, SourceLaw.SLOPED) and (side is None or side.linear)
    return by_nodes or not (shape == Shape.WALL and layer.conductivity.constant and linear)


def build(problem: NetworkProblem, N: int, cuts: tuple[Array, ...], by_nodes: bool) -> Network:
    """The network, with N nodes in each collocated slice; 0 leaves them open (``with_nodes``).

    ``cuts``: for each layer c × n distances from its left face.
    """
    n, zero, shape = len(problem), problem.coldest, problem.shape
    numbers = np.arange(n) if problem.numbers is None else problem.numbers
    start = np.zeros(n)
    r, joint, elements = start if problem.inner is None else problem.inner, None, []
    left = None if problem.solid else _end(problem.left, shape, r, zero, numbers)
    for index, layer in enumerate(problem.layers):
        solid = problem.solid and index == 0
        make = _maker(shape, layer, zero, numbers, N, by_nodes)
        if not len(cuts[index]):
            elements.append(Element(make(r, layer.thickness, solid), index, start, joint))
        else:
            places = [start, *cuts[index], layer.thickness]
            for piece, (begin, end) in enumerate(pairwise(places)):
                port = make(r + begin, end - begin, solid and piece == 0)
                elements.append(Element(port, index, begin, joint if piece == 0 else None))
        r = r + layer.thickness
        joint = None if layer.joint is None else layer.joint / area(shape, r)
    outer = problem.right.contact
    contacts = problem.left.contact, outer if outer is None else outer * area(shape, r)
    return Network(tuple(elements), left, _end(problem.right, shape, r, zero, numbers), zero, contacts)


def with_nodes(network: Network, N: int) -> Network:
    """The network, whose collocated slices are given N nodes."""
    for element in network.elements:
        if isinstance(element.port, CollocatedPort):
            element.port.set_nodes(N)
    return network


def _end(face: NetworkFace, shape: Shape, r: Array, zero: Array, numbers: np.ndarray) -> End:
    measure = None if shape == Shape.WALL else area(shape, r) + 0.0 * zero
    R, flux = face.resistance, face.flux
    if R is not None and not np.count_nonzero(R):
        R = None
    if measure is not None:
        R, flux = None if R is None else R / measure, None if flux is None else flux * measure
    return End(measure, R, None if face.held is None else face.held - zero, face.law, flux, zero, numbers)


def _maker(
    shape: Shape, layer: NetworkLayer, zero: Array, numbers: np.ndarray, N: int, by_nodes: bool
) -> Callable[[Array, Array, bool], Port]:  # fmt: skip
    """Makes the ports of a layer's slices from their left faces, thicknesses and whether they are solid."""
    k, source = kirchhoff(layer.conductivity.shifted(zero)), layer.source.shifted(zero)
    side = None if layer.side is None else layer.side.shifted(zero, numbers)
    if collocated(shape, layer, by_nodes):
        return lambda a, d, solid: CollocatedPort(shape, a, d, k, source, side, solid, N)
    if source.law == SourceLaw.EVEN and side is None:
        return lambda a, d, solid: EvenPort(shape, a, d, k, source, solid)
    conductance = None if side is None else side.conductance() + 0.0 * zero
    fluid = None if side is None else (0.0 * zero if side.fluid is None else side.fluid)

    def plane(a: Array, d: Array, solid: bool) -> Port:
        del a, solid
        return PlanePort(d, k.at(d), source, fluid, conductance)

    return plane


@dataclass
class Sweep:
    """Moves of every element's faces: ``a[e][c]`` and ``b[e][c]`` for element e and cause c.

    ``negatives``: how many pivots and inner modes lie below zero, None where none does in any case.
    """

    a: list[list[Array]]
    b: list[list[Array]]
    negatives: np.ndarray | None


def sweep(
    network: Network, models: list[PortModel], borders: list[int | None], count: int, faces: Array,
    ends: tuple[Relation | None, Relation],
) -> Sweep:  # fmt: skip
    """Eliminate from left to right and substitute back. ``borders[e]``: which of ``count`` unknown multiples element e has."""
    elements = network.elements
    last = len(elements) - 1
    none = [0.0] * count
    rhs: list[list[Array | float] | None] = []
    pivots: list[Array | None] = []
    signs: list[Array] = []
    Ps: list[Array | float] = []
    P: Array | float = 0.0
    B: Array | float = 0.0
    E: list[Array | float] = [0.0, *none]
    if ends[0] is not None:
        P, B, A = ends[0]
        E = [-A, *none]
    H: list[Array | float] = []
    for e, model in enumerate(models):
        border = borders[e]
        if elements[e].port.solid:
            rhs.append(None)
            pivots.append(None)
            Ps.append(0.0)
            H = [model.Qb, *none]
            slope = model.bb
        else:
            whole = isinstance(P, float) and P == 1.0
            aa, Qa, ab = (model.aa, model.Qa, model.ab) if whole else (P * model.aa, P * model.Qa, P * model.ab)
            pivot = B + aa
            signs.append(pivot)
            right = [E[0] - Qa, *E[1:]]
            if border is not None and model.al is not None:
                right[border + 1] = right[border + 1] - P * model.al
            through = model.ba / pivot
            H = [model.Qb + through * right[0], *(through * x for x in right[1:])]
            slope = model.bb - through * ab
            rhs.append(right)
            pivots.append(pivot)
            Ps.append(P)
        if border is not None and model.bl is not None:
            H[border + 1] = H[border + 1] + model.bl
        back = -slope
        if e < last:
            joint = elements[e + 1].joint
            E = [H[0] - back * (faces[2 * e + 2] - faces[2 * e + 1]), *H[1:]]
            P = 1.0
            if joint is not None:
                crossed = 1.0 + back * joint
                signs.append(crossed)
                P = crossed
        B = back
    P_end, B_end, A_end = ends[1]
    final = P_end * back + B_end
    signs.append(final)
    b: list[list[Array]] = [[(P_end * H[0] - A_end) / final, *(P_end * x / final for x in H[1:])]]
    a: list[list[Array]] = []
    for e in range(last, -1, -1):
        model, right_side, here = models[e], rhs[e], pivots[e]
        db = b[-1]
        if right_side is None or here is None:
            a.append([0.0 * x for x in db])
            continue
        ab = Ps[e] * model.ab
        da = [(x - ab * y) / here for x, y in zip(right_side, db, strict=True)]
        a.append(da)
        if e > 0:
            joint = elements[e].joint
            before = [da[0] + (faces[2 * e] - faces[2 * e - 1]), *da[1:]]
            if joint is not None:
                Q = [model.aa * x + model.ab * y for x, y in zip(da, db, strict=True)]
                Q[0] = Q[0] + model.Qa
                border = borders[e]
                if border is not None and model.al is not None:
                    Q[border + 1] = Q[border + 1] + model.al
                before = [x + joint * y for x, y in zip(before, Q, strict=True)]
            b.append(before)
    return Sweep(a[::-1], b[::-1], _negatives(signs, models))


def _negatives(signs: list[Array], models: list[PortModel]) -> np.ndarray | None:
    """How many pivots are not positive, and inner modes that grow."""
    least = signs[0]
    for pivot in signs[1:]:
        least = np.minimum(least, pivot)
    inner = [model.negatives for model in models if model.negatives is not None]
    if np.count_nonzero(least > 0.0) == least.size and not inner:
        return None
    total = np.zeros(least.shape, dtype=np.intp)
    for pivot in signs:
        total += ~(pivot > 0.0)
    for own in inner:
        total += own
    return total
