"""What the rows that fill the same headings have in common: which formula gives what, or what is missing or contradictory.

Nothing here is decided row by row; `case_builder` then turns the rows' values into cases.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

from ingle import Shape

from ingle_addin.cells import CellError
from ingle_addin.faults import ROW, Fault
from ingle_addin.film_headings import law_fault
from ingle_addin.heading_reader import INPUT_NAMES, Column, Plan
from ingle_addin.headings import SOURCES, Where

_SHAPES = {"wall": Shape.WALL, "cylinder": Shape.CYLINDER, "sphere": Shape.SPHERE}
_ROUND = ("cylinder", "sphere")
# Headings of some shapes only: a value under one of them in another shape's row is a slip of column.
_BELONGS = {
    "inner radius": _ROUND,
    "inner diameter": _ROUND,
    "outer radius": _ROUND,
    "outer diameter": _ROUND,
    "radius": _ROUND,
    "diameter": _ROUND,
    "length": ("wall", "cylinder"),
    "width": ("wall",),
    "area": ("wall",),
}
_OUTSIDES = ("outer radius", "outer diameter", "radius", "diameter")


@dataclass(frozen=True)
class LayerRecipe:
    """One layer: its number, the slots that give its outside and its source (empty: none), and k's own."""

    number: int
    outside: str
    source: str

    def slot(self, name: str) -> str:
        """The slot of one of its headings."""
        return slot_of(name, self.number)


@dataclass(frozen=True)
class Recipe:
    """How rows of one pattern become cases. ``filled`` maps a slot to the column that fills it; ``words`` to its text."""

    shape: Shape
    filled: dict[str, Column]
    words: Mapping[str, str]
    tabled: frozenset[str]  # slots whose cells are text tables
    inner: str
    layers: tuple[LayerRecipe, ...]
    scaled: str  # the kind of source an allowable is told in, empty where more than one could be meant
    scaled_layer: int  # the first layer of that kind, also where its cell is blank
    no_source: Fault | None
    limits: tuple[str, ...]
    answers: dict[Any, Any] = field(default_factory=dict, compare=False, repr=False)  # what each answer needs, kept

    def label(self, slot: str) -> str:
        """The heading as typed."""
        return self.filled[slot].label if slot in self.filled else slot

    @property
    def scaled_slots(self) -> tuple[str, ...]:
        """The filled source slots of the scaled kind."""
        return tuple(layer.source for layer in self.layers if layer.source and base_name(layer.source) == self.scaled)


class Stop(Exception):  # noqa: N818 - it carries a fault to the one place that returns it
    """A row's pattern has no answer."""

    def __init__(self, error: CellError, sentence: str) -> None:
        super().__init__(sentence)
        self.fault = Fault(error, sentence)


def slot_of(name: str, layer: int) -> str:
    """The slot of a layer's heading: a bare name is layer 1."""
    return name if layer == 1 else f"{name} {layer}"


def base_name(slot: str) -> str:
    """A slot's heading without its layer."""
    name, _, number = slot.rpartition(" ")
    return name if number.isdigit() else slot


def build(plan: Plan, columns: tuple[Column, ...], words: Mapping[str, str], tabled: frozenset[str] = frozenset()) -> Recipe | Fault:
    """The recipe of rows that fill these columns, with the words their text headings hold, or why they have no answer."""
    try:
        return _build(plan, columns, words, tabled)
    except Stop as stop:
        return stop.fault


