"""Random rows of currents, windings, bars and sources in temperature: each as headings and, by the definitions, as a ``Bulk``.

Sizes, properties and films are drawn, not taken from anywhere; sources are such that rises are of a few kelvin to a hundred, and
grow by less than a half over them.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np
from gauss_bodies import Bulk, Pairs, Property, Rim, Source, Stratum
from ingle.film_laws import FilmLaw, FluidKind, film

SIGMA = 5.670374419e-8  # W/(m²·K⁴), CODATA 2018
M = {"wall": 0, "bar": 0, "cylinder": 1, "sphere": 2}
Row = dict[str, Any]
LAWS = ("constant", "sloped", "table")


@dataclass
class Drawn:
    """One row. ``wound``, ``bar``, ``solid``; ``ac``, ``turns`` and sizes turn an amplitude into voltage and resistance."""

    row: Row
    bulk: Bulk
    conductor: int | None  # the layer of the row's current
    ac: float = 1.0
    turns: float = 1.0
    fill: float = 1.0
    sign: float = 1.0
    section: float = 1.0

    @property
    def kind(self) -> str:
        """Shape, source and how it is given, for reports."""
        sources = [h.split(" [")[0] for h in self.row if h.split(" [")[0].split(" 2")[0] in _SOURCES]
        return f"{self.row['shape']}, {' and '.join(sources)}{', wound' if 'turns' in self.row else ''}"


_SOURCES = ("current", "voltage", "current density", "generation")


def _property(draw: np.random.Generator, law: str, y0: float, T: float, rise: float, least: float, most: float) -> Property:
    """Changing by the shares ``least`` to ``most`` over the rise above T."""
    if law == "constant":
        return Property(y0)
    if law == "sloped":
        reference = T + float(draw.uniform(-0.3, 0.3)) * rise if draw.random() < 0.7 else 20.0
        share = float(draw.uniform(least, most)) / max(1.0, abs(T - reference) / rise)
        return Property(y0, share / rise, reference)
    at = T + rise * np.cumsum(draw.uniform(0.15, 0.6, 4)) - 0.3 * rise
    values = y0 * (1.0 + np.cumsum(draw.uniform(least, most, 4)) / 3.0)
    return Property(points=tuple((round(float(x), 3), float(y)) for x, y in zip(at, values, strict=True)))


def _put(row: Row, name: str, unit: str, number: int, law: Property) -> None:
    """A property's headings."""
    end = "" if number == 1 else f" {number}"
    row[f"{name}{end} [{unit}]"] = law.text() if law.points else law.y0
    if not law.points and law.slope:
        row[f"{name} slope{end} [1/K]"] = law.slope
        if law.reference != 20.0:
            row[f"{name} reference{end} [°C]"] = law.reference


