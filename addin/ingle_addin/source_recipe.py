"""The headings of a layer's source: one a layer, what each needs beside it, and what stands there to no purpose."""

from __future__ import annotations

from collections.abc import Mapping

from ingle_addin.cells import CellError
from ingle_addin.faults import ROW, Fault
from ingle_addin.heading_reader import Column, Plan
from ingle_addin.headings import CURRENTS, SOURCES
from ingle_addin.slots import Stop, base_name, missing, number_of, slope_fault, slot_of

_CONTACTS = ("left contact", "right contact")
# What only a current's layer has.
_ELECTRIC = ("resistivity", "resistivity slope", "resistivity reference", "ac ratio", "turns", "fill factor")
# What only a generation's layer has.
_IN_TEMPERATURE = ("generation slope", "generation reference")
_GENERATIONS = ("generation", "specific generation")


def layer_source(filled: Mapping[str, Column], number: int) -> str:
    """The filled slot of a layer's source, empty if it has none."""
    given = [slot for slot in (slot_of(name, number) for name in SOURCES) if slot in filled]
    if len(given) > 1:
        labels = " and ".join(filled[slot].label for slot in given[:2])
        raise Stop(CellError.VALUE, f"{labels} in {ROW} are two sources in one layer; leave one blank")
    return given[0] if given else ""


def scaled_source(
    plan: Plan, filled: Mapping[str, Column], tabled: frozenset[str], shape: str, sources: list[str]
) -> tuple[str, int, Fault | None]:  # fmt: skip
    """The kind of source that an allowable scales, its first layer, and the fault of a row without any source."""
    headed = [slot for column in plan.columns for slot in column.slots if base_name(slot) in SOURCES]
    given = [slot for slot in sources if slot]
    for slot in given:
        need = _needs(plan, slot, filled, tabled, shape)
        if need is not None:
            raise need
    if given:
        _check_strays(filled, {number_of(slot): base_name(slot) for slot in given}, len(sources))
        return base_name(given[0]), number_of(given[0]), None
    if not headed:
        _check_strays(filled, {}, len(sources))
        sentence = f"{ROW} has no source, and no heading for one; add a column 'generation [W/m³]', 0 for none"
        return "", 1, Fault(CellError.NA, sentence)
    words = " and ".join(plan.label(slot) for slot in headed)
    blank = Fault(CellError.NA, f"{words} in {ROW} {'is' if len(headed) == 1 else 'are'} blank; write 0 for no source")
    if len(headed) > 1:
        return "", 1, blank
    need = _needs(plan, headed[0], filled, tabled, shape)
    if need is not None and need.fault.error is CellError.VALUE:
        raise need
    number = number_of(headed[0])
    if need is not None or number > len(sources):
        return "", 1, blank if need is None else need.fault
    _check_strays(filled, {number: base_name(headed[0])}, len(sources))
    return base_name(headed[0]), number, blank


def _check_strays(filled: Mapping[str, Column], kinds: Mapping[int, str], count: int) -> None:
    """Headings of a current, or of a generation in temperature, in a layer that has none: a slip of layer or column."""
    for number in range(1, count + 1):
        kind = kinds.get(number, "")
        for name in _ELECTRIC:
            column = filled.get(slot_of(name, number))
            if column is not None and kind not in CURRENTS:
                current = slot_of("current", number)
                sentence = f"{column.label} in {ROW} is of a current, and its layer carries none"
                raise Stop(CellError.VALUE, f"{sentence}; fill in '{current} [A]' or leave it blank")
        for name in _IN_TEMPERATURE:
            column = filled.get(slot_of(name, number))
            if column is not None and kind not in _GENERATIONS:
                generation = slot_of("generation", number)
                sentence = f"{column.label} in {ROW} is of a generation, and its layer has none"
                raise Stop(CellError.VALUE, f"{sentence}; fill in '{generation} [W/m³]' or leave it blank")
    for slot in _CONTACTS:
        column = filled.get(slot)
        if column is not None and not any(kind in CURRENTS for kind in kinds.values()):
            sentence = f"{column.label} in {ROW} is of a current, and the bar carries none"
            raise Stop(CellError.VALUE, f"{sentence}; fill in 'current [A]' or leave it blank")


def _needs(plan: Plan, slot: str, filled: Mapping[str, Column], tabled: frozenset[str], shape: str) -> Stop | None:
    """What a source lacks, or why the shape cannot have it."""
    label = filled[slot].label if slot in filled else plan.label(slot)
    name, number = base_name(slot), number_of(slot)
    if name in CURRENTS:
        return _current_needs(plan, slot, filled, tabled, shape)
    fault = slope_fault(filled, tabled, slot, slot_of("generation slope", number), slot_of("generation reference", number))
    if fault is not None:
        return fault
    density = slot_of("density", number)
    if name == "specific generation" and density not in filled:
        return Stop(CellError.NA, f"{label} in {ROW} needs a density; fill in '{density} [kg/m³]'")
    if name == "power" and shape == "cylinder" and "length" not in filled:
        return Stop(CellError.NA, f"{label} in {ROW} needs the cylinder's length; fill in 'length [mm]'")
    if name == "power" and shape == "wall" and "area" not in filled:
        return Stop(CellError.NA, f"{label} in {ROW} needs the wall's area; fill in 'area [m²]'")
    if name == "line power" and shape == "wall":
        return Stop(CellError.NA, f"{label} in {ROW} has no meaning for a wall; give 'power [W]' with 'area [m²]'")
    if name == "line power" and shape == "sphere":
        return Stop(CellError.VALUE, f"{label} in {ROW} has no meaning for a sphere; give 'power [W]'")
    return None


def _current_needs(plan: Plan, slot: str, filled: Mapping[str, Column], tabled: frozenset[str], shape: str) -> Stop | None:
    label = filled[slot].label if slot in filled else plan.label(slot)
    name, number = base_name(slot), number_of(slot)
    if shape == "sphere":
        return Stop(CellError.VALUE, f"{label} in {ROW} has no meaning for a sphere; give 'power [W]' or 'generation [W/m³]'")
    resistivity = slot_of("resistivity", number)
    if resistivity not in filled:
        return missing(plan, resistivity, "a current needs it")
    slope, reference = slot_of("resistivity slope", number), slot_of("resistivity reference", number)
    fault = slope_fault(filled, tabled, resistivity, slope, reference)
    if fault is not None:
        return fault
    if shape == "bar":
        return None
    turns = slot_of("turns", number)
    wound = turns in filled or slot_of("fill factor", number) in filled
    if wound and name != "current density" and turns not in filled:
        return missing(plan, turns, "a winding's current needs its number of turns")
    if name == "voltage" and "length" not in filled:
        return Stop(CellError.NA, f"{label} in {ROW} needs the length along the current; fill in 'length [mm]'")
    if name != "current":
        return None
    if shape == "wall" and "width" not in filled:
        return Stop(CellError.NA, f"{label} in {ROW} needs the wall's width across the current; fill in 'width [mm]'")
    if wound and shape == "cylinder" and "length" not in filled:
        return Stop(CellError.NA, f"{label} in {ROW} needs the winding's length along the axis; fill in 'length [mm]'")
    return None
