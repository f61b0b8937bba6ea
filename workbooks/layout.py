"""Colours, formats and columns of the workbook's case table."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import xlsxwriter
from candidates import CANDIDATES, WORKSHOP
from xlsxwriter.utility import xl_col_to_name

INVENTED = f"{WORKSHOP}: invented for demonstration. No such workshop, product or limit exists."
CAUTIONS = (
    "Estimates of steady one-dimensional conduction with even heat generation. They do not replace local codes, type tests or "
    "licensed practice."
)
NOT_INSTALLED = "#NAME? means that this program has no Ingle functions: `ingle fill` computes the file."
INK, PALE, LINE = "#1F2A37", "#F3F5F8", "#C9D1DB"
TYPED, ANSWER = "#FFF7DC", "#EAF2FB"
DARK, DARK_ANSWER = "#33475B", "#1F5A8C"
OK, CAUTION, OVER, NONE = ("#DDF2E0", "#1B5E2A"), ("#FFE9B8", "#7A4B00"), ("#F8D4D2", "#8E1B16"), ("#E3E5E8", "#4A5057")


@dataclass(frozen=True)
class Column:
    """A column of the case table: its heading, how wide and in which number format, and its formula if every row has one."""

    heading: str
    width: float = 9.5
    number: str = "General"
    formula: str = ""  # {name} stands for that column's cell in the row, {head} for this column's heading

    @property
    def name(self) -> str:
        """The heading without its unit."""
        return self.heading.split("[")[0].strip()


_LOOKED_UP = "INDEX({what},MATCH({{# material}},Materials,0))"
_RHO = _LOOKED_UP.format(what="Resistivity_20") + "*(1+" + _LOOKED_UP.format(what="Resistivity_slope") + "*({# resistivity at}-20))"
_SECTION = (
    '=IF({# current}="","",IF({shape}="wall",IF(AND(ISNUMBER({width}),ISNUMBER({thickness})),{width}*{thickness},""),'
    'IF(ISNUMBER({outer diameter}),PI()/4*({outer diameter}^2-MAX({inner diameter},0)^2),"")))'
)
_AREA = '=IF(AND({shape}="wall",ISNUMBER({width}),ISNUMBER({length})),{width}*{length}/1000000,"")'

BANDS: tuple[tuple[str, tuple[Column, ...]], ...] = (
    ("Our own notes: headings with # are skipped by Ingle", (
        Column("# no.", 6.5),
        Column("# candidate", 47),
        Column("# material", 14.5),
        Column("# current [A]", 9.5, "#,##0"),
        Column("# section [mm²]", 9.5, "#,##0.0", _SECTION),
        Column("# resistivity at [°C]", 10.5, "0"),
        Column("# resistivity [nΩ·m]", 10.5, "0.00", '=IF({# current}="","",' + _RHO + ")"),
    )),
    ("Body", (
        Column("shape", 10),
        Column("width [mm]", 8, "0.0"),
        Column("length [mm]", 8, "#,##0"),
        Column("area [m²]", 8, "0.000", _AREA),
        Column("thickness [mm]", 10, "0.0"),
        Column("inner diameter [mm]", 10, "0.0"),
        Column("outer diameter [mm]", 10, "0.0"),
        Column("conductivity [W/(m·K)]", 12, "0.0", "=IFERROR(" + _LOOKED_UP.format(what="Conductivity") + ',"")'),
    )),
    ("Heat made inside: one of these", (
        # I²R per volume is resistivity × (current/section)²; nΩ·m × (A/mm²)² is kW/m³.
        Column("generation [kW/m³]", 11, "#,##0.00",
               '=IF(ISNUMBER({# section}),{# resistivity}*({# current}/{# section})^2,"")'),
        Column("specific generation [W/kg]", 11, "0.0"),
        Column("density [kg/m³]", 9, "#,##0", "=IFERROR(" + _LOOKED_UP.format(what="Density") + ',"")'),
        Column("line power [W/m]", 8.5, "0.0"),
        Column("power [W]", 8, "0.0"),
    )),
    ("Both faces", (
        Column("both film [W/(m²·K)]", 11, "#,##0.0"),
        Column("both fluid [°C]", 8.5, "0.0"),
    )),
    ("Left (inner) face", (
        Column("left film [W/(m²·K)]", 11, "#,##0.0"),
        Column("left fluid [°C]", 8.5, "0.0"),
        Column("left held [°C]", 8.5, "0.0"),
        Column("left flux in [W/m²]", 8.5, "#,##0"),
    )),
    ("Right (outer) face", (
        Column("right film [W/(m²·K)]", 11, "#,##0.0"),
        Column("right fluid [°C]", 8.5, "0.0"),
        Column("right flux in [W/m²]", 8.5, "#,##0"),
    )),
    ("Limit", (Column("limit [°C]", 9, "0"),)),
)  # fmt: skip

_ASK = "=INGLE.ASK({head},{headings},{values})"
_LIMITED = '=IF({limit}="","",{call})'


def _if_limited(call: str) -> str:
    return _LIMITED.replace("{call}", call.removeprefix("="))


ANSWERS: tuple[Column, ...] = (
    Column("peak [°C]", 9, "0.0", "=INGLE.PEAK({headings},{values})"),
    Column("peak place [mm]", 9, "0.00", _ASK),
    Column("left face [°C]", 9, "0.0",
           '=IF(AND({shape}<>"wall",{inner diameter}=""),"",INGLE.FACE("left",{headings},{values}))'),
    Column("right face [°C]", 9, "0.0", '=INGLE.FACE("right",{headings},{values})'),
    Column("heat made [W]", 9, "#,##0.0", _ASK),
    Column("right heat out [W]", 9, "#,##0.0", _ASK),
    Column("left share [%]", 8, "0.0", _ASK),
    Column("# allowable source, in its own unit", 12, "#,##0.00", _if_limited("INGLE.ALLOW({headings},{values})")),
    Column("# allowable current [A]", 10.5, "#,##0",
           # The limit is reached at this current, so the resistivity there is the limit's, the highest anywhere in the body.
           '=IF(OR({# current}="",{limit}=""),"",{# section}*SQRT({# allowable source, in its own unit}/('
           + _RHO.replace("{# resistivity at}", "{limit}") + ")))"),
    Column("headroom [K]", 11.5, "0.0", _if_limited(_ASK)),
    Column("utilisation [%]", 10.5, "0.0", _if_limited(_ASK)),
    Column("verdict", 11, "General", _ASK),
    Column("why", 154, "General", "=INGLE.WHY({headings},{values})"),
)  # fmt: skip

INPUTS: tuple[Column, ...] = tuple(column for _, columns in BANDS for column in columns)
GAP = len(INPUTS)  # an empty narrow column sets the answers apart
HEADING_ROW, FIRST_ROW = 7, 8  # counted from 0
LAST_ROW = FIRST_ROW + len(CANDIDATES) - 1
PLACES = {
    **{column.name: at for at, column in enumerate(INPUTS)},
    **{column.name: at for at, column in enumerate(ANSWERS, GAP + 1)},
}


def letter(name: str) -> str:
    """The letters of a column of the case table."""
    return xl_col_to_name(PLACES[name])


def row_formula(column: Column, row: int) -> str:
    """A column's formula for one row, counted from 0."""
    last = xl_col_to_name(len(INPUTS) - 1)
    known = {name: f"${xl_col_to_name(at)}{row + 1}" for name, at in PLACES.items()}
    known["head"] = f"{letter(column.name)}${HEADING_ROW + 1}"
    known["headings"] = f"$A${HEADING_ROW + 1}:${last}${HEADING_ROW + 1}"
    known["values"] = f"$A{row + 1}:${last}{row + 1}"
    text = column.formula
    for name, cell in known.items():
        text = text.replace("{" + name + "}", cell)
    return text


