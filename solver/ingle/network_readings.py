"""What a solved part of a network tells: peaks, temperatures, heats, what a supply's group adds up to, and its final status."""

from __future__ import annotations

import numpy as np

from ingle.fluids import KELVIN
from ingle.network_run import Part
from ingle.network_state import Status
from ingle.ports import Reading
from ingle.shapes import Array


def peaks_of(part: Part) -> tuple[Reading, ...]:
    """The highest temperature of each element."""
    state, faces = part.state, part.state.faces
    readings = []
    for e, (element, mu, theta) in enumerate(zip(part.network.elements, part.multiples, state.theta, strict=True)):
        port, Ta, Tb = element.port, faces[2 * e], faces[2 * e + 1]
        port.hold(mu, theta)
        top = port.peak(Ta, Tb, mu, theta)
        # A peak read at a face may miss it by a last digit.
        readings.append(top._replace(T=np.maximum(top.T, Tb if port.solid else np.maximum(Ta, Tb))))
    return tuple(readings)


def judged(part: Part, tops: tuple[Reading, ...], ceiling: float) -> np.ndarray:
    """The part's status, with answers refused that lie on a floor or beyond the ceiling."""
    status, state = part.status.copy(), part.state
    solved: np.ndarray | None = None
    for e, (element, top) in enumerate(zip(part.network.elements, tops, strict=True)):
        port = element.port
        hot = top.T + part.network.zero > ceiling
        if solved is None and (port.floors or np.count_nonzero(hot)):
            solved = part.status == Status.SOLVED
        if solved is None:
            continue
        # Steps that do not settle beyond the ceiling are too hot whether they would or not.
        status[(solved | (part.status == Status.NOT_CONVERGED)) & hot] = Status.TOO_HOT
        if not port.floors:
            continue
        low = state.Tb[e] if port.solid else np.minimum(state.Ta[e], state.Tb[e])
        inside = port.span(state.theta[e])
        held = port.conductivity_usable(low if inside is None else np.minimum(low, inside[0]), top.T)
        if held is not None:
            status[solved & ~held] = Status.FLOORED_K
    return status


def temperatures_of(part: Part) -> list[list[Array]]:
    """Of the layers' left and right faces, the outermost surfaces, and the lowest, °C."""
    network, state, zero = part.network, part.state, part.network.zero
    faces, multiples = state.faces, part.multiples
    left: list[Array] = []
    right: list[Array] = []
    low = faces[1:] if network.elements[0].port.solid else faces
    lowest = low.min(axis=0)
    for e, element in enumerate(network.elements):
        port, index = element.port, element.layer
        start, end = faces[2 * e], faces[2 * e + 1]
        if port.solid:
            start = port.centre(end, multiples[e], state.theta[e])
            lowest = np.minimum(lowest, start)
        inside = port.span(state.theta[e])
        if inside is not None:
            lowest = np.minimum(lowest, inside[0])
        if index == len(left):
            left.append(zero + start)
            right.append(zero + end)
        else:
            right[index] = zero + end
    surfaces = []
    for side, (end_of, T) in enumerate(((network.left, faces[0]), (network.right, faces[-1]))):
        outermost = T
        if end_of is not None and end_of.held is not None:
            outermost = end_of.held
        elif end_of is not None and end_of.law is not None:
            outermost = end_of.outermost(T, state.surfaces[side])
        elif end_of is not None and end_of.R is not None and end_of.flux is not None:
            outermost = T + end_of.R * end_of.flux
        surfaces.append(zero + outermost)
    return [left, right, surfaces, [zero + lowest]]


def supplied_of(part: Part) -> list[list[Array]]:
    """√μ and Σ weight ∫ g r^m dr of each supply's group."""
    state, groups = part.state, len(part.border.given)
    sums: list[Array] = [np.zeros_like(part.network.zero) for _ in range(groups)]
    for e, (element, mu) in enumerate(zip(part.network.elements, part.multiples, strict=True)):
        port, source = element.port, element.port.source
        if source.group is not None and source.weight is not None:
            total = port.shape_sum(state.Ta[e], state.Tb[e], mu, state.theta[e])
            sums[source.group] = sums[source.group] + source.weight * total
    return [[np.sqrt(state.mu[g]) for g in range(groups)], sums]


