"""The worksheet functions in a real Calc: what they answer, which errors cells see, how each kind of argument arrives."""

from __future__ import annotations

from collections.abc import Iterator

import pytest
from calc_office import CellErrorText, Office
from ingle_addin.about import about
from ingle_addin.batch import solve_calls
from ingle_addin.calc.registration import ONE_BY_ONE, arguments
from ingle_addin.functions import FUNCTIONS

HEADINGS = ["shape", "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/cm³]", "both film [W/(m²·K)]", "both fluid [°C]",
            "limit [°C]"]  # fmt: skip
ROW = ["wall", 10.0, 390.0, 0.12, 12.0, 35.0, 105.0]
SHEET = "Sheet1"
Sheet = tuple[Office, int]


@pytest.fixture
def sheet(calc: Office) -> Iterator[Sheet]:
    """A new document: headings in A1:G1, a good row 2, a row 3 without conductivity, a row 4 with a word there, 5 a runaway."""
    number = calc.open("new")
    rows = [HEADINGS, ROW, [*ROW[:2], "", *ROW[3:]], [*ROW[:2], "copper", *ROW[3:]], [*ROW[:2], -1.0, *ROW[3:]], [""] * 7]
    calc.fill(number, SHEET, "A1:G6", rows)
    yield calc, number
    calc.close(number)


def shown(sheet: Sheet, *formulas: str) -> list[object]:
    """What formulas in column K show."""
    calc, number = sheet
    at = f"K1:K{len(formulas)}"
    calc.fill(number, SHEET, at, [[formula] for formula in formulas])
    return [row[0] for row in calc.values(number, SHEET, at)]


def outside(name: str, *arguments: object) -> object:
    """The same call without Calc."""
    (outcome,) = solve_calls(name, [tuple(((a,),) if isinstance(a, str) else a for a in arguments)])
    return outcome.grid[0][0]


def test_each_function_answers_as_it_does_outside(sheet: Sheet) -> None:
    found = shown(
        sheet,
        "=INGLE.PEAK($A$1:$G$1;A2:G2)",
        '=INGLE.FACE("left";$A$1:$G$1;A2:G2)',
        "=INGLE.ALLOW($A$1:$G$1;A2:G2)",
        '=INGLE.ASK("peak [°F]";$A$1:$G$1;A2:G2)',
        "=INGLE.WHY($A$1:$G$1;A2:G2)",
        "=INGLE.PROFILE(3;$A$1:$G$1;A2:G2)",
        "=INGLE.POINTS(B2:C2;D2:E2)",
        "=INGLE.ABOUT()",
        "=ingle.peak($A$1:$G$1;A2:G2)",
    )
    case = ((HEADINGS,), (ROW,))
    assert found == [
        outside("INGLE.PEAK", *case),
        outside("INGLE.FACE", "left", *case),
        outside("INGLE.ALLOW", *case),
        outside("INGLE.ASK", "peak [°F]", *case),
        "ok",
        0.0,
        "10:0.12; 390:12",
        about(),
        found[0],
    ]
    # 35 °C, half of 1.2 kW/m² through the film of 12 W/(m²·K), and qL²/8k: a hand calculation.
    assert found[0] == pytest.approx(35.0 + 600.0 / 12.0 + 1.2e5 * 0.01**2 / (8.0 * 390.0), rel=1e-12)


def test_errors_are_true_errors_and_why_is_a_sentence(sheet: Sheet) -> None:
    calls = [f"INGLE.PEAK($A$1:$G$1;A{row}:G{row})" for row in range(2, 7)]
    found = shown(sheet, *(f"={call}" for call in calls))
    assert found[1:] == ["#N/A", "#VALUE!", "#NUM!", ""]
    assert all(isinstance(value, CellErrorText) for value in found[1:4])
    assert shown(sheet, *(f"=ISERROR({call})" for call in calls)) == [0.0, 1.0, 1.0, 1.0, 0.0]
    assert shown(sheet, *(f'=IFERROR({call};"none")' for call in calls)) == [found[0], "none", "none", "none", ""]
    calc, number = sheet
    calc.fill(number, SHEET, "L2:L5", [[f"={call}"] for call in calls[:4]])
    assert shown(sheet, "=SUM(L2:L5)", "=MAX(L2:L5)", "=COUNT(L2:L5)") == ["#N/A", "#N/A", 1.0]
    # 7 is #N/A, 3 #VALUE!, 6 #NUM!, as every spreadsheet program numbers them.
    assert shown(sheet, "=ERROR.TYPE(L3)", "=ERROR.TYPE(L4)", "=ERROR.TYPE(L5)") == [7.0, 3.0, 6.0]
    why = [f"=INGLE.WHY($A$1:$G$1;A{row}:G{row})" for row in range(2, 7)]
    assert shown(sheet, *why) == [outside("INGLE.WHY", (HEADINGS,), (row,)) for row in rows_of(sheet)]
    assert shown(sheet, *why)[0] == "ok"
    assert all("conductivity" in str(sentence).lower() for sentence in shown(sheet, *why)[1:4])


