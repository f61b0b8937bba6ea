"""What a wrong cell or heading does in a workbook: the error in its row, the sentence beside it, and nothing anywhere else."""

from __future__ import annotations

import math
from dataclasses import dataclass
from pathlib import Path

import pytest
import sheets
from ingle_addin.cells import CellError
from sheets import DATE, EMPTY_TEXT, ERRORS, TIME, Filled
from xlsxwriter.utility import xl_rowcol_to_cell as cell_at

NA, NUM, VALUE = CellError.NA, CellError.NUM, CellError.VALUE
D, K, Q = "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/m³]"
FILM, FLUID, HELD = "both film [W/(m²·K)]", "both fluid [°C]", "both held [°C]"
P, LINE, SPECIFIC = "power [W]", "line power [W/m]", "specific generation [W/kg]"
R_IN, D_IN, R_OUT, D_OUT = "inner radius [mm]", "inner diameter [mm]", "outer radius [mm]", "outer diameter [mm]"
NOT_A_NUMBER = "a number belongs here"
NO_COOLING = (
    "No heat can leave the body in {row}, so it has no steady state; give a face a film above 0 with its fluid, or hold it at a "
    "temperature"
)
TOO_COLD = "The answer in {row} would lie below absolute zero; check the signs of the generation and the fluxes"
LATER = "is not available yet; leave it blank or wait for a later version"
HEADING_UNIT = "correct the value or the heading's unit"
TOO_WIDE = "not below outer radius [mm] of 12; make the bore smaller than the outside"
COMMA = "a text with a decimal comma; type it as a number of your spreadsheet"
BLANK_ROW = ("", "")


@dataclass(frozen=True)
class Table:
    """Headings with a good row, and bad rows: what each changes in the good one, the error, and the sentence."""

    good: dict[str, object]
    bad: list[tuple[dict[str, object], object, str]]


def size(value: str) -> str:
    return f"Thickness [mm] in {{row}} is {value}; it must be above 0 and at most 1000000000; {HEADING_UNIT}"


def cold(value: str) -> str:
    limits = "nothing is colder than -273.15 (absolute zero) and at most 100000 belongs here"
    return f"Both fluid [°C] in {{row}} is {value}; {limits}; {HEADING_UNIT}"


def both(one: str, other: str) -> str:
    return f"{one} and {other} in {{row}} are both filled in and mean the same; leave one blank"


def held(one: str, other: str) -> str:
    return f"{one} and {other} in {{row}} contradict each other: a held face takes no film, fluid or flux; leave one blank"


