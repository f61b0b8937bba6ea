"""The commands of the menu, dispatched to a real Calc without its windows; and the case tables they insert."""

from __future__ import annotations

import importlib
import sys
import types
from collections.abc import Iterator

import pytest
from calc_office import Office
from ingle_addin.about import CAUTION, about, version
from ingle_addin.batch import solve_calls
from ingle_addin.case_tables import CASE_TABLES, CaseTable, available
from ingle_addin.cells import CellError
from ingle_addin.heading_reader import Asked, Column, read_answer, read_input
from ingle_addin.headings import SHAPES

SHEET = "Sheet1"
Sheet = tuple[Office, int]


@pytest.fixture
def sheet(calc: Office) -> Iterator[Sheet]:
    number = calc.open("new")
    yield calc, number
    calc.close(number)


def test_there_is_a_table_for_every_shape_and_its_headings_are_read() -> None:
    assert [table.shape for table in CASE_TABLES] == list(SHAPES)
    for table in CASE_TABLES:
        columns = [read_input(heading, place) for place, heading in enumerate(table.headings)]
        assert all(isinstance(column, Column) for column in columns), columns
        assert all(isinstance(read_answer(heading), Asked) for heading, _ in table.answers)
        assert table.values[0] == table.shape


@pytest.mark.parametrize("table", available(), ids=lambda table: table.shape)
def test_the_example_row_of_a_table_is_answered_without_a_doubt(table: CaseTable) -> None:
    case = ((table.headings,), (table.values,))
    assert solve_calls("INGLE.WHY", [case])[0].grid[0][0] == "ok"
    asked = tuple(heading for heading, _ in table.answers)
    (outcome,) = solve_calls("INGLE.ASK", [((asked,), *case)])
    assert not any(isinstance(cell, CellError) for cell in outcome.grid[0]), outcome.grid
    assert outcome.grid[0][asked.index("verdict")] == "ok"


def test_a_table_that_waits_for_its_physics_is_not_offered() -> None:
    waiting = CaseTable("wall", "Wall", (("shape", "wall"), ("overload [-]", 1.2)), ())
    column = read_input("overload [-]", 1)
    assert isinstance(column, Column)
    assert waiting.available is column.available
    assert not CaseTable("wall", "Wall", (("shapely", "wall"),), ()).available
    assert {"wall", "cylinder", "sphere"} <= {table.shape for table in available()}


@pytest.mark.parametrize("table", available(), ids=lambda table: table.shape)
def test_insert_writes_headings_an_example_and_formulas_that_answer(sheet: Sheet, table: CaseTable) -> None:
    calc, number = sheet
    width = len(table.inputs) + len(table.answers)
    last = calc_column(1 + width - 1)
    said = calc.dispatch(number, SHEET, "B3", f"ingle.calc:insert?shape={table.shape}")
    assert said == (
        f"A case table is in B3:{last}4. Its row is an invented example: type your own values, and fill the formulas down."
    )
    head, row = calc.values(number, SHEET, f"B3:{last}4")
    assert head == [*table.headings, *(heading for heading, _ in table.answers)]
    assert row[: len(table.inputs)] == ["" if value is None else value for value in table.values]
    case = ((table.headings,), (table.values,))
    (outcome,) = solve_calls("INGLE.ASK", [((tuple(heading for heading, _ in table.answers),), *case)])
    for got, want in zip(row[len(table.inputs) :], outcome.grid[0], strict=True):
        assert got == (want if isinstance(want, str) else pytest.approx(want, rel=1e-12))
    # Filled down, the formulas follow the row and keep the headings.
    calc.copy_down(number, SHEET, f"B4:{last}5")
    assert calc.values(number, SHEET, f"B5:{last}5")[0][len(table.inputs) :] != [""] * len(table.answers)
    formula = calc.formulas(number, SHEET, f"{calc_column(1 + len(table.inputs))}5")[0][0]
    inputs = calc_column(len(table.inputs))
    assert formula == f"=INGLE.PEAK($B$3:${inputs}$3;$B5:${inputs}5)"


