"""The one table of worksheet functions; registrations, headless evaluation, the reference and tests derive from it."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Argument:
    """One argument; one that ``repeats`` may be given many times, and is the last."""

    name: str
    help: str
    repeats: bool = False


@dataclass(frozen=True)
class Function:
    """A worksheet function: its dotted name, what it returns, and whether its physics is there."""

    name: str
    returns: str
    arguments: tuple[Argument, ...]
    available: bool = True

    @property
    def underscored(self) -> str:
        """The name where a dot cannot stand."""
        return self.name.replace(".", "_")


_HEADINGS = Argument("headings", "range of headings 'name [unit]': one row, one column, or names with units in two")
_VALUES = Argument("values", "ranges or values, joined left to right to one column a heading; a row is a case", repeats=True)
_ROW = (_HEADINGS, _VALUES)

FUNCTIONS: tuple[Function, ...] = (
    Function("INGLE.PEAK", "highest temperature in the body, °C", _ROW),
    Function(
        "INGLE.FACE",
        "temperature of a face, °C",
        (Argument("side", "left or inner, right or outer"), *_ROW),
    ),
    Function("INGLE.ALLOW", "source at which the first limit is reached, in the unit of the row's source heading", _ROW),
    Function(
        "INGLE.ASK",
        "one column an answer heading",
        (Argument("answers", "answer headings 'name [unit]': a range, or one text split at ;"), *_ROW),
    ),
    Function(
        "INGLE.PROFILE",
        "one case's profile: rows of place [mm] and temperature [°C]",
        (Argument("points", "how many places, 2 or more, evenly spread"), *_ROW),
    ),
    Function(
        "INGLE.SEEK",
        "value of an input at which the first limit is reached",
        (Argument("input", "input heading whose value is sought"), *_ROW),
        available=False,
    ),
    Function("INGLE.WHY", "ok, or one sentence: missing, wrong, doubtful, or why there is no answer", _ROW),
    Function(
        "INGLE.FILM",
        "film coefficient by a published law, W/(m²·K)",
        (
            Argument("law", "name of the film law"),
            Argument("size", "mm"),
            Argument("speed", "m/s"),
            Argument("face", "temperature of the face, °C"),
            Argument("fluid", "temperature of the fluid, °C"),
            Argument("kind", "air or water"),
        ),
        available=False,
    ),
    Function(
        "INGLE.BLEND",
        "effective conductivity of two constituents",
        (
            Argument("rule", "name of the rule"),
            Argument("k1", "conductivity of the continuous constituent"),
            Argument("k2", "conductivity of the enclosed constituent"),
            Argument("share", "share of the enclosed constituent by volume"),
        ),
        available=False,
    ),
    Function(
        "INGLE.POINTS",
        "a text table in temperature",
        (Argument("temperatures", "range of temperatures, °C, rising"), Argument("values", "range of values beside them")),
    ),
    Function(
        "INGLE.MATERIAL",
        "a bundled property",
        (
            Argument("name", "name of the material"),
            Argument("property", "name of the property"),
            Argument("temperature", "°C"),
        ),
        available=False,
    ),
    Function("INGLE.ABOUT", "version of Ingle", ()),
)

NAMES = frozenset(function.name for function in FUNCTIONS)
