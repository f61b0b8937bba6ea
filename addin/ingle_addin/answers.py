"""Each answer heading on a recipe's rows: what the solver is asked for, and how its numbers become the heading's."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np
from ingle import Shape
from ingle.shapes import Array

from ingle_addin.case_builder import Built
from ingle_addin.cells import CellError
from ingle_addin.faults import HERE, ROW, Fault
from ingle_addin.heading_reader import Asked, Plan
from ingle_addin.recipe import Recipe, base_name
from ingle_addin.units import Kind

_ALLOWED = ("allowable_multiple", "first_broken", "lacking")
# A limit is passed when the temperature is this much above it: less is rounding, at an allowable source put back.
_PASSED = 1e-8
_SHAPE_WORDS = {Shape.WALL: "wall", Shape.CYLINDER: "cylinder", Shape.SPHERE: "sphere"}
# The solver's numbers of limits: 1 anywhere, 2 left face, 3 right face, 3 + n layer n.
_LIMIT_SLOTS = ("limit", "left limit", "right limit")


@dataclass(frozen=True)
class Solved:
    """What an answer is worked out from: the solver's quantities for a recipe's rows, and the rows' own values."""

    values: Mapping[str, Array]
    built: Built
    get: Callable[[str], Array]


Worked = tuple[np.ndarray, list[tuple[np.ndarray, Fault]]]


@dataclass(frozen=True)
class Ready:
    """An answer that can be given: the solver's names it needs, and the values (base units or texts) with their faults."""

    quantities: tuple[str, ...]
    work: Callable[[Solved], Worked]


def _plain(name: str, faults: Callable[[Array], list[tuple[np.ndarray, Fault]]] | None = None, factor: float = 1.0) -> Ready:
    def work(solved: Solved) -> Worked:
        value = solved.values[name]
        return (value if factor == 1.0 else value * factor), (faults(value) if faults else [])

    return Ready((name,), work)


def not_yet(label: str) -> Fault:
    """The fault of an answer whose physics is not there."""
    return Fault(CellError.NA, f"{label} is not available yet; it needs a later version")


def ready(asked: Asked, plan: Plan, recipe: Recipe) -> Ready | Fault:
    """How an answer is worked out on a recipe's rows, or why it has none there."""
    quantity = asked.item.quantity
    if not quantity:
        return not_yet(asked.label)
    if asked.layer > len(recipe.layers) - (quantity in ("joint_left", "joint_right")):
        return Fault(CellError.NA, f"{asked.label}: the body in {ROW} has {_layers(len(recipe.layers))}")
    if quantity.startswith("allowable ") or quantity == "limited by":
        return _allowable(asked, plan, recipe)
    if recipe.no_source is not None:
        return recipe.no_source
    if quantity == "why":
        return _why(recipe)
    if quantity == "verdict":
        return Ready(("peak", "least_room", *_caution_quantities(recipe)), _verdict)
    if quantity == "utilisation":
        return _utilisation(asked, plan, recipe)
    if quantity == "face":
        return _of_left(asked, recipe, _plain(f"{asked.side}_face"))
    if quantity in ("heat out", "heat made"):
        heat = _heat(asked, recipe)
        return _of_left(asked, recipe, heat) if isinstance(heat, Ready) and asked.side else heat
    if quantity in ("peak", "mean") and asked.layer:
        return _plain(f"layer_{quantity} {asked.layer}")
    if quantity in ("joint_left", "joint_right"):
        return _plain(f"{quantity} {asked.layer}")
    if quantity == "film used":
        if f"{asked.side} film law" not in recipe.filled:
            return Fault(CellError.NA, f"{asked.label}: no law gives the film there in {ROW}; fill in '{asked.side} film law'")
        return _plain(f"{asked.side}_film")
    if quantity == "headroom" and not recipe.limits:
        return _no_limit(plan)
    if quantity == "probe_temperature":
        return _probe(plan, recipe)
    if quantity == "left_share":
        return _plain(quantity, _nothing_leaves, 100.0)
    return _plain(quantity, factor=100.0 if quantity == "balance" else 1.0)


def _why(recipe: Recipe) -> Ready:
    """A row's own fault; also a limit passed without any source, which leaves no allowable."""
    tables = _caution_quantities(recipe)
    if not recipe.limits:
        return Ready(("peak", *tables), lambda solved: (np.full(len(solved.values["peak"]), "ok", object), []))

    def work(solved: Solved) -> Worked:
        words = np.full(len(solved.values["peak"]), "ok", object)
        return words, _broken_faults(solved.values["cold_broken"], recipe) if recipe.scaled else []

    return Ready(("peak", "cold_broken", "worst_limit", "least_room", *tables), work)


def _caution_quantities(recipe: Recipe) -> list[str]:
    """What cautions need: doubts of film laws, and the temperatures that a layer's text table has to reach."""
    numbers = [layer.number for layer in recipe.layers if layer.slot("conductivity") in recipe.tabled]
    doubts = [f"{side}_doubt" for side in ("left", "right") if f"{side} film law" in recipe.filled]
    return [*doubts, *(f"layer_{end} {number}" for number in numbers for end in ("low", "peak"))]