class Formats:
    """The workbook's formats, each made once."""

    def __init__(self, book: xlsxwriter.Workbook) -> None:
        self._book = book
        self._made: dict[tuple[tuple[str, Any], ...], Any] = {}

    def __call__(self, **properties: Any) -> Any:
        """A format of these properties on top of the common ones."""
        full = {"font_name": "Calibri", "font_size": 10, "font_color": INK, "valign": "vcenter", **properties}
        key = tuple(sorted(full.items()))
        if key not in self._made:
            self._made[key] = self._book.add_format(full)
        return self._made[key]

    @property
    def title(self) -> Any:
        """A sheet's title."""
        return self(bold=True, font_size=16)

    @property
    def line(self) -> Any:
        """The lines below a title."""
        return self(font_color="#4A5868")

    def head(self, colour: str = DARK, **more: Any) -> Any:
        """A heading cell."""
        look = {"bold": True, "font_color": "#FFFFFF", "bg_color": colour, "border": 1, "border_color": "#FFFFFF"}
        place = {"text_wrap": True, "valign": "top", "align": "left", "indent": 1}
        return self(**{**look, **place, **more})

    def cell(self, kind: str, number: str = "General", **more: Any) -> Any:
        """A cell of a table: ``typed`` is coloured and unlocked, ``answer`` tinted, ``plain`` neither."""
        look: dict[str, Any] = {"border": 1, "border_color": LINE, "num_format": number}
        if number == "General":
            look["indent"] = 1  # words stand away from the figures of the column before
        if kind == "typed":
            look |= {"bg_color": TYPED, "font_color": "#1F4E9E", "locked": False}
        elif kind == "answer":
            look |= {"bg_color": ANSWER}
        return self(**look, **more)


def write_top(sheet: Any, formats: Formats, title: str, *lines: str, paper: int = 9, pages: int = 1) -> None:
    """Title, what the workbook is, its cautions and further lines; and the page set-up (paper 8 is A3, 9 is A4)."""
    sheet.hide_gridlines(2)
    sheet.write_string(0, 0, title, formats.title)
    sheet.set_row(0, 26)
    for row, text in enumerate((INVENTED, CAUTIONS, *lines), 1):
        sheet.write_string(row, 0, text, formats.line)
    sheet.set_landscape()
    sheet.set_paper(paper)
    sheet.fit_to_pages(pages, 0)
    sheet.set_margins(0.4, 0.4, 0.5, 0.6)
    sheet.set_footer(f"&L&8{WORKSHOP} (invented)&C&8&A&R&8Page &P of &N")


def case_column(name: str) -> str:
    """A column of the case table, for a formula on another sheet."""
    return f"Cases!${letter(name)}${FIRST_ROW + 1}:${letter(name)}${LAST_ROW + 1}"
