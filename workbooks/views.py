"""The sheets that look at the case table: one case's profile, and the summary with its chart."""

from __future__ import annotations

from typing import Any

from candidates import CANDIDATES
from layout import (
    DARK_ANSWER,
    FIRST_ROW,
    HEADING_ROW,
    INPUTS,
    NOT_INSTALLED,
    OVER,
    PALE,
    Formats,
    case_column,
    letter,
    write_top,
)

PROFILE_POINTS = 21
_GRID = {"visible": True, "line": {"color": "#DDE2E8", "width": 0.75}}

# -- Profile ----------------------------------------------------------------------------------------------------------


def write_profile(book: Any, sheet: Any, formats: Formats) -> None:
    how = "Choose a case in the yellow cell: its row is fetched from the sheet Cases and drawn."
    write_top(sheet, formats, "Profile of one case", how, NOT_INSTALLED)
    for column, width in enumerate((30, 14, 3, 19, 19, 3)):
        sheet.set_column(column, column, width)
    sheet.write_string(6, 0, "case", formats.cell("plain", bold=True))
    sheet.write_string(6, 1, "C01", formats.cell("typed", bold=True))
    sheet.data_validation(6, 1, 6, 1, {"validate": "list", "source": "=" + case_column("# no.")})
    sheet.write_string(7, 0, "row in the table", formats.cell("plain"))
    sheet.write_formula(7, 1, f"=MATCH(B7,{case_column('# no.')},0)", formats.cell("plain", "0"))
    sheet.write_formula(6, 3, f"=INDEX({case_column('# candidate')},B8)", formats(bold=True, font_size=12))
    top = 9
    sheet.write_string(top, 0, "heading", formats.head())
    sheet.write_string(top, 1, "value", formats.head())
    inputs = [column for column in INPUTS if not column.name.startswith("#")]
    for row, column in enumerate(inputs, top + 1):
        head = f"=Cases!{letter(column.name)}${HEADING_ROW + 1}"
        sheet.write_formula(row, 0, head, formats.cell("plain", bg_color=PALE))
        # An empty cell fetched by INDEX would be 0, and 0 is a value: it has to stay empty.
        fetched = f"INDEX({case_column(column.name)},$B$8)"
        sheet.write_formula(row, 1, f'=IF({fetched}="","",{fetched})', formats.cell("plain", column.number, align="right"))
    last = top + len(inputs)
    headings, values = f"$A${top + 2}:$A${last + 1}", f"$B${top + 2}:$B${last + 1}"
    sheet.write_string(top, 3, "place [mm]", formats.head(DARK_ANSWER))
    sheet.write_string(top, 4, "temperature [°C]", formats.head(DARK_ANSWER))
    end = top + PROFILE_POINTS
    number = formats.cell("answer", "0.00")
    sheet.write_array_formula(top + 1, 3, end, 4, f"{{=INGLE.PROFILE({PROFILE_POINTS},{headings},{values})}}", number)
    for row in range(top + 1, end + 1):  # the array's other cells take the format too
        for column in (3, 4):
            if (row, column) != (top + 1, 3):
                sheet.write_number(row, column, 0, number)
    asked = ("peak [°C]", "peak place [mm]", "left share [%]", "verdict")
    for row, text in enumerate(asked, end + 2):
        sheet.write_string(row, 3, text, formats.head(DARK_ANSWER))
    first = end + 2
    look = formats.cell("answer", "0.00", align="right")
    answers = f"$D${first + 1}:$D${first + len(asked)}"
    sheet.write_array_formula(first, 4, first + len(asked) - 1, 4, f"{{=INGLE.ASK({answers},{headings},{values})}}", look)
    for row in range(first + 1, first + len(asked)):
        sheet.write_number(row, 4, 0, look)
    _profile_chart(book, sheet, top, end)
    sheet.print_area(0, 0, max(last, first + len(asked)), 15)


