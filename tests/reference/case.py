"""One random legal case: names of inputs and their values in SI, sized so that temperatures stay reasonable."""

from __future__ import annotations

import math
import random
from collections.abc import Sequence

from .finite_volume import CYLINDER, SPHERE, WALL, Body, Face, Solved

Inputs = dict[str, float | str]
FACES = {"held": "temperature", "flux in": "flux", "film": "film", "fluid": "temperature", "limit": "temperature"}
ZERO_CELSIUS = 273.15
SHAPES = {"wall": WALL, "cylinder": CYLINDER, "sphere": SPHERE}
HOTTEST = 10000.0
CLEAR = 1e-4  # limits stand off by this part of the temperature scale, so that no verdict hangs on rounding


def spread(rng: random.Random, low: float, high: float) -> float:
    """Even in the logarithm."""
    return math.exp(rng.uniform(math.log(low), math.log(high)))


def _bore_and_thickness(rng: random.Random, shape: int) -> tuple[float, float]:
    size = spread(rng, 1e-6, 10.0)
    if shape == WALL or rng.random() < 0.4:
        return 0.0, size
    if rng.random() < 0.5:  # a shell, down to 1e-4 of its outside
        thickness = size * spread(rng, 1e-4, 0.9)
        return size - thickness, thickness
    bore = size * spread(rng, 1e-3, 0.9)
    return bore, size - bore


def _sized(rng: random.Random, shape: int, bore: float, thickness: float) -> Inputs:
    """Geometry headings for the same body in one of the ways there are."""
    if shape == WALL:
        return {"thickness": thickness}
    outside = bore + thickness
    ways: list[Inputs] = [{"thickness": thickness}, {"outer radius": outside}, {"outer diameter": 2 * outside}]
    if bore == 0.0:
        return rng.choice([*ways, {"radius": outside}, {"diameter": 2 * outside}])
    hole = rng.choice([{"inner radius": bore}, {"inner diameter": 2 * bore}])
    return {**rng.choice(ways), **hole}


def _sink(rng: random.Random) -> float:
    low, high = rng.choice(((-200.0, 2000.0), (-20.0, 120.0), (15.0, 30.0)))
    return ZERO_CELSIUS + (rng.uniform(low, high) if rng.random() < 0.7 else round(rng.uniform(low, high)))


def _face(rng: random.Random, kind: str, body: Body, rise: float) -> dict[str, float]:
    if kind == "insulated":
        return {}
    if kind == "held":
        return {"held": _sink(rng)}
    face: dict[str, float] = {}
    film = spread(rng, 1e-6, 1e6) * body.conductivity / body.thickness
    if kind in ("film", "film and flux"):
        face.update({"film": film, "fluid": _sink(rng)})
    if kind in ("flux", "film and flux"):
        size = rise * (film if kind == "film and flux" and rng.random() < 0.5 else body.conductivity / body.thickness)
        face["flux in"] = size * rng.choice((1.0, 1.0, -1.0, 0.0 if rng.random() < 0.2 else 1.0))
    return face


COOLED = ("film", "film", "film", "held", "film and flux")
ANY_FACE = ("insulated", "insulated", "flux", *COOLED)


def _state(body: Body, faces: dict[str, dict[str, float]], source: float) -> tuple[Solved, float, float]:
    def made(side: str) -> Face:
        got = faces.get(side, {})
        return Face(got.get("held"), got.get("film", 0.0), got.get("fluid", 0.0), got.get("flux in", 0.0))

    solved = Solved(Body(body.shape, body.inner, body.thickness, body.conductivity, made("left"), made("right")), 30)
    return solved, solved.lowest(source), solved.peak(source)


def _source(rng: random.Random, body: Body, faces: dict[str, dict[str, float]]) -> float:
    """A source of a drawn rise over what the faces alone would give."""
    solved, _, _ = _state(body, faces, 0.0)
    rise = spread(rng, 0.01, 2000.0)
    chance = rng.random()
    if chance < 0.08:
        return 0.0
    unit = max(solved.fine.unit.rise)
    return rise / unit * (-1.0 if chance < 0.16 else 1.0)


