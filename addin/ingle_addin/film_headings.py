"""The headings of a film law at a face: which need which."""

from __future__ import annotations

from collections.abc import Mapping

from ingle_addin.cells import CellError
from ingle_addin.faults import ROW, Fault
from ingle_addin.heading_reader import Column

_OF_FLOW = ("cylinder in cross flow", "plate in flow", "tube flow")
_ROUND = ("horizontal cylinder", "sphere", "cylinder in cross flow", "tube flow")


def _whose(column: Column, side: str) -> str:
    return "both" if len(column.slots) == 2 else side


def law_fault(filled: Mapping[str, Column], words: Mapping[str, str], side: str, shape: str) -> Fault | None:
    """What a face's film law lacks, or what stands beside it to no purpose."""
    law = filled.get(f"{side} film law")
    size, speed, kind = (filled.get(f"{side} {name}") for name in ("size", "speed", "fluid kind"))
    if law is None:
        for extra in (size, speed, kind):
            if extra is not None:
                return Fault(
                    CellError.NA,
                    f"{extra.label} in {ROW} is of a film law; fill in '{_whose(extra, side)} film law' or leave it blank",
                )
        return None
    name = words[f"{side} film law"]
    whose = _whose(law, side)
    flat = shape == "wall" or (shape == "bar" and (side != "side" or "diameter" not in filled))
    if size is None and (name not in _ROUND or flat):
        return Fault(CellError.NA, f"{law.label} in {ROW} is '{name}' and needs a size; fill in '{whose} size [mm]'")
    if name in _OF_FLOW and speed is None:
        return Fault(CellError.NA, f"{law.label} in {ROW} is '{name}' and needs a speed; fill in '{whose} speed [m/s]'")
    if name not in _OF_FLOW and speed is not None:
        sentence = f"{speed.label} in {ROW} has no place in the law '{name}', which is of still fluid"
        return Fault(CellError.VALUE, f"{sentence}; leave it blank or choose a law of flow")
    return None
