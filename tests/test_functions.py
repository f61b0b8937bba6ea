"""Each worksheet function as every spreadsheet host calls it: through the batch of calls."""

from __future__ import annotations

import math
from collections.abc import Sequence
from importlib.metadata import version

import pytest
from ingle_addin.batch import solve_calls
from ingle_addin.calls import Outcome
from ingle_addin.cells import Cell, CellError, Grid
from ingle_addin.functions import FUNCTIONS, NAMES

HEADINGS = ("shape", "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/cm³]", "left film [W/(m²·K)]", "left fluid [°C]",
            "right held [°C]", "limit [°C]")  # fmt: skip
CASE: tuple[Cell, ...] = ("wall", 10.0, 15.0, 2.0, 400.0, 22.0, 20.0, 90.0)
BLANK: tuple[Cell, ...] = (None,) * 8
ROUND = ("shape", "inner radius [mm]", "outer radius [mm]", "conductivity [W/(m·K)]", "line power [W/m]", "both held [°C]")
PIPE: tuple[Cell, ...] = ("cylinder", 5.0, 10.0, 12.0, 40.0, 25.0)
HEAD: Grid = (HEADINGS,)
TESTED = {f"INGLE.{name}" for name in ("PEAK", "FACE", "ALLOW", "ASK", "PROFILE", "WHY", "POINTS", "ABOUT")}
ALSO = "There are 8 headings but {} columns of values; pass one column a heading"
ROWS = [(*CASE[:3], 2.0 + i / 7, *CASE[4:]) for i in range(20)]


def call(name: str, *arguments: Grid) -> Outcome:
    (outcome,) = solve_calls(name, [arguments])
    return outcome


def one(text: object) -> Grid:
    return ((text,),)  # type: ignore[return-value]


def values(outcome: Outcome) -> list[list[Cell]]:
    assert len(outcome.reasons) in (len(outcome.grid), len(outcome.grid[0]))
    assert not any(outcome.reasons)
    return [list(row) for row in outcome.grid]


def value(name: str, *arguments: Grid) -> Cell:
    ((cell,),) = values(call(name, *arguments))
    return cell


def refused(outcome: Outcome) -> tuple[Cell, str | None]:
    ((cell,),) = outcome.grid
    (reason,) = outcome.reasons
    return cell, reason


def left_face(q: float) -> float:
    """Conduction with film left and a held right face: T = T_R + (q L²/2k + (h/k) L (T_f − T_R))/(1 + h L/k), by hand."""
    L, k, h = 0.01, 15.0, 400.0
    return 20.0 + (q * L * L / (2 * k) + h * L / k * 2.0) / (1 + h * L / k)


def peak(q: float) -> float:
    """Where the gradient is nought: T = T_L + g²k/2q with g = h(T_L − T_f)/k the gradient at the left face."""
    g = 400.0 * (left_face(q) - 22.0) / 15.0
    return left_face(q) + g * g * 15.0 / (2 * q)


@pytest.mark.parametrize("function", FUNCTIONS, ids=lambda function: function.name)
def test_every_function_of_the_table_answers_or_says_not_yet(function: object) -> None:
    name = function.name  # type: ignore[attr-defined]
    if function.available:  # type: ignore[attr-defined]
        assert name in TESTED
    else:
        reason = f"{name} is not available yet; it needs a later version"
        assert refused(call(name, one(1.0))) == (CellError.NA, reason)
        assert refused(call(name)) == (CellError.NA, reason)


def test_peak() -> None:
    assert value("INGLE.PEAK", HEAD, (CASE,)) == pytest.approx(peak(2e6), rel=1e-13)


@pytest.mark.parametrize("side", ["left", "inner", "LEFT", " Inner ", "right", "outer", "Right", "OUTER"])
def test_face(side: str) -> None:
    expected = left_face(2e6) if side.strip().lower() in ("left", "inner") else 20.0
    assert value("INGLE.FACE", one(side), HEAD, (CASE,)) == pytest.approx(expected, rel=1e-13)