def _build(plan: Plan, columns: tuple[Column, ...], words: Mapping[str, str], tabled: frozenset[str]) -> Recipe:
    for column in columns:
        if not column.available:
            raise Stop(CellError.NA, f"{column.label} in {ROW} is not available yet; leave it blank or wait for a later version")
    shape_text = words.get("shape")
    if shape_text is None:
        raise missing(plan, "shape", "write wall, cylinder or sphere")
    if shape_text == "bar":
        raise Stop(CellError.NA, f"shape 'bar' in {ROW} is not available yet; bars along their length need a later version")
    shape = _SHAPES[shape_text]
    bored = any(slot in ("inner radius", "inner diameter") for column in columns for slot in column.slots)
    solid = shape != Shape.WALL and not bored
    filled = _by_slot(columns, solid, shape_text)
    words = {slot: word for slot, word in words.items() if slot in filled}
    for slot, column in filled.items():
        shapes = _BELONGS.get(base_name(slot), (shape_text,))
        if shape_text not in shapes:
            belongs = " or a ".join(shapes)
            raise Stop(CellError.VALUE, f"{column.label} in {ROW} belongs to a {belongs}, not to a {shape_text}; leave it blank")
    inner = one(filled, ("inner radius", "inner diameter"), "the bore")
    count = max((column.layer for column in columns if column.item.where is Where.LAYER), default=1)
    _check_numbers(columns, count)
    outsides = [_outside(plan, filled, shape_text, number, count) for number in range(1, count + 1)]
    for number in range(1, count + 1):
        _check_conductivity(plan, filled, tabled, number)
    sources = [_layer_source(filled, number) for number in range(1, count + 1)]
    scaled, scaled_layer, no_source = _scaled(plan, filled, shape_text, sources)
    for side in ("left", "right"):
        _check_face(plan, filled, side)
        fault = law_fault(filled, words, side, shape_text)
        if fault is not None:
            raise Stop(fault.error, fault.sentence)
    limits = ("limit", "left limit", "right limit", *(f"limit {n}" for n in range(1, count + 1)))
    layers = tuple(LayerRecipe(n, outside, source) for n, (outside, source) in enumerate(zip(outsides, sources, strict=True), 1))
    given = tuple(slot for slot in limits if slot in filled)
    return Recipe(shape, filled, words, tabled, inner, layers, scaled, scaled_layer, no_source, given)


def missing(plan: Plan, slot: str, remedy: str) -> Stop:
    """A needed heading is blank, or not there at all."""
    if plan.has(slot):
        return Stop(CellError.NA, f"{plan.label(slot)} in {ROW} is blank; {remedy}")
    return Stop(CellError.NA, f"{ROW} has no {slot}, and no heading for it; add a column '{suggested(slot)}'")


def suggested(slot: str) -> str:
    """A heading as it may be typed."""
    unit = INPUT_NAMES[base_name(slot)].item.kinds[0].example
    return f"{slot} [{unit}]" if unit else slot


def _by_slot(columns: tuple[Column, ...], solid: bool, shape_text: str) -> dict[str, Column]:
    """The column of each slot; `both` is the outer face alone on a solid round body, whose middle takes nothing."""
    filled: dict[str, Column] = {}
    for column in columns:
        slots = column.slots
        if solid and len(slots) == 2:
            slots = slots[1:]
        for slot in slots:
            if slot in filled:
                sentence = f"{filled[slot].label} and {column.label} in {ROW} both give the {slot}"
                raise Stop(CellError.VALUE, f"{sentence}; leave one blank")
            if solid and slot.startswith("left "):
                sentence = f"{column.label} in {ROW} lies on an inner face, and this {shape_text} is solid"
                raise Stop(CellError.VALUE, f"{sentence}; give an inner radius or leave it blank")
            filled[slot] = column
    return filled


def one(filled: Mapping[str, Column], slots: tuple[str, ...], what: str) -> str:
    """The one of these slots that is filled, empty if none is."""
    given = [slot for slot in slots if slot in filled]
    if len(given) > 1:
        labels = " and ".join(filled[slot].label for slot in given[:2])
        raise Stop(CellError.VALUE, f"{labels} in {ROW} both give {what}; leave one blank")
    return given[0] if given else ""


def _check_numbers(columns: tuple[Column, ...], count: int) -> None:
    """Numbered headings of layers and joints that the row's body has not, and bare ones where a number is compulsory."""
    for column in columns:
        item = column.item
        beyond = column.layer + 1 if item.where is Where.JOINT else column.layer
        if item.where in (Where.JOINT, Where.FACE_AND_LAYER) and beyond > count:
            sentence = f"{column.label} in {ROW} needs layer {beyond}, which this body has not"
            raise Stop(CellError.NA, f"{sentence}; describe that layer or leave it blank")
        if count > 1 and item.name in _OUTSIDES and not column.numbered:
            if item.name in ("radius", "diameter"):
                sentence = f"{column.label} in {ROW} is for a body of one layer, and this one has {count}"
                raise Stop(CellError.VALUE, f"{sentence}; use 'outer {item.name} 1'")
            sentence = f"{column.label} in {ROW} does not say of which layer, and this body has {count}"
            raise Stop(CellError.VALUE, f"{sentence}; write '{item.name} 1' or '{item.name} {count}'")


