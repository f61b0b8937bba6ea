"""Each answer heading on a recipe's rows: what the solver is asked for, and how its numbers become the heading's."""

from __future__ import annotations

import numpy as np
from ingle import Shape
from ingle.shapes import Array

from ingle_addin import heat_answers, limit_answers
from ingle_addin.cells import CellError
from ingle_addin.faults import ROW, Fault
from ingle_addin.heading_reader import Asked, Plan
from ingle_addin.limit_answers import PASSED
from ingle_addin.ready import Faults, Ready, Solved, Worked, plain
from ingle_addin.recipe import Recipe

# What may be a text table.
TABLED = ("conductivity", "generation", "resistivity")


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
    if quantity.startswith("allowable "):
        return limit_answers.allowable(asked, plan, recipe)
    if quantity == "limited by":
        return limit_answers.limited_by(plan, recipe)
    if recipe.no_source is not None:
        return recipe.no_source
    if quantity == "why":
        return _why(recipe)
    if quantity == "verdict":
        return Ready(("peak", "least_room", *_caution_quantities(recipe)), _verdict)
    if quantity == "utilisation":
        return limit_answers.utilisation(plan, recipe)
    if quantity == "face":
        return _of_left(asked, recipe, plain(f"{asked.side}_face"))
    if quantity in ("voltage", "resistance"):
        return heat_answers.electrical(asked, recipe)
    if quantity in ("heat out", "side heat out", "heat made"):
        heat = heat_answers.heat(asked, recipe)
        return _of_left(asked, recipe, heat) if isinstance(heat, Ready) and asked.side else heat
    if quantity in ("peak", "mean") and asked.layer:
        return plain(f"layer_{quantity} {asked.layer}")
    if quantity in ("joint_left", "joint_right"):
        return plain(f"{quantity} {asked.layer}")
    if quantity == "film used":
        if f"{asked.side} film law" not in recipe.filled:
            return Fault(CellError.NA, f"{asked.label}: no law gives the film there in {ROW}; fill in '{asked.side} film law'")
        return plain(f"{asked.side}_film")
    if quantity == "headroom":
        return limit_answers.headroom(plan, recipe)
    if quantity == "probe_temperature":
        return _probe(plan, recipe)
    if quantity == "left_share":
        return plain(quantity, _nothing_leaves, 100.0)
    return plain(quantity, factor=100.0 if quantity == "balance" else 1.0)


def _why(recipe: Recipe) -> Ready:
    """A row's own fault; also a limit passed without any source, which leaves no allowable."""
    tables = _caution_quantities(recipe)
    if not recipe.limits:
        return Ready(("peak", *tables), lambda solved: (np.full(len(solved.values["peak"]), "ok", object), []))

    def work(solved: Solved) -> Worked:
        words = np.full(len(solved.values["peak"]), "ok", object)
        return words, limit_answers.broken_faults(solved.values["cold_broken"], recipe) if recipe.scaled else []

    return Ready(("peak", "cold_broken", "worst_limit", "least_room", *tables), work)


def _caution_quantities(recipe: Recipe) -> list[str]:
    """What cautions need: doubts of film laws, and the temperatures that a layer's text table has to reach."""
    numbers = [layer.number for layer in recipe.layers if any(layer.slot(name) in recipe.tabled for name in TABLED)]
    doubts = [f"{side}_doubt" for side in ("left", "right", "side") if f"{side} film law" in recipe.filled]
    return [*doubts, *(f"layer_{end} {number}" for number in numbers for end in ("low", "peak"))]


def _verdict(solved: Solved) -> Worked:
    room = solved.values["least_room"]
    return np.where(room < -PASSED, "over limit", np.where(np.isfinite(room), "ok", "no limit")).astype(object), []


def _nothing_leaves(share: Array) -> Faults:
    return [(np.isnan(share), Fault(CellError.NUM, f"no heat leaves the body in {ROW}, so it has no share; check the source and "
             "the sinks"))]  # fmt: skip


def _of_left(asked: Asked, recipe: Recipe, base: Ready) -> Ready | Fault:
    """An answer about a face, which the middle of a solid round body is not."""
    if asked.side == "right" or recipe.shape == Shape.WALL:
        return base
    solid = Fault(CellError.NA, f"{asked.label}: the {recipe.body} in {ROW} is solid and has no inner face; ask "
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
    return plain("probe_temperature")


def _layers(count: int) -> str:
    return "one layer" if count == 1 else f"{count} layers"
