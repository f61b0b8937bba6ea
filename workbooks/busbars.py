"""The switchgear workbook: its four sheets."""

from __future__ import annotations

import datetime
from pathlib import Path
from typing import Any

import xlsxwriter
from candidates import ASSUMPTIONS, CANDIDATES, MATERIALS
from layout import (
    ANSWERS,
    BANDS,
    CAUTION,
    DARK,
    DARK_ANSWER,
    FIRST_ROW,
    GAP,
    HEADING_ROW,
    INPUTS,
    INVENTED,
    LAST_ROW,
    NONE,
    NOT_INSTALLED,
    OK,
    OVER,
    PLACES,
    Formats,
    letter,
    row_formula,
    write_top,
)
from views import write_profile, write_summary

SHAPES = ("wall", "cylinder", "sphere")


def write(path: Path) -> None:
    """Write the workbook, its answers not yet computed."""
    book = xlsxwriter.Workbook(str(path))
    # A fixed date, so that the same build gives the same bytes.
    book.set_properties({"title": "Busbar candidates", "subject": INVENTED, "created": datetime.datetime(2026, 1, 1)})
    book.set_calc_mode("auto")
    book.set_size(24_000, 14_000)
    formats = Formats(book)
    cases, profile, summary, assumptions = (book.add_worksheet(name) for name in ("Cases", "Profile", "Summary", "Assumptions"))
    _assumptions(book, assumptions, formats)
    _cases(cases, formats)
    write_profile(book, profile, formats)
    write_summary(book, summary, formats)
    cases.activate()
    book.close()


# -- Assumptions ------------------------------------------------------------------------------------------------------


def _assumptions(book: Any, sheet: Any, formats: Formats) -> None:
    write_top(sheet, formats, "Assumptions", "The case table refers to these cells by name: change one here and every row follows.")
    for column, width in enumerate((20, 40, 13, 13, 17, 17, 40)):
        sheet.set_column(column, column, width)
    top = 5
    for column, text in enumerate(("name", "meaning", "value", "unit")):
        sheet.write_string(top, column, text, formats.head())
    sheet.merge_range(top, 4, top, 6, "note", formats.head())
    for row, (name, meaning, value, unit, note) in enumerate(ASSUMPTIONS, top + 1):
        sheet.write_string(row, 0, name, formats.cell("plain"))
        sheet.write_string(row, 1, meaning, formats.cell("plain"))
        sheet.write_number(row, 2, value, formats.cell("typed", "#,##0.0"))
        sheet.write_string(row, 3, unit, formats.cell("plain"))
        sheet.merge_range(row, 4, row, 6, note, formats.cell("plain"))
        book.define_name(name, f"=Assumptions!$C${row + 1}")
    top += len(ASSUMPTIONS) + 3
    heads = ("material", "note", "conductivity [W/(m·K)]", "density [kg/m³]", "resistivity at 20 °C [nΩ·m]", "its slope [1/K]")
    order = (0, 5, 1, 4, 2, 3)
    for column, text in enumerate(heads):
        sheet.write_string(top, column, text, formats.head())
    sheet.set_row(top, 30)
    numbers = ("", "", "0.0", "#,##0", "0.00", "0.00000")
    for row, material in enumerate(MATERIALS, top + 1):
        for column, part in enumerate(order):
            value = material[part]
            kind = "typed" if column > 1 else "plain"
            cell = formats.cell(kind, numbers[column] or "General")
            sheet.write_blank(row, column, None, cell) if value is None else sheet.write(row, column, value, cell)
    first, last = top + 2, top + 1 + len(MATERIALS)
    for name, column in zip(("Materials", "Conductivity", "Density", "Resistivity_20", "Resistivity_slope"), "ACDEF", strict=True):
        book.define_name(name, f"=Assumptions!${column}${first}:${column}${last}")
    sheet.write_string(
        last + 1, 0, "Resistivity rises with temperature: ρ = ρ20 × [1 + slope × (T − 20 °C)], at the temperature each row states. "
        "State one near the row's peak.", formats.line,
    )  # fmt: skip


# -- Cases ------------------------------------------------------------------------------------------------------------


