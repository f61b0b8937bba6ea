"""Answers about limits: the allowable source and what it is limited by, how much of it is used, which limit is passed."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from ingle import Status
from ingle.shapes import Array

from ingle_addin.cells import CellError
from ingle_addin.faults import HERE, ROW, Fault
from ingle_addin.heading_reader import Asked, Plan
from ingle_addin.headings import CURRENTS
from ingle_addin.ready import Faults, Ready, Solved, Worked, plain
from ingle_addin.recipe import Recipe
from ingle_addin.slots import base_name
from ingle_addin.status_faults import STATUS_FAULTS

_ALLOWED = ("allowable_multiple", "first_broken", "lacking")
# A limit is passed when the temperature is this much above it: less is rounding, at an allowable source put back.
PASSED = 1e-8
# The solver's numbers of limits: 1 anywhere, 2 left face, 3 right face, 3 + n layer n; −1 is runaway.
_LIMIT_SLOTS = ("limit", "left limit", "right limit")


def passed_limits(recipe: Recipe, values: Mapping[str, Array]) -> Faults:
    """The rows whose temperatures are above a limit now, by the limit most passed."""
    if not recipe.limits or "worst_limit" not in values:
        return []
    over = values["least_room"] < -PASSED
    found = []
    for code, slot in _limits_of(recipe):
        what = {"limit": "the peak", "left limit": "the left face", "right limit": "the right face"}.get(slot, "that layer's peak")
        sentence = f"{recipe.label(slot)} in {ROW} is {HERE}, and {what} is above it; lower the source or cool the body more"
        found.append((over & (values["worst_limit"] == code), Fault(CellError.NA, sentence, (recipe.filled[slot].index,))))
    return found


def _limits_of(recipe: Recipe) -> list[tuple[int, str]]:
    codes = range(1, len(_LIMIT_SLOTS) + len(recipe.layers) + 1)
    return [(code, _limit_slot(code)) for code in codes if _limit_slot(code) in recipe.filled]


def _limit_slot(code: int) -> str:
    """The heading of a limit by the solver's number."""
    return _LIMIT_SLOTS[code - 1] if code <= len(_LIMIT_SLOTS) else f"limit {code - len(_LIMIT_SLOTS)}"


def broken_faults(broken: Array, recipe: Recipe) -> Faults:
    """Limits that are passed even with no source."""
    faults = []
    for code, slot in _limits_of(recipe):
        column = recipe.filled[slot]
        sentence = f"{column.label} in {ROW} is {HERE}, passed even with no source; raise it or cool the body more"
        faults.append((broken == code, Fault(CellError.NUM, sentence, (column.index,))))
    return faults


def no_limit(plan: Plan) -> Fault:
    """The fault of an answer that needs a limit."""
    if plan.has("limit"):
        return Fault(CellError.NA, f"{plan.label('limit')} in {ROW} is blank; type the highest temperature allowed")
    return Fault(CellError.NA, f"{ROW} has no limit; add a column 'limit [°C]', 'left limit [°C]' or 'right limit [°C]'")


def _limit_faults(solved: Solved, recipe: Recipe) -> Faults:
    lacking = solved.values["lacking"]
    sentence = f"no source reaches the limit in {ROW}: that face is held, or the sources cool the body; give a limit for the peak"
    conductivity = f"the conductivity in {ROW} falls to zero before a limit is reached; check the slope or give a table"
    return [
        *broken_faults(solved.values["first_broken"], recipe),
        (lacking == 3, Fault(CellError.NUM, sentence)),
        (lacking == 4, Fault(CellError.NUM, conductivity)),
        (lacking == 5, STATUS_FAULTS[Status.NOT_BALANCED]),
    ]