CELLS = Table(
    {"shape": "wall", D: 10.0, K: 15.0, Q: 3e5, FILM: 400.0, FLUID: 20.0, "probe [mm]": 4.0, "note": "kept"},
    [
        ({D: 0.0}, NUM, size("0")),
        ({D: -10.0}, NUM, size("-10")),
        ({D: 1e300}, NUM, size("1e+300")),
        ({D: True}, VALUE, f"Thickness [mm] in {{row}} is TRUE; {NOT_A_NUMBER}"),
        ({D: DATE}, VALUE, f"Thickness [mm] in {{row}} is a date or time; {NOT_A_NUMBER}, so check the cell's format"),
        ({Q: TIME}, VALUE, f"Generation [W/m³] in {{row}} is a date or time; {NOT_A_NUMBER}, so check the cell's format"),
        ({D: "ten"}, VALUE, f"Thickness [mm] in {{row}} is the text 'ten'; {NOT_A_NUMBER}"),
        ({D: "10 mm"}, VALUE, f"Thickness [mm] in {{row}} is the text '10 mm'; {NOT_A_NUMBER}"),
        ({D: "10"}, VALUE, "Thickness [mm] in {row} is '10' and is stored as text; convert it to a number"),
        ({D: " 1.5e1 "}, VALUE, "Thickness [mm] in {row} is '1.5e1' and is stored as text; convert it to a number"),
        ({D: "12,5"}, VALUE, f"Thickness [mm] in {{row}} is '12,5', {COMMA}"),
        ({FLUID: "-3,5"}, VALUE, f"Both fluid [°C] in {{row}} is '-3,5', {COMMA}"),
        ({D: None}, NA, "Thickness [mm] in {row} is blank; type a value"),
        ({K: EMPTY_TEXT}, NA, "Conductivity [W/(m·K)] in {row} is blank; type a value"),
        ({Q: "   "}, NA, "Generation [W/m³] in {row} is blank; write 0 for no source"),
        ({FLUID: None}, NA, "Both film [W/(m²·K)] in {row} needs the temperature of its fluid; fill in 'both fluid [°C]'"),
        ({FILM: None}, NA, "Both fluid [°C] in {row} needs a film; fill in 'both film [W/(m²·K)]'"),
        ({FILM: None, FLUID: None}, NUM, NO_COOLING),
        ({FILM: 0.0}, NUM, NO_COOLING),
        ({FILM: -4.0}, NUM, f"Both film [W/(m²·K)] in {{row}} is -4; it must be at least 0 and at most 1e+20; {HEADING_UNIT}"),
        ({FLUID: -300.0}, NUM, cold("-300")),
        ({FLUID: 1e300}, NUM, cold("1e+300")),
        ({Q: -3e12}, NUM, TOO_COLD),
        ({Q: 1e25, K: 1e-300}, NUM, "The values in {row} are so far apart that the answer is beyond the range of numbers; check "
         "their units"),
        ({"shape": "cube"}, VALUE, "Shape in {row} is 'cube', which is not known; write wall, cylinder, sphere or bar"),
        ({"shape": 5.0}, VALUE, "Shape in {row} is a number; a text belongs here: wall, cylinder, sphere or bar"),
        ({"shape": None}, NA, "Shape in {row} is blank; write wall, cylinder or sphere"),
        ({"shape": "bar"}, NA, "Shape 'bar' in {row} is not available yet; bars along their length need a later version"),
        ({"shape": ERRORS[NA]}, NA, "Shape in {row} holds the error #N/A; correct that cell"),
        *(({D: ERRORS[error]}, error, f"Thickness [mm] in {{row}} holds the error {error}; correct that cell") for error in ERRORS),
        # An error goes before every other fault of its row, wherever it stands.
        ({D: "ten", Q: ERRORS[NUM]}, NUM, "Generation [W/m³] in {row} holds the error #NUM!; correct that cell"),
        ({"probe [mm]": 10.5}, NUM, "Probe [mm] in {row} is 10.5, outside the body; give a place in it, from the left face"),
        (dict.fromkeys(("shape", D, K, Q, FILM, FLUID, "probe [mm]", "note")), *BLANK_ROW),
        (dict.fromkeys(("shape", D, K, Q, FILM, FLUID, "probe [mm]")), *BLANK_ROW),  # a note alone is no case
        (dict.fromkeys(("shape", D, K, Q, FILM, FLUID, "probe [mm]"), EMPTY_TEXT), *BLANK_ROW),
    ],
)  # fmt: skip

FACES = Table(
    {"shape": "wall", D: 10.0, K: 15.0, Q: 3e5, FILM: 400.0, FLUID: 20.0, "left film [W/(m²·K)]": None, "left fluid [°C]": None,
     HELD: None, "right held [°C]": None, "left flux in [W/m²]": None, "outer diameter [mm]": None},
    [
        ({"left film [W/(m²·K)]": 400.0}, VALUE, both("Both film [W/(m²·K)]", "left film [W/(m²·K)]")),
        ({"left fluid [°C]": 20.0}, VALUE, both("Both fluid [°C]", "left fluid [°C]")),
        ({HELD: 20.0}, VALUE, held("Both held [°C]", "both film [W/(m²·K)]")),
        ({"right held [°C]": 20.0}, VALUE, held("Right held [°C]", "both film [W/(m²·K)]")),
        ({FILM: None, FLUID: None, HELD: 20.0, "left flux in [W/m²]": 5.0}, VALUE, held("Both held [°C]", "left flux in [W/m²]")),
        ({FILM: None, FLUID: None, HELD: 20.0, "right held [°C]": 20.0}, VALUE, both("Both held [°C]", "right held [°C]")),
        ({FILM: None, FLUID: None, "left film [W/(m²·K)]": 9.0}, NA,
         "Left film [W/(m²·K)] in {row} needs the temperature of its fluid; fill in 'left fluid [°C]'"),
        ({FILM: None, "left film [W/(m²·K)]": 9.0}, NA, "Both fluid [°C] in {row} needs a film; fill in 'right film [W/(m²·K)]'"),
        ({FILM: None, FLUID: None, "left flux in [W/m²]": 9.0}, NUM, NO_COOLING),
        ({"left flux in [W/m²]": -1e9}, NUM, TOO_COLD),
        ({"outer diameter [mm]": 9.0}, VALUE,
         "Outer diameter [mm] in {row} belongs to a cylinder or a sphere, not to a wall; leave it blank"),
    ],
)  # fmt: skip