def _cases(sheet: Any, formats: Formats) -> None:
    how = (
        "Yellow cells with blue figures are typed; all others are formulas. One row is one case. A cell left empty means that the "
        "row does not use that heading."
    )
    write_top(sheet, formats, "Busbar candidates: how hot, and how much current is allowed", how, NOT_INSTALLED, paper=8, pages=2)
    _headings(sheet, formats)
    for row, (number, candidate, cells) in enumerate(CANDIDATES, FIRST_ROW):
        _case(sheet, formats, row, {"# no.": number, "# candidate": candidate, **cells})
    sheet.freeze_panes(FIRST_ROW, 2)
    end = PLACES["why"]
    sheet.autofilter(HEADING_ROW, 0, LAST_ROW, end)
    sheet.data_validation(FIRST_ROW, PLACES["shape"], LAST_ROW, PLACES["shape"], {
        "validate": "list", "source": list(SHAPES), "error_title": "Shape", "error_message": "Write wall, cylinder or sphere.",
    })  # fmt: skip
    sheet.data_validation(FIRST_ROW, PLACES["# material"], LAST_ROW, PLACES["# material"], {
        "validate": "list", "source": "=Materials", "error_title": "Material", "error_message": "Choose from the sheet Assumptions.",
    })  # fmt: skip
    _colours(sheet, formats)
    sheet.repeat_rows(HEADING_ROW - 1, HEADING_ROW)
    sheet.repeat_columns(0, 1)
    sheet.set_v_pagebreaks([GAP + 1])
    sheet.print_area(0, 0, LAST_ROW, end)
    sheet.set_zoom(90)


def _headings(sheet: Any, formats: Formats) -> None:
    band_row = HEADING_ROW - 1
    at = 0
    for index, (band, columns) in enumerate((*BANDS, ("", ()), ("Answers", ANSWERS))):
        colour = DARK_ANSWER if band == "Answers" else (DARK, "#4A6178")[index % 2]
        for column in columns:
            sheet.set_column(at, at, column.width)
            indent = 1 if column.number == "General" else 0
            sheet.write_string(HEADING_ROW, at, column.heading, formats.head(colour, indent=indent))
            sheet.write_string(band_row, at, band if column is columns[0] else "", formats.head(colour, text_wrap=False, border=0))
            at += 1
        if not columns:
            sheet.set_column(at, at, 2.5)
            at += 1
    sheet.set_row(HEADING_ROW, 58)


def _case(sheet: Any, formats: Formats, row: int, cells: dict[str, Any]) -> None:
    unknown = set(cells) - set(PLACES)
    if unknown:
        raise ValueError(f"no column of the case table is called {', '.join(sorted(unknown))}")
    sheet.set_row(row, 16.5)
    for at, column in enumerate(INPUTS):
        value = cells.get(column.name)
        if value is None and column.formula:
            sheet.write_formula(row, at, row_formula(column, row), formats.cell("plain", column.number))
        elif isinstance(value, str) and value.startswith("="):
            sheet.write_formula(row, at, value, formats.cell("plain", column.number))
        else:
            look = formats.cell("typed", column.number)
            sheet.write_blank(row, at, None, look) if value is None else sheet.write(row, at, value, look)
    for at, column in enumerate(ANSWERS, GAP + 1):
        look = {"bold": True} if column.name in ("peak", "verdict") else {}
        sheet.write_formula(row, at, row_formula(column, row), formats.cell("answer", column.number, **look))


def _colours(sheet: Any, formats: Formats) -> None:
    first = FIRST_ROW + 1
    peak, limit = f"${letter('peak')}{first}", f"${letter('limit')}{first}"
    place = PLACES["peak"]
    sheet.conditional_format(FIRST_ROW, place, LAST_ROW, place, {
        "type": "formula", "criteria": f"=AND(ISNUMBER({peak}),ISNUMBER({limit}),{peak}>{limit})",
        "format": formats(bg_color=OVER[0], font_color=OVER[1]),
    })  # fmt: skip
    verdict = f"${letter('verdict')}{first}"
    sheet.conditional_format(FIRST_ROW, GAP + 1, LAST_ROW, PLACES["why"], {
        "type": "formula", "criteria": f'={verdict}="no answer"', "format": formats(bg_color=NONE[0], font_color=NONE[1]),
    })  # fmt: skip
    place = PLACES["verdict"]
    for word, (back, ink) in (("ok", OK), ("caution", CAUTION), ("over limit", OVER), ("runaway", OVER), ("no answer", NONE)):
        sheet.conditional_format(FIRST_ROW, place, LAST_ROW, place, {
            "type": "cell", "criteria": "==", "value": f'"{word}"', "format": formats(bg_color=back, font_color=ink),
        })  # fmt: skip