def allowable(asked: Asked, plan: Plan, recipe: Recipe) -> Ready | Fault:
    """The source at which the first limit is reached, by the kind asked or the row's own."""
    if not recipe.limits:
        return no_limit(plan)
    if not recipe.scaled:
        assert recipe.no_source is not None
        return recipe.no_source
    wanted = asked.item.quantity.removeprefix("allowable ")
    if wanted != "source" and wanted not in recipe.kinds:
        have = recipe.scaled
        return Fault(CellError.NA, f"{asked.label}: the source in {ROW} is its {have}; ask for 'allowable {have}'")
    kind = recipe.scaled if wanted == "source" else wanted
    slots = recipe.slots_of(kind)
    if slots and all(slot in recipe.tabled for slot in slots):
        sentence = f"{asked.label}: the source in {ROW} is a text table, which is not one value; ask for 'utilisation [%]'"
        return Fault(CellError.NA, sentence)
    told = next((slot for slot in slots if slot not in recipe.tabled), "")
    units = [c.unit for c in plan.columns for slot in c.slots if (slot == told if told else base_name(slot) == kind)]

    def work(solved: Solved) -> Worked:
        pattern, faults = solved.built.pattern(kind), _limit_faults(solved, recipe)
        assert pattern.told is not None
        source = multiple_of(kind, solved.values["allowable_multiple"]) * pattern.told
        return (units[0].from_base(source) if wanted == "source" else source), [_all_zero(pattern.all_zero), *faults]

    return Ready(_ALLOWED, work, "" if kind == recipe.scaled else kind, beyond=True)


def multiple_of(kind: str, heat: Array) -> Array:
    """The multiple of a source by that of its heat, which goes as the square of a current."""
    return np.sqrt(heat) if kind in CURRENTS else heat


def _all_zero(mask: np.ndarray) -> tuple[np.ndarray, Fault]:
    """Rows whose several sources are all 0, so that no ratio between them is known."""
    return mask, Fault(CellError.NUM, f"the sources in {ROW} are all 0, so they do not say how they scale together; give them")


def limited_by(plan: Plan, recipe: Recipe) -> Ready | Fault:
    """The limit that the source reaches first, or `runaway`."""
    if not recipe.limits:
        return no_limit(plan)
    if not recipe.scaled:
        assert recipe.no_source is not None
        return recipe.no_source
    names = np.array(["", *(_limit_slot(code) for code in range(1, len(_LIMIT_SLOTS) + len(recipe.layers) + 1)), "runaway"], object)

    def work(solved: Solved) -> Worked:
        governs = solved.values["governs"]
        none = np.isnan(governs) | (governs == 0.0)
        found: np.ndarray = names[np.where(none, 0, governs).astype(np.intp)]  # −1 is the last
        return found, [
            *((none & each, fault) for each, fault in _limit_faults(solved, recipe)),
            (none, STATUS_FAULTS[Status.NOT_BALANCED]),
        ]

    return Ready(("governs", *_ALLOWED), work, beyond=True)


def headroom(plan: Plan, recipe: Recipe) -> Ready | Fault:
    """Kelvin left before the limit that governs."""
    return plain("headroom") if recipe.limits else no_limit(plan)


def utilisation(plan: Plan, recipe: Recipe) -> Ready | Fault:
    """How much of the allowable source the row has."""
    if not recipe.limits:
        return no_limit(plan)
    if not recipe.scaled:
        assert recipe.no_source is not None
        return recipe.no_source
    kind = recipe.scaled

    def work(solved: Solved) -> Worked:
        pattern, multiple = solved.built.pattern(kind), multiple_of(kind, solved.values["allowable_multiple"])
        nothing = multiple == 0.0
        told = np.ones_like(multiple) if pattern.told is None else np.where(pattern.told == 0.0, 1.0, pattern.told)
        share = 100.0 * (pattern.now / told / np.where(nothing, np.nan, multiple))
        fault = Fault(CellError.NUM, f"the allowable source in {ROW} is 0, so none of it can be used; raise the limit")
        return share, [_all_zero(pattern.all_zero), *_limit_faults(solved, recipe), (nothing, fault)]

    return Ready(_ALLOWED, work, beyond=True)
