"""Random ordinary formulas over a block of drawn cells, such as people write beside a table of cases.

Truth values in ranges are left out: Calc takes them for numbers, which OpenFormula leaves to the program, and Excel, whose
files these are, does not.
"""

from __future__ import annotations

import random

ROWS, FIRST = 12, "ABCDEF"
# Column A..F: whole numbers, decimals with gaps, texts, truth values, dates, numbers near zero.


def cells(draw: random.Random) -> dict[str, object]:
    """The block A1:F12; what is left out is empty."""
    found: dict[str, object] = {}
    for row in range(1, ROWS + 1):
        found[f"A{row}"] = draw.randint(-9, 40)
        if draw.random() < 0.8:
            found[f"B{row}"] = round(draw.uniform(-5.0, 90.0), draw.randint(0, 4))
        if draw.random() < 0.9:
            found[f"C{row}"] = draw.choice(["alpha", "Beta", "gamma ray", "a-b", "x", "Alpha", "12 mm", "copper"])
        if draw.random() < 0.9:
            found[f"D{row}"] = draw.random() < 0.5
        found[f"E{row}"] = draw.randint(40_000, 46_000)
        found[f"F{row}"] = draw.choice([0, 1, 0.5, -0.25, 2, 1e-6, 7.5])
    return found


