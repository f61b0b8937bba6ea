"""Calls one at a time give what calls of their own give, to the bit, in whichever order cells are asked; and rows are solved once."""

from __future__ import annotations

import datetime
import random
from collections.abc import Sequence
from decimal import Decimal
from typing import Any

import numpy as np
import pytest
from ingle_addin import row_answers
from ingle_addin.batch import solve_calls
from ingle_addin.cells import CellError
from ingle_addin.from_sheet import OMITTED, cell_of, grid_of, rows_to_sheet, to_sheet, used_rows
from ingle_addin.row_answers import WHOLE_COLUMN, RowAnswers
from reference import draw

ERRORS = {error: error for error in CellError}
TEXTS = {error.value: error for error in CellError}
HEADINGS = ("shape", "thickness [mm]", "conductivity [W/(m·K)]", "generation [W/cm³]", "both film [W/(m²·K)]", "both fluid [°C]",
            "limit [°C]")  # fmt: skip
ROW = ("wall", 10.0, 390.0, 0.12, 12.0, 35.0, 105.0)
WHY_TOO = "peak [°C]; why; allowable generation [W/m³]"
QUESTIONS: list[tuple[str, tuple[Any, ...]]] = [
    ("INGLE.PEAK", ()),
    ("INGLE.FACE", ("left",)),
    ("INGLE.FACE", ("outer",)),
    ("INGLE.ALLOW", ()),
    ("INGLE.WHY", ()),
    ("INGLE.ASK", ("verdict",)),
    ("INGLE.ASK", ("mean [K]; headroom [K]; verdict",)),
    ("INGLE.ASK", (WHY_TOO,)),
    ("INGLE.ASK", ("pek [°C]; peak [°C]",)),
]


def typed(rows: Sequence[Sequence[object]]) -> list[tuple[object, ...]]:
    return [tuple(TEXTS.get(cell, cell) if isinstance(cell, str) else cell for cell in row) for row in rows]


def alone(name: str, lead: tuple[Any, ...], heads: object, row: tuple[object, ...]) -> tuple[tuple[Any, ...], ...]:
    (outcome,) = solve_calls(name, [(*(((each,),) for each in lead), (heads,), (row,))])
    return tuple(map(tuple, outcome.grid))


def same(a: object, b: object) -> bool:
    return type(a) is type(b) and (a == b)


@pytest.mark.parametrize("order", ["down the columns", "along the rows", "anyhow"])
def test_every_order_gives_what_calls_of_their_own_give(order: str) -> None:
    rng = random.Random(7)
    answers = RowAnswers(ERRORS)
    compared = errors = 0
    for heads, drawn in draw.tables(5, 40):
        rows = typed(drawn)
        calls = [(question, row) for question in QUESTIONS for row in rows]
        if order == "along the rows":
            calls = [(question, row) for row in rows for question in QUESTIONS]
        elif order == "anyhow":
            calls = rng.sample(calls, len(calls)) + rng.sample(calls, len(rows))
        for (name, lead), row in calls:
            got = answers.answer(name, (*lead, (tuple(heads),), (row,)))
            want = alone(name, lead, tuple(heads), row)
            assert len(got) == len(want) == 1
            assert all(map(same, got[0], want[0])), (name, lead, dict(zip(heads, row, strict=True)), got, want)
            compared += len(got[0])
            errors += sum(isinstance(cell, CellError) for cell in got[0])
    assert compared > 400
    assert errors > 20


def test_a_call_of_many_rows_gives_what_it_gives_elsewhere() -> None:
    answers = RowAnswers(ERRORS)
    compared = 0
    for heads, drawn in draw.tables(6, 60):
        rows = tuple(typed(drawn))
        if len(rows) < 2:
            continue
        upright = tuple(zip(*rows, strict=True))
        for name, lead in QUESTIONS:
            for values in ((rows,), (rows[:1], rows[1:]), (rows, rows[:1])):
                call = (*(((each,),) for each in lead), (tuple(heads),), *values)
                (want,) = solve_calls(name, [call])
                got = answers.answer(name, (*lead, (tuple(heads),), *values))
                assert list(map(tuple, want.grid)) == list(got), (name, lead)
                compared += len(got)
            turned = (*lead, tuple((head,) for head in heads), upright)
            (want,) = solve_calls(name, [(*(((each,),) for each in lead), *turned[len(lead) :])])
            assert list(map(tuple, want.grid)) == list(answers.answer(name, turned))
    assert compared > 500