def calc_column(index: int) -> str:
    return chr(ord("A") + index)


def test_insert_overwrites_nothing(sheet: Sheet) -> None:
    calc, number = sheet
    calc.set(number, SHEET, "E4", 5.0)
    refused = calc.dispatch(number, SHEET, "B3", "ingle.calc:insert?shape=wall")
    assert refused == "The cells B3:Q4 are not all empty; choose an empty place for the table."
    assert calc.used(number, SHEET) == [4, 5]
    off = calc.dispatch(number, SHEET, "XFA1", "ingle.calc:insert?shape=wall")
    assert off == "The table does not fit here; choose a cell further to the left."
    unknown = calc.dispatch(number, SHEET, "B9", "ingle.calc:insert?shape=donut")
    assert unknown == "Ingle has no case table for 'donut'; choose one from the menu."


def test_insert_can_be_undone_at_once(sheet: Sheet) -> None:
    calc, number = sheet
    calc.set(number, SHEET, "A1", 5.0)
    calc.dispatch(number, SHEET, "B3", "ingle.calc:insert?shape=wall")
    assert calc.undo(number) == "Insert a case table"
    assert calc.formulas(number, SHEET, "A1:R5") == [["5", *[""] * 17], *[[""] * 18] * 4]


EXPLAINED = """\
L4  INGLE.PEAK

Conductivity [W/(m·K)] in this row is 'copper'; a number belongs here

shape = cylinder
inner diameter [mm] = 40
outer diameter [mm] = 80
conductivity [W/(m·K)] = copper
generation [kW/m³] = 60
inner film [W/(m²·K)] = 5
inner fluid [°C] = 40
outer film [W/(m²·K)] = 20
outer fluid [°C] = 30
limit [°C] = 130"""


def test_explain_tells_the_row_behind_a_cell(sheet: Sheet) -> None:
    calc, number = sheet
    calc.dispatch(number, SHEET, "B3", "ingle.calc:insert?shape=cylinder")
    calc.set(number, SHEET, "E4", "copper")
    why = calc.values(number, SHEET, "R4")[0][0]
    want = EXPLAINED.replace("Conductivity [W/(m·K)] in this row is 'copper'; a number belongs here", why)
    assert calc.dispatch(number, SHEET, "L4", "ingle.calc:explain") == want
    assert calc.dispatch(number, SHEET, "C4", "ingle.calc:explain") == want  # any cell of the row
    assert calc.dispatch(number, SHEET, "R4", "ingle.calc:explain") == want.replace("L4  INGLE.PEAK", "R4  INGLE.WHY")
    face = calc.dispatch(number, SHEET, "M4", "ingle.calc:explain")
    assert face == want.replace("L4  INGLE.PEAK", "M4  INGLE.FACE")
    none = "There is no Ingle formula in this cell or its row; choose a row that has one."
    assert calc.dispatch(number, SHEET, "A1", "ingle.calc:explain") == none


