"""Rows at the edges of what a designer could type, for both engines: Biot numbers 1e-6 to 1e6, rises of 1 K to 3000 K,
conductivities that fall almost to zero, fins of up to fifty decay lengths. Drawn here, not taken from anywhere.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from ingle import Cases, Face, Layer
from ingle.conductivities import Conductivity
from ingle.heat_sources import HeatSource, SideLoss, SourceLaw
from ingle.network import NetworkFace, NetworkLayer, NetworkProblem
from ingle.shapes import Shape
from network_drawn import Law

KINDS = ("held", "film", "radiant", "flux")
LAWS = ("even", "rising", "falling", "per", "arrhenius", "fin")


@dataclass
class Extreme:
    """One structure's rows; ``cases`` is None where the march has no such source."""

    problem: NetworkProblem
    cases: Cases | None


def drawn(draw: np.random.Generator, shape: Shape, solid: bool, left: str, right: str, law: str, sloped: bool, n: int) -> Extreme:
    one, zero = np.ones(n), np.zeros(n)
    d = 10.0 ** draw.uniform(-4.0, 0.0, n)
    inner = None if solid or shape == Shape.WALL else d * 10.0 ** draw.uniform(-2.0, 3.0, n)
    k0, T = 10.0 ** draw.uniform(-2.0, 2.6, n), draw.uniform(-50.0, 100.0, n)
    h = k0 / d * 10.0 ** draw.uniform(-6.0, 6.0, n)
    rise = 10.0 ** draw.uniform(0.0, 3.5, n)
    # The rise of a plane layer with one face at its sink, the other insulated.
    q = rise / (d * d / k0 / 2.0 + d / h)
    if left == "held" or right == "held":
        q = rise / (d * d / k0 / 2.0)
    slope = draw.uniform(-1.05, 2.0, n) / rise if sloped else None
    k = Conductivity(k0, slope, T) if slope is not None else Conductivity(k0)
    side = None
    if law == "fin":
        mL = 10.0 ** draw.uniform(-2.0, np.log10(50.0), n)
        around = T + draw.uniform(0.0, 1.0, n) * rise
        side = SideLoss(mL * mL * k0 / (d * d), one, around)
        q = q * draw.choice([0.0, 1.0], n)
    source = {
        "even": HeatSource(q, driven=True),
        "fin": HeatSource(q, driven=True),
        "rising": HeatSource(q, SourceLaw.SLOPED, draw.uniform(0.0, 1.0, n) / rise, T, driven=True),
        "falling": HeatSource(q, SourceLaw.SLOPED, draw.uniform(-3.0, 0.0, n) / rise, T, driven=True),
        "per": HeatSource(q, SourceLaw.PER_SLOPED, draw.uniform(-0.3, 3.0, n) / rise, T, driven=True),
        "arrhenius": HeatSource(
            q, SourceLaw.ARRHENIUS, reference=T, activation=draw.uniform(0.0, 2.0, n) / rise * (T + 273.15) ** 2, driven=True
        ),
    }[law]
    faces, twins, sinks = [], [], []
    for kind in (left, right):
        sink, R = T + draw.uniform(0.0, 0.3, n) * rise, np.where(np.arange(n) % 2, draw.choice([1e-6, 1e-2, 1.0, 1e2], n) / h, 0.0)
        flux, e = draw.uniform(0.0, 0.5, n) * q * d, draw.uniform(0.01, 1.0, n)
        if kind == "held":
            faces.append(Face(held=sink, resistance=R))
            twins.append(NetworkFace(held=sink, resistance=R))
        elif kind == "film":
            faces.append(Face(film=h, fluid=sink, resistance=R))
            twins.append(NetworkFace(law=Law(h, sink, zero, sink, zero), resistance=R))
        elif kind == "radiant":
            faces.append(Face(film=h, fluid=sink, emissivity=e, surroundings=sink, resistance=R))
            twins.append(NetworkFace(law=Law(h, sink, e, sink, zero), resistance=R))
        else:
            faces.append(Face(flux=flux))
            twins.append(NetworkFace(flux=flux))
        sinks.append(sink if kind != "flux" else zero + np.inf)
    coldest = np.minimum(sinks[0] if not solid else np.inf, sinks[1])
    if side is not None and side.fluid is not None:
        coldest = np.minimum(coldest, side.fluid)
    layer = NetworkLayer(d, k, source, side)
    problem = NetworkProblem(shape, (layer,), twins[0], twins[1], coldest, inner)
    cases = None
    if law == "even":
        cases = Cases(shape, (Layer(d, k, q),), Face() if solid else faces[0], faces[1], inner)
    return Extreme(problem, cases)


def structures() -> list[tuple[Shape, bool, str, str, str, bool]]:
    """Every shape with every pair of faces that lets heat out, every law of its source, k constant and sloped."""
    found = []
    for shape, solid in (
        (Shape.WALL, False),
        (Shape.CYLINDER, False),
        (Shape.CYLINDER, True),
        (Shape.SPHERE, False),
        (Shape.SPHERE, True),
    ):
        for left in KINDS if not solid else ("flux",):
            for right in KINDS[:3] if left == "flux" or solid else KINDS:
                for law in LAWS if shape == Shape.WALL else LAWS[:-1]:
                    found += [(shape, solid, left, right, law, sloped) for sloped in (False, True)]
    return found