class Drawer:
    """Draws formulas whose meaning is the same in every spreadsheet program."""

    def __init__(self, draw: random.Random) -> None:
        self._draw = draw

    def formula(self, row: int) -> str:
        """One formula for a cell of that row."""
        return self._one(row, self._draw.randint(1, 3))

    def _cell(self, row: int, columns: str) -> str:
        where = row if self._draw.random() < 0.5 else self._draw.randint(1, ROWS)
        return self._draw.choice(["", "$"]) + self._draw.choice(columns) + self._draw.choice(["", "$"]) + str(where)

    def _range(self, columns: str) -> str:
        column = self._draw.choice(columns)
        top = self._draw.randint(1, ROWS - 1)
        return f"{column}{top}:{column}{self._draw.randint(top + 1, ROWS)}"

    def _number(self) -> str:
        return self._draw.choice(["0", "1", "2", "3", "10", "0.5", "1.25", "100", "-4", "1E3"])

    def _one(self, row: int, depth: int) -> str:
        kinds = [self._numeric, self._numeric, self._numeric, self._text, self._logical]
        return self._draw.choice(kinds)(row, depth)

    def _numeric(self, row: int, depth: int) -> str:
        draw = self._draw
        if depth == 0:
            return draw.choice([self._number(), self._cell(row, "ABF"), self._cell(row, "ABF")])
        a, b = (lambda: self._numeric(row, depth - 1)), (lambda: self._numeric(row, draw.randint(0, depth - 1)))
        number, range_ = self._number, self._range
        return draw.choice(
            [
                lambda: f"{a()}{draw.choice('+-*/')}{b()}",
                lambda: f"({a()}{draw.choice('+-*')}{b()})",
                lambda: f"-{a()}",
                lambda: f"({a()})^2",
                lambda: f"{a()}%",
                lambda: f"ROUND({a()},{draw.randint(0, 3)})",
                lambda: f"{draw.choice(['ABS', 'INT', 'SIGN', 'EXP', 'LN', 'SQRT', 'SIN', 'COS', 'ATAN', 'LOG10'])}({a()})",
                lambda: f"{draw.choice(['MAX', 'MIN', 'SUM', 'AVERAGE'])}({a()},{b()})",
                lambda: f"{draw.choice(['SUM', 'AVERAGE', 'MAX', 'MIN', 'COUNT', 'MEDIAN', 'STDEV', 'VAR'])}({range_('ABF')})",
                lambda: f"{draw.choice(['COUNTA', 'COUNTBLANK', 'COUNT', 'SUM', 'MAX'])}({range_('ABCEF')})",
                lambda: f"MOD({a()},{draw.choice(['2', '3', '7', '-4', '0'])})",
                lambda: f"IF({self._logical(row, depth - 1)},{a()},{b()})",
                lambda: f"IFERROR({a()},{number()})",
                lambda: f'SUMIF({range_("A")},"{draw.choice([">", "<", ">=", "<>", "="])}{draw.randint(0, 20)}")',
                lambda: f'COUNTIF({range_("C")},"{draw.choice(["alpha", "a*", "*a", "?eta", "x", "<>a*"])}")',
                lambda: f'COUNTIFS(A1:A{ROWS},">{draw.randint(0, 20)}",C1:C{ROWS},"{draw.choice(["alpha", "x", "*m*"])}")',
                lambda: f"SUMPRODUCT({range_pair(draw, 'AF')})",
                lambda: f"SUMPRODUCT(--(A1:A{ROWS}>{draw.randint(0, 20)}),F1:F{ROWS})",
                lambda: f"INDEX({range_('ABF')},{draw.randint(1, 2)})",
                lambda: f"MATCH({self._cell(row, 'A')},A1:A{ROWS},0)",
                lambda: f"VLOOKUP({self._cell(row, 'A')},$A$1:$F${ROWS},{draw.choice([1, 2, 6])},FALSE)",
                lambda: f"CHOOSE({draw.randint(1, 3)},{a()},{b()},{number()})",
                lambda: f"LEN({self._text(row, depth - 1)})",
                lambda: f"{draw.choice(['YEAR', 'MONTH', 'DAY', 'WEEKDAY'])}({self._cell(row, 'E')})",
                lambda: f"{draw.choice(['ROUNDUP', 'ROUNDDOWN', 'TRUNC'])}({a()},{draw.randint(0, 2)})",
                lambda: f"{draw.choice(['LARGE', 'SMALL'])}(A1:A{ROWS},{draw.randint(1, 5)})",
                lambda: f"RANK({self._cell(row, 'A')},$A$1:$A${ROWS})",
                lambda: f"POWER({a()},{draw.choice(['2', '0.5', '-1'])})",
                lambda: f"N({self._cell(row, 'ABCF')})",
                lambda: f"{range_whole(draw)}*2",
                lambda: "ROW()+COLUMN()",
            ]
        )()

    def _text(self, row: int, depth: int) -> str:
        draw = self._draw
        if depth <= 0:
            return draw.choice(['"mm"', '"a""b"', self._cell(row, "C"), self._cell(row, "C")])
        return draw.choice(
            [
                lambda: f"{self._text(row, depth - 1)}&{self._text(row, 0)}",
                lambda: f"{self._cell(row, 'A')}&{self._text(row, 0)}",
                lambda: f"{draw.choice(['UPPER', 'LOWER', 'TRIM', 'PROPER', 'T'])}({self._text(row, depth - 1)})",
                lambda: f"{draw.choice(['LEFT', 'RIGHT'])}({self._text(row, depth - 1)},{draw.randint(0, 4)})",
                lambda: f"MID({self._text(row, depth - 1)},{draw.randint(1, 4)},{draw.randint(0, 4)})",
                lambda: f'SUBSTITUTE({self._text(row, depth - 1)},"a","o")',
                lambda: f'TEXT({self._cell(row, "A")},"{draw.choice(["0", "0.00", "000", "0%"])}")',
                lambda: f'TEXT({self._cell(row, "E")},"yyyy-mm-dd")',
                lambda: f"IF({self._logical(row, depth - 1)},{self._text(row, 0)},{self._text(row, 0)})",
                lambda: f'IFERROR({self._text(row, depth - 1)},"none")',
                lambda: f"REPT({self._text(row, 0)},{draw.randint(0, 3)})",
            ]
        )()

    def _logical(self, row: int, depth: int) -> str:
        draw = self._draw
        if depth <= 0:
            return draw.choice(["TRUE", "FALSE", self._cell(row, "D"), f"{self._cell(row, 'A')}>{self._number()}"])
        a, b = (lambda: self._numeric(row, depth - 1)), (lambda: self._numeric(row, 0))
        return draw.choice(
            [
                lambda: f"{a()}{draw.choice(['>', '<', '>=', '<=', '<>', '='])}{b()}",
                lambda: f"{self._text(row, depth - 1)}={self._text(row, 0)}",
                lambda: f"{draw.choice(['AND', 'OR'])}({self._logical(row, depth - 1)},{self._logical(row, 0)})",
                lambda: f"NOT({self._logical(row, depth - 1)})",
                lambda: f"{draw.choice(['ISBLANK', 'ISNUMBER', 'ISTEXT', 'ISLOGICAL'])}({self._cell(row, 'ABCEF')})",
                lambda: f"ISERROR({a()})",
                lambda: f"EXACT({self._text(row, 0)},{self._text(row, 0)})",
            ]
        )()


def range_pair(draw: random.Random, columns: str) -> str:
    """Two ranges of the same rows."""
    top = draw.randint(1, ROWS - 1)
    bottom = draw.randint(top + 1, ROWS)
    return ",".join(f"{column}{top}:{column}{bottom}" for column in columns)


def range_whole(draw: random.Random) -> str:
    """A whole column of the block where one value belongs: its cell in the formula's own row."""
    column = draw.choice("ABF")
    return f"{column}1:{column}{ROWS}"