def heats_of(part: Part) -> list[list[Array]]:
    """Q at the layers' left and right faces, what each layer makes, and what the ends' laws are short of.

    Each resistance on the way gives a heat of its own, exact but for the rounding of the temperatures at its ends, which
    matters the less the larger it is; so the heat entering is their mean, weighted by the resistances.
    """
    Q, made, short = _heats(part)
    # The body's own heats lie inside its contacts.
    first, last = part.network.contact_heats(part.multiples)
    if first is not None:
        Q[0], made[0] = Q[0] + first, made[0] - first
    if last is not None:
        Q[-1], made[-1] = Q[-1] - last, made[-1] - last
    left: list[Array] = []
    right: list[Array] = []
    own: list[Array] = []
    for e, element in enumerate(part.network.elements):
        if element.layer == len(left):
            left.append(Q[e])
            right.append(Q[e + 1])
            own.append(made[e])
        else:
            right[-1] = Q[e + 1]
            own[-1] = own[-1] + made[e]
    return [left, right, own, [short]]


def _heats(part: Part) -> tuple[list[Array], list[Array], Array]:
    """Heats at the elements' faces, what each element makes, and what the ends' laws are short of."""
    network, state, faces = part.network, part.state, part.state.faces
    through = [
        element.port.through(faces[2 * e], faces[2 * e + 1], mu, state.theta[e])
        for e, (element, mu) in enumerate(zip(network.elements, part.multiples, strict=True))
    ]
    first, last = network.contact_heats(part.multiples)
    if first is not None:
        through[0] = through[0][0] - first, through[0][1] + first
    if last is not None:
        through[-1] = through[-1][0], through[-1][1] + last
    made = [own for _, own in through]
    total = np.zeros_like(network.zero)
    weights, sums = np.zeros_like(total), np.zeros_like(total)
    exact: Array | None = total if network.left is None else None
    ends: list[tuple[Array, Array, Array | float]] = []
    for side, (end, T) in enumerate(((network.left, faces[0]), (network.right, faces[-1]))):
        if end is None:
            ends.append((total, total, 0.0))
            continue
        surface = T if end.law is None else end.outermost(T, state.surfaces[side])
        P, B, A = (total + x for x in end.relation(T, surface))
        resistance = np.minimum(P / np.where(B > 0.0, B, 1e-300), 1e290)
        # What the rounding of a temperature in °C makes of the law's flux, or of that through a resistance to a held one.
        noise = 0.0 if end.law is None else 4e-16 * B * (np.abs(surface) + np.abs(end.zero) + KELVIN)
        if end.held is not None:
            noise = 4e-16 * (np.abs(T) + np.abs(end.zero) + KELVIN) / np.where(P > 0.0, P, np.inf)
        ends.append((np.where(P > 0.0, A / np.where(P > 0.0, P, 1.0), 0.0), resistance, noise))
        if end.held is None and end.law is None and exact is None:
            flux = total if end.flux is None else end.flux
            exact = flux if end is network.left else -flux - sum(made)
    for e, (Qa, own) in enumerate(through):
        element = network.elements[e]
        if not element.port.solid and exact is None:
            R = element.port.resistance(faces[2 * e], faces[2 * e + 1])
            weights, sums = weights + R, sums + R * (Qa - total)
            if e > 0 and element.joint is not None:
                sums = sums + (faces[2 * e - 1] - faces[2 * e] - element.joint * total)
                weights = weights + element.joint
        total = total + own
    left_heat, left_R, left_noise = ends[0]
    right_heat, right_R, right_noise = ends[1]
    if exact is None:
        most = np.maximum(np.maximum(left_R, right_R), 1e-290)
        scaled_left, scaled_right = left_R / most, right_R / most
        Q0 = sums / most - scaled_left * left_heat + scaled_right * (right_heat - total)
        Q0 = Q0 / (weights / most + scaled_left + scaled_right)
    else:
        Q0 = exact
    Q = [Q0]
    for own in made:
        Q.append(Q[-1] + own)
    short = np.zeros_like(Q0)
    for R, heat, here, noise in ((left_R, left_heat, -Q[0], left_noise), (right_R, right_heat, Q[-1], right_noise)):
        # A held face without a resistance takes any heat, and a centre none.
        short = np.where(R > 0.0, np.maximum(short, np.abs(heat - here) - noise), short)
    return Q, made, short