def rows_of(sheet: Sheet) -> list[list[object]]:
    calc, number = sheet
    return [[None if cell == "" else cell for cell in row] for row in calc.values(number, SHEET, "A2:G6")]


def test_arrays_of_many_rows_turned_and_not(sheet: Sheet) -> None:
    calc, number = sheet
    calc.array(number, SHEET, "L2:L6", "=INGLE.PEAK($A$1:$G$1;A2:G6)")
    peak = shown(sheet, "=INGLE.PEAK($A$1:$G$1;A2:G2)")[0]
    assert [row[0] for row in calc.values(number, SHEET, "L2:L6")] == [peak, "#N/A", "#VALUE!", "#NUM!", ""]
    # Several ranges of many rows, as well as one.
    calc.array(number, SHEET, "L2:L6", "=INGLE.PEAK($A$1:$G$1;A2:A6;B2:C6;D2:D6;E2:G6)")
    assert [row[0] for row in calc.values(number, SHEET, "L2:L6")] == [peak, "#N/A", "#VALUE!", "#NUM!", ""]
    calc.array(number, SHEET, "M2:O4", '=INGLE.ASK("peak [°C]; verdict; left face [K]";$A$1:$G$1;A2:G4)')
    face = shown(sheet, '=INGLE.FACE("left";$A$1:$G$1;A2:G2)')[0]
    assert calc.values(number, SHEET, "M2:O4") == [
        [peak, "ok", pytest.approx(float(str(face)) + 273.15)],
        ["#N/A", "no answer", "#N/A"],
        ["#VALUE!", "no answer", "#VALUE!"],
    ]
    calc.array(number, SHEET, "Q1:R7", "=TRANSPOSE(A1:G2)")
    calc.array(number, SHEET, "S1:S2", '=INGLE.ASK("peak [°C]; verdict";Q1:Q7;R1:R7)')
    assert calc.values(number, SHEET, "S1:S2") == [[peak], ["ok"]]
    calc.array(number, SHEET, "U1:V5", "=INGLE.PROFILE(5;Q1:Q7;R1:R7)")
    profile = calc.values(number, SHEET, "U1:V5")
    assert [row[0] for row in profile] == [0.0, 2.5, 5.0, 7.5, 10.0]
    assert profile[2][1] == pytest.approx(peak)


def test_any_number_of_value_arguments_and_constants(sheet: Sheet) -> None:
    peak = shown(sheet, "=INGLE.PEAK($A$1:$G$1;A2:G2)")[0]
    text = "; ".join(HEADINGS)
    assert shown(
        sheet,
        "=INGLE.PEAK($A$1:$G$1;A2;B2;C2;D2;E2;F2;G2)",
        "=INGLE.PEAK($A$1:$G$1;A2:C2;0.12;E2:G2)",
        f'=INGLE.PEAK("{text}";"wall";10;390;0.12;12;35;105)',
        "=INGLE.PEAK(A1:C1;A2:C2)",
        '=IF(A2="wall";INGLE.PEAK($A$1:$G$1;A2:G2)+1;"")',
    ) == [peak, peak, peak, "#N/A", float(str(peak)) + 1.0]
    # More arguments than Calc knows one by one: the answer of one cell is right, one of several is refused.
    many = "; ".join(["shape", *(f"thickness {n} [mm]; conductivity {n} [W/(m·K)]" for n in range(1, 13)), "generation [W/cm³]",
                      "both held [°C]"])  # fmt: skip
    values = ";".join(['"wall"', *("1;2" for _ in range(12)), "1", "20"])
    lone = outside("INGLE.PEAK", (tuple(many.split("; ")),), (("wall", *([1.0, 2.0] * 12), 1.0, 20.0),))
    assert len(values.split(";")) > ONE_BY_ONE
    assert shown(sheet, f'=INGLE.PEAK("{many}";{values})') == [lone]
    ask = f'INGLE.ASK("peak [°C]; mean [°C]";"{many}";{values})'
    calc, number = sheet
    calc.array(number, SHEET, "M2:N2", "=" + ask)
    assert calc.values(number, SHEET, "M2:N2") == [["#VALUE!", "#VALUE!"]]
    too_many = "There are too many value arguments for an answer of several cells; pass one range of several columns"
    calc.array(number, SHEET, "M3:M4", f'=INGLE.WHY("{many}";{values[:-2]}B2:B3)')
    assert calc.values(number, SHEET, "M3:M4") == [[too_many], [too_many]]