def test_face_of_a_pipe_by_either_word() -> None:
    table = ("shape", "inner radius [mm]", "outer radius [mm]", "conductivity [W/(m·K)]", "line power [W/m]", "inner held [°C]",
             "outer held [°C]")  # fmt: skip
    row = (*PIPE[:5], 60.0, 30.0)
    faces = {side: value("INGLE.FACE", one(side), (table,), (row,)) for side in ("inner", "left", "outer", "right")}
    assert faces == pytest.approx({"inner": 60.0, "left": 60.0, "outer": 30.0, "right": 30.0}, rel=1e-13)


@pytest.mark.parametrize(
    ("source", "factor"),
    [("generation [W/m³]", 1.0), ("generation [W/cm³]", 1e-6), ("generation [MW/m³]", 1e-6),
     ("specific generation [W/g]", 1e-3 / 8000.0), ("power [kW]", 0.01 * 0.5 * 1e-3)],
)  # fmt: skip
def test_allow_answers_in_the_unit_of_the_source(source: str, factor: float) -> None:
    """Peak of a wall held on both faces: q L²/8k above them, so 60 K takes q = 8·15·60/L²; density 8000, area 0.5 m²."""
    table = (*HEADINGS[:3], source, "both held [°C]", "limit [°C]", "density [kg/m³]", "area [m²]")
    for now in (None, 0.0, 7.0):  # whatever the row's own source is
        row = ("wall", 10.0, 15.0, now, 20.0, 80.0, 8000.0, 0.5)
        assert value("INGLE.ALLOW", (table,), (row,)) == pytest.approx(8 * 15 * 60 / 0.01**2 * factor, rel=1e-12)


def test_allow_follows_the_source_each_row_fills() -> None:
    table = (*HEADINGS[:4], "power [W]", "area [m²]", "both held [°C]", "limit [°C]")
    rows = [("wall", 10.0, 15.0, 1.0, None, 0.5, 20.0, 80.0), ("wall", 10.0, 15.0, None, 1.0, 0.5, 20.0, 80.0)]
    q = 8 * 15 * 60 / 0.01**2
    found = [row[0] for row in values(call("INGLE.ALLOW", (table,), rows))]
    assert found == pytest.approx([q * 1e-6, q * 0.005], rel=1e-12)


def test_ask_gives_a_column_an_answer_and_a_row_a_case() -> None:
    outcome = call("INGLE.ASK", one("peak [°C]; left face [K]; verdict; why"), HEAD, [CASE, (*CASE[:3], 30.0, *CASE[4:])])
    found = values(outcome)
    assert found[0] == [pytest.approx(peak(2e6)), pytest.approx(left_face(2e6) + 273.15), "ok", "ok"]
    passed = "Limit [°C] in row 2 of the values is 90, and the peak is above it; lower the source or cool the body more"
    assert found[1] == [pytest.approx(peak(3e7)), pytest.approx(left_face(3e7) + 273.15), "over limit", passed]


def test_ask_takes_answers_in_every_form() -> None:
    forms: list[Grid] = [one("peak [°C];mean [K]"), (("peak [°C]", "mean [K]"),), (("peak [°C]",), ("mean [K]",)),
                         (("peak", "mean"), ("°C", "[K]")), (("Peak", "°C"), ("MEAN", "K"), ("why", None))]  # fmt: skip
    first, *others = (values(call("INGLE.ASK", form, HEAD, (CASE,))) for form in forms)
    assert all(isinstance(cell, float) for cell in first[0])
    assert others == [first, first, first, [[*first[0], "ok"]]]