def _profile_chart(book: Any, sheet: Any, top: int, end: int) -> None:
    chart = book.add_chart({"type": "scatter", "subtype": "smooth_with_markers"})
    chart.add_series({
        "name": "temperature", "categories": ["Profile", top + 1, 3, end, 3], "values": ["Profile", top + 1, 4, end, 4],
        "line": {"color": "#C2541B", "width": 2.25},
        "marker": {"type": "circle", "size": 5, "fill": {"color": "#C2541B"}, "border": {"color": "#FFFFFF"}},
    })  # fmt: skip
    chart.set_title({"name": "Temperature through the body", "name_font": {"size": 13, "bold": True}, "overlay": False})
    chart.set_x_axis({"name": "place from the left face, or radius [mm]", "num_format": "0.0", "major_gridlines": _GRID})
    chart.set_y_axis({"name": "temperature [°C]", "num_format": "0.0", "major_gridlines": _GRID})
    chart.set_legend({"none": True})
    chart.set_size({"width": 560, "height": 420})
    sheet.insert_chart(top, 6, chart, {"object_position": 2})


# -- Summary ----------------------------------------------------------------------------------------------------------

_DRAWN = 48  # the row, counted from 0, of the headings over what the chart draws


def _drawn(column: str) -> str:
    return f"${column}${_DRAWN + 2}:${column}${_DRAWN + 1 + len(CANDIDATES)}"


def write_summary(book: Any, sheet: Any, formats: Formats) -> None:
    """Counts, the hottest candidate, two checks a reader can follow, and the peaks against their limits."""
    how = "Rows without an answer are counted, never hidden; they stand empty in the table at the bottom."
    write_top(sheet, formats, "Summary", how)
    for column, width in enumerate((42, 13, 13, 13, 13, 62)):
        sheet.set_column(column, column, width)
    sheet.write_string(5, 0, "question", formats.head())
    sheet.write_string(5, 1, "answer", formats.head())
    sheet.merge_range(5, 2, 5, 5, "which, or how", formats.head())
    for row, (question, answer, number, which) in enumerate(_facts(), 6):
        sheet.write_string(row, 0, question, formats.cell("plain"))
        sheet.write_formula(row, 1, answer, formats.cell("plain", number, bold=True, align="right"))
        sheet.merge_range(row, 2, row, 5, "", formats.cell("plain"))
        if which:
            write = sheet.write_formula if which.startswith("=") else sheet.write_string
            write(row, 2, which, formats.cell("plain"))
    _drawn_table(sheet, formats)
    _bars(book, sheet)
    sheet.print_area(0, 0, _DRAWN + len(CANDIDATES), 5)
    sheet.set_h_pagebreaks([_DRAWN - 1])


def _facts() -> tuple[tuple[str, str, str, str], ...]:
    verdicts, peaks, rooms = case_column("verdict"), _drawn("B"), _drawn("F")
    name = f"INDEX({case_column('# candidate')}," + "{match})"
    hottest, nearest = f"MATCH(MAX({peaks}),{peaks},0)", f"MATCH(MIN({rooms}),{rooms},0)"
    b01, half = (f'INDEX({case_column("peak")},MATCH("{no}",{case_column("# no.")},0))' for no in ("B01", "B02"))
    row = FIRST_ROW + 1
    q, t, k, h, fluid = (
        f"Cases!{letter(column)}{row}" for column in ("generation", "thickness", "conductivity", "both film", "both fluid")
    )
    counted = tuple(
        (words, f'=COUNTIF({verdicts},"{verdict}")', "0", which)
        for words, verdict, which in (
            ("within their limit", "ok", ""),
            ("with a caution", "caution", ""),
            ("over their limit", "over limit", ""),
            ("with an answer but no limit", "no limit", ""),
            ("without an answer", "no answer", "the reason stands beside each in the column 'why' of the case table"),
        )
    )
    return (
        ("candidates", f"=COUNTA({case_column('# no.')})", "0", ""),
        *counted,
        ("hottest peak [°C]", f"=MAX({peaks})", "0.0", "=" + name.format(match=hottest)),
        ("mean peak of the rows with an answer [°C]", f"=ROUND(AVERAGE({peaks}),1)", "0.0", "rounded to 0.1 °C"),
        ("least headroom within a limit [K]", f"=MIN({rooms})", "0.0", "=" + name.format(match=nearest)),
        ("heat made by the rows within their limit [W]", f'=SUMIF({verdicts},"ok",{case_column("heat made")})', "#,##0",
         "per metre of bars and conductors, whole coils, sensors and plates"),
        ("B01 whole and B02 as its half: peaks differ by [K]", f"=ABS({b01}-{half})", "0.000000",
         f'=IF(ABS({b01}-{half})<0.000001,"they agree","they differ: see both rows")'),
        ("B01 by hand: fluid + q·t/2h + q·t²/8k [°C]",
         f"={fluid}+{q}*1000*{t}/1000/2/{h}+{q}*1000*({t}/1000)^2/8/{k}", "0.000",
         f'="Ingle: "&ROUND({b01},3)&" °C"'),
    )  # fmt: skip


