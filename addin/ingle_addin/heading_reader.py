"""From heading texts to what each column means: name, side, layer and unit, by the one table of headings."""

from __future__ import annotations

import difflib
import re
from collections.abc import Sequence
from dataclasses import dataclass, field
from functools import lru_cache
from typing import Any

from ingle_addin.cells import CellError
from ingle_addin.faults import Fault, quoted
from ingle_addin.headings import ANSWERS, INPUTS, Answer, Input, Where
from ingle_addin.units import Kind, Unit, UnitError, read_unit

LONGEST_HEADING = 200
SIDES = {"left": "left", "inner": "left", "right": "right", "outer": "right"}
_SPREADS = {"±": "±", "+/-": "±", "sd": "sd"}
_PARTS = re.compile(r"(?P<name>[^\[\]]*)(?:\[(?P<unit>[^\[\]]*)\])?\s*", re.DOTALL)
_NUMBERED = re.compile(r"(?P<name>.*\S)\s(?P<number>\d{1,4})")
_BLANKS = re.compile(r"[\s\u200b\ufeff]+")


@dataclass(frozen=True)
class Column:
    """An input column: ``slots`` are the places it fills, such as ``left film`` or ``thickness``; ``layer`` 0 is the body."""

    index: int
    item: Input
    slots: tuple[str, ...]
    layer: int
    unit: Unit
    label: str
    available: bool
    numbered: bool = False


@dataclass(frozen=True)
class Asked:
    """An answer column: ``side`` is left, right or empty; ``layer`` 0 is the whole body."""

    item: Answer
    side: str
    layer: int
    unit: Unit
    label: str


@dataclass(frozen=True)
class Plan:
    """What a row of headings means. ``fault``: the first heading that cannot be read, which spoils every row."""

    width: int
    columns: tuple[Column, ...]
    fault: Fault | None = None
    own: frozenset[int] = frozenset()
    texts: tuple[str, ...] = ()
    recipes: dict[Any, Any] = field(default_factory=dict, compare=False, repr=False)  # kept beside the plan that made them

    def has(self, slot: str) -> bool:
        """Whether any column fills this slot."""
        return any(slot in column.slots for column in self.columns)

    def label(self, slot: str) -> str:
        """The heading as typed that fills the slot, or the slot's own name."""
        return next((column.label for column in self.columns if slot in column.slots), slot)


@dataclass(frozen=True)
class _Name:
    item: Input
    side: str = ""  # left, right, both or side
    asked: bool = False


def _input_names() -> dict[str, _Name]:
    names: dict[str, _Name] = {}
    for item in INPUTS:
        if item.where in (Where.FACE, Where.FACE_AND_SIDE, Where.FACE_AND_LAYER):
            for word, side in (*SIDES.items(), ("both", "both")):
                names[f"{word} {item.name}"] = _Name(item, side)
        if item.where is Where.FACE_AND_SIDE:
            names[f"side {item.name}"] = _Name(item, "side")
        if item.where not in (Where.FACE, Where.FACE_AND_SIDE):
            names[item.name] = _Name(item)
    return names


def _answer_names() -> dict[str, tuple[Answer, str]]:
    names: dict[str, tuple[Answer, str]] = {}
    for item in ANSWERS:
        if item.where is Where.FACE:
            names.update({f"{word} {item.name}": (item, side) for word, side in SIDES.items()})
        elif item.where is not Where.JOINT:
            names[item.name] = (item, "")
    names["inner share"] = names["left share"]
    return names


INPUT_NAMES = _input_names()
ANSWER_NAMES = _answer_names()
_JOINT_ANSWER = re.compile(r"joint (?P<number>\d{1,4}) (?P<side>left|right|inner|outer)")


def clean(text: str) -> str:
    """A heading with runs of blanks, line breaks and no-break spaces as one space."""
    return _BLANKS.sub(" ", text).strip()


def _split(text: str) -> tuple[str, str | None] | None:
    """Name and unit text of a heading, None where the brackets do not pair."""
    match = _PARTS.fullmatch(text)
    if match is None:
        return None
    return clean(match["name"]).casefold(), match["unit"]