SOURCES = Table(
    {"shape": "wall", D: 10.0, K: 15.0, Q: 3e5, P: None, LINE: None, SPECIFIC: None, FILM: 400.0, FLUID: 20.0,
     "left emissivity": None, "material": None, "current [A]": None, "conductivity 2 [W/(m·K)]": None},
    [
        ({P: 5.0}, VALUE, "Generation [W/m³] and power [W] in {row} are two sources in one layer; leave one blank"),
        ({P: 0.0}, VALUE, "Generation [W/m³] and power [W] in {row} are two sources in one layer; leave one blank"),
        ({Q: None, P: 5.0}, NA, "Power [W] in {row} needs the wall's area; fill in 'area [m²]'"),
        ({Q: None, SPECIFIC: 5.0}, NA, "Specific generation [W/kg] in {row} needs a density; fill in 'density [kg/m³]'"),
        ({Q: None, LINE: 5.0}, NA,
         "Line power [W/m] in {row} is by length, which a wall has not; give its power in W, with its area"),
        ({Q: None}, NA, "Generation [W/m³] and specific generation [W/kg] and power [W] and line power [W/m] and current [A] in "
         "{row} are blank; write 0 for no source"),
        ({"left emissivity": 0.8}, NA, f"Left emissivity in {{row}} {LATER}"),
        ({"material": "copper"}, NA, f"Material in {{row}} {LATER}"),
        ({"material": 7.0}, VALUE, "Material in {row} is a number; a text belongs here"),
        ({"current [A]": 90.0}, NA, f"Current [A] in {{row}} {LATER}"),
        ({"conductivity 2 [W/(m·K)]": 9.0}, NA, f"Conductivity 2 [W/(m·K)] in {{row}} {LATER}"),
        ({K: "20:16.2; 500:21.5"}, NA,
         "Conductivity [W/(m·K)] in {row} is a text table, which is not available yet; give one number"),
    ],
)  # fmt: skip

ROUND = Table(
    {"shape": "cylinder", R_IN: 4.0, D_IN: None, R_OUT: 12.0, D_OUT: None, "radius [mm]": None, K: 15.0, Q: 3e5, P: None, LINE: None,
     FILM: 400.0, FLUID: 20.0, "inner film [W/(m²·K)]": None, "inner fluid [°C]": None, "width [mm]": None, "probe [mm]": None},
    [
        ({R_IN: 12.0}, NUM, f"Inner radius [mm] in {{row}} is 12, {TOO_WIDE}"),
        ({R_IN: 15.0}, NUM, f"Inner radius [mm] in {{row}} is 15, {TOO_WIDE}"),
        ({R_IN: None, D_IN: 30.0}, NUM, f"Inner diameter [mm] in {{row}} is 30, {TOO_WIDE}"),
        ({R_IN: -1.0}, NUM, f"Inner radius [mm] in {{row}} is -1; it must be at least 0 and at most 1000000000; {HEADING_UNIT}"),
        ({D_IN: 8.0}, VALUE, "Inner radius [mm] and inner diameter [mm] in {row} both give the bore; leave one blank"),
        ({D_OUT: 24.0}, VALUE, "Outer radius [mm] and outer diameter [mm] in {row} both give the outside; leave one blank"),
        ({R_OUT: None}, NA, "The outside of this cylinder is blank in {row}; fill in outer radius [mm] or outer diameter [mm]"),
        ({R_OUT: None, "radius [mm]": 12.0}, VALUE, "Radius [mm] in {row} is for a solid body, and inner radius [mm] is 4; use outer "
         "radius instead"),
        ({R_IN: None, FILM: None, FLUID: None, "inner film [W/(m²·K)]": 9.0, "inner fluid [°C]": 20.0}, VALUE,
         "Inner film [W/(m²·K)] in {row} lies on an inner face, and this cylinder is solid; give an inner radius or leave it blank"),
        ({R_IN: 0.0, FILM: None, FLUID: None, "inner film [W/(m²·K)]": 9.0, "inner fluid [°C]": 20.0}, VALUE,
         "Inner film [W/(m²·K)] in {row} lies on an inner face, and the bore is 0; give an inner radius above 0 or leave it blank"),
        ({"width [mm]": 5.0}, VALUE, "Width [mm] in {row} belongs to a wall, not to a cylinder; leave it blank"),
        ({"shape": "sphere", Q: None, LINE: 5.0}, VALUE,
         "Line power [W/m] in {row} has no meaning for a sphere; give its power in W"),
        ({Q: None, P: 5.0}, NA, "Power [W] in {row} needs the cylinder's length; fill in 'length [mm]'"),
        ({"probe [mm]": 3.0}, NUM, "Probe [mm] in {row} is 3, outside the body; give a place in it, a radius"),
        ({"probe [mm]": 12.1}, NUM, "Probe [mm] in {row} is 12.1, outside the body; give a place in it, a radius"),
    ],
)  # fmt: skip

