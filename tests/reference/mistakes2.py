"""Deliberate mistakes in cases of the wider scope: each spoils the inputs, or the cells."""

from __future__ import annotations

import random
import re
from collections.abc import Callable

from .build2 import Value, stem
from .headings2 import CURRENTS, SOURCES
from .mistakes import CellMistake, Mistake

Inputs = dict[str, Value]
Spoil = Callable[[random.Random, Inputs], Inputs]


def _without(inputs: Inputs, *names: str) -> Inputs:
    return {name: value for name, value in inputs.items() if name not in names}


def _named(inputs: Inputs, *stems: str) -> list[str]:
    """Names with one of these stems, layers and sides of any kind."""

    def bare(name: str) -> str:
        side, _, rest = name.partition(" ")
        return rest if side == "both" else stem(name)

    return [name for name in inputs if bare(name) in stems]


def _drop(*stems: str) -> Spoil:
    """Leaves out one input that is needed; where there is none, the conductivity."""

    def spoil(rng: random.Random, inputs: Inputs) -> Inputs:
        names = _named(inputs, *stems) or _named(inputs, "conductivity")
        return _without(inputs, rng.choice(names))

    return spoil


def _value(stems: tuple[str, ...], *values: float) -> Spoil:
    """Gives one input a value that cannot be."""

    def spoil(rng: random.Random, inputs: Inputs) -> Inputs:
        names = _named(inputs, *stems) or _named(inputs, "conductivity")
        return {**inputs, rng.choice(names): rng.choice([value for value in values if value <= 0.0 or names != ["conductivity 1"]])}

    return spoil


def _negative(rng: random.Random, inputs: Inputs) -> Inputs:
    stems = ("thickness", "conductivity", "resistivity", "film", "joint", "resistance", "section", "length", "turns", "contact")
    name = rng.choice(_named(inputs, *stems))
    value = inputs[name]
    return {**inputs, name: -value if isinstance(value, float) else -1.0}


def _too_much(rng: random.Random, inputs: Inputs) -> Inputs:
    names = _named(inputs, "emissivity", "fill factor")
    return {**inputs, rng.choice(names): rng.uniform(1.1, 60.0)} if names else _negative(rng, inputs)


def _no_source(_rng: random.Random, inputs: Inputs) -> Inputs:
    """Without its sources, and what may not stand without them."""
    electric = ("resistivity", "resistivity slope", "resistivity reference", "ac ratio", "turns", "fill factor", "contact")
    return _without(inputs, *_named(inputs, *SOURCES, *electric, "generation slope", "generation reference"))


def _two_sources(rng: random.Random, inputs: Inputs) -> Inputs:
    name = rng.choice(_named(inputs, *SOURCES))
    number = name.rpartition(" ")[2]
    other = "generation" if not name.startswith("generation") else "power"
    return {**inputs, f"{other} {number}": rng.choice((0.0, 1000.0))}


def _stray_resistivity(rng: random.Random, inputs: Inputs) -> Inputs:
    """A conductor's property in a layer without a current."""
    layers = {name.rpartition(" ")[2] for name in _named(inputs, "conductivity")}
    carrying = {name.rpartition(" ")[2] for name in _named(inputs, *CURRENTS)}
    free = sorted(layers - carrying)
    if not free:
        return _two_sources(rng, inputs)
    return {**inputs, f"resistivity {rng.choice(free)}": 2e-8}


def _held_and_more(rng: random.Random, inputs: Inputs) -> Inputs:
    helds = _named(inputs, "held")
    if not helds:
        return _negative(rng, inputs)
    side = helds[0].partition(" ")[0]
    return {**inputs, f"{side} emissivity": 0.8} if rng.random() < 0.5 else {**inputs, f"{side} flux in": 100.0}


def _no_number(_rng: random.Random, inputs: Inputs) -> Inputs:
    """The outside of layer 1 without its number, in a row of several layers."""
    layered = any(re.fullmatch(r"conductivity [2-9]", name) for name in inputs)
    for name in ("outer radius", "outer diameter"):
        if layered and f"{name} 1" in inputs:
            return {**_without(inputs, f"{name} 1"), name: inputs[f"{name} 1"]}
    return _two_sizes(_rng, inputs)


def _two_sizes(rng: random.Random, inputs: Inputs) -> Inputs:
    if "length" in inputs and str(inputs["shape"]) == "bar":
        return {**inputs, "diameter": 0.01, "section": 1e-4}
    names = [name for name in _named(inputs, "thickness", "outer radius", "outer diameter") if name[-1].isdigit()]
    if not names:
        return _two_sources(rng, inputs)
    name = rng.choice(names)
    other = "outer radius" if name.startswith("thickness") else "thickness"
    return {**inputs, f"{other} {name.rpartition(' ')[2]}": 1.0}


def _not_cooled(_rng: random.Random, inputs: Inputs) -> Inputs:
    return _without(inputs, *_named(inputs, "held", "film", "fluid", "emissivity", "surroundings", "resistance", "contact"))


def _wrong_shape(rng: random.Random, inputs: Inputs) -> Inputs:
    shape = str(inputs["shape"])
    if shape == "bar":
        return {**inputs, "inner radius": 0.001}
    return {**inputs, **({"side film": 10.0, "side fluid": 300.0} if rng.random() < 0.5 else {"section": 1e-4})}


def _probe_outside(_rng: random.Random, inputs: Inputs) -> Inputs:
    return {**inputs, "probe": -1e-3}


def _too_cold(rng: random.Random, inputs: Inputs) -> Inputs:
    names = _named(inputs, "held", "fluid", "surroundings", "limit")
    return {**inputs, rng.choice(names): -rng.uniform(1.0, 300.0)} if names else _negative(rng, inputs)


def _gap(_rng: random.Random, inputs: Inputs) -> Inputs:
    """A layer of which only the conductivity is given."""
    last = max(int(name.rpartition(" ")[2]) for name in _named(inputs, "conductivity"))
    if str(inputs["shape"]) == "bar" or last >= 4:
        return _without(inputs, "shape")
    extra: Inputs = {f"conductivity {last + 1}": 1.0}
    return {**inputs, **extra}


SPOILS: tuple[Spoil, ...] = (
    *(_drop("conductivity"), _drop("thickness", "length"), _drop("resistivity"), _drop("fluid"), _drop("density")),
    *(_drop("perimeter"), _drop("width"), _drop("turns"), _negative, _negative, _too_much, _no_source, _no_source),
    *(_two_sources, _stray_resistivity, _stray_resistivity, _held_and_more, _no_number, _no_number, _two_sizes),
    *(_not_cooled, _wrong_shape, _probe_outside, _too_cold, _gap, _value(("ac ratio",), -1.0, 0.0)),
)
MISTAKES: tuple[Mistake | CellMistake, ...] = (
    *(Mistake(spoil) for spoil in SPOILS),  # type: ignore[arg-type]
    CellMistake(("12.5", "0,5", "about 3", "n/a")),
    CellMistake(("20:15; 400", "20;15", "abc:15; 400:3", "20:1,5; 400:3")),
    CellMistake((True, False)),
    CellMistake(("#DIV/0!", "#REF!", "#NAME?", "#VALUE!", "#N/A", "#NUM!")),
)