def test_upright_headings_turn_cases_and_answers() -> None:
    asked = one("peak [°C]; verdict")
    lying = values(call("INGLE.ASK", asked, HEAD, ROWS))
    upright = call("INGLE.ASK", asked, [(text,) for text in HEADINGS], list(zip(*ROWS, strict=True)))
    assert values(upright) == [list(column) for column in zip(*lying, strict=True)]
    assert len(upright.reasons) == len(ROWS)
    beside = [tuple(text.partition(" [")[::2]) for text in HEADINGS]
    beside = [(name, unit.removesuffix("]") or None) for name, unit in beside]
    assert values(call("INGLE.ASK", asked, beside, list(zip(*ROWS, strict=True)))) == values(upright)


@pytest.mark.parametrize("points", [2, 3, 11, 10_000])
def test_profile_runs_from_face_to_face(points: int) -> None:
    found = values(call("INGLE.PROFILE", one(float(points)), HEAD, (CASE,)))
    assert len(found) == points
    assert [found[0][0], found[-1][0]] == [0.0, 10.0]
    assert found[0][1] == value("INGLE.FACE", one("left"), HEAD, (CASE,))
    assert found[-1][1] == value("INGLE.FACE", one("right"), HEAD, (CASE,))
    places = [row[0] for row in found]
    assert places == pytest.approx([10.0 * i / (points - 1) for i in range(points)], abs=1e-12)
    greatest = value("INGLE.PEAK", HEAD, (CASE,))
    assert max(row[1] for row in found) <= greatest + 1e-12  # type: ignore[type-var, operator]


def test_profile_of_a_symmetric_wall_is_symmetric_and_of_a_pipe_starts_at_its_bore() -> None:
    table = ("shape", "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/m³]", "both held [°C]")
    found = values(call("INGLE.PROFILE", one(9.0), (table,), (("wall", 8.0, 15.0, 3e6, 20.0),)))
    rises = [row[1] - 20.0 for row in found]  # type: ignore[operator]
    assert rises == pytest.approx(rises[::-1], abs=1e-12)
    assert rises == pytest.approx([3e6 / 30.0 * (x * (8 - x)) * 1e-6 for x in range(9)], abs=1e-12)  # q s (L − s)/2k
    pipe = values(call("INGLE.PROFILE", one(3.0), (ROUND,), (PIPE,)))
    assert [row[0] for row in pipe] == pytest.approx([5.0, 7.5, 10.0], rel=1e-14)
    assert (pipe[0][1], pipe[2][1]) == (25.0, 25.0)


@pytest.mark.parametrize(
    ("count", "written"), [(1.0, "1"), (0.0, "0"), (-3.0, "-3"), (2.5, "2.5"), (10_001.0, "10001"), (1e300, "1e300")]
)
def test_profile_refuses_a_count_it_cannot_give(count: float, written: str) -> None:
    reason = f"The points are {written}; give a whole number from 2 to 10000"
    assert refused(call("INGLE.PROFILE", one(count), HEAD, (CASE,))) == (CellError.NUM, reason)


def test_profile_of_a_blank_or_bad_row() -> None:
    assert values(call("INGLE.PROFILE", one(5.0), HEAD, (BLANK,))) == [["", ""]]
    bad = call("INGLE.PROFILE", one(5.0), HEAD, ((*CASE[:1], -1.0, *CASE[2:]),))
    assert refused(bad) == (CellError.NUM, "Thickness [mm] in this row is -1; it must be above 0 and at most 1e9; correct the "
                            "value or the heading's unit")  # fmt: skip


def test_why() -> None:
    assert value("INGLE.WHY", HEAD, (CASE,)) == "ok"
    numbered = values(call("INGLE.WHY", HEAD, [CASE, (*CASE[:3], None, *CASE[4:]), BLANK]))
    assert numbered == [["ok"], ["Generation [W/cm³] in row 2 of the values is blank; write 0 for no source"], [""]]