def _faces(rng: random.Random, body: Body) -> tuple[dict[str, dict[str, float]], bool]:
    """Faces, and whether they are given as `both`."""
    rise = spread(rng, 0.1, 500.0)
    if body.solid:
        face = _face(rng, rng.choice(COOLED), body, rise)
        return {"right": face}, rng.random() < 0.3
    if rng.random() < 0.2:
        face = _face(rng, rng.choice(COOLED), body, rise)
        return {"left": face, "right": face}, True
    pair = [rng.choice(COOLED), rng.choice(ANY_FACE)]
    rng.shuffle(pair)
    return {side: _face(rng, kind, body, rise) for side, kind in zip(("left", "right"), pair, strict=True)}, False


def _limits(rng: random.Random, body: Body, solved: Solved, source: float, faces: dict[str, dict[str, float]]) -> Inputs:
    if rng.random() < 0.12:
        return {}
    names = ["limit"] if rng.random() < 0.6 else []
    names += [name for name in ("limit 1", "left limit", "right limit") if rng.random() < 0.25]
    out: Inputs = {}
    for name in names:
        side = name.partition(" ")[0]
        if side in ("left", "right") and ((body.solid and side == "left") or "held" in faces.get(side, {})):
            continue
        ask = {"left": solved.left, "right": solved.right}.get(side, solved.peak)
        now, still = ask(source), ask(0.0)
        step = spread(rng, 0.1, 1000.0) * (1.0 if rng.random() < 0.75 else -1.0)
        limit = (now if rng.random() < 0.7 else still) + step
        room = CLEAR * (solved.scale(source) + solved.scale(0.0))
        if limit > 5.0 and min(abs(limit - now), abs(limit - still)) > room:
            out[name] = limit
    if len(out) > 1 and body.solid is False and set(out) == {"left limit", "right limit"} and rng.random() < 0.3:
        out = {"both limit": out["left limit"]}
    return out


def _sourced(rng: random.Random, body: Body, source: float, kinds: Sequence[str]) -> Inputs:
    usable = [kind for kind in kinds if kind != "line power" or body.shape == CYLINDER]
    kind = rng.choice(usable or ["generation"])
    across = spread(rng, 1e-3, 10.0)
    name = {WALL: "area", CYLINDER: "length"}.get(body.shape)
    out: Inputs = {}
    if name and (kind == "power" or rng.random() < 0.4):
        out[name] = across * (spread(rng, 1e-3, 1.0) if name == "area" else 1.0)
    if body.shape == WALL and "area" in out and rng.random() < 0.1:
        out["width"] = spread(rng, 1e-3, 1.0)
    whole = body.volume(0.0, body.thickness)
    if kind == "generation":
        out["generation"] = source
    elif kind == "line power":
        out["line power"] = source * whole
    elif kind == "power":
        out["power"] = source * whole * (float(out[name]) if name else 1.0)
    else:
        out["density"] = spread(rng, 1.0, 2e4)
        out["specific generation"] = source / float(out["density"])
    if kind != "specific generation" and rng.random() < 0.05:
        out["density"] = spread(rng, 1.0, 2e4)
    return out


def legal(rng: random.Random, shapes: Sequence[str], kinds: Sequence[str]) -> Inputs:
    """A case that has an answer."""
    word = rng.choice(list(shapes))
    shape = SHAPES[word]
    bore, thickness = _bore_and_thickness(rng, shape)
    body = Body(shape, bore, thickness, spread(rng, 0.01, 2000.0))
    faces, both = _faces(rng, body)
    for _ in range(60):  # fluxes that would freeze or melt everything shrink
        _, low, high = _state(body, faces, 0.0)
        if low > 20.0 and high < HOTTEST:
            break
        for face in faces.values():
            if "flux in" in face:
                face["flux in"] *= 0.1
    source = _source(rng, body, faces)
    solved, low, _ = _state(body, faces, source)
    while low < 5.0:
        source *= 0.1
        solved, low, _ = _state(body, faces, source)
    inputs: Inputs = {"shape": rng.choice((word, word, word.upper(), word.title(), f" {word}"))}
    inputs.update(_sized(rng, shape, bore, thickness))
    inputs["conductivity"] = body.conductivity
    inputs.update(_sourced(rng, body, source, kinds))
    for side, face in faces.items():
        if both and side == "left":
            continue
        inputs.update({f"{'both' if both else side} {name}": value for name, value in face.items()})
    inputs.update(_limits(rng, body, solved, source, faces))
    if rng.random() < 0.5:
        inputs["probe"] = bore + thickness * rng.uniform(0.001, 0.999)
    return inputs
