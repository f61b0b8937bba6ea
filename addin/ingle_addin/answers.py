"""Each answer heading on a recipe's rows: what the solver is asked for, and how its numbers become the heading's."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np
from ingle import Shape
from ingle.shapes import Array

from ingle_addin.cells import CellError
from ingle_addin.faults import HERE, ROW, Fault
from ingle_addin.heading_reader import Asked, Plan
from ingle_addin.recipe import Extent, Recipe
from ingle_addin.units import Kind

_PLAIN = ("peak", "peak_place", "mean", "probe_temperature", "left_share", "balance", "headroom")
_ALLOWED = ("allowable_generation", "first_broken", "lacking")
# A limit is passed when the temperature is this much above it: less is rounding, at an allowable source put back.
_PASSED = 1e-8
_SHAPE_WORDS = {Shape.WALL: "wall", Shape.CYLINDER: "cylinder", Shape.SPHERE: "sphere"}


@dataclass(frozen=True)
class Solved:
    """What an answer is worked out from: the solver's quantities for a recipe's rows, and the rows' own values."""

    values: Mapping[str, Array]
    extent: Extent
    scale: Array | None
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
    if not quantity or asked.layer > 1:
        return not_yet(asked.label)
    if quantity.startswith("allowable ") or quantity == "limited by":
        return _allowable(asked, plan, recipe)
    if recipe.no_source is not None:
        return recipe.no_source
    if quantity == "why":
        return Ready(("peak",), lambda solved: (np.full(len(solved.values["peak"]), "ok", object), []))
    if quantity == "verdict":
        return Ready(("peak", "least_room"), _verdict)
    if quantity == "utilisation":
        return _utilisation(asked, plan, recipe)
    if quantity == "face":
        return _of_left(asked, recipe, _plain(f"{asked.side}_face"))
    if quantity in ("heat out", "heat made"):
        heat = _heat(asked, recipe)
        return _of_left(asked, recipe, heat) if isinstance(heat, Ready) and asked.side else heat
    if quantity == "peak layer":
        return Ready(("peak",), lambda solved: (np.ones_like(solved.values["peak"]), []))
    if quantity == "headroom" and not recipe.has_limit:
        return _no_limit(plan)
    if quantity == "probe_temperature":
        return _probe(plan, recipe)
    if quantity == "left_share":
        return _plain(quantity, _nothing_leaves, 100.0)
    return _plain(quantity, factor=100.0 if quantity == "balance" else 1.0)


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
        return Ready((heat,), lambda solved: (solved.values[heat] * _given(solved.extent.length), []))
    if "area" not in filled:
        return Fault(CellError.NA, f"{asked.label}: the wall in {ROW} needs its area; fill in 'area [m²]'")
    return Ready((heat,), lambda solved: (solved.values[heat] * _given(solved.extent.area), []))


def _given(size: Array | None) -> Array:
    assert size is not None  # the recipe's rows all give it
    return size


def _limit_faults(solved: Solved, recipe: Recipe) -> list[tuple[np.ndarray, Fault]]:
    lacking, broken = solved.values["lacking"], solved.values["first_broken"]
    faults = []
    for code, slot in enumerate(_limit_slots(recipe), 1):
        if slot:
            column = recipe.filled[slot]
            sentence = f"{column.label} in {ROW} is {HERE}, passed even with no source; raise it or cool the body more"
            faults.append((broken == code, Fault(CellError.NUM, sentence, (column.index,))))
    sentence = f"no source reaches the limit in {ROW}, since that face is held below it; give a limit for the peak"
    faults.append((lacking == 3, Fault(CellError.NUM, sentence)))
    return faults


def _limit_slots(recipe: Recipe) -> tuple[str, str, str]:
    body = "limit" if "limit" in recipe.filled else ("limit 1" if "limit 1" in recipe.filled else "")
    return (
        body,
        "left limit" if "left limit" in recipe.filled else "",
        "right limit" if "right limit" in recipe.filled else "",
    )


def _allowable(asked: Asked, plan: Plan, recipe: Recipe) -> Ready | Fault:
    if not recipe.has_limit:
        return _no_limit(plan)
    if not recipe.scaled:
        return recipe.no_source or not_yet(asked.label)
    if asked.item.quantity == "limited by":
        return Ready(("governs",), lambda solved: (_governing(solved, recipe), []))
    wanted = asked.item.quantity.removeprefix("allowable ")
    own = next(column.unit for column in plan.columns if recipe.scaled in column.slots)
    own = recipe.filled[recipe.scaled].unit if recipe.scaled in recipe.filled else own
    if wanted not in ("source", recipe.scaled):
        have = recipe.scaled
        return Fault(CellError.NA, f"{asked.label}: the source in {ROW} is its {have}; ask for 'allowable {have}'")

    def work(solved: Solved) -> Worked:
        q = solved.values["allowable_generation"]
        source = q if solved.scale is None else q / solved.scale
        return (own.from_base(source) if wanted == "source" else source), _limit_faults(solved, recipe)

    return Ready(_ALLOWED, work)


def _governing(solved: Solved, recipe: Recipe) -> np.ndarray:
    names = np.array(["", *_limit_slots(recipe)], dtype=object)
    governs = solved.values["governs"]
    text = names[np.where(np.isnan(governs), 0, governs).astype(np.intp)]
    if "limit" in recipe.filled and "limit 1" in recipe.filled:
        sooner = solved.get("limit 1") < solved.get("limit")
        text = np.where(sooner & (governs == 1), "limit 1", text)
    return text


def _utilisation(asked: Asked, plan: Plan, recipe: Recipe) -> Ready | Fault:
    base = _allowable(Asked(asked.item, "", 0, asked.unit, asked.label), plan, recipe) if not recipe.has_limit else None
    if isinstance(base, Fault):
        return base

    def work(solved: Solved) -> Worked:
        q = solved.values["allowable_generation"]
        source = solved.get(recipe.source)
        used = source if solved.scale is None else source * solved.scale
        nothing = q == 0.0
        share = 100.0 * (used / np.where(nothing, np.nan, q))
        fault = Fault(CellError.NUM, f"the allowable source in {ROW} is 0, so none of it can be used; raise the limit")
        return share, [*_limit_faults(solved, recipe), (nothing & ~np.isnan(q), fault)]

    return Ready(_ALLOWED, work)