def test_explain_reads_every_form_of_argument(sheet: Sheet) -> None:
    calc, number = sheet
    calc.add_sheet(number, "The head's")
    calc.fill(number, "The head's", "A1:B2", [["shape", "thickness [mm]"], ["wall", 10]])
    calc.fill(number, SHEET, "A1:B3", [["wall", "=20+1"], ["", ""], ["wall", "=1/0"]])
    calc.fill(number, SHEET, "D1:D1", [["=IF(1;INGLE.PEAK($'The head''s'.A1:B1;A1;B1:B1)+1;\"INGLE.PEAK(\")"]])
    calc.fill(number, SHEET, "E1:E1", [['=IF(1;"say ""INGLE.WHY(1;2)""";INGLE.WHY("shape; thickness [mm]";"wall";3.5))']])
    calc.fill(number, SHEET, "E3:E3", [["=INGLE.WHY($'The head''s'.A1:B1;A3:B3)"]])
    calc.fill(number, SHEET, "E2:E2", [["=INGLE.PEAK($'The head''s'.A1:B1;A1&\"\";B1)"]])
    calc.array(number, SHEET, "G1:G2", "=INGLE.PEAK($'The head''s'.A1:B1;A1:B2)")

    def said(at: str) -> list[str]:
        lines = calc.dispatch(number, SHEET, at, "ingle.calc:explain").splitlines()
        return [lines[0], *lines[4:]] if len(lines) > 1 else lines

    assert said("D1") == ["D1  INGLE.PEAK", "shape = wall", "thickness [mm] = 21"]
    assert said("E1") == ["E1  INGLE.WHY", "shape = wall", "thickness [mm] = 3.5"]
    assert said("E3") == ["E3  INGLE.WHY", "shape = wall", "thickness [mm] = #DIV/0!"]
    assert said("G1") == ["G1  INGLE.PEAK", "shape = wall", "thickness [mm] = 21"]
    assert calc.dispatch(number, SHEET, "G2", "ingle.calc:explain") == "G2  INGLE.PEAK\n\nThis row is blank"
    computed = "is computed inside the formula and cannot be read by itself; put it into cells, or ask INGLE.WHY there."
    assert said("E2") == [f"'A1&\"\"' {computed}"]


def test_recalculate_and_about(sheet: Sheet) -> None:
    calc, number = sheet
    calc.set(number, SHEET, "A1", "=INGLE.ABOUT()")
    assert calc.dispatch(number, SHEET, "A1", "ingle.calc:recalculate") == "All cells are calculated anew."
    assert calc.values(number, SHEET, "A1") == [[about()]]
    first, second, blank, caution = calc.dispatch(number, SHEET, "A1", "ingle.calc:about").splitlines()
    assert first.startswith(f"{about()}, process ")
    assert second.startswith(f"Extension {version()}, in the office's Python 3.")
    assert (blank, caution) == ("", CAUTION)


def test_a_dialog_does_not_hold_up_an_office_without_windows_and_strangers_are_refused(sheet: Sheet) -> None:
    calc, number = sheet
    assert calc.dispatch(number, SHEET, "A1", "ingle.calc:about", False).endswith(CAUTION)
    assert calc.dispatch(number, SHEET, "A1", "ingle.calc:polish") == "Ingle has no command polish."


class Named:
    """An argument of a command."""

    Name, Value = "Quiet", True


def test_commands_without_a_spreadsheet_or_a_cell(monkeypatch: pytest.MonkeyPatch) -> None:
    """Without an office: its names are stood in for."""
    names = {"FontWeight": ("BOLD",), "MessageBoxType": ("ERRORBOX", "INFOBOX")}
    for name in ("com", "com.sun", "com.sun.star", "com.sun.star.awt"):
        monkeypatch.setitem(sys.modules, name, types.ModuleType(name))
    for module, constants in names.items():
        stand = types.ModuleType(module)
        for constant in constants:
            setattr(stand, constant, constant)
        monkeypatch.setitem(sys.modules, f"com.sun.star.awt.{module}", stand)
    monkeypatch.delitem(sys.modules, "ingle_addin.calc.inside.commands", raising=False)
    commands = importlib.import_module("ingle_addin.calc.inside.commands")
    monkeypatch.delitem(sys.modules, "ingle_addin.calc.inside.commands")
    tables = {"tables": {"wall": [[], [], []]}}

    def said(frame: object, command: str, client: object = None) -> str:
        return str(commands.carry_out(None, frame, client, tables, command, (Named(),)))

    assert said(None, "ingle.calc:about") == "Open a spreadsheet first."
    text = types.SimpleNamespace(Controller=types.SimpleNamespace(Model=types.SimpleNamespace()))
    assert said(text, "ingle.calc:about") == "Open a spreadsheet first."
    drawing = types.SimpleNamespace(Sheets=None, CurrentSelection=types.SimpleNamespace())
    frame = types.SimpleNamespace(Controller=types.SimpleNamespace(Model=drawing))
    assert said(frame, "ingle.calc:insert?shape=wall") == "Select a cell first."
    assert said(frame, "ingle.calc:explain") == "Select a cell first."