def test_a_row_is_solved_once_for_what_its_neighbours_show_is_asked(monkeypatch: pytest.MonkeyPatch) -> None:
    sizes: list[tuple[int, int]] = []
    evaluate = row_answers.evaluate

    def counted(plan: Any, table: Any, asked: Any, *rest: Any) -> Any:
        sizes.append((max(map(len, table)), len(asked)))
        return evaluate(plan, table, asked, *rest)

    monkeypatch.setattr(row_answers, "evaluate", counted)
    rows = [(*ROW[:1], 10.0 + number, *ROW[2:]) for number in range(20)]
    four = QUESTIONS[:2] + QUESTIONS[3:5]
    answers = RowAnswers(ERRORS)

    def ask(name: str, lead: tuple[Any, ...], row: tuple[Any, ...]) -> None:
        answers.answer(name, (*lead, (HEADINGS,), (row,)))

    for name, lead in four:
        for row in rows:
            ask(name, lead, row)
    # Down the columns: each row by itself for the first, all of them at once for each of the others.
    assert sizes == [(1, 1)] * 20 + [(20, 1)] * 3
    sizes.clear()
    for name, lead in four:
        for row in rows:
            ask(name, lead, row)
    assert sizes == []  # known by what they hold
    warmer = [(*row[:5], 36.0, row[6]) for row in rows]
    for row in warmer:
        for name, lead in four:
            ask(name, lead, row)
    # Along the rows: what was asked of the row before is found with the first answer of the next. (The first row of all
    # comes after three columns were asked.)
    assert sizes == [(1, 4)] * 20


