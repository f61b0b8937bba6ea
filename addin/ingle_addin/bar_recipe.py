"""The headings of a bar: its section, and what its sides need."""

from __future__ import annotations

from collections.abc import Mapping

from ingle_addin.cells import CellError
from ingle_addin.faults import ROW
from ingle_addin.heading_reader import Column, Plan
from ingle_addin.headings import Where
from ingle_addin.slots import Stop, missing

_WAYS = (("section", "perimeter"), ("width", "thickness"), ("diameter",))
_COOLING = ("side film", "side film law", "side emissivity")


def check_layers(columns: tuple[Column, ...]) -> None:
    """A bar is of one layer."""
    for column in columns:
        if column.layer > 1 and column.item.where in (Where.LAYER, Where.JOINT, Where.FACE_AND_LAYER):
            sentence = f"{column.label} in {ROW} is of layer {column.layer}, and a bar has one layer"
            raise Stop(CellError.NA, f"{sentence}; leave it blank")


def section_of(plan: Plan, filled: Mapping[str, Column]) -> tuple[str, ...]:
    """The slots that give a bar's section: `section`, `width` and `thickness`, or `diameter`."""
    given = [way for way in _WAYS if any(slot in filled for slot in way)]
    if len(given) > 1:
        labels = " and ".join(next(filled[slot].label for slot in way if slot in filled) for way in given[:2])
        raise Stop(CellError.VALUE, f"{labels} in {ROW} both give the bar's section; leave one blank")
    if not given:
        raise missing(plan, "section", "give the bar's section, or its width and thickness, or its diameter")
    way = given[0]
    if way[0] == "section":
        if "section" not in filled:
            raise missing(plan, "section", "give the bar's section")
        cooled = next((filled[slot] for slot in _COOLING if slot in filled), None)
        if cooled is not None and "perimeter" not in filled:
            sentence = f"{cooled.label} in {ROW} needs the perimeter of the bar's section"
            raise Stop(CellError.NA, f"{sentence}; fill in 'perimeter [mm]'")
        return ("section",)
    for slot in way:
        if slot not in filled:
            raise missing(plan, slot, "a bar's section needs both width and thickness")
    return way