def _film(h: float, fluid: float, e: float, surroundings: float, flux: float) -> Pairs:
    def law(T: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        K, S = T + 273.15, surroundings + 273.15
        # T⁴ goes on below absolute zero with its sign, so that trials on their way there come back.
        radiated = np.where(K > 0.0, (K - S) * (K + S) * (K * K + S * S), K * np.abs(K) ** 3 - S**4)
        return h * (T - fluid) + e * SIGMA * radiated - flux, h + 4.0 * e * SIGMA * np.abs(K) ** 3

    return law


def by_law(law: FilmLaw, kind: FluidKind, size: float, speed: float | None, fluid: float, e: float = 0.0) -> Pairs:
    """Convection by a law of the solver, at the surface's own temperature, and radiation to what the fluid's temperature is."""

    def flux(T: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        flow = None if speed is None else np.full_like(T, speed)
        found = film(law, kind, np.full_like(T, size), flow, T, np.full_like(T, fluid))
        radiated, more = _film(0.0, 0.0, e, fluid, 0.0)(T)
        return found.h * (T - fluid) + radiated, found.h + found.slope * (T - fluid) + more

    return flux


FACES = ("held", "film", "radiant", "flux", "law", "insulated")


def _face(draw: np.random.Generator, row: Row, side: str, kind: str, h: float, T: float, rise: float) -> Rim:
    resistance = 0.0
    if kind in ("held", "film", "radiant") and draw.random() < 0.3:
        resistance = float(draw.uniform(0.05, 0.5)) / h
        row[f"{side} resistance [m²·K/W]"] = resistance
    if kind == "insulated":
        return Rim()
    if kind == "held":
        row[f"{side} held [°C]"] = T
        return Rim(T, resistance=resistance)
    flux = float(draw.uniform(-0.1, 0.3)) * h * rise if kind == "flux" or draw.random() < 0.2 else 0.0
    if flux:
        row[f"{side} flux in [W/m²]"] = flux
    if kind == "flux":
        return Rim(law=_film(0.0, 0.0, 0.0, 0.0, flux))
    row[f"{side} fluid [°C]"] = T
    if kind == "law":
        row.pop(f"{side} flux in [W/m²]", None)
        size = float(draw.uniform(0.02, 0.3))
        # The hot face's law has a kink, and the sides of a bar many temperatures: it stays with the other faces.
        choice = int(draw.integers(2 if side == "side" else 3))
        which, speed = (("vertical plate", None), ("plate in flow", 2.0), ("hot face up", None))[choice]
        row |= {f"{side} film law": which, f"{side} size [m]": size}
        if speed:
            row[f"{side} speed [m/s]"] = speed
        return Rim(law=by_law(FilmLaw[which.upper().replace(" ", "_")], FluidKind.AIR, size, speed, T))
    row[f"{side} film [W/(m²·K)]"] = h
    if kind == "film":
        return Rim(law=_film(h, T, 0.0, 0.0, flux), resistance=resistance)
    e = float(draw.uniform(0.1, 0.95))
    row[f"{side} emissivity"] = e
    around = T
    if draw.random() < 0.5:
        around = T + float(draw.uniform(0.0, 10.0))
        row[f"{side} surroundings [°C]"] = around
    return Rim(law=_film(h, T, e, around, flux), resistance=resistance)


def _generation(draw: np.random.Generator, row: Row, number: int, q: float, T: float, rise: float) -> Source:
    law = _property(draw, str(draw.choice(LAWS)), q, T, rise, -0.3, 0.45)
    _put(row, "generation", "W/m³", number, law)
    return Source(law)


def _current(
    draw: np.random.Generator, row: Row, q: float, T: float, rise: float, a: float, d: float, *, wound: bool
) -> tuple[Source, Drawn]:
    """A current in layer 1 that makes q where its resistivity is the reference's."""
    m, shape = M[row["shape"]], row["shape"]
    rho = _property(draw, str(draw.choice(LAWS)), 10.0 ** float(draw.uniform(-8.0, -4.0)), T, rise, -0.2, 0.45)
    at = rho.points[0][1] if rho.points else rho.y0
    _put(row, "resistivity", "Ω·m", 1, rho)
    out = Drawn(row, None, 0)  # type: ignore[arg-type]
    if draw.random() < 0.5:
        out.ac = row["ac ratio"] = float(draw.uniform(1.0, 1.6))
    if wound:
        if draw.random() < 0.8:
            out.fill = row["fill factor"] = float(draw.uniform(0.4, 0.9))
        out.turns = row["turns"] = float(draw.integers(1, 400))
    way = str(draw.choice(_SOURCES[:3]))
    out.sign = float(draw.choice([1.0, 1.0, -1.0]))
    V = ((a + d) ** (m + 1) - a ** (m + 1)) / (m + 1)
    bar = shape == "bar"
    if wound or bar:
        c = out.ac * out.fill
        J = math.sqrt(q / (c * at))
        across = out.section if bar else row["width [m]"] if shape == "wall" else row["length [m]"]
        out.section = across
        if way == "current density":
            given, source = J, Source(rho, c, J)
        elif way == "current":
            # The whole section over the turns: thickness × width, or thickness × length.
            given = J * (row["section"] if bar else out.fill * d * across / out.turns)
            source = Source(rho, c, J)
        else:
            turn = row["length [m]"] / d if shape != "cylinder" else 2.0 * math.pi / d
            given = out.ac * J * at * V * out.turns * turn
            source = Source(rho, c, known=None, total=given / (out.ac * out.turns * turn))
    else:
        E = math.sqrt(q * at / out.ac)
        if way == "voltage":
            given, source = E * out.ac * row["length [m]"], Source(rho, out.ac, E, inverse=True)
        else:
            measure = row["width [m]"] if shape == "wall" else 2.0 * math.pi
            total = E * V / at
            given = total * measure if way == "current" else total / V
            source = Source(rho, out.ac, None, total, inverse=True)
    unit = {"current": "A", "voltage": "V", "current density": "A/m²"}[way]
    row[f"{way} [{unit}]"] = out.sign * given
    return source, out


def draw_body(draw: np.random.Generator) -> Drawn:
    """A wall, cylinder or sphere of one layer or two."""
    shape = str(draw.choice(["wall", "cylinder", "sphere"], p=[0.4, 0.45, 0.15]))
    m = M[shape]
    row: Row = {"shape": shape}
    solid = m > 0 and draw.random() < 0.5
    d = 10.0 ** float(draw.uniform(-3.0, -1.0))
    a = 0.0 if solid or not m else d * 10.0 ** float(draw.uniform(-1.0, 1.0))
    row["thickness [m]"] = d
    if a:
        row["inner radius [m]"] = a
    if shape != "sphere":
        row["length [m]"] = float(draw.uniform(0.1, 2.0))
    if shape == "wall":
        row["width [m]"] = float(draw.uniform(0.02, 0.5))
    T, rise = float(draw.uniform(-10.0, 120.0)), 10.0 ** float(draw.uniform(0.3, 2.0))
    k0 = 10.0 ** float(draw.uniform(-0.5, 2.3))
    k = _property(draw, str(draw.choice(LAWS)), k0, T, rise, -0.25, 0.3)
    _put(row, "conductivity", "W/(m·K)", 1, k)
    h = k0 / d * 10.0 ** float(draw.uniform(-1.0, 1.3))
    right = str(draw.choice(FACES[:3]))
    left = "insulated" if solid else str(draw.choice(FACES))
    if (left == "law" or (draw.random() < 0.15 and shape != "cylinder")) and not solid:
        left, h = "law", min(h, 20.0)
    faces = _face(draw, row, "left", left, h, T, rise), _face(draw, row, "right", right, h, T + float(draw.uniform(0, 5)), rise)
    two = draw.random() < 0.45
    size = d * (2.0 if two else 1.0)
    q = rise / (size * size / (2.0 * k0) + size / h) * (0.6 if two else 1.0)
    current = shape != "sphere" and draw.random() < 0.75
    drawn = Drawn(row, None, None)  # type: ignore[arg-type]
    if current:
        source, drawn = _current(draw, row, q, T, rise, a, d, wound=bool(draw.random() < 0.5))
    else:
        source = _generation(draw, row, 1, q, T, rise)
    layers = [Stratum(d, k, source)]
    if two:
        joint = 0.3 * d / k0 * float(draw.random())
        more = d * float(draw.uniform(0.1, 1.0))
        row |= {"joint 1 [m²·K/W]": joint, "thickness 2 [m]": more}
        k2 = _property(draw, str(draw.choice(LAWS)), k0, T, rise, -0.25, 0.3)
        _put(row, "conductivity 2", "W/(m·K)", 1, k2) if k2.points or not k2.slope else _put(row, "conductivity", "W/(m·K)", 2, k2)
        second = _generation(draw, row, 2, q * 0.5, T, rise) if draw.random() < 0.5 else Source(Property(0.0))
        layers = [Stratum(d, k, source, joint), Stratum(more, k2, second)]
    drawn.bulk = Bulk(m, a, tuple(layers), *faces, T)
    return drawn


def draw_bar(draw: np.random.Generator) -> Drawn:
    """A bar of up to twenty or so decay lengths, its sides bare or cooled."""
    row: Row = {"shape": "bar"}
    length, across = 10.0 ** float(draw.uniform(-1.0, 0.2)), 10.0 ** float(draw.uniform(-2.5, -1.3))
    row["length [m]"] = length
    way, thin = int(draw.integers(3)), across * float(draw.uniform(0.1, 1.0))
    if way == 0:
        section, perimeter = across * thin, 2.0 * (across + thin)
        row |= {"width [m]": across, "thickness [m]": thin}
    elif way == 1:
        section, perimeter = math.pi * across**2 / 4.0, math.pi * across
        row["diameter [m]"] = across
    else:
        section, perimeter = across * thin, 2.5 * (across + thin)
        row |= {"section [m²]": section, "perimeter [m]": perimeter}
    k0, T, rise = 10.0 ** float(draw.uniform(0.5, 2.6)), float(draw.uniform(-10.0, 120.0)), 10.0 ** float(draw.uniform(0.3, 2.0))
    k = _property(draw, str(draw.choice(LAWS)), k0, T, rise, -0.25, 0.3)
    _put(row, "conductivity", "W/(m·K)", 1, k)
    ratio, side, lost = perimeter / section, None, 0.0
    cooled = draw.random() < 0.75
    if cooled:
        h = min(10.0 ** float(draw.uniform(0.3, 2.5)), k0 / ratio * (20.0 / length) ** 2)
        of_side = _face(draw, row, "side", str(draw.choice(["film", "film", "radiant", "law"])), h, T, 0.0).law
        for heading in ("side resistance [m²·K/W]", "side flux in [W/m²]"):
            row.pop(heading, None)
        if "side film law" not in row:
            around = row.get("side surroundings [°C]", T)
            of_side = _film(h, T, row.get("side emissivity", 0.0), around, 0.0)
        else:
            h = 3.0
        assert of_side is not None
        loss, lost = of_side, ratio * h

        def side(x: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
            flux, slope = loss(x)
            return ratio * flux, ratio * slope

    kinds = ("held", "film", "insulated", "radiant")
    left, right = str(draw.choice(kinds)), str(draw.choice(kinds))
    if not cooled and left == right == "insulated":
        left = "held"
    h_end = k0 / length * 10.0 ** float(draw.uniform(-0.5, 1.0))
    faces = [_face(draw, row, "left", left, h_end, T, rise), _face(draw, row, "right", right, h_end, T + 3.0, rise)]
    q = rise * (lost + 2.0 * k0 / length**2 / (1.0 if left == right == "held" else 3.0))
    if draw.random() < 0.25:
        source = _generation(draw, row, 1, q, T, rise)
        drawn = Drawn(row, None, None)  # type: ignore[arg-type]
    else:
        row["section"] = section
        source, drawn = _current(draw, row, q, T, rise, 0.0, length, wound=False)
        del row["section"]
        rho = source.law.points[0][1] if source.law.points else source.law.y0
        for i, name in enumerate(("left", "right")):
            # A contact as good as a few centimetres of the bar.
            if draw.random() < 0.4:
                contact = rho / section * length * float(draw.uniform(0.0, 0.05))
                row[f"{name} contact [Ω]"] = contact
                faces[i] = Rim(faces[i].held, faces[i].law, faces[i].resistance, contact * section)
    drawn.section = section
    drawn.bulk = Bulk(0, 0.0, (Stratum(length, k, source, side=side),), faces[0], faces[1], T)
    return drawn


def table_of(rows: list[Row]) -> dict[str, np.ndarray]:
    """The rows under all their headings, blanks where a row has none."""
    headings = list(dict.fromkeys(heading for row in rows for heading in row))
    return {heading: np.array([row.get(heading) for row in rows], dtype=object) for heading in headings}