def _drawn_table(sheet: Any, formats: Formats) -> None:
    sheet.write_string(_DRAWN - 1, 0, "What the chart draws", formats(bold=True, font_size=12))
    heads = ("case", "peak [°C]", "limit [°C]", "within limit [°C]", "over limit [°C]", "headroom within the limit [K]")
    for column, text in enumerate(heads):
        sheet.write_string(_DRAWN, column, text, formats.head())
    sheet.set_row(_DRAWN, 30)
    number, quiet = formats.cell("plain", "0.0"), formats.cell("plain", "0.0", align="left")
    for at in range(len(CANDIDATES)):
        row = _DRAWN + 1 + at
        case, here = FIRST_ROW + 1 + at, row + 1
        peak, limit, room = (f"Cases!{letter(name)}{case}" for name in ("peak", "limit", "headroom"))
        sheet.write_formula(row, 0, f'=Cases!A{case}&"  "&Cases!B{case}', formats.cell("plain"))
        sheet.write_formula(row, 1, f'=IFERROR({peak},"")', number)
        sheet.write_formula(row, 2, f'=IF({limit}="",NA(),{limit})', number)
        sheet.write_formula(row, 3, f'=IF(N(E{here})>0,"",B{here})', number)
        sheet.write_formula(row, 4, f'=IF(AND(ISNUMBER(B{here}),ISNUMBER(C{here})),IF(B{here}>C{here},B{here},""),"")', number)
        sheet.write_formula(row, 5, f'=IF(Cases!{letter("verdict")}{case}="ok",{room},"")', quiet)
    first, last = _DRAWN + 1, _DRAWN + len(CANDIDATES)
    sheet.conditional_format(first, 2, last, 2, {
        "type": "formula", "criteria": f"=ISNA($C{first + 1})", "format": formats(font_color="#A9B1BA"),
    })  # fmt: skip


def _bars(book: Any, sheet: Any) -> None:
    first, last = _DRAWN + 1, _DRAWN + len(CANDIDATES)
    cases = ["Cases", FIRST_ROW, 0, FIRST_ROW + len(CANDIDATES) - 1, 0]
    chart = book.add_chart({"type": "column"})
    for name, column, colour in (("peak, within limit or without one", 3, "#3B78B5"), ("peak, over limit", 4, OVER[1])):
        chart.add_series({
            "name": name, "categories": cases, "values": ["Summary", first, column, last, column],
            "fill": {"color": colour}, "border": {"none": True}, "gap": 45, "overlap": 100,
        })  # fmt: skip
    line = book.add_chart({"type": "line"})
    line.add_series({
        "name": "limit", "categories": cases, "values": ["Summary", first, 2, last, 2],
        "line": {"color": "#222222", "width": 1.75, "dash_type": "dash"},
    })  # fmt: skip
    chart.combine(line)
    chart.set_title({"name": "Peak of each candidate against its limit", "name_font": {"size": 13, "bold": True}})
    chart.set_y_axis({"name": "temperature [°C]", "num_format": "0", "min": 0, "major_gridlines": _GRID})
    chart.set_x_axis({"num_font": {"size": 9, "rotation": -45}})
    chart.set_legend({"position": "bottom"})
    chart.set_size({"width": 1060, "height": 440})
    sheet.insert_chart(21, 0, chart, {"object_position": 2, "y_offset": 8})