DOUBLED = Table(
    {"shape": "wall", D: 10.0, "Thickness  [cm]": None, K: 15.0, Q: 3e5, HELD: 20.0, "left held [°F]": None},
    [
        ({"Thickness  [cm]": 1.0}, VALUE, both("Thickness [mm]", "Thickness [cm]")),
        ({"left held [°F]": 68.0}, VALUE, both("Both held [°C]", "left held [°F]")),
    ],
)
TABLES = {"cells": CELLS, "faces": FACES, "sources": SOURCES, "round": ROUND, "doubled": DOUBLED}
CASES = [pytest.param(name, place, id=f"{name}-{place}") for name, table in TABLES.items() for place in range(len(table.bad))]


def grid_of(table: Table, spoilt: bool) -> list[list[object]]:
    """Good and bad rows in turn, good ones at both ends, no two alike; without the bad ones their rows are empty."""
    rows: list[list[object]] = []
    for place in range(2 * len(table.bad) + 1):
        each = {**table.good, Q: 3e5 + 1e3 * place}
        if place % 2:
            each = {**table.good, **table.bad[place // 2][0]} if spoilt else {}
        rows.append([each.get(heading) for heading in table.good])
    return rows


def fill(folder: Path, table: Table, spoilt: bool) -> Filled:
    """PEAK and WHY of each row, then one array of both, then the greatest peak of all."""
    folder.mkdir()
    rows, width = grid_of(table, spoilt), len(table.good)
    cells: dict[str, object] = {}
    sheets.put(cells, "A1", [list(table.good), *rows])
    head = f"{cell_at(0, 0, True, True)}:{cell_at(0, width - 1, True, True)}"
    for row in range(1, len(rows) + 1):
        values = f"{cell_at(row, 0)}:{cell_at(row, width - 1)}"
        cells[cell_at(row, width)] = f"=INGLE.PEAK({head},{values})"
        cells[cell_at(row, width + 1)] = f"=INGLE.WHY({head},{values})"
    whole = f"{cell_at(1, 0)}:{cell_at(len(rows), width - 1)}"
    array = f"{cell_at(1, width + 2)}:{cell_at(len(rows), width + 3)}"
    cells[cell_at(0, width)] = f"=MAX({cell_at(1, width)}:{cell_at(len(rows), width)})"
    return sheets.filled(folder, cells, {array: f'=INGLE.ASK("peak [°C];why",{head},{whole})'})


def answers(book: Filled, table: Table, row: int) -> list[object]:
    return [book.values.get(cell_at(row, len(table.good) + i)) for i in range(4)]


@pytest.fixture(scope="module")
def books(tmp_path_factory: pytest.TempPathFactory) -> dict[tuple[str, bool], Filled]:
    folder = tmp_path_factory.mktemp("books")
    return {(name, bad): fill(folder / f"{name}{bad}", table, bad) for name, table in TABLES.items() for bad in (True, False)}


@pytest.mark.parametrize(("name", "place"), CASES)
def test_row_shows_its_error_and_says_why(books: dict[tuple[str, bool], Filled], name: str, place: int) -> None:
    table = TABLES[name]
    _, error, sentence = table.bad[place]
    row = 2 * place + 2
    alone, inside = sentence.replace("{row}", "this row"), sentence.replace("{row}", f"row {row}")
    assert answers(books[name, True], table, row) == [error, alone, error, inside]


@pytest.mark.parametrize("name", TABLES)
def test_neighbours_keep_their_bits(books: dict[tuple[str, bool], Filled], name: str) -> None:
    table, spoilt, sound = TABLES[name], books[name, True], books[name, False]
    for place in range(2 * len(table.bad) + 1):
        found = answers(sound, table, place + 1)
        if place % 2:
            assert found == ["", "", "", ""]
        else:
            peak = found[0]
            assert isinstance(peak, float)
            assert math.isfinite(peak)
            assert found == [peak, "ok", peak, "ok"]
            assert answers(spoilt, table, place + 1) == found


@pytest.mark.parametrize("name", TABLES)
def test_greatest_of_a_column_with_a_bad_row_is_an_error(books: dict[tuple[str, bool], Filled], name: str) -> None:
    place = cell_at(0, len(TABLES[name].good))
    assert isinstance(books[name, True].values[place], CellError)
    assert isinstance(books[name, False].values[place], float)


@pytest.mark.parametrize("name", TABLES)
def test_everything_typed_is_kept(books: dict[tuple[str, bool], Filled], name: str) -> None:
    book, table = books[name, True], TABLES[name]
    # The cells of an array formula but the first hold no formula of their own, only values.
    parts = {cell_at(row, len(table.good) + i) for row in range(1, 2 * len(table.bad) + 2) for i in (2, 3)}
    before, after = sheets.read_typed(book.book), sheets.read_typed(book.out)
    kept = before.keys() - parts | {cell_at(1, len(table.good) + 2)}
    assert {name: after[name] for name in kept} == {name: before[name] for name in kept}
    assert after.keys() - parts == before.keys() - parts


@pytest.mark.parametrize("name", TABLES)
def test_report_names_each_bad_row_once_a_formula(books: dict[tuple[str, bool], Filled], name: str) -> None:
    table = TABLES[name]
    expected = {}
    for place, (_, error, sentence) in enumerate(table.bad):
        row = 2 * place + 2
        if error:
            expected[cell_at(row, len(table.good))] = (str(error), sentence.replace("{row}", "this row"))
            expected[cell_at(row, len(table.good) + 2)] = (str(error), sentence.replace("{row}", f"row {row}"))
    found = books[name, True].report.no_answers
    assert {each.cell: (each.error, each.reason) for each in found} == expected
    assert len(found) == len(expected)
    assert books[name, False].report.no_answers == ()


# Headings that cannot be read, and calls that do not fit, spoil their own call alone.
GOOD = ["shape", D, K, Q, FILM, FLUID]
CASE = ["wall", 10.0, 15.0, 3e5, 400.0, 20.0]
PEAK = 24.0  # fluid + q L/(2 h) + q L²/(8 k) = 20 + 3.75 + 0.25, exact in binary
NOT_PAIRED = "the brackets do not pair; write one unit in square brackets, as in 'thickness [mm]'"
BAD_HEADINGS: list[tuple[object, str]] = [
    ("thicknes [mm]", "Heading 'thicknes [mm]': no input has this name; did you mean 'thickness'?"),
    ("wibble", "Heading 'wibble': no input has this name; `ingle reference` lists the input headings"),
    (5.0, "Heading '5.0': no input has this name; `ingle reference` lists the input headings"),
    ("thickness (mm)", "Heading 'thickness (mm)': write the unit in square brackets, as in 'thickness [mm]'"),
    ("thickness [mm", f"Heading 'thickness [mm': {NOT_PAIRED}"),
    ("thickness [mm] [cm]", f"Heading 'thickness [mm] [cm]': {NOT_PAIRED}"),
    ("thickness", "Heading 'thickness': needs its unit, for example [mm]"),
    ("thickness [furlong]", "Heading 'thickness [furlong]': 'furlong' is not a unit known here; write for example [mm]"),
    ("thickness [Mm]", "Heading 'thickness [Mm]': 'Mm' would be a megametre; write mm or m"),
    ("thickness [kg]", "Heading 'thickness [kg]': 'kg' is a mass, but a length belongs here; write for example [mm]"),
    ("thickness 0 [mm]", "Heading 'thickness 0 [mm]': layers are counted from 1"),
    ("both held [%]", "Heading 'both held [%]': '%' of a temperature has no meaning; write for example [°C]"),
    ("peak [°C]", "Heading 'peak [°C]': this is an answer; it cannot stand among the inputs"),
    ("left face [°C]", "Heading 'left face [°C]': this is an answer; it cannot stand among the inputs"),
    ("joint 1 left [°C]", "Heading 'joint 1 left [°C]': this is an answer; it cannot stand among the inputs"),
    ("sd wibble [mm]", "Heading 'sd wibble [mm]': no input has this name; `ingle reference` lists the input headings"),
    ("x" * 201, f"Heading '{'x' * 57}...': it is 201 characters long; at most 200 belong in a heading"),
]


@pytest.fixture(scope="module")
def stacked(tmp_path_factory: pytest.TempPathFactory) -> Filled:
    """A block of three rows for each bad heading: headings, a good case, a blank row."""
    cells: dict[str, object] = {}
    for place, (heading, _) in enumerate(BAD_HEADINGS):
        row = 3 * place + 1
        sheets.put(cells, f"A{row}", [[*GOOD, heading], [*CASE, 5.0]])
        head, values = f"$A${row}:$G${row}", f"A{row + 1}:G{row + 1}"
        sheets.put(cells, f"I{row + 1}", [[f"=INGLE.PEAK({head},{values})", f"=INGLE.WHY({head},{values})"]])
        sheets.put(cells, f"I{row + 2}", [[f"=INGLE.PEAK({head},A{row + 2}:G{row + 2})"]])
        sheets.put(cells, f"K{row + 1}", [[f"=INGLE.PEAK($A${row}:$F${row},A{row + 1}:F{row + 1})"]])
    return sheets.filled(tmp_path_factory.mktemp("stacked"), cells)


@pytest.mark.parametrize("place", range(len(BAD_HEADINGS)), ids=[str(heading)[:20] for heading, _ in BAD_HEADINGS])
def test_bad_heading_spoils_its_call_alone(stacked: Filled, place: int) -> None:
    row = 3 * place + 2
    assert stacked.row(row, "I", "K") == [VALUE, BAD_HEADINGS[place][1], PEAK]
    assert stacked.values[f"I{row + 1}"] == ""


# Formulas over the good headings in A1:F1 and the good case in A2:F2; G1 holds #N/A, A4:A9 and B4:B9 both upright.
CALLS = {
    "A1:F1,A2:E2": (VALUE, "There are 6 headings but 5 columns of values; pass one column a heading"),
    "A1:F1,A2:F2,A2": (VALUE, "There are 6 headings but 7 columns of values; pass one column a heading"),
    "A1,A2:F2": (VALUE, "There are 1 heading but 6 columns of values; pass one column a heading"),
    "A1:G1,A2:G2": (NA, "The headings hold the error #N/A; correct that cell"),
    "A1:F3,A2:F2": (VALUE, "The headings are 3 rows by 6 columns; pass one row, one column, or names with their units in two"),
    "A1:F1,A2:D2,E2:F3,A2:A4": (VALUE, "One value argument has 2 rows and another 3; pass ranges of the same rows"),
    "A1:F1,A2:C2,D2:F2": (PEAK, "ok"),
    'A1:F1,"wall",B2:D2,400,20': (PEAK, "ok"),
    "A4:A9,B4:B9": (PEAK, "ok"),
    "D4:E9,B4:B9": (PEAK, "ok"),
    "G4:L5,A2:F2": (PEAK, "ok"),
    '"shape;thickness [mm];conductivity [W/(m·K)];generation [W/m³];both film [W/(m²·K)];both fluid [°C]",A2:F2': (PEAK, "ok"),
    '"shape;thickness [mm];conductivity [W/(m·K)]",A2:C2': (NA, "This row has no source, and no heading for one; add a column "
                                                           "'generation [W/m³]', 0 for none"),
    "A4:A9,N4:N9": (NUM, size("-10").format(row="this row")),
    "D4:E9,N4:N9": (NUM, size("-10").format(row="this row")),
}  # fmt: skip


@pytest.fixture(scope="module")
def called(tmp_path_factory: pytest.TempPathFactory) -> Filled:
    cells: dict[str, object] = {"G1": ERRORS[NA]}
    names = [heading.partition(" [")[0] for heading in GOOD]
    units = [f"[{heading.partition(' [')[2]}" if "[" in heading else None for heading in GOOD]
    sheets.put(cells, "A1", [GOOD, CASE])
    sheets.put(cells, "A4", [*zip(GOOD, CASE, strict=True)])
    sheets.put(cells, "D4", [*zip(names, units, strict=True)])
    sheets.put(cells, "G4", [names, units])
    sheets.put(cells, "N4", [[-10.0 if value == 10.0 else value] for value in CASE])
    calls = [[f"=INGLE.PEAK({call})", f"=INGLE.WHY({call})"] for call in CALLS]
    sheets.put(cells, "P1", calls)
    return sheets.filled(tmp_path_factory.mktemp("called"), cells)


@pytest.mark.parametrize("call", CALLS)
def test_forms_of_a_call(called: Filled, call: str) -> None:
    assert called.row(list(CALLS).index(call) + 1, "P", "Q") == list(CALLS[call])


NOT_YET = "is not available yet; it needs a later version"
# Over A1:G1 and A2:G2, a case with the limit 15 °C below its fluid's 20 °C; the reason is the one reported for the cell.
OTHERS = {
    "INGLE.ALLOW(A1:G1,A2:G2)": (NUM, "Limit [°C] in this row is 15, passed even with no source; raise it or cool the body more"),
    'INGLE.ASK("allowable power [W]",A1:G1,A2:G2)': (NA, "Allowable power [W]: the source in this row is its generation; ask for "
                                                     "'allowable generation'"),
    'INGLE.ASK("allowable current [A]",A1:G1,A2:G2)': (NA, f"Allowable current [A] {NOT_YET}"),
    'INGLE.ASK("settling time [s]",A1:G1,A2:G2)': (NA, f"Settling time [s] {NOT_YET}"),
    'INGLE.ASK("thickness [mm]",A1:G1,A2:G2)': (VALUE, "Heading 'thickness [mm]': this is an input; it cannot be asked as an answer"),
    'INGLE.FACE("top",A1:G1,A2:G2)': (VALUE, "The side is not known; write left, right, inner or outer"),
    'INGLE.SEEK("thickness [mm]",A1:G1,A2:G2)': (NA, f"INGLE.SEEK {NOT_YET}"),
    'INGLE.FILM("sphere",10,1,50,20,"air")': (NA, f"INGLE.FILM {NOT_YET}"),
    'INGLE.BLEND("layers",1,2,0.5)': (NA, f"INGLE.BLEND {NOT_YET}"),
    'INGLE.MATERIAL("copper","conductivity",20)': (NA, f"INGLE.MATERIAL {NOT_YET}"),
}  # fmt: skip


@pytest.fixture(scope="module")
def others(tmp_path_factory: pytest.TempPathFactory) -> Filled:
    cells: dict[str, object] = {f"I{row}": f"={call}" for row, call in enumerate(OTHERS, 1)}
    cells |= {"J1": "=INGLE.WHY(A1:G1,A2:G2)"}
    sheets.put(cells, "A1", [[*GOOD, "limit [°C]"], [*CASE, 15.0]])
    return sheets.filled(tmp_path_factory.mktemp("others"), cells)


@pytest.mark.parametrize("call", OTHERS)
def test_other_functions_show_and_report_why(others: Filled, call: str) -> None:
    cell = f"I{list(OTHERS).index(call) + 1}"
    error, sentence = OTHERS[call]
    assert others.values[cell] == error
    assert [each.reason for each in others.report.no_answers if each.cell == cell] == [sentence]


def test_why_beside_a_broken_limit_is_not_ok(others: Filled) -> None:
    """The allowable source in the same row is #NUM!, so its WHY says so."""
    assert others.values["J1"] == OTHERS["INGLE.ALLOW(A1:G1,A2:G2)"][1]