def passed_limits(recipe: Recipe, values: Mapping[str, Array]) -> list[tuple[np.ndarray, Fault]]:
    """The rows whose temperatures are above a limit now, by the limit most passed."""
    if not recipe.limits or "worst_limit" not in values:
        return []
    over = values["least_room"] < -_PASSED
    found = []
    for code, slot in _limits_of(recipe):
        what = {"limit": "the peak", "left limit": "the left face", "right limit": "the right face"}.get(slot, "that layer's peak")
        sentence = f"{recipe.label(slot)} in {ROW} is {HERE}, and {what} is above it; lower the source or cool the body more"
        found.append((over & (values["worst_limit"] == code), Fault(CellError.NA, sentence, (recipe.filled[slot].index,))))
    return found


def _limits_of(recipe: Recipe) -> list[tuple[int, str]]:
    codes = range(1, len(_LIMIT_SLOTS) + len(recipe.layers) + 1)
    return [(code, _limit_slot(code)) for code in codes if _limit_slot(code) in recipe.filled]


def _broken_faults(broken: Array, recipe: Recipe) -> list[tuple[np.ndarray, Fault]]:
    faults = []
    for code, slot in _limits_of(recipe):
        column = recipe.filled[slot]
        sentence = f"{column.label} in {ROW} is {HERE}, passed even with no source; raise it or cool the body more"
        faults.append((broken == code, Fault(CellError.NUM, sentence, (column.index,))))
    return faults


def _verdict(solved: Solved) -> Worked:
    room = solved.values["least_room"]
    return np.where(room < -_PASSED, "over limit", np.where(np.isfinite(room), "ok", "no limit")).astype(object), []


def _nothing_leaves(share: Array) -> list[tuple[np.ndarray, Fault]]:
    return [(np.isnan(share), Fault(CellError.NUM, f"no heat leaves the body in {ROW}, so it has no share; check the source and "
             "the sinks"))]  # fmt: skip


def _of_left(asked: Asked, recipe: Recipe, base: Ready) -> Ready | Fault:
    """An answer about a face, which the middle of a solid round body is not."""
    if asked.side == "right" or recipe.shape == Shape.WALL:
        return base
    solid = Fault(CellError.NA, f"{asked.label}: the {_SHAPE_WORDS[recipe.shape]} in {ROW} is solid and has no inner face; ask "
                  "for the peak or the outer face")  # fmt: skip
    if not recipe.inner:
        return solid

    def work(solved: Solved) -> Worked:
        values, faults = base.work(solved)
        return values, [*faults, (solved.get(recipe.inner) == 0.0, solid)]

    return Ready(base.quantities, work)


def _probe(plan: Plan, recipe: Recipe) -> Ready | Fault:
    if "probe" not in recipe.filled:
        if plan.has("probe"):
            return Fault(CellError.NA, f"{plan.label('probe')} in {ROW} is blank; type a place")
        return Fault(CellError.NA, f"{ROW} has no probe, and no heading for it; add a column 'probe [mm]'")
    return _plain("probe_temperature")


def _no_limit(plan: Plan) -> Fault:
    if plan.has("limit"):
        return Fault(CellError.NA, f"{plan.label('limit')} in {ROW} is blank; type the highest temperature allowed")
    return Fault(CellError.NA, f"{ROW} has no limit; add a column 'limit [°C]', 'left limit [°C]' or 'right limit [°C]'")


def _heat(asked: Asked, recipe: Recipe) -> Ready | Fault:
    kind, shape, made = asked.unit.kind, recipe.shape, asked.item.quantity == "heat made"
    heat = "heat_made" if made else f"{asked.side}_heat"
    word = _SHAPE_WORDS[shape]
    filled = recipe.filled
    if kind is Kind.HEAT_FLUX:
        if not made:
            return _plain(f"{asked.side}_flux")
        if shape == Shape.WALL:
            return _plain(heat)
        return Fault(CellError.NA, f"{asked.label}: heat made in a {word} has no one face; ask for it in W or W/m")
    if kind is Kind.LINE_POWER:
        if shape == Shape.SPHERE:
            return Fault(CellError.NA, f"{asked.label}: a sphere has no length; ask for it in W")
        if shape == Shape.WALL:
            return Fault(CellError.NA, f"{asked.label}: the wall in {ROW} has no length; ask in W, with its area, or in W/m²")
        return _plain(heat)
    if shape == Shape.SPHERE:
        return _plain(heat)
    if shape == Shape.CYLINDER:
        if "length" not in filled:
            return Fault(CellError.NA, f"{asked.label}: the cylinder in {ROW} needs its length; fill in 'length [mm]'")
        return Ready((heat,), lambda solved: (solved.values[heat] * _given(solved.built.length), []))
    if "area" not in filled:
        return Fault(CellError.NA, f"{asked.label}: the wall in {ROW} needs its area; fill in 'area [m²]'")
    return Ready((heat,), lambda solved: (solved.values[heat] * _given(solved.built.area), []))