def _outside(plan: Plan, filled: Mapping[str, Column], shape_text: str, number: int, count: int) -> str:
    thickness = slot_of("thickness", number)
    if shape_text == "wall":
        if thickness not in filled:
            raise missing(plan, thickness, "type a value")
        return thickness
    names = _OUTSIDES if number == 1 else _OUTSIDES[:2]
    slots = (*(slot_of(name, number) for name in names), thickness)
    of = f"the outside of layer {number}" if count > 1 else "the outside"
    outside = one(filled, slots, of)
    if not outside:
        there = [plan.label(slot) for slot in slots if plan.has(slot)]
        if there:
            either = " or ".join(f"'{label}'" for label in there[:2])
            raise Stop(CellError.NA, f"{of} of the {shape_text} in {ROW} is blank; fill in {either}")
        raise missing(plan, slot_of("outer radius", number), "type a value")
    return outside


def _check_conductivity(plan: Plan, filled: Mapping[str, Column], tabled: frozenset[str], number: int) -> None:
    slot = slot_of("conductivity", number)
    slope, reference = (filled.get(slot_of(f"conductivity {name}", number)) for name in ("slope", "reference"))
    if slot not in filled:
        raise missing(plan, slot, "type a value")
    for other in (slope, reference):
        if slot in tabled and other:
            sentence = f"{filled[slot].label} in {ROW} is a text table, beside which {other.label} has no meaning"
            raise Stop(CellError.VALUE, f"{sentence}; leave one blank")
    if reference and not slope:
        sentence = f"{reference.label} in {ROW} needs a slope"
        raise Stop(CellError.NA, f"{sentence}; fill in '{slot_of('conductivity slope', number)} [1/K]' or leave it blank")


def _layer_source(filled: Mapping[str, Column], number: int) -> str:
    given = [slot for slot in (slot_of(name, number) for name in SOURCES) if slot in filled]
    if len(given) > 1:
        labels = " and ".join(filled[slot].label for slot in given[:2])
        raise Stop(CellError.VALUE, f"{labels} in {ROW} are two sources in one layer; leave one blank")
    return given[0] if given else ""


def _scaled(plan: Plan, filled: Mapping[str, Column], shape_text: str, sources: list[str]) -> tuple[str, int, Fault | None]:
    """The kind of source that an allowable scales, its first layer, and the fault of a row without any source."""
    headed = [slot for column in plan.columns for slot in column.slots if base_name(slot) in SOURCES]
    given = [slot for slot in sources if slot]
    for slot in given:
        need = _source_needs(slot, filled, shape_text)
        if need is not None:
            raise need
    if given:
        return base_name(given[0]), _number_of(given[0]), None
    if not headed:
        sentence = f"{ROW} has no source, and no heading for one; add a column 'generation [W/m³]', 0 for none"
        return "", 1, Fault(CellError.NA, sentence)
    words = " and ".join(plan.label(slot) for slot in headed)
    blank = Fault(CellError.NA, f"{words} in {ROW} {'is' if len(headed) == 1 else 'are'} blank; write 0 for no source")
    if len(headed) > 1:
        return "", 1, blank
    need = _source_needs(headed[0], filled, shape_text)
    if need is not None and need.fault.error is CellError.VALUE:
        raise need
    number = _number_of(headed[0])
    if need is not None or number > len(sources):
        return "", 1, blank if need is None else need.fault
    return base_name(headed[0]), number, blank


def _number_of(slot: str) -> int:
    number = slot.rpartition(" ")[2]
    return int(number) if number.isdigit() else 1


def _source_needs(slot: str, filled: Mapping[str, Column], shape_text: str) -> Stop | None:
    label = filled[slot].label if slot in filled else slot
    name, number = base_name(slot), _number_of(slot)
    density = slot_of("density", number)
    if name == "specific generation" and density not in filled:
        return Stop(CellError.NA, f"{label} in {ROW} needs a density; fill in '{density} [kg/m³]'")
    if name == "power" and shape_text == "cylinder" and "length" not in filled:
        return Stop(CellError.NA, f"{label} in {ROW} needs the cylinder's length; fill in 'length [mm]'")
    if name == "power" and shape_text == "wall" and "area" not in filled:
        return Stop(CellError.NA, f"{label} in {ROW} needs the wall's area; fill in 'area [m²]'")
    if name == "line power" and shape_text == "wall":
        return Stop(CellError.NA, f"{label} in {ROW} has no meaning for a wall; give 'power [W]' with 'area [m²]'")
    if name == "line power" and shape_text == "sphere":
        return Stop(CellError.VALUE, f"{label} in {ROW} has no meaning for a sphere; give 'power [W]'")
    return None


def _check_face(plan: Plan, filled: Mapping[str, Column], side: str) -> None:
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