def _numbered(name: str) -> tuple[str, int]:
    match = _NUMBERED.fullmatch(name)
    return (match["name"], int(match["number"])) if match else (name, 0)


def _bad(text: str, rest: str) -> Fault:
    return Fault(CellError.VALUE, f"heading {quoted(text)}: {rest}")


def _unknown(text: str, name: str, names: Sequence[str], kind: str) -> Fault:
    sides = [known for known in names if known in (f"left {name}", f"right {name}", f"both {name}")]
    if sides:
        listed = ", ".join(f"'{side}'" for side in sides[:-1])
        return _bad(text, f"say which face: {listed} or '{sides[-1]}'")
    close = difflib.get_close_matches(name, names, 1, 0.6)
    if "(" in name and name.split("(")[0].strip() in names:
        return _bad(text, "write the unit in square brackets, as in 'thickness [mm]'")
    rest = f"did you mean '{close[0]}'?" if close else f"`ingle reference` lists the {kind} headings"
    return _bad(text, f"no {kind} has this name; {rest}")


@lru_cache(maxsize=512)
def read_headings(texts: tuple[str, ...]) -> Plan:
    """The plan of a row of input headings; never raises. Cached by content."""
    columns: list[Column] = []
    fault: Fault | None = None
    for index, text in enumerate(texts):
        column = read_input(text, index)
        if isinstance(column, Fault):
            fault = fault or column
        elif column is not None:
            columns.append(column)
    return Plan(len(texts), tuple(columns), fault, frozenset(index for index, text in enumerate(texts) if is_own(text)), texts)


def is_own(text: str) -> bool:
    """Whether a heading is blank or the user's own, so that its column is skipped."""
    name = clean(text).casefold()
    return not name or name.startswith(("#", "note"))


def read_input(text: str, index: int) -> Column | Fault | None:
    """One input heading; None where it is blank or the user's own."""
    if is_own(text):
        return None
    if len(text) > LONGEST_HEADING:
        return _bad(text, f"it is {len(text)} characters long; at most {LONGEST_HEADING} belong in a heading")
    parts = _split(text)
    if parts is None:
        return _bad(text, "the brackets do not pair; write one unit in square brackets, as in 'thickness [mm]'")
    name, unit_text = parts
    if name[:1] == "±":
        name = "± " + name[1:].strip()
    spread, _, rest = name.partition(" ")
    if spread in _SPREADS and rest:
        return _spread_column(text, index, rest, unit_text)
    base, number = _numbered(name)
    known = INPUT_NAMES.get(name) or INPUT_NAMES.get(base)
    number = 0 if name in INPUT_NAMES else number
    if known is None:
        if name in ANSWER_NAMES or base in ANSWER_NAMES or _JOINT_ANSWER.fullmatch(name):
            return _bad(text, "this is an answer; leave its column out of the headings and ask for it with INGLE.ASK")
        return _unknown(text, name, tuple(INPUT_NAMES), "input")
    item = known.item
    layered = item.where is Where.LAYER or item.where is Where.JOINT
    layered = layered or (item.where is Where.FACE_AND_LAYER and not known.side)
    if number and not layered:
        return _bad(text, f"'{base}' takes no number; write '{base}'")
    if name not in INPUT_NAMES and base != name and not number:
        return _bad(text, f"layers are counted from 1; write '{base} 1'" if layered else f"'{base}' takes no number; write '{base}'")
    try:
        unit = read_unit(unit_text, *item.kinds)
    except UnitError as error:
        return _bad(text, str(error))
    layer = number or (1 if item.where in (Where.LAYER, Where.JOINT) else 0)
    return Column(index, item, _slots(item, known.side, layer), layer, unit, clean(text), item.available, bool(number))


