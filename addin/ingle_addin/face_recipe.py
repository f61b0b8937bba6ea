"""The headings of a face, or of a bar's sides: which contradict each other, and what each needs."""

from __future__ import annotations

from collections.abc import Mapping

from ingle_addin.cells import CellError
from ingle_addin.faults import ROW
from ingle_addin.heading_reader import Column, Plan
from ingle_addin.slots import Stop, suggested


def check_face(plan: Plan, filled: Mapping[str, Column], side: str) -> None:
    """Raise what is wrong with one face."""
    held, film, law, fluid, emissivity, surroundings, resistance, flux = (
        filled.get(f"{side} {name}")
        for name in ("held", "film", "film law", "fluid", "emissivity", "surroundings", "resistance", "flux in")
    )
    if held:
        for other in (film, law, fluid, emissivity, surroundings, flux):
            if other:
                sentence = f"{held.label} and {other.label} in {ROW} contradict each other"
                raise Stop(CellError.VALUE, f"{sentence}: a held face takes no film, fluid, radiation or flux; leave one blank")
    if film and law:
        sentence = f"{film.label} and {law.label} in {ROW} both give the film coefficient"
        raise Stop(CellError.VALUE, f"{sentence}; leave one blank")
    for given in (film, law):
        if given and not fluid:
            raise _face_missing(plan, filled, given, "fluid", "the temperature of its fluid")
    alone = resistance and not (emissivity or flux)  # with a fluid and nothing else the resistance is the path
    if fluid and not (film or law or alone):
        raise _face_missing(plan, filled, fluid, "film", "a film")
    if surroundings and not emissivity:
        raise _face_missing(plan, filled, surroundings, "emissivity", "an emissivity")
    if emissivity and not surroundings and not fluid:
        raise _face_missing(plan, filled, emissivity, "surroundings", "the temperature of its surroundings")
    if resistance and not (held or fluid or emissivity):
        raise _face_missing(plan, filled, resistance, "fluid", "a fluid, surroundings or a held temperature beyond it")


def _face_missing(plan: Plan, filled: Mapping[str, Column], given: Column, name: str, what: str) -> Stop:
    """What a face's heading lacks: the heading named covers just the faces that lack it."""
    sides = [slot.split(" ", 1)[0] for slot in given.slots if filled.get(slot) is given]
    lacking = [f"{side} {name}" for side in sides if f"{side} {name}" not in filled]
    both = len(given.slots) == 2 and len(lacking) == len(sides)
    wanted = [f"left {name}", f"right {name}"] if both else lacking  # on a solid body `both` is the outer face
    blank = [column.label for column in plan.columns if column.item.name == name and list(column.slots) == wanted]
    known = blank[0] if blank else suggested(f"both {name}" if both else lacking[0])
    return Stop(CellError.NA, f"{given.label} in {ROW} needs {what}; fill in '{known}'")