def test_a_table_whose_headings_all_are_unknown_is_not_blank() -> None:
    """A row is blank by its cells; headings that cannot be read must not make a filled row look empty."""
    table = (("Dicke [mm]", "Leitwert [W/mK]"),)
    reason = "Heading 'Dicke [mm]': no input has this name; `ingle reference` lists the input headings"
    assert value("INGLE.WHY", table, ((10.0, 15.0),)) == reason
    assert refused(call("INGLE.PEAK", table, ((10.0, 15.0),))) == (CellError.VALUE, reason)
    mixed = (("shape", "Dicke [mm]"),)
    assert refused(call("INGLE.PEAK", mixed, ((None, 15.0),))) == (CellError.VALUE, reason)
    assert value("INGLE.PEAK", mixed, ((None, None),)) == ""


def test_points() -> None:
    assert value("INGLE.POINTS", ((20.0,), (500.0,)), ((16.2,), (21.5,))) == "20:16.2; 500:21.5"
    assert value("INGLE.POINTS", ((-40.0, None, 1e3),), ((1e-7, " ", 0.1 + 0.2),)) == "-40:1e-07; 1000:0.30000000000000004"
    assert value("INGLE.POINTS", one(20), one(3)) == "20:3"


def test_about_tells_the_version() -> None:
    assert value("INGLE.ABOUT") == f"Ingle {version('ingle')}"


@pytest.mark.parametrize("name", ["INGLE.PEAK", "INGLE.ALLOW", "INGLE.WHY", "INGLE.ASK", "INGLE.FACE"])
def test_array_is_the_loop_of_single_calls(name: str) -> None:
    before = {"INGLE.ASK": [one("peak [°C];mean [°C];utilisation [%]")], "INGLE.FACE": [one("left")]}.get(name, [])
    rows = [*ROWS, BLANK, (*CASE[:3], "2", *CASE[4:])]
    whole = call(name, *before, HEAD, rows)
    alone = solve_calls(name, [(*before, HEAD, (row,)) for row in rows])
    if name == "INGLE.WHY":
        assert list(whole.grid)[:-1] == [each.grid[0] for each in alone][:-1]
        assert [whole.grid[-1][0], alone[-1].grid[0][0]] == [
            f"Generation [W/cm³] in {row} is '2' and is stored as text; convert it to a number"
            for row in ("row 22 of the values", "this row")
        ]
    else:
        assert list(whole.grid) == [each.grid[0] for each in alone]
        assert whole.grid[-1][0] == CellError.VALUE
    assert all(cell == "" for cell in whole.grid[20])


def test_same_inputs_give_the_same_value_whatever_stands_around_them() -> None:
    (first,) = solve_calls("INGLE.PEAK", [(HEAD, (CASE,))])
    crowd = solve_calls("INGLE.PEAK", [(HEAD, [*ROWS[:7], CASE]), (HEAD, (CASE,)), (HEAD, [CASE] * 9000)])
    assert {crowd[0].grid[7][0], crowd[1].grid[0][0], *(row[0] for row in crowd[2].grid)} == {first.grid[0][0]}


def test_values_join_from_ranges_and_constants_and_one_row_serves_all() -> None:
    whole = values(call("INGLE.PEAK", HEAD, ROWS))
    assert len({row[0] for row in whole}) == len(ROWS)
    pieces: Sequence[Grid] = (one("wall"), ((10.0, 15.0),), [(row[3],) for row in ROWS], one(400.0), ((22.0, 20.0, 90.0),))
    assert values(call("INGLE.PEAK", HEAD, *pieces)) == whole
    each = [(row[:2], row[2:3], row[3:]) for row in ROWS]
    assert values(call("INGLE.PEAK", HEAD, *([row[i] for row in each] for i in range(3)))) == whole


def test_a_whole_number_beyond_all_numbers_is_refused() -> None:
    """Python hands on whole numbers of any size; no cell holds one."""
    reason = "Thickness [mm] in this row is a number beyond 1e308; it must be above 0 and at most 1e9; correct the value or the "
    reason += "heading's unit"
    assert refused(call("INGLE.PEAK", HEAD, ((*CASE[:1], 10**400, *CASE[2:]),))) == (CellError.NUM, reason)