def _given(size: Array | None) -> Array:
    assert size is not None  # the recipe's rows all give it
    return size


def _layers(count: int) -> str:
    return "one layer" if count == 1 else f"{count} layers"


def _limit_slot(code: int) -> str:
    """The heading of a limit by the solver's number."""
    return _LIMIT_SLOTS[code - 1] if code <= len(_LIMIT_SLOTS) else f"limit {code - len(_LIMIT_SLOTS)}"


def _limit_faults(solved: Solved, recipe: Recipe) -> list[tuple[np.ndarray, Fault]]:
    faults = _broken_faults(solved.values["first_broken"], recipe)
    sentence = f"no source reaches the limit in {ROW}: that face is held, or the sources cool the body; give a limit for the peak"
    faults.append((solved.values["lacking"] == 3, Fault(CellError.NUM, sentence)))
    sentence = f"the conductivity in {ROW} falls to zero before a limit is reached; check the slope or give a table"
    faults.append((solved.values["lacking"] == 4, Fault(CellError.NUM, sentence)))
    return faults


def _allowable(asked: Asked, plan: Plan, recipe: Recipe) -> Ready | Fault:
    if not recipe.limits:
        return _no_limit(plan)
    if not recipe.scaled:
        return recipe.no_source or not_yet(asked.label)
    if asked.item.quantity == "limited by":
        return Ready(("governs",), lambda solved: (_governing(solved, recipe), []))
    wanted = asked.item.quantity.removeprefix("allowable ")
    kinds = {base_name(layer.source) for layer in recipe.layers if layer.source} or {recipe.scaled}
    if wanted != "source" and wanted not in kinds:
        have = recipe.scaled
        return Fault(CellError.NA, f"{asked.label}: the source in {ROW} is its {have}; ask for 'allowable {have}'")
    if len(kinds) > 1:
        return not_yet(asked.label)
    slots = recipe.scaled_slots or tuple(slot for column in plan.columns for slot in column.slots if base_name(slot) == recipe.scaled)
    own = recipe.filled[slots[0]].unit if slots[0] in recipe.filled else next(c.unit for c in plan.columns if slots[0] in c.slots)

    def work(solved: Solved) -> Worked:
        multiple, faults = solved.values["allowable_multiple"], _limit_faults(solved, recipe)
        source = multiple
        if not solved.built.single:
            source = multiple * _first_not_zero(solved, slots)
            faults = [_all_zero(solved, slots), *faults]
        return (own.from_base(source) if wanted == "source" else source), faults

    return Ready(_ALLOWED, work)


def _first_not_zero(solved: Solved, slots: tuple[str, ...]) -> np.ndarray:
    """The source by which the scaling of several is told: the first that is not 0."""
    told = solved.get(slots[-1])
    for slot in reversed(slots[:-1]):
        told = np.where(solved.get(slot) != 0.0, solved.get(slot), told)
    return told


def _all_zero(solved: Solved, slots: tuple[str, ...]) -> tuple[np.ndarray, Fault]:
    """Rows whose several sources are all 0, so that no ratio between them is known."""
    zero: np.ndarray = solved.get(slots[0]) == 0.0
    for slot in slots[1:]:
        zero = zero & (solved.get(slot) == 0.0)
    return zero, Fault(CellError.NUM, f"the sources in {ROW} are all 0, so they do not say how they scale together; give them")


def _governing(solved: Solved, recipe: Recipe) -> np.ndarray:
    count = len(_LIMIT_SLOTS) + len(recipe.layers)
    names = np.array(["", *(_limit_slot(code) for code in range(1, count + 1))], dtype=object)
    governs = solved.values["governs"]
    found: np.ndarray = names[np.where(np.isnan(governs), 0, governs).astype(np.intp)]
    return found


def _utilisation(asked: Asked, plan: Plan, recipe: Recipe) -> Ready | Fault:
    if not recipe.limits:
        return _no_limit(plan)
    if not recipe.scaled:
        return recipe.no_source or not_yet(asked.label)

    def work(solved: Solved) -> Worked:
        multiple = solved.values["allowable_multiple"]
        used = solved.get(recipe.scaled_slots[0]) if solved.built.single else np.ones_like(multiple)
        nothing = multiple == 0.0
        share = 100.0 * (used / np.where(nothing, np.nan, multiple))
        fault = Fault(CellError.NUM, f"the allowable source in {ROW} is 0, so none of it can be used; raise the limit")
        zeros = [] if solved.built.single else [_all_zero(solved, recipe.scaled_slots)]
        return share, [*zeros, *_limit_faults(solved, recipe), (nothing, fault)]

    return Ready(_ALLOWED, work)
