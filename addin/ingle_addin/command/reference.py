"""`ingle reference`: every heading and function, from the tables that register them."""

from __future__ import annotations

from collections.abc import Sequence

from ingle_addin.functions import FUNCTIONS, Function
from ingle_addin.headings import ANSWERS, INPUTS, Answer, Input, Where

_NOT_YET = "not available yet"


def print_reference() -> int:
    """Print the three tables, folded to the terminal's width."""
    from rich.console import Console
    from rich.table import Table
    from rich.text import Text

    console = Console(highlight=False, soft_wrap=False)
    for title, head, rows in tables():
        table = Table(title=title, title_justify="left", box=None, pad_edge=False, header_style="bold")
        for column in head:
            table.add_column(column, overflow="fold")
        for row in rows:
            table.add_row(*map(Text, row))
        console.print(table)
        console.print()
    console.print(_NOTES, markup=False)
    return 0


_NOTES = (
    "n is a layer, counted from the left or from the inside; a name without it is layer 1. left is also called inner, right\n"
    "outer; both is the two of them. Arguments are parted by ; or , as the spreadsheet program does.\n"
    "An allowable of several sources of one kind is told by the first that is not 0; they scale together.\n\n"
    "Results are estimates of steady one-dimensional conduction. They do not replace local codes, type tests or the\n"
    "judgement of a licensed engineer; a part that can burn, overheat a cable or run away needs its own test."
)


def tables() -> list[tuple[str, tuple[str, ...], list[tuple[str, ...]]]]:
    """Title, column heads and rows of each table."""
    return [
        ("INPUT HEADINGS", ("heading", "unit", "meaning"), [_input(item) for item in INPUTS]),
        ("ANSWER HEADINGS", ("heading", "unit", "meaning"), [_answer(item) for item in ANSWERS]),
        ("FUNCTIONS", ("function", "returns"), [_function(item) for item in FUNCTIONS]),
    ]


def _input(item: Input) -> tuple[str, str, str]:
    meaning = item.meaning if item.available else f"{item.meaning} ({_NOT_YET})"
    return spelled(item.name, item.where), units(item), meaning


def _answer(item: Answer) -> tuple[str, str, str]:
    meaning = item.meaning if item.available else f"{item.meaning} ({_NOT_YET})"
    return asked(item), units(item), meaning


def asked(item: Answer) -> str:
    """An answer heading with the words and numbers that may stand with it."""
    if item.where is Where.JOINT:
        return f"joint n {item.name.split()[-1]}"
    return f"left|right {item.name}" if item.where is Where.FACE else spelled(item.name, item.where)


def spelled(name: str, where: Where) -> str:
    """A heading with the words and numbers that may stand with it."""
    return {
        Where.FACE: f"left|right|both {name}",
        Where.FACE_AND_SIDE: f"left|right|both {name}",
        Where.FACE_AND_LAYER: f"{name}, {name} n, left|right|both {name}",
        Where.LAYER: f"{name}, {name} n",
        Where.JOINT: f"{name} n",
    }.get(where, name)


def units(item: Input | Answer) -> str:
    """Example units of a heading."""
    return " or ".join(f"[{kind.example}]" for kind in item.kinds if kind.example)


def _function(item: Function) -> tuple[str, str]:
    returns = item.returns if item.available else f"{item.returns} ({_NOT_YET})"
    return signature(item), returns


def signature(item: Function) -> str:
    """The function as it is typed."""
    arguments: Sequence[str] = [a.name + ("…" if a.repeats else "") for a in item.arguments]
    return f"{item.name}({'; '.join(arguments)})"