def test_an_unknown_answer_shows_its_own_error_in_every_row() -> None:
    rows = [CASE, (*CASE[:3], None, *CASE[4:]), (*CASE[:1], -1.0, *CASE[2:]), BLANK]
    outcome = call("INGLE.ASK", one("peek [°C]; peak [°C]"), HEAD, rows)
    assert [row[0] for row in outcome.grid] == [CellError.VALUE] * 3 + [""]
    assert [row[1] for row in outcome.grid][1:] == [CellError.NA, CellError.NUM, ""]


def test_blank_rows_and_columns_of_ones_own() -> None:
    assert values(call("INGLE.PEAK", HEAD, [BLANK, ("", "  ", None, "\t", "", "", "", "")])) == [[""], [""]]
    table = ((*HEADINGS[:2], "note", "# order", None, *HEADINGS[2:]),)
    rows = ((*CASE[:2], CellError.NA, True, "any", *CASE[2:]), (*BLANK[:2], "a note", 5.0, "any", *BLANK[2:]))
    assert values(call("INGLE.PEAK", table, rows)) == [[value("INGLE.PEAK", HEAD, (CASE,))], [""]]


def test_omitted_arguments() -> None:
    assert refused(call("INGLE.PEAK", (), (CASE,))) == (CellError.VALUE, "The headings are missing; pass the range that holds them")
    assert refused(call("INGLE.PEAK", HEAD, ())) == (CellError.VALUE, "The values are missing; pass one column a heading")
    sides = "The side '' is not known; write left, right, inner or outer"
    assert refused(call("INGLE.FACE", (), HEAD, (CASE,))) == (CellError.VALUE, sides)
    answers = "The answers are missing; pass the range that holds them"
    assert refused(call("INGLE.ASK", (), HEAD, (CASE,))) == (CellError.VALUE, answers)
    assert refused(call("INGLE.PROFILE", (), HEAD, (CASE,))) == (CellError.NA, "The points are blank; type a number")


@pytest.mark.parametrize(
    ("name", "count", "words"),
    [("INGLE.PEAK", 0, "headings, values"), ("INGLE.PEAK", 1, "headings, values"), ("INGLE.FACE", 2, "side, headings, values"),
     ("INGLE.ASK", 2, "answers, headings, values"), ("INGLE.ALLOW", 1, "headings, values"), ("INGLE.WHY", 1, "headings, values"),
     ("INGLE.PROFILE", 2, "points, headings, values"), ("INGLE.POINTS", 1, "temperatures, values"),
     ("INGLE.POINTS", 3, "temperatures, values"), ("INGLE.ABOUT", 2, "nothing")],
)  # fmt: skip
def test_too_few_and_too_many_arguments(name: str, count: int, words: str) -> None:
    given = "1 argument was" if count == 1 else f"{count} arguments were"
    reason = f"{name} takes {words}; {given} given"
    assert refused(call(name, *[one(1.0)] * count)) == (CellError.VALUE, reason)


@pytest.mark.parametrize("width", [7, 9])
def test_wrong_number_of_columns(width: int) -> None:
    row = (*CASE, 1.0)[:width]
    assert refused(call("INGLE.PEAK", HEAD, (row,))) == (CellError.VALUE, ALSO.format(width))
    good, bad, blank = solve_calls("INGLE.PEAK", [(HEAD, (CASE,)), (HEAD, (row,)), (HEAD, ((None,) * width,))])
    assert math.isfinite(good.grid[0][0])  # type: ignore[arg-type]
    assert (bad.grid[0][0], blank.grid[0][0]) == (CellError.VALUE, "")


def test_a_name_that_is_no_function() -> None:
    assert refused(call("INGLE.PEEK", HEAD, (CASE,))) == (CellError.NAME, "Ingle has no function INGLE.PEEK; see `ingle reference`")
    assert frozenset(function.name for function in FUNCTIONS) == NAMES
