"""Answers about heat and current: what leaves and is made, by the unit asked; the voltage and resistance of the row's current."""

from __future__ import annotations

from ingle import Shape
from ingle.shapes import Array

from ingle_addin.cells import CellError
from ingle_addin.faults import ROW, Fault
from ingle_addin.heading_reader import Asked
from ingle_addin.headings import CURRENTS
from ingle_addin.ready import Ready, Solved, Worked, plain
from ingle_addin.recipe import LayerRecipe, Recipe
from ingle_addin.slots import base_name
from ingle_addin.units import Kind


def heat(asked: Asked, recipe: Recipe) -> Ready | Fault:
    """Heat made, or leaving through a face or a bar's sides, in W/m², W/m or W."""
    kind, made = asked.unit.kind, asked.item.quantity == "heat made"
    name = "heat_made" if made else "side_heat" if asked.item.quantity == "side heat out" else f"{asked.side}_heat"
    if name == "side_heat" and not recipe.bar:
        return Fault(CellError.NA, f"{asked.label}: the {recipe.body} in {ROW} has no sides; ask for its left or right heat out")
    if kind is Kind.HEAT_FLUX:
        return _flux(asked, recipe, name)
    if kind is Kind.LINE_POWER:
        if recipe.shape == Shape.CYLINDER:
            return plain(name)
        if recipe.shape == Shape.SPHERE:
            return Fault(CellError.NA, f"{asked.label}: a sphere has no length; ask for it in W")
        if recipe.bar:
            return Fault(CellError.NA, f"{asked.label}: the heat of a bar changes along it; ask for it in W")
        return Fault(CellError.NA, f"{asked.label}: the wall in {ROW} has no length; ask in W, with its area, or in W/m²")
    if recipe.shape == Shape.SPHERE:
        return plain(name)
    if recipe.shape == Shape.CYLINDER:
        if "length" not in recipe.filled:
            return Fault(CellError.NA, f"{asked.label}: the cylinder in {ROW} needs its length; fill in 'length [mm]'")
        return Ready((name,), lambda solved: (solved.values[name] * _given(solved.built.length), []))
    if not recipe.bar and "area" not in recipe.filled:
        return Fault(CellError.NA, f"{asked.label}: the wall in {ROW} needs its area; fill in 'area [m²]'")
    return Ready((name,), lambda solved: (solved.values[name] * _given(solved.built.area), []))


def _flux(asked: Asked, recipe: Recipe, name: str) -> Ready | Fault:
    if name == "heat_made":
        if recipe.body == "wall":
            return plain(name)
        return Fault(CellError.NA, f"{asked.label}: heat made in a {recipe.body} has no one face; ask for it in W or W/m")
    if name != "side_heat":
        return plain(f"{asked.side}_flux")
    if recipe.section == ("section",) and "perimeter" not in recipe.filled:
        return Fault(CellError.NA, f"{asked.label}: the bar in {ROW} needs its perimeter; fill in 'perimeter [mm]'")

    def work(solved: Solved) -> Worked:
        bar = solved.built.cases.bar
        assert bar is not None
        sides = _given(bar.perimeter) * _given(solved.built.length)
        return solved.values[name] * bar.section / sides, []

    return Ready((name,), work)


def _given(size: Array | None) -> Array:
    assert size is not None  # the recipe's rows all give it
    return size


def electrical(asked: Asked, recipe: Recipe) -> Ready | Fault:
    """The voltage or the resistance along the current of the lowest layer that carries one."""
    layer = next((layer for layer in recipe.layers if base_name(layer.source) in CURRENTS), None)
    if layer is None:
        return Fault(CellError.NA, f"{asked.label}: no current runs in {ROW}; fill in 'current [A]' and 'resistivity [Ω·m]'")
    lacking = _lacking(asked, recipe, layer)
    if lacking:
        what, heading = lacking
        return Fault(CellError.NA, f"{asked.label}: the current in {ROW} needs {what}; fill in '{heading}'")
    return plain(f"{asked.item.quantity} {layer.number}")


def _lacking(asked: Asked, recipe: Recipe, layer: LayerRecipe) -> tuple[str, str] | None:
    filled, turns = recipe.filled, layer.slot("turns")
    wound = turns in filled or layer.slot("fill factor") in filled
    if "length" not in filled:
        return "the length along it", "length [mm]"
    if wound and turns not in filled:
        return "the winding's number of turns", turns
    if recipe.body == "wall" and "width" not in filled and (wound or asked.item.quantity == "resistance"):
        return "the wall's width across it", "width [mm]"
    return None