def test_memory_is_bounded(monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(row_answers, "MOST_CELLS", 70)
    answers = RowAnswers(ERRORS)
    rows = [(*ROW[:1], 10.0 + number, *ROW[2:]) for number in range(40)]
    for name in ("INGLE.PEAK", "INGLE.WHY", "INGLE.PEAK"):
        for row in rows:
            assert answers.answer(name, ((HEADINGS,), (row,))) == alone(name, (), HEADINGS, row)
    (table,) = answers._tables.values()
    assert table is not None
    assert len(table.rows) == len(table.order) <= 11


def test_true_is_not_one_and_minus_a_text_is_not_blank() -> None:
    answers = RowAnswers(ERRORS)
    for value in (1.0, True, 1, "1", None, "", " ", np.True_, Decimal("1")):
        row = (*ROW[:3], value, *ROW[4:])
        want = alone("INGLE.PEAK", (), HEADINGS, (*ROW[:3], cell_of(value), *ROW[4:]))
        assert answers.answer("INGLE.PEAK", ((HEADINGS,), (row,))) == want, value


def test_arguments_in_every_shape_a_program_hands_over() -> None:
    answers = RowAnswers(ERRORS)
    want = alone("INGLE.PEAK", (), HEADINGS, ROW)
    for args in (
        ([list(HEADINGS)], [list(ROW)]),
        (list(HEADINGS), list(ROW)),
        ("; ".join(HEADINGS), *ROW),
        ((HEADINGS,), ROW[0], ((ROW[1], ROW[2]),), *ROW[3:]),
        ((HEADINGS,), (ROW[:3],), None, (ROW[3:],)),
    ):
        assert answers.answer("INGLE.PEAK", args) == want
    upright = tuple((heading,) for heading in HEADINGS), tuple((value,) for value in ROW)
    assert answers.answer("INGLE.PEAK", upright) == want
    turned = answers.answer("INGLE.ASK", ("peak [°C]; verdict", *upright))
    assert turned == ((want[0][0],), ("ok",))
    many = answers.answer("INGLE.PEAK", ((HEADINGS,), (ROW, ROW, (None,) * 7)))
    assert many == (want[0], want[0], ("",))
    assert answers.answer("INGLE.PEAK", ((HEADINGS,), (ROW[:4],))) == ((CellError.VALUE,),)
    assert answers.answer("INGLE.PEAK", ((HEADINGS,),)) == ((CellError.VALUE,),)
    assert answers.answer("INGLE.PEAK", ()) == ((CellError.VALUE,),)
    assert answers.answer("INGLE.NOBODY", ()) == ((CellError.NAME,),)


def test_a_lone_zero_is_refused_only_where_a_program_hands_it_over_for_an_empty_cell() -> None:
    values = (*ROW[:5], 0.0, ROW[6])
    sentence = "Both fluid [°C] is 0 and may be an empty cell; pass a range, as in A2:H2"
    trusting, wary = RowAnswers(ERRORS), RowAnswers(ERRORS, lone_zero_may_be_empty=True)
    assert trusting.answer("INGLE.PEAK", ((HEADINGS,), *values)) == alone("INGLE.PEAK", (), HEADINGS, values)
    assert wary.answer("INGLE.PEAK", ((HEADINGS,), *values)) == ((CellError.VALUE,),)
    assert wary.answer("INGLE.WHY", ((HEADINGS,), *values)) == ((sentence,),)
    assert wary.answer("INGLE.PEAK", ((HEADINGS,), (values,))) == alone("INGLE.PEAK", (), HEADINGS, values)
    other = (*ROW[:4], 0.0, *ROW[5:])  # a film
    assert wary.answer("INGLE.WHY", ((HEADINGS,), *other)) == alone("INGLE.WHY", (), HEADINGS, other)
    assert wary.answer("INGLE.WHY", ((HEADINGS,), (ROW[:5], ROW[:5]), 0.0, ((ROW[6],), (ROW[6],)))) == ((sentence,),)


def test_a_whole_column_for_one_row_is_refused_with_a_remedy() -> None:
    answers = RowAnswers(ERRORS)
    assert answers.answer("INGLE.PEAK", ((HEADINGS,), (ROW,)), True) == ((CellError.VALUE,),)
    assert answers.answer("INGLE.WHY", ((HEADINGS,), (ROW,)), True) == ((WHOLE_COLUMN[:1].upper() + WHOLE_COLUMN[1:],),)


def test_a_row_explained() -> None:
    answers = RowAnswers(ERRORS)
    pairs, why = answers.explain("INGLE.PEAK", ((HEADINGS,), ((*ROW[:2], None, *ROW[3:]), ROW)), 1)
    assert pairs == [
        (heading, f"{value:g}" if isinstance(value, float) else value) for heading, value in zip(HEADINGS, ROW, strict=True)
    ]
    assert why == "ok"
    pairs, why = answers.explain("INGLE.ASK", ("why", (HEADINGS,), ((*ROW[:2], None, *ROW[3:]),)))
    assert [heading for heading, _ in pairs] == [heading for heading in HEADINGS if not heading.startswith("conductivity")]
    assert why == alone("INGLE.WHY", (), HEADINGS, (*ROW[:2], None, *ROW[3:]))[0][0]
    mine = answers.explain("INGLE.PEAK", ((("# no.", *HEADINGS, None),), (("B01", *ROW, "mine"),)))
    assert [heading for heading, _ in mine[0]] == list(HEADINGS)
    assert answers.explain("INGLE.PEAK", ((HEADINGS,), ((None,) * 7,))) == ([], "this row is blank")
    assert answers.explain("INGLE.WHY", (None, (ROW,))) == ([], "The headings are missing; pass the range that holds them")


# Cells from a program and back.


def test_values_of_a_program_become_cells() -> None:
    day = datetime.datetime(2024, 5, 17)
    given = [1.5, 2, True, "text", "", None, "#N/A", "#note", CellError.NUM, day, day.date(), day.time(), Decimal("2.5"),
             np.float64(3)]  # fmt: skip
    want = [1.5, 2, True, "text", None, None, CellError.NA, "#note", CellError.NUM, day, day.date(), day.time(), 2.5, 3.0]
    got = [cell_of(value) for value in given]
    assert [(type(a), a) for a in got] == [(type(b), b) for b in want]
    assert cell_of(object) == str(object)


def test_arguments_of_a_program_become_rows() -> None:
    assert grid_of(2.0) == ((2.0,),)
    assert grid_of("") == ((None,),)
    assert grid_of([1.0, ""]) == ((1.0, None),)
    assert grid_of(((1.0,), (2.0,))) == ((1.0,), (2.0,))
    assert grid_of([[1.0, 2.0], [3.0]]) == ((1.0, 2.0), (3.0, None))
    assert grid_of(()) == grid_of([]) == OMITTED
    assert used_rows(grid_of([[None, ""], [0.0, None], [None, ""], ["", ""]])) == 2
    assert used_rows(grid_of([[None]])) == 0


def test_answers_go_back_as_a_program_takes_them() -> None:
    marks = {error: f"<{error}>" for error in CellError}
    assert [to_sheet(cell, marks) for cell in (1.5, "ok", None, CellError.NA, float("nan"), float("inf"))] == [
        1.5, "ok", "", "<#N/A>", "<#NUM!>", "<#NUM!>",
    ]  # fmt: skip
    assert rows_to_sheet([[1.0, None], [CellError.NUM, "x"]], marks) == ((1.0, ""), ("<#NUM!>", "x"))
    assert rows_to_sheet((), marks) == rows_to_sheet(((),), marks) == (("<#N/A>",),)
