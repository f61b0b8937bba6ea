"""Slots of a row: what a heading fills, and the fault of one that is blank, doubled or out of place."""

from __future__ import annotations

from collections.abc import Mapping

from ingle_addin.cells import CellError
from ingle_addin.faults import ROW, Fault
from ingle_addin.heading_reader import INPUT_NAMES, Column, Plan


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


def number_of(slot: str) -> int:
    """A slot's layer."""
    number = slot.rpartition(" ")[2]
    return int(number) if number.isdigit() else 1


def missing(plan: Plan, slot: str, remedy: str) -> Stop:
    """A needed heading is blank, or not there at all."""
    if plan.has(slot):
        return Stop(CellError.NA, f"{plan.label(slot)} in {ROW} is blank; {remedy}")
    return Stop(CellError.NA, f"{ROW} has no {slot}, and no heading for it; add a column '{suggested(slot)}'")


def suggested(slot: str) -> str:
    """A heading as it may be typed."""
    unit = INPUT_NAMES[base_name(slot)].item.kinds[0].example
    return f"{slot} [{unit}]" if unit else slot


def one(filled: Mapping[str, Column], slots: tuple[str, ...], what: str) -> str:
    """The one of these slots that is filled, empty if none is."""
    given = [slot for slot in slots if slot in filled]
    if len(given) > 1:
        labels = " and ".join(filled[slot].label for slot in given[:2])
        raise Stop(CellError.VALUE, f"{labels} in {ROW} both give {what}; leave one blank")
    return given[0] if given else ""


def slope_fault(filled: Mapping[str, Column], tabled: frozenset[str], slot: str, slope: str, reference: str) -> Stop | None:
    """A slope beside a text table, or a reference without a slope."""
    sloped, referred = filled.get(slope), filled.get(reference)
    if slot in tabled:
        for other in (sloped, referred):
            if other is not None:
                sentence = f"{filled[slot].label} in {ROW} is a text table, beside which {other.label} has no meaning"
                return Stop(CellError.VALUE, f"{sentence}; leave one blank")
    if referred is not None and sloped is None:
        return Stop(CellError.NA, f"{referred.label} in {ROW} needs a slope; fill in '{slope} [1/K]' or leave it blank")
    return None