def _slots(item: Input, side: str, layer: int) -> tuple[str, ...]:
    if side == "both":
        return (f"left {item.name}", f"right {item.name}")
    if side:
        return (f"{side} {item.name}",)
    if item.where in (Where.FACE_AND_LAYER, Where.JOINT) or layer > 1:
        return (f"{item.name} {layer}" if layer else item.name,)
    return (item.name,)


def _spread_column(text: str, index: int, name: str, unit_text: str | None) -> Column | Fault:
    """`± NAME` and `sd NAME`: the same names; a difference where a temperature stands, or a percentage elsewhere."""
    inner = read_input(name if name in INPUT_NAMES and _unitless(name) else f"{name} [{_base_unit(name)}]", index)
    if not isinstance(inner, Column):
        return _bad(text, inner.sentence.split(": ", 1)[-1] if inner is not None else "no input's name follows")
    kinds = tuple(Kind.TEMPERATURE_DIFFERENCE if k is Kind.TEMPERATURE else k for k in inner.item.kinds)
    if Kind.TEXT in kinds:
        return _bad(text, "a text has no spread")
    if Kind.TEMPERATURE_DIFFERENCE not in kinds:
        kinds = (*kinds, Kind.PERCENT)
    try:
        unit = read_unit(unit_text, *kinds)
    except UnitError as error:
        return _bad(text, str(error))
    slots = tuple(f"± {slot}" for slot in inner.slots)
    return Column(index, inner.item, slots, inner.layer, unit, clean(text), False)


def _known(name: str) -> Input | None:
    known = INPUT_NAMES.get(name) or INPUT_NAMES.get(_numbered(name)[0])
    return known.item if known else None


def _base_unit(name: str) -> str:
    item = _known(name)
    return item.kinds[0].unit if item else "-"


def _unitless(name: str) -> bool:
    item = _known(name)
    return item is not None and not item.kinds[0].unit


@lru_cache(maxsize=512)
def read_answer(text: str) -> Asked | Fault:
    """One answer heading; never raises."""
    label = clean(text)
    if not label:
        return Fault(CellError.VALUE, "an answer heading is blank; name an answer such as 'peak [°C]'")
    if len(text) > LONGEST_HEADING:
        return _bad(text, f"it is {len(text)} characters long; at most {LONGEST_HEADING} belong in a heading")
    parts = _split(text)
    if parts is None:
        return _bad(text, "the brackets do not pair; write one unit in square brackets, as in 'peak [°C]'")
    name, unit_text = parts
    joint = _JOINT_ANSWER.fullmatch(name)
    if joint:
        side = SIDES[joint["side"]]
        known: tuple[Answer, str] | None = (next(a for a in ANSWERS if a.name == f"joint {side}"), side)
        base, number = name, int(joint["number"])
    else:
        base, number = _numbered(name)
        known = ANSWER_NAMES.get(name) or ANSWER_NAMES.get(base)
    if known is None:
        if name in INPUT_NAMES or base in INPUT_NAMES:
            return _bad(text, "this is an input; it cannot be asked as an answer")
        return _unknown(text, name, tuple(ANSWER_NAMES), "answer")
    item, side = known
    counted = item.where is Where.LAYER or joint is not None
    if number and not counted:
        return _bad(text, f"'{base}' takes no number; write '{base}'")
    if not number and (joint is not None or (name not in ANSWER_NAMES and base != name)):
        first = f"joint 1 {joint['side']}" if joint else f"{base} 1"
        return _bad(text, f"layers are counted from 1; write '{first}'" if counted else f"'{base}' takes no number; write '{base}'")
    try:
        unit = read_unit(unit_text, *item.kinds)
    except UnitError as error:
        return _bad(text, str(error))
    return Asked(item, side, number, unit, label)


def allowable_source() -> Asked:
    """The answer of INGLE.ALLOW: the allowable source in the unit of whichever source heading a row fills."""
    return Asked(_ALLOWABLE_SOURCE, "", 0, Unit(Kind.RATIO, 1.0), "allowable source")


_ALLOWABLE_SOURCE = Answer("allowable source", (Kind.RATIO,), "the allowable source", quantity="allowable source")