def test_arguments_that_are_missing_or_hold_errors(sheet: Sheet) -> None:
    calc, number = sheet
    calc.fill(number, SHEET, "A7:G7", [[*ROW[:5], "=1/0", 105.0]])
    assert shown(
        sheet,
        "=INGLE.PEAK($A$1:$G$1;A2:E2;1/0;G2)",
        "=INGLE.PEAK($A$1:$G$1;A7:G7)",  # Calc itself refuses a range with an error in it
        "=ISERROR(INGLE.PEAK($A$1:$G$1;A7:G7))",
        "=INGLE.PEAK()",
        "=INGLE.PEAK($A$1:$G$1)",
        "=INGLE.PEAK(;A2:G2)",
        "=INGLE.WHY(;A2:G2)",
        "=INGLE.WHY($A$1:$G$1;A2:F2)",
        "=INGLE.WHY($A$1:$G$1;A2:G2;A3:G4)",
        '=INGLE.FACE("top";$A$1:$G$1;A2:G2)',
        '=INGLE.ASK("pek [°C]";$A$1:$G$1;A2:G2)',
    ) == [
        "#DIV/0!",
        "Err:504",
        1.0,
        "#VALUE!",
        "#VALUE!",
        "#VALUE!",
        "The headings are missing; pass the range that holds them",
        "There are 7 headings but 6 columns of values; pass one column a heading",
        "There are 7 headings but 14 columns of values; pass one column a heading",
        "#VALUE!",
        "#VALUE!",
    ]


def test_a_lone_empty_cell_is_not_taken_for_zero_degrees(sheet: Sheet) -> None:
    assert (
        shown(
            sheet,
            "=INGLE.PEAK($A$1:$G$1;A2:E2;J9;G2)",
            "=INGLE.WHY($A$1:$G$1;A2:E2;J9;G2)",
            "=INGLE.WHY($A$1:$G$1;A2:E2;J9:J9;G2)",
            '=INGLE.ASK("peak [°C]";$A$1:$G$1;A2:E2;0;G2)',
            "=INGLE.PEAK($A$1:$G$1;A2:E2;0.001;G2)",
            "=INGLE.PEAK($A$1:$G$1;A2:D2;0;F2:G2)",  # a film of 0 is a number like any other
        )
        == [
            "#VALUE!",
            "Both fluid [°C] is 0 and may be an empty cell; pass a range, as in A2:H2",
            outside("INGLE.WHY", (HEADINGS,), ([*ROW[:5], None, ROW[6]],)),  # a range, though of one cell: blank
            "#VALUE!",
            pytest.approx(85.00484615384615 - 35.0),
            "#NUM!",
        ]
    )
    calc, number = sheet
    calc.fill(number, SHEET, "A8:G8", [[*ROW[:5], 0.0, 105.0]])
    assert shown(sheet, "=INGLE.PEAK($A$1:$G$1;A8:G8)") == [pytest.approx(85.00384615384615 - 35.0)]
    calc.array(number, SHEET, "L2:L3", "=INGLE.PEAK($A$1:$G$1;A2:E3;0;G2:G3)")
    assert calc.values(number, SHEET, "L2:L3") == [["#VALUE!"], ["#VALUE!"]]


@pytest.mark.long
def test_whole_columns_serve_arrays_and_are_refused_for_one_row(sheet: Sheet) -> None:
    calc, number = sheet
    # Two headings only: Calc hands over a million rows of each column.
    calc.fill(number, SHEET, "P1:Q3", [["generation [W/cm³]", "both held [°C]"], [1.0, 20.0], [2.0, 30.0]])
    formula = '=INGLE.PEAK("shape; thickness [mm]; conductivity [W/(m·K)]; generation [W/cm³]; both held [°C]";"wall";10;50;P:P;Q:Q)'
    calc.array(number, SHEET, "S1:S5", formula)
    # qL²/8k over the held faces; the heading row is a row of words, and beyond the used rows there is nothing.
    rise = 1e6 * 0.01**2 / (8.0 * 50.0)
    want = ["#VALUE!", pytest.approx(20.0 + rise), pytest.approx(30.0 + 2.0 * rise), "#N/A", "#N/A"]
    assert [row[0] for row in calc.values(number, SHEET, "S1:S5")] == want
    lone = formula.replace("PEAK", "WHY")
    assert shown(sheet, lone, lone.replace("WHY", 'FACE("left";').replace(";(", ";")) == [
        "A whole column is passed where one row is asked; pass the cells of this row, as in A2:H2",
        "#VALUE!",
    ]


def test_the_wizard_knows_every_function_and_argument(calc: Office) -> None:
    for function in FUNCTIONS:
        described = calc.described(function.name)
        assert described["description"].casefold().startswith(function.returns.casefold())
        assert [(name, text) for name, text, _ in described["arguments"]] == [(a.name, a.help) for a in arguments(function)]
        assert all(optional for _, _, optional in described["arguments"])


def test_dates_and_truths_arrive_as_numbers(sheet: Sheet) -> None:
    """Calc tells neither from a number; documented, and the reason why a date in a length is only caught by its size."""
    calc, number = sheet
    calc.fill(number, SHEET, "L2:M2", [["=TRUE()", "=DATE(2024;5;17)"]])
    thin = shown(sheet, "=INGLE.PEAK($A$1:$G$1;A2;L2;C2:G2)", "=INGLE.PEAK($A$1:$G$1;A2;1;C2:G2)")
    assert thin[0] == thin[1]
    assert shown(sheet, "=INGLE.PEAK($A$1:$G$1;A2;M2;C2:G2)", "=INGLE.PEAK($A$1:$G$1;A2;45429;C2:G2)")[0] == pytest.approx(
        float(str(shown(sheet, "=INGLE.PEAK($A$1:$G$1;A2;45429;C2:G2)")[0]))
    )
