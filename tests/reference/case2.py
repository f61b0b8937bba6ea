"""One random legal case of the wider scope: names of inputs and their values in SI.

Everything but the sources' size is drawn first; the size follows from a drawn rise, or from where the branch turns.
"""

from __future__ import annotations

import math
import random
from collections.abc import Sequence

from .build2 import Cells, Points, Value, build
from .case import CLEAR, ZERO_CELSIUS, spread
from .chain import StuckError
from .headings2 import CURRENTS
from .model import Model, emptied
from .rows import RefusedError
from .solution import NothingError, RunawayError, Solution

Inputs = dict[str, Value]
COLDEST, HOTTEST = 20.0, 4000.0
HIGHEST_LIMIT = 9e3  # beyond it nothing stays solid
LEAST_PART = 0.15  # conductivities and resistivities keep this part of their base up to the highest limit
RUNAWAY_SHARE = 0.13


class DrawnBadlyError(Exception):
    """This draw makes no reasonable case; draw again."""


def _sink(rng: random.Random) -> float:
    low, high = rng.choice(((-60.0, 400.0), (-20.0, 120.0), (15.0, 30.0)))
    value = rng.uniform(low, high)
    return ZERO_CELSIUS + (value if rng.random() < 0.6 else round(value))


class Draw:
    def __init__(self, rng: random.Random, shapes: Sequence[str], kinds: Sequence[str], runaway: bool) -> None:
        self.rng, self.runaway = rng, runaway
        self.shape = rng.choice(list(shapes))
        self.inputs: Inputs = {"shape": self.shape}
        self.kinds = kinds
        self.rise = spread(rng, 0.3, 1000.0)
        self.warm = _sink(rng)
        self.size, self.conductivity, self.section, self.count = 1.0, 1.0, 1.0, 1

    def chance(self, part: float) -> bool:
        return self.rng.random() < part

    def points(self, base: float, low: float, high: float) -> Points:
        """A text table about a base value, over about the temperatures of the case."""
        rng, count = self.rng, self.rng.choice((2, 2, 3, 4))
        start = max(self.warm - rng.uniform(0.0, 0.5) * self.rise - 5.0, 10.0)
        step = (self.rise * rng.uniform(0.3, 2.5) + 10.0) / (count - 1)
        return tuple((start + i * step, base * spread(rng, low, high)) for i in range(count))

    def slope(self, low: float, high: float) -> float:
        return self.rng.uniform(low, high) / max(self.rise, 30.0)

    # --- the body ---

    def body(self) -> None:
        rng, out = self.rng, self.inputs
        if self.shape == "bar":
            self._bar()
        else:
            self.count = rng.choices((1, 2, 3, 4), (0.3, 0.4, 0.2, 0.1))[0]
            self._sizes()
        for n in range(1, self.count + 1):
            k = self.conductivity * spread(rng, 0.05, 20.0) if n > 1 else self.conductivity
            out[f"conductivity {n}"] = k
            chance = rng.random()
            if chance < 0.15:
                out[f"conductivity slope {n}"] = self.slope(-0.35, 0.8)
                if self.chance(0.5):
                    out[f"conductivity reference {n}"] = self.warm + rng.uniform(-0.2, 0.3) * self.rise + 5.0
            elif chance < 0.3:
                out[f"conductivity {n}"] = self.points(k, 0.5, 2.0)
            if n < self.count and self.chance(0.5):
                out[f"joint {n}"] = self.size / self.conductivity * spread(rng, 0.01, 30.0)

    def _sizes(self) -> None:
        rng, out, walls = self.rng, self.inputs, self.shape == "wall"
        self.size = spread(rng, 1e-5, 1.0)
        self.conductivity = spread(rng, 0.03, 400.0)
        bore = 0.0 if walls or self.chance(0.45) else self.size * spread(rng, 0.05, 50.0)
        edge = bore
        if bore:
            out.update(rng.choice(({"inner radius": bore}, {"inner diameter": 2 * bore})))
        for n in range(1, self.count + 1):
            thickness = self.size * (spread(rng, 0.02, 1.0) if n > 1 else 1.0)
            edge += thickness
            way = 0 if walls else rng.choice((0, 0, 1, 2))
            if way == 0 and not walls and not bore and n == 1 and self.count == 1 and self.chance(0.6):
                out.update(rng.choice(({"radius": edge}, {"diameter": 2 * edge})))
                continue
            name = ("thickness", "outer radius", "outer diameter")[way]
            out[f"{name} {n}"] = (thickness, edge, 2 * edge)[way]
        self.size = edge - bore
        if walls and self.chance(0.5):
            out["area"] = spread(rng, 1e-4, 10.0)
        if walls and self.chance(0.3):
            out.update({"width": spread(rng, 1e-3, 1.0), "length": spread(rng, 1e-2, 10.0)})
        if self.shape == "cylinder" and self.chance(0.6):
            out["length"] = spread(rng, 1e-2, 100.0)

    def _bar(self) -> None:
        rng, out = self.rng, self.inputs
        self.size, self.conductivity = spread(rng, 0.01, 3.0), spread(rng, 0.2, 400.0)
        out["length"] = self.size
        across = self.size * spread(rng, 0.005, 0.5)
        other = across * spread(rng, 0.1, 1.0)
        ways: tuple[Inputs, ...] = (
            {"section": across * other, "perimeter": 2 * (across + other) * rng.uniform(1.0, 1.5)},
            {"width": across, "thickness 1": other},
            {"diameter": across},
        )
        way = rng.choice((0, 1, 2))
        out.update(ways[way])
        self.section = (across * other, across * other, math.pi * across**2 / 4)[way]
        perimeter = (float(str(out.get("perimeter", 0.0))), 2 * (across + other), math.pi * across)[way]
        if not self.chance(0.8):
            return
        film = self.conductivity * self.section / (perimeter * self.size**2) * spread(rng, 0.01, 300.0)
        kind = rng.choice(("film", "film", "film", "both", "radiation"))
        if kind != "radiation":
            out.update({"side film": film, "side fluid": self.warm})
        if kind != "film":
            out["side emissivity"] = rng.uniform(0.05, 1.0)
            if kind == "radiation" or self.chance(0.5):
                out["side surroundings"] = self.warm + rng.uniform(-20.0, 20.0)

    # --- the faces ---

    def faces(self) -> None:
        rng = self.rng
        cooled = ("held", "film", "film", "film+rad", "film+rad", "rad", "film+R", "held+R", "fluid+R", "rad+R", "film+flux")
        anything = (*cooled, "none", "none", "none", "flux", "film+rad+flux+R")
        solid = self.shape in ("cylinder", "sphere") and not any(name.startswith("inner") for name in self.inputs)
        sided = "side film" in self.inputs or "side emissivity" in self.inputs
        if solid or self.chance(0.15):
            self._face("both" if not solid or self.chance(0.3) else "right", rng.choice(cooled))
            return
        kinds = [rng.choice(anything if sided and self.chance(0.5) else cooled), rng.choice(anything)]
        rng.shuffle(kinds)
        for side, kind in zip(("left", "right"), kinds, strict=True):
            self._face(side, kind)

    def _face(self, side: str, kind: str) -> None:
        rng, out, parts = self.rng, self.inputs, kind.split("+")
        inner = self.conductivity / self.size
        sink = self.warm + rng.uniform(-0.3, 0.3) * min(self.rise, 100.0) if self.chance(0.5) else self.warm
        sink = round(sink, 1)
        film = inner * spread(rng, 0.01, 100.0)
        if "held" in parts:
            out[f"{side} held"] = sink
        if "film" in parts:
            out.update({f"{side} film": film, f"{side} fluid": sink})
        if "fluid" in parts:
            out[f"{side} fluid"] = sink
        if "rad" in parts:
            out[f"{side} emissivity"] = rng.uniform(0.05, 1.0)
            if "film" not in parts or self.chance(0.5):
                out[f"{side} surroundings"] = sink + rng.uniform(-30.0, 30.0)
        if "R" in parts:
            out[f"{side} resistance"] = spread(rng, 0.01, 30.0) / inner
        if "flux" in parts:
            size = min(film if "film" in parts else inner, inner) * self.rise * spread(rng, 0.01, 0.5)
            out[f"{side} flux in"] = size * rng.choice((1.0, 1.0, -0.3))

    # --- the sources ---

    def sources(self) -> None:
        rng = self.rng
        layers = [n for n in range(1, self.count + 1) if self.chance(0.45)] or [rng.randint(1, self.count)]
        usable = [kind for kind in self.kinds if self._usable(kind)] or ["generation"]
        kind = rng.choice(usable)
        for n in layers:
            self._source(n, kind if self.chance(0.85) else rng.choice(usable))

    def _usable(self, kind: str) -> bool:
        if kind in CURRENTS:
            return self.shape != "sphere"
        return kind != "line power" or self.shape == "cylinder"

    def _source(self, n: int, kind: str) -> None:
        rng, out = self.rng, self.inputs
        out[f"{kind} {n}"] = spread(rng, 0.3, 3.0)
        if kind in CURRENTS:
            self._current(n, kind)
            return
        if kind == "specific generation":
            out[f"density {n}"] = spread(rng, 100.0, 2e4)
        if kind == "power" and self.shape in ("wall", "cylinder"):
            name = "area" if self.shape == "wall" else "length"
            out.setdefault(name, spread(rng, 1e-3, 10.0))
        if kind not in ("generation", "specific generation"):
            return
        chance = rng.random()
        if self.runaway and kind == "generation" and self.chance(0.2):  # a source that grows steeply
            start, step = self.warm - rng.uniform(0.0, 20.0), self.rise * rng.uniform(0.2, 0.6) + 5.0
            out[f"generation {n}"] = tuple((start + i * step, 4.0**i * rng.uniform(0.8, 1.2)) for i in range(3))
        elif chance < 0.3 or self.runaway:
            out[f"generation slope {n}"] = self.slope(0.3, 2.5) if self.runaway else self.slope(-0.4, 1.5)
            if self.chance(0.6):
                out[f"generation reference {n}"] = self.warm + rng.uniform(-0.2, 0.2) * min(self.rise, 100.0)
        elif chance < 0.45 and kind == "generation":
            out[f"generation {n}"] = self.points(1.0, 0.4, 2.5)

    def _current(self, n: int, kind: str) -> None:
        rng, out = self.rng, self.inputs
        rho = spread(rng, 1e-8, 1e-4)
        out[f"resistivity {n}"] = rho
        chance = rng.random()
        if chance < 0.55 or self.runaway:
            low, high = (-0.3, -0.15) if kind == "voltage" and self.runaway else (0.5, 2.5) if self.runaway else (-0.2, 1.5)
            out[f"resistivity slope {n}"] = self.slope(low, high)
            if self.chance(0.4):
                out[f"resistivity reference {n}"] = self.warm + rng.uniform(-0.1, 0.2) * min(self.rise, 100.0)
        elif chance < 0.75:
            out[f"resistivity {n}"] = self.points(rho, 0.6, 2.0)
        wound = self.shape in ("wall", "cylinder") and self.chance(0.3)
        if wound:
            out[f"turns {n}"] = float(rng.randint(5, 500))
            if self.chance(0.7):
                out[f"fill factor {n}"] = rng.uniform(0.3, 0.9)
        if self.chance(0.25):
            out[f"ac ratio {n}"] = rng.uniform(1.0, 1.8)
        if self.shape == "wall":
            out.setdefault("width", spread(rng, 1e-3, 1.0))
        if self.shape != "bar" and (kind == "voltage" or wound):
            out.setdefault("length", spread(rng, 1e-2, 10.0))
        if self.shape == "bar" and self.chance(0.2) and not any(name.endswith("resistance") for name in out):
            out[rng.choice(("left contact", "right contact"))] = rho * self.size / self.section * spread(rng, 0.01, 0.3)

    # --- the size of the sources, and limits ---

    def scaled(self, heat: float) -> None:
        for name, value in self.inputs.items():
            bare = name.rpartition(" ")[0]
            if bare in CURRENTS and isinstance(value, float):
                self.inputs[name] = value * math.sqrt(heat)
            elif bare in ("generation", "specific generation", "power", "line power"):
                scaled = tuple((t, v * heat) for t, v in value) if isinstance(value, tuple) else float(value) * heat
                self.inputs[name] = scaled

    def both_spread(self) -> Inputs:
        """The inputs with `both` written out."""
        out: Inputs = {}
        solid = self.shape in ("cylinder", "sphere") and not any(name.startswith("inner") for name in self.inputs)
        for name, value in self.inputs.items():
            side, _, rest = name.partition(" ")
            names = [name] if side != "both" else [f"right {rest}"] if solid else [f"left {rest}", f"right {rest}"]
            out.update(dict.fromkeys(names, value))
        return out

    def model(self) -> Model:
        return build(Cells.of(self.both_spread()))

    def sized(self) -> None:
        rng, model = self.rng, self.model()
        coldest = min(model.sinks)
        if any(one.law.at(coldest) < 0.1 * one.law.base for _, one in model.sources if not one.has_table):
            raise DrawnBadlyError  # a source that cools, or a resistivity that is none, in the cold
        solution = Solution(model, rough=True)
        limits = {} if self.runaway else {"limit": max(model.sinks) + self.rise}
        name, scale, _ = solution.end(solution.everything, limits)
        if name == "limit" and not self.runaway:
            part = 1.0
        elif name == "runaway":
            if not self.reasonable(min(solution.end_peak, 1e5), min(model.sinks)):
                raise DrawnBadlyError
            part = rng.uniform(1.03, 3.0) if self.runaway else rng.uniform(0.05, 0.95)
        else:
            raise DrawnBadlyError
        self.scaled(scale.value * part)

    def reasonable(self, hottest: float, coldest: float) -> bool:
        """Whether all laws keep their sense over these temperatures."""
        for layer in self.model().layers:
            laws = [layer.conductivity]
            if layer.source is not None and layer.source.electric:
                laws.append(layer.source.law)
            if any(law.at(t) < LEAST_PART * law.base for law in laws if not law.table for t in (hottest, coldest)):
                return False
        return True

    def limited(self, now: Solution, still: Solution) -> None:
        rng = self.rng
        names = ["limit"] if self.chance(0.6) else []
        names += [f"limit {n}" for n in range(1, self.count + 1) if self.chance(0.25)]
        names += [f"{side} limit" for side in ("left", "right") if self.chance(0.2)]
        for name in names if not self.chance(0.1) else []:
            side = name.split()[0]
            spoken = self.both_spread()
            if side in ("left", "right") and (now.model.solid or f"{side} held" in spoken):
                continue
            known = [one.watch(name).value for one in (now, still)]
            limit = known[0] + spread(rng, 0.3, 600.0) * (1.0 if self.chance(0.75) else -1.0)
            scale = max(now.scale, still.scale)
            clear = all(abs(limit - one) > CLEAR * (scale + abs(limit - one)) for one in known)
            if clear and limit > COLDEST and self.reasonable(limit, now.zero):
                self.inputs[name] = limit

    def finish(self) -> None:
        rng, model = self.rng, self.model()
        try:
            present = Solution(model, rough=True)
            low, high = present.lowest, present.peak[1].value
            if self.runaway or not COLDEST < low < high < HOTTEST or not self.reasonable(high, low):
                raise DrawnBadlyError
            self.limited(present, Solution(emptied(model), rough=True))
        except RunawayError as error:
            if not self.runaway:
                raise DrawnBadlyError from error
            if not self.reasonable(max(model.sinks), min(model.sinks)):
                raise DrawnBadlyError from error
            if self.chance(0.6):
                far = rng.choice(((0.05, 1.0), (3.0, 300.0)))
                self.inputs["limit"] = min(max(model.sinks) + self.rise * spread(rng, *far), HIGHEST_LIMIT)
        if self.chance(0.4):
            self.inputs["probe"] = model.inner + model.thickness * rng.uniform(0.002, 0.998)


SOUND_KINDS = ("generation", "specific generation", *CURRENTS)


def legal(rng: random.Random, shapes: Sequence[str], kinds: Sequence[str]) -> Inputs:
    """A case that has an answer, or, now and then, none because it runs away."""
    runaway = rng.random() < RUNAWAY_SHARE
    if runaway and not set(kinds) & set(SOUND_KINDS):
        runaway = False
    for _ in range(200):
        draw = Draw(rng, shapes, [kind for kind in kinds if not runaway or kind in SOUND_KINDS], runaway)
        try:
            draw.body()
            draw.faces()
            draw.sources()
            draw.sized()
            draw.finish()
        except (DrawnBadlyError, RefusedError, StuckError, RunawayError, NothingError):
            continue
        return draw.inputs
    raise RuntimeError
