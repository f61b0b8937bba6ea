"""Temperatures that can be held while a source's scale is sought: the peak, a face, or the middle of what makes the heat."""

from __future__ import annotations

import numpy as np

from ingle.network_state import Control, Hold, State
from ingle.network_sweep import Network
from ingle.ports import PortModel, Reading
from ingle.shapes import Array


def middle(network: Network, state: State, multiples: list[Array], models: list[PortModel]) -> Hold:
    """The mean of a typical temperature of every driven element: it rises with the scale wherever the body does."""
    driven = [e for e, element in enumerate(network.elements) if element.port.source.driven]
    readings: dict[int, Reading] = {}
    for e in driven:
        port = network.elements[e].port
        readings[e] = port.typical(state.Ta[e], state.Tb[e], multiples[e], state.theta[e], models[e])
    share = 1.0 / max(len(driven), 1)
    T = np.zeros_like(network.zero)
    a: list[Array | float | None] = [None] * len(network.elements)
    b: list[Array | float | None] = [None] * len(network.elements)
    l: list[Array | float | None] = [None] * len(network.elements)  # noqa: E741 - λ
    for e, reading in readings.items():
        T = T + share * (reading.T + reading.move)
        a[e], b[e], l[e] = share * reading.a, share * reading.b, share * reading.l
    return Hold(T, a, b, l)


def face(side: int) -> Control:
    """The body's left (0) or right (1) face."""

    def hold(network: Network, state: State, multiples: list[Array], models: list[PortModel]) -> Hold:
        del multiples, models
        last = len(network.elements) - 1
        none: list[Array | float | None] = [None] * (last + 1)
        one = np.ones_like(network.zero)
        if side == 0:
            return Hold(state.Ta[0], [one, *none[1:]], none, none)
        return Hold(state.Tb[last], none, [*none[1:], one], none)

    return hold


def hottest(layer: int | None) -> Control:
    """The peak of the body (None) or of one layer; its place moves along, which costs nothing where it is stationary."""

    def hold(network: Network, state: State, multiples: list[Array], models: list[PortModel]) -> Hold:
        count = len(network.elements)
        scope = [e for e in range(count) if layer is None or network.elements[e].layer == layer]
        readings = {
            e: network.elements[e].port.peak(state.Ta[e], state.Tb[e], multiples[e], state.theta[e], models[e]) for e in scope
        }
        T = np.full_like(network.zero, -np.inf)
        which = np.zeros(len(T), dtype=np.intp)
        for e, reading in readings.items():
            higher = reading.T > T
            T, which = np.where(higher, reading.T, T), np.where(higher, e, which)
        a: list[Array | float | None] = [None] * count
        b: list[Array | float | None] = [None] * count
        l: list[Array | float | None] = [None] * count  # noqa: E741 - λ
        for e, reading in readings.items():
            here = (which == e).astype(np.float64)
            T = T + here * reading.move
            a[e], b[e], l[e] = here * reading.a, here * reading.b, here * reading.l
        return Hold(T, a, b, l)

    return hold
